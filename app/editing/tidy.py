"""The tidy layout: the harness as a tree from the radio at the left to the antennas at the right. Knows no Qt.

Every part has a column, by how many joins it is away from the root, and a band of rows that holds all that hangs at
it; the bands of neighbours do not touch. So bodies cannot overlap, and a join, which stays in the band of the part
that it comes from and between two columns, cannot cross another one.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import replace
from typing import Literal

from app.editing.edits import moved
from app.editing.tree import Tree, mates_of, trees_of
from feedlib.parts import Coax, Lumped, Pad, Part, Radio, Splitter, Tee
from feedlib.plan import Join, Placed, Plan, Port

Side = Literal["left", "right"]
Sizes = Mapping[str, tuple[float, float]]
"""Width and height of each part's body, by id; a part's place is the middle of its body."""
PortSides = Mapping[Port, tuple[Side, float]]
"""At which side of its part each port stands, and how far below the part's place."""
Places = dict[str, tuple[float, float]]

STEP = 12.0
GAP, FLAG_GAP = 60.0, 110.0
"""Room between the bodies of two columns, and beside parts of three ports or more, whose joins carry flags."""
LEAST_ROW = 144.0
WORDS = 64.0
"""Height that a part needs besides its body, for its name and figures."""
STEEPEST = 8.0
"""Height of a join by the width of its gap. Left edges of a column differ by up to one STEP; of two steeper joins
the outer one would cut across the end of the inner one."""
LEAST_WIDTH = 1200.0
"""Pieces that no radio reaches stand in rows as wide as the harness, but at least this wide."""


def tidied(plan: Plan, sizes: Sizes, port_sides: PortSides) -> Plan:
    """The plan laid out from the radio to the antennas; what the radio does not reach stands below.

    Parts that are the same from both sides and have their back to the radio are turned about: their joins change
    ports, the harness stays what it was. sizes, port_sides : of all parts and ports of the plan.
    """
    plan = _faced(plan, port_sides)
    mates, parts = mates_of(plan), {p.id: p for p in plan.parts}
    pieces = [_Piece(tree, parts, mates, sizes, port_sides) for tree in trees_of(plan)]
    places: Places = {}
    left = right = bottom = 0.0
    if pieces and isinstance(parts[pieces[0].tree.root].part, Radio):
        main = pieces.pop(0)
        x, y = main.places[main.tree.root]
        left, right, bottom = main.left - x, main.right - x, main.bottom - y + GAP
        places = main.moved_by(-x, -y)
    x, y, most_right = left, bottom, max(right, left + LEAST_WIDTH)
    for piece in pieces:
        if x > left and x + piece.right - piece.left > most_right:
            x, y = left, bottom
        dx, dy = _step_up(x - piece.left), _step_up(y - piece.top)
        places |= piece.moved_by(dx, dy)
        x, bottom = piece.right + dx + FLAG_GAP, max(bottom, piece.bottom + dy)
    return moved(plan, places)


class _Piece:
    """One tree laid out by itself. places : by id; left, top, right, bottom : of all bodies with their words."""

    def __init__(
        self, tree: Tree, parts: Mapping[str, Placed], mates: Mapping[Port, Port], sizes: Sizes, port_sides: PortSides
    ) -> None:
        self.tree, self.parts, self.sizes, self.port_sides = tree, parts, sizes, port_sides
        self.row = {i: max(LEAST_ROW, _step_up(sizes[i][1] + WORDS, 2 * STEP)) for i in tree.order}
        self.columns = self._columns()
        self.pull: dict[str, int] = {}
        y = self._rows()
        if len(mates) > 2 * len(tree.up):  # otherwise there is no ring
            self.pull = self._pulls(y, mates)
            y = self._rows()
        self.places = self._across(y)
        self.left = min(x - sizes[i][0] / 2 for i, (x, _) in self.places.items())
        self.right = max(x + sizes[i][0] / 2 for i, (x, _) in self.places.items())
        self.top = min(y - self.row[i] / 2 for i, (_, y) in self.places.items())
        self.bottom = max(y + self.row[i] / 2 for i, (_, y) in self.places.items())

    def moved_by(self, dx: float, dy: float) -> Places:
        """The places on the bench."""
        return {i: (x + dx, y + dy) for i, (x, y) in self.places.items()}

    def _rows(self) -> dict[str, float]:
        """y of each part: in the middle of what hangs at its right, within its own band."""
        tree, row = self.tree, self.row
        ahead = {i: [c for c in tree.down[i] if self._exit(c)[0] == "right"] for i in tree.order}
        band: dict[str, float] = {}
        for i in reversed(tree.order):
            below = sum(band[c] for c in tree.down[i])
            band[i] = max(row[i], below) if ahead[i] else row[i] + below
        top = {tree.root: 0.0}
        for i in tree.order:
            spare = band[i] - sum(band[c] for c in tree.down[i])
            at = top[i] + (spare / 2 if ahead[i] else row[i])
            for child in sorted(tree.down[i], key=self._rank):
                top[child] = at
                at += band[child]
        y: dict[str, float] = {}
        for i in reversed(tree.order):
            y[i] = top[i] + row[i] / 2
            if ahead[i]:
                level = [y[c] + self._drop(tree.up[c]) for c in ahead[i]]
                middle = _stepped((min(level) + max(level)) / 2)
                y[i] = min(max(middle, y[i]), top[i] + band[i] - row[i] / 2)
        return y

    def _exit(self, child: str) -> tuple[Side, float]:
        """Where the port stands that a part hangs at."""
        return self.port_sides[self.tree.up[child][0]]

    def _pulls(self, y: Mapping[str, float], mates: Mapping[Port, Port]) -> dict[str, int]:
        """For each part that closes a ring, whether its other neighbour is below (1) or above (-1) the near one."""
        pulls = {}
        for i in self.tree.up:
            others = {mates[port].part for port in self.parts[i].ports() if port in mates} - {i}
            near = self.tree.up[i][0].part
            if not self.tree.down[i] and (rest := others - {near}):
                pulls[i] = 1 if sum(y[o] for o in rest) / len(rest) > y[near] else -1
        return pulls

    def _rank(self, child: str) -> tuple[int, float]:
        """The order of children from top to bottom: by their ports, but those that hang at the left pass over or
        under the others, and what closes a ring goes to the side of its other neighbour."""
        side, y = self._exit(child)
        if child in self.pull:
            return self.pull[child], y
        entry = self.tree.up.get(self.tree.up[child][0].part)
        above = entry is not None and y < self.port_sides[entry[1]][1]
        return (0 if side == "right" else -1 if above else 1), y

    def _drop(self, join: Join) -> float:
        """How much lower the further of two joined parts would have its port, stood they side by side."""
        return self.port_sides[join[1]][1] - self.port_sides[join[0]][1]

    def _columns(self) -> list[list[str]]:
        """The parts by how many joins they are away from the root."""
        columns = [[self.tree.root]]
        while following := [c for i in columns[-1] for c in self.tree.down[i]]:
            columns.append(following)
        return columns

    def _across(self, y: Mapping[str, float]) -> Places:
        """The places of all parts: the bodies of a column begin at one x, a gap behind the widest of the one before."""
        places, left = Places(), 0.0
        for column, following in zip(self.columns, [*self.columns[1:], []], strict=True):
            for i in column:
                places[i] = (_step_up(left + self.sizes[i][0] / 2), y[i])
            busy = any(self.parts[i].part.ports > 2 for i in (*column, *following))
            joins = [(c, self.tree.up[c]) for c in following]
            reach = max((abs(y[c] + self._drop(join) - y[join[0].part]) for c, join in joins), default=0.0)
            gap = max(FLAG_GAP if busy else GAP, reach / STEEPEST)
            left = max(places[i][0] + self.sizes[i][0] / 2 for i in column) + gap
        return places


def _faced(plan: Plan, port_sides: PortSides) -> Plan:
    """The same harness with its symmetric parts turned about where the radio is joined to their right side."""
    swaps: dict[Port, Port] = {}
    ends: dict[str, Placed] = {}
    mates, parts = mates_of(plan), {p.id: p for p in plan.parts}
    for tree in trees_of(plan):
        for i in tree.order:
            placed = parts[i]
            left = next((p for p in placed.ports() if port_sides[p][0] == "left"), None)
            right = _to_be_left(placed, tree, left, mates)
            if left is None or right is None or left == right or not _may_turn(placed.part):
                continue
            swaps |= {left: right, right: left}
            if isinstance(placed.part, Coax):
                ends[i] = replace(placed, part=replace(placed.part, ends=placed.part.ends[::-1]))
    if not swaps:
        return plan
    return replace(
        plan,
        parts=tuple(ends.get(p.id, p) for p in plan.parts),
        joins=tuple((swaps.get(a, a), swaps.get(b, b)) for a, b in plan.joins),
    )


def _to_be_left(placed: Placed, tree: Tree, left: Port | None, mates: Mapping[Port, Port]) -> Port | None:
    """The port that belongs at the left: the one towards the root; of the root one that is open, so that the others
    have what hangs there at their right."""
    if placed.id in tree.up:
        return tree.up[placed.id][1]
    if left not in mates:
        return None
    return next((port for port in placed.ports() if port not in mates), None)


def _may_turn(part: Part) -> bool:
    """Whether a part is the same whichever of its ports is at the left; what it has of unknown fields may not be."""
    if part.extra:
        return False
    if isinstance(part, Coax):
        return part.matched_set is None or part.ends[0] == part.ends[1]
    return isinstance(part, Lumped | Pad | Tee) or (isinstance(part, Splitter) and part.form == "resistive")


def _stepped(length: float) -> float:
    return round(length / STEP) * STEP


def _step_up(length: float, step: float = STEP) -> float:
    return math.ceil(length / step) * step
