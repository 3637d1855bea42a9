"""Seeded random steps over all actions: nothing raises, bench and plan agree, all undone is the first plan."""

from __future__ import annotations

import contextlib
import os
import random
from collections.abc import Callable, Iterator

import pytest
from PySide6.QtCore import QCoreApplication, QEvent, QPointF
from PySide6.QtWidgets import QApplication

from app.editing import cutting, edits, matched
from app.look import DARK, LIGHT
from app.panels.drawer_entries import entries
from app.window import Window
from feedlib import read_plan
from feedlib.assets_place import ASSETS
from feedlib.errors import PlanError
from feedlib.parts import Coax
from feedlib.plan_file import format_plan

STEPS = 10_000
MOST_PARTS = 40
SEED = int(os.environ.get("FEEDWRIGHT_SEED", "20261201"))


class Monkey:
    """Does one random thing after another to a window."""

    def __init__(self, window: Window, seed: int) -> None:
        self.window, self.store, self.dice = window, window.store, random.Random(seed)
        self.acts: list[Callable[[], None]] = [
            self.choose, self.choose, self.choose, self.turn, self.turn, self.put, self.join, self.unjoin, self.move,
            self.cut, self.match, self.leave, self.mark, self.limit, self.rename, self.note,
            self.window.delete, self.store.stack.undo, self.store.stack.redo, self.window.hand.again,
            self.window.hand.tidy, self.window.hand.copy, self.paste, self.window.select_all, self.walk,
            self.store.hold, self.store.let_go, self.look, self.window.bench.fit, self.zoom,
        ]  # fmt: skip

    def step(self) -> None:
        if len(self.store.plan.parts) > MOST_PARTS:
            chosen = self.dice.sample([p.id for p in self.store.plan.parts], MOST_PARTS // 2)
            self.store.select(tuple(chosen))
            self.window.delete()
        self.dice.choice(self.acts)()

    def part(self) -> str | None:
        return self.dice.choice(self.store.plan.parts).id if self.store.plan.parts else None

    def coax(self) -> str | None:
        found = [p.id for p in self.store.plan.parts if isinstance(p.part, Coax)]
        return self.dice.choice(found) if found else None

    def choose(self) -> None:
        ids = [p.id for p in self.store.plan.parts]
        self.store.select(tuple(self.dice.sample(ids, min(len(ids), self.dice.choice((0, 1, 1, 2, 3))))))

    def turn(self) -> None:
        self.window.bench.turn_length(self.dice.randint(-9, 9) or 1)

    def put(self) -> None:
        self.window.placing.put_behind(self.dice.choice(list(entries())), QPointF(*self.place()))

    def place(self) -> tuple[float, float]:
        return self.dice.uniform(-900, 900), self.dice.uniform(-600, 600)

    def join(self) -> None:
        ports = [port for p in self.store.plan.parts for port in p.ports() if self.store.plan.mate(port) is None]
        if len(ports) >= 2:
            a, b = self.dice.sample(ports, 2)
            self.store.edit("Join", edits.joined(self.store.plan, a, b))

    def unjoin(self) -> None:
        if self.store.plan.joins:
            self.store.select(())
            self.window.bench.bench.select_join(self.dice.choice(self.store.plan.joins))
            self.window.delete()

    def move(self) -> None:
        if part := self.part():
            self.store.edit("Move", edits.moved(self.store.plan, {part: self.place()}))

    def cut(self) -> None:
        if part := self.coax():
            with contextlib.suppress(PlanError):  # a section whose cable went away cannot be cut
                self.store.edit("Cut", cutting.cut_to(self.store.plan, part, self.dice.choice((90.0, 270.0, 33.3))))

    def match(self) -> None:
        one, other = self.coax(), self.coax()
        if one and other and one != other:
            self.store.edit("Match", matched.matched(self.store.plan, (one, other)))

    def leave(self) -> None:
        if part := self.coax():
            self.store.edit("Leave", matched.unmatched(self.store.plan, (part,)))

    def mark(self) -> None:
        band = self.store.plan.band
        frequency_hz = self.dice.uniform(band.start_hz, band.stop_hz)
        self.store.edit("Move the mark", edits.marked(self.store.plan, frequency_hz), merge="mark")

    def limit(self) -> None:
        name = self.dice.choice(("return_loss_db", "phase_balance_deg", "harness_loss_db", "isolation_db"))
        value = self.dice.choice((None, 3.0, 20.0))
        self.store.edit("Limit", edits.with_limit(self.store.plan, name, value))

    def rename(self) -> None:
        if part := self.part():
            name = f"<b>{self.dice.randint(0, 99)}</b>"
            if name not in {p.id for p in self.store.plan.parts}:
                self.store.edit("Rename", edits.renamed(self.store.plan, part, name))

    def note(self) -> None:
        if part := self.part():
            self.store.edit("Note", edits.labelled(self.store.plan, part, label=self.dice.choice(("", "天線", "a&b"))))

    def paste(self) -> None:
        if QApplication.clipboard().text():
            self.window.hand.paste(QPointF(*self.place()))

    def walk(self) -> None:
        self.window.hand.walk(self.dice.choice(("left", "right", "up", "down")))

    def look(self) -> None:
        self.window.set_look(self.dice.choice((LIGHT, DARK)))

    def zoom(self) -> None:
        self.window.bench.zoom(self.dice.choice((0.5, 2.0)))

    def agree(self) -> None:
        """Bench and plan say the same, and the answer belongs to the plan."""
        scene, plan = self.window.bench.bench, self.store.plan
        assert set(scene.parts) == {p.id for p in plan.parts}
        assert set(scene.joins) == set(plan.joins)
        for placed in plan.parts:
            item = scene.parts[placed.id]
            assert (item.pos().x(), item.pos().y()) == placed.at
            assert item.shown.placed is placed
        assert set(self.store.selected) <= set(scene.parts)
        assert self.store.answer is None or self.store.stale or not _differs(self)


def _differs(monkey: Monkey) -> bool:
    """Whether plan and answer differ in more than places and words."""
    answer = monkey.store.answer
    assert answer is not None
    ours = [(p.id, p.part) for p in monkey.store.plan.parts]
    return ours != [(p.id, p.part) for p in answer.plan.parts] or monkey.store.plan.joins != answer.plan.joins


@pytest.fixture
def window(qapp: QApplication) -> Iterator[Window]:
    plan = read_plan(ASSETS / "examples" / "two-dipole-gateway.feedplan")
    window = Window(plan, None, look=LIGHT, remember=False)
    window.resize(1200, 800)
    window.show()
    yield window
    window.close_without_asking()
    window.deleteLater()


def test_random_steps(window: Window, monkeypatch: pytest.MonkeyPatch) -> None:
    said: list[str] = []
    monkeypatch.setattr("app.bench.hand.say", lambda parent, title, sentence: said.append(sentence))
    first = format_plan(window.store.plan)
    monkey = Monkey(window, SEED)
    for n in range(STEPS):
        monkey.step()
        if n % 20 == 0:
            QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)  # what an event loop does by itself
            monkey.agree()
        if n % 200 == 0:
            QApplication.processEvents()
            monkey.agree()
    assert all(len(sentence.splitlines()) == 1 for sentence in said)
    stack = window.store.stack
    while stack.canRedo():
        stack.redo()
    last = format_plan(window.store.plan)
    while stack.canUndo():
        stack.undo()
    assert format_plan(window.store.plan) == first
    monkey.agree()
    while stack.canRedo():
        stack.redo()
    assert format_plan(window.store.plan) == last
