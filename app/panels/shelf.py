"""The catalogue as the panels offer it: which types, in what groups, with what marks. Knows no widgets."""

from __future__ import annotations

from itertools import groupby
from typing import Any

from app.editing import edits
from app.editing.wording import editable_quantity, format_db, format_frequency
from feedlib.catalogue import CatalogueCable, figures, load_catalogue, quality_sentence
from feedlib.plan import Cable, Plan

_KEPT_IN_PLANS = {"z0_ohm", "velocity_factor", "attenuation_points"}


def catalogue_type(name: str) -> CatalogueCable | None:
    """The catalogue's cable of that name."""
    return next((c for c in load_catalogue() if c.type == name), None)


def by_impedance() -> tuple[tuple[str, tuple[CatalogueCable, ...]], ...]:
    """(impedance in words, types), by rising impedance."""
    ordered = sorted(load_catalogue(), key=lambda c: c.z0_ohm)
    groups = groupby(ordered, key=lambda c: c.z0_ohm)
    return tuple((editable_quantity(z0_ohm, unit="ohm"), tuple(types)) for z0_ohm, types in groups)


def offer(cable: CatalogueCable) -> str:
    """A type as it is listed, with what speaks against its figures."""
    if not cable.offered:
        return f"{cable.type} (no loss data)"
    marks = []
    if cable.fit is not None and cable.fit.weak:
        marks.append("weak fit")
    if cable.from_memory & _KEPT_IN_PLANS:
        marks.append("from memory")
    return f"{cable.type} ({', '.join(marks)})" if marks else cable.type


def figures_text(cable: Cable, frequency_hz: float) -> str:
    """A plan's cable in one line."""
    loss = f"{format_db(cable.loss_db_per_m(frequency_hz))}/m at {format_frequency(frequency_hz)}"
    return f"{editable_quantity(cable.z0_ohm, unit='ohm')} · vf {cable.velocity_factor:.4g} · {loss}"


def caution(name: str, cable: Cable) -> str:
    """What to think of a plan's cable that is called like a type of the catalogue; empty for others."""
    known = catalogue_type(name)
    if known is None:
        return ""
    if _kept(known) != cable:
        return "These are not the catalogue's figures."
    return quality_sentence(known)


def stocked(plan: Plan, name: str | None) -> Plan:
    """The plan with a cable of that name, taken from the catalogue if it is not in the plan."""
    known = catalogue_type(name) if name is not None and name not in plan.cables else None
    cable = None if known is None else _kept(known)
    return plan if name is None or cable is None else edits.with_cable(plan, name, cable)


def _kept(known: CatalogueCable) -> Cable | None:
    """What a plan keeps of a type, or None where the type is not offered."""
    if not known.offered:
        return None
    kept: dict[str, Any] = figures(known)
    return Cable(**kept)
