"""SI numbers as people read them; must not know widgets, parts or plans.

Shown figures have a true minus sign, ∞ for infinity and — for what has no value. `entry` reads the texts.
"""

from __future__ import annotations

import cmath
import math
from fractions import Fraction

from app.editing.entry import LengthUnit, length_unit_m
from app.editing.expression import Unreadable
from feedlib.conventions import guided_wavelength_m

READ_BACK_REL = 1e-12
WHEEL_STEP_DEG = 0.2

_INCH_PARTS_SHOWN = 32
_INCH_PARTS_WRITTEN = 64
_LARGEST_FRACTION_IN = 1e6
_UNIT_TEXT = {"deg": "°"}
_LENGTH_DECIMALS: dict[LengthUnit, tuple[tuple[float, int], ...]] = {
    # (below this figure, so many decimals)
    "mm": ((10, 2), (10_000, 1), (math.inf, 0)),
    "m": ((1, 4), (math.inf, 3)),
    "in": ((math.inf, 1),),
    "deg": ((math.inf, 1),),
    "wl": ((math.inf, 3),),
    "ps": ((100, 1), (math.inf, 0)),
}
_FIELD_UNITS = {"Hz": ("MHz", 1e6), "H": ("nH", 1e-9), "F": ("pF", 1e-12), "ohm": ("Ω", 1.0), "deg": ("°", 1.0)}
_LARGEST_IMPEDANCE_OHM = 1e12
"""What is larger is an open circuit with rounding noise."""


def format_length(
    length_m: float, unit: LengthUnit, *, frequency_hz: float | None, velocity_factor: float | None
) -> str:
    """A length to be shown; in mm where frequency or velocity factor are needed and not known."""
    unit, unit_m = _known_unit(unit, frequency_hz, velocity_factor)
    figure = length_m / unit_m
    if not math.isfinite(figure):
        return _without_value(figure)
    if unit == "in" and abs(figure) < _LARGEST_FRACTION_IN:
        return _inches(round(figure * _INCH_PARTS_SHOWN), _INCH_PARTS_SHOWN).replace("-", "−")
    decimals = next(places for below, places in _LENGTH_DECIMALS[unit] if abs(figure) < below)
    return _fixed(figure, decimals) + _UNIT_TEXT.get(unit, f" {unit}")


def editable_length(
    length_m: float, unit: LengthUnit, *, frequency_hz: float | None, velocity_factor: float | None
) -> str:
    """The shortest text that reads back to the same length within READ_BACK_REL; units as in format_length.

    length_m : finite.
    """
    unit, unit_m = _known_unit(unit, frequency_hz, velocity_factor)
    figure = length_m / unit_m

    if unit == "in" and abs(figure) < _LARGEST_FRACTION_IN:
        parts = round(figure * _INCH_PARTS_WRITTEN)
        if _reads_back(parts / _INCH_PARTS_WRITTEN, figure):
            return _inches(parts, _INCH_PARTS_WRITTEN)
    return _shortest(figure) + _UNIT_TEXT.get(unit, f" {unit}")


def field_unit(unit: str) -> str:
    """The unit in which a field for a quantity is written, and which a bare number in it has."""
    return _FIELD_UNITS.get(unit, (unit, 1.0))[0]


def editable_quantity(value: float, *, unit: str) -> str:
    """The shortest text in the field's unit that reads back to the same value within READ_BACK_REL.

    value : finite; unit : as in entry.read_quantity.
    """
    written, scale = _FIELD_UNITS.get(unit, (unit, 1.0))
    return _shortest(value / scale) + (written if written in ("", "°") else f" {written}")


def editable_impedance(impedance_ohm: complex) -> str:
    """The shortest text that reads back to the same finite impedance, such as 36 - j12.5 Ω."""
    if impedance_ohm.imag == 0:
        return f"{_shortest(impedance_ohm.real)} Ω"
    sign = "-" if impedance_ohm.imag < 0 else "+"
    return f"{_shortest(impedance_ohm.real)} {sign} j{_shortest(abs(impedance_ohm.imag))} Ω"


def format_frequency(frequency_hz: float) -> str:
    """A frequency to be shown, with up to six decimals."""
    if not math.isfinite(frequency_hz):
        return _without_value(frequency_hz)
    scale, unit = _scale(abs(frequency_hz), ((1e9, "GHz"), (1e6, "MHz"), (1e3, "kHz"), (1.0, "Hz")))
    return f"{_trimmed(_fixed(frequency_hz / scale, 6))} {unit}"


def format_impedance(impedance_ohm: complex) -> str:
    """An impedance to be shown, such as 56.3 − j1 Ω: both parts to the third digit of the larger one."""
    larger_ohm = max(abs(impedance_ohm.real), abs(impedance_ohm.imag))
    if cmath.isinf(impedance_ohm) or larger_ohm >= _LARGEST_IMPEDANCE_OHM:
        return "∞"
    if cmath.isnan(impedance_ohm):
        return "—"
    scale, unit = _scale(larger_ohm / 10, ((1e6, "MΩ"), (1e3, "kΩ"), (1.0, "Ω")))
    places = min(_places(larger_ohm / scale), 2)
    real, imaginary = (_rounded(part / scale, places) for part in (impedance_ohm.real, impedance_ohm.imag))
    sign = "−" if imaginary.startswith("−") else "+"
    return f"{real} {sign} j{imaginary.removeprefix('−')} {unit}"


def format_power(power_w: float) -> str:
    """A power to be shown, with three digits."""
    return _three_digits(power_w, "W")


def format_voltage(voltage_v: float) -> str:
    """A voltage to be shown, with three digits."""
    return _three_digits(voltage_v, "V")


def format_current(current_a: float) -> str:
    """A current to be shown, with three digits."""
    return _three_digits(current_a, "A")


def format_angle(angle_deg: float) -> str:
    """An angle to be shown, in tenths."""
    return f"{_fixed(angle_deg, 1)}°" if math.isfinite(angle_deg) else _without_value(angle_deg)


def format_share(share: float) -> str:
    """A part of a whole to be shown in tenths of a percent."""
    return f"{_fixed(100 * share, 1)} %" if math.isfinite(share) else _without_value(share)


def format_db(level_db: float) -> str:
    """A level to be shown: hundredths below 10 dB, tenths above."""
    if not math.isfinite(level_db):
        return _without_value(level_db)
    return f"{_fixed(level_db, 2 if abs(level_db) < 10 else 1)} dB"


def wheel_step_m(*, frequency_hz: float, velocity_factor: float) -> float:
    """The step (m) of one wheel notch: 1, 2 or 5 times a power of ten, in ratio nearest to WHEEL_STEP_DEG."""
    wanted_m = guided_wavelength_m(frequency_hz, velocity_factor) * WHEEL_STEP_DEG / 360
    decade = math.floor(math.log10(wanted_m))
    steps_m = [float(f"{digit}e{decade}") for digit in (1, 2, 5, 10)]
    return min(steps_m, key=lambda step_m: abs(math.log(step_m / wanted_m)))


def _known_unit(
    unit: LengthUnit, frequency_hz: float | None, velocity_factor: float | None
) -> tuple[LengthUnit, float]:
    """The unit and its metres, or mm where the unit needs a figure that is not known."""
    try:
        scale = length_unit_m(unit, frequency_hz=frequency_hz, velocity_factor=velocity_factor)
    except Unreadable:
        return "mm", 1e-3
    return unit, float(scale)


def _reads_back(written: float, figure: float) -> bool:
    return abs(written - figure) <= READ_BACK_REL / 2 * abs(figure)


def _shortest(figure: float) -> str:
    """The figure with as few digits as read back."""
    roundings = (float(f"{figure:.{digits}e}") for digits in range(17))
    shortest = next((written for written in roundings if _reads_back(written, figure)), figure)
    return repr(shortest + 0.0).removesuffix(".0")


def _three_digits(value: float, unit: str) -> str:
    """A value in its unit or in thousands or thousandths of it."""
    if not math.isfinite(value):
        return _without_value(value)
    rounded = float(f"{value:.2e}")
    scales = ((1e3, f"k{unit}"), (1.0, unit), (1e-3, f"m{unit}"), (1e-6, f"µ{unit}"), (1e-9, f"n{unit}"))
    scale, scaled_unit = _scale(abs(rounded), scales) if rounded else (1.0, unit)
    figure = rounded / scale
    return f"{_rounded(figure, min(_places(figure), 3))} {scaled_unit}"


def _scale(size: float, scales: tuple[tuple[float, str], ...]) -> tuple[float, str]:
    """The largest scale that the size reaches, or the smallest."""
    return next((scale for scale in scales if size >= scale[0]), scales[-1])


def _inches(count: int, parts: int) -> str:
    """So many parts of an inch as whole inches and a reduced fraction."""
    whole, rest = divmod(abs(count), parts)
    figures = [str(whole)] if whole or not rest else []
    if rest:
        figures.append(str(Fraction(rest, parts)))
    return f"{'-' if count < 0 else ''}{' '.join(figures)} in"


def _fixed(value: float, decimals: int) -> str:
    """So many decimals, a true minus sign, and never a negative zero."""
    return f"{round(value, decimals) + 0.0:.{decimals}f}".replace("-", "−")


def _rounded(value: float, places: int) -> str:
    """Rounded to so many decimals, to tens and hundreds if negative, without closing zeros."""
    return _trimmed(_fixed(round(value, places), max(places, 0)))


def _places(value: float) -> int:
    """The decimal place of the third digit."""
    return 2 - math.floor(math.log10(abs(value))) if value else 0


def _trimmed(text: str) -> str:
    return text.rstrip("0").rstrip(".") if "." in text else text


def _without_value(value: float) -> str:
    if math.isnan(value):
        return "—"
    return "∞" if value > 0 else "−∞"
