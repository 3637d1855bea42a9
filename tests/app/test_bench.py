"""The bench under a real mouse: items, selecting, moving, and the view itself."""

from __future__ import annotations

from collections.abc import Iterator

import pytest
from PySide6.QtCore import QEvent, QPoint, QPointF, Qt
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from app.editing import edits
from feedlib.parts import Tee
from feedlib.plan import Port
from tests.app.bench_screen import PLACES, at, bench, plan, shown, undone_by, words
from tests.hands import ALT, CONTROL, LEFT, MIDDLE, SHIFT, Hands


@pytest.fixture
def hands(qtbot: QtBot) -> Iterator[Hands]:
    made = bench(qtbot, plan())
    yield made
    made.store.close()


# Items and selection


def test_items_follow_the_plan(hands: Hands) -> None:
    store, scene = hands.store, hands.scene
    store.edit("Add", edits.added(store.plan, Tee(), (36.0, 240.0))[0])
    store.edit("Delete", edits.removed(store.plan, ["leg B"]))
    store.edit("Rename", edits.renamed(store.plan, "A", "north"))
    for _ in range(4):
        assert set(scene.parts) == {p.id for p in store.plan.parts}
        assert set(scene.joins) == set(store.plan.joins)
        for placed in store.plan.parts:
            item = scene.parts[placed.id]
            assert (item.shown.placed, item.shown.plan) == (placed, store.plan)
            assert item.pos() == QPointF(*placed.at)
            assert len(item.ports) == placed.part.ports
        store.stack.undo()
    assert set(scene.parts) == set(PLACES)


def test_joins_end_at_the_ports(hands: Hands) -> None:
    hands.store.edit("Turn", edits.turned_length(hands.store.plan, ["leg A"], 0.2))
    hands.store.edit("Move", edits.moved(hands.store.plan, {"A": (700.0, -300.0)}))
    for (a, b), item in hands.scene.joins.items():
        path = item._path
        assert path.pointAtPercent(0) == hands.place(str(a))
        assert (path.pointAtPercent(1) - hands.place(str(b))).manhattanLength() < 1e-6


def test_a_click_selects_and_a_click_beside_selects_the_plan(hands: Hands) -> None:
    hands.click("leg A")
    assert hands.store.selected == ("leg A",)
    hands.click("A")
    assert hands.store.selected == ("A",)
    hands.click((250, 300))
    assert hands.store.selected == ()
    assert undone_by(hands) == (0, "")


@pytest.mark.parametrize("keys", [SHIFT, CONTROL])
def test_a_click_with_shift_adds_and_takes_away(hands: Hands, keys: Qt.KeyboardModifier) -> None:
    hands.click("leg A")
    hands.click("A", keys=keys)
    hands.click("pad", keys=keys)
    assert hands.store.selected == ("leg A", "A", "pad")
    hands.click("A", keys=keys)
    assert hands.store.selected == ("leg A", "pad")
    hands.click((250, 300), keys=keys)
    assert hands.store.selected == ("leg A", "pad")


def test_fast_clicks_are_clicks(qtbot: QtBot, hands: Hands) -> None:
    """The second of two fast clicks comes as a double click."""
    port, here = hands.view.viewport(), hands.pixel("A")
    hands.click("A", keys=SHIFT)
    assert hands.store.selected == ("A",)
    qtbot.mouseDClick(port, LEFT, SHIFT, here)
    assert hands.store.selected == ()


def test_a_box_selects_what_it_touches(hands: Hands) -> None:
    hands.drag((270, -200), (560, -60))
    assert set(hands.store.selected) == {"leg A", "A"}
    hands.press((90, 260), keys=SHIFT)
    hands.move((200, 180))
    assert set(hands.store.selected) == {"leg A", "A", "pad"}
    hands.release((200, 180))
    hands.drag((90, 260), (100, 270))
    assert hands.store.selected == ()
    assert undone_by(hands) == (0, "")


def test_a_part_is_taken_hold_of_anywhere_on_it(hands: Hands) -> None:
    for part_id, item in hands.scene.parts.items():
        body = item.body
        for x in range(round(body.left()) - 4, round(body.right()) + 5):
            assert hands.scene.part_under(item.pos() + QPointF(x, 1)) is item, f"{part_id} at {x} from its middle"


def test_escape_takes_a_box_back(hands: Hands) -> None:
    hands.click("pad")
    before = shown(hands)
    hands.drag((270, -200), (560, -60), drop=False)
    assert set(hands.store.selected) == {"leg A", "A"}
    hands.key(Qt.Key.Key_Escape)
    assert (hands.store.selected, shown(hands)) == (("pad",), before)
    hands.release((560, -60))
    assert hands.store.selected == ("pad",)


def test_escape_selects_the_plan(hands: Hands) -> None:
    hands.click("pad")
    hands.key(Qt.Key.Key_Escape)
    assert hands.store.selected == ()


def test_the_pointer_hovers_a_part_or_a_join(hands: Hands) -> None:
    hands.move("leg A")
    assert hands.store.hovered == "leg A"
    assert hands.scene.parts["leg A"].shown.hovered
    middle = (hands.place("leg A:2") + hands.place("A:1")) / 2
    hands.move(middle)
    assert hands.store.hovered is None
    hovered = [join for join, item in hands.scene.joins.items() if item.hovered]
    assert hovered == [(Port("leg A", 2), Port("A", 1))]
    hands.move("A")
    QApplication.sendEvent(hands.view, QEvent(QEvent.Type.Leave))
    assert hands.store.hovered is None


# Moving


def test_a_drag_moves_a_part_in_one_act(hands: Hands) -> None:
    hands.click("leg A")
    before = shown(hands)
    hands.drag("leg A", (408, -228), drop=False)
    assert undone_by(hands) == (0, "")
    assert at(hands, "leg A") == PLACES["leg A"]
    assert hands.place("leg A") == QPointF(408, -228)
    hands.release((408, -228))
    assert at(hands, "leg A") == (408, -228)
    assert undone_by(hands) == (1, "Move leg A")
    assert shown(hands) == before
    hands.store.stack.undo()
    assert at(hands, "leg A") == PLACES["leg A"]
    assert hands.place("leg A") == QPointF(*PLACES["leg A"])


def test_selected_parts_move_together(hands: Hands) -> None:
    hands.click("leg A")
    hands.click("A", keys=SHIFT)
    hands.drag("A", (504 + 48, -108 - 60))
    assert at(hands, "leg A") == (312 + 48, -108 - 60)
    assert at(hands, "A") == (504 + 48, -108 - 60)
    assert at(hands, "B") == PLACES["B"]
    assert undone_by(hands) == (1, "Move 2 parts")
    assert set(hands.store.selected) == {"leg A", "A"}


def test_a_click_that_trembles_moves_nothing(hands: Hands) -> None:
    hands.press("A")
    hands.move((506, -107))
    hands.release((506, -107))
    assert undone_by(hands) == (0, "")
    assert hands.place("A") == QPointF(*PLACES["A"])


def test_moved_parts_stand_on_the_grid_or_on_the_line_of_others(hands: Hands) -> None:
    hands.drag("pad", (245, 291))
    assert at(hands, "pad") == (240, 288)  # the nearest twelves
    hands.drag("pad", (309, 281))
    assert at(hands, "pad") == (312, 276)  # upright with the legs
    hands.drag("pad", (251, 113))
    assert at(hands, "pad") == (252, 108)  # in line with leg B


def test_alt_moves_freely(hands: Hands) -> None:
    hands.drag("pad", (245, 291), keys=ALT)
    assert at(hands, "pad") == (245, 291)


def test_escape_takes_a_move_back(hands: Hands) -> None:
    hands.click("leg A")
    hands.click("A", keys=SHIFT)
    before = shown(hands)
    hands.drag("A", (600, -300), drop=False)
    hands.key(Qt.Key.Key_Escape)
    assert [hands.place(i) for i in ("leg A", "A")] == [QPointF(*PLACES[i]) for i in ("leg A", "A")]
    hands.move((700, -300))
    hands.release((700, -300))
    assert (undone_by(hands), shown(hands)) == ((0, ""), before)
    assert hands.place("A") == QPointF(*PLACES["A"])


def test_a_free_port_that_is_moved_near_another_joins_it(hands: Hands) -> None:
    """In the same act as the move."""
    own = hands.place("pad:1") - hands.place("pad")
    goal = hands.place("T1:4") - own + QPointF(9, 4)
    hands.drag("pad", goal, keys=ALT, drop=False)
    assert words(hands) == ["join pad:1 to T1:4"]
    hands.release(goal, keys=ALT)
    assert hands.store.plan.mate(Port("pad", 1)) == Port("T1", 4)
    assert undone_by(hands) == (1, "Join pad:1 to T1:4")
    assert words(hands) == []
    hands.store.stack.undo()
    assert hands.store.plan == plan()


# The view


def test_the_middle_button_pans(hands: Hands) -> None:
    hands.click("pad")
    here = hands.pixel("A")
    hands.press("A", button=MIDDLE)
    for step in (QPoint(5, -30), QPoint(60, -40)):
        hands.move(hands.view.mapToScene(here + step))
    assert (hands.pixel("A") - (here + QPoint(60, -40))).manhattanLength() <= 1
    hands.release("A", button=MIDDLE)
    hands.move((250, 300))
    assert (hands.pixel("A") - (here + QPoint(60, -40))).manhattanLength() <= 1
    assert (hands.store.selected, hands.store.plan) == (("pad",), plan())


def test_the_whole_harness_and_what_is_selected_fit(hands: Hands) -> None:
    hands.view.zoom(4)
    hands.view.fit()
    seen = hands.view.mapToScene(hands.view.viewport().rect()).boundingRect()
    assert seen.contains(hands.scene.contents())
    assert hands.view.transform().m11() <= 1.25
    hands.store.select(("pad",))
    hands.view.fit_selection()
    assert (hands.pixel("pad") - hands.view.viewport().rect().center()).manhattanLength() < 40
    hands.store.edit("Delete", edits.removed(hands.store.plan, [p.id for p in hands.store.plan.parts]))
    hands.view.fit()
    assert hands.view.transform().m11() == 1.25


def test_zoom_has_ends(hands: Hands) -> None:
    for notches, scale in ((40, 4.0), (-80, 0.08), (400, 4.0)):
        hands.wheel((250, 300), notches)
        assert hands.view.transform().m11() == pytest.approx(scale)
    hands.view.fit()
    hands.click("A")
    assert hands.store.selected == ("A",)
