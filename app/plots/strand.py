"""The artists of one curve; must not know what the axes mean."""

from __future__ import annotations

from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D

from app.look import Look, blend
from app.plots import ink
from feedlib.conventions import Array

LETTER_INK = 0.25
"""Share of ink in coloured letters: contrast above 4.5 on paper for every curve's colour."""


class Strand:
    """A line, its dot at the mark with a note beside it, and its name."""

    def __init__(self, figure: Figure, axes: Axes) -> None:
        self.line, self.dot = (axes.add_line(Line2D([], [], animated=True)) for _ in range(2))
        self.dot.set(marker="o", markersize=ink.DOT_POINTS)
        self.name, self.note = ink.free_text(figure), ink.free_text(figure)
        self.name.set(va="center_baseline")
        self._worn: tuple[str, Look, bool] | None = None

    def show(self, x: Array, y: Array, at_mark: tuple[float, float]) -> None:
        """Run through these places; a single one is a dot as well."""
        self.line.set_data(x, y)
        self.line.set_marker("o" if x.size == 1 else "")
        self.dot.set_data([at_mark[0]], [at_mark[1]])

    def say(self, name: str, note: str) -> None:
        """Carry these words."""
        self.name.set_text(name)
        self.note.set_text(note)

    def wear(self, colour: str, look: Look, *, stands_out: bool) -> None:
        """Have that colour, letters nearer to the ink so that they can be read; a wider line where it stands out."""
        if (colour, look, stands_out) == self._worn:
            return
        self._worn = colour, look, stands_out
        for artist in (self.line, self.dot):
            artist.set_color(colour)
        for text in (self.name, self.note):
            text.set_color(blend(colour, look.ink, LETTER_INK))
        self.line.set_linewidth(ink.STANDS_OUT_POINTS if stands_out else ink.LINE_POINTS)
