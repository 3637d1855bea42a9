"""A Touchstone file taken apart into options, keywords and data sets; does not know what the numbers mean.

Rules after Touchstone File Format Specification Rev 1.1, IBIS Open Forum (2002), Version 2.0 (2009) and
2.1 (2024), with IBIS TSIRD 4.1 ([End] is required) and 5.1 (a resistance for each port on the option line).
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterable, Mapping, Sequence
from contextlib import suppress
from dataclasses import dataclass, field

Line = tuple[int, str]
"""A line's number in the file, from 1, and its content without comment and outer blanks; never empty."""

_UNIT_POWERS = {"HZ": 0, "KHZ": 3, "MHZ": 6, "GHZ": 9}  # of ten, to Hz
_OPTIONS = {
    "unit": tuple(_UNIT_POWERS),
    "parameter": ("S", "Y", "Z", "H", "G"),
    "number format": ("DB", "MA", "RI"),
}
_HEADER_KEYWORDS = (
    "Version",
    "Number of Ports",
    "Two-Port Data Order",
    "Number of Frequencies",
    "Number of Noise Frequencies",
    "Reference",
    "Matrix Format",
    "Mixed-Mode Order",
)
_KEYWORDS = {keyword.lower(): keyword for keyword in (*_HEADER_KEYWORDS, "Network Data", "Noise Data", "End")}
_WITH_LINES_BELOW = ("Reference", "Network Data", "Noise Data")

_LINE_END = re.compile(r"\r\n|\r|\n")
_KEYWORD_LINE = re.compile(r"\[([^\]]*)\](.*)")
_WHOLE_NUMBER = re.compile(r"0*[1-9][0-9]{0,8}")
_NUMBER_CHARACTERS = re.compile(r"[0-9eE+\-.]*")  # float() alone would take nan, 1_000 and foreign digits


class Refusal(Exception):
    """Why a file cannot be used, with the line's number; the reader adds the file's name."""

    def __init__(self, line: int, reason: str) -> None:
        super().__init__(reason)
        self.line = line


@dataclass(frozen=True, slots=True)
class Options:
    """What the option line says; the frequency unit is 10**unit_power Hz."""

    line: int
    unit_power: int
    parameter: str
    number_format: str
    reference_ohm: tuple[float, ...]


@dataclass(frozen=True, slots=True)
class DataSets:
    """First line and frequency of each data set; the numbers of all sets, pair after pair, in one list."""

    lines: list[int] = field(default_factory=list)
    frequency_hz: list[float] = field(default_factory=list)
    numbers: list[float] = field(default_factory=list)


@dataclass(frozen=True, slots=True)
class Section:
    """A keyword of a version 2 file: its line, its arguments, the lines below it up to the next keyword."""

    line: int
    arguments: list[str]
    below: list[Line]


def content_lines(text: str) -> list[Line]:
    """The lines that hold more than blanks and comment."""
    bare = (line.partition("!")[0].strip() for line in _LINE_END.split(text.removeprefix("\ufeff")))
    return [(number, content) for number, content in enumerate(bare, 1) if content]


def read_options(line: int, content: str) -> Options:
    """The options of the option line, defaults filled in: GHz S MA R 50."""
    if not content.startswith("#"):
        raise Refusal(line, "the option line, such as '# GHz S MA R 50', must stand here, before all data")
    tokens = content[1:].upper().split()
    found: dict[str, str] = {}
    reference_ohm: tuple[float, ...] = ()
    while tokens:
        token = tokens.pop(0)
        if token == "R" and not reference_ohm:
            count = next((at for at, word in enumerate(tokens) if not _is_number(word)), len(tokens))
            reference_ohm = read_resistances(line, tokens[:count])
            del tokens[:count]
            continue
        option = next((option for option, values in _OPTIONS.items() if token in values), None)
        if option is None or option in found:
            raise Refusal(line, f"{_short(token)} must not stand here; an option line is like '# GHz S MA R 50'")
        found[option] = token
    return Options(
        line=line,
        unit_power=_UNIT_POWERS[found.get("unit", "GHZ")],
        parameter=found.get("parameter", "S"),
        number_format=found.get("number format", "MA"),
        reference_ohm=reference_ohm or (50.0,),
    )


def read_resistances(line: int, tokens: Sequence[str]) -> tuple[float, ...]:
    """One or more resistances, each finite and above zero."""
    resistances_ohm = tuple(_numbers(line, tokens))
    if not resistances_ohm or min(resistances_ohm) <= 0:
        raise Refusal(line, "a reference resistance must be a number of ohms above zero")
    return resistances_ohm


def read_data_sets(rows: Sequence[Line], ports: int, *, pairs: int, unit_power: int) -> tuple[DataSets, Sequence[Line]]:
    """The data sets, a frequency and so many pairs of numbers each, and the rows of the noise block below.

    No pair is broken over two lines, so the lines with an odd count of numbers are those that begin a set.
    With two ports, five numbers at a frequency that does not increase begin the noise block.
    """
    sets = DataSets()
    size = 2 * pairs
    for at, (line, content) in enumerate(rows):
        tokens = content.split()
        numbers = _numbers(line, tokens)
        if len(numbers) % 2:
            _check_complete(sets, ports, size, line)
            frequency_hz = _frequency_hz(line, tokens[0], unit_power)
            if sets.lines and frequency_hz <= sets.frequency_hz[-1]:
                if ports == 2 and len(numbers) == 5:
                    return sets, rows[at:]
                raise Refusal(line, "the frequency must be above that of the data set before")
            sets.lines.append(line)
            sets.frequency_hz.append(frequency_hz)
            del numbers[0]
        elif not sets.lines:
            raise Refusal(line, f"a frequency and pairs must begin the data, not {len(numbers)} numbers")
        sets.numbers.extend(numbers)
        if len(sets.numbers) > len(sets.lines) * size:
            raise Refusal(line, f"a data set of {ports}-port data must have a frequency and {size} numbers, not more")
    _check_complete(sets, ports, size, rows[-1][0])
    return sets, ()


def check_noise(rows: Iterable[Line], unit_power: int) -> None:
    """Nothing if all rows are noise data: frequency, minimum noise figure, two of the source, resistance."""
    last_hz = -1.0
    for line, content in rows:
        tokens = content.split()
        if len(_numbers(line, tokens)) != 5:
            raise Refusal(line, f"a row of noise data has five numbers, not {len(tokens)}")
        frequency_hz = _frequency_hz(line, tokens[0], unit_power)
        if frequency_hz <= last_hz:
            raise Refusal(line, "the frequency must be above that of the noise row before")
        last_hz = frequency_hz


def read_sections(lines: Sequence[Line]) -> Mapping[str, Section]:
    """The sections of a version 2 file by keyword, without information blocks; their order is checked."""
    sections: dict[str, Section] = {}
    open_keyword, information_line = "", 0
    for line, content in lines:
        match = _KEYWORD_LINE.match(content)
        word = " ".join(match[1].lower().split()) if match else ""
        if information_line:
            information_line = 0 if word == "end information" else information_line
        elif word == "begin information":
            information_line = line
        elif match:
            if word not in _KEYWORDS:
                raise Refusal(line, f"[{_short(match[1])}] is not a keyword of versions 2.0 and 2.1")
            open_keyword = _KEYWORDS[word]
            if open_keyword in sections:
                raise Refusal(line, f"[{open_keyword}] must stand in a file only once")
            sections[open_keyword] = Section(line, match[2].split(), [])
        elif not content.startswith("#"):
            if open_keyword not in _WITH_LINES_BELOW:
                raise Refusal(line, f"{_short(content)} must not stand here, outside [Network Data]")
            sections[open_keyword].below.append((line, content))
    if information_line:
        raise Refusal(information_line, "[Begin Information] must be closed by [End Information]")
    _check_order(sections, lines[0][0], lines[-1][0])
    return sections


def whole_number(sections: Mapping[str, Section], keyword: str) -> int:
    """The number above zero that a required keyword gives."""
    section = _required(sections, keyword)
    match section.arguments:
        case [word] if _WHOLE_NUMBER.fullmatch(word):
            return int(word)
    raise Refusal(section.line, f"[{keyword}] must be followed by one whole number above zero")


def choice(sections: Mapping[str, Section], keyword: str, choices: Sequence[str]) -> str:
    """The one of the choices, in upper case, that a required keyword names."""
    section = _required(sections, keyword)
    word = " ".join(section.arguments).upper()
    if word not in choices:
        raise Refusal(section.line, f"[{keyword}] must be followed by one of {', '.join(choices)}")
    return word


def check_count(sections: Mapping[str, Section], keyword: str, count: int) -> None:
    """Nothing if the keyword's number is the count of what was read."""
    stated = whole_number(sections, keyword)
    if stated != count:
        raise Refusal(sections[keyword].line, f"[{keyword}] is {stated}, but the file has {count}")


def _required(sections: Mapping[str, Section], keyword: str) -> Section:
    if keyword not in sections:
        raise Refusal(sections["Network Data"].line, f"[{keyword}] is missing; it must stand before the data")
    return sections[keyword]


def _check_order(sections: Mapping[str, Section], first_line: int, last_line: int) -> None:
    version = sections.get("Version")
    if version is None or version.line != first_line or version.arguments not in (["2.0"], ["2.1"]):
        raise Refusal(first_line, "the first keyword must be [Version] 2.0 or [Version] 2.1")
    for keyword in ("Network Data", "End"):
        if keyword not in sections:
            raise Refusal(last_line, f"[{keyword}] is missing; the file may have been cut off")
    keywords = list(sections)
    if keywords[keywords.index("Network Data") + 1 :] not in (["End"], ["Noise Data", "End"]):
        line = sections["Network Data"].line
        raise Refusal(line, "after [Network Data] must come [End], or [Noise Data] and [End], and nothing else")


def _check_complete(sets: DataSets, ports: int, size: int, line: int) -> None:
    count = len(sets.numbers) - (len(sets.lines) - 1) * size
    if sets.lines and count < size:
        begun = f"the data set from line {sets.lines[-1]} on"
        raise Refusal(line, f"{begun} has a frequency and {count} numbers, but {ports}-port data need {size}")


def _frequency_hz(line: int, token: str, unit_power: int) -> float:
    # The unit is added to the exponent: 868.1 MHz is then exactly 868.1e6 Hz, which 868.1 * 1e6 need not be.
    mantissa, _, exponent = token.lower().partition("e")
    frequency_hz = math.inf
    with suppress(ValueError):  # int() takes no exponent of thousands of digits
        frequency_hz = float(f"{mantissa}e{int(exponent or 0) + unit_power}")
    if not 0 <= frequency_hz < math.inf:
        raise Refusal(line, f"the frequency {_short(token)} must be finite and not below zero")
    return frequency_hz


def _numbers(line: int, tokens: Sequence[str]) -> list[float]:
    with suppress(ValueError):
        numbers = [float(token) for token in tokens]
        if all(map(math.isfinite, numbers)) and _NUMBER_CHARACTERS.fullmatch("".join(tokens)):
            return numbers
    culprit = next(token for token in tokens if not _is_number(token))
    raise Refusal(line, f"{_short(culprit)} must be a number, such as 0.5 or -1.2e-3")


def _is_number(token: str) -> bool:
    try:
        return math.isfinite(float(token)) and _NUMBER_CHARACTERS.fullmatch(token) is not None
    except ValueError:
        return False


def _short(text: str) -> str:
    return repr(text if len(text) <= 24 else text[:24] + "...")
