"""The parts drawer: a pictured column of what can be put on the bench. Knows no plan; says what was asked for."""

from __future__ import annotations

from PySide6.QtCore import QMimeData, QPoint, QRectF, QSize, Qt, Signal
from PySide6.QtGui import (
    QColor,
    QDrag,
    QFontMetrics,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QPen,
    QPixmap,
)
from PySide6.QtWidgets import QApplication, QFrame, QPushButton, QScrollArea, QVBoxLayout, QWidget

from app.editing.drags import PART_MIME
from app.look import Look, font
from app.panels import part_pictures
from app.panels.drawer_entries import MEASURED, entries
from app.panels.style import dress

WIDTH, FOLDED_WIDTH = 88, 24
LINE = 14


class PartsDrawer(QWidget):
    """The drawer. `asked`(key) on Enter or a double click; `file_asked`() for the part that is made of a file."""

    asked = Signal(str)
    file_asked = Signal()

    def __init__(self, look: Look) -> None:
        super().__init__()
        self.setProperty("role", "card")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.fold = QPushButton()
        self.fold.setProperty("role", "icon")
        self.fold.clicked.connect(self._fold)
        words = {key: entry.label for key, entry in entries().items()} | {MEASURED: "measured part"}
        self.things = {key: DrawerThing(key, label, look) for key, label in words.items()}
        column = QWidget()
        column.setProperty("role", "card")
        things = QVBoxLayout(column)
        things.setContentsMargins(2, 2, 2, 2)
        things.setSpacing(0)
        for thing in self.things.values():
            thing.asked.connect(self._asked)
            things.addWidget(thing)
        things.addStretch(1)
        self._column = QScrollArea()
        self._column.setWidget(column)
        self._column.setWidgetResizable(True)
        self._column.setFrameShape(QFrame.Shape.NoFrame)
        self._column.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self._column.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 2, 0, 0)
        layout.setSpacing(0)
        layout.addWidget(self.fold, 0, Qt.AlignmentFlag.AlignRight)
        layout.addWidget(self._column, 1)
        layout.addStretch(0)
        self._show_folded(False)
        self.set_look(look)

    def set_look(self, look: Look) -> None:
        """Draw with another look."""
        dress(self, look)
        for thing in self.things.values():
            thing.look = look
            thing.update()

    @property
    def folded(self) -> bool:
        """Whether only the fold button is left."""
        return self._column.isHidden()

    def _fold(self) -> None:
        self._show_folded(not self.folded)

    def _show_folded(self, folded: bool) -> None:
        self._column.setHidden(folded)
        self.setFixedWidth(FOLDED_WIDTH if folded else WIDTH)
        self.fold.setText("›" if folded else "‹")
        self.fold.setAccessibleName("Show the parts drawer" if folded else "Fold the parts drawer away")

    def _asked(self, key: str) -> None:
        if key == MEASURED:
            self.file_asked.emit()
        else:
            self.asked.emit(key)


class DrawerThing(QWidget):
    """One entry: its picture and its name; it can be dragged."""

    asked = Signal(str)

    def __init__(self, key: str, label: str, look: Look) -> None:
        super().__init__()
        self.key, self.label, self.look = key, label, look
        self._pressed_at: QPoint | None = None
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.OpenHandCursor)
        self.setAccessibleName(label)
        self.setAccessibleDescription("Enter puts it on the bench")
        self.setAttribute(Qt.WidgetAttribute.WA_Hover)
        fits = QFontMetrics(font("small")).horizontalAdvance(label) <= WIDTH - 16
        self._words = [label] if fits else label.rsplit(" ", 1)
        self.setFixedHeight(part_pictures.HEIGHT + 6 + LINE * len(self._words))

    def sizeHint(self) -> QSize:
        return QSize(WIDTH - 12, self.height())

    def mime(self) -> QMimeData:
        """What a drag of it carries."""
        data = QMimeData()
        data.setData(PART_MIME, self.key.encode())
        return data

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self._pressed_at = event.position().toPoint()

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        if self._pressed_at is None:
            return
        moved = event.position().toPoint() - self._pressed_at
        if moved.manhattanLength() >= QApplication.startDragDistance():
            self._pressed_at = None
            self._drag()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        self._pressed_at = None

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self.asked.emit(self.key)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.asked.emit(self.key)
        elif event.key() == Qt.Key.Key_Down:
            self.focusNextChild()
        elif event.key() == Qt.Key.Key_Up:
            self.focusPreviousChild()
        else:
            super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        box = QRectF(self.rect()).adjusted(1.5, 1.5, -1.5, -1.5)
        if self.hasFocus():
            painter.setPen(QPen(QColor(self.look.ink), 1))
            painter.drawRoundedRect(box, 4, 4)
        elif self.underMouse():
            painter.setPen(Qt.PenStyle.NoPen)
            painter.setBrush(QColor(self.look.band_wash))
            painter.drawRoundedRect(box, 4, 4)
        painter.save()
        painter.translate((self.width() - part_pictures.WIDTH) / 2, 3)
        part_pictures.draw(self.key, painter, self.look)
        painter.restore()
        painter.setFont(font("small"))
        painter.setPen(QColor(self.look.soft))
        metrics = QFontMetrics(font("small"))
        for number, words in enumerate(self._words):
            x = (self.width() - metrics.horizontalAdvance(words)) // 2
            painter.drawText(x, part_pictures.HEIGHT + LINE * (number + 1), words)

    def _drag(self) -> None:
        drag = QDrag(self)
        drag.setMimeData(self.mime())
        ratio = self.devicePixelRatioF()
        picture = QPixmap(round(part_pictures.WIDTH * ratio), round(part_pictures.HEIGHT * ratio))
        picture.setDevicePixelRatio(ratio)
        picture.fill(Qt.GlobalColor.transparent)
        painter = QPainter(picture)
        part_pictures.draw(self.key, painter, self.look)
        painter.end()
        drag.setPixmap(picture)
        drag.setHotSpot(QPoint(part_pictures.WIDTH // 2, part_pictures.HEIGHT // 2))
        drag.exec(Qt.DropAction.CopyAction)
