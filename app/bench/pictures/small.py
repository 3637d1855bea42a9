"""Pads, lumped elements, transformers, loads and measured parts: small cards with a sketch."""

from __future__ import annotations

import math

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPainterPath

from app.bench.pictures.base import PORT_PITCH, Picture, Shown, box, one_line, pen, polyline, stubs, text
from app.editing.wording import format_impedance
from feedlib.parts import Load, Lumped, Measured, Pad, Transformer
from feedlib.plan import Placed, Plan


class PadPicture(Picture):
    """A card with its loss."""

    def paint(self, painter: QPainter, shown: Shown) -> None:
        part = shown.placed.part
        assert isinstance(part, Pad)
        stubs(painter, self, shown)
        box(painter, self.body(shown.placed, shown.plan), shown.look)
        text(painter, f"{part.loss_db:g} dB", QPointF(0, -8), shown.look.ink, widest=54)

    def detail(self, shown: Shown) -> str:
        part = shown.placed.part
        assert isinstance(part, Pad)
        return f"pad · {part.z0_ohm:g} Ω"


class LumpedPicture(Picture):
    """R, L and C as they are wired: along the line, or from it to the shield."""

    def body(self, placed: Placed, plan: Plan) -> QRectF:
        return QRectF(-34, -22, 68, 44)

    def paint(self, painter: QPainter, shown: Shown) -> None:
        part, look = shown.placed.part, shown.look
        assert isinstance(part, Lumped)
        stubs(painter, self, shown)
        box(painter, self.body(shown.placed, shown.plan), look)
        painter.setPen(pen(look.ink))
        kinds = [k for k, v in (("r", part.r_ohm), ("l", part.l_h), ("c", part.c_f)) if v is not None]
        painter.save()
        if part.place == "shunt":
            painter.drawLine(QPointF(-34, -12), QPointF(34, -12))
            painter.drawLine(QPointF(-8, 18), QPointF(8, 18))
            painter.translate(0, 3)
            painter.rotate(90)
            painter.scale(0.62, 0.62)
        _elements(painter, kinds, parallel=part.wiring == "parallel")
        painter.restore()

    def detail(self, shown: Shown) -> str:
        part = shown.placed.part
        assert isinstance(part, Lumped)
        values = [
            f"{scaled(v)}{unit}" for v, unit in ((part.r_ohm, "Ω"), (part.l_h, "H"), (part.c_f, "F")) if v is not None
        ]
        return f"{part.place} " + ", ".join(values)


def scaled(value: float) -> str:
    """A number with an SI prefix: 8.2 n."""
    if value == 0:
        return "0 "
    power = max(-12, min(9, 3 * math.floor(math.log10(value) / 3)))
    prefix = {-12: "p", -9: "n", -6: "µ", -3: "m", 0: "", 3: "k", 6: "M", 9: "G"}[power]
    return f"{value / 10**power:.4g} {prefix}"


def _elements(painter: QPainter, kinds: list[str], *, parallel: bool) -> None:
    """Symbols of R, L, C between (-34, 0) and (34, 0)."""
    count = len(kinds)
    rows = [(n - (count - 1) / 2) * 13 for n in range(count)] if parallel else [0.0] * count
    width = 40.0 if parallel else 44.0 / count
    lefts = [-20.0] * count if parallel else [-22 + n * width for n in range(count)]
    painter.drawLine(QPointF(-34, 0), QPointF(min(lefts), 0))
    painter.drawLine(QPointF(lefts[-1] + width, 0), QPointF(34, 0))
    if parallel and count > 1:
        for x in (-20.0, 20.0):
            painter.drawLine(QPointF(x, rows[0]), QPointF(x, rows[-1]))
    for kind, x, y in zip(kinds, lefts, rows, strict=True):
        _element(painter, kind, x, y, width)


def _element(painter: QPainter, kind: str, x: float, y: float, width: float) -> None:
    middle = x + width / 2
    if kind == "r":
        painter.setBrush(Qt.BrushStyle.NoBrush)
        polyline(painter, [(x + width * n / 8, y + (0 if n in (0, 8) else 4 * (-1) ** n)) for n in range(9)])
    elif kind == "l":
        path = QPainterPath(QPointF(x, y))
        for n in range(4):
            path.arcTo(QRectF(x + width * n / 4, y - width / 8, width / 4, width / 4), 180, -180)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawPath(path)
    else:
        painter.drawLine(QPointF(x, y), QPointF(middle - 2, y))
        painter.drawLine(QPointF(middle + 2, y), QPointF(x + width, y))
        for dx in (-2.0, 2.0):
            painter.drawLine(QPointF(middle + dx, y - 6), QPointF(middle + dx, y + 6))


class TransformerPicture(Picture):
    """Two windings side by side."""

    def paint(self, painter: QPainter, shown: Shown) -> None:
        stubs(painter, self, shown)
        box(painter, self.body(shown.placed, shown.plan), shown.look)
        painter.setPen(pen(shown.look.ink))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        for side in (-1, 1):
            path = QPainterPath(QPointF(side * 12, -12))
            for n in range(4):
                path.arcTo(QRectF(side * 12 - 3, -12 + 6 * n, 6, 6), 90, -180 * -side)
            painter.drawPath(path)
            painter.drawLine(QPointF(side * 2, -13), QPointF(side * 2, 13))

    def detail(self, shown: Shown) -> str:
        part = shown.placed.part
        assert isinstance(part, Transformer)
        return f"{part.ratio:g} : 1"


class LoadPicture(Picture):
    """A termination; a short is drawn as one."""

    def body(self, placed: Placed, plan: Plan) -> QRectF:
        return QRectF(-20, -16, 40, 32)

    def paint(self, painter: QPainter, shown: Shown) -> None:
        part, look = shown.placed.part, shown.look
        assert isinstance(part, Load)
        stubs(painter, self, shown)
        box(painter, self.body(shown.placed, shown.plan), look)
        painter.setPen(pen(look.ink))
        painter.drawLine(QPointF(-20, 0), QPointF(-12, 0))
        if part.impedance_ohm == 0:
            painter.drawLine(QPointF(-12, 0), QPointF(8, 0))
        else:
            polyline(painter, [(-12 + 20 * n / 8, 0 if n in (0, 8) else 5 * (-1) ** n) for n in range(9)])
        painter.drawLine(QPointF(8, 0), QPointF(8, 8))
        painter.drawLine(QPointF(3, 8), QPointF(13, 8))

    def detail(self, shown: Shown) -> str:
        part = shown.placed.part
        assert isinstance(part, Load)
        return "short" if part.impedance_ohm == 0 else format_impedance(part.impedance_ohm)


class MeasuredPicture(Picture):
    """A card with a measured curve; its ports by number."""

    def body(self, placed: Placed, plan: Plan) -> QRectF:
        half = max(24.0, (placed.part.ports - 1) * PORT_PITCH / 2 + 4)
        return QRectF(-30, -half, 60, 2 * half)

    def paint(self, painter: QPainter, shown: Shown) -> None:
        stubs(painter, self, shown)
        box(painter, self.body(shown.placed, shown.plan), shown.look)
        painter.setPen(pen(shown.look.impedance[1], 2))
        path = QPainterPath(QPointF(-20, 10))
        path.cubicTo(-8, 14, -8, -14, 2, -8)
        path.cubicTo(10, -3, 10, 6, 20, -10)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawPath(path)

    def detail(self, shown: Shown) -> str:
        part = shown.placed.part
        assert isinstance(part, Measured)
        return one_line(part.touchstone.name)
