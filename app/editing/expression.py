"""Arithmetic with units as people write it, in exact fractions; must not know any quantity, field or window.

sum     = term (('+' | '-') term)*
term    = ['+' | '-'] factor [unit] (('*' | '/') factor [unit])*
factor  = number | '(' sum ')'
number  = 62 | 6.2 | 6,2 | 3.1e-1 | 2 7/16

A unit belongs to all that stands before it in its term: 7/16 in is (7/16) in. Feet may be followed by inches
(1 ft 3 1/2 in). In a sum, terms without a unit take the unit at its end. What has two readings is refused.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from fractions import Fraction
from typing import Literal, NamedTuple

LONGEST_TEXT = 200
DEEPEST_NESTING = 20
LARGEST_EXPONENT = 400

INCH_M = Fraction("0.0254")
FOOT_M = 12 * INCH_M

UnitScale = Callable[[str], Fraction]
"""How many SI units one of the written unit is; raises Unreadable for a unit that has no place here."""

_SAME_SIGNS = str.maketrans(
    {"×": "*", "÷": "/", "⁄": "/", "µ": "u", "μ": "u", "\u2126": "Ω", "º": "°", "˚": "°"}
    | dict.fromkeys("−–‐‑", "-")
    | dict.fromkeys("′’‘", "'")
    | dict.fromkeys("″”“", '"')
)
_TOKEN = re.compile(
    r"""\ *(?:
    (?P<mixed>[0-9]+\ [0-9]+\ ?/\ ?[0-9]+)
    | (?P<number>[0-9.,]*[0-9][0-9.,]*(?:[eE][+-]?[0-9]+)?)
    | (?P<unit>[^\W\d_]+|''|['"°])
    | (?P<sign>[-+*/()])
    )""",
    re.VERBOSE,
)
_DECIMAL = re.compile(r"[0-9]+\.?[0-9]*|[0-9]+,[0-9]+|[.,][0-9]+")
_THOUSAND = re.compile(r"[1-9][0-9]{0,2},[0-9]{3}")
_HYPHEN_FRACTION = re.compile(r"(?<![0-9.,/])([0-9]+)-([0-9]+)/(2|4|8|16|32|64)(?![0-9.,])")
_HYPHEN_INCHES = re.compile(r"(?<!')'(?!') ?- ?[0-9]|(?:ft|feet|foot)-[0-9]", re.IGNORECASE)


class Unreadable(Exception):
    """Why a text cannot be read; advice says what to write instead where the reason alone knows it."""

    def __init__(self, reason: str, advice: str = "") -> None:
        super().__init__(reason, advice)
        self.reason, self.advice = reason, advice


class _Token(NamedTuple):
    kind: Literal["number", "mixed", "unit", "sign", "end"]
    text: str
    value: Fraction = Fraction(0)


class _Amount(NamedTuple):
    """A number, in SI units if it has any; units : the scales of all units written in it."""

    value: Fraction
    units: frozenset[Fraction] = frozenset()


def evaluate(text: str, unit_scale: UnitScale, *, bare_unit: str) -> float:
    """The SI value of a text; a text without any unit is in bare_unit."""
    tidied = tidy(text)
    amount = _Reader(_tokens(tidied), unit_scale).whole()
    exact = amount.value if amount.units else amount.value * unit_scale(bare_unit)
    try:
        value = float(exact)
    except OverflowError:
        raise Unreadable("the number is too large") from None
    if exact and not value:
        raise Unreadable("the number is too small")
    return value


def tidy(text: str) -> str:
    """The text with single blanks and one form of every sign."""
    if len(text) > LONGEST_TEXT:
        raise Unreadable(f"the text has more than {LONGEST_TEXT} characters")
    return " ".join(text.translate(_SAME_SIGNS).split())


def _tokens(text: str) -> list[_Token]:
    _refuse_hyphens(text)
    found, at = [], 0
    while at < len(text):
        match = _TOKEN.match(text, at)
        if match is None:
            raise Unreadable(f"'{text[at:].lstrip()[0]}' is not understood")
        at = match.end()
        if written := match["mixed"]:
            found.append(_Token("mixed", written, _mixed(written)))
        elif written := match["number"]:
            found.append(_Token("number", written, _decimal(written)))
        elif written := match["unit"]:
            found.append(_Token("unit", written))
        else:
            found.append(_Token("sign", match["sign"]))
    return [*found, _Token("end", "")]


def _refuse_hyphens(text: str) -> None:
    """Refuses 2-7/16 in and 1'-3", where workshop drawings mean 'and' and arithmetic means 'less'."""
    reason = "the hyphen can mean 'and' or 'less'"
    if hyphen := _HYPHEN_FRACTION.search(text):
        whole, part, parts = hyphen.groups()
        if int(part) < int(parts):
            raise Unreadable(reason, f"write {whole} {part}/{parts} or {whole} - {part}/{parts}")
    if _HYPHEN_INCHES.search(text):
        raise Unreadable(reason, "write 1 ft 3 in or 1 ft - 3 in")


def _mixed(written: str) -> Fraction:
    whole, part, parts = (int(digits) for digits in re.findall("[0-9]+", written))
    if part >= parts:
        raise Unreadable(f"'{written}' is not a whole number and a proper fraction")
    return whole + Fraction(part, parts)


def _decimal(written: str) -> Fraction:
    mantissa, _, exponent = written.lower().partition("e")
    if _THOUSAND.fullmatch(mantissa):
        readings = f"write {mantissa.replace(',', '')} or {mantissa.replace(',', '.')}"
        raise Unreadable("the comma can part thousands or decimals", readings)
    if not _DECIMAL.fullmatch(mantissa):
        raise Unreadable(f"'{mantissa}' has more than one decimal sign", "write 1234.5 or 1234,5")
    if exponent and abs(int(exponent)) > LARGEST_EXPONENT:
        raise Unreadable(f"the exponent {exponent} is too large")
    return Fraction(mantissa.replace(",", ".")) * Fraction(10) ** int(exponent or 0)


class _Reader:
    """Recursive descent over the tokens of one text."""

    def __init__(self, tokens: list[_Token], unit_scale: UnitScale) -> None:
        self._tokens, self._at, self._unit_scale = tokens, 0, unit_scale

    def whole(self) -> _Amount:
        amount = self._sum(0)
        if self._next.kind != "end":
            raise Unreadable(f"'{self._next.text}' is not expected where it stands")
        return amount

    @property
    def _next(self) -> _Token:
        return self._tokens[self._at]

    def _take(self) -> _Token:
        token = self._next
        self._at += 1
        return token

    def _accept(self, signs: str) -> str:
        """The next sign if it is one of these, else an empty text."""
        return self._take().text if self._next.kind == "sign" and self._next.text in signs else ""

    def _sum(self, depth: int) -> _Amount:
        terms = [self._term(depth)]
        while sign := self._accept("+-"):
            term = self._term(depth)
            terms.append(term if sign == "+" else term._replace(value=-term.value))
        units = frozenset[Fraction]().union(*(term.units for term in terms))
        bare = Fraction(1)
        if units and not all(term.units for term in terms):
            if len(units) > 1 or not terms[-1].units:
                raise Unreadable("it is not clear which unit a number has", "give every number its unit")
            (bare,) = units
        return _Amount(sum((t.value if t.units else t.value * bare for t in terms), Fraction(0)), units)

    def _term(self, depth: int) -> _Amount:
        negative = self._accept("+-") == "-"
        amount = self._with_unit(self._factor(depth))
        if amount.units == {FOOT_M} and self._next.kind in ("number", "mixed"):
            amount = _Amount(amount.value + self._inches(), amount.units | {INCH_M})
        while operator := self._accept("*/"):
            if operator == "/" and self._next.kind == "mixed":
                raise Unreadable(f"it is not clear what '/ {self._next.text}' divides by", "use parentheses")
            right = self._factor(depth)
            product = _times(amount, right) if operator == "*" else _over(amount, right)
            amount = self._with_unit(product)
        return amount._replace(value=-amount.value) if negative else amount

    def _factor(self, depth: int) -> _Amount:
        if self._accept("("):
            if depth == DEEPEST_NESTING:
                raise Unreadable(f"the parentheses are nested more than {DEEPEST_NESTING} deep")
            amount = self._sum(depth + 1)
            if not self._accept(")"):
                raise Unreadable("a closing parenthesis is missing")
            return amount
        return _Amount(self._number())

    def _number(self) -> Fraction:
        if self._next.kind not in ("number", "mixed"):
            where = f" before '{self._next.text}'" if self._next.text else " at the end" if self._at else ""
            raise Unreadable(f"a number is missing{where}")
        return self._take().value

    def _with_unit(self, amount: _Amount) -> _Amount:
        if self._next.kind != "unit":
            return amount
        scale = self._unit_scale(self._next.text)
        if amount.units:
            raise Unreadable(f"'{self._next.text}' is a second unit in one product")
        self._take()
        return _Amount(amount.value * scale, frozenset({scale}))

    def _inches(self) -> Fraction:
        """The inches that follow feet, in metres."""
        inches = _Amount(self._number())
        if self._accept("/"):
            inches = _over(inches, _Amount(self._number()))
        if self._next.kind != "unit" or self._unit_scale(self._next.text) != INCH_M:
            raise Unreadable("after feet only inches can follow", "write 1 ft 3 1/2 in")
        return self._with_unit(inches).value


def _times(left: _Amount, right: _Amount) -> _Amount:
    if left.units and right.units:
        raise Unreadable("two figures with units cannot be multiplied")
    return _Amount(left.value * right.value, left.units | right.units)


def _over(left: _Amount, right: _Amount) -> _Amount:
    if right.units:
        raise Unreadable("only a plain number can stand after '/'")
    if not right.value:
        raise Unreadable("a division by zero has no value")
    return _Amount(left.value / right.value, left.units)
