"""The T joint: a dot, or a bar when many arms meet."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QColor, QPainter

from app.bench.pictures.base import PORT_PITCH, Picture, Shown, pen
from feedlib.plan import Placed, Plan


class TeePicture(Picture):
    """Port 1 at the left, the others at the right."""

    def body(self, placed: Placed, plan: Plan) -> QRectF:
        half = max(9.0, (placed.part.ports - 2) * PORT_PITCH / 2)
        return QRectF(-9, -half, 18, 2 * half)

    def paint(self, painter: QPainter, shown: Shown) -> None:
        look, body = shown.look, self.body(shown.placed, shown.plan)
        painter.setPen(pen(look.ink, 2))
        many = shown.placed.part.ports > 4
        for port in self.ports(shown.placed, shown.plan):
            painter.drawLine(QPointF(0, port.y() if many else 0), port)
        if many:
            painter.drawLine(QPointF(0, body.top() + 9), QPointF(0, body.bottom() - 9))
        painter.setPen(pen(look.ink, 4 if shown.hovered else 3))
        painter.setBrush(QColor(look.card))
        painter.drawEllipse(QPointF(0, 0), 6, 6)
