"""Edits of matched sets: coax sections made one set, taken out of it, and changed together. Know no Qt."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import replace
from itertools import count
from typing import Any

from app.editing.edits import changed_part
from feedlib.errors import PlanError
from feedlib.matched import SHARED, matched_sets
from feedlib.parts import Coax, Part
from feedlib.plan import Plan


def set_of(plan: Plan, part_id: str) -> tuple[str, ...]:
    """The members of the matched set that a part is in, in plan order; itself alone where it is in none."""
    name = _set_name(plan.placed(part_id).part)
    return (part_id,) if name is None else matched_sets(plan)[name]


def matched(plan: Plan, part_ids: Collection[str]) -> Plan:
    """The coax sections among some parts as one set; all take cable, length and ends of the first.

    They join the set of the first, whose other members take its figures too, or make a new one. What they leave
    behind in other sets stays there, unless it is a single section.
    """
    chosen = [i for i in dict.fromkeys(part_ids) if isinstance(plan.placed(i).part, Coax)]
    members = {*chosen, *(set_of(plan, chosen[0]) if chosen else ())}
    if len(members) < 2:
        raise PlanError("a matched set wants at least two coax sections")
    first = plan.placed(chosen[0]).part
    name = _set_name(first) or free_set_name(plan)
    shared = {field: getattr(first, field) for field in SHARED}
    return _without_lone(_changed(plan, members, **shared, matched_set=name), _sets(plan, chosen))


def unmatched(plan: Plan, part_ids: Collection[str]) -> Plan:
    """Sections out of their matched sets, as long as before; a set that is left with one member dissolves."""
    leaving = [i for i in part_ids if _set_name(plan.placed(i).part) is not None]
    return _without_lone(_changed(plan, leaving, matched_set=None), _sets(plan, leaving))


def with_coax(plan: Plan, part_id: str, **fields: Any) -> Plan:
    """A coax with other values; cable, length and ends reach all members of its matched set."""
    shared = {name: value for name, value in fields.items() if name in SHARED}
    return changed_part(_changed(plan, set_of(plan, part_id), **shared), part_id, **fields)


def free_set_name(plan: Plan) -> str:
    """The first of A, B ... Z, AA, AB ... that no matched set is called."""
    taken = matched_sets(plan)
    return next(name for name in map(letters, count(1)) if name not in taken)


def letters(number: int) -> str:
    """The number of a column in letters: 1 is A, 26 is Z, 27 is AA."""
    letters = ""
    while number:
        number, last = divmod(number - 1, 26)
        letters = chr(ord("A") + last) + letters
    return letters


def _set_name(part: Part) -> str | None:
    return (part.matched_set or None) if isinstance(part, Coax) else None


def _sets(plan: Plan, part_ids: Collection[str]) -> set[str | None]:
    return {_set_name(plan.placed(i).part) for i in part_ids}


def _changed(plan: Plan, part_ids: Collection[str], **fields: Any) -> Plan:
    """Some parts with other values."""
    parts = tuple(replace(p, part=replace(p.part, **fields)) if p.id in part_ids else p for p in plan.parts)
    return replace(plan, parts=parts) if fields else plan


def _without_lone(plan: Plan, names: Collection[str | None]) -> Plan:
    """The plan without those of some sets that have one section left."""
    lone = [members[0] for name, members in matched_sets(plan).items() if name in names and len(members) == 1]
    return _changed(plan, lone, matched_set=None)
