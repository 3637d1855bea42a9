# mypy: disable-error-code="no-untyped-call"
# The Qt surfaces of matplotlib carry no types.
"""The surface of a plot: drawn only in paint events, whole when what stands still has changed, else only what moves.

Must not know what is drawn. A hidden surface gets no paint events, so a hidden plot costs nothing; several changes in
one turn of the event loop make one picture.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any, Protocol

from matplotlib.artist import Artist
from matplotlib.backends.backend_qtagg import FigureCanvasQTAgg
from matplotlib.figure import Figure
from PySide6.QtCore import QEvent, Qt
from PySide6.QtGui import QMouseEvent, QPaintEvent, QResizeEvent, QWheelEvent

DPI = 100.0
POINTS_PER_PX = 72.0 / DPI
"""At 100 %; on finer screens matplotlib scales points itself."""


Pixel = tuple[float, float]
"""A place in device pixels, y upwards, as matplotlib counts them."""


class Drawing(Protocol):
    """What a surface asks of its plot."""

    def prepare(self) -> bool:
        """Bring the artists up to date; whether what stands still has changed."""

    def arrange(self, width_px: float, height_px: float) -> None:
        """Place the axes for a size in screen pixels at 100 %."""

    def moving(self) -> Iterable[Artist]:
        """The animated artists, in the order in which they are drawn."""

    def pressed(self, at: Pixel) -> None:
        """The left button went down."""

    def moved(self, at: Pixel) -> None:
        """The pointer is at another place; with the button down even outside the surface."""

    def released(self) -> None:
        """The left button went up."""

    def left(self) -> None:
        """The pointer is gone."""


class Canvas(FigureCanvasQTAgg):
    """A matplotlib figure as a widget.

    redraw() asks for the whole figure, refresh() only for the artists that move, before the background as it is.
    Pointer events go straight to the drawing: matplotlib's own way swallows what is raised on it.
    """

    def __init__(self, drawing: Drawing) -> None:
        self._drawing = drawing
        self._whole = self._moved = True
        self.background: Any = None
        super().__init__(Figure(dpi=DPI))

    @property
    def scale(self) -> float:
        """Device pixels in a screen pixel at 100 %."""
        return float(self.device_pixel_ratio)

    def redraw(self) -> None:
        """Ask for the whole figure to be drawn."""
        self._whole = True
        self.update()

    def refresh(self) -> None:
        """Ask for what moves to be drawn."""
        self._moved = True
        self.update()

    def draw_idle(self) -> None:
        """What matplotlib itself calls, after a change of size or of screen."""
        self.redraw()

    def resizeEvent(self, event: QResizeEvent) -> None:
        if event.size().width() > 0 and event.size().height() > 0:
            super().resizeEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        self._whole |= self._drawing.prepare()
        if self._whole:
            self._drawing.arrange(self.width(), self.height())
            self.renderer = self.get_renderer()
            self.renderer.clear()
            self.figure.draw(self.renderer)
            self.background = self.copy_from_bbox(self.figure.bbox)
        elif self._moved:
            self.restore_region(self.background)
        if self._whole or self._moved:
            for artist in self._drawing.moving():
                self.figure.draw_artist(artist)
        self._whole = self._moved = False
        super().paintEvent(event)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self._drawing.pressed(self._pixel(event))

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        self.mousePressEvent(event)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        self._drawing.moved(self._pixel(event))

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self._drawing.released()

    def leaveEvent(self, event: QEvent) -> None:
        self._drawing.left()

    def wheelEvent(self, event: QWheelEvent) -> None:
        event.ignore()

    def _pixel(self, event: QMouseEvent) -> Pixel:
        at = event.position()
        return at.x() * self.scale, (self.height() - at.y()) * self.scale
