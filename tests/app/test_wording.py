"""Figures as people read them. Expected texts: hand arithmetic and the rules of rounding."""

from __future__ import annotations

import math
from fractions import Fraction
from typing import get_args

import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from app.editing.entry import LengthUnit, read_complex_ohm, read_length_m, read_quantity
from app.editing.wording import (
    READ_BACK_REL,
    editable_impedance,
    editable_length,
    editable_quantity,
    field_unit,
    format_angle,
    format_current,
    format_db,
    format_frequency,
    format_impedance,
    format_length,
    format_power,
    format_share,
    format_voltage,
    wheel_step_m,
)

UNITS: tuple[LengthUnit, ...] = get_args(LengthUnit)


@pytest.mark.parametrize(
    ("length_m", "unit", "text"),
    [
        (0.062, "mm", "62.0 mm"),
        (0.00891624, "mm", "8.92 mm"),
        (1.25, "mm", "1250.0 mm"),
        (12.3456, "mm", "12346 mm"),
        (-0.0123, "mm", "−12.3 mm"),
        (-1e-9, "mm", "0.00 mm"),
        (0.062, "m", "0.0620 m"),
        (1.25, "m", "1.250 m"),
        (0.0619125, "in", "2 7/16 in"),
        (0.062, "in", "2 7/16 in"),  # 2.4409 in, 78.1 parts of 32
        (0.0111125, "in", "7/16 in"),
        (0.0508, "in", "2 in"),
        (0.0516, "in", "2 1/32 in"),
        (-0.0619125, "in", "−2 7/16 in"),
        (0.0, "in", "0 in"),
        (0.00891624, "deg", "90.0°"),  # CP-01
        (0.00891624, "wl", "0.250 wl"),
        (0.001, "deg", "10.1°"),  # CX-09
        (0.0645393204, "ps", "312 ps"),
        (0.00645393204, "ps", "31.2 ps"),
        (math.inf, "mm", "∞"),
        (math.nan, "in", "—"),
    ],
)
def test_length(length_m: float, unit: LengthUnit, text: str) -> None:
    assert format_length(length_m, unit, frequency_hz=5.8e9, velocity_factor=0.69) == text


@pytest.mark.parametrize(
    ("frequency_hz", "velocity_factor", "text"),
    [
        (144e6, 0.66, "0.3°"),
        (432e6, 0.66, "0.8°"),
        (5.8e9, 0.69, "10.1°"),
        (None, 0.69, "1.00 mm"),
        (5.8e9, None, "1.00 mm"),
    ],
)
def test_one_millimetre_in_degrees(frequency_hz: float | None, velocity_factor: float | None, text: str) -> None:
    assert format_length(1e-3, "deg", frequency_hz=frequency_hz, velocity_factor=velocity_factor) == text  # CX-09


@pytest.mark.parametrize(
    ("length_m", "unit", "text"),
    [
        (0.062, "mm", "62 mm"),
        (0.0623 + 0.0001, "mm", "62.4 mm"),
        (0.06, "mm", "60 mm"),
        (3000.0, "mm", "3000000 mm"),
        (0.0619125, "in", "2 7/16 in"),
        (0.0254 * 39 / 64, "in", "39/64 in"),
        (0.0254 * 2.44, "in", "2.44 in"),
        (-0.0619125, "in", "-2 7/16 in"),
        (0.31, "m", "0.31 m"),
        (0.0, "deg", "0°"),
    ],
)
def test_editable_length(length_m: float, unit: LengthUnit, text: str) -> None:
    assert editable_length(length_m, unit, frequency_hz=868e6, velocity_factor=0.695) == text


@pytest.mark.parametrize("text", ["90°", "0.25 wl", "312 ps", "2 7/16 in", "61.9 mm", "0.31 m"])
def test_what_was_written_is_shown_again_for_editing(text: str) -> None:
    unit = next(unit for unit in UNITS if text.replace("°", " deg").endswith(f" {unit}"))
    length_m = read_length_m(text, frequency_hz=868e6, velocity_factor=0.695)
    assert editable_length(length_m, unit, frequency_hz=868e6, velocity_factor=0.695) == text


LENGTHS_M = st.one_of(
    st.just(0.0),
    st.floats(1e-9, 1e5),
    st.floats(-1e5, -1e-9),
    st.integers(1, 100_000).map(lambda parts: float(Fraction(parts, 64) * Fraction("0.0254"))),
)
FREQUENCIES_HZ = st.one_of(st.none(), st.floats(1e5, 1e11))
VELOCITY_FACTORS = st.one_of(st.none(), st.floats(0.05, 1))


@given(LENGTHS_M, st.sampled_from(UNITS), FREQUENCIES_HZ, VELOCITY_FACTORS)
def test_editable_length_reads_back(
    length_m: float, unit: LengthUnit, frequency_hz: float | None, velocity_factor: float | None
) -> None:
    text = editable_length(length_m, unit, frequency_hz=frequency_hz, velocity_factor=velocity_factor)
    read_m = read_length_m(text, frequency_hz=frequency_hz, velocity_factor=velocity_factor)
    assert abs(read_m - length_m) <= 1e-12 * abs(length_m)


@given(st.floats(-100, 100), st.sampled_from(["mm", "m", "in"]))
def test_shown_length_is_within_half_of_its_last_place(length_m: float, unit: LengthUnit) -> None:
    text = format_length(length_m, unit, frequency_hz=None, velocity_factor=None)
    read_m = read_length_m(text, frequency_hz=None, velocity_factor=None)
    assert abs(read_m - length_m) <= 0.0005 + 1e-12  # whole mm, thousandths of m, 1/32 in


@given(st.floats(0), st.sampled_from(UNITS))
@example(1.7e308, "in")
@example(2e306, "in")
def test_any_length_of_a_plan_has_a_text(length_m: float, unit: LengthUnit) -> None:
    assert format_length(length_m, unit, frequency_hz=868e6, velocity_factor=0.695)
    if math.isfinite(length_m):
        assert editable_length(length_m, unit, frequency_hz=868e6, velocity_factor=0.695)


@pytest.mark.parametrize(
    ("frequency_hz", "text"),
    [
        (868e6, "868 MHz"),
        (868.3e6, "868.3 MHz"),
        (868.125e6, "868.125 MHz"),
        (162.0e6, "162 MHz"),
        (5.8e9, "5.8 GHz"),
        (2.4835e9, "2.4835 GHz"),
        (12.5e3, "12.5 kHz"),
        (50.0, "50 Hz"),
        (0.0, "0 Hz"),
        (math.nan, "—"),
    ],
)
def test_frequency(frequency_hz: float, text: str) -> None:
    assert format_frequency(frequency_hz) == text


@given(st.integers(0, 100_000_000))
def test_whole_kilohertz_read_back(frequency_khz: int) -> None:
    assert read_quantity(format_frequency(frequency_khz * 1e3), unit="Hz") == frequency_khz * 1e3


@pytest.mark.parametrize(
    ("impedance_ohm", "text"),
    [
        (56 - 1j, "56 − j1 Ω"),
        (56.28 - 0.98j, "56.3 − j1 Ω"),
        (50 + 0j, "50 + j0 Ω"),
        (50 - 1e-14j, "50 + j0 Ω"),
        (111.2 - 6.3j, "111 − j6 Ω"),
        (0.05 + 0.3j, "0.05 + j0.3 Ω"),
        (-3j, "0 − j3 Ω"),
        (1234 + 0j, "1230 + j0 Ω"),
        (12_345 + 100j, "12.3 + j0.1 kΩ"),
        (2e7 + 0j, "20 + j0 MΩ"),
        (0j, "0 + j0 Ω"),
        (complex(math.inf, 0), "∞"),
        (complex(math.inf, math.nan), "∞"),
        (complex(math.nan, math.nan), "—"),
        (1e308 + 1e308j, "∞"),
    ],
)
def test_impedance(impedance_ohm: complex, text: str) -> None:
    assert format_impedance(impedance_ohm) == text


@pytest.mark.parametrize(
    ("power_w", "text"),
    [
        (1.0, "1 W"),
        (150.0, "150 W"),
        (0.501187, "501 mW"),
        (0.0271, "27.1 mW"),
        (999.9, "1 kW"),
        (1500.0, "1.5 kW"),
        (2.5e-6, "2.5 µW"),
        (3e-9, "3 nW"),
        (-0.1, "−100 mW"),
        (0.0, "0 W"),
        (math.nan, "—"),
    ],
)
def test_power(power_w: float, text: str) -> None:
    assert format_power(power_w) == text


@pytest.mark.parametrize(
    ("level_db", "text"),
    [
        (24.609, "24.6 dB"),
        (0.114, "0.11 dB"),
        (-0.001, "0.00 dB"),
        (-3.0103, "−3.01 dB"),
        (math.inf, "∞"),
        (-math.inf, "−∞"),
    ],
)
def test_level(level_db: float, text: str) -> None:
    assert format_db(level_db) == text


@pytest.mark.parametrize(
    ("frequency_hz", "velocity_factor", "step_m"),
    [
        (144e6, 0.66, 1e-3),  # 0.2 degrees are 0.763 mm
        (432e6, 0.66, 2e-4),  # 0.254 mm
        (868e6, 0.695, 1e-4),  # 0.133 mm
        (1e9, 1.0, 2e-4),  # 0.167 mm
        (1.45e9, 0.7, 1e-4),  # 0.0804 mm
        (2.4e9, 0.695, 5e-5),  # 0.0482 mm
        (5.8e9, 0.69, 2e-5),  # 0.0198 mm
    ],
)
def test_wheel_step(frequency_hz: float, velocity_factor: float, step_m: float) -> None:
    assert wheel_step_m(frequency_hz=frequency_hz, velocity_factor=velocity_factor) == step_m


@given(st.floats(1e5, 1e11), st.floats(0.05, 1))
def test_wheel_step_is_a_round_figure_near_a_fifth_of_a_degree(frequency_hz: float, velocity_factor: float) -> None:
    step_m = wheel_step_m(frequency_hz=frequency_hz, velocity_factor=velocity_factor)
    step_deg = 360 * step_m * frequency_hz / (velocity_factor * 299_792_458)
    assert f"{step_m:e}"[:8] in ("1.000000", "2.000000", "5.000000")
    assert 0.2 / math.sqrt(2.5) * 0.999 < step_deg < 0.2 * math.sqrt(2.5) * 1.001


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (868e6, "Hz", "868 MHz"),
        (868.035e6, "Hz", "868.035 MHz"),
        (2.45e9, "Hz", "2450 MHz"),
        (8.2e-9, "H", "8.2 nH"),
        (3.3e-12, "F", "3.3 pF"),
        (50.0, "ohm", "50 Ω"),
        (0.1, "W", "0.1 W"),
        (20.0, "dB", "20 dB"),
        (-90.0, "deg", "-90°"),
        (0.695, "", "0.695"),
        (-0.0, "dB", "0 dB"),
    ],
)
def test_editable_quantity(value: float, unit: str, text: str) -> None:
    assert editable_quantity(value, unit=unit) == text


@given(st.floats(1e-15, 1e15), st.sampled_from(["Hz", "H", "F", "ohm", "W", "dB", "deg", ""]))
def test_editable_quantity_reads_back(value: float, unit: str) -> None:
    text = editable_quantity(value, unit=unit)
    assert read_quantity(text, unit=unit) == pytest.approx(value, rel=READ_BACK_REL)
    bare = text.removesuffix(field_unit(unit)).strip()
    assert read_quantity(bare, unit=unit, bare_unit=field_unit(unit)) == pytest.approx(value, rel=READ_BACK_REL)


@pytest.mark.parametrize(
    ("impedance_ohm", "text"),
    [(50 + 0j, "50 Ω"), (36 - 12.5j, "36 - j12.5 Ω"), (0.1 + 1j, "0.1 + j1 Ω"), (0j, "0 Ω"), (-3j, "0 - j3 Ω")],
)
def test_editable_impedance(impedance_ohm: complex, text: str) -> None:
    assert editable_impedance(impedance_ohm) == text
    assert read_complex_ohm(text) == impedance_ohm


@pytest.mark.parametrize(
    ("value", "voltage", "current"),
    [
        (9.776, "9.78 V", "9.78 A"),
        (0.14142, "141 mV", "141 mA"),
        (0.9996, "1 V", "1 A"),
        (1234.0, "1.23 kV", "1.23 kA"),
        (0.0, "0 V", "0 A"),
        (math.inf, "∞", "∞"),
        (math.nan, "—", "—"),
    ],
)
def test_voltage_and_current(value: float, voltage: str, current: str) -> None:
    assert format_voltage(value) == voltage
    assert format_current(value) == current


def test_angle_and_share() -> None:
    assert [format_angle(x) for x in (8.16, -12.34, -0.04, math.nan)] == ["8.2°", "−12.3°", "0.0°", "—"]
    assert [format_share(x) for x in (0.5021, 1.0, -0.0004, math.inf)] == ["50.2 %", "100.0 %", "0.0 %", "∞"]
