"""The part card: the selected part's fields, its figures at the mark and its problems.

Of the kinds of part it knows coax alone: it has rows of its own, and changes together with its matched set.
"""

from __future__ import annotations

from typing import Any

from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from app.editing import edits, matched
from app.editing.wording import format_frequency
from app.look import Look
from app.panels.around import Around, mates_of
from app.panels.blocks import FigureBlock, ProblemBlock, rule
from app.panels.coax_rows import CoaxRows
from app.panels.controls import LineField
from app.panels.editors import NoteEditor, TextEditor
from app.panels.fields import form_for
from app.panels.figures import figure_rows
from app.panels.forms import RecordForm
from app.panels.several import SeveralParts
from app.panels.shelf import stocked
from app.panels.style import MARGIN, dress, plain_label, set_text, tooltip
from app.panels.tab_order import tab_through
from app.store import Store
from feedlib.errors import PlanError
from feedlib.parts import Coax, Part
from feedlib.plan import Placed, Plan
from feedlib.schema import specs

MOST_NAMES = 12


class PartCard(QWidget):
    """The card of what is selected: one part with all its fields, or several parts in short."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self._store = store
        self.setProperty("role", "card")
        layout = QVBoxLayout(self)
        layout.setContentsMargins(MARGIN, 12, MARGIN, MARGIN)
        self._one, self._several = _OnePart(store, look), SeveralParts(store)
        layout.addWidget(self._one)
        layout.addWidget(self._several)
        layout.addStretch(1)
        self.set_look(look)
        store.plan_changed.connect(self._plan_changed)
        store.selection_changed.connect(self._show)
        store.answer_changed.connect(self._judge)
        store.stale_changed.connect(self._tell_stale)
        self._show()

    def set_look(self, look: Look) -> None:
        """Draw with another look."""
        dress(self, look)
        self._one.problems.set_look(look)

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        self._show()

    def _plan_changed(self, old: Plan, new: Plan) -> None:
        self._fill()

    def _show(self) -> None:
        self._fill()
        self._judge()

    def _fill(self) -> None:
        """Show what the plan says."""
        store = self._store
        if self.isHidden() or not store.selected:
            return
        one = len(store.selected) == 1
        self._one.setVisible(one)
        self._several.setVisible(not one)
        if one:
            self._one.fill(store.plan.placed(store.selected[0]))
        else:
            self._several.fill()

    def _judge(self) -> None:
        """Show what the answer says."""
        store = self._store
        if self.isHidden() or len(store.selected) != 1:
            return
        part_id = store.selected[0]
        rows = [] if store.answer is None else figure_rows(store.answer, part_id)
        self._one.figures.show_rows(self._head(), rows)
        self._one.problems.show_problems([(p, "") for p in store.problems if p.part_id == part_id])

    def _tell_stale(self) -> None:
        """Say while the figures belong to an older plan."""
        self._one.figures.set_head(self._head())

    def _head(self) -> str:
        store = self._store
        if store.answer is None:
            return f"Not solved: {(store.why_not or '').rstrip('.')}."
        return f"At {format_frequency(store.answer.plan.band.marked_hz)}{', being solved…' if store.stale else ''}"


class _OnePart(QWidget):
    """Everything about one part."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self._store = store
        self._placed: Placed | None = None
        self._forms: dict[type[Part], RecordForm] = {}
        self._coax_rows: CoaxRows | None = None
        self._name = LineField("Name")
        self._name.setProperty("role", "name")
        self._kind = plain_label(role="soft")
        self._id = TextEditor("Id")
        self._place = QVBoxLayout()
        self._note = NoteEditor("Note")
        self.figures, self.problems = FigureBlock(), ProblemBlock(look, leads=False)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(8)
        layout.addWidget(self._name)
        layout.addWidget(self._kind)
        layout.addWidget(self._id)
        layout.addLayout(self._place)
        layout.addWidget(self._note)
        layout.addWidget(rule())
        layout.addWidget(self.figures)
        layout.addWidget(self.problems)
        layout.addStretch(1)
        self._name.typed.connect(self._label_typed)
        self._name.restored.connect(self._show_name)
        self._id.entered.connect(self._id_typed)
        self._note.entered.connect(self._note_typed)

    def fill(self, placed: Placed) -> None:
        """Show a part; what was typed and not taken stays only while it is the same part."""
        plan, store = self._store.plan, self._store
        form = self._form(type(placed.part))
        if self._placed is None or placed.id != self._placed.id:
            for editor in (self._id, self._note, form):
                editor.restore()
        self._placed = placed
        around = Around(plan, part_id=placed.id)
        if not (self._name.hasFocus() and self._name.isModified()):
            self._show_name()
        set_text(self._kind, kind_and_place(store.plan, placed))
        self._id.fill(placed.id, around)
        form.fill(placed.part, around)
        if self._coax_rows is not None and isinstance(placed.part, Coax):
            self._coax_rows.fill(placed, plan)
        self._note.fill(placed.note, around)

    def _form(self, cls: type[Part]) -> RecordForm:
        """The form of a kind, made when it is first needed; the others hide."""
        if cls not in self._forms:
            form = self._forms[cls] = form_for(cls)
            form.entered.connect(self._changed)
            if cls is Coax:
                self._coax_rows = CoaxRows(self._store)
                form.put_after("length_m", self._coax_rows)
            self._place.addWidget(form)
            tab_through(self._id.control, form)
        for kind, form in self._forms.items():
            form.setVisible(kind is cls)
        return self._forms[cls]

    def _show_name(self) -> None:
        assert self._placed is not None
        self._name.show_text(self._placed.name)
        self._name.setToolTip(tooltip(self._placed.name))

    def _label_typed(self, text: str) -> None:
        assert self._placed is not None
        label = edits.plain_text(text).strip()
        if label == self._placed.id:
            label = ""
        self._store.edit(f"Name {self._placed.id}", edits.labelled(self._store.plan, self._placed.id, label=label))
        self._show_name()

    def _note_typed(self, text: str, turned: bool) -> None:
        assert self._placed is not None
        self._store.edit(f"Note on {self._placed.name}", edits.labelled(self._store.plan, self._placed.id, note=text))

    def _id_typed(self, text: str, turned: bool) -> None:
        assert self._placed is not None
        old, new = self._placed.id, text.strip()
        try:
            plan = edits.renamed(self._store.plan, old, new)
        except PlanError as error:
            self._id.refuse(error.reason[:1].upper() + error.reason[1:] + ".")
            return
        self._store.edit(f"Rename {old} to {new}", plan)
        self._store.select((new,))

    def _changed(self, changes: dict[str, Any], turned: bool) -> None:
        assert self._placed is not None
        store, placed = self._store, self._placed
        name = next(reversed(changes))
        change = matched.with_coax if isinstance(placed.part, Coax) else edits.changed_part
        try:
            plan = change(store.plan, placed.id, **changes)
        except PlanError as error:
            self._forms[type(placed.part)].refuse(error, name)
            return
        text = f"Change {specs(type(placed.part))[name].label.lower()} of {placed.name}"
        merge = None
        if turned and name == "length_m":
            longer = changes[name] > getattr(placed.part, name)
            text, merge = f"{'Lengthen' if longer else 'Shorten'} {placed.name}", f"length {placed.id}"
        elif turned:
            merge = f"length {placed.id} {name}"
        store.edit(text, stocked(plan, changes.get("cable")), merge=merge)


def kind_and_place(plan: Plan, placed: Placed) -> str:
    """The kind of a part in trade words, and what it is joined to."""
    mates = mates_of(plan, placed.id)
    kind = placed.part.LABEL
    if not mates:
        return f"{kind}, joined to nothing"
    free = placed.part.ports - len(mates)
    after = f", {free} port{'s' if free > 1 else ''} open" if free else ""
    if len(mates) > MOST_NAMES:
        return f"{kind} between {len(mates)} parts{after}"
    names = [plan.placed(mate.part).name for mate in mates.values()]
    if len(names) == 1:
        return f"{kind} at {names[0]}{after}"
    return f"{kind} between {', '.join(names[:-1])} and {names[-1]}{after}"
