"""Gestures: one class for each thing that a press, a move and a release can mean. They edit through the store only."""

from __future__ import annotations

from typing import Protocol

from PySide6.QtCore import QPoint, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainterPath
from PySide6.QtWidgets import QGraphicsPathItem, QGraphicsRectItem, QGraphicsSimpleTextItem

from app.bench.items import JoinItem, curve
from app.bench.pictures.base import pen
from app.bench.scene import GRID, BenchScene
from app.editing import edits
from app.look import font
from feedlib.plan import Port


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


class MoveParts(Gesture):
    """Drag the selected parts; they snap to the grid, and nothing is recorded before the release."""

    def __init__(self, scene: BenchScene, start: QPointF, grabbed: str) -> None:
        super().__init__(scene, start)
        self.grabbed = grabbed
        self.from_at = {i: scene.parts[i].pos() for i in self.store.selected}
        self.moved = False

    def move(self, at: QPointF, free: bool) -> None:
        shift = at - self.start
        if not self.moved and shift.manhattanLength() < 4:
            return
        self.moved = True
        if not free:
            lead = self.from_at[self.grabbed]
            shift = QPointF(_snapped(lead.x() + shift.x()) - lead.x(), _snapped(lead.y() + shift.y()) - lead.y())
        for part_id, place in self.from_at.items():
            self.scene.parts[part_id].setPos(place + shift)
        self.scene.follow_places()

    def release(self, at: QPointF, screen: QPoint) -> None:
        if not self.moved:
            return
        places = {i: (self.scene.parts[i].pos().x(), self.scene.parts[i].pos().y()) for i in self.from_at}
        name = self.store.plan.placed(self.grabbed).name if len(places) == 1 else f"{len(places)} parts"
        self.store.edit(f"Move {name}", edits.moved(self.store.plan, places))

    def cancel(self) -> None:
        for part_id, place in self.from_at.items():
            self.scene.parts[part_id].setPos(place)
        self.scene.follow_places()


def _snapped(value: float) -> float:
    return round(value / (GRID / 2)) * GRID / 2


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
    """Pull a join from a port: to another port, or into the empty bench to be offered what fits there."""

    def __init__(self, scene: BenchScene, start: QPointF, port: Port, offer: Offer) -> None:
        super().__init__(scene, start)
        self.port, self.offer = port, offer
        item = scene.parts[port.part]
        self.anchor = item.port_at(port.number)
        self.side = 1 if item.ports[port.number - 1].x() > item.body.center().x() else -1
        self.line = QGraphicsPathItem()
        self.line.setZValue(8)
        self.words = QGraphicsSimpleTextItem()
        self.words.setFont(font("small"))
        self.words.setZValue(9)
        scene.addItem(self.line)
        scene.addItem(self.words)
        taken = self.store.plan.mate(port) is not None
        self.refused = f"{port} is joined already; take that join away first" if taken else None

    def move(self, at: QPointF, free: bool) -> None:
        goal = self._goal(at)
        reason = self.refused or (edits.why_no_join(self.store.plan, self.port, goal) if goal else None)
        look = self.scene.look
        colour = look.fails if reason else look.holds if goal else look.soft
        end = self.scene.parts[goal.part].port_at(goal.number) if goal else at
        path: QPainterPath = curve(self.anchor, end, self.side, -self.side)
        stroke = pen(colour, 2.4)
        stroke.setStyle(Qt.PenStyle.SolidLine if goal and not reason else Qt.PenStyle.DashLine)
        self.line.setPen(stroke)
        self.line.setPath(path)
        self.words.setText(reason or (f"join {self.port} to {goal}" if goal else ""))
        self.words.setBrush(QColor(colour))
        self.words.setPos(at + QPointF(14, 10))

    def _goal(self, at: QPointF) -> Port | None:
        goal = self.scene.port_under(at)
        return None if goal == self.port else goal

    def release(self, at: QPointF, screen: QPoint) -> None:
        self.cancel()
        goal = self._goal(at)
        if self.refused is not None:
            return
        if goal is None:
            if (at - self.start).manhattanLength() > 12:
                self.offer(self.port, at, screen)
        elif edits.why_no_join(self.store.plan, self.port, goal) is None:
            self.store.edit(f"Join {self.port} to {goal}", edits.joined(self.store.plan, self.port, goal))

    def cancel(self) -> None:
        self.scene.removeItem(self.line)
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
