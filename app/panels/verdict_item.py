"""One verdict of the strip: how it is drawn, and what a hand can do to it. Judges nothing and changes no plan."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QRectF, QSize, Qt, Signal
from PySide6.QtGui import QColor, QContextMenuEvent, QFontMetrics, QKeyEvent, QMouseEvent, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QAbstractButton, QMenu, QSizePolicy

from app.look import SIGNS, Look, Verdict, font
from app.panels.style import readable, tooltip
from app.store import Store

HEIGHT = 48
_BAR, _GAP, _PAD = 4, 10, 6


@dataclass(frozen=True, slots=True)
class Shown:
    """What one item says. wants : empty without a limit; about : the limit's name in the plan, or None."""

    name: str
    state: Verdict
    figure: str
    wants: str
    spoken: str
    about: str | None = None
    frequency_hz: float | None = None


class VerdictItem(QAbstractButton):
    """One verdict: a bar, its name and sign, its figure and what is wanted. `limit_asked`: to have its limit set."""

    limit_asked = Signal()

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self.look, self._store = look, store
        self.shown = Shown("", "unknown", "", "", "")
        self.menu = QMenu(self)
        self.menu.addAction("Set the limit…").triggered.connect(self.limit_asked)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Expanding)

    def show_verdict(self, shown: Shown) -> None:
        """Show a verdict."""
        if shown == self.shown:
            return
        wider = (len(shown.figure), shown.wants, shown.name) != (
            len(self.shown.figure),
            self.shown.wants,
            self.shown.name,
        )
        self.shown = shown
        self.setAccessibleName(shown.spoken)
        self.setToolTip(tooltip(f"{shown.spoken}\nDouble-click or F2: set the limit" if shown.about else shown.spoken))
        if wider:
            self.updateGeometry()
        self.update()

    def sizeHint(self) -> QSize:
        wants = QFontMetrics(font("small")).horizontalAdvance(self._wants_texts()[0])
        return QSize(self._least_width() + wants + _PAD, HEIGHT)

    def minimumSizeHint(self) -> QSize:
        return QSize(self._least_width(), HEIGHT)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        enter = event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter)
        alone = not event.modifiers() & ~Qt.KeyboardModifier.KeypadModifier
        if event.key() == Qt.Key.Key_F2 or (enter and not alone):
            self.limit_asked.emit()
        elif enter:
            self.click()
        else:
            super().keyPressEvent(event)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self.limit_asked.emit()

    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        if self.shown.about is not None:
            self.menu.popup(event.globalPos())

    def paintEvent(self, event: QPaintEvent) -> None:
        look, shown, stale = self.look, self.shown, self._store.stale
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        box = self.rect().adjusted(2, 3, -3, -4)
        if self.hasFocus():
            painter.setPen(QPen(QColor(look.ink), 1))
            painter.drawRoundedRect(QRectF(box).adjusted(0.5, 0.5, -0.5, -0.5), 4, 4)
        elif self.underMouse():
            painter.setPen(Qt.PenStyle.NoPen)
            painter.setBrush(QColor(look.band_wash))
            painter.drawRoundedRect(QRectF(box), 4, 4)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(QColor(look.soft if stale else look.verdict(shown.state)))
        painter.drawRoundedRect(QRectF(box.left() + _PAD, box.top() + 4, _BAR, box.height() - 8), 2, 2)
        left = box.left() + _PAD + _BAR + _GAP
        room = box.right() - _PAD - left
        upper, lower = box.top() + 15, box.bottom() - 6

        small = QFontMetrics(font("small"))
        painter.setFont(font("small"))
        painter.setPen(QColor(look.soft))
        painter.drawText(left, upper, shown.name)
        painter.setFont(font("text", bold=True))
        colour, sign = (look.soft, "…") if stale else (look.verdict(shown.state), SIGNS[shown.state])
        painter.setPen(QColor(readable(look, colour, look.paper)))
        painter.drawText(left + small.horizontalAdvance(shown.name) + 8, upper, sign)

        painter.setFont(font("head", bold=True))
        painter.setPen(QColor(look.soft if stale else look.ink))
        painter.drawText(left, lower, shown.figure)
        taken = QFontMetrics(font("head", bold=True)).horizontalAdvance(shown.figure) + 8 if shown.figure else 0
        painter.setFont(font("small"))
        painter.setPen(QColor(look.soft if shown.figure else look.ink))
        texts = self._wants_texts()
        text = next((t for t in texts if small.horizontalAdvance(t) <= room - taken), texts[-1])
        painter.drawText(left + taken, lower, small.elidedText(text, Qt.TextElideMode.ElideRight, room - taken))

    def _wants_texts(self) -> tuple[str, ...]:
        """What is wanted, from the longest way to say it to the shortest."""
        shown = self.shown
        if not shown.figure:
            return (shown.wants,)
        return (f"wants {shown.wants}", shown.wants) if shown.wants else ("no limit",)

    def _least_width(self) -> int:
        small = QFontMetrics(font("small"))
        upper = small.horizontalAdvance(self.shown.name) + 8 + 14
        lower = QFontMetrics(font("head", bold=True)).horizontalAdvance(self.shown.figure) + 8
        if self.shown.figure:
            lower += small.horizontalAdvance(self._wants_texts()[-1])
        return max(upper, lower) + 5 + 2 * _PAD + _BAR + _GAP
