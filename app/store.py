"""The one place that holds the plan, its undo stack and its answer; views listen here and write nothing back.

plan -> edit -> undo stack -> plan_changed(old, new) -> one solve per turn of the event loop -> answer_changed.
"""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, QTimer, Signal
from PySide6.QtGui import QUndoCommand, QUndoStack

from feedlib import Answer, Plan, Problem, SolveError, check, solve
from feedlib.topology import Topology, compile_plan


class Edit(QUndoCommand):
    """One undoable act: the plan before and after. Edits with the same merge key run together into one."""

    def __init__(self, store: Store, text: str, after: Plan, merge: str | None) -> None:
        super().__init__(text)
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


class Store(QObject):
    """Holds the plan (immutable, replaced), its file, the answer and what is selected.

    plan_changed(old, new) comes first; answer_changed() once all waiting edits are solved. While `answer` belongs to
    an older plan, `stale` says so. `why_not` is the sentence when the plan cannot be solved (answer is then None).
    """

    plan_changed = Signal(object, object)
    answer_changed = Signal()
    file_changed = Signal()
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
        self._topology: Topology | None = None
        self._later = QTimer(self)
        self._later.setSingleShot(True)
        self._later.setInterval(0)
        self._later.timeout.connect(self.solve_now)
        self.solve_now()

    @property
    def stale(self) -> bool:
        """Whether the answer is behind the plan."""
        return self._later.isActive()

    def edit(self, text: str, plan: Plan, *, merge: str | None = None) -> None:
        """Make `plan` the plan, as an act that can be undone; nothing happens when it is the same."""
        if plan != self.plan:
            self.stack.push(Edit(self, text, plan, merge))

    def open(self, plan: Plan, path: Path | None) -> None:
        """Begin with another plan; there is nothing to undo then."""
        self.stack.clear()
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
        """Select parts (none = the plan itself)."""
        if part_ids != self.selected:
            self.selected = part_ids
            self.selection_changed.emit()

    def hover(self, part_id: str | None) -> None:
        """The part under the pointer, on the bench or as a curve."""
        if part_id != self.hovered:
            self.hovered = part_id
            self.hover_changed.emit()

    def solve_now(self) -> None:
        """Solve at once instead of when the waiting events are done."""
        self._later.stop()
        self.problems = check(self.plan)
        try:
            if self._topology is None or not self._topology.fits(self.plan):
                self._topology = compile_plan(self.plan)
            self.answer, self.why_not, self.culprit = solve(self.plan, self._topology), None, None
        except SolveError as error:
            self.answer, self.why_not, self.culprit = None, str(error), error.part
        self.answer_changed.emit()

    def _put(self, plan: Plan) -> None:
        old, self.plan = self.plan, plan
        ids = {p.id for p in plan.parts}
        if any(s not in ids for s in self.selected):
            self.select(tuple(s for s in self.selected if s in ids))
        self.plan_changed.emit(old, plan)
        if _physics(old) != _physics(plan):
            self._later.start()


def _physics(plan: Plan) -> tuple[object, ...]:
    """What of a plan an answer depends on; a part that only moved is the same object."""
    parts = tuple((p.id, p.part) for p in plan.parts)
    return plan.band, plan.sweep, plan.channels, plan.reference_ohm, plan.limits, plan.cables, parts, plan.joins
