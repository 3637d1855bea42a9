"""Reading what people write. Expected values: hand arithmetic with 1 in = 25.4 mm and c = 299 792 458 m/s."""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import partial

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.editing.entry import EntryError, LengthUnit, read_complex_ohm, read_length_m, read_quantity


def at_5800_mhz(text: str) -> float:
    return read_length_m(text, frequency_hz=5.8e9, velocity_factor=0.69)


def plain(text: str, default_unit: LengthUnit = "mm") -> float:
    return read_length_m(text, frequency_hz=None, velocity_factor=None, default_unit=default_unit)


@pytest.mark.parametrize(
    ("text", "default_unit", "length_m"),
    [
        ("62", "mm", 0.062),
        ("1.5", "m", 1.5),
        ("7/16", "in", 0.0111125),
        ("2 7/16", "in", 0.0619125),
        ("2+1", "in", 0.0762),
    ],
)
def test_number_alone_has_the_default_unit(text: str, default_unit: LengthUnit, length_m: float) -> None:
    assert plain(text, default_unit) == length_m


@pytest.mark.parametrize(
    "text", ["90deg", "90 DEG", "90°", "90º", "0.25 wl", "0,25 λ", "1/4 wl", "2*45 deg", "3/4 wl - 180deg"]
)
def test_quarter_wave_at_5800_mhz(text: str) -> None:
    assert at_5800_mhz(text) == pytest.approx(8.91624e-3, abs=5e-9)  # CP-01


def test_quarter_wave_less_two_solder_joints() -> None:
    assert at_5800_mhz("90deg - 2*1 mm") == pytest.approx(6.91624e-3, abs=5e-9)  # CP-01


@pytest.mark.parametrize(("text", "unit"), [("90", "deg"), ("0.25", "wl")])
def test_electrical_default_unit(text: str, unit: LengthUnit) -> None:
    length_m = read_length_m(text, frequency_hz=5.8e9, velocity_factor=0.69, default_unit=unit)
    assert length_m == pytest.approx(8.91624e-3, abs=5e-9)


@pytest.mark.parametrize(
    ("frequency_hz", "velocity_factor", "phase"),
    [(144e6, 0.66, "0.261999°"), (432e6, 0.66, "0.785998°"), (5.8e9, 0.69, "10.0939°")],
)
def test_one_millimetre_in_degrees(frequency_hz: float, velocity_factor: float, phase: str) -> None:
    length_m = read_length_m(phase, frequency_hz=frequency_hz, velocity_factor=velocity_factor)
    assert length_m == pytest.approx(1e-3, rel=1e-5)  # CX-09


@pytest.mark.parametrize(
    ("text", "velocity_factor", "length_m"),
    [
        ("50 ns", 0.66, 9.89315),  # half of the round trips of CX-08
        ("125 ns", 0.83, 31.1035),
        ("312 ps", 0.69, 0.0645393204),  # 206 856 796.02 m/s * 312 ps
        ("1.2 ns", 0.69, 0.2482281552),
    ],
)
def test_delay_one_way_needs_no_frequency(text: str, velocity_factor: float, length_m: float) -> None:
    read_m = read_length_m(text, frequency_hz=None, velocity_factor=velocity_factor)
    assert read_m == pytest.approx(length_m, rel=1e-5)


@pytest.mark.parametrize(
    ("text", "frequency_hz", "velocity_factor", "needs"),
    [
        ("90deg", None, 0.69, "the frequency"),
        ("90°", 868e6, None, "velocity factor"),
        ("0.25 λ", None, None, "velocity factor"),
        ("0.25 wl", 0.0, 0.69, "the frequency"),
        ("0.25 wl", math.nan, 0.69, "the frequency"),
        ("0.25 wl", -868e6, 0.69, "the frequency"),
        ("312 ps", 868e6, None, "velocity factor"),
        ("62 mm + 1 deg", None, None, "the frequency"),
    ],
)
def test_unit_that_needs_an_unknown_figure(
    text: str, frequency_hz: float | None, velocity_factor: float | None, needs: str
) -> None:
    with pytest.raises(EntryError, match=f"needs .*{needs}"):
        read_length_m(text, frequency_hz=frequency_hz, velocity_factor=velocity_factor)


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("868 MHz", "Hz", 868e6),
        ("868 mhz", "Hz", 868e6),
        ("868 MHZ", "Hz", 868e6),
        ("868 mHz", "Hz", 868e6),
        ("868M", "Hz", 868e6),
        ("0.868 GHz", "Hz", 868e6),
        ("0.868G", "Hz", 868e6),
        ("868,3 MHz", "Hz", 868.3e6),
        ("868 + 2*0.2 MHz", "Hz", 868.4e6),
        ("25 kHz", "Hz", 25e3),
        ("868000000", "Hz", 868e6),
        ("50", "ohm", 50.0),
        ("50 Ω", "ohm", 50.0),
        ("50 \u2126", "ohm", 50.0),
        ("50 ohm", "ohm", 50.0),
        ("50 Ohms", "ohm", 50.0),
        ("1k", "ohm", 1e3),
        ("1.2 kΩ", "ohm", 1.2e3),
        ("1 M", "ohm", 1e6),
        ("20 mohm", "ohm", 0.02),
        ("100/3 Ω", "ohm", 100 / 3),
        ("1 W", "W", 1.0),
        ("100 mW", "W", 0.1),
        ("1 MW", "W", 1e6),
        ("1.5 kw", "W", 1500.0),
        ("0.5 dB", "dB", 0.5),
        ("-3", "dB", -3.0),
        ("0,5 db", "dB", 0.5),
        ("-22.5 deg", "deg", -22.5),
        ("180°", "deg", 180.0),
        ("90", "deg", 90.0),
        ("8.2 nH", "H", 8.2e-9),
        ("8.2n", "H", 8.2e-9),
        ("1.5 µH", "H", 1.5e-6),
        ("1.5 uH", "H", 1.5e-6),
        ("2 mH", "H", 2e-3),
        ("3.3 pF", "F", 3.3e-12),
        ("3.3 pf", "F", 3.3e-12),
        ("1 nF", "F", 1e-9),
        ("0,695", "", 0.695),
        ("2/3", "", 2 / 3),
    ],
)
def test_quantity(text: str, unit: str, value: float) -> None:
    assert read_quantity(text, unit=unit) == value


@pytest.mark.parametrize(
    ("text", "power_w"),
    [("30 dBm", 1.0), ("0 dbm", 1e-3), ("27 dBm", 0.501187), ("-10dBm", 1e-4), ("20 + 10 dBm", 1.0)],
)
def test_power_in_dbm(text: str, power_w: float) -> None:
    assert read_quantity(text, unit="W") == pytest.approx(power_w, rel=1e-6)


@pytest.mark.parametrize(
    ("text", "frequency_hz"), [("868", 868e6), ("868,3", 868.3e6), ("0.868 GHz", 868e6), ("863 + 5", 868e6)]
)
def test_bare_unit(text: str, frequency_hz: float) -> None:
    assert read_quantity(text, unit="Hz", bare_unit="MHz") == frequency_hz


@pytest.mark.parametrize(
    ("text", "unit", "says"),
    [
        ("2 m", "Hz", "cannot be read as a frequency: 'm' is not a unit here; try 868 MHz"),
        ("868 W", "Hz", "'W' is not a unit here"),
        ("868,125", "Hz", "write 868125 or 868.125."),
        ("50 V", "ohm", "cannot be read as an impedance"),
        ("400 dBm", "W", "400 dBm is no power"),
        ("dBm", "W", "'dBm' cannot be read as a power: a number is missing"),
        ("30 dBm + 30 dBm", "W", "'dBm' is not a unit here"),
        ("3 kdB", "dB", "'kdB' is not a unit here"),
        ("3p3", "F", "cannot be read as a capacitance"),
        ("8.2 F", "H", "cannot be read as an inductance"),
        ("70 %", "", "cannot be read as a number: '%' is not understood; try 0.695 or 2/3."),
        ("", "deg", "An empty field cannot be read as an angle"),
    ],
)
def test_quantity_refused_with_one_sentence(text: str, unit: str, says: str) -> None:
    with pytest.raises(EntryError) as refused:
        read_quantity(text, unit=unit)
    assert says in str(refused.value)


@pytest.mark.parametrize(
    ("text", "impedance_ohm"),
    [
        ("50", 50),
        ("50 Ω", 50),
        ("1k", 1000),
        ("50 + j0", 50),
        ("36-j12.5", 36 - 12.5j),
        ("36 − j12.5 Ω", 36 - 12.5j),
        ("36 - 12.5j", 36 - 12.5j),
        ("36 - J 12.5 ohm", 36 - 12.5j),
        ("50+25i", 50 + 25j),
        ("36,5 - j12,5", 36.5 - 12.5j),
        ("100/4 + j10", 25 + 10j),
        ("1k + j2k", 1000 + 2000j),
        ("1e2-1e1j", 100 - 10j),
        ("j25", 25j),
        ("-j25", -25j),
        ("25j", 25j),
        ("40∠0", 40),
        ("40∠90°", 40j),
        ("40∠-90°", -40j),
        ("40∠270°", -40j),
        ("40∠180", -40),
    ],
)
def test_impedance(text: str, impedance_ohm: complex) -> None:
    assert read_complex_ohm(text) == impedance_ohm


@pytest.mark.parametrize("text", ["40∠-30°", "40 @ -30deg", "40 Ω ∠ −30", "40∠-30° Ω", "40∠330°", "40∠-390 deg"])
def test_impedance_by_magnitude_and_angle(text: str) -> None:
    assert read_complex_ohm(text) == pytest.approx(20 * math.sqrt(3) - 20j, rel=1e-14)


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("", "An empty field cannot be read as an impedance: a number is missing; try 50, 36 - j12.5"),
        ("50 25j", "a + or - is missing before the part with j"),
        ("50 + j", "a number is missing before 'j'"),
        ("j25 + 50", "a number is missing before 'j'"),
        ("50 + j1,234", "write 1234 or 1.234."),
        ("50 + j10 + j20", "cannot be read as an impedance"),
        ("40∠30∠30", "'∠' is not understood"),
        ("40∠30 mm", "'mm' is not a unit here"),
        ("1e400 + j0", "'1e400 + j0' cannot be read as an impedance: the number is too large"),
    ],
)
def test_impedance_refused_with_one_sentence(text: str, says: str) -> None:
    with pytest.raises(EntryError) as refused:
        read_complex_ohm(text)
    assert says in str(refused.value)


def test_minus_zero_is_written_as_zero() -> None:
    assert math.copysign(1, read_complex_ohm("50 - j0").imag) == 1
    assert math.copysign(1, plain("-0 mm")) == 1


PIECES = [
    *"0()+-*/ '\"jk∠\ud800\u202e",
    "1",
    "2 7/16",
    "1,5",
    "1e300",
    "1e-300",
    "ft",
    "in",
    "mm",
    "deg",
    "ps",
    "dBm",
]
UNITS = ("Hz", "ohm", "W", "dB", "deg", "H", "F", "")
HOSTILE = st.one_of(
    st.text(max_size=220),
    st.text("0123456789.,+-*/() '\"°λΩµeEjikMmGnpfthzwdBsc∠@½−\n\t\x00", max_size=220),
    st.lists(st.sampled_from(PIECES), max_size=40).map("".join),
)


@given(HOSTILE)
def test_any_text_gives_a_finite_value_or_one_sentence(text: str) -> None:
    readers: list[Callable[[str], complex]] = [at_5800_mhz, plain, read_complex_ohm]
    readers += [partial(read_quantity, unit=unit) for unit in UNITS]
    for reader in readers:
        value, sentence = 0j, "Read."
        try:
            value = complex(reader(text))
        except EntryError as refused:
            sentence = str(refused)
        assert math.isfinite(value.real)
        assert math.isfinite(value.imag)
        assert sentence.isprintable()
        assert sentence.endswith(".")
