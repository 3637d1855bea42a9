"""The one place that holds the plan, its undo stack and its answer; views listen here and write nothing back.

plan -> edit -> undo stack -> plan_changed(old, new) -> solve -> answer_changed.
"""

from __future__ import annotations

import time
from dataclasses import dataclass
from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QUndoCommand, QUndoStack

from app.editing.edits import plain_text
from app.jobs import Jobs
from feedlib import Answer, Plan, Problem, SolveError, check, solve
from feedlib.compiler import compile_plan
from feedlib.topology import Topology


class Edit(QUndoCommand):
    """One undoable act: the plan before and after. Edits with the same merge key run together into one."""

    def __init__(self, store: Store, text: str, after: Plan, merge: str | None) -> None:
        super().__init__(plain_text(text))  # behind a line break Qt would take a second text
        self._store, self._before, self._after, self._merge = store, store.plan, after, merge

    def redo(self) -> None:
        self._store._put(self._after)

    def undo(self) -> None:
        self._store._put(self._before)

    def id(self) -> int:
        return -1 if self._merge is None else 1

    def mergeWith(self, other: QUndoCommand) -> bool:
        if not isinstance(other, Edit) or other._merge != self._merge:
            return False
        self._after = other._after
        self.setObsolete(self._after == self._before)
        return True


AT_ONCE_S = 0.02
"""A harness that took longer to solve than this is solved in the worker the next time."""


@dataclass(frozen=True, slots=True)
class Attempt:
    """What came of solving a plan: an answer, or why there is none and at which part."""

    problems: tuple[Problem, ...]
    answer: Answer | None
    why_not: str | None
    culprit: str | None
    topology: Topology


def _attempt(plan: Plan, topology: Topology | None) -> tuple[Attempt, float]:
    """The attempt and how many seconds it took."""
    start = time.perf_counter()
    if topology is None or not topology.fits(plan):
        topology = compile_plan(plan)
    problems = check(plan)
    try:
        answer = solve(plan, topology)
        _ = answer.verdicts
        attempt = Attempt(problems, answer, None, None, topology)
    except SolveError as error:
        attempt = Attempt(problems, None, str(error), error.part, topology)
    return attempt, time.perf_counter() - start


class Store(QObject):
    """Holds the plan (immutable, replaced), its file, the answer and what is selected.

    plan_changed(old, new) comes first, answer_changed() when it is solved: at once for all but large harnesses. While
    `answer` belongs to an older plan, `stale` says so. `why_not` is the sentence when the plan cannot be solved
    (answer is then None), `culprit` the part that stops it.
    """

    plan_changed = Signal(object, object)
    answer_changed = Signal()
    file_changed = Signal()
    stale_changed = Signal()
    held_changed = Signal()
    selection_changed = Signal()
    hover_changed = Signal()

    def __init__(self, plan: Plan, path: Path | None = None) -> None:
        super().__init__()
        self.plan, self.path = plan, path
        self.answer: Answer | None = None
        self.why_not: str | None = None
        self.culprit: str | None = None
        self.problems: tuple[Problem, ...] = ()
        self.selected: tuple[str, ...] = ()
        self.hovered: str | None = None
        self.stack = QUndoStack(self)
        self.stale = False
        self.held: Answer | None = None
        self._topology: Topology | None = None
        self._solve_s = 0.0
        self._jobs = Jobs(self)
        self.solve_now()

    def edit(self, text: str, plan: Plan, *, merge: str | None = None) -> None:
        """Make `plan` the plan, as an act that can be undone; nothing happens when it is the same."""
        if plan != self.plan:
            self.stack.push(Edit(self, text, plan, merge))

    def open(self, plan: Plan, path: Path | None) -> None:
        """Begin with another plan; there is nothing to undo then."""
        self.stack.clear()
        self.let_go()
        self.path = path
        self.select(())
        self._put(plan)
        self.file_changed.emit()

    def saved(self, path: Path) -> None:
        """The present plan is on disk at `path`."""
        self.path = path
        self.stack.setClean()
        self.file_changed.emit()

    def select(self, part_ids: tuple[str, ...]) -> None:
        """Select parts (none = the plan itself); what an answer that is behind still names may be gone."""
        ids = {p.id for p in self.plan.parts}
        part_ids = tuple(s for s in part_ids if s in ids)
        if part_ids != self.selected:
            self.selected = part_ids
            self.selection_changed.emit()

    def hover(self, part_id: str | None) -> None:
        """The part under the pointer, on the bench or as a curve."""
        if part_id != self.hovered:
            self.hovered = part_id
            self.hover_changed.emit()

    def hold(self) -> None:
        """Keep the present answer to compare with, until it is let go."""
        if self.answer is not None:
            self.held = self.answer
            self.held_changed.emit()

    def let_go(self) -> None:
        """Forget the held answer."""
        if self.held is not None:
            self.held = None
            self.held_changed.emit()

    def solve_now(self) -> None:
        """Solve here and now."""
        self._jobs.drop()
        self._take_in(self.plan, *_attempt(self.plan, self._topology))

    def close(self) -> None:
        """End the worker."""
        self._jobs.close()

    def _solve(self) -> None:
        """Solve at once when that takes no longer than a frame, else in the worker; the views then say they follow."""
        plan, topology = self.plan, self._topology
        if self._solve_s < AT_ONCE_S:
            self.solve_now()
            return
        self.stale = True
        self.stale_changed.emit()
        self._jobs.submit(lambda: _attempt(plan, topology), lambda found, error: self._arrived(plan, found, error))

    def _arrived(self, plan: Plan, found: tuple[Attempt, float], error: BaseException | None) -> None:
        if error is not None:
            raise error
        self._take_in(plan, *found)

    def _take_in(self, plan: Plan, attempt: Attempt, seconds: float) -> None:
        self._solve_s = seconds
        self.problems = attempt.problems
        self.answer, self.why_not, self.culprit = attempt.answer, attempt.why_not, attempt.culprit
        self._topology = attempt.topology
        if self.stale:
            self.stale = False
            self.stale_changed.emit()
        self.answer_changed.emit()

    def _put(self, plan: Plan) -> None:
        old, self.plan = self.plan, plan
        ids = {p.id for p in plan.parts}
        kept = tuple(s for s in self.selected if s in ids)
        gone = kept != self.selected
        self.selected = kept  # views that follow the plan already see what is left of the selection
        self.plan_changed.emit(old, plan)
        if gone:
            self.selection_changed.emit()
        if _physics(old) != _physics(plan):
            self._solve()


def _physics(plan: Plan) -> tuple[object, ...]:
    """What of a plan an answer depends on; a part that only moved is the same object."""
    parts = tuple((p.id, p.part) for p in plan.parts)
    return plan.band, plan.sweep, plan.channels, plan.reference_ohm, plan.limits, plan.cables, parts, plan.joins
