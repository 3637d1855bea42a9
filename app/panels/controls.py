"""Controls that report what a person has finished writing or choosing. Know no values and no plan."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QPointF, Qt, Signal
from PySide6.QtGui import (
    QFocusEvent,
    QKeyEvent,
    QKeySequence,
    QPainter,
    QPaintEvent,
    QPalette,
    QPen,
    QResizeEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QAbstractButton, QComboBox, QLineEdit, QPlainTextEdit, QStyledItemDelegate, QWidget

from app.panels.style import plain_label, set_text


class LineField(QLineEdit):
    """A line of text: `typed` once on Enter or when the focus leaves, `restored` on Esc."""

    typed = Signal(str)
    restored = Signal()

    def __init__(self, name: str) -> None:
        super().__init__()
        self.setAccessibleName(name)
        self._note = plain_label(role="soft")
        self._note.setParent(self)
        self._note.setWordWrap(False)
        self._note.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)
        self._kept_px = 0
        self.editingFinished.connect(self._finished)

    def show_text(self, text: str) -> None:
        """Show what the plan has."""
        if text != self.text():
            self.setText(text)
            self.setCursorPosition(0)
        self.setModified(False)

    def set_note(self, text: str) -> None:
        """A soft word at the line's end, such as a unit."""
        if text != self._note.text():
            set_text(self._note, text)
            self._place_note()

    def keep_free(self, width_px: int) -> None:
        """Leave so much of the line's end to something else."""
        self._kept_px = width_px
        self._place_note()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._place_note()

    def event(self, event: QEvent) -> bool:
        # With nothing typed that is not taken yet, undo and redo mean the plan's, not the field's.
        undoes = isinstance(event, QKeyEvent) and (
            event.matches(QKeySequence.StandardKey.Undo) or event.matches(QKeySequence.StandardKey.Redo)
        )
        if undoes and event.type() == QEvent.Type.ShortcutOverride and not self.isModified():
            event.ignore()
            return False
        return super().event(event)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape:
            self.restored.emit()
        else:
            super().keyPressEvent(event)

    def _place_note(self) -> None:
        self._note.ensurePolished()
        width = self._note.sizeHint().width() if self._note.text() else 0
        self._note.setVisible(0 < width < self.width() - 40)
        self.setTextMargins(0, 0, self._kept_px + (width + 6 if self._note.isVisibleTo(self) else 0), 0)
        self._note.setGeometry(self.width() - width - 7 - self._kept_px, 0, width, self.height())

    def _finished(self) -> None:
        if self.isModified():
            self.setModified(False)
            self.typed.emit(self.text())


class MoreButton(QAbstractButton):
    """What stands at the end of a line and opens a menu; the line has the key for it."""

    def __init__(self, line: LineField) -> None:
        super().__init__(line)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)

    def paintEvent(self, event: QPaintEvent) -> None:
        paint_chevron(self)


class ChoiceBox(QComboBox):
    """A combo box that the wheel passes over, so that scrolling a sheet changes nothing."""

    restored = Signal()

    def __init__(self, name: str) -> None:
        super().__init__()
        self.setAccessibleName(name)
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.setMinimumContentsLength(4)
        self.setMaxVisibleItems(20)
        # The usual delegate of a combo box leaves rows as narrow as a native menu's.
        self.setItemDelegate(QStyledItemDelegate(self))

    def wheelEvent(self, event: QWheelEvent) -> None:
        event.ignore()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape:
            self.restored.emit()
        else:
            super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        super().paintEvent(event)
        paint_chevron(self)


class NoteField(QPlainTextEdit):
    """Text of a few lines: `typed` when the focus leaves it, `restored` on Esc."""

    typed = Signal(str)
    restored = Signal()

    def __init__(self) -> None:
        super().__init__()
        self.setTabChangesFocus(True)
        self.setFixedHeight(58)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape:
            self.restored.emit()
        else:
            super().keyPressEvent(event)

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        if self.document().isModified() and event.reason() != Qt.FocusReason.PopupFocusReason:
            self.document().setModified(False)
            self.typed.emit(self.toPlainText())


def paint_chevron(widget: QWidget) -> None:
    """Draw the sign of more to choose from at a widget's right end."""
    painter = QPainter(widget)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setPen(QPen(widget.palette().color(QPalette.ColorRole.Text), 1.4))
    x, y = widget.width() - 14, widget.height() / 2
    painter.drawPolyline([QPointF(x - 4, y - 2), QPointF(x, y + 2), QPointF(x + 4, y - 2)])
