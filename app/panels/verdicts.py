"""The verdict strip: every limit with its worst figure in the band and whether it holds. Works no figure out."""

from __future__ import annotations

from dataclasses import dataclass
from functools import partial

import numpy as np
from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFontMetrics, QKeyEvent, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QAbstractButton, QHBoxLayout, QSizePolicy, QWidget

from app.editing import edits
from app.editing.wording import editable_quantity, format_angle, format_db, format_frequency
from app.look import SIGNS, Look, Verdict, font
from app.panels.deciders import deciders
from app.panels.style import dress, readable, tooltip
from app.store import Store
from feedlib import Answer
from feedlib.answer import JUDGED
from feedlib.plan import Limits
from feedlib.schema import specs

NEAR_SHARE = 0.1
"""A limit that holds by less than this share of itself is near: return loss 20 dB is near below 22 dB."""

ALWAYS_SHOWN = ("return_loss_db", "harness_loss_db")
SHOWN_WITH_ANTENNAS = ("amplitude_balance_db", "phase_balance_deg")
"""Figures that are shown without a limit too, the second kind where there are two antennas or more."""

HEIGHT = 48
_BAR, _GAP, _PAD = 4, 10, 6


@dataclass(frozen=True, slots=True)
class Shown:
    """What one item says. wants : empty without a limit; about : the limit's name in the plan, or None."""

    name: str
    state: Verdict
    figure: str
    wants: str
    spoken: str
    about: str | None = None
    frequency_hz: float | None = None


def judged(limit: str, worst: float, wanted: float) -> Verdict:
    """The state of a figure against its limit."""
    margin = worst - wanted if JUDGED[limit] else wanted - worst
    if not margin >= 0:
        return "fails"
    return "near" if margin < NEAR_SHARE * abs(wanted) else "holds"


def verdicts_of(answer: Answer) -> list[Shown]:
    """What the strip says of an answer, in the order of the limits."""
    told = {v.limit: v for v in answer.verdicts}
    shown = []
    for limit, at_least in JUDGED.items():
        spec = specs(Limits)[limit]
        if limit in told:
            v = told[limit]
            state, sign = judged(limit, v.worst, v.wanted), "≥" if at_least else "≤"
            wanted = editable_quantity(v.wanted, unit=spec.unit)
            spoken = {"holds": "holds", "near": "holds, near its limit", "fails": "fails"}[state]
            spoken = f"wants {'at least' if at_least else 'at most'} {wanted}, {spoken}"
            figure, wants, frequency_hz = _figure(limit, v.worst), f"{sign} {wanted}", v.frequency_hz
        elif limit in ALWAYS_SHOWN or (limit in SHOWN_WITH_ANTENNAS and len(answer.antenna_ids) > 1):
            worst, frequency_hz = _worst(answer, limit, at_least)
            state, figure, wants, spoken = "unknown", _figure(limit, worst), "", "no limit"
        else:
            continue
        spoken = f"{spec.label} {figure} at {format_frequency(frequency_hz)}, {spoken}"
        shown.append(Shown(spec.label, state, figure, wants, spoken, limit, frequency_hz))
    return shown


def _worst(answer: Answer, limit: str, at_least: bool) -> tuple[float, float]:
    """The worst of a figure at the solved frequencies of the band, and where it is."""
    f, band = answer.frequency_hz, answer.plan.band
    inside = (f >= band.start_hz) & (f <= band.stop_hz)
    others = [*answer.channels.values()]
    if not (inside.any() or others):
        others = [answer.mark]
    values = np.concatenate([getattr(answer, limit)[inside], *(getattr(x, limit) for x in others)])
    at_hz = np.concatenate([f[inside], *(x.frequency_hz for x in others)])
    worst = int(np.argmin(values) if at_least else np.argmax(values))
    return float(values[worst]), float(at_hz[worst])


def _figure(limit: str, value: float) -> str:
    return format_angle(value) if limit.endswith("_deg") else format_db(value)


class VerdictStrip(QWidget):
    """The row of verdicts. A click goes to the frequency and the part that decide one."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self._store, self._look = store, look
        self._items: list[VerdictItem] = []
        self._awaited: str | None = None
        self._row = QHBoxLayout(self)
        self._row.setContentsMargins(12, 0, 12, 0)
        self._row.setSpacing(4)
        self.setFixedHeight(HEIGHT)
        self.setAccessibleName("Verdicts")
        self.set_look(look)
        store.answer_changed.connect(self._refresh)
        store.stale_changed.connect(self._repaint)
        self._refresh()

    def set_look(self, look: Look) -> None:
        """Draw with another look."""
        self._look = look
        dress(self, look)
        for item in self._items:
            item.look = look
        self._repaint()

    @property
    def items(self) -> tuple[VerdictItem, ...]:
        """The verdicts that are shown, from left to right."""
        return tuple(item for item in self._items if not item.isHidden())

    def _refresh(self) -> None:
        store = self._store
        if store.answer is not None:
            shown = verdicts_of(store.answer)
        else:
            why = (store.why_not or "").rstrip(".") + "."
            shown = [Shown("Not solved", "fails", "", why, f"Not solved: {why}")]
        while len(self._items) < len(shown):
            item = VerdictItem(store, self._look)
            item.clicked.connect(partial(self._clicked, item))
            self._items.append(item)
            self._row.addWidget(item, 1)
        for number, item in enumerate(self._items):
            item.setVisible(number < len(shown))
            if number < len(shown):
                item.show_verdict(shown[number])
        if self._awaited is not None:
            self._select_deciders(self._awaited)

    def _clicked(self, item: VerdictItem) -> None:
        store, shown = self._store, item.shown
        if shown.about is None or shown.frequency_hz is None:
            culprit = store.culprit or next((p.part_id for p in store.problems if p.stops and p.part_id), None)
            if culprit is not None:
                store.select((culprit,))
            return
        store.edit("Move the mark", edits.marked(store.plan, shown.frequency_hz), merge="mark")
        self._select_deciders(shown.about)

    def _select_deciders(self, limit: str) -> None:
        """Select the parts that decide a limit at the mark, as soon as the mark is solved."""
        store = self._store
        self._awaited = limit if store.stale else None
        if not store.stale and store.answer is not None:
            store.select(deciders(store.answer, limit))

    def _repaint(self) -> None:
        for item in self._items:
            item.update()


class VerdictItem(QAbstractButton):
    """One verdict: a bar, its name and sign, its figure and what is wanted."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self.look, self._store = look, store
        self.shown = Shown("", "unknown", "", "", "")
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Expanding)

    def show_verdict(self, shown: Shown) -> None:
        """Show a verdict."""
        if shown == self.shown:
            return
        wider = (len(shown.figure), shown.wants, shown.name) != (
            len(self.shown.figure),
            self.shown.wants,
            self.shown.name,
        )
        self.shown = shown
        self.setAccessibleName(shown.spoken)
        self.setToolTip(tooltip(shown.spoken))
        if wider:
            self.updateGeometry()
        self.update()

    def sizeHint(self) -> QSize:
        wants = QFontMetrics(font("small")).horizontalAdvance(self._wants_texts()[0])
        return QSize(self._least_width() + wants + _PAD, HEIGHT)

    def minimumSizeHint(self) -> QSize:
        return QSize(self._least_width(), HEIGHT)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.click()
        else:
            super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        look, shown = self.look, self.shown
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        box = self.rect().adjusted(2, 3, -3, -4)
        if self.hasFocus():
            painter.setPen(QPen(QColor(look.ink), 1))
            painter.drawRoundedRect(QRectF(box).adjusted(0.5, 0.5, -0.5, -0.5), 4, 4)
        elif self.underMouse():
            painter.setPen(Qt.PenStyle.NoPen)
            painter.setBrush(QColor(look.band_wash))
            painter.drawRoundedRect(QRectF(box), 4, 4)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(QColor(look.verdict(shown.state)))
        painter.drawRoundedRect(QRectF(box.left() + _PAD, box.top() + 4, _BAR, box.height() - 8), 2, 2)
        left = box.left() + _PAD + _BAR + _GAP
        room = box.right() - _PAD - left
        upper, lower = box.top() + 15, box.bottom() - 6

        small = QFontMetrics(font("small"))
        painter.setFont(font("small"))
        painter.setPen(QColor(look.soft))
        painter.drawText(left, upper, shown.name)
        painter.setFont(font("text", bold=True))
        painter.setPen(QColor(readable(look, look.verdict(shown.state), look.paper)))
        sign = "…" if self._store.stale else SIGNS[shown.state]
        painter.drawText(left + small.horizontalAdvance(shown.name) + 8, upper, sign)

        painter.setFont(font("head", bold=True))
        painter.setPen(QColor(look.ink))
        painter.drawText(left, lower, shown.figure)
        taken = QFontMetrics(font("head", bold=True)).horizontalAdvance(shown.figure) + 8 if shown.figure else 0
        painter.setFont(font("small"))
        painter.setPen(QColor(look.soft if shown.figure else look.ink))
        texts = self._wants_texts()
        text = next((t for t in texts if small.horizontalAdvance(t) <= room - taken), texts[-1])
        painter.drawText(left + taken, lower, small.elidedText(text, Qt.TextElideMode.ElideRight, room - taken))

    def _wants_texts(self) -> tuple[str, ...]:
        """What is wanted, from the longest way to say it to the shortest."""
        shown = self.shown
        if not shown.figure:
            return (shown.wants,)
        return (f"wants {shown.wants}", shown.wants) if shown.wants else ("no limit",)

    def _least_width(self) -> int:
        small = QFontMetrics(font("small"))
        upper = small.horizontalAdvance(self.shown.name) + 8 + 14
        lower = QFontMetrics(font("head", bold=True)).horizontalAdvance(self.shown.figure) + 8
        if self.shown.figure:
            lower += small.horizontalAdvance(self._wants_texts()[-1])
        return max(upper, lower) + 5 + 2 * _PAD + _BAR + _GAP
