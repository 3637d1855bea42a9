"""Work on the bench under a real mouse: joining parts and turning lengths."""

from __future__ import annotations

from collections.abc import Iterator

import pytest
from PySide6.QtCore import QPointF, Qt
from pytestqt.qtbot import QtBot

from app.editing import edits
from feedlib.parts import Tee
from feedlib.plan import Port
from tests.app.bench_screen import PLACES, at, bench, length_m, plan, shown, undone_by, words
from tests.hands import ALT, RIGHT, SHIFT, Hands

NOTCH_M = 2e-4
"""One notch at 868 MHz in air: 0.2 degrees are 0.192 mm; the nearest of 1, 2, 5 is 0.2 mm."""


@pytest.fixture
def hands(qtbot: QtBot) -> Iterator[Hands]:
    made = bench(qtbot, plan())
    yield made
    made.store.close()


# Joining


def test_a_loose_part_held_over_a_join_is_put_into_it(hands: Hands) -> None:
    """In the same act as the move."""
    middle = (hands.place("leg A:2") + hands.place("A:1")) / 2
    hands.drag("pad", middle, keys=ALT, drop=False)
    assert words(hands) == ["put into leg A:2 – A:1"]
    hands.release(middle, keys=ALT)
    assert hands.store.plan.mate(Port("leg A", 2)) == Port("pad", 1)
    assert hands.store.plan.mate(Port("A", 1)) == Port("pad", 2)
    assert undone_by(hands) == (1, "Put pad into the join")
    hands.drag("pad", (156, 300), keys=ALT)
    assert hands.store.plan.mate(Port("A", 1)) == Port("pad", 2)
    hands.store.stack.undo()
    hands.store.stack.undo()
    assert hands.store.plan == plan()


def test_a_join_is_pulled_from_port_to_port(hands: Hands) -> None:
    before = shown(hands)
    hands.drag("pad:1", "T1:4", drop=False)
    assert words(hands) == ["join pad:1 to T1:4"]
    hands.release("T1:4")
    assert hands.store.plan.joins == (*plan().joins, (Port("pad", 1), Port("T1", 4)))
    assert undone_by(hands) == (1, "Join pad:1 to T1:4")
    assert shown(hands) >= before + 1
    assert words(hands) == []


def test_a_refused_join_says_why_and_changes_nothing(hands: Hands) -> None:
    before = shown(hands)
    hands.drag("pad:2", "radio:1", drop=False)
    assert words(hands) == ["radio:1 is joined already; a branching point is a T joint"]
    hands.release("radio:1")
    assert hands.store.plan == plan()
    assert (undone_by(hands), shown(hands), words(hands)) == ((0, ""), before, [])


def test_a_join_pulled_on_to_a_t_takes_its_free_port_or_one_more(hands: Hands) -> None:
    hands.drag("pad:1", (156, -8))
    assert hands.store.plan.mate(Port("pad", 1)) == Port("T1", 4)
    hands.drag("pad:2", (156, -8))
    assert hands.store.plan.mate(Port("pad", 2)) == Port("T1", 5)
    assert hands.store.plan.placed("T1").part == Tee(ports=5)
    assert undone_by(hands) == (2, "Join pad:2 to T1:5")
    hands.store.stack.undo()
    assert hands.store.plan.placed("T1").part == Tee(ports=4)


def test_a_part_can_be_tied_to_itself(hands: Hands) -> None:
    hands.drag("pad:1", "pad:2")
    assert hands.store.plan.mate(Port("pad", 1)) == Port("pad", 2)


def test_a_join_pulled_into_the_empty_bench_asks_for_what_fits(qtbot: QtBot, hands: Hands) -> None:
    with qtbot.waitSignal(hands.view.offer_asked) as asked:
        hands.drag("T1:4", (240, 240))
    port, place, screen = asked.args
    assert port == Port("T1", 4)
    assert place == QPointF(240, 240)
    assert screen == hands.view.viewport().mapToGlobal(hands.pixel((240, 240)))
    assert hands.store.plan == plan()


def test_a_click_on_a_port_or_a_pull_taken_back_asks_nothing(qtbot: QtBot, hands: Hands) -> None:
    before = shown(hands)
    with qtbot.assertNotEmitted(hands.view.offer_asked):
        hands.click("T1:4")
        hands.drag("T1:4", (240, 240), drop=False)
        hands.key(Qt.Key.Key_Escape)
        hands.release((240, 240))
        hands.drag("T1:4", (240, 240), drop=False)
        hands.press((240, 240), button=RIGHT)
        hands.release((240, 240), button=RIGHT)
        hands.release((240, 240))
    assert (hands.store.plan, shown(hands), words(hands)) == (plan(), before, [])


# Lengths


@pytest.mark.parametrize(("keys", "times"), [(Qt.KeyboardModifier.NoModifier, 1), (SHIFT, 10), (ALT, 0.1)])
def test_the_wheel_over_a_selected_swell_turns_its_length(
    hands: Hands, keys: Qt.KeyboardModifier, times: float
) -> None:
    hands.click("leg A")
    scale = hands.view.transform().m11()
    hands.wheel("leg A", 1, keys=keys)
    hands.wheel("leg A", 2, keys=keys)
    assert length_m(hands, "leg A") == pytest.approx(0.1 + 3 * times * NOTCH_M, abs=1e-12)
    assert undone_by(hands) == (1, "Lengthen leg A")
    hands.wheel("leg A", -3, keys=keys)
    assert (hands.store.plan, undone_by(hands)) == (plan(), (0, ""))
    assert hands.view.transform().m11() == scale


def test_the_wheel_turns_all_selected_sections_alike(hands: Hands) -> None:
    for part_id in ("leg A", "A", "leg B"):
        hands.click(part_id, keys=SHIFT)
    hands.wheel("leg B", -2)
    assert [length_m(hands, i) for i in ("leg A", "leg B")] == [pytest.approx(0.1 - 2 * NOTCH_M)] * 2
    assert undone_by(hands) == (1, "Shorten 2 sections")


@pytest.mark.parametrize("over", ["leg B", "A", (250, 300)])
def test_the_wheel_elsewhere_zooms_about_the_pointer(hands: Hands, over: str | tuple[float, float]) -> None:
    hands.click("leg A")
    hands.click("A", keys=SHIFT)
    here = hands.pixel(over)
    place = hands.view.mapToScene(here)
    hands.wheel(place, 2)
    assert hands.view.transform().m11() == pytest.approx(1.2**2)
    assert (hands.view.mapToScene(here) - place).manhattanLength() < 1.5
    assert hands.store.plan == plan()


@pytest.mark.parametrize("key", [Qt.Key.Key_Plus, Qt.Key.Key_Equal])
def test_plus_and_minus_turn_the_selected_length(hands: Hands, key: Qt.Key) -> None:
    hands.key(key)
    assert hands.store.plan == plan()
    hands.click("leg B")
    hands.key(key)
    hands.key(key)
    assert length_m(hands, "leg B") == pytest.approx(0.1 + 2 * NOTCH_M)
    hands.key(key, ALT)
    assert length_m(hands, "leg B") == pytest.approx(0.1 + 2.1 * NOTCH_M)
    hands.key(Qt.Key.Key_Minus, ALT)
    hands.key(Qt.Key.Key_Minus)
    assert length_m(hands, "leg B") == pytest.approx(0.1 + NOTCH_M)
    assert undone_by(hands)[0] == 1


def test_no_length_is_turned_below_zero(hands: Hands) -> None:
    hands.click("leg A")
    hands.wheel("leg A", -100, keys=SHIFT)
    assert length_m(hands, "leg A") == 0


def test_a_swells_end_is_dragged_in_one_act(hands: Hands) -> None:
    """0.1 m in air at 868 MHz are 104.2 degrees, drawn 44 + 78 log2(1 + 104.2/45) = 178.9 wide; 40 more are 167.9."""
    end = hands.place("leg A") + QPointF(86, 0)
    hands.click("leg A")
    hands.drag(end, end + QPointF(20, 0), drop=False)
    assert length_m(hands, "leg A") == pytest.approx(0.1611, abs=NOTCH_M)
    assert words(hands) == [f"{length_m(hands, 'leg A') * 1000:.1f} mm  {length_m(hands, 'leg A') * 1042.34:.1f}°"]
    hands.release(end + QPointF(20, 0))
    assert undone_by(hands) == (1, "Turn leg A")
    assert (at(hands, "leg A"), words(hands)) == (PLACES["leg A"], [])
    hands.store.stack.undo()
    assert hands.store.plan == plan()


def test_two_drags_of_an_end_are_two_acts(hands: Hands) -> None:
    hands.click("leg A")
    for _ in range(6):
        end = hands.place("leg A") + QPointF(hands.scene.parts["leg A"].body.width() / 2 - 3, 0)
        hands.drag(end, end + QPointF(6, 0))
    assert undone_by(hands) == (6, "Turn leg A")


def test_escape_takes_a_dragged_end_back(hands: Hands) -> None:
    end = hands.place("leg A") + QPointF(86, 0)
    hands.click("leg A")
    hands.drag(end, end + QPointF(40, 0), drop=False)
    hands.key(Qt.Key.Key_Escape)
    stack = hands.store.stack
    assert (hands.store.plan, stack.canUndo(), stack.canRedo(), words(hands)) == (plan(), False, False, [])
    hands.release(end + QPointF(40, 0))
    assert hands.store.plan == plan()


def test_a_click_on_a_swells_end_that_trembles_turns_nothing(hands: Hands) -> None:
    end = hands.place("leg A") + QPointF(86, 0)
    hands.click("leg A")
    hands.press(end)
    hands.move(end + QPointF(2, 1))
    hands.release(end + QPointF(2, 1))
    assert hands.store.plan == plan()


def test_the_end_of_a_section_that_was_not_selected_moves_it(hands: Hands) -> None:
    """The pointer has not said that it would turn the length."""
    end = hands.place("leg A") + QPointF(86, 0)
    hands.drag(end, end + QPointF(0, -48))
    assert length_m(hands, "leg A") == 0.1
    assert at(hands, "leg A") == (312, -156)


def test_the_end_of_a_section_that_is_not_drawn_to_scale_moves_it(hands: Hands) -> None:
    """Else a feeder of some metres would shrink to what can be drawn."""
    hands.store.edit("Lengthen", edits.changed_part(hands.store.plan, "leg A", length_m=2.5))
    hands.click("leg A")
    end = hands.place("leg A") - QPointF(176, 0)
    hands.drag(end, end + QPointF(0, -48))
    assert length_m(hands, "leg A") == 2.5
    assert at(hands, "leg A") == (312, -156)
