"""Curves drawn as few lines through no more places than they need; must not know what the axes mean."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.lines import Line2D

from feedlib.conventions import Array, Index

Stroke = tuple[str, float]
"""A curve's colour and width (points)."""
MANY = 10_000
"""With more places than that, those that make no difference are left out."""
FINE = 1e-4
"""A place that is off the straight line by less than this share of what is shown makes none: a tenth of a pixel."""


class Bundle:
    """Curves of which those with the same stroke are one line with gaps.

    A line costs matplotlib more than its places do. moves : drawn with what moves; else with what stands still.
    """

    def __init__(self, axes: Axes, *, moves: bool = True) -> None:
        self._axes, self._moves = axes, moves
        self.lines: list[Line2D] = []

    def show(self, x: Array, y: Array, strokes: Sequence[Stroke]) -> None:
        """Run through these places, the widest strokes last: x (F,) or (N, F), y (N, F); a single place is a dot."""
        if y.size > MANY:
            shown = (x, self._axes.get_xlim()), (y, self._axes.get_ylim())
            fine = [FINE * np.minimum(np.ptp(values), np.ptp(ends)) for values, ends in shown]
            kept = needed(x, y, fine)
            x, y = x[..., kept], y[:, kept]
        alike: dict[Stroke, list[int]] = {}
        for number, stroke in enumerate(strokes):
            alike.setdefault(stroke, []).append(number)
        while len(self.lines) < len(alike):
            self.lines.append(self._axes.add_line(Line2D([], [], animated=self._moves)))
        for line in self.lines[len(alike) :]:
            line.set_visible(False)
        for line, stroke in zip(self.lines, sorted(alike, key=lambda stroke: stroke[1]), strict=False):
            of_each = y[alike[stroke]]
            line.set_data(_with_gaps(x if x.ndim == 1 else x[alike[stroke]], of_each), _with_gaps(of_each, of_each))
            line.set_marker("o" if y.shape[1] == 1 else "")
            line.set_color(stroke[0])
            line.set_linewidth(stroke[1])
            line.set_visible(True)


def needed(x: Array, y: Array, fine: Sequence[float]) -> Index:
    """The places through which the curves run as they do through all: x (F,) or (N, F), y (N, F).

    Every second one is left out as long as none of those is off the line between its neighbours by more than `fine`,
    in x and in y. Where a curve has a gap all stay.
    """
    kept: Index = np.arange(y.shape[1])
    last: list[Any] = []
    while kept.size > 3:
        if kept.size % 2 == 0:
            last.insert(0, kept[-1])
            kept, x, y = kept[:-1], x[..., :-1], y[:, :-1]
        if not all(_is_straight(values, within) for values, within in zip((x, y), fine, strict=True)):
            break
        kept, x, y = kept[::2], x[..., ::2], y[:, ::2]
    return np.append(kept, last).astype(kept.dtype)


def _is_straight(values: Array, within: float) -> bool:
    """Whether every second place (of an odd number) lies between its neighbours."""
    ends, between = values[..., ::2], values[..., 1::2]
    return bool(np.all(np.abs(between - (ends[..., :-1] + ends[..., 1:]) / 2) <= within))


def _with_gaps(values: Array, like: Array) -> Array:
    """(N * (F + 1),) values (F,) or (N, F) for each row of `like` (N, F), each followed by nan."""
    rows = np.full((like.shape[0], like.shape[1] + 1), np.nan)
    rows[:, :-1] = values
    return rows.ravel()
