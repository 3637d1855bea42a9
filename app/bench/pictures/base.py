"""What a picture of a part is, and the strokes that all pictures share. Knows nothing of scenes and mice."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPainterPath, QPen

from app.editing.entry import LengthUnit
from app.look import Look, font
from feedlib import Answer, Plan
from feedlib.plan import Placed

PORT_RADIUS = 4.0
PORT_PITCH = 22.0


@dataclass(frozen=True, slots=True)
class Dial:
    """An antenna's current against what it should be: degrees from the middle, 0 to 1 of the largest, power share."""

    from_middle_deg: float
    of_largest: float
    share: float


@dataclass(frozen=True, slots=True)
class Shown:
    """All that a picture may draw from: the part, its plan, and the answer at the mark (None = cannot be solved)."""

    placed: Placed
    plan: Plan
    answer: Answer | None
    look: Look
    hovered: bool = False
    dial: Dial | None = None
    length_unit: LengthUnit = "mm"

    @property
    def name(self) -> str:
        """What the part is called on the bench."""
        return one_line(self.placed.name)


class Picture:
    """How one kind of part is drawn, about its own centre (0, 0); port 1 is at the left."""

    def body(self, placed: Placed, plan: Plan) -> QRectF:
        """The drawn shape without its text."""
        return QRectF(-28, -20, 56, 40)

    def ports(self, placed: Placed, plan: Plan) -> list[QPointF]:
        """The anchor of each port."""
        body = self.body(placed, plan)
        count = placed.part.ports
        return [QPointF(body.left() - 6, 0), *fan(body.right() + 6, count - 1)]

    def paint(self, painter: QPainter, shown: Shown) -> None:
        """Draw the part."""
        box(painter, self.body(shown.placed, shown.plan), shown.look)

    def detail(self, shown: Shown) -> str:
        """The second line under the picture."""
        return ""

    def state(self, shown: Shown) -> Literal["holds", "fails", ""]:
        """Whether the second line carries a sign."""
        return ""


def one_line(text: str) -> str:
    """A text without line breaks and control characters."""
    return "".join(c if c.isprintable() else " " for c in text)


def fan(x: float, count: int) -> list[QPointF]:
    """`count` points on a vertical line, spread about the middle."""
    return [QPointF(x, (n - (count - 1) / 2) * PORT_PITCH) for n in range(count)]


def pen(colour: str, width: float = 1.6) -> QPen:
    """A round pen."""
    made = QPen(QColor(colour), width)
    made.setCapStyle(Qt.PenCapStyle.RoundCap)
    made.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    return made


def box(painter: QPainter, rect: QRectF, look: Look) -> None:
    """A white card with rounded corners."""
    painter.setPen(pen(look.ink))
    painter.setBrush(QColor(look.card))
    painter.drawRoundedRect(rect, 7, 7)


def stubs(painter: QPainter, picture: Picture, shown: Shown) -> None:
    """Short leads from the body to its ports."""
    body = picture.body(shown.placed, shown.plan)
    painter.setPen(pen(shown.look.ink))
    for port in picture.ports(shown.placed, shown.plan):
        edge = body.left() if port.x() < body.center().x() else body.right()
        painter.drawLine(QPointF(edge, port.y()), port)


def polyline(painter: QPainter, points: list[tuple[float, float]]) -> None:
    """A line through points."""
    path = QPainterPath(QPointF(*points[0]))
    for x, y in points[1:]:
        path.lineTo(x, y)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.drawPath(path)


def growth(painter: QPainter) -> float:
    """How much larger words are drawn on a bench that is zoomed out, so that they can still be read."""
    return min(1.5, max(1.0, 0.95 / max(painter.worldTransform().m11(), 0.1)))


FAR = 0.43
"""Below this zoom a part's own figures and the impedance flags would cover each other, and are left out."""


def is_far(painter: QPainter) -> bool:
    """Whether the bench is seen from so far that only names and antennas' figures are written."""
    return painter.worldTransform().m11() < FAR


def text(
    painter: QPainter,
    words: str,
    at: QPointF,
    colour: str,
    *,
    size: Literal["small", "text", "head"] = "small",
    bold: bool = False,
    widest: float = 230.0,
    grows: bool = False,
) -> None:
    """Words centred below a point, shortened to fit; some grow when the bench is seen from afar."""
    face = font(size, bold=bold)
    if grows:
        face.setPixelSize(round(face.pixelSize() * growth(painter)))
    painter.setFont(face)
    painter.setPen(QColor(colour))
    metrics = QFontMetricsF(face)
    words = metrics.elidedText(words, Qt.TextElideMode.ElideRight, widest)
    width = metrics.horizontalAdvance(words)
    painter.drawText(QPointF(at.x() - width / 2, at.y() + metrics.ascent()), words)
