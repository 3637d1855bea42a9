"""What a person writes in a field, as SI numbers; must not know widgets, parts or plans.

Each quantity has a closed table of units; `expression` has the grammar. Text for people is made in `wording`.
"""

from __future__ import annotations

import cmath
import contextlib
import math
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from app.editing.expression import FOOT_M, INCH_M, LONGEST_TEXT, Unreadable, evaluate, tidy
from feedlib.conventions import SPEED_OF_LIGHT_M_PER_S, guided_wavelength_m

LengthUnit = Literal["mm", "m", "in", "deg", "wl", "ps"]

_PLAIN_LENGTH_M = (
    {"mm": Fraction(1, 1000), "cm": Fraction(1, 100), "m": Fraction(1), "km": Fraction(1000)}
    | dict.fromkeys(("in", "inch", "inches", '"', "''"), INCH_M)
    | dict.fromkeys(("ft", "foot", "feet", "'"), FOOT_M)
)
_GUIDED_WAVES = {"deg": Fraction(1, 360), "°": Fraction(1, 360), "wl": Fraction(1), "λ": Fraction(1)}
_DELAYS_S = {"ps": Fraction(1, 10**12), "ns": Fraction(1, 10**9)}

_PREFIXES = {
    "": Fraction(1),
    "p": Fraction(1, 10**12),
    "n": Fraction(1, 10**9),
    "u": Fraction(1, 10**6),
    "m": Fraction(1, 1000),
    "k": Fraction(1000),
    "M": Fraction(10**6),
    "G": Fraction(10**9),
}


class EntryError(ValueError):
    """A text that cannot be read as what the field wants: one sentence, with what to write instead."""


@dataclass(frozen=True, slots=True)
class _Quantity:
    """What a field holds; scales : SI units in one of each unit, lower case after the first letter."""

    noun: str
    examples: str
    scales: Mapping[str, Fraction]

    def unit_scale(self, symbol: str) -> Fraction:
        """SI units in one of the written unit; case counts only where a prefix would change its meaning."""
        for key in (symbol[:1] + symbol[1:].casefold(), symbol.casefold()):
            if key in self.scales:
                return self.scales[key]
        raise Unreadable(f"'{symbol}' is not a unit here")


def _prefixed(*names: str) -> dict[str, Fraction]:
    """Every prefix with every name and alone."""
    return {prefix + name: scale for name in (*names, "") for prefix, scale in _PREFIXES.items()}


# Nobody means millihertz, so mhz is MHz in any case; m alone stays refused (2 m is also the name of a band).
_FREQUENCIES_HZ = {
    "": Fraction(1),
    "hz": Fraction(1),
    **dict.fromkeys(("k", "khz"), Fraction(1000)),
    **dict.fromkeys(("M", "mhz"), Fraction(10**6)),
    **dict.fromkeys(("G", "ghz"), Fraction(10**9)),
}
_ONE = Fraction(1)
_QUANTITIES = {
    "Hz": _Quantity("a frequency", "868 MHz, 868M or 0.868 GHz", _FREQUENCIES_HZ),
    "ohm": _Quantity("an impedance", "50, 75 ohm or 1k", _prefixed("ohm", "ohms", "ω")),
    "W": _Quantity("a power", "1 W, 100 mW or 27 dBm", _prefixed("w")),
    "dB": _Quantity("a level", "0.5 or 20 dB", {"": _ONE, "db": _ONE}),
    "deg": _Quantity("an angle", "90, -22.5 deg or 180°", dict.fromkeys(("", "deg", "°"), _ONE)),
    "H": _Quantity("an inductance", "8.2 nH or 1.5 uH", _prefixed("h")),
    "F": _Quantity("a capacitance", "3.3 pF or 1 nF", _prefixed("f")),
    "": _Quantity("a number", "0.695 or 2/3", {"": _ONE}),
}

_DBM = re.compile(r"(.*?) ?dbm", re.IGNORECASE)
_LARGEST_LEVEL_DBM = 300.0
_OHM_AT_END = re.compile(r" ?(?:ohms?|Ω)$", re.IGNORECASE)
_PLAIN_NUMBER = r"[0-9.,]+(?:e[+-]?[0-9]+)? ?[kM]?"
_RECTANGULAR = re.compile(
    r"(?P<real>.*?)(?P<sign>[+-]?) ?"
    rf"(?:[ij] ?\*? ?(?P<after>{_PLAIN_NUMBER})|(?P<before>{_PLAIN_NUMBER}) ?\*? ?[ij])",
    re.IGNORECASE,
)
_QUARTER_TURNS = (1 + 0j, 1j, -1 + 0j, -1j)


def read_length_m(
    text: str, *, frequency_hz: float | None, velocity_factor: float | None, default_unit: LengthUnit = "mm"
) -> float:
    """The length (m) that a text says.

    deg and wl are of the guided wave at frequency_hz, ps and ns the delay one way.
    default_unit : the unit of a text without any.
    """

    def unit_scale(symbol: str) -> Fraction:
        return length_unit_m(symbol, frequency_hz=frequency_hz, velocity_factor=velocity_factor)

    with _refusing(text, "a length", "62 mm, 2 7/16 in, 90deg or 0.25 wl"):
        return evaluate(text, unit_scale, bare_unit=default_unit)


def length_unit_m(symbol: str, *, frequency_hz: float | None, velocity_factor: float | None) -> Fraction:
    """Metres in one of a written unit; Unreadable if it is none, or needs a figure that is not known."""
    unit = symbol.casefold()
    if unit in _PLAIN_LENGTH_M:
        return _PLAIN_LENGTH_M[unit]
    velocity_factor = velocity_factor or math.nan
    if unit in _DELAYS_S:
        needs = "the cable's velocity factor"
        whole_m, share = velocity_factor * SPEED_OF_LIGHT_M_PER_S, _DELAYS_S[unit]
    elif unit in _GUIDED_WAVES:
        needs = "the frequency and the cable's velocity factor"
        whole_m, share = guided_wavelength_m(frequency_hz or math.nan, velocity_factor), _GUIDED_WAVES[unit]
    else:
        raise Unreadable(f"'{symbol}' is not a unit here")
    if not 0 < whole_m < math.inf:
        raise Unreadable(f"{symbol} needs {needs}, not known here", "write a length such as 62 mm")
    return Fraction(whole_m) * share


def read_quantity(text: str, *, unit: str, bare_unit: str | None = None) -> float:
    """The SI value that a text says, for a field in Hz, ohm, W, dB, deg, H, F or without unit ("").

    bare_unit : the unit of a text without any, if not the field's own. m is milli, M mega; mhz is always MHz.
    """
    quantity = _QUANTITIES[unit]
    with _refusing(text, quantity.noun, quantity.examples):
        if unit == "W" and (level := _DBM.fullmatch(tidy(text))):
            return _watts(_evaluate(level[1], "dB"))
        return evaluate(text, quantity.unit_scale, bare_unit=unit if bare_unit is None else bare_unit)


def read_complex_ohm(text: str) -> complex:
    """The impedance (ohm) that a text says: 50, 36 - j12.5, 36-12.5j, 50+25i, 40∠-30°, 40 @ -30deg."""
    with _refusing(text, "an impedance", "50, 36 - j12.5 or 40∠-30°"):
        tidied = _OHM_AT_END.sub("", tidy(text))
        polar = re.split("[∠@]", tidied)
        if len(polar) == 2:
            return _evaluate(polar[0], "ohm") * _direction(_evaluate(polar[1], "deg"))
        parts = _RECTANGULAR.fullmatch(tidied)
        if parts is None:
            return complex(_evaluate(tidied, "ohm"))
        if parts["real"] and not parts["sign"]:
            raise Unreadable("a + or - is missing before the part with j")
        real_ohm = _evaluate(parts["real"], "ohm") if parts["real"] else 0.0
        return complex(real_ohm, _evaluate(parts["sign"] + (parts["after"] or parts["before"]), "ohm"))


def _evaluate(text: str, unit: str) -> float:
    return evaluate(text, _QUANTITIES[unit].unit_scale, bare_unit="")


def _watts(level_dbm: float) -> float:
    if abs(level_dbm) > _LARGEST_LEVEL_DBM:
        raise Unreadable(f"{level_dbm:g} dBm is no power")
    return float(10 ** (level_dbm / 10) / 1000)


def _direction(angle_deg: float) -> complex:
    """e^(j angle), without rounding at quarter turns: 40∠270° has no resistance, not even a negative one."""
    quarters, rest_deg = divmod(angle_deg, 90)
    return _QUARTER_TURNS[int(quarters) % 4] * cmath.rect(1, math.radians(rest_deg))


@contextlib.contextmanager
def _refusing(text: str, noun: str, examples: str) -> Iterator[None]:
    """Turns Unreadable into the sentence for the person."""
    try:
        yield
    except Unreadable as why:
        shown = " ".join(text[:LONGEST_TEXT].split())
        subject = f"'{shown[:39]}…'" if len(shown) > 40 else f"'{shown}'" if shown else "An empty field"
        advice = why.advice or f"try {examples}"
        sentence = f"{subject} cannot be read as {noun}: {why.reason}; {advice}."
        raise EntryError("".join(c if c.isprintable() else "?" for c in sentence)) from None
