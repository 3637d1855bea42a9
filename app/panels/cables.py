"""The plan's cables as a list: one line each, their figures on demand, and a way to add one."""

from __future__ import annotations

from dataclasses import replace
from functools import partial
from typing import Any

from PySide6.QtGui import QAction
from PySide6.QtWidgets import QMenu, QPushButton, QVBoxLayout, QWidget

from app.editing import edits
from app.panels.around import Around
from app.panels.editors import TextEditor
from app.panels.fields import form_for
from app.panels.forms import RecordForm
from app.panels.shelf import by_impedance, caution, figures_text, offer, stocked
from app.panels.style import button_text, plain_label, set_text, tooltip
from app.panels.tab_order import tab_through
from app.store import Store
from feedlib.catalogue import quality_sentence
from feedlib.plan import Cable, Plan

FIRST_VELOCITY_FACTOR = 0.66


class CableList(QWidget):
    """The cables of a plan."""

    def __init__(self, store: Store) -> None:
        super().__init__()
        self._store = store
        self._rows: dict[str, CableRow] = {}
        self._types: dict[str, QAction] = {}
        self.add = QPushButton("Add a cable")
        self.add.setAccessibleName("Add a cable")
        self.own = TextEditor("Its name", placeholder="then Enter")
        self.own.hide()
        self._list = QVBoxLayout()
        self._list.setSpacing(6)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(6)
        layout.addLayout(self._list)
        layout.addWidget(self.add)
        layout.addWidget(self.own)
        self.menu = QMenu(self)
        self.menu.setToolTipsVisible(True)
        self.menu.aboutToShow.connect(self._offer)
        self.add.setMenu(self.menu)
        self.own.entered.connect(self._own_named)
        self.own.line.restored.connect(self.own.hide)

    def fill(self, plan: Plan) -> None:
        """Show a plan's cables."""
        if list(self._rows) != list(plan.cables):
            self._list_anew(plan)
        for name, cable in plan.cables.items():
            self._rows[name].fill(name, cable, plan)

    def row(self, name: str) -> CableRow:
        """The row of a cable."""
        return self._rows[name]

    def _list_anew(self, plan: Plan) -> None:
        for name in [n for n in self._rows if n not in plan.cables]:
            gone = self._rows.pop(name)
            gone.hide()
            gone.deleteLater()
        kept, self._rows = self._rows, {}
        for number, name in enumerate(plan.cables):
            row = kept.get(name) or CableRow(self._store, name)
            self._rows[name] = row
            self._list.insertWidget(number, row)

    def _offer(self) -> None:
        """Fill the menu when it is first needed; offer only what the plan does not have."""
        if self.menu.isEmpty():
            self._make_menu()
        for name, action in self._types.items():
            action.setVisible(name not in self._store.plan.cables)

    def _make_menu(self) -> None:
        """Types by impedance, then a cable of one's own."""
        for impedance, types in by_impedance():
            group = self.menu.addMenu(impedance)
            group.setToolTipsVisible(True)
            for cable in types:
                action = self._types[cable.type] = group.addAction(button_text(offer(cable)))
                action.setToolTip(tooltip(quality_sentence(cable)))
                action.setEnabled(cable.offered)
                action.triggered.connect(partial(self._take, cable.type))
        self.menu.addSeparator()
        self.menu.addAction("Own cable…").triggered.connect(self._ask_name)

    def _take(self, name: str) -> None:
        self._store.edit(f"Add cable {name}", stocked(self._store.plan, name))

    def _ask_name(self) -> None:
        self.own.fill("", Around(self._store.plan))
        self.own.restore()
        self.own.show()
        self.own.line.setFocus()

    def _own_named(self, text: str, turned: bool) -> None:
        plan, name = self._store.plan, edits.plain_text(text).strip()
        if not name or name in plan.cables:
            self.own.refuse("A cable of this name is in the plan already." if name else "A cable wants a name.")
            return
        self.own.hide()
        cable = Cable(z0_ohm=plan.reference_ohm, velocity_factor=FIRST_VELOCITY_FACTOR)
        self._store.edit(f"Add cable {name}", edits.with_cable(plan, name, cable))
        self._rows[name].open()


class CableRow(QWidget):
    """One cable: its name and figures in a line; opened, its figures as fields."""

    def __init__(self, store: Store, name: str) -> None:
        super().__init__()
        self._store, self._name = store, name
        self.form: RecordForm | None = None
        self.button = QPushButton()
        self.button.setProperty("role", "bare")
        self.button.setMinimumWidth(1)
        self._figures, self._caution = plain_label(role="soft"), plain_label(role="soft")
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(2)
        for widget in (self.button, self._figures, self._caution):
            self._layout.addWidget(widget)
        self.button.clicked.connect(self._toggle)

    def fill(self, name: str, cable: Cable, plan: Plan) -> None:
        """Show a cable."""
        opened = self.form is not None and not self.form.isHidden()
        self.button.setText(("▾ " if opened else "▸ ") + button_text(name))
        self.button.setAccessibleName(f"{name}, {'hide' if opened else 'show'} figures")
        set_text(self._figures, figures_text(cable, plan.band.marked_hz))
        said = caution(name, cable)
        set_text(self._caution, said)
        self._caution.setVisible(bool(said))
        if self.form is not None:
            self.form.fill(cable, Around(plan))

    def open(self) -> None:
        """Show its figures as fields."""
        if self.form is None:
            self.form = form_for(Cable)
            self.form.set_group(self._name)
            self.form.entered.connect(self._changed)
            self._layout.addWidget(self.form)
            tab_through(self.button, self.form)
        self.form.show()
        self._refill()

    def _toggle(self) -> None:
        if self.form is None or self.form.isHidden():
            self.open()
        else:
            self.form.hide()
            self._refill()

    def _refill(self) -> None:
        plan = self._store.plan
        self.fill(self._name, plan.cables[self._name], plan)

    def _changed(self, changes: dict[str, Any], turned: bool) -> None:
        plan = self._store.plan
        cable = replace(plan.cables[self._name], **changes)
        self._store.edit(f"Change figures of {self._name}", edits.with_cable(plan, self._name, cable))
