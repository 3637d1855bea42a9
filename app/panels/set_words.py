"""Matched sets in words: letters, members, the coax sections of a plan. Knows no widgets and changes nothing."""

from __future__ import annotations

from feedlib.parts import Coax
from feedlib.plan import Plan

MOST_NAMES = 6
MOST_LETTERS = 24


def coax_ids(plan: Plan) -> tuple[str, ...]:
    """The coax sections of a plan, in its order."""
    return tuple(p.id for p in plan.parts if isinstance(p.part, Coax))


def letter_of(plan: Plan, part_id: str) -> str | None:
    """The letter of the matched set that a part is in, or None."""
    part = plan.placed(part_id).part
    return (part.matched_set or None) if isinstance(part, Coax) else None


def short_name(plan: Plan, part_id: str) -> str:
    """The name of a section, cut where it is long, or "set A" for one of a matched set."""
    letter = letter_of(plan, part_id)
    return shortened(plan.placed(part_id).name) if letter is None else f"set {letter}"


def members_text(plan: Plan, members: tuple[str, ...]) -> str:
    """The letter of a set and its members' names, the first few of many; a section in no set by its name."""
    names = [shortened(plan.placed(i).name) for i in members]
    letter, more = letter_of(plan, members[0]), len(names) - MOST_NAMES
    text = ", ".join(names[:MOST_NAMES]) + (f" and {more} more" if more > 0 else "")
    return text if letter is None else f"{letter}: {text}"


def shortened(text: str) -> str:
    """A name as it may stand among others."""
    return text if len(text) <= MOST_LETTERS else text[: MOST_LETTERS - 1] + "…"
