"""Coax as a swell: its edges are the standing wave's voltage along it at the mark."""

from __future__ import annotations

import math

import numpy as np
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPen, QPolygonF

from app.bench.pictures.base import Picture, Shown, one_line, pen, stubs, text
from app.editing.wording import format_length
from app.look import font
from feedlib.conventions import Array, guided_wavelength_m
from feedlib.parts import Coax
from feedlib.plan import Cable, Placed, Plan

WIDEST = 360.0
UNIT_HEIGHT = 19.0
"""Half-height of a matched section: |V| = the forward wave at its entry."""
TALLEST = 2.4
TICK_DEG = 45.0
TICK_PITCH = 5.0
FEW_POINTS, MANY_POINTS = 33, 193
"""Samples along a drawing; a section of more than a wave takes many."""
DENSE_DEG = 180.0 * 40
"""Longer sections ripple faster than can be drawn: then the crests are drawn."""


def electrical_deg(part: Coax, cable: Cable | None, frequency_hz: float) -> float:
    """Electrical length of the cable itself at a frequency."""
    factor = cable.velocity_factor if cable else 1.0
    return 360 * part.length_m / guided_wavelength_m(frequency_hz, factor)


def drawn_width(degrees: float) -> float:
    """Bench units for an electrical length: about straight at first, then softly flattening, WIDEST at most."""
    return min(WIDEST, 44 + 78 * math.log2(1 + degrees / 45))


def degrees_of_width(width: float) -> float:
    """The electrical length that is drawn so wide."""
    return float(max(0.0, 45 * (2 ** ((min(width, WIDEST) - 44) / 78) - 1)))


class CoaxPicture(Picture):
    """The swell, in the colour of its characteristic impedance, with a tick every 45 electrical degrees."""

    def body(self, placed: Placed, plan: Plan) -> QRectF:
        assert isinstance(placed.part, Coax)
        degrees = electrical_deg(placed.part, plan.cables.get(placed.part.cable), plan.band.marked_hz)
        width = drawn_width(degrees)
        return QRectF(-width / 2, -UNIT_HEIGHT, width, 2 * UNIT_HEIGHT)

    def paint(self, painter: QPainter, shown: Shown) -> None:
        part, look = shown.placed.part, shown.look
        assert isinstance(part, Coax)
        cable = shown.plan.cables.get(part.cable)
        body = self.body(shown.placed, shown.plan)
        colour = look.impedance_colour(cable.z0_ohm) if cable else look.soft
        stubs(painter, self, shown)
        height = self._heights(shown)
        xs = np.linspace(body.left(), body.right(), height.size).tolist()
        upper = [QPointF(x, -y) for x, y in zip(xs, height, strict=True)]
        lower = [QPointF(x, y) for x, y in zip(xs, height, strict=True)]
        wash = QColor(colour)
        wash.setAlpha(70)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(wash)
        painter.drawPolygon(QPolygonF(upper + lower[::-1]))
        edge = QPen(QColor(colour), 2.6 if shown.hovered else 1.5)
        edge.setJoinStyle(Qt.PenJoinStyle.BevelJoin)  # round joins make a stroke of many points several times dearer
        if cable is None:
            edge.setStyle(Qt.PenStyle.DashLine)
        painter.setPen(edge)
        painter.drawPolyline(QPolygonF(upper))
        painter.drawPolyline(QPolygonF(lower))
        for x, y in ((xs[0], height[0]), (xs[-1], height[-1])):
            painter.drawLine(QPointF(x, -y), QPointF(x, y))
        painter.setPen(pen(colour, 2))
        painter.drawLine(QPointF(body.left(), 0), QPointF(body.right(), 0))
        self._ticks(painter, electrical_deg(part, cable, shown.plan.band.marked_hz), body)
        painter.setPen(pen(look.ink, 1.4))
        for end, x in zip(part.ends, (body.left(), body.right()), strict=True):
            if end is not None:
                painter.setBrush(QColor(look.impedance_colour(end.z0_ohm)))
                painter.drawRect(QRectF(x - 4, -6, 8, 12))

        if part.matched_set:
            self._letter(painter, shown, part.matched_set, body)

    @staticmethod
    def _letter(painter: QPainter, shown: Shown, name: str, body: QRectF) -> None:
        """The matched set's letter, on a small card on the swell."""
        words, face = one_line(name), font("small", bold=True)
        width = max(18.0, min(60.0, QFontMetricsF(face).horizontalAdvance(words) + 10))
        card = QRectF(body.right() - width - 5, body.top() - 6, width, 18)
        painter.setPen(pen(shown.look.ink, 1.1))
        painter.setBrush(QColor(shown.look.card))
        painter.drawRoundedRect(card, 9, 9)
        text(painter, words, QPointF(card.center().x(), card.top() + 1), shown.look.ink, bold=True, widest=54)

    @staticmethod
    def _ticks(painter: QPainter, degrees: float, body: QRectF) -> None:
        count = degrees / TICK_DEG
        if count < 1:
            return
        every = max(1, 2 ** math.ceil(math.log2(max(1.0, count * TICK_PITCH / body.width()))))
        ticks = int(count / every)
        for n in range(1, ticks + 1):
            x = body.left() + body.width() * n * every / count
            painter.drawLine(QPointF(x, -5), QPointF(x, 5))

    @staticmethod
    def _heights(shown: Shown) -> Array:
        """Half-heights along the drawing, port 1 first; two are enough for a straight section."""
        part = shown.placed.part
        assert isinstance(part, Coax)
        degrees = electrical_deg(part, shown.plan.cables.get(part.cable), shown.plan.band.marked_hz)
        points = FEW_POINTS if degrees < 360 else MANY_POINTS
        wave = shown.answer.swell(shown.placed.id, points) if shown.answer is not None else None
        if wave is None or wave[2] == 0:
            return np.full(2, UNIT_HEIGHT)
        height: Array = np.minimum(np.abs(wave[1]) / abs(wave[2]), TALLEST) * UNIT_HEIGHT + 0.75
        if degrees > DENSE_DEG:
            height = np.max([np.roll(height, n) for n in range(-3, 4)], axis=0)
        straight = np.abs(height - np.linspace(height[0], height[-1], height.size)).max() < 0.15
        return height[[0, -1]] if straight else height

    def detail(self, shown: Shown) -> str:
        part = shown.placed.part
        assert isinstance(part, Coax)
        cable = shown.plan.cables.get(part.cable)
        unit = "m" if shown.length_unit == "mm" and part.length_m >= 2 else shown.length_unit
        factor = cable.velocity_factor if cable is not None else None
        length = format_length(part.length_m, unit, frequency_hz=shown.plan.band.marked_hz, velocity_factor=factor)
        if cable is None:
            return f"no cable {one_line(part.cable)} · {length}"
        if unit == "deg":
            return f"{one_line(part.cable)} · {length}"
        degrees = electrical_deg(part, cable, shown.plan.band.marked_hz)
        return f"{one_line(part.cable)} · {length} · {degrees:.{1 if degrees < 1000 else 0}f}°"
