"""The worker: the newest request wins, and what comes of it comes back in the window's thread."""

from __future__ import annotations

import threading
from collections.abc import Iterator

import pytest
from pytestqt.qtbot import QtBot

from app.jobs import Jobs

LONGEST_S = 30


@pytest.fixture
def jobs(qapp: object) -> Iterator[Jobs]:
    made = Jobs()
    yield made
    made.close()


class Gate:
    """Work that says when it has begun, and goes on when it may."""

    def __init__(self, result: str) -> None:
        self.result, self.begun, self.may_go = result, threading.Event(), threading.Event()

    def __call__(self) -> str:
        self.begun.set()
        assert self.may_go.wait(LONGEST_S)
        return self.result


def test_work_is_done_elsewhere_and_told_here(qtbot: QtBot, jobs: Jobs) -> None:
    told: list[tuple[object, BaseException | None, threading.Thread]] = []
    jobs.submit(threading.current_thread, lambda r, e: told.append((r, e, threading.current_thread())))
    qtbot.waitUntil(lambda: bool(told))
    (worker, error, here) = told[0]
    assert worker is not threading.main_thread()
    assert (error, here) == (None, threading.main_thread())


def test_only_the_newest_of_several_is_told_and_those_that_wait_are_not_begun(qtbot: QtBot, jobs: Jobs) -> None:
    told: list[object] = []
    running, waiting, newest = Gate("running"), Gate("waiting"), Gate("newest")
    for gate in (running, waiting, newest):
        gate_told = told.append
        jobs.submit(gate, lambda result, error, tell=gate_told: tell(result))
    assert running.begun.wait(LONGEST_S)
    for gate in (running, waiting, newest):
        gate.may_go.set()
    qtbot.waitUntil(lambda: bool(told))
    jobs.close()
    assert told == ["newest"]
    assert not waiting.begun.is_set()


def test_what_arrived_but_was_not_told_yet_is_dropped_too(qtbot: QtBot, jobs: Jobs) -> None:
    """The older result waits in the event loop while the newer request is made."""
    told: list[object] = []
    first = Gate("first")
    jobs.submit(first, lambda result, error: told.append(result))
    first.may_go.set()
    second = Gate("second")
    # The one worker begins the second only when the first has sent its result off.
    jobs._worker.submit(second)
    assert second.begun.wait(LONGEST_S)
    jobs.submit(lambda: "newest", lambda result, error: told.append(result))
    second.may_go.set()
    qtbot.waitUntil(lambda: bool(told))
    assert told == ["newest"]


def test_dropped_work_is_not_told(qtbot: QtBot, jobs: Jobs) -> None:
    told: list[object] = []
    gate = Gate("dropped")
    jobs.submit(gate, lambda result, error: told.append(result))
    assert gate.begun.wait(LONGEST_S)
    jobs.drop()
    gate.may_go.set()
    jobs.submit(lambda: "after", lambda result, error: told.append(result))
    qtbot.waitUntil(lambda: bool(told))
    assert told == ["after"]


def test_an_error_is_handed_over_and_the_worker_lives_on(qtbot: QtBot, jobs: Jobs) -> None:
    told: list[tuple[object, BaseException | None]] = []
    jobs.submit(lambda: 1 / 0, lambda result, error: told.append((result, error)))
    qtbot.waitUntil(lambda: bool(told))
    assert told[0][0] is None
    assert isinstance(told[0][1], ZeroDivisionError)
    jobs.submit(lambda: "well", lambda result, error: told.append((result, error)))
    qtbot.waitUntil(lambda: len(told) == 2)
    assert told[1] == ("well", None)


def test_closing_waits_for_the_worker_and_tells_nothing_more(qtbot: QtBot, qapp: object) -> None:
    before = set(threading.enumerate())
    jobs = Jobs()
    told: list[object] = []
    gate = Gate("late")
    jobs.submit(gate, lambda result, error: told.append(result))
    assert gate.begun.wait(LONGEST_S)
    assert set(threading.enumerate()) - before
    gate.may_go.set()
    jobs.close()
    assert not set(threading.enumerate()) - before
    qapp.processEvents()
    assert told == []
