"""A coax card's own rows: what the section is cut to, and its matched set. Knows no fields of the part."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QVBoxLayout, QWidget

from app.editing import matched
from app.editing.cutting import cut_length_m, cut_to, electrical_deg, same_phase_as
from app.editing.entry import LengthUnit
from app.editing.wording import editable_quantity, format_frequency, format_length
from app.look import SIGNS
from app.panels.around import Around
from app.panels.editors import QuantityEditor
from app.panels.forms import refusal
from app.panels.menu_button import MenuButton, Offer
from app.panels.set_words import coax_ids, members_text, short_name
from app.panels.style import plain_label, set_text, tooltip
from app.store import Store
from app.units import units
from feedlib.errors import PlanError
from feedlib.matched import matched_sets
from feedlib.parts import Coax
from feedlib.plan import Placed, Plan

CUTS = {"1/4": 90, "3/4": 270, "5/4": 450, "1/2": 180}
"""Waves in the cable, as the chips say them, and their electrical degrees."""

BESIDE = "What its ends add comes on top."
NO_OTHER = "There is no other coax."


class CoaxRows(QWidget):
    """The rows together."""

    def __init__(self, store: Store) -> None:
        super().__init__()
        self.cut, self.set = CutRow(store), SetRow(store)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(8)
        layout.addWidget(self.cut)
        layout.addWidget(self.set)

    def fill(self, placed: Placed, plan: Plan) -> None:
        """Show a section."""
        self.cut.fill(placed, plan)
        self.set.fill(placed, plan)


class CutRow(QWidget):
    """Chips that cut a section to an electrical length at the mark, once."""

    def __init__(self, store: Store) -> None:
        super().__init__()
        self._store = store
        self._placed: Placed | None = None
        self.chips = {waves: _chip(QPushButton(waves), f"Cut to {waves} wave") for waves in CUTS}
        for waves, chip in self.chips.items():
            chip.clicked.connect(partial(self._cut, CUTS[waves], f"{waves} wave"))
        self.any = _chip(QPushButton("degrees…"), "Cut to any number of degrees")
        self.alike = MenuButton("same phase as…", self._others)
        _chip(self.alike, "Cut to the same phase as another section")
        self.degrees = QuantityEditor("Degrees", "deg")
        self.degrees.hide()
        self._fault = plain_label(role="fault")
        self._fault.hide()
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(4)
        self._heading = plain_label("Cut to", "soft")
        layout.addWidget(self._heading)
        layout.addLayout(_in_line(*self.chips.values()))
        layout.addLayout(_in_line(self.any, self.alike))
        layout.addWidget(self.degrees)
        layout.addWidget(self._fault)
        self.any.clicked.connect(self._ask)
        self.alike.chosen.connect(self._cut_alike)
        self.degrees.entered.connect(self._degrees_typed)
        self.degrees.line.editingFinished.connect(self._asked)
        self.degrees.dropped.connect(self._asked)

    def fill(self, placed: Placed, plan: Plan) -> None:
        """Show what can be done with a section."""
        if self._placed is not None and placed.part != self._placed.part:
            self._fault.hide()
        if self._placed is not None and placed.id != self._placed.id:
            self.degrees.hide()
        self._placed = placed
        coax = placed.part
        assert isinstance(coax, Coax)
        around = Around(plan, coax, placed.id)
        cable = around.cable
        at = f"at {format_frequency(around.frequency_hz)}"
        set_text(self._heading, f"Cut to, {at}")
        for waves, chip in self.chips.items():
            length = "" if cable is None else f": {_told(cut_length_m(cable, CUTS[waves], around.frequency_hz))}"
            _tell(chip, f"{CUTS[waves]}° {at}{length}. {BESIDE}")
        _tell(self.any, f"So many degrees {at}. {BESIDE}")
        others = len(coax_ids(plan)) > 1
        self.alike.setEnabled(others)
        _tell(self.alike, "As long electrically as another section, the ends of both included." if others else NO_OTHER)
        if cable is not None:
            self.degrees.fill(round(electrical_deg(plan, coax, around.frequency_hz), 3), around)

    def _cut(self, degrees: float, words: str) -> None:
        self._edit(words, lambda plan, part_id: cut_to(plan, part_id, degrees), self._refuse)

    def _degrees_typed(self, degrees: float, turned: bool) -> None:
        words = editable_quantity(degrees, unit="deg")
        self._edit(words, lambda plan, part_id: cut_to(plan, part_id, degrees), self.degrees.refuse)

    def _cut_alike(self, other_id: str) -> None:
        words = f"the same phase as {self._store.plan.placed(other_id).name}"
        self._edit(words, lambda plan, part_id: same_phase_as(plan, part_id, other_id), self._refuse)

    def _edit(self, words: str, cut: Callable[[Plan, str], Plan], refuse: Callable[[str], None]) -> None:
        assert self._placed is not None
        self._fault.hide()
        try:
            plan = cut(self._store.plan, self._placed.id)
        except PlanError as error:
            refuse(refusal(error, Coax))
        else:
            self._store.edit(f"Cut {self._placed.name} to {words}", plan)

    def _refuse(self, sentence: str) -> None:
        set_text(self._fault, f"{SIGNS['fails']} {sentence}")
        self._fault.show()

    def _ask(self) -> None:
        self.degrees.restore()
        self.degrees.show()
        self.degrees.line.setFocus()
        self.degrees.line.selectAll()

    def _asked(self) -> None:
        """Take the field away again, unless what was written waits to be mended."""
        if self.degrees.isHidden() or self.degrees.refused:
            return
        if self.degrees.line.hasFocus():
            self.any.setFocus()
        self.degrees.hide()

    def _others(self) -> list[Offer]:
        assert self._placed is not None
        plan, own = self._store.plan, self._placed
        names = {part_id: plan.placed(part_id).name for part_id in coax_ids(plan) if part_id != own.id}
        return [
            Offer(i, members_text(plan, (i,)), f"{own.name} gets the delay of {name}.") for i, name in names.items()
        ]


class SetRow(QWidget):
    """Which matched set a section is in, and the way in and out."""

    def __init__(self, store: Store) -> None:
        super().__init__()
        self._store = store
        self._placed: Placed | None = None
        self._members = plain_label()
        self.match = MenuButton("Match with…", self._offers)
        self.leave = QPushButton("Leave the set")
        for button in (self.match, self.leave):
            button.setAccessibleName(button.text().rstrip("…"))
        line = QHBoxLayout()
        line.setSpacing(6)
        line.addWidget(self._members, 1)
        line.addWidget(self.match, 0, Qt.AlignmentFlag.AlignTop)
        line.addWidget(self.leave, 0, Qt.AlignmentFlag.AlignTop)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(2)
        layout.addWidget(plain_label("Matched set", "soft"))
        layout.addLayout(line)
        self.match.chosen.connect(self._match)
        self.leave.clicked.connect(self._leave)

    def fill(self, placed: Placed, plan: Plan) -> None:
        """Show the set of a section."""
        self._placed = placed
        assert isinstance(placed.part, Coax)
        alone = not placed.part.matched_set
        set_text(self._members, "alone" if alone else members_text(plan, matched.set_of(plan, placed.id)))
        self.match.setVisible(alone)
        self.leave.setVisible(not alone)
        others = len(coax_ids(plan)) > 1
        self.match.setEnabled(others)
        takes = "takes cable, length and ends of the one that you choose; from then on they change together."
        _tell(self.match, f"{placed.name} {takes}" if others else NO_OTHER)
        _tell(self.leave, f"{placed.name} stays as long as it is, and changes alone from then on.")

    def _offers(self) -> list[Offer]:
        """The sets, then the sections that are in none."""
        assert self._placed is not None
        plan, own = self._store.plan, self._placed
        sets = tuple(matched_sets(plan).values())
        in_sets = {own.id, *(part_id for members in sets for part_id in members)}
        groups = (*sets, *((part_id,) for part_id in coax_ids(plan) if part_id not in in_sets))
        offers = []
        for first, *more in groups:
            part = plan.placed(first).part
            assert isinstance(part, Coax)
            text = f"{members_text(plan, (first, *more))} · {_told(part.length_m)}"
            hint = f"{own.name} takes cable, length and ends of {short_name(plan, first)}."
            offers.append(Offer(first, text, hint))
        return offers

    def _match(self, other_id: str) -> None:
        assert self._placed is not None
        plan, own = self._store.plan, self._placed
        text = f"Match {own.name} with {short_name(plan, other_id)}"
        self._store.edit(text, matched.matched(plan, (other_id, own.id)))

    def _leave(self) -> None:
        assert self._placed is not None
        plan, own = self._store.plan, self._placed
        text = f"Take {own.name} out of {short_name(plan, own.id)}"
        self._store.edit(text, matched.unmatched(plan, (own.id,)))


def _told(length_m: float) -> str:
    """A length as it is cut, in mm or inches."""
    unit: LengthUnit = "in" if units().length == "in" else "mm"
    return format_length(length_m, unit, frequency_hz=None, velocity_factor=None)


def _chip(button: QPushButton, name: str) -> QPushButton:
    button.setProperty("role", "chip")
    button.setAccessibleName(name)
    return button


def _tell(button: QPushButton, text: str) -> None:
    if button.toolTip() != tooltip(text):
        button.setToolTip(tooltip(text))


def _in_line(*buttons: QPushButton) -> QHBoxLayout:
    line = QHBoxLayout()
    line.setSpacing(4)
    for button in buttons:
        line.addWidget(button)
    line.addStretch(1)
    return line
