"""What a curve carries: its dot at the mark with a note beside it, and its name; must not know what the axes mean."""

from __future__ import annotations

from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D

from app.look import Look, blend
from app.plots import ink
from app.plots.letters import Letters

LETTER_INK = 0.25
"""Share of ink in coloured letters: contrast above 4.5 on paper for every curve's colour."""


class Tag:
    """A dot, a note and a name in the colour of a curve."""

    def __init__(self, figure: Figure, axes: Axes) -> None:
        self.dot = axes.add_line(Line2D([], [], linestyle="none", marker="o", markersize=ink.DOT_POINTS, animated=True))
        self.name, self.note = Letters(figure), Letters(figure)
        self.name.set_anchor(0.0, 0.5)

    def show(self, at_mark: tuple[float, float], name: str, note: str = "") -> None:
        """Put the dot there and carry these words."""
        self.dot.set_data([at_mark[0]], [at_mark[1]])
        self.name.set_text(name)
        self.note.set_text(note)

    def wear(self, colour: str, look: Look) -> None:
        """Have that colour, letters nearer to the ink so that they can be read."""
        self.dot.set_color(colour)
        for text in (self.name, self.note):
            text.set_color(blend(colour, look.ink, LETTER_INK))
