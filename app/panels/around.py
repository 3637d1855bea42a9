"""What a field's value stands in: its plan, its part and its record. Knows no widgets."""

from __future__ import annotations

from dataclasses import dataclass, replace

from feedlib.plan import Cable, Plan, Port
from feedlib.schema import Record


def mates_of(plan: Plan, part_id: str) -> dict[int, Port]:
    """What each joined port of a part is joined to, by its number and in that order; one pass over the joins."""
    found = {}
    for a, b in plan.joins:
        if a.part == part_id:
            found[a.number] = b
        if b.part == part_id:
            found[b.number] = a
    return dict(sorted(found.items()))


@dataclass(frozen=True, slots=True)
class Around:
    """The plan, the record that holds the field, and the part that this record belongs to (or None)."""

    plan: Plan
    record: Record | None = None
    part_id: str | None = None

    def inside(self, record: Record | None) -> Around:
        """The same place, one record further in."""
        return replace(self, record=record)

    @property
    def frequency_hz(self) -> float:
        """The marked frequency."""
        return self.plan.band.marked_hz

    @property
    def cable(self) -> Cable | None:
        """The figures of the cable that the record names, if it names one of the plan's."""
        name = getattr(self.record, "cable", None)
        return self.plan.cables.get(name) if isinstance(name, str) else None

    @property
    def velocity_factor(self) -> float | None:
        """The velocity factor that the record has, itself or by its cable."""
        own = getattr(self.record, "velocity_factor", None)
        if isinstance(own, float):
            return own
        return None if self.cable is None else self.cable.velocity_factor

    def beyond(self, number: int) -> str:
        """What the part's port is joined to, in words."""
        mate = self.plan.mate(Port(self.part_id, number)) if self.part_id is not None else None
        return f"port {number}" if mate is None else self.plan.placed(mate.part).name
