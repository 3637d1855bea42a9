"""The card of several selected parts: their names, and what can be done with all of them."""

from __future__ import annotations

from PySide6.QtWidgets import QPushButton, QVBoxLayout, QWidget

from app.editing import edits, matched
from app.panels.set_words import coax_ids, letter_of
from app.panels.style import plain_label, set_text
from app.store import Store

MOST_NAMES = 12


class SeveralParts(QWidget):
    """Several parts in short."""

    def __init__(self, store: Store) -> None:
        super().__init__()
        self._store = store
        self._head, self._names = plain_label(role="title"), plain_label(role="soft")
        self._takes = plain_label(role="soft")
        self.match, self.leave, self.delete = (
            QPushButton(text) for text in ("Make a matched set", "Leave the sets", "Delete")
        )
        self.match.clicked.connect(self._match)
        self.leave.clicked.connect(self._leave)
        self.delete.clicked.connect(self._delete)
        for button, name in (
            (self.match, "Make a matched set of the selected coax"),
            (self.leave, "Take the selected coax out of their sets"),
            (self.delete, "Delete the selected parts"),
        ):
            button.setAccessibleName(name)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(8)
        for widget in (self._head, self._names, self.match, self._takes, self.leave, self.delete):
            layout.addWidget(widget)

    def fill(self) -> None:
        """Show what is selected."""
        plan, selected = self._store.plan, self._store.selected
        names = [plan.placed(part_id).name for part_id in selected]
        set_text(self._head, f"{len(names)} parts selected")
        more = len(names) - MOST_NAMES
        set_text(self._names, ", ".join(names[:MOST_NAMES]) + (f" and {more} more" if more > 0 else ""))
        coax = self._coax()
        letters = {letter_of(plan, part_id) for part_id in coax}
        can_match = len(coax) > 1 and (None in letters or len(letters) > 1)
        self.match.setVisible(can_match)
        self._takes.setVisible(can_match)
        if can_match:
            set_text(self._takes, f"All take cable, length and ends of {plan.placed(coax[0]).name}.")
        self.leave.setVisible(bool(letters - {None}))

    def _coax(self) -> tuple[str, ...]:
        """The coax sections that are selected, as they were chosen."""
        coax = set(coax_ids(self._store.plan))
        return tuple(part_id for part_id in self._store.selected if part_id in coax)

    def _match(self) -> None:
        coax = self._coax()
        self._store.edit(f"Match {len(coax)} sections", matched.matched(self._store.plan, coax))

    def _leave(self) -> None:
        leaving = [part_id for part_id in self._coax() if letter_of(self._store.plan, part_id) is not None]
        what = f"{len(leaving)} sections" if len(leaving) > 1 else self._store.plan.placed(leaving[0]).name
        text = f"Take {what} out of {'their sets' if len(leaving) > 1 else 'its set'}"
        self._store.edit(text, matched.unmatched(self._store.plan, leaving))

    def _delete(self) -> None:
        selected = self._store.selected
        self._store.edit(f"Delete {len(selected)} parts", edits.removed(self._store.plan, selected))
