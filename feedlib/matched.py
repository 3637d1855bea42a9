"""Matched sets: coax sections that share one cable, length and ends. Knows no edits."""

from __future__ import annotations

from dataclasses import dataclass

from feedlib.errors import quoted
from feedlib.parts import Coax
from feedlib.plan import Plan

SHARED = {"cable": "cables", "length_m": "lengths", "ends": "ends"}
"""The fields that all coax of one set have in common, and what people call them."""


@dataclass(frozen=True, slots=True)
class BrokenSet:
    """A set that is not matched. part_id : the first member unlike the set's first; differs : names of fields."""

    name: str
    part_id: str
    differs: tuple[str, ...]

    @property
    def text(self) -> str:
        """What is wrong, in one sentence."""
        name = self.name if self.name.isalnum() and len(self.name) <= 16 else quoted(self.name)
        *most, last = (SHARED[field] for field in self.differs)
        words = f"{', '.join(most)} and {last}" if most else last
        return f"The matched set {name} is not matched: its {words} differ."


def matched_sets(plan: Plan) -> dict[str, tuple[str, ...]]:
    """The members of each set by its name, in plan order."""
    found: dict[str, list[str]] = {}
    for placed in plan.parts:
        if isinstance(placed.part, Coax) and placed.part.matched_set:
            found.setdefault(placed.part.matched_set, []).append(placed.id)
    return {name: tuple(ids) for name, ids in found.items()}


def broken_sets(plan: Plan) -> tuple[BrokenSet, ...]:
    """The sets whose members differ in a shared field, as a file may hold them."""
    first: dict[str, Coax] = {}
    unlike: dict[str, str] = {}
    differs: dict[str, set[str]] = {}
    for placed in plan.parts:
        part = placed.part
        if not isinstance(part, Coax) or not part.matched_set:
            continue
        model = first.setdefault(part.matched_set, part)
        fields = {name for name in SHARED if getattr(part, name) != getattr(model, name)}
        if fields:
            unlike.setdefault(part.matched_set, placed.id)
            differs.setdefault(part.matched_set, set()).update(fields)
    return tuple(
        BrokenSet(name, part_id, tuple(f for f in SHARED if f in differs[name])) for name, part_id in unlike.items()
    )
