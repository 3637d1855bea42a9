"""What a hand does to the program in tests, and how a test waits for the program without guessing a time."""

from __future__ import annotations

import numpy as np
from PySide6.QtCore import QEventLoop, QTimer
from PySide6.QtWidgets import QApplication

from app.store import Store
from feedlib import Answer, Plan, SolveError, check, solve
from tests.plans import Sketch

LONGEST_MS = 30_000


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
