"""Edits: pure functions from a plan to the next plan, one verb each. Know no Qt; raise PlanError when refused."""

from __future__ import annotations

import re
from collections.abc import Collection, Iterable, Mapping
from dataclasses import replace
from types import MappingProxyType
from typing import Any

from feedlib.matched import matched_sets
from feedlib.parts import Coax, Part, Radio, Splitter, Tee
from feedlib.plan import Band, Cable, Join, Limits, Placed, Plan, Port, check_id


def changed_part(plan: Plan, part_id: str, **fields: Any) -> Plan:
    """One part with other values; joins to ports that it no longer has are taken away."""
    placed = plan.placed(part_id)
    part = replace(placed.part, **fields)
    joins = plan.joins
    if part.ports < placed.part.ports:
        joins = tuple(j for j in joins if not any(p.part == part_id and p.number > part.ports for p in j))
    return replace(plan, parts=_with(plan, replace(placed, part=part)), joins=joins)


def turned_length(plan: Plan, part_ids: Iterable[str], by_m: float) -> Plan:
    """Coax sections longer by so many metres (never below zero), each once, and with them their matched sets."""
    wanted = set(part_ids)
    for members in matched_sets(plan).values():
        if not wanted.isdisjoint(members):
            wanted.update(members)
    parts = tuple(
        replace(p, part=replace(p.part, length_m=max(0.0, round(p.part.length_m + by_m, 9))))
        if p.id in wanted and isinstance(p.part, Coax)
        else p
        for p in plan.parts
    )
    return replace(plan, parts=parts)


def moved(plan: Plan, places: Mapping[str, tuple[float, float]]) -> Plan:
    """Parts at other places on the bench."""
    return replace(plan, parts=tuple(replace(p, at=places[p.id]) if p.id in places else p for p in plan.parts))


def labelled(plan: Plan, part_id: str, *, label: str | None = None, note: str | None = None) -> Plan:
    """A part with another label or note."""
    placed = plan.placed(part_id)
    return replace(
        plan,
        parts=_with(
            plan,
            replace(placed, label=placed.label if label is None else label, note=placed.note if note is None else note),
        ),
    )


def renamed(plan: Plan, part_id: str, new_id: str) -> Plan:
    """A part with another id, its joins with it."""
    check_id(new_id)
    parts = tuple(replace(p, id=new_id) if p.id == part_id else p for p in plan.parts)
    return replace(
        plan, parts=parts, joins=tuple((_port(a, part_id, new_id), _port(b, part_id, new_id)) for a, b in plan.joins)
    )


def _port(port: Port, old: str, new: str) -> Port:
    return Port(new, port.number) if port.part == old else port


def added(plan: Plan, part: Part, at: tuple[float, float], part_id: str | None = None) -> tuple[Plan, str]:
    """The plan with one part more, and its id."""
    part_id = part_id or free_id(plan, part)
    return replace(plan, parts=(*plan.parts, Placed(part_id, part, at))), part_id


def free_id(plan: Plan, part: Part) -> str:
    """An id that is not taken: antennas A, B ...; tees T1, T2 ...; others by their kind."""
    taken = {p.id for p in plan.parts}
    if part.KIND == "antenna":
        letters = [chr(c) for c in range(ord("A"), ord("Z") + 1)]
        candidates: Iterable[str] = [*letters, *(f"{a}{b}" for a in letters for b in letters)]
        for name in candidates:
            if name not in taken:
                return name
    if isinstance(part, Radio) and "radio" not in taken:
        return "radio"
    stem = {"tee": "T", "antenna": "antenna "}.get(part.KIND, f"{part.LABEL} ")
    number = 1
    while f"{stem}{number}" in taken:
        number += 1
    return f"{stem}{number}"


def removed(plan: Plan, part_ids: Collection[str]) -> Plan:
    """The plan without some parts; where a two-port goes, the chain heals, unless that would close a bare loop."""
    gone = set(part_ids)
    joins = list(plan.joins)
    for part_id in part_ids:
        placed = plan.placed(part_id)
        at = [j for j in joins if part_id in (j[0].part, j[1].part)]
        joins = [j for j in joins if j not in at]
        others = [b if a.part == part_id else a for a, b in at]
        ends = {port.part for port in others}
        beside = any({a.part, b.part} == ends for a, b in joins)
        if placed.part.ports == 2 and len(ends) == 2 and not beside:
            joins.append((others[0], others[1]))
    # A healed chain whose neighbour goes as well ends there.
    parts = tuple(p for p in plan.parts if p.id not in gone)
    return replace(plan, parts=parts, joins=tuple(j for j in joins if not {j[0].part, j[1].part} & gone))


def why_no_join(plan: Plan, a: Port, b: Port) -> str | None:
    """Why two ports cannot be joined, or None; the preview and the edit ask the same."""
    if a == b:
        return "a port cannot be joined to itself"
    for port in (a, b):
        if plan.mate(port) is not None:
            return f"{port} is joined already; a branching point is a T joint"
    return None


def joined(plan: Plan, a: Port, b: Port) -> Plan:
    """Two ports tied."""
    return replace(plan, joins=(*plan.joins, (a, b)))


def unjoined(plan: Plan, join: Join) -> Plan:
    """One join taken away."""
    return replace(plan, joins=tuple(j for j in plan.joins if j != join))


def spliced(plan: Plan, join: Join, part_id: str) -> Plan:
    """A part with two free ports put into a join."""
    a, b = join
    rest = tuple(j for j in plan.joins if j != join)
    return replace(plan, joins=(*rest, (a, Port(part_id, 1)), (Port(part_id, 2), b)))


def with_cable(plan: Plan, name: str, cable: Cable) -> Plan:
    """A cable added to the plan, or its figures changed."""
    return replace(plan, cables=MappingProxyType({**plan.cables, name: cable}))


def with_band(plan: Plan, **fields: Any) -> Plan:
    """Another band; the mark is kept inside it, or inside the sweep."""
    band = replace(plan.band, **fields)
    if "mark_hz" not in fields:
        wide = plan.sweep or band
        band = replace(band, mark_hz=min(max(band.marked_hz, wide.start_hz), wide.stop_hz))
    return replace(plan, band=band)


def marked(plan: Plan, frequency_hz: float) -> Plan:
    """The mark at another frequency."""
    return replace(plan, band=replace(plan.band, mark_hz=frequency_hz))


def with_limit(plan: Plan, name: str, value: float | None) -> Plan:
    """One limit set, or None to take it away."""
    fields: dict[str, Any] = {name: value}
    limits = replace(plan.limits, **fields)
    return replace(plan, limits=limits)


def retitled(plan: Plan, *, title: str | None = None, notes: str | None = None) -> Plan:
    """Another title or other notes."""
    return replace(plan, title=plan.title if title is None else title, notes=plan.notes if notes is None else notes)


def can_grow(part: Part) -> bool:
    """Whether a part may get one port more."""
    if isinstance(part, Tee):
        return part.ports < 1026
    return isinstance(part, Splitter) and part.form in ("wilkinson", "resistive") and part.outputs < 1024


def with_ports(plan: Plan, part_id: str, ports: int) -> Plan:
    """A tee or splitter with so many ports."""
    part = plan.placed(part_id).part
    if isinstance(part, Tee):
        return changed_part(plan, part_id, ports=ports)
    if isinstance(part, Splitter):
        return changed_part(plan, part_id, outputs=ports - 1)
    return plan


def new_plan() -> Plan:
    """An empty plan to begin with: a radio in a band that people can change."""
    band = Band(start_hz=863e6, stop_hz=870e6, points=201, mark_hz=868e6)
    return Plan(
        title="New harness",
        band=band,
        limits=Limits(return_loss_db=20.0, amplitude_balance_db=0.5, phase_balance_deg=5.0),
        parts=(Placed("radio", Radio(), (0.0, 0.0)),),
    )


def plain_text(text: str) -> str:
    """A text without control characters, for one line on a screen."""
    return re.sub(r"[\x00-\x1f\x7f-\x9f]", " ", text)


def _with(plan: Plan, placed: Placed) -> tuple[Placed, ...]:
    return tuple(placed if p.id == placed.id else p for p in plan.parts)
