"""What a hand does to the program in tests, and how a test waits for the program without guessing a time."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager

import numpy as np
from PySide6.QtCore import QEvent, QEventLoop, QMimeData, QPoint, QPointF, Qt, QTimer
from PySide6.QtGui import QDragEnterEvent, QDragMoveEvent, QDropEvent, QMouseEvent, QWheelEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QWidget

from app.bench.view import BenchView
from app.store import Store
from feedlib import Answer, Plan, SolveError, check, solve
from tests.plans import Sketch

LEFT, MIDDLE, RIGHT = Qt.MouseButton.LeftButton, Qt.MouseButton.MiddleButton, Qt.MouseButton.RightButton
PLAIN, SHIFT, ALT = (
    Qt.KeyboardModifier.NoModifier,
    Qt.KeyboardModifier.ShiftModifier,
    Qt.KeyboardModifier.AltModifier,
)
CONTROL = Qt.KeyboardModifier.ControlModifier

LONGEST_MS = 30_000
At = str | QPointF | tuple[float, float]


def legs(count: int = 2) -> Plan:
    """Antennas A, B ... of 50 ohm on one T joint, each through a leg of lossless 50 ohm coax."""
    sketch = Sketch(860e6, 870e6, 11, mark_hz=868e6, limits={"return_loss_db": 6})
    sketch.add("radio", "radio")
    sketch.add("tee", "T1", ports=max(3, count + 1))
    sketch.join("radio:1", "T1:1")
    for n in range(count):
        name = chr(ord("A") + n) if count < 27 else f"antenna {n}"
        sketch.antenna(50, name)
        sketch.coax(0.1, part_id=f"leg {name}")
        sketch.join(f"T1:{n + 2}", f"leg {name}:1", f"leg {name}:2", f"{name}:1")
    return sketch.plan()


def settled(store: Store) -> None:
    """Wait until the answer belongs to the plan, then do what waits in the event loop."""
    if store.stale:
        loop = QEventLoop()
        store.answer_changed.connect(loop.quit)
        QTimer.singleShot(LONGEST_MS, loop, loop.quit)
        loop.exec()
        store.answer_changed.disconnect(loop.quit)
        assert not store.stale, "no answer came"
    QApplication.processEvents()


def solved(plan: Plan) -> tuple[Answer | None, str | None, str | None]:
    """The answer of a plan, or why there is none and at which part."""
    try:
        return solve(plan), None, None
    except SolveError as error:
        return None, str(error), error.part


def same_answer(store: Store) -> None:
    """The answer and the problems are those of the plan."""
    fresh, why_not, culprit = solved(store.plan)
    assert store.problems == check(store.plan)
    assert (store.why_not, store.culprit, store.answer is None) == (why_not, culprit, fresh is None)
    if fresh is None or store.answer is None:
        return
    for figure in ("frequency_hz", "return_loss_db", "antenna_current_a"):
        assert np.array_equal(getattr(store.answer, figure), getattr(fresh, figure), equal_nan=True)
    assert store.answer.mark.frequency_hz == fresh.mark.frequency_hz
    assert repr(store.answer.verdicts) == repr(fresh.verdicts)  # nan is not equal to itself


@contextmanager
def answering(*acts: Callable[[QWidget], None]) -> Iterator[None]:
    """Do something with each menu or dialog that comes up meanwhile, as soon as it is there; all have to come."""
    timer, waiting = QTimer(), list(acts)
    last: list[QWidget | None] = [None]

    def look() -> None:
        asked = QApplication.activePopupWidget() or QApplication.activeModalWidget()
        if asked is not None and waiting and asked is not last[0]:
            last[0] = asked
            waiting.pop(0)(asked)

    timer.timeout.connect(look)
    timer.start(0)
    try:
        yield
        assert not waiting, f"{len(waiting)} of {len(acts)} questions were not asked"
    finally:
        timer.stop()


class Hands:
    """A mouse and keys on a bench that is on a screen. Places are on the bench; "T1" is a part, "T1:2" its port."""

    def __init__(self, view: BenchView) -> None:
        self.view, self.scene, self.store = view, view.bench, view.store
        self.handle = view.window().windowHandle()

    def place(self, at: At) -> QPointF:
        """A place on the bench."""
        if isinstance(at, tuple):
            return QPointF(*at)
        if isinstance(at, QPointF):
            return at
        part_id, colon, number = at.rpartition(":")
        return self.scene.parts[part_id].port_at(int(number)) if colon else self.scene.parts[at].pos()

    def pixel(self, at: At) -> QPoint:
        """A place on the viewport."""
        return self.view.mapFromScene(self.place(at))

    def _in_window(self, at: At) -> QPoint:
        return self.view.viewport().mapTo(self.view.window(), self.pixel(at))

    def press(self, at: At, *, button=LEFT, keys=PLAIN) -> None:
        QTest.mousePress(self.handle, button, keys, self._in_window(at))

    def move(self, at: At, *, keys=PLAIN) -> None:
        """Move with the left button as it is; with keys held the event is sent to the viewport itself."""
        if keys == PLAIN:
            QTest.mouseMove(self.handle, self._in_window(at))
            QApplication.processEvents()
            return
        port = self.view.viewport()
        where = QPointF(self.pixel(at))
        event = QMouseEvent(QEvent.Type.MouseMove, where, port.mapToGlobal(where), Qt.MouseButton.NoButton, LEFT, keys)
        QApplication.sendEvent(port, event)

    def release(self, at: At, *, button=LEFT, keys=PLAIN) -> None:
        QTest.mouseRelease(self.handle, button, keys, self._in_window(at))

    def click(self, at: At, *, keys=PLAIN) -> None:
        self.press(at, keys=keys)
        self.release(at, keys=keys)

    def drag(
        self,
        start: At,
        end: At,
        *,
        button=LEFT,
        keys=PLAIN,
        drop: bool = True,
    ) -> None:
        """Press, move in some steps, and release unless it shall stay in the hand."""
        first, last = self.place(start), self.place(end)
        self.press(first, button=button)
        for share in (0.1, 0.5, 0.9, 1.0):
            self.move(first + (last - first) * share, keys=keys)
        if drop:
            self.release(last, button=button, keys=keys)

    def wheel(self, at: At, notches: float, *, keys=PLAIN) -> None:
        """Turn the wheel; Alt makes Qt turn it sideways."""
        port = self.view.viewport()
        where, turn = QPointF(self.pixel(at)), round(120 * notches)
        angle = QPoint(turn, 0) if keys & ALT else QPoint(0, turn)
        phase = Qt.ScrollPhase.NoScrollPhase
        QApplication.sendEvent(
            port,
            QWheelEvent(where, port.mapToGlobal(where), QPoint(), angle, Qt.MouseButton.NoButton, keys, phase, False),
        )
        QApplication.processEvents()

    def key(self, key: Qt.Key, keys=PLAIN) -> None:
        """Press a key in the window, as the keyboard does: shortcuts come first."""
        self.view.window().activateWindow()  # what a window manager does after a dialog
        QTest.keyClick(self.handle, key, keys)
        QApplication.processEvents()

    def drop(self, data: QMimeData, at: At) -> bool:
        """Drag data over the bench and drop it there if it is welcome; whether it was."""
        port, where, copy = self.view.viewport(), QPointF(self.pixel(at)), Qt.DropAction.CopyAction
        enter = QDragEnterEvent(where.toPoint(), copy, data, LEFT, PLAIN)
        QApplication.sendEvent(port, enter)
        if not enter.isAccepted():
            return False
        QApplication.sendEvent(port, QDragMoveEvent(where.toPoint(), copy, data, LEFT, PLAIN))
        QApplication.sendEvent(port, QDropEvent(where, copy, data, LEFT, PLAIN))
        QApplication.processEvents()
        return True
