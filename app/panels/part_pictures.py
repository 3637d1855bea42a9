"""Small pictures of the things that the parts drawer offers. Know no parts and no plan."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QBrush, QColor, QPainter, QPen, QPolygonF

from app.look import Look

WIDTH, HEIGHT = 44, 28
_MIDDLE = HEIGHT / 2


def draw(key: str, painter: QPainter, look: Look) -> None:
    """Draw a thing in a field of WIDTH by HEIGHT whose corner is the painter's origin."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setPen(_pen(look))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    PICTURES[key](painter, look)


def _pen(look: Look, width: float = 1.6) -> QPen:
    return QPen(QColor(look.ink), width, Qt.PenStyle.SolidLine, Qt.PenCapStyle.RoundCap, Qt.PenJoinStyle.RoundJoin)


def _line(painter: QPainter, *points: tuple[float, float]) -> None:
    painter.drawPolyline(QPolygonF([QPointF(x, y) for x, y in points]))


def _dot(painter: QPainter, x: float, y: float, radius: float, colour: str) -> None:
    painter.save()
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(QColor(colour))
    painter.drawEllipse(QPointF(x, y), radius, radius)
    painter.restore()


def _letter(painter: QPainter, x: float, y: float, text: str) -> None:
    font = painter.font()
    font.setPixelSize(12)
    painter.setFont(font)
    painter.drawText(QRectF(x - 14, y - 9, 28, 18), Qt.AlignmentFlag.AlignCenter, text)


def _coax(painter: QPainter, look: Look) -> None:
    """A swell that tapers, as a quarter-wave match does."""
    painter.setPen(_pen(look, 1.2))
    swell = QColor(look.impedance[2])
    swell.setAlpha(70)
    painter.setBrush(QBrush(swell))
    painter.drawPolygon(QPolygonF([QPointF(x, y) for x, y in ((4, 5), (40, 9), (40, 19), (4, 23))]))
    _line(painter, (1, _MIDDLE), (43, _MIDDLE))


def _tee(painter: QPainter, look: Look) -> None:
    _line(painter, (3, _MIDDLE), (22, _MIDDLE))
    _line(painter, (38, 4), (22, _MIDDLE), (38, 24))
    _dot(painter, 22, _MIDDLE, 4, look.ink)


def _wilkinson(painter: QPainter, look: Look) -> None:
    """Two arms that bend out, and the resistor across their ends."""
    _line(painter, (3, _MIDDLE), (10, _MIDDLE))
    for side in (-1, 1):
        end = _MIDDLE + 9 * side
        _line(painter, (10, _MIDDLE), (14, end), (40, end))
    _resistor(painter, look, 32, _MIDDLE, across=True)


def _resistive(painter: QPainter, look: Look) -> None:
    """Three resistors in a star."""
    _line(painter, (2, _MIDDLE), (22, _MIDDLE))
    _line(painter, (22, _MIDDLE), (26, 6), (42, 6))
    _line(painter, (22, _MIDDLE), (26, 22), (42, 22))
    _resistor(painter, look, 11, _MIDDLE)
    _resistor(painter, look, 34, 6)
    _resistor(painter, look, 34, 22)
    _dot(painter, 22, _MIDDLE, 2.5, look.ink)


def _resistor(painter: QPainter, look: Look, x: float, y: float, *, across: bool = False) -> None:
    painter.save()
    painter.setBrush(QColor(look.card))
    painter.drawRect(QRectF(x - 3, y - 6, 6, 12) if across else QRectF(x - 6, y - 3, 12, 6))
    if across:
        painter.drawLine(QPointF(x, y - 9), QPointF(x, y - 6))
        painter.drawLine(QPointF(x, y + 6), QPointF(x, y + 9))
    painter.restore()


def _branch_line(painter: QPainter, look: Look) -> None:
    """A square of lines, the two thick ones the low impedances."""
    for y in (7, 21):
        _line(painter, (3, y), (13, y))
        _line(painter, (31, y), (41, y))
        painter.setPen(_pen(look, 3))
        _line(painter, (13, y), (31, y))
        painter.setPen(_pen(look))
    for x in (13, 31):
        _line(painter, (x, 7), (x, 21))


def _rat_race(painter: QPainter, look: Look) -> None:
    """A ring with its four ports on one half."""
    painter.drawEllipse(QPointF(22, 16), 10, 10)
    for x, y, dx, dy in ((12.1, 14.5, -9, 0), (17, 7.4, -4, -6), (27, 7.4, 4, -6), (31.9, 14.5, 9, 0)):
        _line(painter, (x, y), (x + dx, y + dy))


def _antenna(painter: QPainter, look: Look) -> None:
    """A phasor dial at the end of a line."""
    _line(painter, (3, _MIDDLE), (13, _MIDDLE))
    painter.drawEllipse(QPointF(25, _MIDDLE), 12, 12)
    painter.setPen(QPen(QColor(look.holds), 2))
    _line(painter, (25, _MIDDLE), (35, _MIDDLE - 2))
    _dot(painter, 25, _MIDDLE, 2, look.holds)


def _pad(painter: QPainter, look: Look) -> None:
    _line(painter, (3, _MIDDLE), (11, _MIDDLE))
    _line(painter, (33, _MIDDLE), (41, _MIDDLE))
    painter.drawRoundedRect(QRectF(11, 6, 22, 16), 3, 3)
    _letter(painter, 22, _MIDDLE, "dB")


def _lumped(painter: QPainter, look: Look) -> None:
    """A coil in the line and a capacitor to ground."""
    _line(painter, (2, 9), (6, 9))
    for n in range(3):
        painter.drawArc(QRectF(6 + 6 * n, 5, 6, 8), 0, 180 * 16)
    _line(painter, (24, 9), (42, 9))
    _line(painter, (32, 9), (32, 15))
    _line(painter, (27, 15), (37, 15))
    _line(painter, (27, 19), (37, 19))
    _line(painter, (32, 19), (32, 25))


def _transformer(painter: QPainter, look: Look) -> None:
    """Two coils, side by side."""
    for x, start in ((15, -90), (25, 90)):
        for n in range(3):
            painter.drawArc(QRectF(x, 3 + 7.4 * n, 6, 7.4), start * 16, 180 * 16)
    for y in (3.0, 25.2):
        _line(painter, (4, y), (18, y))
        _line(painter, (28, y), (41, y))


def _load(painter: QPainter, look: Look) -> None:
    """A resistor to ground."""
    _line(painter, (4, _MIDDLE), (16, _MIDDLE))
    painter.drawRect(QRectF(16, 9, 16, 10))
    _line(painter, (32, _MIDDLE), (38, _MIDDLE))
    _line(painter, (38, 7), (38, 21))


def _measured(painter: QPainter, look: Look) -> None:
    """A curve on a screen."""
    painter.drawRoundedRect(QRectF(6, 3, 32, 22), 2, 2)
    painter.setPen(QPen(QColor(look.impedance[0]), 1.8))
    _line(painter, (9, 18), (14, 12), (19, 19), (25, 9), (30, 14), (35, 7))


def _radio(painter: QPainter, look: Look) -> None:
    """A box with its one port."""
    painter.drawRoundedRect(QRectF(5, 4, 26, 20), 4, 4)
    _line(painter, (10, 10), (26, 10))
    _line(painter, (10, 15), (20, 15))
    _line(painter, (31, _MIDDLE), (40, _MIDDLE))
    _dot(painter, 40, _MIDDLE, 2.5, look.ink)


PICTURES: dict[str, Callable[[QPainter, Look], None]] = {
    "coax": _coax,
    "tee": _tee,
    "wilkinson": _wilkinson,
    "resistive": _resistive,
    "branch_line": _branch_line,
    "rat_race": _rat_race,
    "antenna": _antenna,
    "pad": _pad,
    "lumped": _lumped,
    "transformer": _transformer,
    "load": _load,
    "measured": _measured,
    "radio": _radio,
}
