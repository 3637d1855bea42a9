"""The radio, drawn as a named card."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QPainter

from app.bench.pictures.base import Picture, Shown, box, stubs, text
from app.editing.wording import format_impedance, format_power
from feedlib.parts import Radio
from feedlib.plan import Placed, Plan


class RadioPicture(Picture):
    """A card with its name and what it is; its one port at the right."""

    def body(self, placed: Placed, plan: Plan) -> QRectF:
        return QRectF(-54, -22, 108, 44)

    def ports(self, placed: Placed, plan: Plan) -> list[QPointF]:
        return [QPointF(60, 0)]

    def paint(self, painter: QPainter, shown: Shown) -> None:
        stubs(painter, self, shown)
        box(painter, self.body(shown.placed, shown.plan), shown.look)
        text(painter, shown.name, QPointF(0, -10), shown.look.ink, size="text", bold=True, widest=100, grows=True)

    def detail(self, shown: Shown) -> str:
        part = shown.placed.part
        assert isinstance(part, Radio)
        z = part.impedance_ohm
        ohm = f"{z.real:g} Ω" if z.imag == 0 else format_impedance(z)
        return f"{ohm} · {format_power(part.power_w)}"
