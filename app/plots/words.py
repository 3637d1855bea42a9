"""Buttons without chrome: rows of plain words of which one or more are chosen, and the corners that take a row."""

from __future__ import annotations

from collections.abc import Collection, Sequence

from PySide6.QtCore import QPointF, QRectF, QSize, Qt, Signal
from PySide6.QtGui import QPainter, QPaintEvent, QPalette, QPen, QPolygonF
from PySide6.QtWidgets import QAbstractButton, QHBoxLayout, QWidget

from app.look import font


class Quiet(QAbstractButton):
    """A button that is only ink: soft, full under the pointer or when checked, framed when it has the keyboard."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.setText(text)
        self.setAttribute(Qt.WidgetAttribute.WA_Hover)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setFocusPolicy(Qt.FocusPolicy.TabFocus)

    def pen(self) -> QPen:
        """The ink for the button's present state."""
        plain = self.isChecked() or self.underMouse()
        role = QPalette.ColorRole.WindowText if plain else QPalette.ColorRole.PlaceholderText
        return QPen(self.palette().color(role), 1.5)

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(self.pen())
        self.draw(painter)
        if self.hasFocus():
            painter.setPen(QPen(self.palette().color(QPalette.ColorRole.Highlight), 1))
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(0.5, 0.5, -0.5, -0.5), 3, 3)

    def draw(self, painter: QPainter) -> None:
        """Draw what the button shows, in the pen that is set."""
        raise NotImplementedError


class Word(Quiet):
    """One word; underlined when chosen, so that colour does not say it alone."""

    def __init__(self, text: str) -> None:
        super().__init__(text)
        self.setCheckable(True)
        self.setFont(font("small"))

    def sizeHint(self) -> QSize:
        metrics = self.fontMetrics()
        return QSize(metrics.horizontalAdvance(self.text()) + 8, metrics.height() + 6)

    def draw(self, painter: QPainter) -> None:
        painter.drawText(self.rect(), Qt.AlignmentFlag.AlignCenter, self.text())
        if self.isChecked():
            bottom = self.height() - 2
            painter.drawLine(QPointF(4, bottom), QPointF(self.width() - 4, bottom))


class Corners(Quiet):
    """Two corners that point outwards, or inwards when checked: take the room, give it back."""

    def __init__(self, take: str, give: str) -> None:
        super().__init__(take)
        self._texts = take, give
        self.setCheckable(True)
        self.setToolTip(take)
        self.toggled.connect(self._say)

    def sizeHint(self) -> QSize:
        return QSize(22, 22)

    def _say(self, taken: bool) -> None:
        self.setText(self._texts[taken])
        self.setToolTip(self._texts[taken])

    def draw(self, painter: QPainter) -> None:
        centre = QRectF(self.rect()).center()
        inner, outer = 2.0, 6.0
        tip, foot = (inner, outer) if self.isChecked() else (outer, inner)
        for sign in (-1, 1):
            corner = QPointF(sign * tip, -sign * tip)
            legs = QPointF(sign * foot, -sign * tip), QPointF(sign * tip, -sign * foot)
            painter.drawPolyline(QPolygonF([centre + legs[0], centre + corner, centre + legs[1]]))


class Words(QWidget):
    """A row of plain words; `chosen` tells which was clicked, `show_chosen` which are underlined."""

    chosen = Signal(str)

    def __init__(self, words: Sequence[str], *, spacing: int = 2) -> None:
        super().__init__()
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(spacing)
        self.buttons = {word: Word(word) for word in words}
        self._chosen: Collection[str] = ()
        for button in self.buttons.values():
            button.clicked.connect(self._clicked)
            row.addWidget(button)

    def show_chosen(self, words: Collection[str]) -> None:
        """Underline these words."""
        self._chosen = words
        for word, button in self.buttons.items():
            button.setChecked(word in words)

    def _clicked(self) -> None:
        button = self.sender()
        assert isinstance(button, Word)
        self.show_chosen(self._chosen)  # the owner says what a click leads to
        self.chosen.emit(button.text())
