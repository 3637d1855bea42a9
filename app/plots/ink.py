"""Text and strokes as all plots have them: sizes in pixels at 100 %."""

from __future__ import annotations

from unicodedata import bidirectional

from matplotlib.font_manager import fontManager
from PySide6.QtGui import QFontInfo

from app.editing.edits import plain_text
from app.look import SIZES, font
from app.plots.canvas import POINTS_PER_PX

TEXT_POINTS = SIZES["small"] * POINTS_PER_PX
LINE_POINTS = 1.8 * POINTS_PER_PX
HELD_POINTS = 1.2 * POINTS_PER_PX
STANDS_OUT_POINTS = 3.4 * POINTS_PER_PX
THIN_POINTS = 0.8 * POINTS_PER_PX
MARK_POINTS = 1.2 * POINTS_PER_PX
DOT_POINTS = 7.0 * POINTS_PER_PX
LONGEST_NAME = 12
FIRST_STRONG_ISOLATE, POP_ISOLATE = "\u2068", "\u2069"
"""Signs without a shape around a text whose direction shall not turn the figures beside it."""


def families() -> list[str]:
    """Fonts for the figures along the axes: the window's own where matplotlib knows it, then its own."""
    family = QFontInfo(font("small")).family()
    return [*([family] if family in fontManager.get_font_names() else []), "DejaVu Sans"]


def short_name(name: str) -> str:
    """A part's name, short enough for the end of a curve; set apart where it runs from right to left."""
    name = plain_text(name)
    if len(name) > LONGEST_NAME:
        name = name[: LONGEST_NAME - 1].rstrip() + "…"
    leftwards = any(bidirectional(letter) in ("R", "AL") for letter in name)
    return f"{FIRST_STRONG_ISOLATE}{name}{POP_ISOLATE}" if leftwards else name
