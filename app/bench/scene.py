"""The bench's scene: items that follow the plan by its differences, and are repainted from the answer."""

from __future__ import annotations

import html

import numpy as np
from PySide6.QtCore import QObject, QPointF, QRect, QRectF
from PySide6.QtGui import QColor, QPainter
from PySide6.QtWidgets import QGraphicsScene

from app.bench.dials import dials_of
from app.bench.items import FlagItem, JoinItem, PartItem, port_key
from app.bench.pictures import Shown
from app.bench.pictures.base import Dial, pen
from app.editing.wording import format_impedance
from app.look import Look
from app.store import Store
from app.units import units
from feedlib import Plan
from feedlib.parts.base import Junction, ManyPort
from feedlib.parts.radio import Radio
from feedlib.plan import Join, Placed, Port

GRID = 24.0
MOST_FLAGS = 40
"""With more joins than this only those of the selected parts carry flags."""


class BenchScene(QGraphicsScene):
    """Holds one item for each part and each join of the store's plan."""

    def __init__(self, store: Store, look: Look, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.store, self.look = store, look
        self.parts: dict[str, PartItem] = {}
        self.joins: dict[Join, JoinItem] = {}
        self.flags: dict[Join, FlagItem] = {}
        self.selected_join: Join | None = None
        self._dials: dict[str, Dial] = {}
        self._unit = units().length
        self.setItemIndexMethod(QGraphicsScene.ItemIndexMethod.NoIndex)
        store.plan_changed.connect(self._follow_plan)
        store.answer_changed.connect(self.show_answer)
        store.selection_changed.connect(self._follow_selection)
        store.hover_changed.connect(self._follow_hover)
        units().changed.connect(self._follow_unit)
        self._follow_plan(None, store.plan)
        self.show_answer()

    def set_look(self, look: Look) -> None:
        """Draw in another theme."""
        self.look = look
        for join in self.joins.values():
            join.look = look
        for flag in self.flags.values():
            flag.look = look
        self._show_all()
        self.update()

    def _follow_plan(self, old: Plan | None, plan: Plan) -> None:
        placed = {p.id: p for p in plan.parts}
        joins = set(plan.joins)
        for join in [j for j in self.joins if j not in joins]:
            self.removeItem(self.joins.pop(join))
            if join in self.flags:
                self.removeItem(self.flags.pop(join))
        for part_id in [p for p in self.parts if p not in placed]:
            self.removeItem(self.parts.pop(part_id))
        before = {} if old is None else {p.id: p for p in old.parts}
        for part_id, part in placed.items():
            item = self.parts.get(part_id)
            if item is None:
                self.parts[part_id] = item = PartItem(self._shown(part))
                self.addItem(item)
            elif before.get(part_id) is not part or (old is not None and _dressed(old) != _dressed(plan)):
                item.setPos(QPointF(*part.at))
                item.draw_from(self._shown(part))
        for join in plan.joins:
            if join not in self.joins:
                a, b = join
                self.joins[join] = JoinItem(join, self.parts[a.part], self.parts[b.part], self.look)
                self.addItem(self.joins[join])
        if self.selected_join not in self.joins:
            self.selected_join = None
        self._mark_troubles()
        self._follow_selection()
        self.follow_places()

    def follow_places(self) -> None:
        """Bring joins and flags to where the parts stand now."""
        for join in self.joins.values():
            join.follow()
        self._show_flags()

    def show_answer(self) -> None:
        """Repaint everything from the store's answer."""
        answer = self.store.answer
        self._dials = dials_of(answer)
        self._show_all()
        self._mark_troubles()
        self._show_flags()

    def _show_all(self) -> None:
        for placed in self.store.plan.parts:
            if placed.id in self.parts:
                self.parts[placed.id].draw_from(self._shown(placed))

    def _shown(self, placed: Placed) -> Shown:
        store = self.store
        hovered, dial = store.hovered == placed.id, self._dials.get(placed.id)
        return Shown(placed, store.plan, store.answer, self.look, hovered, dial, self._unit)

    def _mark_troubles(self) -> None:
        stopped = {p.part_id for p in self.store.problems if p.stops} | {self.store.culprit}
        ports: dict[str, set[int]] = {}
        for join in self.store.plan.joins:
            for port in join:
                ports.setdefault(port.part, set()).add(port.number)
        for part_id, item in self.parts.items():
            item.trouble = part_id in stopped
            item.open_ports = frozenset(range(1, len(item.ports) + 1)) - ports.get(part_id, set())
            told = [html.escape(f"{p.text} {p.advice}") for p in self.store.problems if p.part_id == part_id]
            name = getattr(item.shown.placed.part, "matched_set", None)
            if name:
                told.append(html.escape(f"Matched set {name}: its sections share cable, length and ends."))
            item.setToolTip(f"<p>{'<br>'.join(told)}</p>" if told else "")

    def _show_flags(self) -> None:
        """Flags at the joins of the radio, of junctions and of splitters, and of what is selected."""
        answer, plan = self.store.answer, self.store.plan
        wanted: dict[Join, str] = {}
        if answer is not None:
            seen = answer.mark.port_impedance_ohm
            kinds = {p.id: p.part for p in plan.parts}
            few = len(plan.joins) <= MOST_FLAGS
            for join in plan.joins:
                busy = any(isinstance(kinds[p.part], Junction | ManyPort | Radio) for p in join)
                if (few and busy) or any(p.part in self.store.selected for p in join):
                    z = seen.get(port_key(join[0]))  # None where the answer is behind the plan
                    if z is not None and not np.isnan(z[0]):
                        wanted[join] = format_impedance(complex(z[0]))
        for join in [j for j in self.flags if j not in wanted]:
            self.removeItem(self.flags.pop(join))
        for join, words in wanted.items():
            flag = self.flags.get(join)
            if flag is None:
                self.flags[join] = flag = FlagItem(self.look)
                self.addItem(flag)
            flag.say(words, *self.joins[join].flag_place())

    def _follow_selection(self) -> None:
        for part_id, item in self.parts.items():
            chosen = part_id in self.store.selected
            if chosen != item.selected:
                item.selected = chosen
                item.update()
        if self.store.selected:
            self.select_join(None)
        self._show_flags()

    def select_join(self, join: Join | None) -> None:
        """Select one join, or none."""
        self.selected_join = join
        for other, item in self.joins.items():
            item.selected = other == join
            item.update()

    def _follow_unit(self) -> None:
        self._unit = units().length
        self._show_all()

    def _follow_hover(self) -> None:
        for placed in self.store.plan.parts:
            item = self.parts[placed.id]
            if item.shown.hovered != (placed.id == self.store.hovered):
                item.draw_from(self._shown(placed))

    def part_under(self, at: QPointF) -> PartItem | None:
        """The part whose shape is under a point."""
        return next((i for i in self.items(at) if isinstance(i, PartItem)), None)

    def port_under(self, at: QPointF) -> Port | None:
        """The port within reach of a point; free ones first."""
        found = [
            Port(part_id, number)
            for part_id, item in self.parts.items()
            if item.sceneBoundingRect().contains(at) and (number := item.port_near(at)) is not None
        ]
        return min(found, key=lambda p: self.store.plan.mate(p) is not None, default=None)

    def join_under(self, at: QPointF) -> Join | None:
        """The join under a point."""
        return next((i.join for i in self.items(at) if isinstance(i, JoinItem)), None)

    def contents(self) -> QRectF:
        """The rectangle that holds everything drawn."""
        rect = QRectF()
        for item in (*self.parts.values(), *self.flags.values()):
            rect = rect.united(item.sceneBoundingRect())
        return rect if not rect.isEmpty() else QRectF(-200, -150, 400, 300)

    def drawBackground(self, painter: QPainter, rect: QRectF | QRect) -> None:
        rect = QRectF(rect)
        painter.fillRect(rect, QColor(self.look.paper))
        scale = painter.transform().m11()
        step = GRID if scale > 0.45 else 4 * GRID
        painter.setPen(pen(self.look.hairline, 1.4 / max(scale, 0.2)))
        left, top = int(rect.left() // step), int(rect.top() // step)
        columns, rows = int(rect.width() // step) + 2, int(rect.height() // step) + 2
        if columns * rows < 6000:
            painter.drawPoints(
                [QPointF((left + x) * step, (top + y) * step) for x in range(columns) for y in range(rows)]
            )


def _dressed(plan: Plan) -> tuple[object, ...]:
    """What of a plan every picture may show."""
    return plan.band, plan.cables, plan.limits
