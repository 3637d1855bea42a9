"""Text and strokes as all plots have them: sizes in pixels at 100 %, no markup read into people's names."""

from __future__ import annotations

from matplotlib.figure import Figure
from matplotlib.text import Text
from matplotlib.transforms import IdentityTransform

from app.editing.edits import plain_text
from app.look import SIZES
from app.plots.canvas import POINTS_PER_PX

TEXT_POINTS = SIZES["small"] * POINTS_PER_PX
LINE_POINTS = 1.8 * POINTS_PER_PX
STANDS_OUT_POINTS = 3.4 * POINTS_PER_PX
THIN_POINTS = 0.8 * POINTS_PER_PX
MARK_POINTS = 1.2 * POINTS_PER_PX
DOT_POINTS = 7.0 * POINTS_PER_PX
LONGEST_NAME = 12


def free_text(figure: Figure, text: str = "") -> Text:
    """A text that moves, placed in device pixels."""
    return figure.text(0, 0, text, fontsize=TEXT_POINTS, transform=IdentityTransform(), animated=True, parse_math=False)


def short_name(name: str) -> str:
    """A part's name, short enough for the end of a curve."""
    name = plain_text(name)
    return name if len(name) <= LONGEST_NAME else name[: LONGEST_NAME - 1].rstrip() + "…"
