"""Controls that report what a person has finished writing or choosing. Know no values and no plan."""

from __future__ import annotations

from PySide6.QtCore import QPointF, Qt, Signal
from PySide6.QtGui import (
    QFocusEvent,
    QKeyEvent,
    QPainter,
    QPaintEvent,
    QPalette,
    QPen,
    QResizeEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QComboBox, QLineEdit, QPlainTextEdit, QStyledItemDelegate

from app.panels.style import plain_label, set_text

NOTCH = 120
"""One notch of a wheel in Qt's eighths of a degree."""


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

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._place_note()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape:
            self.restored.emit()
        else:
            super().keyPressEvent(event)

    def _place_note(self) -> None:
        self._note.ensurePolished()
        width = self._note.sizeHint().width() if self._note.text() else 0
        self._note.setVisible(0 < width < self.width() - 40)
        self.setTextMargins(0, 0, width + 6 if self._note.isVisibleTo(self) else 0, 0)
        self._note.setGeometry(self.width() - width - 7, 0, width, self.height())

    def _finished(self) -> None:
        if self.isModified():
            self.setModified(False)
            self.typed.emit(self.text())


class TurnedField(LineField):
    """A line that the wheel turns as long as `turns` is set: `turned`(notches, modifiers)."""

    turned = Signal(float, object)

    def __init__(self, name: str) -> None:
        super().__init__(name)
        self.turns = False

    def wheelEvent(self, event: QWheelEvent) -> None:
        if not self.turns or self.isModified():
            event.ignore()
            return
        event.accept()
        # With Alt held down some systems report the wheel as turned sideways.
        self.turned.emit((event.angleDelta().y() or event.angleDelta().x()) / NOTCH, event.modifiers())


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
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QPen(self.palette().color(QPalette.ColorRole.Text), 1.4))
        x, y = self.width() - 14, self.height() / 2
        painter.drawPolyline([QPointF(x - 4, y - 2), QPointF(x, y + 2), QPointF(x + 4, y - 2)])


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
