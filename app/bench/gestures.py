"""Gestures: one class for each thing that a press, a move and a release can mean. They edit through the store only."""

from __future__ import annotations

from itertools import count
from typing import Protocol

from PySide6.QtCore import QLineF, QPoint, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainterPath
from PySide6.QtWidgets import QGraphicsPathItem, QGraphicsRectItem, QGraphicsSimpleTextItem

from app.bench.guides import Guides
from app.bench.items import JoinItem, curve
from app.bench.pictures.base import pen
from app.bench.pictures.coax import degrees_of_width, electrical_deg
from app.bench.scene import BenchScene
from app.editing import edits
from app.editing.wording import format_length, wheel_step_m
from app.look import font
from feedlib import Plan
from feedlib.conventions import guided_wavelength_m
from feedlib.parts import Coax
from feedlib.plan import Join, Port


class Offer(Protocol):
    """Who offers the parts that fit where a join was pulled into the empty bench."""

    def __call__(self, port: Port, at: QPointF, screen: QPoint) -> None: ...


class Gesture:
    """One press, some moves, one release. `cancel` leaves everything as it was."""

    def __init__(self, scene: BenchScene, start: QPointF) -> None:
        self.scene, self.store, self.start = scene, scene.store, start

    def move(self, at: QPointF, free: bool) -> None:
        """The pointer moved; free = without the grid."""

    def release(self, at: QPointF, screen: QPoint) -> None:
        """The button was let go."""

    def cancel(self) -> None:
        """Esc, or another button."""

    def drop(self) -> None:
        """Something else has changed the plan meanwhile: end without a trace."""
        self.cancel()


class MoveParts(Gesture):
    """Drag the selected parts; they snap to others' lines or the grid. Nothing is recorded before the release.

    A free port that comes near another free one joins it on release.
    """

    def __init__(self, scene: BenchScene, start: QPointF, grabbed: str) -> None:
        super().__init__(scene, start)
        self.grabbed = grabbed
        self.from_at = {i: scene.parts[i].pos() for i in self.store.selected}
        self.moved = False
        self.guides = Guides(scene, self.from_at)
        self.hint = JoinHint(scene)
        self.tie: tuple[Port, Port] | None = None
        self.into: Join | None = None

    def move(self, at: QPointF, free: bool) -> None:
        shift = at - self.start
        if not self.moved and shift.manhattanLength() < 4:
            return
        self.moved = True
        if not free:
            lead = self.from_at[self.grabbed]
            shift = self.guides.snapped(lead + shift) - lead
        for part_id, place in self.from_at.items():
            self.scene.parts[part_id].setPos(place + shift)
        self.scene.follow_places()
        self.tie, self.into = self._meeting(), self._splice(at)
        if self.into is not None:
            line = self.scene.joins[self.into]
            self.hint.show(line.shape_line(), f"put into {self.into[0]} – {self.into[1]}", at, good=True)
        elif self.tie is None:
            self.hint.hide()
        else:
            a, b = (self.scene.parts[p.part].port_at(p.number) for p in self.tie)
            self.hint.show(straight(a, b), f"join {self.tie[0]} to {self.tie[1]}", b, good=True)

    def _splice(self, at: QPointF) -> Join | None:
        """The join that a single part with no ties of its own is held over."""
        plan = self.store.plan
        if len(self.from_at) > 1 or plan.placed(self.grabbed).part.ports < 2:
            return None
        join = self.scene.join_under(at)
        ties = any(port.part == self.grabbed for tie in plan.joins for port in tie)
        return None if ties else join

    def _meeting(self) -> tuple[Port, Port] | None:
        """A free port of what is moved, and a free port of the rest that it has come near to."""
        plan, scene = self.store.plan, self.scene
        taken = {port for join in plan.joins for port in join}
        found = []
        for part_id in self.from_at:
            for number, _ in enumerate(scene.parts[part_id].ports, start=1):
                own = Port(part_id, number)
                if own in taken:
                    continue
                here = scene.parts[part_id].port_at(number)
                for other_id, item in scene.parts.items():
                    if other_id in self.from_at or not item.sceneBoundingRect().adjusted(-20, -20, 20, 20).contains(
                        here
                    ):
                        continue
                    for n, _ in enumerate(item.ports, start=1):
                        distance = QLineF(here, item.port_at(n)).length()
                        if distance <= MEETING and Port(other_id, n) not in taken:
                            found.append((distance, own, Port(other_id, n)))
        return min(found)[1:] if found else None

    def release(self, at: QPointF, screen: QPoint) -> None:
        self._clear()
        if not self.moved:
            return
        places = {i: (self.scene.parts[i].pos().x(), self.scene.parts[i].pos().y()) for i in self.from_at}
        name = self.store.plan.placed(self.grabbed).name if len(places) == 1 else f"{len(places)} parts"
        plan = edits.moved(self.store.plan, places)
        if self.into is not None:
            self.store.edit(f"Put {name} into the join", edits.spliced(plan, self.into, self.grabbed))
        elif self.tie is None:
            self.store.edit(f"Move {name}", plan)
        else:
            self.store.edit(f"Join {self.tie[0]} to {self.tie[1]}", edits.joined(plan, *self.tie))

    def cancel(self) -> None:
        self._clear()
        for placed in self.store.plan.parts:
            if placed.id in self.from_at:
                self.scene.parts[placed.id].setPos(QPointF(*placed.at))
        self.scene.follow_places()

    def _clear(self) -> None:
        self.guides.remove()
        self.hint.remove()


MEETING = 16.0
"""How near two ports come to be joined when a part is moved."""


class JoinHint:
    """The join that would be made, and the words that say so or say why not."""

    def __init__(self, scene: BenchScene) -> None:
        self._scene = scene
        self._line, self._words = QGraphicsPathItem(), QGraphicsSimpleTextItem()
        self._line.setZValue(8)
        self._words.setZValue(9)
        self._words.setFont(font("small"))
        self._words.setFlag(QGraphicsSimpleTextItem.GraphicsItemFlag.ItemIgnoresTransformations)
        for item in (self._line, self._words):
            item.hide()
            scene.addItem(item)

    def show(self, path: QPainterPath, words: str, at: QPointF, *, good: bool | None) -> None:
        """good : True = will join, False = will not, None = nothing to join to yet."""
        look = self._scene.look
        colour = {True: look.holds, False: look.fails, None: look.soft}[good]
        stroke = pen(colour, 2.4)
        stroke.setStyle(Qt.PenStyle.SolidLine if good else Qt.PenStyle.DashLine)
        self._line.setPen(stroke)
        self._line.setPath(path)
        self._words.setText(words)
        self._words.setBrush(QColor(colour))
        self._words.setPos(at + QPointF(14, 10))
        self._line.show()
        self._words.show()

    def hide(self) -> None:
        """Say nothing for now."""
        self._line.hide()
        self._words.hide()

    def remove(self) -> None:
        """Take it off the bench."""
        self._scene.removeItem(self._line)
        self._scene.removeItem(self._words)


def straight(a: QPointF, b: QPointF) -> QPainterPath:
    """A straight path."""
    path = QPainterPath(a)
    path.lineTo(b)
    return path


class BoxSelect(Gesture):
    """Drag a rectangle over the parts to select."""

    def __init__(self, scene: BenchScene, start: QPointF, keep: tuple[str, ...]) -> None:
        super().__init__(scene, start)
        self.keep, self.before = keep, self.store.selected
        self.box = QGraphicsRectItem()
        self.box.setPen(pen(scene.look.soft, 1))
        wash = QColor(scene.look.soft)
        wash.setAlpha(35)
        self.box.setBrush(wash)
        self.box.setZValue(9)
        scene.addItem(self.box)

    def move(self, at: QPointF, free: bool) -> None:
        rect = QRectF(self.start, at).normalized()
        self.box.setRect(rect)
        inside = [i for i, item in self.scene.parts.items() if rect.intersects(item.mapRectToScene(item.body))]
        self.store.select(tuple(dict.fromkeys((*self.keep, *inside))))

    def release(self, at: QPointF, screen: QPoint) -> None:
        self.scene.removeItem(self.box)

    def cancel(self) -> None:
        self.scene.removeItem(self.box)
        self.store.select(self.before)


class PullJoin(Gesture):
    """Pull a join from a port: to another port, on to a full T (which gets one more), or into the empty bench."""

    def __init__(self, scene: BenchScene, start: QPointF, port: Port, offer: Offer) -> None:
        super().__init__(scene, start)
        self.port, self.offer = port, offer
        item = scene.parts[port.part]
        self.anchor = item.port_at(port.number)
        self.side = 1 if item.ports[port.number - 1].x() > item.body.center().x() else -1
        self.hint = JoinHint(scene)
        taken = self.store.plan.mate(port) is not None
        self.refused = f"{port} is joined already; take that join away first" if taken else None

    def move(self, at: QPointF, free: bool) -> None:
        goal = self._goal(at)
        reason = self.refused or (edits.why_no_join(self.store.plan, self.port, goal) if goal else None)
        item = self.scene.parts[goal.part] if goal else None
        end = item.port_at(goal.number) if goal and item and goal.number <= len(item.ports) else at
        words = reason or (f"join {self.port} to {goal}" if goal else "")
        path = curve(self.anchor, end, self.side, -self.side)
        self.hint.show(path, words, at, good=False if reason else True if goal else None)

    def _goal(self, at: QPointF) -> Port | None:
        """The port at a place; on a junction's body its first free port, or one more when it is full."""
        goal = self.scene.port_under(at)
        under = self.scene.part_under(at)
        if goal is not None and (self.store.plan.mate(goal) is None or under is None):
            return None if goal == self.port else goal
        if under is None or under.shown.placed.id == self.port.part:
            return None
        placed = self.store.plan.placed(under.shown.placed.id)
        free = [p for p in placed.ports() if self.store.plan.mate(p) is None]
        if free:
            return free[0]
        return Port(placed.id, placed.part.ports + 1) if edits.can_grow(placed.part) else goal

    def release(self, at: QPointF, screen: QPoint) -> None:
        self.cancel()
        goal = self._goal(at)
        if self.refused is not None:
            return
        if goal is None:
            if (at - self.start).manhattanLength() > 12:
                self.offer(self.port, at, screen)
        elif edits.why_no_join(self.store.plan, self.port, goal) is None:
            plan = self.store.plan
            if goal.number > plan.placed(goal.part).part.ports:
                plan = edits.with_ports(plan, goal.part, goal.number)
            self.store.edit(f"Join {self.port} to {goal}", edits.joined(plan, self.port, goal))

    def cancel(self) -> None:
        self.hint.remove()


_DRAGS = count()
"""Tells one drag of an end from the next, which may be the same object again."""


class TurnEnd(Gesture):
    """Drag a swell's end: the section gets longer or shorter, live, with its length beside the pointer."""

    def __init__(self, scene: BenchScene, start: QPointF, part_id: str) -> None:
        super().__init__(scene, start)
        self.part_id = part_id
        self.plan = self.store.plan
        self.act = f"end {next(_DRAGS)}"
        self.moved = False
        item = scene.parts[part_id]
        self.centre_x, self.grip = item.pos().x(), abs(start.x() - item.pos().x()) - item.body.width() / 2
        self.words = QGraphicsSimpleTextItem()
        self.words.setFont(font("text", bold=True))
        self.words.setZValue(9)
        self.words.setFlag(QGraphicsSimpleTextItem.GraphicsItemFlag.ItemIgnoresTransformations)
        self.words.setBrush(QColor(scene.look.ink))
        scene.addItem(self.words)

    def move(self, at: QPointF, free: bool) -> None:
        if not self.moved and (at - self.start).manhattanLength() < 4:
            return
        self.moved = True
        part = self.plan.placed(self.part_id).part
        assert isinstance(part, Coax)
        cable = self.plan.cables.get(part.cable)
        factor = cable.velocity_factor if cable is not None else 1.0
        mark_hz = self.plan.band.marked_hz
        degrees = degrees_of_width(2 * (abs(at.x() - self.centre_x) - self.grip))
        step_m = wheel_step_m(frequency_hz=mark_hz, velocity_factor=factor) * (0.1 if free else 1)
        length_m = round(degrees / 360 * guided_wavelength_m(mark_hz, factor) / step_m) * step_m
        plan = edits.turned_length(self.plan, [self.part_id], length_m - part.length_m)
        name = self.plan.placed(self.part_id).name
        self._put(f"Turn {name}", plan)
        now = self.store.plan.placed(self.part_id).part
        assert isinstance(now, Coax)
        length = format_length(now.length_m, "mm", frequency_hz=None, velocity_factor=None)
        self.words.setText(f"{length}  {electrical_deg(now, cable, mark_hz):.1f}°")
        self.words.setPos(at + QPointF(16, -26))

    def _put(self, text: str, plan: Plan) -> None:
        self.store.edit(text, plan, merge=self.act)

    def release(self, at: QPointF, screen: QPoint) -> None:
        self.scene.removeItem(self.words)

    def cancel(self) -> None:
        self.drop()
        self._put("", self.plan)  # back at its start the act is gone, with nothing to redo

    def drop(self) -> None:
        self.scene.removeItem(self.words)


def hover_join(scene: BenchScene, at: QPointF) -> None:
    """Let the join under the pointer stand out."""
    under = scene.join_under(at) if scene.part_under(at) is None else None
    for join, item in scene.joins.items():
        if item.hovered != (join == under):
            _hover(item, join == under)


def _hover(item: JoinItem, on: bool) -> None:
    item.hovered = on
    item.update()
