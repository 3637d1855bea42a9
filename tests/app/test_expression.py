"""The arithmetic of a field, tried on lengths. Expected values: hand arithmetic with 1 in = 25.4 mm."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from app.editing.entry import EntryError, read_length_m


def read_m(text: str) -> float:
    return read_length_m(text, frequency_hz=None, velocity_factor=None)


@pytest.mark.parametrize(
    ("text", "length_m"),
    [
        ("62 mm", 0.062),
        ("62mm", 0.062),
        ("62", 0.062),
        ("62.", 0.062),
        ("  62  MM ", 0.062),
        ("6.2cm", 0.062),
        ("0.31 m", 0.31),
        (".31 m", 0.31),
        ("3.1e-1 m", 0.31),
        ("3.1E-1 m", 0.31),
        ("3 km", 3000.0),
        ("1,5 m", 1.5),
        ("0,123 m", 0.123),
        ("1234,5 mm", 1.2345),
        ("1234.567 mm", 1.234567),
        ("2 7/16 in", 0.0619125),
        ('2 7/16"', 0.0619125),
        ("2 7/16″", 0.0619125),
        ("2 7⁄16 inches", 0.0619125),
        ("7/16 in", 0.0111125),
        ("2.4375 in", 0.0619125),
        ("3''", 0.0762),
        ("1 ft", 0.3048),
        ("1 ft 3 1/2 in", 0.3937),
        ("1 foot 3 1/2 inches", 0.3937),
        ("1' 3.5\"", 0.3937),
        ("1'3.5\"", 0.3937),
        ("1’ 3 1/2”", 0.3937),
        ("1 ft 1/2 in", 0.3175),
        ("-1 ft 3 in", -0.381),
        ("2*(1 ft 3 in)", 0.762),
        ("62 + 2*1.5 mm", 0.065),
        ("62 + 1,5*2 mm", 0.065),
        ("61.9 mm + 2*1.0 mm", 0.0639),
        ("61.9 + 2*1.0", 0.0639),
        ("2*(31 mm)", 0.062),
        ("2*(30+1) mm", 0.062),
        ("2*(30 + 1 mm)", 0.062),
        ("(30 + 1 mm)*2", 0.062),
        ("6.2 cm - 2 mm", 0.06),
        ("62-2 mm", 0.06),
        ("62 − 2×1 mm", 0.06),
        ("62 - -2 mm", 0.064),
        ("10 - 3 - 2 mm", 0.005),
        ("100/2/5 mm", 0.01),
        ("62 mm/2", 0.031),
        ("62/2 mm", 0.031),
        ("62/2 mm*3", 0.093),
        ("-62 mm", -0.062),
        ("1 in + 1 mm", 0.0264),
        ("2 - 7/16 in", 0.0396875),
        ("62-3/2 mm", 0.0605),
        ("62-1/2.5 mm", 0.0616),
        ("62-1/20 mm", 0.06195),
        ("1/2-1/4 in", 0.00635),
        ("3''-1''", 0.0508),
        ("0", 0.0),
    ],
)
def test_length(text: str, length_m: float) -> None:
    assert read_m(text) == length_m


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("12 parsnips", "'parsnips' is not a unit here; try 62 mm, 2 7/16 in, 90deg or 0.25 wl."),
        ("", "An empty field cannot be read as a length: a number is missing; try 62 mm"),
        ("mm", "a number is missing before 'mm'"),
        ("62 +", "a number is missing at the end"),
        ("()", "a number is missing before ')'"),
        ("(62 mm", "a closing parenthesis is missing"),
        ("62 mm)", "')' is not expected"),
        ("62 mm mm", "'mm' is not expected"),
        ("62 63 mm", "'63' is not expected"),
        ("1 234 mm", "'234' is not expected"),
        ("1 m 20 cm", "'20' is not expected"),
        ("2*1 ft 3 in", "'3' is not expected"),
        ("62 ; 3", "';' is not understood"),
        ("__import__('os')", "'_' is not understood"),
        ("٦٢ mm", "'٦' is not understood"),
        ("1,234.5", "write 1234.5 or 1234,5."),
        ("1.234,5 mm", "write 1234.5 or 1234,5."),
        ("1,234 mm", "write 1234 or 1.234."),
        ("12,345e1 mm", "write 12345 or 12.345."),
        ("1,234,567 mm", "more than one decimal sign"),
        ("1.234.567 mm", "more than one decimal sign"),
        ("62 mm + 2", "give every number its unit"),
        ("1 mm + 2 + 3 in", "give every number its unit"),
        ("2 + 1 ft 3 in", "give every number its unit"),
        ("2-7/16 in", "write 2 7/16 or 2 - 7/16."),
        ("1'-3\"", "write 1 ft 3 in or 1 ft - 3 in."),
        ("1' - 3 1/2\"", "write 1 ft 3 in or 1 ft - 3 in."),
        ("1 ft-3 in", "write 1 ft 3 in or 1 ft - 3 in."),
        ("1 ft 3", "after feet only inches can follow"),
        ("1 ft 3 mm", "after feet only inches can follow"),
        ("2 7/16.5 in", "'.5' is not expected"),
        ("62 3/2 mm", "'62 3/2' is not a whole number and a proper fraction"),
        ("1 1/0 in", "'1 1/0' is not a whole number and a proper fraction"),
        ("9/2 1/4 in", "use parentheses"),
        ("62 mm*2 mm", "'mm' is a second unit in one product"),
        ("62 mm*(2 mm)", "two figures with units cannot be multiplied"),
        ("1/(4 mm)", "only a plain number can stand after '/'"),
        ("62/0 mm", "a division by zero"),
        ("62/(1-1) mm", "a division by zero"),
        ("1e401 mm", "the exponent 401 is too large"),
        ("1e" + "9" * 190, "is too large"),
        ("1e400 mm", "the number is too large"),
        ("1e-400 mm", "the number is too small"),
        ("(" * 21 + "1" + ")" * 21, "nested more than 20 deep"),
        ("1" * 201, "more than 200 characters"),
        ("inf", "a number is missing before 'inf'"),
        ("nan mm", "a number is missing before 'nan'"),
    ],
)
def test_length_refused_with_one_sentence(text: str, says: str) -> None:
    with pytest.raises(EntryError) as refused:
        read_m(text)
    assert says in str(refused.value)
    assert str(refused.value).count("cannot be read as a length: ") == 1


def test_twenty_parentheses_are_read() -> None:
    assert read_m("(" * 20 + "62 mm" + ")" * 20) == 0.062


Sum = tuple[str, Fraction]
NUMBERS: st.SearchStrategy[Sum] = st.one_of(
    st.decimals(0, 9999, places=2).map(lambda d: (str(d), Fraction(d))),
    st.tuples(st.integers(0, 99), st.integers(1, 15)).map(lambda w: (f"{w[0]} {w[1]}/16", w[0] + Fraction(w[1], 16))),
)
SUMS = st.recursive(
    NUMBERS,
    lambda inner: st.one_of(
        st.tuples(inner, inner).map(lambda p: (f"({p[0][0]} + {p[1][0]})", p[0][1] + p[1][1])),
        st.tuples(inner, inner).map(lambda p: (f"({p[0][0]} - {p[1][0]})", p[0][1] - p[1][1])),
        st.tuples(inner, inner).map(lambda p: (f"{p[0][0]}*{p[1][0]}", p[0][1] * p[1][1])),
        st.tuples(inner, st.integers(1, 99)).map(lambda p: (f"{p[0][0]}/{p[1]}", p[0][1] / p[1])),
    ),
    max_leaves=6,
)


@given(SUMS)
def test_arithmetic_agrees_with_exact_fractions(written: Sum) -> None:
    text, value = written
    assume(len(text) < 190)
    assert read_m(f"{text} mm") == float(value / 1000)
