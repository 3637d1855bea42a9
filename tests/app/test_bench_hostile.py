"""Hands that do the wrong thing at the wrong time: the bench shows the plan afterwards, and nothing else."""

from __future__ import annotations

import random
from collections.abc import Callable, Iterator

import pytest
from PySide6.QtCore import QEvent, QPointF, Qt, QTimer
from PySide6.QtGui import QMouseEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.look import DARK, LIGHT
from app.window import Window
from feedlib.plan import Port
from feedlib.plan_file import format_plan, parse_plan
from tests.app.bench_screen import PLACES, plan, undone_by, window, words
from tests.hands import ALT, CONTROL, LEFT, MIDDLE, PLAIN, RIGHT, SHIFT, Hands, settled


@pytest.fixture
def whole(qtbot: QtBot) -> tuple[Window, Hands]:
    return window(qtbot, plan())


@pytest.fixture
def hands(whole: tuple[Window, Hands]) -> Iterator[Hands]:
    """Hands on the bench that wave every menu and question away; afterwards nothing is left of what they began."""
    made = whole[1]
    closer = QTimer()
    closer.timeout.connect(_wave_away)
    closer.start(0)
    yield made
    closer.stop()
    as_planned(made)


def _wave_away() -> None:
    asked = QApplication.activePopupWidget() or QApplication.activeModalWidget()
    if asked is not None:
        asked.close()


def as_planned(hands: Hands) -> None:
    """The bench shows exactly the plan."""
    scene, store = hands.scene, hands.store
    settled(store)
    assert set(scene.parts) == {p.id for p in store.plan.parts}
    assert set(scene.joins) == set(store.plan.joins)
    assert set(scene.flags) <= set(scene.joins)
    for placed in store.plan.parts:
        assert scene.parts[placed.id].pos() == QPointF(*placed.at)
        assert scene.parts[placed.id].shown.placed == placed
    assert {i for i, item in scene.parts.items() if item.selected} == set(store.selected)
    wanted = {*scene.parts.values(), *scene.joins.values(), *scene.flags.values()}
    assert set(scene.items()) == wanted
    assert hands.view._gesture is None
    assert parse_plan(format_plan(store.plan).encode()) == store.plan
    hands.view.grab()


# What is begun on the bench before it is disturbed: (press, drag to)
GESTURES = {
    "move": ("leg A", (420, -240)),
    "move several": ("A", (600, -240)),
    "pull": ("pad:1", (240, 240)),
    "pull to a port": ("pad:1", "T1:4"),
    "box": ((60, -220), (600, 300)),
    "turn an end": ((312 + 86, -108), (312 + 120, -108)),
}


@pytest.fixture(params=GESTURES)
def begun(hands: Hands, request: pytest.FixtureRequest) -> Callable[[], QPointF]:
    """Begin a gesture, and leave it in the hand; gives the place where the pointer is."""

    def begin() -> QPointF:
        hands.store.edit("Move", edits.moved(hands.store.plan, {"B": (516.0, 120.0)}))
        hands.store.edit("Add", edits.added(hands.store.plan, hands.store.plan.placed("pad").part, (0.0, 204.0))[0])
        if request.param == "move several":
            hands.store.select(("leg A", "A", "pad"))
        if request.param == "turn an end":
            hands.store.select(("leg A",))
        start, end = GESTURES[request.param]
        hands.drag(start, end, drop=False)
        assert hands.view._gesture is not None
        return hands.place(end)

    return begin


def finish(hands: Hands, place: QPointF) -> None:
    """Go on as if nothing had happened, and let go."""
    hands.move(place + QPointF(30, 20))
    hands.move(place + QPointF(60, -20))
    hands.release(place + QPointF(60, -20))


def test_delete_while_dragging(hands: Hands, begun: Callable[[], QPointF]) -> None:
    place = begun()
    chosen = set(hands.store.selected)
    hands.key(Qt.Key.Key_Delete)
    finish(hands, place)
    assert not chosen & set(hands.scene.parts)


def test_the_part_in_the_hand_goes(hands: Hands, begun: Callable[[], QPointF]) -> None:
    place = begun()
    hands.store.edit("Delete", edits.removed(hands.store.plan, ["leg A", "A", "pad", "T1"]))
    finish(hands, place)
    assert undone_by(hands)[1] == "Delete"


def test_undo_and_redo_while_dragging(hands: Hands, begun: Callable[[], QPointF]) -> None:
    place = begun()
    for _ in range(3):
        hands.key(Qt.Key.Key_Z, CONTROL)
    hands.key(Qt.Key.Key_Z, CONTROL | SHIFT)
    finish(hands, place)


def test_the_wheel_while_dragging(hands: Hands, begun: Callable[[], QPointF]) -> None:
    place = begun()
    for notches in (1, -3, 2):
        hands.wheel(place, notches)
        hands.wheel("leg A", notches)
    finish(hands, place)


@pytest.mark.parametrize("button", [RIGHT, MIDDLE])
def test_a_second_button_takes_the_gesture_back(
    hands: Hands, begun: Callable[[], QPointF], button: Qt.MouseButton
) -> None:
    place = begun()
    before = hands.store.plan if hands.store.stack.undoText() == "Add" else None
    hands.press(place, button=button)
    hands.move(place + QPointF(40, 40))
    hands.release(place + QPointF(40, 40), button=button)
    finish(hands, place)
    assert undone_by(hands) == (2, "Add")
    assert before is None or hands.store.plan == before


def test_escape_twice_while_dragging(hands: Hands, begun: Callable[[], QPointF]) -> None:
    place = begun()
    hands.key(Qt.Key.Key_Escape)
    hands.key(Qt.Key.Key_Escape)
    finish(hands, place)
    assert undone_by(hands) == (2, "Add")


def test_another_plan_is_opened_while_dragging(hands: Hands, begun: Callable[[], QPointF]) -> None:
    place = begun()
    other = edits.renamed(edits.removed(plan(), ["leg A", "T1", "pad"]), "A", "leg A")
    hands.store.open(other, None)  # an antenna has now the name of a section
    finish(hands, place)
    assert hands.store.plan == other


def test_another_theme_while_dragging(whole: tuple[Window, Hands], hands: Hands, begun: Callable[[], QPointF]) -> None:
    place = begun()
    whole[0].set_look(DARK)
    hands.move(place + QPointF(5, 5))
    whole[0].set_look(LIGHT)
    hands.key(Qt.Key.Key_Escape)


def test_a_release_outside_the_window(hands: Hands, begun: Callable[[], QPointF]) -> None:
    begun()
    hands.move((-9000, 9000))
    hands.release((-9000, 9000))


def test_a_release_that_never_comes(hands: Hands, begun: Callable[[], QPointF]) -> None:
    """As when a dialog came up meanwhile: the next move of a free pointer ends it."""
    place = begun()
    free, none = hands.view.viewport(), Qt.MouseButton.NoButton
    here = QPointF(hands.pixel(place + QPointF(30, 30)))
    moved = QMouseEvent(QEvent.Type.MouseMove, here, free.mapToGlobal(here), none, none, PLAIN)
    QApplication.sendEvent(free, moved)
    assert hands.view._gesture is None
    hands.release(place)
    assert undone_by(hands) == (2, "Add")


def test_a_release_without_a_press(hands: Hands) -> None:
    for button in (LEFT, RIGHT, MIDDLE):
        hands.release("A", button=button)
    assert hands.store.plan == plan()


def test_a_press_while_panning(hands: Hands) -> None:
    hands.press("A", button=MIDDLE)
    hands.press("A")
    hands.move((600, 0))
    hands.release((600, 0), button=MIDDLE)
    hands.move((650, 0))
    hands.release((650, 0))


def test_a_part_is_dropped_while_another_is_dragged(whole: tuple[Window, Hands], hands: Hands) -> None:
    hands.drag("leg A", (420, -240), drop=False)
    hands.drop(whole[0].drawer.things["pad"].mime(), (400, 300))
    finish(hands, QPointF(420, -240))
    assert hands.store.plan.placed("leg A").at == PLACES["leg A"]


def test_parts_far_away_and_on_top_of_each_other(hands: Hands) -> None:
    hands.store.edit("Heap", edits.moved(hands.store.plan, dict.fromkeys(PLACES, (250.0, 50.0))))
    hands.drag((250, 50), (400, 50))
    hands.store.edit("Far", edits.moved(hands.store.plan, {"A": (1e12, -1e12), "B": (-4e4, 4e4)}))
    hands.view.fit()
    hands.wheel((250, 50), -60)
    hands.wheel((250, 50), 60)
    assert words(hands) == []


def test_a_join_cannot_be_pulled_to_a_part_that_just_went(hands: Hands) -> None:
    hands.drag("pad:1", "T1:4", drop=False)
    hands.store.edit("Delete", edits.removed(hands.store.plan, ["T1"]))
    hands.release((156, 11))
    assert hands.store.plan.mate(Port("pad", 1)) is None


# A storm

KEYS = (
    (Qt.Key.Key_Delete, PLAIN),
    (Qt.Key.Key_Escape, PLAIN),
    (Qt.Key.Key_Plus, PLAIN),
    (Qt.Key.Key_Minus, ALT),
    (Qt.Key.Key_Z, CONTROL),
    (Qt.Key.Key_Z, CONTROL),
    (Qt.Key.Key_Z, CONTROL | SHIFT),
    (Qt.Key.Key_A, CONTROL),
    (Qt.Key.Key_0, CONTROL),
    (Qt.Key.Key_Left, PLAIN),
)


@pytest.mark.parametrize("seed", range(4))
def test_a_storm_of_hands(whole: tuple[Window, Hands], hands: Hands, seed: int) -> None:
    """Presses, moves, wheels, keys and drops in any order at places where something is."""
    storm(whole[0], hands, random.Random(seed), 80)


def storm(window: Window, hands: Hands, chance: random.Random, count: int) -> None:
    for _ in range(count):
        act(window, hands, chance)
    hands.key(Qt.Key.Key_Escape)
    for button in (LEFT, MIDDLE, RIGHT):
        hands.release((0, 0), button=button)
    hands.move((5, 5))
    as_planned(hands)
    while hands.store.stack.canUndo():
        hands.store.stack.undo()
    assert hands.store.plan == plan()
    as_planned(hands)


def act(window: Window, hands: Hands, chance: random.Random) -> None:
    """One thing that a hand may do."""
    places: list[QPointF] = [hands.place(part) for part in hands.scene.parts]
    places += [item.port_at(n) for item in hands.scene.parts.values() for n in range(1, len(item.ports) + 1)]
    places += [item.flag_place()[0] for item in hands.scene.joins.values()]
    place = chance.choice([*places, QPointF(chance.uniform(-300, 800), chance.uniform(-400, 500))])
    place += QPointF(chance.choice([0, 0, 3, -5, 25]), chance.choice([0, 0, -2, 6, 30]))
    button = chance.choice([LEFT, LEFT, LEFT, LEFT, RIGHT, MIDDLE])
    keys = chance.choice([PLAIN, PLAIN, PLAIN, SHIFT, ALT])
    match chance.choice(["press", "move", "move", "release", "drag", "click", "twice", "wheel", "key", "drop"]):
        case "press":
            hands.press(place, button=button, keys=keys)
        case "move":
            hands.move(place)
        case "release":
            hands.release(place, button=button)
        case "drag":
            hands.drag(place, chance.choice([*places, QPointF(200, 300)]), button=button)
        case "click":
            hands.click(place, keys=keys)
        case "twice":
            QTest.mouseDClick(hands.view.viewport(), button, keys, hands.pixel(place))
            QTest.mouseRelease(hands.view.viewport(), button, keys, hands.pixel(place))
        case "wheel":
            hands.wheel(place, chance.choice([1, -1, 0.25, 3, -8]), keys=keys)
        case "key":
            hands.key(*chance.choice(KEYS))
        case "drop":
            thing = chance.choice([t for key, t in window.drawer.things.items() if key != "measured"])
            hands.drop(thing.mime(), place)
