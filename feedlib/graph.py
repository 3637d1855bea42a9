"""The plan as a graph: elements (a part, or one line of it), edges (planes between two elements), loops, blocks.

Knows nothing of values or of what elements do.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

from feedlib.parts.base import Lines
from feedlib.plan import Plan

OPEN = -1
"""Stands for the part index of an open circuit."""


class Element(NamedTuple):
    """One thing with terminals: the edge at each. part : index in the plan, or OPEN; line : which of its lines."""

    part: int
    line: int | None
    edges: list[int]


@dataclass(frozen=True, slots=True)
class Graph:
    """Elements and edges of a plan.

    ends : the two elements at each edge; an edge's current is counted from the first to the second until a tree
    says otherwise. at_port : element and terminal of each port of the plan.
    """

    elements: list[Element]
    ends: list[tuple[int, int]]
    at_port: dict[tuple[str, int], tuple[int, int]]

    def across(self, edge: int, element: int) -> int:
        """The element on the other side of an edge."""
        a, b = self.ends[edge]
        return b if a == element else a


@dataclass(frozen=True, slots=True)
class Piece:
    """What hangs together at one root element.

    order : its elements from the root on, each after the one it hangs at; up : the edge towards the root of each;
    loops : edges that lie on a loop.
    """

    order: list[int]
    up: dict[int, int]
    loops: set[int]


def graph_of(plan: Plan) -> Graph:
    """The graph of a plan; ports that are tied to nothing get an open end."""
    elements: list[Element] = []
    ends: list[tuple[int, int]] = []
    at_port: dict[tuple[str, int], tuple[int, int]] = {}
    for index, placed in enumerate(plan.parts):
        first, part, part_id = len(elements), placed.part, placed.id
        if not isinstance(part, Lines):
            count = part.ports
            elements.append(Element(index, None, [OPEN] * count))
            for n in range(count):
                at_port[part_id, n + 1] = first, n
            continue
        count = part.line_count
        for n in range(count):
            elements.append(Element(index, n, [OPEN, OPEN]))
        for inside in range(first, first + count - 1):
            elements[inside].edges[1] = elements[inside + 1].edges[0] = len(ends)
            ends.append((inside, inside + 1))
        at_port[part_id, 1] = first, 0
        at_port[part_id, 2] = first + count - 1, 1
    for join in plan.joins:
        (a, terminal_a), (b, terminal_b) = at_port[join[0]], at_port[join[1]]
        elements[a].edges[terminal_a] = elements[b].edges[terminal_b] = len(ends)
        ends.append((a, b))
    for element, terminal in at_port.values():
        if elements[element].edges[terminal] == OPEN:
            elements[element].edges[terminal] = len(ends)
            elements.append(Element(OPEN, None, [len(ends)]))
            ends.append((element, len(elements) - 1))
    return Graph(elements, ends, at_port)


def piece_at(graph: Graph, root: int) -> Piece:
    """Everything that hangs at an element; the common case, a tree, is seen without looking for loops."""
    order, up = [root], {root: OPEN}
    terminals = 0
    for element in order:  # grows while it is walked
        for edge in graph.elements[element].edges:
            terminals += 1
            other = graph.across(edge, element)
            if other not in up:
                up[other] = edge
                order.append(other)
    if terminals == 2 * (len(order) - 1):
        return Piece(order, up, set())
    return _piece_with_loops(graph, root)


def _piece_with_loops(graph: Graph, root: int) -> Piece:
    """The same in depth-first order, with bridges told from loops (Tarjan, Inf. Process. Lett. 2 (1974) 160)."""
    order, up, met, low = [root], {root: OPEN}, {root: 0}, {root: 0}
    loops: set[int] = set()
    stack = [(root, iter(graph.elements[root].edges))]
    while stack:
        element, edges = stack[-1]
        for edge in edges:
            other = graph.across(edge, element)
            if other not in met:
                met[other] = low[other] = len(order)
                up[other] = edge
                order.append(other)
                stack.append((other, iter(graph.elements[other].edges)))
                break
            if edge != up[element]:
                loops.add(edge)
                low[element] = min(low[element], met[other])
        else:
            stack.pop()
            if stack:
                above = stack[-1][0]
                low[above] = min(low[above], low[element])
                if low[element] <= met[above]:
                    loops.add(up[element])
    return Piece(order, up, loops)


def blocks_of(graph: Graph, piece: Piece) -> list[list[int]]:
    """The elements that loops tie together, each group led by the one nearest the root, groups from the root on."""
    if not piece.loops:
        return [[e] for e in piece.order]
    place = {e: n for n, e in enumerate(piece.order)}
    head = dict(zip(piece.order, piece.order, strict=True))
    for edge in piece.loops:
        a, b = sorted((_head(head, e) for e in graph.ends[edge]), key=place.__getitem__)
        head[b] = a
    groups: dict[int, list[int]] = {}
    for e in piece.order:
        groups.setdefault(_head(head, e), []).append(e)
    return list(groups.values())


def _head(head: dict[int, int], element: int) -> int:
    while head[element] != element:
        head[element] = head[head[element]]
        element = head[element]
    return element


def joins_away(plan: Plan, *starts: str) -> dict[str, int]:
    """How many joins each part is away from the nearest of `starts`; parts that are not reached are left out."""
    beside: dict[str, list[str]] = {p.id: [] for p in plan.parts}
    for a, b in plan.joins:
        beside[a.part].append(b.part)
        beside[b.part].append(a.part)
    away, row = dict.fromkeys(starts, 0), list(starts)
    for part in row:
        for other in beside[part]:
            if other not in away:
                away[other] = away[part] + 1
                row.append(other)
    return away
