"""What stands on the bench: parts, joins and impedance flags, as graphics items that only show."""

from __future__ import annotations

import math

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPainterPath, QPainterPathStroker
from PySide6.QtWidgets import QGraphicsItem, QStyleOptionGraphicsItem, QWidget

from app.bench.pictures import PICTURES, Shown
from app.bench.pictures.base import PORT_RADIUS, growth, is_far, pen, text
from app.look import SIGNS, Look, font
from feedlib.plan import Join, Port

TEXT_GAP = 8.0
TEXT_LINE = 17.0
GRAB = 9.0
"""How near to a port or a join the pointer takes hold of it."""


class PartItem(QGraphicsItem):
    """One part: its picture, ports, name and second line. `shown` is all it draws from."""

    def __init__(self, shown: Shown) -> None:
        super().__init__()
        self.shown = shown
        self.selected = False
        self.open_ports: frozenset[int] = frozenset()
        self.trouble = False
        self.setZValue(2)
        self.setPos(QPointF(*shown.placed.at))
        self._measure()

    def draw_from(self, shown: Shown) -> None:
        """Draw from something else from now on."""
        changed = shown.placed.part is not self.shown.placed.part or shown.plan.band != self.shown.plan.band
        cables = shown.plan.cables is not self.shown.plan.cables
        self.shown = shown
        if changed or cables:
            self.prepareGeometryChange()
            self._measure()
        self.update()

    def _measure(self) -> None:
        picture, placed, plan = PICTURES[self.shown.placed.part.KIND], self.shown.placed, self.shown.plan
        self.body = picture.body(placed, plan)
        self.ports = picture.ports(placed, plan)
        reach = self.body
        for port in self.ports:
            reach = reach.united(QRectF(port.x() - GRAB, port.y() - GRAB, 2 * GRAB, 2 * GRAB))
        half = max(140.0, self.body.width() / 2 + 60, reach.width() / 2 + 8)  # words at small sizes run wider
        self._bounds = QRectF(-half, reach.top() - 34, 2 * half, reach.height() + 34 + TEXT_GAP + 4 * TEXT_LINE)

    def port_at(self, number: int) -> QPointF:
        """Where a port (from 1) is on the bench."""
        return self.mapToScene(self.ports[number - 1])

    def port_near(self, at: QPointF) -> int | None:
        """The port (from 1) within reach of a point on the bench."""
        here = self.mapFromScene(at)
        reach = [(math.hypot(p.x() - here.x(), p.y() - here.y()), n) for n, p in enumerate(self.ports, start=1)]
        distance, number = min(reach)
        return number if distance <= GRAB else None

    def boundingRect(self) -> QRectF:
        return self._bounds

    def shape(self) -> QPainterPath:
        path = QPainterPath()
        path.setFillRule(Qt.FillRule.WindingFill)  # no holes where body and ports overlap
        path.addRect(self.body.adjusted(-5, -5, 5, 5))
        for port in self.ports:
            path.addEllipse(port, GRAB, GRAB)
        return path

    def paint(self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None) -> None:
        shown, look = self.shown, self.shown.look
        picture = PICTURES[shown.placed.part.KIND]
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if self.selected:
            painter.setPen(pen(look.ink, 1.4))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRoundedRect(self._frame(growth(painter)), 8, 8)
        painter.save()
        picture.paint(painter, shown)
        painter.restore()
        self._paint_ports(painter, look)
        y = self.body.bottom() + TEXT_GAP
        if shown.placed.part.KIND != "radio":
            text(painter, shown.name, QPointF(0, y), look.ink, bold=True, grows=True)
            y += TEXT_LINE * growth(painter)
        detail, state = picture.detail(shown), picture.state(shown)
        if detail and (state or self.selected or not is_far(painter)):
            sign = f"{SIGNS[state]} " if state else ""
            colour = look.verdict(state) if state else look.soft
            widest = max(230.0, self.body.width() + 90)
            text(painter, sign + detail, QPointF(0, y), colour, widest=widest, grows=True)
        if self.trouble:
            self._paint_trouble(painter, look)

    def _frame(self, grown: float) -> QRectF:
        """What a selected part's frame holds: its shape and its words."""
        shape = self.body.adjusted(-10, -12, 10, 12)
        detail = PICTURES[self.shown.placed.part.KIND].detail(self.shown)
        lines = [] if self.shown.placed.part.KIND == "radio" else [(self.shown.name, True)]
        lines += [(f"✓ {detail}", False)] if detail else []
        width = max(QFontMetricsF(font("small", bold=bold)).horizontalAdvance(words) for words, bold in lines)
        width = min(grown * width, max(230.0, self.body.width() + 90)) / 2 + 6
        height = TEXT_GAP + grown * TEXT_LINE * len(lines) + 4
        return shape.united(QRectF(-width, self.body.bottom(), 2 * width, height))

    def _paint_ports(self, painter: QPainter, look: Look) -> None:
        for number, port in enumerate(self.ports, start=1):
            is_open = number in self.open_ports
            painter.setPen(pen(look.near if is_open else look.ink, 1.6))
            painter.setBrush(QColor(look.paper))
            if is_open:  # a square says open where colour cannot
                painter.drawRect(
                    QRectF(port.x() - PORT_RADIUS, port.y() - PORT_RADIUS, 2 * PORT_RADIUS, 2 * PORT_RADIUS)
                )
            else:
                painter.drawEllipse(port, PORT_RADIUS - 0.5, PORT_RADIUS - 0.5)

    def _paint_trouble(self, painter: QPainter, look: Look) -> None:
        at = QPointF(self.body.right() + 2, self.body.top() - 12)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(QColor(look.fails))
        painter.drawEllipse(at, 9, 9)
        text(painter, SIGNS["fails"], at - QPointF(0, 8), look.card, bold=True)


class JoinItem(QGraphicsItem):
    """A join as a curve between two ports."""

    def __init__(self, join: Join, first: PartItem, second: PartItem, look: Look) -> None:
        super().__init__()
        self.join, self.first, self.second, self.look = join, first, second, look
        self.selected = self.hovered = False
        self.setZValue(1)
        self._path = QPainterPath()
        self.follow()

    def follow(self) -> None:
        """Go where the ports are now."""
        a, b = (
            (item.port_at(port.number), item.ports[port.number - 1].x() - item.body.center().x())
            for item, port in zip((self.first, self.second), self.join, strict=True)
        )
        self.prepareGeometryChange()
        self._path = curve(a[0], b[0], 1 if a[1] > 0 else -1, 1 if b[1] > 0 else -1)

    def shape_line(self) -> QPainterPath:
        """The curve itself."""
        return self._path

    def flag_place(self) -> tuple[QPointF, float]:
        """Where an impedance flag stands, and how long its stem is: at a coax's end above its swell, else half-way."""
        for item, port in zip((self.second, self.first), reversed(self.join), strict=True):
            if item.shown.placed.part.KIND == "coax":
                return item.port_at(port.number), item.body.height() / 2 + 12
        point = self._path.pointAtPercent(0.5) if self._path.length() > 0 else self._path.currentPosition()
        return point, 24.0

    def boundingRect(self) -> QRectF:
        return self._path.boundingRect().adjusted(-GRAB, -GRAB, GRAB, GRAB)

    def shape(self) -> QPainterPath:
        stroker = QPainterPathStroker()
        stroker.setWidth(2 * GRAB)
        return stroker.createStroke(self._path)

    def paint(self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None) -> None:
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(pen(self.look.ink, 3.2 if self.selected or self.hovered else 1.7))
        painter.drawPath(self._path)


def curve(a: QPointF, b: QPointF, side_a: int, side_b: int) -> QPainterPath:
    """A soft curve that leaves both ports sideways."""
    path = QPainterPath(a)
    reach = min(120.0, max(16.0, 0.5 * abs(b.x() - a.x()) + 0.15 * abs(b.y() - a.y())))
    path.cubicTo(a + QPointF(side_a * reach, 0), b + QPointF(side_b * reach, 0), b)
    return path


class FlagItem(QGraphicsItem):
    """An impedance flag: what the wave sees at a join, on a stem above it."""

    HEIGHT = 21.0

    def __init__(self, look: Look) -> None:
        super().__init__()
        self.look, self._words, self._width, self._stem = look, "", 0.0, 24.0
        self.setZValue(3)

    def say(self, words: str, at: QPointF, stem: float) -> None:
        """Say `words` above a point."""
        self.setPos(at)
        if words != self._words or stem != self._stem:
            self.prepareGeometryChange()
            self._words, self._stem = words, stem
            self._width = QFontMetricsF(font("small")).horizontalAdvance(words) + 14
        self.update()

    def boundingRect(self) -> QRectF:
        width, height = 1.7 * self._width, self._stem + 1.7 * self.HEIGHT
        return QRectF(-width / 2 - 1, -height - 1, width + 2, height + 2)

    def paint(self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None) -> None:
        if is_far(painter):
            return
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        stem = pen(self.look.soft, 1)
        stem.setStyle(Qt.PenStyle.DotLine)
        painter.setPen(stem)
        painter.drawLine(QPointF(0, -3), QPointF(0, -self._stem))
        width, height = self._width * growth(painter), self.HEIGHT * growth(painter)
        rect = QRectF(-width / 2, -self._stem - height, width, height)
        painter.setPen(pen(self.look.hairline, 1.2))
        painter.setBrush(QColor(self.look.card))
        painter.drawRoundedRect(rect, 5, 5)
        text(painter, self._words, QPointF(0, rect.top() + 2), self.look.ink, widest=400, grows=True)


def port_key(port: Port) -> str:
    """A port as the answer names it."""
    return f"{port.part}:{port.number}"
