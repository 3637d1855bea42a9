"""The field in which a limit is set where it is read. Changes no plan."""

from __future__ import annotations

from PySide6.QtCore import QRect, Signal
from PySide6.QtWidgets import QFrame, QVBoxLayout, QWidget

from app.look import Look
from app.panels.around import Around
from app.panels.editors import QuantityEditor
from app.panels.style import dress
from feedlib.answer import JUDGED
from feedlib.plan import Limits, Plan
from feedlib.schema import specs

LEAST_WIDTH = 190


class LimitField(QFrame):
    """One limit, over the verdict on it. `entered`(value, or None for no limit); `left` when nothing is to come."""

    entered = Signal(object)
    left = Signal()

    def __init__(self, limit: str, look: Look, over: QWidget) -> None:
        super().__init__(over)
        self.limit, self._over = limit, over
        spec = specs(Limits)[limit]
        asked = f"{spec.label} at {'least' if JUDGED[limit] else 'most'}"
        self.editor = QuantityEditor(asked, spec.unit, optional=True, wide=True, placeholder="no limit")
        self.editor.set_group("Limit")
        self.setProperty("role", "over")
        layout = QVBoxLayout(self)
        layout.setContentsMargins(10, 5, 10, 8)
        layout.addWidget(self.editor)
        self.set_look(look)
        self.editor.entered.connect(self._entered)
        self.editor.dropped.connect(self.left)
        self.editor.line.editingFinished.connect(self._finished)

    def set_look(self, look: Look) -> None:
        """Draw with another look."""
        dress(self, look)

    def fill(self, plan: Plan) -> None:
        """Show a plan's limit."""
        self.editor.fill(getattr(plan.limits, self.limit), Around(plan))

    def take_hold(self) -> None:
        """Begin to write."""
        self.editor.line.setFocus()
        self.editor.line.selectAll()

    def place(self, at: QRect) -> None:
        """Stand over the verdict that is at a place of the parent."""
        room = self._over.width()
        width = min(max(at.width(), LEAST_WIDTH), room)
        self.setFixedWidth(width)
        self.adjustSize()
        self.move(min(at.left(), room - width), at.top())
        self.raise_()

    def refuse(self, sentence: str) -> None:
        """Say why the plan did not take the limit."""
        self.editor.refuse(sentence)

    def _entered(self, value: float | None, turned: bool) -> None:
        self.entered.emit(value)

    def _finished(self) -> None:
        if self.editor.refused:
            self.adjustSize()
        else:
            self.left.emit()
