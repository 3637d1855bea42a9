"""A large harness keeps nobody waiting: it is solved in the worker, and the answer is that of the newest plan."""

from __future__ import annotations

import threading
import traceback
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace

import numpy as np
import pytest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.store import Store
from feedlib import Plan
from feedlib.parts import Load
from feedlib.parts.base import State
from tests.hands import legs, same_answer, settled

SLOW_S = 1.0
"""A harness that took so long is solved in the worker the next time."""


@pytest.fixture
def make(qapp: QApplication) -> Iterator[Callable[[Plan], Store]]:
    made: list[Store] = []

    def store(plan: Plan) -> Store:
        made.append(Store(plan))
        return made[-1]

    yield store
    for each in made:
        each.close()


def test_a_large_harness_is_solved_in_the_worker_and_the_newest_plan_wins(
    qtbot: QtBot, make: Callable[[Plan], Store]
) -> None:
    store = make(legs(300))
    old = store.answer
    stale: list[bool] = []
    answers: list[object] = []
    store.stale_changed.connect(lambda: stale.append(store.stale))
    store.answer_changed.connect(lambda: answers.append(store.answer))
    for n in range(6):
        store._solve_s = SLOW_S
        store.edit("Turn", edits.turned_length(store.plan, [f"leg antenna {n}"], 0.05))
        assert store.stale
        assert store.answer is old
    settled(store)
    assert [answer.plan for answer in answers] == [store.plan]
    assert (stale[0], stale[-1]) == (True, False)
    same_answer(store)


def test_a_large_harness_is_measured_by_how_long_it_took(make: Callable[[Plan], Store]) -> None:
    """Small ones are solved at once, whatever came before."""
    store = make(legs())
    store._solve_s = SLOW_S
    store.edit("Turn", edits.turned_length(store.plan, ["leg A"], 0.001))
    settled(store)
    assert store._solve_s < SLOW_S
    assert not store.stale


def test_an_opened_plan_takes_the_place_of_one_that_is_being_solved(make: Callable[[Plan], Store]) -> None:
    store = make(legs(300))
    store._solve_s = SLOW_S
    store.edit("Turn", edits.turned_length(store.plan, ["leg antenna 1"], 0.05))
    store.open(legs(3), None)
    settled(store)
    assert store.answer is not None
    assert store.answer.plan is store.plan
    same_answer(store)


def test_moving_while_the_worker_solves_leaves_it_at_work(make: Callable[[Plan], Store]) -> None:
    store = make(legs())
    store._solve_s = SLOW_S
    store.edit("Turn", edits.turned_length(store.plan, ["leg A"], 0.05))
    store.edit("Move", edits.moved(store.plan, {"A": (48.0, 0.0)}))
    settled(store)
    same_answer(store)


@dataclass(frozen=True, slots=True, kw_only=True)
class Broken(Load):
    """A load with a fault in its formula."""

    def state(self, frequency_hz: np.ndarray) -> State:
        raise ZeroDivisionError(threading.current_thread().name)


def broken(plan: Plan) -> Plan:
    load = Broken(impedance_ohm=50 + 0j)
    return replace(plan, parts=tuple(replace(p, part=load) if p.id == "B" else p for p in plan.parts))


def test_a_fault_in_the_worker_is_raised_in_the_windows_thread_and_the_store_goes_on(
    qtbot: QtBot, make: Callable[[Plan], Store]
) -> None:
    store = make(legs())
    first = store.plan
    store._solve_s = SLOW_S
    with qtbot.captureExceptions() as caught:
        store.edit("Break", broken(first))
        qtbot.waitUntil(lambda: bool(caught))
    kind, value, trace = caught[0]
    where = [frame.name for frame in traceback.extract_tb(trace)]
    assert (kind, where[-1]) == (ZeroDivisionError, "state")
    assert "_hand_over" in where
    assert str(value) != threading.main_thread().name
    undone(store, first)


def test_a_fault_at_once_is_raised_where_the_edit_is_made(make: Callable[[Plan], Store]) -> None:
    store = make(legs())
    first = store.plan
    store._solve_s = 0.0
    with pytest.raises(ZeroDivisionError, match=threading.main_thread().name):
        store.edit("Break", broken(first))
    undone(store, first)


def undone(store: Store, first: Plan) -> None:
    """The act that broke is in the stack, and the program goes on when it is taken back."""
    assert (store.plan, store.stack.undoText()) == (broken(first), "Break")
    store.stack.undo()
    settled(store)
    assert store.plan is first
    same_answer(store)


def test_closing_ends_the_worker(make: Callable[[Plan], Store]) -> None:
    before = set(threading.enumerate())
    store = make(legs(300))
    store._solve_s = SLOW_S
    store.edit("Turn", edits.turned_length(store.plan, ["leg antenna 1"], 0.05))
    assert set(threading.enumerate()) - before
    store.close()
    assert not set(threading.enumerate()) - before
