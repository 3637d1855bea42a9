"""Round numbers for axes: steps, ranges that do not twitch, ticks and their texts; must not know matplotlib or Qt."""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np

from feedlib.conventions import Array

SHRINK_BELOW = 0.75
"""A settled axis gives room back when what is wanted is less than this share of it."""


LETTER_PX, TICK_PX = 7.6, 40.0
"""Width of a figure in a tick's text, and the least distance of ticks, in pixels at 100 %."""


class Range(NamedTuple):
    """The ends of an axis."""

    low: float
    high: float

    @property
    def span(self) -> float:
        """How far it reaches."""
        return self.high - self.low


def nice_step(span: float, most: int) -> float:
    """The smallest of 1, 2, 5 times a power of ten that cuts a span (more than 0) into at most so many steps."""
    decade = 10.0 ** math.floor(math.log10(span / most))
    return next(digit * decade for digit in (1, 2, 5, 10) if span <= most * digit * decade * (1 + 1e-9))


def nice_range(wanted: Range, base: float = 0.0) -> Range:
    """The range rounded outwards to whole steps from `base`."""
    step = nice_step(wanted.span, 8)
    low, high = math.floor((wanted.low - base) / step + 1e-9), math.ceil((wanted.high - base) / step - 1e-9)
    return Range(base + low * step, base + high * step)


def followed(present: Range | None, wanted: Range, *, base: float = 0.0, settled: bool) -> Range:
    """The range of an axis: the present one until something leaves it, or until it is far too wide once settled."""
    if present is None or wanted.low < present.low or wanted.high > present.high:
        return nice_range(wanted, base)
    nice = nice_range(wanted, base)
    return nice if settled and nice.span < SHRINK_BELOW * present.span else present


def ticks(shown: Range, most: int) -> tuple[Array, list[str]]:
    """Places and texts of round numbers in a range, at most so many steps apart."""
    step = nice_step(shown.span, most)
    first, last = math.ceil(shown.low / step - 1e-9), math.floor(shown.high / step + 1e-9)
    places = np.arange(first, last + 1, dtype=np.float64) * step
    return places, [_text(place, step) for place in places]


def frequency_ticks(shown_hz: Range, room_px: float) -> tuple[Array, list[str]]:
    """Places (Hz) and texts of as many round frequencies as have room, the last text with the unit."""
    most = max(1, int(room_px / TICK_PX))
    places_hz, texts = _frequency_ticks(shown_hz, most)
    while most > 1 and len(texts) > 1:
        apart_px = room_px * (places_hz[1] - places_hz[0]) / shown_hz.span
        if apart_px > LETTER_PX * (len(texts[-1]) + len(texts[-2])) / 2 + LETTER_PX:
            break
        most -= 1
        places_hz, texts = _frequency_ticks(shown_hz, most)
    return places_hz, texts


def pointed_hz(frequency_hz: float, pixel_hz: float, swept_hz: Range) -> float:
    """The round frequency nearest to where someone points, no finer than a pixel and inside what is swept."""
    step_hz = 10.0 ** math.floor(math.log10(pixel_hz))
    return min(max(round(frequency_hz / step_hz) * step_hz, swept_hz.low), swept_hz.high)


def _frequency_ticks(shown_hz: Range, most: int) -> tuple[Array, list[str]]:
    unit_hz, unit = _frequency_unit(shown_hz, nice_step(shown_hz.span, most))
    places, texts = ticks(Range(shown_hz.low / unit_hz, shown_hz.high / unit_hz), most)
    return places * unit_hz, [*texts[:-1], *(f"{text} {unit}" for text in texts[-1:])]


def _frequency_unit(shown_hz: Range, step_hz: float) -> tuple[float, str]:
    """GHz where no more than two decimals are needed, else MHz; kHz for what is below 1 MHz."""
    if shown_hz.low >= 1e9 and step_hz >= 0.99e7:
        return 1e9, "GHz"
    return (1e6, "MHz") if shown_hz.high >= 1e6 else (1e3, "kHz")


def _text(figure: float, step: float) -> str:
    decimals = max(0, -math.floor(math.log10(step) + 1e-9))
    return f"{round(figure, decimals) + 0.0:.{decimals}f}".replace("-", "−")
