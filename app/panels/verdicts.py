"""The verdict strip: every limit with its worst figure in the band and whether it holds. Works no figure out."""

from __future__ import annotations

from functools import partial

import numpy as np
from PySide6.QtCore import QPoint, QRect
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QHBoxLayout, QWidget

from app.editing import edits
from app.editing.wording import editable_quantity, format_angle, format_db, format_frequency
from app.look import Look, Verdict
from app.panels.deciders import deciders
from app.panels.forms import refusal
from app.panels.limit_field import LimitField
from app.panels.style import dress
from app.panels.verdict_item import HEIGHT, Shown, VerdictItem
from app.store import Store
from feedlib import Answer
from feedlib.answer import JUDGED
from feedlib.errors import PlanError
from feedlib.plan import Limits
from feedlib.schema import specs

NEAR_SHARE = 0.1
"""A limit that holds by less than this share of itself is near: return loss 20 dB is near below 22 dB."""

ALWAYS_SHOWN = ("return_loss_db", "harness_loss_db")
SHOWN_WITH_ANTENNAS = ("amplitude_balance_db", "phase_balance_deg")
"""Figures that are shown without a limit too, the second kind where there are two antennas or more."""

BEHIND = "of the plan before the last change; being solved"
"""What is told of a figure while its answer is older than the plan."""


def judged(limit: str, worst: float, wanted: float) -> Verdict:
    """The state of a figure against its limit."""
    margin = worst - wanted if JUDGED[limit] else wanted - worst
    if not margin >= 0:
        return "fails"
    return "near" if margin < NEAR_SHARE * abs(wanted) else "holds"


SPOKEN: dict[Verdict, str] = {
    "holds": "holds",
    "near": "holds, near its limit",
    "fails": "fails",
    "unknown": "no antenna is driven",
}


def verdicts_of(answer: Answer) -> list[Shown]:
    """What the strip says of an answer, in the order of the limits."""
    told = {v.limit: v for v in answer.verdicts}
    shown = []
    for limit, at_least in JUDGED.items():
        spec = specs(Limits)[limit]
        if limit in told:
            v = told[limit]
            state, sign = judged(limit, v.worst, v.wanted), "≥" if at_least else "≤"
            if limit != "return_loss_db" and not answer.mark.antenna_current_a.any():
                state = "unknown"  # no antenna is driven: there is nothing to judge
            wanted = editable_quantity(v.wanted, unit=spec.unit)
            spoken = SPOKEN[state]
            spoken = f"wants {'at least' if at_least else 'at most'} {wanted}, {spoken}"
            figure, wants, frequency_hz = _figure(limit, v.worst), f"{sign} {wanted}", v.frequency_hz
        elif limit in ALWAYS_SHOWN or (limit in SHOWN_WITH_ANTENNAS and len(answer.antenna_ids) > 1):
            worst, frequency_hz = _worst(answer, limit, at_least)
            state, figure, wants, spoken = "unknown", _figure(limit, worst), "", "no limit"
        else:
            continue
        spoken = f"{spec.label} {figure} at {format_frequency(frequency_hz)}, {spoken}"
        shown.append(Shown(spec.label, state, figure, wants, spoken, limit, frequency_hz))
    return shown


def _worst(answer: Answer, limit: str, at_least: bool) -> tuple[float, float]:
    """The worst of a figure at the solved frequencies of the band, and where it is."""
    f, band = answer.frequency_hz, answer.plan.band
    inside = (f >= band.start_hz) & (f <= band.stop_hz)
    others = [*answer.channels.values()]
    if not (inside.any() or others):
        others = [answer.mark]
    values = np.concatenate([getattr(answer, limit)[inside], *(getattr(x, limit) for x in others)])
    at_hz = np.concatenate([f[inside], *(x.frequency_hz for x in others)])
    worst = int(np.argmin(values) if at_least else np.argmax(values))
    return float(values[worst]), float(at_hz[worst])


def _figure(limit: str, value: float) -> str:
    return format_angle(value) if limit.endswith("_deg") else format_db(value)


class VerdictStrip(QWidget):
    """The row of verdicts. A click goes to what decides one, a double-click sets its limit."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self._store, self._look = store, look
        self._items: list[VerdictItem] = []
        self._awaited: str | None = None
        self._field: LimitField | None = None
        self._row = QHBoxLayout(self)
        self._row.setContentsMargins(12, 0, 12, 0)
        self._row.setSpacing(4)
        self.setFixedHeight(HEIGHT)
        self.setAccessibleName("Verdicts")
        self.set_look(look)
        store.answer_changed.connect(self._refresh)
        store.stale_changed.connect(self._tell_stale)
        self._refresh()

    def set_look(self, look: Look) -> None:
        """Draw with another look."""
        self._look = look
        dress(self, look)
        for item in self._items:
            item.look = look
            item.update()
        if self._field is not None:
            self._field.set_look(look)

    @property
    def items(self) -> tuple[VerdictItem, ...]:
        """The verdicts that are shown, from left to right."""
        return tuple(item for item in self._items if not item.isHidden())

    def _refresh(self) -> None:
        store = self._store
        if store.answer is not None:
            shown = verdicts_of(store.answer)
        else:
            why = (store.why_not or "").rstrip(".") + "."
            shown = [Shown("Not solved", "fails", "", why, f"Not solved: {why}")]
        while len(self._items) < len(shown):
            item = VerdictItem(store, self._look)
            item.clicked.connect(partial(self._clicked, item))
            item.limit_asked.connect(partial(self._ask_limit, item))
            self._items.append(item)
            self._row.addWidget(item, 1)
        for number, item in enumerate(self._items):
            item.setVisible(number < len(shown))
            if number < len(shown):
                item.show_verdict(shown[number])
        if self._awaited is not None:
            self._select_deciders(self._awaited)
        if self._field is not None:
            self._field.fill(store.plan)
            self._place_field()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._place_field()

    def _ask_limit(self, item: VerdictItem) -> None:
        """Open the field for a verdict's limit."""
        self._end_field()
        if item.shown.about is None:
            return
        field = self._field = LimitField(item.shown.about, self._look, self.window())
        field.entered.connect(self._limit_entered)
        field.left.connect(self._end_field)
        field.fill(self._store.plan)
        QWidget.setTabOrder(item, field.editor.line)
        field.show()
        self._place_field()
        field.take_hold()

    def _limit_entered(self, value: float | None) -> None:
        field, store = self._field, self._store
        if field is None:
            return
        label = specs(Limits)[field.limit].label.lower()
        try:
            plan = edits.with_limit(store.plan, field.limit, value)
        except PlanError as error:
            field.refuse(refusal(error, Limits))
        else:
            store.edit(f"Change limit on {label}", plan)

    def _place_field(self) -> None:
        """Keep the field over its verdict; without one it goes."""
        if self._field is None:
            return
        item = next((i for i in self.items if i.shown.about == self._field.limit), None)
        if item is None:
            self._end_field()
        else:
            self._field.place(QRect(item.mapTo(self.window(), QPoint(0, 0)), item.size()))

    def _end_field(self) -> None:
        field, self._field = self._field, None
        if field is None:
            return
        item = next((i for i in self.items if i.shown.about == field.limit), None)
        if item is not None and field.editor.line.hasFocus():
            item.setFocus()
        field.hide()
        field.deleteLater()

    def _clicked(self, item: VerdictItem) -> None:
        store, shown = self._store, item.shown
        if shown.about is None or shown.frequency_hz is None:
            culprit = store.culprit or next((p.part_id for p in store.problems if p.stops and p.part_id), None)
            if culprit is not None:
                store.select((culprit,))
            return
        store.edit("Move the mark", edits.marked(store.plan, shown.frequency_hz), merge="mark")
        self._select_deciders(shown.about)

    def _select_deciders(self, limit: str) -> None:
        """Select the parts that decide a limit at the mark, as soon as the mark is solved."""
        store = self._store
        self._awaited = limit if store.stale else None
        if not store.stale and store.answer is not None:
            store.select(deciders(store.answer, limit))

    def _tell_stale(self) -> None:
        for item in self._items:
            item.setAccessibleDescription(BEHIND if self._store.stale else "")
            item.update()
