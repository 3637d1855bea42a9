"""The frequency rail: one slider over the band, its knob at the mark, its stops the channels. Solves nothing."""

from __future__ import annotations

import math

import numpy as np
from PySide6.QtCore import QEvent, QRectF, QSignalBlocker, Qt
from PySide6.QtGui import (
    QColor,
    QFontMetrics,
    QHelpEvent,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QPen,
    QWheelEvent,
)
from PySide6.QtWidgets import QAbstractSlider, QToolTip

from app.editing import edits
from app.editing.wording import format_frequency
from app.look import Look, font
from app.panels.style import dress, tooltip
from app.store import Store
from feedlib.plan import Channel, Plan

HEIGHT = 52
SNAP_PX = 5
PAGE_STEPS = 10
_LEFT, _RIGHT, _LINE_Y, _KNOB = 132, 28, 20, 8
_LARGEST_KHZ = 2**31 - 1


class FrequencyRail(QAbstractSlider):
    """The mark on a line. Its value, for those who hear it, is in kHz.

    The line runs over the sweep, or the band, and further where the mark or a channel stands outside.
    """

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self._store, self._look = store, look
        self._dragged: tuple[float, float] | None = None
        self.setOrientation(Qt.Orientation.Horizontal)
        self.setFixedHeight(HEIGHT)
        self.setMinimumWidth(_LEFT + _RIGHT + 120)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName("Marked frequency")
        self.set_look(look)
        store.plan_changed.connect(self._plan_changed)
        self.valueChanged.connect(self._spoken)
        self._follow(store.plan)

    def set_look(self, look: Look) -> None:
        """Draw with another look."""
        self._look = look
        dress(self, look)
        self.update()

    def x_at(self, frequency_hz: float) -> float:
        """Where a frequency is on the widget."""
        low_hz, high_hz = self._ends_hz
        left, right = self._line
        if high_hz == low_hz:
            return (left + right) / 2
        return left + (right - left) * (frequency_hz - low_hz) / (high_hz - low_hz)

    def frequency_at(self, x: float) -> float:
        """The frequency at a place: a channel's where one is near, else a round one, not beyond the line."""
        near = [c for c in self._store.plan.channels if abs(self.x_at(c.hz) - x) <= SNAP_PX]
        if near:
            return min(near, key=lambda c: abs(self.x_at(c.hz) - x)).hz
        low_hz, high_hz = self._ends_hz
        left, right = self._line
        share = min(max((x - left) / (right - left), 0.0), 1.0)
        if share in (0.0, 1.0) or high_hz == low_hz:
            return high_hz if share == 1.0 else low_hz
        step_hz = _round_step((high_hz - low_hz) / (right - left))
        wanted_hz = round((low_hz + share * (high_hz - low_hz)) / step_hz) * step_hz
        return min(max(wanted_hz, low_hz), high_hz)

    @property
    def _line(self) -> tuple[float, float]:
        return float(_LEFT), float(self.width() - _RIGHT)

    @property
    def _ends_hz(self) -> tuple[float, float]:
        # The line stands still while the knob is dragged along it.
        return self._dragged or ends_hz(self._store.plan)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton and event.position().x() >= _LEFT - _KNOB:
            self._dragged = ends_hz(self._store.plan)
            self._move(self.frequency_at(event.position().x()))
        else:
            event.ignore()

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        if self._dragged is not None:
            self._move(self.frequency_at(event.position().x()))

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self._dragged = None
            self.update()

    def wheelEvent(self, event: QWheelEvent) -> None:
        event.ignore()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        steps = _KEYS.get(event.key())
        if steps is None:
            event.ignore()
            return
        self._move(stepped_hz(self._store.plan, steps))

    def event(self, event: QEvent) -> bool:
        if isinstance(event, QHelpEvent) and event.type() == QEvent.Type.ToolTip:
            here = [c for c in self._store.plan.channels if abs(self.x_at(c.hz) - event.pos().x()) <= SNAP_PX]
            QToolTip.showText(event.globalPos(), tooltip(channels_text(here)), self)
            return True
        return super().event(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        look, plan = self._look, self._store.plan
        band = plan.band
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QColor(look.ink))
        painter.setFont(font("head", bold=True))
        painter.drawText(12, _LINE_Y + 5, format_frequency(band.marked_hz))

        left, right = self._line
        painter.setPen(QPen(QColor(look.hairline), 2))
        painter.drawLine(int(left), _LINE_Y, int(right), _LINE_Y)
        first, last = self.x_at(band.start_hz), self.x_at(band.stop_hz)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(QColor(look.impedance[1]))
        painter.drawRoundedRect(QRectF(first - 3, _LINE_Y - 3, last - first + 6, 6), 3, 3)
        painter.setPen(QPen(QColor(look.ink), 1.5))
        for channel in plan.channels:
            x = self.x_at(channel.hz)
            painter.drawLine(int(x), _LINE_Y - 8, int(x), _LINE_Y + 8)

        x = self.x_at(band.marked_hz)
        if self.hasFocus():
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawEllipse(QRectF(x - _KNOB - 3, _LINE_Y - _KNOB - 3, 2 * _KNOB + 6, 2 * _KNOB + 6))
        painter.setPen(QPen(QColor(look.paper), 1.5))
        painter.setBrush(QColor(look.ink))
        painter.drawEllipse(QRectF(x - _KNOB, _LINE_Y - _KNOB, 2 * _KNOB, 2 * _KNOB))
        self._paint_ends(painter)

    def _paint_ends(self, painter: QPainter) -> None:
        """The frequencies at the band's edges and the line's, those that have room."""
        painter.setFont(font("small"))
        painter.setPen(QColor(self._look.soft))
        metrics = QFontMetrics(font("small"))
        band, taken = self._store.plan.band, list[tuple[float, float]]()
        for frequency_hz in dict.fromkeys((band.start_hz, band.stop_hz, *self._ends_hz)):
            text = format_frequency(frequency_hz)
            width = metrics.horizontalAdvance(text)
            start = min(max(self.x_at(frequency_hz) - width / 2, 4.0), self.width() - width - 4.0)
            if all(start + width + 8 < a or b + 8 < start for a, b in taken):
                taken.append((start, start + width))
                painter.drawText(int(start), _LINE_Y + 26, text)

    def _move(self, frequency_hz: float) -> None:
        plan = self._store.plan
        if frequency_hz != plan.band.marked_hz:
            self._store.edit("Move the mark", edits.marked(plan, frequency_hz), merge="mark")

    def _plan_changed(self, old: Plan, new: Plan) -> None:
        if (old.band, old.sweep, old.channels) != (new.band, new.sweep, new.channels):
            self._follow(new)

    def _follow(self, plan: Plan) -> None:
        """Show a plan; the slider's own value is only what assistive tools read and set."""
        low_hz, high_hz = ends_hz(plan)
        with QSignalBlocker(self):
            self.setRange(_khz(low_hz), _khz(high_hz))
            self.setValue(_khz(plan.band.marked_hz))
        channel = [c for c in plan.channels if c.hz == plan.band.marked_hz]
        self.setAccessibleDescription(channels_text(channel) or format_frequency(plan.band.marked_hz))
        self.update()

    def _spoken(self, value_khz: int) -> None:
        """An assistive tool has set the value."""
        low_hz, high_hz = self._ends_hz
        self._move(min(max(value_khz * 1e3, low_hz), high_hz))


_KEYS: dict[int, float] = {
    Qt.Key.Key_Left: -1,
    Qt.Key.Key_Down: -1,
    Qt.Key.Key_Right: 1,
    Qt.Key.Key_Up: 1,
    Qt.Key.Key_PageDown: -PAGE_STEPS,
    Qt.Key.Key_PageUp: PAGE_STEPS,
    Qt.Key.Key_Home: -math.inf,
    Qt.Key.Key_End: math.inf,
}


def ends_hz(plan: Plan) -> tuple[float, float]:
    """The lowest and highest frequency of the rail."""
    wide = plan.sweep or plan.band
    stops = [plan.band.marked_hz, *(c.hz for c in plan.channels)]
    return min(wide.start_hz, *stops), max(wide.stop_hz, *stops)


def stepped_hz(plan: Plan, steps: float) -> float:
    """The frequency so many stops from the mark; the first step goes to the next one that is there.

    The stops are the points of the grid and the channels.
    """
    stops_hz, mark_hz = np.union1d(plan.grid_hz(), [c.hz for c in plan.channels]), plan.band.marked_hz
    if steps > 0:
        start = int(np.searchsorted(stops_hz, mark_hz, side="right")) - 1
    else:
        start = int(np.searchsorted(stops_hz, mark_hz, side="left"))
    return float(stops_hz[int(min(max(start + steps, 0), len(stops_hz) - 1))])


def channels_text(channels: list[Channel]) -> str:
    """Channels with their frequencies, one a line."""
    return "\n".join(f"{c.name}: {format_frequency(c.hz)}" for c in channels)


def _round_step(least_hz: float) -> float:
    """The smallest 1, 2 or 5 times a power of ten that is not below."""
    decade = 10.0 ** math.floor(math.log10(least_hz))
    return next(step for step in (decade, 2 * decade, 5 * decade, 10 * decade) if step >= least_hz * (1 - 1e-9))


def _khz(frequency_hz: float) -> int:
    return min(round(frequency_hz / 1e3), _LARGEST_KHZ)
