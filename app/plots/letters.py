"""Text on a plot, drawn by Qt: letters for every script that the system has, as in the rest of the window.

Must not know what it says. It also takes a tenth of the time of matplotlib's own text.
"""

from __future__ import annotations

import math
from collections.abc import Iterable

import numpy as np
from matplotlib.artist import Artist
from matplotlib.backend_bases import RendererBase
from matplotlib.figure import Figure
from matplotlib.transforms import Bbox, BboxBase
from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QImage, QPainter, QPen

from app.look import SIZES, font
from app.plots.canvas import DPI, Pixel
from feedlib.conventions import Array

EDGE_PX, CARD_PX, CORNER_PX = 8, 4.0, 3.0
"""Room around the text for what sticks out of its box (a letter, its card), how far the card does, its corners."""


Corner = tuple[int, int]
"""A side of a place: -1 left, 1 right; and -1 under it, 1 over it."""


class Letters(Artist):
    """A text of one line or more, placed in device pixels, on a card if it has one.

    moves : drawn with what moves; else with what stands still.
    """

    zorder = 3.0  # over axes and lines, as matplotlib has its own text

    def __init__(self, figure: Figure, text: str = "", *, moves: bool = True) -> None:
        super().__init__()
        self._on, self._text, self._colour = figure, text, "#000000"
        self._at = self._anchor = 0.0, 0.0
        self._card: tuple[str, str] | None = None
        self.set_animated(moves)
        figure.add_artist(self)

    def get_text(self) -> str:
        """What it says."""
        return self._text

    def set_text(self, text: str) -> None:
        """Say that."""
        self._text = text

    def get_color(self) -> str:
        """The colour of the letters."""
        return self._colour

    def set_color(self, colour: str) -> None:
        """Have letters of that colour."""
        self._colour = colour

    def set_card(self, face: str, edge: str) -> None:
        """Stand on a card of these colours."""
        self._card = face, edge

    def get_position(self) -> tuple[float, float]:
        """Where its anchor is."""
        return self._at

    def set_position(self, at: tuple[float, float]) -> None:
        """Place its anchor there."""
        self._at = at

    def set_anchor(self, across: float, up: float) -> None:
        """Which place of the text is put where it shall stand: 0, 0 its lower left corner, 1, 1 its upper right one."""
        self._anchor = across, up

    def stand_beside(self, at: Pixel, away: float, corners: Iterable[Corner], *, within: BboxBase, off: Array) -> bool:
        """Whether one of these corners of a place has room for it; there it stands then, else at the last of them.

        away : how far from the place, sideways; half as far up or down. within : the room. off : (P, 2) what it must
        not cover.
        """
        for side, level in corners:
            self.set_anchor(float(side < 0), float(level < 0))
            self.set_position((at[0] + side * away, at[1] + level * away / 2))
            box = self.get_window_extent()
            inside = np.all(box.min >= within.min) and np.all(box.max <= within.max)
            if inside and not np.all((off > box.min) & (off < box.max), axis=-1).any():
                return True
        return False

    def get_window_extent(self, renderer: RendererBase | None = None) -> Bbox:
        """The box of the text without its card."""
        size = QFontMetricsF(self._font()).size(0, self._text)
        (x, y), (across, up) = self._at, self._anchor
        return Bbox.from_bounds(x - across * size.width(), y - up * size.height(), size.width(), size.height())

    def draw(self, renderer: RendererBase) -> None:
        """Have Qt draw the text, and put it into the picture."""
        if not self._text or not self.get_visible():
            return
        box, edge = self.get_window_extent(), math.ceil(EDGE_PX * self._scale)
        width, height = math.ceil(box.width), math.ceil(box.height)
        size = QRectF(edge, edge, width, height)
        image = QImage(width + 2 * edge, height + 2 * edge, QImage.Format.Format_RGBA8888)
        image.fill(Qt.GlobalColor.transparent)
        painter = QPainter(image)
        self._paint_card(painter, size)
        painter.setFont(self._font())
        painter.setPen(QColor(self._colour))
        painter.drawText(size, Qt.TextFlag.TextDontClip | Qt.TextFlag.TextForceLeftToRight, self._text)
        painter.end()
        pixels = np.frombuffer(image.constBits(), np.uint8).reshape(image.height(), image.width(), 4)
        renderer.draw_image(renderer.new_gc(), round(box.x0) - edge, round(box.y0) - edge, pixels[::-1])

    @property
    def _scale(self) -> float:
        """Device pixels in a screen pixel at 100 %."""
        return self._on.dpi / DPI

    def _font(self) -> QFont:
        made = font("small")
        made.setPixelSize(round(SIZES["small"] * self._scale))
        made.setStyleStrategy(QFont.StyleStrategy.NoSubpixelAntialias)  # a coloured fringe would need the ground
        return made

    def _paint_card(self, painter: QPainter, text: QRectF) -> None:
        if self._card is None:
            return
        face, edge = self._card
        away, corner = CARD_PX * self._scale, CORNER_PX * self._scale
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setBrush(QColor(face))
        painter.setPen(QPen(QColor(edge), self._scale))
        painter.drawRoundedRect(text.adjusted(-away, -away, away, away), corner, corner)
