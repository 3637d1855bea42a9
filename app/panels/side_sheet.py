"""The side sheet: the card of what is selected, or of the plan itself. Shows nothing of its own."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QLineEdit, QScrollArea, QVBoxLayout, QWidget

from app.look import Look
from app.panels.card import PartCard
from app.panels.plan_card import PlanCard
from app.panels.style import SHEET_WIDTH, dress
from app.store import Store


class SideSheet(QScrollArea):
    """One card at a time, scrolled where it is higher than the window."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self._store = store
        self.part_card, self.plan_card = PartCard(store, look), PlanCard(store, look)
        content = QWidget()
        content.setProperty("role", "card")
        layout = QVBoxLayout(content)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self.part_card)
        layout.addWidget(self.plan_card)
        self.setWidget(content)
        self.setWidgetResizable(True)
        self.setFixedWidth(SHEET_WIDTH)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.set_look(look)
        store.selection_changed.connect(self._switch)
        self._switch()

    def set_look(self, look: Look) -> None:
        """Draw with another look."""
        dress(self, look)
        self.part_card.set_look(look)
        self.plan_card.set_look(look)

    def focus_first_field(self) -> None:
        """Put the cursor where the selected part is most often changed: its length, else its first field."""
        card = self.part_card if self._store.selected else self.plan_card
        fields = [field for field in card.findChildren(QLineEdit) if field.isVisible() and field.isEnabled()]
        wanted = [f for f in fields if f.accessibleName().startswith("Length")]
        own = [f for f in fields if f.accessibleName() not in ("Label", "Id", "Title")]
        for field in (*wanted, *own, *fields)[:1]:
            field.setFocus(Qt.FocusReason.ShortcutFocusReason)
            field.selectAll()

    def _switch(self) -> None:
        part = bool(self._store.selected)
        if part == self.part_card.isHidden():
            self.verticalScrollBar().setValue(0)
        self.part_card.setVisible(part)
        self.plan_card.setVisible(not part)
