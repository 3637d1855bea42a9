"""Legs: a harness walked along its branches, branches copied as text, pasted, and duplicated. Knows no Qt."""

from __future__ import annotations

import math
import re
from collections.abc import Collection, Iterable, Iterator, Mapping
from dataclasses import replace
from itertools import chain, count
from types import MappingProxyType
from typing import Literal

from app.editing.edits import joined, why_no_join, with_ports
from app.editing.matched import letters, matched
from app.editing.tree import Tree, mates_of, tree_with
from feedlib.errors import PlanError
from feedlib.matched import SHARED, matched_sets
from feedlib.parts import Coax, Splitter, Tee
from feedlib.plan import Cable, Placed, Plan, Port
from feedlib.plan_file import format_plan, parse_plan

Direction = Literal["left", "right", "up", "down"]

STEP = 12.0
ROW = 144.0
BESIDE = 180.0
"""How far to the side of a leg other parts may stand in the way of its copy."""
LONGEST_ID = 64
FOREIGN = "this text holds no parts: copy some on a bench, and paste them here"


def neighbour(plan: Plan, part_id: str, direction: Direction) -> str | None:
    """The next part along the signal path: right = towards the antennas, left = towards the radio.

    Up and down = in the neighbouring branch, as far along it, or at its end where it is shorter. None at the end.
    """
    tree = tree_with(plan, part_id)
    if direction == "left":
        return tree.parent(part_id)
    if direction == "right":
        return next(iter(tree.down[part_id]), None)
    step, deep, at = (1 if direction == "down" else -1), 0, part_id
    while (parent := tree.parent(at)) is not None:
        siblings = tree.down[parent]
        place = siblings.index(at) + step
        if 0 <= place < len(siblings):
            return _along(tree, siblings[place], deep, 0 if step > 0 else -1)
        at, deep = parent, deep + 1
    return None


def _along(tree: Tree, part_id: str, joins: int, arm: int) -> str:
    """The part that many joins further out, always by the first (0) or the last (-1) arm."""
    for _ in range(joins):
        if not tree.down[part_id]:
            break
        part_id = tree.down[part_id][arm]
    return part_id


def branch_of(plan: Plan, part_id: str) -> tuple[str, ...]:
    """A part and all that the radio reaches only through it, in plan order; a ring's other side is not among them."""
    tree, mates = tree_with(plan, part_id), mates_of(plan)
    ports = {p.id: p.ports() for p in plan.parts}
    reached, row = {part_id, tree.root}, [] if part_id == tree.root else [tree.root]
    for other in row:  # grows while it is walked
        for port in ports[other]:
            mate = mates.get(port)
            if mate is not None and mate.part not in reached:
                reached.add(mate.part)
                row.append(mate.part)
    branch = set(tree.order) - reached | {part_id}
    return tuple(p.id for p in plan.parts if p.id in branch)


def same_leg_again(plan: Plan, part_ids: Collection[str], at_port: Port | None = None) -> tuple[Plan, tuple[str, ...]]:
    """The plan with the leg that some parts are in once more, and the ids of the copy.

    The leg is all that hangs at the nearest junction on the way from these parts to the radio. The copy is joined
    to at_port, or to a free port of that junction, which gets one port more where it is full. Its coax are in one
    matched set with what they were copied from. It stands below all that is as far right.
    """
    head, junction = _head(plan, part_ids)
    if at_port is None:
        plan, at_port = _free_port(plan, junction)
    branch = branch_of(plan, head.part)
    piece = _only(plan, branch)
    copy, ids = _merged(plan, piece, (0.0, _drop(plan, branch)))
    own = Port(ids[head.part], head.number)
    if reason := why_no_join(copy, at_port, own):
        raise PlanError(reason, part=at_port.part)
    copy = joined(copy, at_port, own)
    for placed in piece.parts:
        if isinstance(placed.part, Coax) and not placed.part.matched_set:
            copy = matched(copy, (placed.id, ids[placed.id]))
    return copy, tuple(ids.values())


def copied_text(plan: Plan, part_ids: Collection[str]) -> str:
    """Some parts, the joins between them and their cables as text: a plan file of nothing else."""
    return format_plan(_only(plan, part_ids))


def pasted(plan: Plan, text: str, at: tuple[float, float]) -> tuple[Plan, tuple[str, ...]]:
    """The plan with the parts of a copied text about a place, and their ids; PlanError where the text is foreign.

    Ids that are taken are made free ones, a cable that has a name of the plan and other figures gets another name,
    and so does a matched set that is unlike the plan's own.
    """
    try:
        piece = parse_plan(text.encode("utf-8", "surrogatepass"))
    except PlanError as error:
        if error.part is not None or error.field is not None:
            raise
        raise PlanError(FOREIGN) from None
    if not piece.parts:
        raise PlanError(FOREIGN)
    spans = [[p.at[axis] for p in piece.parts] for axis in (0, 1)]
    dx, dy = (
        round((wanted - (min(span) + max(span)) / 2) / STEP) * STEP for wanted, span in zip(at, spans, strict=True)
    )
    made, ids = _merged(plan, piece, (dx, dy))
    return made, tuple(ids.values())


# Where a leg begins, and where its copy goes


def _head(plan: Plan, part_ids: Collection[str]) -> tuple[Port, Port]:
    """The leg's port towards the radio, and the port of the junction that it is joined to."""
    tree = tree_with(plan, next(iter(part_ids)))
    at = min((i for i in part_ids if i in tree.down), key=tree.order.index)
    parts = {p.id: p.part for p in plan.parts}
    while (join := tree.up.get(at)) is not None:
        near, own = join
        if parts[near.part].ports > 2:
            return own, near
        at = near.part
    raise PlanError("hangs at no T joint or splitter, where it could be had again", part=next(iter(part_ids)))


def _free_port(plan: Plan, taken: Port) -> tuple[Plan, Port]:
    """A free port of a junction, the next after one that is taken, and the plan in which there is one."""
    part, tree = plan.placed(taken.part).part, tree_with(plan, taken.part)
    near = tree.up[taken.part][1].number if taken.part in tree.up else 1
    numbers = [n for n in range(1, part.ports + 1) if n != near]
    if isinstance(part, Splitter) and part.form in ("branch_line", "rat_race"):
        numbers = [2, 3] if near in (1, 4) else [1, 4]  # the others are isolated from where the wave comes in
    free = [n for n in numbers if plan.mate(Port(taken.part, n)) is None]
    if free:
        return plan, Port(taken.part, min(free, key=lambda n: (n < taken.number, n)))
    if isinstance(part, Tee) or (isinstance(part, Splitter) and part.form in ("wilkinson", "resistive")):
        return with_ports(plan, taken.part, part.ports + 1), Port(taken.part, part.ports + 1)
    raise PlanError(f"has no free port, and a {part.LABEL} of this kind gets no more", part=taken.part)


def _drop(plan: Plan, branch: Collection[str]) -> float:
    """How far below a branch its copy stands clear of all that is as far right."""
    places = [p.at for p in plan.parts if p.id in branch]
    left, right = min(x for x, _ in places) - BESIDE, max(x for x, _ in places) + BESIDE
    lowest = max(p.at[1] for p in plan.parts if left <= p.at[0] <= right)
    return math.ceil((lowest + ROW - min(y for _, y in places)) / STEP) * STEP


# Parts of one plan put into another


def _only(plan: Plan, part_ids: Collection[str]) -> Plan:
    """A plan of some parts, the joins between them and their cables."""
    chosen = set(part_ids)
    parts = tuple(p for p in plan.parts if p.id in chosen)
    used = {p.part.cable for p in parts if isinstance(p.part, Coax)}
    return Plan(
        band=plan.band,
        cables=MappingProxyType({name: cable for name, cable in plan.cables.items() if name in used}),
        parts=parts,
        joins=tuple(join for join in plan.joins if all(port.part in chosen for port in join)),
    )


def _merged(plan: Plan, piece: Plan, shift: tuple[float, float]) -> tuple[Plan, dict[str, str]]:
    """The plan with the parts of another one, moved, and the new id of each of them."""
    ids = _free_ids(plan, piece)
    names = _free_cable_names(plan, piece.cables)
    piece = replace(
        piece,
        cables=MappingProxyType({names[name]: cable for name, cable in piece.cables.items()}),
        parts=tuple(
            replace(p, part=replace(p.part, cable=names.get(p.part.cable, p.part.cable)))
            if isinstance(p.part, Coax)
            else p
            for p in piece.parts
        ),
    )
    sets, shown = _free_set_names(plan, piece), {p.name for p in plan.parts}

    def placed_anew(placed: Placed) -> Placed:
        part = placed.part
        if isinstance(part, Coax) and part.matched_set:
            part = replace(part, matched_set=sets[part.matched_set])
        label = "" if placed.label in shown else placed.label  # two of one name could not be told apart
        at = (placed.at[0] + shift[0], placed.at[1] + shift[1])
        return replace(placed, id=ids[placed.id], part=part, at=at, label=label)

    made = replace(
        plan,
        cables=MappingProxyType({**plan.cables, **piece.cables}),
        parts=(*plan.parts, *(placed_anew(p) for p in piece.parts)),
        joins=(*plan.joins, *((Port(ids[a.part], a.number), Port(ids[b.part], b.number)) for a, b in piece.joins)),
    )
    return made, ids


def _free_ids(plan: Plan, piece: Plan) -> dict[str, str]:
    """The new id of each part: its own where that is free, antennas letters, others the next number.

    Where an id names an antenna of the piece, as "match A" does, it goes with the antenna's new letter.
    """
    there = {p.id for p in plan.parts}
    taken, new = there | {p.id for p in piece.parts}, dict[str, str]()
    for placed in sorted(piece.parts, key=lambda p: p.part.KIND != "antenna"):
        if placed.id not in there:
            likes: Iterable[str] = (placed.id,)
            taken.discard(placed.id)
        elif placed.part.KIND == "antenna":
            likes = map(letters, count(1))
        else:
            with_antenna = " ".join(new.get(word, word) for word in placed.id.split(" "))
            likes = chain([with_antenna], numbered(placed.id))
        new[placed.id] = next(like for like in likes if like not in taken and len(like) <= LONGEST_ID)
        taken.add(new[placed.id])
    return {p.id: new[p.id] for p in piece.parts}


def numbered(name: str) -> Iterator[str]:
    """Names of the same kind with higher numbers: T2, T3 ... for T1, "leg 2", "leg 3" ... for "leg"."""
    digits = re.findall(r"[0-9]{0,9}$", name)[0]
    stem = name.removesuffix(digits)
    for number in count(int(digits) + 1 if digits else 2):
        tail = str(number) if digits else f" {number}"
        yield stem[: LONGEST_ID - len(tail)] + tail


def _free_cable_names(plan: Plan, cables: Mapping[str, Cable]) -> dict[str, str]:
    """What each cable is called in the plan: another name where a cable of that name has other figures."""
    there, new = dict(plan.cables), dict[str, str]()
    for name, cable in cables.items():
        new[name] = next(like for like in chain([name], numbered(name)) if there.get(like, cable) == cable)
        there[new[name]] = cable
    return new


def _free_set_names(plan: Plan, piece: Plan) -> dict[str, str | None]:
    """What each matched set is called in the plan: the same where it is like the plan's own, else a free letter."""
    own, new = matched_sets(plan), dict[str, str | None]()
    figures = {p.id: [getattr(p.part, field) for field in SHARED] for p in plan.parts if isinstance(p.part, Coax)}
    for name, members in matched_sets(piece).items():
        first = piece.placed(members[0]).part
        if any(figures[i] == [getattr(first, field) for field in SHARED] for i in own.get(name, ())):
            new[name] = name
        elif len(members) == 1:
            new[name] = None
        else:
            likes = chain([name], map(letters, count(1)))
            new[name] = next(like for like in likes if like not in own and like not in new.values())
    return new
