"""The held answer's curves: pale, behind all that moves, with one word at their end; must not know what the axes mean.

They are part of what stands still: a figure that shows them costs no more while a length is turned.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.transforms import BboxBase

from app.look import Look, blend
from app.plots import ink
from app.plots.bundle import Bundle
from app.plots.canvas import DPI
from app.plots.letters import Letters
from feedlib.conventions import Array

PALE = 0.55
"""How much of a curve's colour is left when it is held."""
AWAY_PX = 4.0
CORNERS = ((-1, 1), (-1, -1), (1, 1), (1, -1))


class Held:
    """Pale curves, none to begin with."""

    def __init__(self, figure: Figure, axes: Axes) -> None:
        self._figure, self._axes = figure, axes
        self.bundle = Bundle(axes, moves=False)
        self.word = Letters(figure, "held", moves=False)
        self.word.set_visible(False)
        self._x = self._y = np.zeros((0, 0))

    def show(self, x: Array, y: Array, colours: Sequence[str], look: Look) -> None:
        """Run through these places: x (F,) or (N, F), y (N, F); colours : of the live curves."""
        self._x, self._y = np.broadcast_to(x, y.shape), y
        self.bundle.show(x, y, [(blend(look.paper, colour, PALE), ink.HELD_POINTS) for colour in colours])
        self.word.set_color(look.soft)

    def place_word(self, within: BboxBase, names: Sequence[BboxBase] = ()) -> None:
        """Put the word beside the end of the highest or the lowest curve, off all of them; nowhere without room.

        names : which it is kept off as well.
        """
        places = self._axes.transData.transform(np.column_stack([self._x.ravel(), self._y.ravel()]))
        scale, curves = self._figure.dpi / DPI, places.reshape(*self._x.shape, 2)
        off = np.concatenate([places, *(_strewn(name) for name in names)])
        self.word.set_visible(False)
        for end in _ends(curves, self._axes.bbox):
            if self.word.stand_beside(end, AWAY_PX * scale, CORNERS, within=within, off=off):
                self.word.set_visible(True)
                return


def _ends(places: Array, box: BboxBase) -> list[tuple[float, float]]:
    """Where curves (of N, F, 2) end in a box: the one that does so highest, the one that does so lowest; else begin."""
    inside = np.all((places >= box.min) & (places <= box.max), axis=-1)
    found = []
    for which in (-1, 0):
        ends = [tuple(curve[seen][which]) for curve, seen in zip(places, inside, strict=True) if seen.any()]
        ends.sort(key=lambda end: end[1])
        found += [*ends[-1:], *ends[:1]]
    return found


def _strewn(box: BboxBase) -> Array:
    """(P, 2) places all over a box, so near to each other that no word fits between."""
    across, up = (np.linspace(low, high, 9) for low, high in zip(box.min, box.max, strict=True))
    return np.stack(np.meshgrid(across, up), axis=-1).reshape(-1, 2)
