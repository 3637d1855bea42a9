"""Layouts for tests: the drawn sizes of a plan, and whether bodies overlap or joins cross."""

from __future__ import annotations

from itertools import combinations

from app.bench.pictures import PICTURES
from app.editing.tidy import PortSides, Side, Sizes
from feedlib import Plan
from feedlib.plan import Join, Port

Point = tuple[float, float]
Segment = tuple[Point, Point]


def measured(plan: Plan) -> tuple[Sizes, PortSides]:
    """The sizes of all bodies and the sides of all ports, as the bench draws them."""
    sizes: dict[str, Point] = {}
    sides: dict[Port, tuple[Side, float]] = {}
    for placed in plan.parts:
        picture = PICTURES[placed.part.KIND]
        body = picture.body(placed, plan)
        sizes[placed.id] = (body.width(), body.height())
        for port, at in zip(placed.ports(), picture.ports(placed, plan), strict=True):
            sides[port] = ("left" if at.x() < body.center().x() else "right", at.y())
    return sizes, sides


def overlapping(plan: Plan) -> list[tuple[str, str]]:
    """The pairs of parts whose bodies overlap."""
    boxes = {}
    for placed in plan.parts:
        body = PICTURES[placed.part.KIND].body(placed, plan)
        boxes[placed.id] = body.translated(*placed.at)
    return [(a, b) for a, b in combinations(boxes, 2) if boxes[a].intersects(boxes[b])]


def segment(plan: Plan, join: Join) -> Segment:
    """The straight line of a join."""
    ends = []
    for port in join:
        placed = plan.placed(port.part)
        at = PICTURES[placed.part.KIND].ports(placed, plan)[port.number - 1]
        ends.append((placed.at[0] + at.x(), placed.at[1] + at.y()))
    return ends[0], ends[1]


def crossing(plan: Plan) -> list[tuple[Join, Join]]:
    """The pairs of joins that cross or touch when they are drawn straight."""
    lines = {join: segment(plan, join) for join in plan.joins}
    return [(a, b) for a, b in combinations(lines, 2) if _meet(lines[a], lines[b])]


def _meet(one: Segment, two: Segment) -> bool:
    """Whether two segments have a point in common."""
    (a, b), (c, d) = one, two
    turns = [_turn(a, b, c), _turn(a, b, d), _turn(c, d, a), _turn(c, d, b)]
    if turns[0] * turns[1] < 0 and turns[2] * turns[3] < 0:
        return True
    ends = ((turns[0], one, c), (turns[1], one, d), (turns[2], two, a), (turns[3], two, b))
    return any(turn == 0 and _spans(line, point) for turn, line, point in ends)


def _turn(a: Point, b: Point, c: Point) -> float:
    """More than 0, less than 0 or 0 as c is to one side of the line a b, to the other, or on it."""
    return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])


def _spans(line: Segment, point: Point) -> bool:
    """Whether a point on the line of a segment is within its ends."""
    return all(min(a, b) <= p <= max(a, b) for a, b, p in zip(*line, point, strict=True))
