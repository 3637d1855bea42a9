"""The harness as a tree: what hangs at what, seen from the radio. Knows joins, neither places nor values."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from feedlib.parts import Radio
from feedlib.plan import Join, Placed, Plan, Port


@dataclass(frozen=True, slots=True)
class Tree:
    """The parts that hang together at a root; in a ring each hangs where it is reached in the fewest joins.

    order : ids, those nearer the root first; up : the join of each but the root, (port nearer the root, own port);
    down : the parts that hang at each, in the order of its ports; were it turned to face the root with port 1, the
    order would be the same.
    """

    order: list[str]
    up: dict[str, Join]
    down: dict[str, list[str]]

    @property
    def root(self) -> str:
        """The part that all others hang at."""
        return self.order[0]

    def parent(self, part_id: str) -> str | None:
        """The part that this one hangs at; None for the root."""
        join = self.up.get(part_id)
        return None if join is None else join[0].part


def trees_of(plan: Plan) -> tuple[Tree, ...]:
    """All that hangs together, that of the radio first.

    What no radio reaches hangs at its first part that has ports at both sides, one of them open if there is such.
    """
    mates = mates_of(plan)
    found: list[Tree] = []
    met: set[str] = set()
    ports = {p.id: p.ports() for p in plan.parts}
    for placed in sorted(plan.parts, key=lambda p: _fitness(p, mates)):
        if placed.id not in met:
            tree = _tree_at(placed.id, ports, mates)
            met.update(tree.order)
            found.append(tree)
    return tuple(found)


def tree_with(plan: Plan, part_id: str) -> Tree:
    """The tree that a part is in."""
    return next(tree for tree in trees_of(plan) if part_id in tree.down)


def mates_of(plan: Plan) -> dict[Port, Port]:
    """The port that each joined port is joined to."""
    return {port: mate for a, b in plan.joins for port, mate in ((a, b), (b, a))}


def _tree_at(root: str, ports: Mapping[str, tuple[Port, ...]], mates: Mapping[Port, Port]) -> Tree:
    order, up, down = [root], dict[str, Join](), dict[str, list[str]]({root: []})
    for part_id in order:  # grows while it is walked
        own = up[part_id][1] if part_id in up else _open_port(ports[part_id], mates)
        for port in _as_faced(ports[part_id], own):
            mate = mates.get(port)
            if mate is not None and mate.part not in down:
                order.append(mate.part)
                up[mate.part] = port, mate
                down[mate.part] = []
                down[part_id].append(mate.part)
    return Tree(order, up, down)


def _as_faced(ports: tuple[Port, ...], near: Port) -> list[Port]:
    """A part's ports in the order that they have when it faces the root: the near one and port 1 change places."""
    swapped = {near: ports[0], ports[0]: near}
    return [swapped.get(port, port) for port in ports]


def _open_port(ports: tuple[Port, ...], mates: Mapping[Port, Port]) -> Port:
    """The first open port, or port 1 where there is none."""
    return next((port for port in ports if port not in mates), ports[0])


def _fitness(placed: Placed, mates: Mapping[Port, Port]) -> tuple[bool, bool, bool]:
    """How well a part serves as a root, the fittest lowest."""
    if isinstance(placed.part, Radio):
        return False, False, False
    return True, placed.part.ports == 1, all(port in mates for port in placed.ports())
