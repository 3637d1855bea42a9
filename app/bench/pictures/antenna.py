"""The antenna, which ends in a phasor dial: the current that it has against the current that it should have."""

from __future__ import annotations

import math
from typing import Literal

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter

from app.bench.pictures.base import Picture, Shown, pen
from feedlib.plan import Placed, Plan

RADIUS = 37.0


class AntennaPicture(Picture):
    """Needle: angle from the middle of all antennas' arc, length by amplitude. Wedge: what the phase limit allows."""

    def body(self, placed: Placed, plan: Plan) -> QRectF:
        return QRectF(-RADIUS, -RADIUS, 2 * RADIUS, 2 * RADIUS)

    def paint(self, painter: QPainter, shown: Shown) -> None:
        look = shown.look
        painter.setPen(pen(look.ink))
        painter.drawLine(QPointF(-RADIUS - 6, 0), QPointF(-RADIUS, 0))
        painter.setPen(pen(look.ink if shown.hovered else look.hairline, 1.4))
        painter.setBrush(QColor(look.card))
        painter.drawEllipse(QPointF(0, 0), RADIUS, RADIUS)
        limit = shown.plan.limits.phase_balance_deg
        if limit is not None and limit < 360:
            wash = QColor(look.holds)
            wash.setAlpha(60)
            painter.setPen(Qt.PenStyle.NoPen)
            painter.setBrush(wash)
            circle = QRectF(-RADIUS + 2, -RADIUS + 2, 2 * RADIUS - 4, 2 * RADIUS - 4)
            painter.drawPie(circle, round(-limit / 2 * 16), round(limit * 16))
        painter.setPen(pen(look.hairline, 1))
        for n in range(12):
            c, s = math.cos(n * math.pi / 6), math.sin(n * math.pi / 6)
            painter.drawLine(QPointF(c * (RADIUS - 4), s * (RADIUS - 4)), QPointF(c * RADIUS, s * RADIUS))
        dial = shown.dial
        if dial is not None and not math.isnan(dial.from_middle_deg):
            angle, length = math.radians(dial.from_middle_deg), RADIUS * 0.95 * dial.of_largest
            colour = {"holds": look.holds, "fails": look.fails, "": look.ink}[self.state(shown)]
            painter.setPen(pen(colour, 2.6))
            painter.drawLine(QPointF(0, 0), QPointF(length * math.cos(angle), -length * math.sin(angle)))
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(QColor(look.ink))
        painter.drawEllipse(QPointF(0, 0), 2.6, 2.6)

    def state(self, shown: Shown) -> Literal["holds", "fails", ""]:
        limit, dial = shown.plan.limits.phase_balance_deg, shown.dial
        if limit is None or dial is None or math.isnan(dial.from_middle_deg):
            return ""
        return "holds" if abs(dial.from_middle_deg) <= limit / 2 + 1e-9 else "fails"

    def detail(self, shown: Shown) -> str:
        dial = shown.dial
        if dial is None:
            return ""
        if math.isnan(dial.from_middle_deg):
            return "not driven"
        angle = f"{dial.from_middle_deg:+.1f}"
        angle = "+0.0" if angle == "-0.0" else angle.replace("-", "−")
        return f"{100 * dial.share:.1f} %  {angle}°"
