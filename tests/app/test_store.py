"""The store: undo is exact, the answer belongs to the plan, the selection to what is there."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.store import Store
from feedlib import Plan
from feedlib.parts import Pad
from feedlib.plan import Cable, Placed
from tests.hands import legs, same_answer, settled
from tests.plans import random_plans
from tests.random_edits import random_edit

SLOW_S = 1.0
"""A harness that took so long is solved in the worker."""


@pytest.fixture
def store(qapp: QApplication) -> Iterator[Store]:
    made = Store(legs())
    yield made
    made.close()


def turn(store: Store, by_m: float, *part_ids: str) -> None:
    """A notch of the wheel."""
    ids = part_ids or ("leg A",)
    store.edit(f"Turn {ids[0]}", edits.turned_length(store.plan, ids, by_m), merge=f"length {ids[0]}")
    settled(store)


# Undo


def test_acts_are_undone_and_redone_by_name(store: Store) -> None:
    first = store.plan
    store.edit("Name it", edits.retitled(first, title="one"))
    store.edit("Name it again", edits.retitled(store.plan, title="two"))
    assert (store.stack.undoText(), store.stack.redoText()) == ("Name it again", "")
    store.stack.undo()
    assert (store.plan.title, store.stack.undoText(), store.stack.redoText()) == ("one", "Name it", "Name it again")
    store.stack.undo()
    assert store.plan is first
    assert (store.stack.undoText(), store.stack.redoText()) == ("", "Name it")
    store.stack.redo()
    store.edit("Another way", edits.retitled(store.plan, title="three"))
    assert (store.stack.canRedo(), store.stack.count(), store.plan.title) == (False, 2, "three")


def test_an_act_has_one_line_whatever_a_part_is_called(store: Store) -> None:
    """Qt takes what stands behind a line break for a second text."""
    store.edit("Move a\nb\x00c", edits.retitled(store.plan, title="x"))
    assert store.stack.undoText() == "Move a b c"


def test_the_same_plan_is_no_act(qtbot: QtBot, store: Store) -> None:
    with qtbot.assertNotEmitted(store.plan_changed), qtbot.assertNotEmitted(store.answer_changed):
        store.edit("Nothing", replace(store.plan))
    assert store.stack.count() == 0


def test_turns_of_the_wheel_run_together(store: Store) -> None:
    first = store.plan
    for _ in range(5):
        turn(store, 0.001)
    assert store.stack.count() == 1
    part = store.plan.placed("leg A").part
    assert part.length_m == 0.105
    store.stack.undo()
    assert store.plan is first
    store.stack.redo()
    assert store.plan.placed("leg A").part is part


def test_turns_of_other_parts_or_with_an_act_between_stay_apart(store: Store) -> None:
    turn(store, 0.001, "leg A")
    turn(store, 0.001, "leg B")
    store.edit("Name it", edits.retitled(store.plan, title="x"))
    turn(store, 0.001, "leg B")
    store.edit("Lengthen", edits.turned_length(store.plan, ["leg B"], 0.001))
    store.edit("Lengthen", edits.turned_length(store.plan, ["leg B"], 0.001))
    assert store.stack.count() == 6


def test_a_turn_that_comes_back_to_its_start_leaves_nothing(store: Store) -> None:
    first = store.plan
    turn(store, 0.002)
    turn(store, -0.001)
    assert store.stack.count() == 1
    turn(store, -0.001)
    assert store.plan == first
    assert (store.stack.count(), store.stack.isClean(), store.stack.canUndo()) == (0, True, False)
    same_answer(store)


def test_a_turn_after_saving_is_an_act_of_its_own(store: Store, tmp_path: Path) -> None:
    turn(store, 0.001)
    saved = store.plan
    store.saved(tmp_path / "a.feedplan")
    turn(store, 0.001)
    assert (store.stack.count(), store.stack.isClean()) == (2, False)
    store.stack.undo()
    assert store.plan is saved
    assert store.stack.isClean()


@given(random_plans(), st.data())
def test_all_undone_is_the_first_plan_and_all_redone_the_last(
    qapp: QApplication, plan: Plan, data: st.DataObject
) -> None:
    store = Store(plan)
    steps = [plan]
    for _ in range(data.draw(st.integers(1, 8))):
        after = data.draw(random_edit(store.plan))
        merge = data.draw(st.sampled_from([None, None, "wheel", "slider"]))
        store.edit("Edit", after, merge=merge)
        assert store.plan == after
        steps.append(after)
        settled(store)
        same_answer(store)
    last = store.plan
    while store.stack.canUndo():
        store.stack.undo()
        assert store.plan in steps
    assert store.plan is plan
    settled(store)
    same_answer(store)
    while store.stack.canRedo():
        store.stack.redo()
    assert store.plan == last
    settled(store)
    same_answer(store)
    store.close()


# What follows an edit


def test_a_moved_or_renamed_label_solves_nothing_and_changes_nothing_else(qtbot: QtBot, store: Store) -> None:
    before, plan = store.answer, store.plan
    with qtbot.assertNotEmitted(store.answer_changed), qtbot.waitSignal(store.plan_changed) as told:
        store.edit("Move A", edits.moved(plan, {"A": (240.0, 24.0)}))
    assert told.args == [plan, store.plan]
    assert store.answer is before
    assert not store.stale
    unchanged = [(p.id, p.part, p.label, p.note) for p in plan.parts]
    assert [(p.id, p.part, p.label, p.note) for p in store.plan.parts] == unchanged
    assert [p.at for p in store.plan.parts if p.id != "A"] == [p.at for p in plan.parts if p.id != "A"]
    assert replace(store.plan, parts=plan.parts) == plan
    store.edit("Name A", edits.labelled(store.plan, "A", label="north"))
    store.edit("Title", edits.retitled(store.plan, title="x", notes="y"))
    assert store.answer is before


@pytest.mark.parametrize(
    "edit",
    [
        lambda plan: edits.turned_length(plan, ["leg A"], 0.01),
        lambda plan: edits.marked(plan, 861e6),
        lambda plan: edits.with_band(plan, stop_hz=880e6),
        lambda plan: edits.with_limit(plan, "phase_balance_deg", 5.0),
        lambda plan: edits.with_cable(plan, "leg A", Cable(z0_ohm=75, velocity_factor=0.7)),
        lambda plan: edits.removed(plan, ["B"]),
        lambda plan: edits.unjoined(plan, plan.joins[2]),
        lambda plan: edits.renamed(plan, "A", "north"),
        lambda plan: replace(plan, reference_ohm=75.0),
    ],
)
def test_the_answer_follows_each_edit(qtbot: QtBot, store: Store, edit: Callable[[Plan], Plan]) -> None:
    with qtbot.waitSignal(store.answer_changed):
        store.edit("Edit", edit(store.plan))
    assert store.answer is not None
    assert store.answer.plan is store.plan
    same_answer(store)
    with qtbot.waitSignal(store.answer_changed):
        store.stack.undo()
    same_answer(store)


def test_two_equal_legs_in_hand_figures(store: Store) -> None:
    """Two matched 50 ohm legs side by side: 25 ohm, return loss 9.542 dB, and 4/9 of the power to each."""
    assert store.answer is not None
    assert store.answer.mark.return_loss_db[0] == pytest.approx(9.542425, abs=1e-6)
    assert store.answer.mark.antenna_share[0] == pytest.approx([4 / 9, 4 / 9])
    store.edit("Delete", edits.removed(store.plan, ["B"]))
    settled(store)
    turn(store, -0.1, "leg B")
    assert store.answer.antenna_ids == ("A",)
    assert store.answer.mark.antenna_share[0] == pytest.approx([1.0])


def test_another_plan_is_opened_with_nothing_to_undo(qtbot: QtBot, store: Store, tmp_path: Path) -> None:
    store.select(("A", "B"))
    turn(store, 0.001)
    other = legs(3)
    with qtbot.waitSignals([store.file_changed, store.answer_changed, store.selection_changed]):
        store.open(other, tmp_path / "x.feedplan")
    assert (store.plan, store.path, store.selected) == (other, tmp_path / "x.feedplan", ())
    assert (store.stack.count(), store.stack.isClean()) == (0, True)
    same_answer(store)


# Selection


def test_the_selection_loses_parts_that_go_before_any_view_hears_of_it(store: Store) -> None:
    heard: list[tuple[str, ...]] = []
    store.plan_changed.connect(lambda old, new: heard.append(store.selected))
    store.selection_changed.connect(lambda: heard.append(store.selected))
    store.select(("A", "leg A", "B"))
    store.edit("Delete", edits.removed(store.plan, ["leg A"]))
    assert heard == [("A", "leg A", "B"), ("A", "B"), ("A", "B")]
    store.edit("Delete", edits.removed(store.plan, ["leg B"]))
    assert heard[3:] == [("A", "B")]
    store.edit("Rename", edits.renamed(store.plan, "A", "north"))
    assert store.selected == ("B",)


def test_an_undone_part_leaves_the_selection(store: Store) -> None:
    plan, part_id = edits.added(store.plan, Pad(loss_db=3.0), (0, 0))
    store.edit("Add pad", plan)
    store.select((part_id,))
    store.stack.undo()
    assert store.selected == ()
    store.stack.redo()
    assert store.selected == ()


def test_what_is_not_in_the_plan_cannot_be_selected(qtbot: QtBot, store: Store) -> None:
    """A curve of an answer that is behind may still name a part that went."""
    store.select(("gone", "A"))
    assert store.selected == ("A",)
    with qtbot.assertNotEmitted(store.selection_changed):
        store.select(("A", "gone"))


def test_hovering_is_told_once(qtbot: QtBot, store: Store) -> None:
    with qtbot.waitSignal(store.hover_changed):
        store.hover("A")
    with qtbot.assertNotEmitted(store.hover_changed):
        store.hover("A")
    with qtbot.waitSignal(store.hover_changed):
        store.hover(None)


# What cannot be solved


def no_cable(plan: Plan) -> Plan:
    return edits.changed_part(plan, "leg B", cable="none such")


def two_radios(plan: Plan) -> Plan:
    return replace(plan, parts=(*plan.parts, Placed("radio 1", plan.placed("radio").part)))


@pytest.mark.parametrize("seconds", [0.0, SLOW_S])
@pytest.mark.parametrize(("spoil", "culprit"), [(no_cable, "leg B"), (two_radios, "radio 1")])
def test_an_unsolvable_plan_says_why_and_where_until_it_is_mended(
    store: Store, spoil: Callable[[Plan], Plan], culprit: str, seconds: float
) -> None:
    store._solve_s = seconds
    store.edit("Spoil", spoil(store.plan))
    settled(store)
    assert store.answer is None
    assert store.culprit == culprit
    assert store.why_not is not None
    assert culprit in store.why_not
    assert [p.part_id for p in store.problems if p.stops] == [culprit]
    same_answer(store)
    store._solve_s = seconds
    store.stack.undo()
    settled(store)
    same_answer(store)
    assert store.answer is not None


def test_without_a_radio_no_part_is_to_blame(store: Store) -> None:
    store.edit("Delete", edits.removed(store.plan, ["radio"]))
    settled(store)
    assert (store.answer, store.culprit) == (None, None)
    assert store.why_not is not None
    assert "radio" in store.why_not
