"""A plan's topology: which operation follows which, and where each port's state stands. `feedlib.compiler` makes it.

Single elements are cascaded from the antennas to the radio and back; what loops tie together, and parts given by a
matrix, are blocks that `feedlib.scatter` answers. Knows no values: lengths, impedances, frequencies.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any, TypeVar, cast

import numpy as np

from feedlib.conventions import Index
from feedlib.graph import Element
from feedlib.parts.base import Lines
from feedlib.plan import Join, Placed, Plan

Rows = slice | Index
Plane = tuple[int, int]
"""An edge, and +1 where its current flows into the thing whose plane it is, else -1."""


@dataclass(frozen=True, slots=True)
class LineBatch:
    """Lines of one height: edges `up` look through the lines `rows` at edges `down`."""

    up: slice
    down: Rows
    rows: slice
    rescale: bool


@dataclass(frozen=True, slots=True)
class JoinBatch:
    """Parallel joins of one height: edges `up` look at edges `first` and `second` side by side."""

    up: slice
    first: Rows
    second: Rows
    rescale: bool


@dataclass(frozen=True, slots=True)
class ChainOp:
    """A two-port that is no line; turned when its port 2 faces the root."""

    up: int
    down: int
    part: int
    turned: bool


@dataclass(frozen=True, slots=True)
class Core:
    """Elements that loops tie together, as rows of one matrix.

    lines : row in the line table of each element (OPEN = no line); starts : its first matrix row; tied : pairs of
    rows at one inner edge, whose current leaves the first; inner : those edges; outer : rows that lead out.
    """

    elements: list[Element]
    lines: list[int]
    starts: list[int]
    tied: list[tuple[int, int]]
    inner: list[int]
    outer: list[int]


@dataclass(frozen=True, slots=True)
class BlockOp:
    """A block of many ports: its port `port` is at edge `up`, the others, in order, at edges `down`.

    part : the plan's part with a matrix of its own; None when `core` says what is inside.
    """

    up: int
    down: list[int]
    port: int
    part: int | None
    core: Core | None


Op = LineBatch | JoinBatch | ChainOp | BlockOp
T = TypeVar("T")


@dataclass(frozen=True, slots=True)
class Topology:
    """A compiled plan.

    ops : from the ends to the roots. ends : part index of the end at edge n, for the first edges.
    lines : (part, line) of each row of the line table. roots : (edge, part) where each piece hangs, the radio's first.
    cascaded : edges with a state; edges : all, those inside cores last; one more row, always zero, serves the rest.
    planes : per part of the plan, the plane at each port. ports : by name, the plane at each port, and +1 where the
    edge's current runs from near to far, 0 where the radio does not reach. line_planes : the planes of each line
    that is one of several of its part.
    """

    parts: tuple[Placed, ...]
    joins: tuple[Join, ...]
    ops: list[Op]
    ends: list[int]
    lines: list[tuple[int, int]]
    roots: list[tuple[int, int]]
    cascaded: int
    edges: int
    planes: list[list[Plane]]
    ports: dict[str, tuple[int, int, int]]
    line_planes: dict[tuple[int, int], tuple[Plane, Plane]]
    _kept: dict[str, Any] = field(default_factory=dict, compare=False, repr=False)

    def kept(self, name: str, make: Callable[[], T]) -> T:
        """What others have worked out from the topology alone, made when it is first asked for."""
        if name not in self._kept:
            self._kept[name] = make()
        return cast(T, self._kept[name])

    @property
    def has_loops(self) -> bool:
        """Whether any parts are tied together in a loop."""
        return self.edges > self.cascaded

    def fits(self, plan: Plan) -> bool:
        """Whether the plan has this very topology, so that only values differ."""
        return (
            len(plan.parts) == len(self.parts)
            and all(a is b or _shape(a) == _shape(b) for a, b in zip(plan.parts, self.parts, strict=True))
            and (plan.joins is self.joins or plan.joins == self.joins)
        )


def _shape(placed: Placed) -> tuple[str, type, int, int]:
    """What of a part the topology depends on."""
    part = placed.part
    return placed.id, type(part), part.ports, part.line_count if isinstance(part, Lines) else 0


def run(numbers: list[int]) -> Rows:
    """A slice where the numbers run on, an index array otherwise."""
    if numbers == list(range(numbers[0], numbers[0] + len(numbers))):
        return slice(numbers[0], numbers[0] + len(numbers))
    return np.array(numbers, np.intp)
