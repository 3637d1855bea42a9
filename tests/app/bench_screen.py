"""A bench on a screen, for tests: two legs on a T joint, and what can be read off while hands work on them."""

from __future__ import annotations

from PySide6.QtWidgets import QGraphicsSimpleTextItem
from pytestqt.qtbot import QtBot

from app.bench.view import BenchView
from app.look import LIGHT, Look
from app.store import Store
from app.window import Window
from feedlib import Plan
from feedlib.parts import Coax
from tests.hands import Hands
from tests.plans import Sketch

PLACES = {
    "radio": (0, 0),
    "T1": (156, 0),
    "leg A": (312, -108),
    "leg B": (312, 108),
    "A": (504, -108),
    "B": (504, 108),
    "pad": (156, 204),
}


def plan() -> Plan:
    """Two legs of 0.1 m on a T joint with a free fourth port, and a pad beside it that is tied to nothing."""
    sketch = Sketch(860e6, 870e6, 11, mark_hz=868e6)
    sketch.add("radio", "radio", at=PLACES["radio"])
    sketch.add("tee", "T1", ports=4, at=PLACES["T1"])
    for leg, end in (("leg A", "A"), ("leg B", "B")):
        sketch.coax(0.1, part_id=leg, at=PLACES[leg])
        sketch.antenna(50, end, at=PLACES[end])
        sketch.join(f"{leg}:2", f"{end}:1")
    sketch.add("pad", "pad", loss_db=3, at=PLACES["pad"])
    sketch.join("radio:1", "T1:1", "T1:2", "leg A:1", "T1:3", "leg B:1")
    return sketch.plan()


def bench(qtbot: QtBot, plan: Plan, look: Look = LIGHT) -> Hands:
    """The bench alone, at 100 %, with all parts in sight; end it with `store.close`."""
    view = BenchView(Store(plan), look)
    qtbot.addWidget(view)
    view.resize(1000, 700)
    return _shown(qtbot, view)


def window(qtbot: QtBot, plan: Plan | None, look: Look = LIGHT) -> tuple[Window, Hands]:
    """The whole window, without plots; it asks nothing when it is closed at the end of a test."""
    made = Window(plan, None, look=look, remember=False)
    qtbot.addWidget(made, before_close_func=lambda w: w.store.stack.setClean())
    return made, _shown(qtbot, made.bench)


def _shown(qtbot: QtBot, view: BenchView) -> Hands:
    view.window().show()
    view.window().activateWindow()
    qtbot.waitExposed(view.window())
    view.resetTransform()
    view.centerOn(250, 50)
    view.setFocus()
    return Hands(view)


def at(hands: Hands, part_id: str) -> tuple[float, float]:
    """Where the plan has a part."""
    return hands.store.plan.placed(part_id).at


def length_m(hands: Hands, part_id: str) -> float:
    part = hands.store.plan.placed(part_id).part
    assert isinstance(part, Coax)
    return part.length_m


def undone_by(hands: Hands) -> tuple[int, str]:
    """How many acts can be undone, and the words of the last."""
    return hands.store.stack.index(), hands.store.stack.undoText()


def words(hands: Hands) -> list[str]:
    """What is said beside the pointer."""
    return [i.text() for i in hands.scene.items() if isinstance(i, QGraphicsSimpleTextItem) and i.isVisible()]


def shown(hands: Hands) -> int:
    """How many things are on the bench, hidden ones too."""
    return len(hands.scene.items())
