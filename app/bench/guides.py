"""Alignment: where moved parts snap to the lines of others, and the guides that show it."""

from __future__ import annotations

from collections.abc import Collection

from PySide6.QtCore import QLineF, QPointF, Qt
from PySide6.QtWidgets import QGraphicsLineItem

from app.bench.pictures.base import pen
from app.bench.scene import GRID, BenchScene

REACH = 7.0
"""How near to another part's line a moved part snaps to it."""


class Guides:
    """Two lines, across and upright, that come and go while parts are moved."""

    def __init__(self, scene: BenchScene, moved: Collection[str]) -> None:
        self._scene, self._moved = scene, frozenset(moved)
        self._lines = (QGraphicsLineItem(), QGraphicsLineItem())
        stroke = pen(scene.look.soft, 1)
        stroke.setStyle(Qt.PenStyle.DashLine)
        for line in self._lines:
            line.setPen(stroke)
            line.setZValue(0.5)
            line.hide()
            scene.addItem(line)

    def snapped(self, at: QPointF) -> QPointF:
        """A place for the grabbed part: on the line of another where one is near, else on the grid."""
        others = [item.pos() for part_id, item in self._scene.parts.items() if part_id not in self._moved]
        x = _nearest(at.x(), [p.x() for p in others])
        y = _nearest(at.y(), [p.y() for p in others])
        place = QPointF(_on_grid(at.x()) if x is None else x, _on_grid(at.y()) if y is None else y)
        across, upright = self._lines
        across.setVisible(y is not None)
        upright.setVisible(x is not None)
        if y is not None:
            along = [p.x() for p in others if p.y() == y] + [place.x()]
            across.setLine(QLineF(min(along) - 60, y, max(along) + 60, y))
        if x is not None:
            along = [p.y() for p in others if p.x() == x] + [place.y()]
            upright.setLine(QLineF(x, min(along) - 60, x, max(along) + 60))
        return place

    def remove(self) -> None:
        """Take the lines away."""
        for line in self._lines:
            self._scene.removeItem(line)


def _nearest(value: float, lines: list[float]) -> float | None:
    near = [line for line in lines if abs(line - value) <= REACH]
    return min(near, key=lambda line: abs(line - value), default=None)


def _on_grid(value: float) -> float:
    return round(value / (GRID / 2)) * GRID / 2
