"""The plan card: what belongs to the plan and not to one part. Knows no kinds of part but the radio."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from app.editing import edits
from app.look import Look
from app.panels.around import Around
from app.panels.blocks import ProblemBlock, rule
from app.panels.cables import CableList
from app.panels.channels import ChannelList
from app.panels.controls import LineField
from app.panels.editors import NoteEditor, QuantityEditor
from app.panels.fields import form_for, optional_editor
from app.panels.style import MARGIN, dress, plain_label
from app.panels.tab_order import tab_in_order
from app.store import Store
from feedlib.answer import JUDGED
from feedlib.errors import PlanError
from feedlib.parts import Radio
from feedlib.plan import Band, Limits, Plan, Sweep
from feedlib.schema import specs


class PlanCard(QWidget):
    """The card of the plan: title, problems, band, channels, limits, radio and cables."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self._store = store
        self.setProperty("role", "card")
        self._title, self._notes = LineField("Title"), NoteEditor("Notes")
        self._title.setProperty("role", "name")
        self._title.setPlaceholderText("No title")
        self.problems = ProblemBlock(look, leads=True)
        self._band, self._limits, self._radio = form_for(Band), form_for(Limits), form_for(Radio)
        self._sweep = optional_editor("Sweep", Sweep)
        self._reference = QuantityEditor("Reference", "ohm", hint="Of every port of the harness")
        self.channels, self.cables = ChannelList(store), CableList(store)
        self._radio_head = plain_label("Radio", "head")

        layout = QVBoxLayout(self)
        layout.setContentsMargins(MARGIN, 12, MARGIN, MARGIN)
        layout.setSpacing(8)
        for widget in (
            self._title,
            self.problems,
            self._notes,
            *_section("Band", self._band, self._sweep),
            *_section("Channels", self.channels),
            *_section("Limits", self._limits),
            rule(),
            self._radio_head,
            self._radio,
            *_section("Cables", self.cables),
            *_section("S-parameters", self._reference),
        ):
            layout.addWidget(widget)
        layout.addStretch(1)
        for name, editor in self._limits.editors.items():
            assert isinstance(editor, QuantityEditor)
            editor.line.setPlaceholderText("no limit")
            if name in JUDGED:
                editor.line.set_note("at least" if JUDGED[name] else "at most")
        self._listed: tuple[int, tuple[str, ...]] | None = None
        self._connect()
        self.set_look(look)
        self._fill()

    def _connect(self) -> None:
        store = self._store
        self._title.typed.connect(self._title_typed)
        self._title.restored.connect(self._show_title)
        self._notes.entered.connect(self._notes_typed)
        self._band.entered.connect(self._band_changed)
        self._sweep.entered.connect(self._sweep_changed)
        self._limits.entered.connect(self._limits_changed)
        self._reference.entered.connect(self._reference_changed)
        self._radio.entered.connect(self._radio_changed)
        self.problems.chosen.connect(self._lead)
        store.plan_changed.connect(self._plan_changed)
        store.answer_changed.connect(self._judge)

    def set_look(self, look: Look) -> None:
        """Draw with another look."""
        dress(self, look)
        self.problems.set_look(look)

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        self._fill()

    def _plan_changed(self, old: Plan, new: Plan) -> None:
        self._fill()

    def _fill(self) -> None:
        if self.isHidden():
            return
        plan = self._store.plan
        around = Around(plan)
        if not (self._title.hasFocus() and self._title.isModified()):
            self._show_title()
        self._notes.fill(plan.notes, around)
        self._band.fill(plan.band, around)
        self._sweep.fill(plan.sweep, around)
        self._limits.fill(plan.limits, around)
        # A limit that nothing judges yet is shown only where a plan has it.
        for name, editor in self._limits.editors.items():
            editor.setVisible(name in JUDGED or getattr(plan.limits, name) is not None)
        self._reference.fill(plan.reference_ohm, around)
        radio = _only_radio(plan)
        for widget in (self._radio_head, self._radio):
            widget.setVisible(radio is not None)
        if radio is not None:
            self._radio.fill(plan.placed(radio).part, around)
        self.channels.fill(plan)
        self.cables.fill(plan)
        listed = len(plan.channels), tuple(plan.cables)
        if listed != self._listed:
            self._listed = listed
            tab_in_order(self)
        self._judge()

    def _judge(self) -> None:
        """Show what the check says."""
        if self.isHidden():
            return
        names = {p.id: p.name for p in self._store.plan.parts}
        problems = [p for p in self._store.problems if p.part_id is None or p.part_id in names]
        self.problems.show_problems([(p, names[p.part_id] if p.part_id is not None else "") for p in problems])

    def _lead(self, part_id: str) -> None:
        self._store.select((part_id,))

    def _show_title(self) -> None:
        self._title.show_text(self._store.plan.title)

    def _title_typed(self, text: str) -> None:
        self._store.edit("Change title", edits.retitled(self._store.plan, title=edits.plain_text(text).strip()))
        self._show_title()

    def _notes_typed(self, text: str, turned: bool) -> None:
        self._store.edit("Change notes", edits.retitled(self._store.plan, notes=text))

    def _band_changed(self, changes: dict[str, Any], turned: bool) -> None:
        try:
            plan = edits.with_band(self._store.plan, **changes)
        except PlanError as error:
            self._band.refuse(error, next(reversed(changes)))
        else:
            self._store.edit("Change band", plan)

    def _sweep_changed(self, sweep: Sweep | None, turned: bool) -> None:
        try:
            plan = replace(self._store.plan, sweep=sweep)
        except PlanError as error:
            self._sweep.refuse(_sentence(error))
        else:
            self._store.edit("Change sweep", plan)

    def _limits_changed(self, changes: dict[str, Any], turned: bool) -> None:
        plan = self._store.plan
        for name, value in changes.items():
            plan = edits.with_limit(plan, name, value)
        label = specs(Limits)[next(reversed(changes))].label.lower()
        self._store.edit(f"Change limit on {label}", plan)

    def _reference_changed(self, reference_ohm: float, turned: bool) -> None:
        try:
            plan = replace(self._store.plan, reference_ohm=reference_ohm)
        except PlanError as error:
            self._reference.refuse(_sentence(error))
        else:
            self._store.edit("Change reference", plan)

    def _radio_changed(self, changes: dict[str, Any], turned: bool) -> None:
        radio = _only_radio(self._store.plan)
        if radio is not None:
            label = specs(Radio)[next(reversed(changes))].label.lower()
            self._store.edit(f"Change {label} of {radio}", edits.changed_part(self._store.plan, radio, **changes))


def _only_radio(plan: Plan) -> str | None:
    """The plan's radio; None where there is none, or more than one."""
    radios = [p.id for p in plan.parts if isinstance(p.part, Radio)]
    return radios[0] if len(radios) == 1 else None


def _section(head: str, *widgets: QWidget) -> tuple[QWidget, ...]:
    return rule(), plain_label(head, "head"), *widgets


def _sentence(error: PlanError) -> str:
    return error.reason[:1].upper() + error.reason[1:] + "."
