"""Splitters and hybrids, each form with a small sketch of its circuit."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPainterPath

from app.bench.pictures.base import PORT_PITCH, Picture, Shown, box, pen, polyline, stubs, text
from app.editing.wording import format_frequency
from feedlib.parts import Splitter
from feedlib.plan import Placed, Plan

NAMES = {
    "wilkinson": "Wilkinson",
    "resistive": "resistive",
    "branch_line": "branch line",
    "rat_race": "rat race",
}


class SplitterPicture(Picture):
    """Outputs at the right; a hybrid's fourth port is below port 1 at the left."""

    def body(self, placed: Placed, plan: Plan) -> QRectF:
        assert isinstance(placed.part, Splitter)
        half = max(30.0, placed.part.outputs * PORT_PITCH / 2 + 4)
        return QRectF(-34, -half, 68, 2 * half)

    def ports(self, placed: Placed, plan: Plan) -> list[QPointF]:
        assert isinstance(placed.part, Splitter)
        if placed.part.ports == 4 and placed.part.form in ("branch_line", "rat_race"):
            left, right, y = -40.0, 40.0, 17.0
            if placed.part.form == "branch_line":
                return [QPointF(left, -y), QPointF(right, -y), QPointF(right, y), QPointF(left, y)]
            return [QPointF(left, -y), QPointF(right, -y), QPointF(right, y), QPointF(left, y)]
        return super().ports(placed, plan)

    def paint(self, painter: QPainter, shown: Shown) -> None:
        part = shown.placed.part
        assert isinstance(part, Splitter)
        stubs(painter, self, shown)
        box(painter, self.body(shown.placed, shown.plan), shown.look)
        painter.setPen(pen(shown.look.impedance_colour(part.z0_ohm * 1.414), 2))
        getattr(self, f"_{part.form}")(painter)
        self._numbers(painter, shown)

    @staticmethod
    def _wilkinson(painter: QPainter) -> None:
        painter.setBrush(Qt.BrushStyle.NoBrush)
        path = QPainterPath(QPointF(-22, 0))
        path.cubicTo(-10, -20, 4, -16, 12, -13)
        path.moveTo(-22, 0)
        path.cubicTo(-10, 20, 4, 16, 12, 13)
        painter.drawPath(path)
        polyline(painter, [(12, -13), (12, -8), (9, -6), (15, -2), (9, 2), (15, 6), (12, 8), (12, 13)])

    @staticmethod
    def _resistive(painter: QPainter) -> None:
        for dx, dy in ((-1.0, 0.0), (0.7, -0.7), (0.7, 0.7)):
            across = (-dy, dx)
            points = [(dx * 4.0, dy * 4.0)]
            points += [
                (dx * (7 + 3 * n) + across[0] * 4 * (-1) ** n, dy * (7 + 3 * n) + across[1] * 4 * (-1) ** n)
                for n in range(4)
            ]
            points.append((dx * 21.0, dy * 21.0))
            polyline(painter, points)

    @staticmethod
    def _branch_line(painter: QPainter) -> None:
        painter.drawLine(QPointF(-22, -17), QPointF(22, -17))
        painter.drawLine(QPointF(-22, 17), QPointF(22, 17))
        painter.drawLine(QPointF(-13, -17), QPointF(-13, 17))
        painter.drawLine(QPointF(13, -17), QPointF(13, 17))

    @staticmethod
    def _rat_race(painter: QPainter) -> None:
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawEllipse(QPointF(0, 0), 17, 17)
        for x, y in ((-22, -17), (22, -17), (22, 17), (-22, 17)):
            painter.drawLine(QPointF(x, y), QPointF(x * 0.6, y * 0.66))

    def _numbers(self, painter: QPainter, shown: Shown) -> None:
        part = shown.placed.part
        assert isinstance(part, Splitter)
        if part.form in ("branch_line", "rat_race"):
            for number, port in enumerate(self.ports(shown.placed, shown.plan), start=1):
                at = QPointF(port.x() * 0.7, port.y() - 15 if port.y() < 0 else port.y() - 1)
                text(painter, str(number), at, shown.look.soft)

    def detail(self, shown: Shown) -> str:
        part = shown.placed.part
        assert isinstance(part, Splitter)
        centre = f" · {format_frequency(part.centre_hz)}" if part.centre_hz and part.form != "resistive" else ""
        return f"{NAMES[part.form]} · {part.z0_ohm:g} Ω{centre}"
