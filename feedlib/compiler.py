"""Compiles a plan's topology, once for all its values.

Edges that no loop crosses make the graph a tree of blocks, rooted at the radio. The compiler finds an operation for
each block and numbers the edges so that each batch of operations writes one slice.
"""

from __future__ import annotations

from collections import deque
from dataclasses import replace

import numpy as np

from feedlib.graph import OPEN, Element, Graph, Piece, blocks_of, graph_of, joins_away, piece_at
from feedlib.parts import Antenna, Radio
from feedlib.parts.base import Junction, Lines, TwoPort
from feedlib.plan import Plan
from feedlib.topology import BlockOp, ChainOp, Core, JoinBatch, LineBatch, Op, Plane, Topology, run

RESCALE_AFTER = 8.0
LINE_WEIGHT = 0.25
"""Joins multiply sizes, lines of other impedances change them: what has gathered more ends than RESCALE_AFTER, a line
counting as LINE_WEIGHT of one, brings its state back to the size of one."""


def compile_plan(plan: Plan) -> Topology:
    """The topology of a plan; a half-built one compiles too."""
    return _Compiler(plan).topology()


class _Compiler:
    """Finds the operations piece by piece, then numbers the edges so that each batch writes one slice."""

    def __init__(self, plan: Plan) -> None:
        self.plan = plan
        self.graph: Graph = graph_of(plan)
        self.edge_count = len(self.graph.ends)
        self.found: list[tuple[int, Op]] = []  # height, operation on edges by their first numbers
        self.lines: list[tuple[int, int, int, Element, bool]] = []  # height, up, down, element, rescale
        self.joins: list[tuple[int, int, int, int, bool]] = []  # height, up, first, second, rescale
        self.ends: list[tuple[int, int]] = []  # edge, part
        self.height: dict[int, int] = {}
        self.weight: dict[int, float] = {}
        self.into: dict[int, int] = {}  # edge -> element that its current flows into
        self.made: list[tuple[int, list[int]]] = []  # edge, edges below it; children before parents
        self.tied_to_itself: set[int] = set()
        self.roots: list[tuple[int, int]] = []
        self.reached: set[int] = set()
        self.number: dict[int, int] = {}

    def topology(self) -> Topology:
        elements = self.graph.elements
        terminals = [
            (n, e)
            for n, e in enumerate(elements)
            if e.part != OPEN and isinstance(self.plan.parts[e.part].part, Radio | Antenna)
        ]
        terminals.sort(key=lambda t: not isinstance(self.plan.parts[t[1].part].part, Radio))
        seen: set[int] = set()
        for n, element in terminals:
            if n not in seen:
                piece = piece_at(self.graph, n)
                seen.update(piece.order)
                self._grow(piece)
                if not self.roots and isinstance(self.plan.parts[element.part].part, Radio):
                    self.reached = set(self.into)
                self.roots.append((element.edges[0], element.part))
        return self._numbered()

    def _grow(self, piece: Piece) -> None:
        for group in reversed(blocks_of(self.graph, piece)[1:]):
            up = piece.up[group[0]]
            self.into[up] = group[0]
            if piece.loops and not piece.loops.isdisjoint(self.graph.elements[group[0]].edges):
                self._core(group, up)
            else:
                self._single(self.graph.elements[group[0]], up)

    def _single(self, element: Element, up: int) -> None:
        height, others = self.height, [edge for edge in element.edges if edge != up]
        part = None if element.part == OPEN else self.plan.parts[element.part].part
        if not isinstance(part, Junction):
            self.made.append((up, others))
        if not others:
            self.ends.append((up, element.part))
            height[up], self.weight[up] = 0, 1
        elif element.line is not None:
            (down,) = others
            weight = self.weight[down] + LINE_WEIGHT
            rescale = weight > RESCALE_AFTER
            height[up], self.weight[up] = height[down] + 1, 1 if rescale else weight
            self.lines.append((height[up], up, down, element, rescale))
        elif isinstance(part, Junction):
            self._joined(others, up)
        else:
            height[up], self.weight[up] = 1 + max(height[e] for e in others), 1
            if isinstance(part, TwoPort):
                op: Op = ChainOp(up, others[0], element.part, element.edges[1] == up)
            else:
                op = BlockOp(up, others, element.edges.index(up), element.part, None)
            self.found.append((height[up], op))

    def _joined(self, edges: list[int], up: int) -> None:
        """A tee as joins of two in a balanced tree, so that a wide one is no deeper than it must be."""
        queue = deque(sorted(edges, key=self.height.__getitem__))
        while len(queue) > 1:
            first, second = queue.popleft(), queue.popleft()
            if queue:
                out, self.edge_count = self.edge_count, self.edge_count + 1
            else:
                out = up
            weight = self.weight[first] + self.weight[second]
            rescale = weight > RESCALE_AFTER
            self.height[out] = 1 + max(self.height[first], self.height[second])
            self.weight[out] = 1 if rescale else weight
            self.joins.append((self.height[out], out, first, second, rescale))
            self.made.append((out, [first, second]))
            queue.append(out)

    def _core(self, group: list[int], up: int) -> None:
        elements = self.graph.elements
        starts = np.cumsum([0, *(len(elements[e].edges) for e in group)]).tolist()
        rows: dict[int, list[int]] = {}
        for e, start in zip(group, starts, strict=False):
            for n, edge in enumerate(elements[e].edges):
                rows.setdefault(edge, []).append(start + n)
        tied, inner, outer = [], [], []
        for edge, at in rows.items():
            a, b = self.graph.ends[edge]
            if len(at) == 2:
                # rows come in group order; the current leaves the edge's first element
                tied.append((at[0], at[1]) if a == b or group.index(a) < group.index(b) else (at[1], at[0]))
                inner.append(edge)
                self.into[edge] = b
                if a == b:
                    self.tied_to_itself.add(edge)
            else:
                outer.append(edge)
        lines = [OPEN] * len(group)
        core = Core([elements[e] for e in group], lines, starts[:-1], tied, inner, [rows[e][0] for e in outer])
        others = [e for e in outer if e != up]
        height = 1 + max((self.height[e] for e in others), default=-1)
        self.found.append((height, BlockOp(up, others, outer.index(up), None, core)))
        self.height[up], self.weight[up] = height, 1
        self.made.append((up, others))

    def _sides(self) -> dict[int, tuple[int, ...]]:
        """For each edge, on which side of each join it hangs, nearest first.

        Sorted by it, all first sides of the joins of one height stand before all second ones, in the same order, so
        that a batch's operands are slices and not scattered rows.
        """
        sides: dict[int, tuple[int, ...]] = {}
        for up, below in reversed(self.made):
            side = sides.setdefault(up, ())
            if len(below) == 1:
                sides[below[0]] = side
            else:
                for n, edge in enumerate(below):
                    sides[edge] = (n, *side)
        return sides

    def _numbered(self) -> Topology:
        number, sides = self.number, self._sides()
        self.ends.sort(key=lambda end: sides[end[0]])
        self.lines.sort(key=lambda line: sides[line[1]])
        self.joins.sort(key=lambda join: sides[join[1]])
        self._take([edge for edge, _ in self.ends])
        ops: list[Op] = []
        lines: list[Element] = []
        at_height: dict[int, list[Op]] = {}
        for height, op in self.found:
            at_height.setdefault(height, []).append(op)
        line_rows = _by_height(self.lines)
        join_rows = _by_height(self.joins)
        for height in sorted({*at_height, *line_rows, *join_rows}):
            for rescale in (False, True):
                found = [line for line in line_rows.get(height, ()) if line[4] == rescale]
                if found:
                    rows = slice(len(lines), len(lines) + len(found))
                    lines.extend(line[3] for line in found)
                    down = run([number[line[2]] for line in found])
                    ops.append(LineBatch(self._take([line[1] for line in found]), down, rows, rescale))
                some = [j for j in join_rows.get(height, ()) if j[4] == rescale]
                if some:
                    first, second = run([number[j[2]] for j in some]), run([number[j[3]] for j in some])
                    ops.append(JoinBatch(self._take([j[1] for j in some]), first, second, rescale))
            for op in at_height.get(height, ()):
                assert isinstance(op, ChainOp | BlockOp)
                up = self._take([op.up]).start
                if isinstance(op, ChainOp):
                    ops.append(replace(op, up=up, down=number[op.down]))
                else:
                    ops.append(replace(op, up=up, down=[number[d] for d in op.down]))
        cascaded = len(number)
        for n, op in enumerate(ops):
            if isinstance(op, BlockOp) and op.core is not None:
                self._take(op.core.inner)
                rows_of = []
                for element in op.core.elements:
                    rows_of.append(OPEN if element.line is None else len(lines))
                    if element.line is not None:
                        lines.append(element)
                ops[n] = replace(op, core=replace(op.core, lines=rows_of, inner=[number[e] for e in op.core.inner]))
        return self._described(ops, lines, cascaded)

    def _described(self, ops: list[Op], lines: list[Element], cascaded: int) -> Topology:
        number, plan = self.number, self.plan
        planes: list[list[Plane]] = [[] for _ in plan.parts]
        ports: dict[str, tuple[int, int, int]] = {}
        reached, against = {number[edge] for edge in self.reached}, self._against()
        for (part_id, n), (element, terminal) in self.graph.at_port.items():
            edge, sign = plane = self._plane(element, terminal)
            planes[self.graph.elements[element].part].append(plane)
            ports[f"{part_id}:{n}"] = edge, sign, 0 if edge not in reached else -1 if edge in against else 1
        return Topology(
            parts=plan.parts,
            joins=plan.joins,
            ops=ops,
            ends=[part for _, part in self.ends],
            lines=[(e.part, e.line or 0) for e in lines],
            roots=[(number[edge], part) for edge, part in self.roots],
            cascaded=cascaded,
            edges=len(number),
            planes=planes,
            ports=ports,
            line_planes={
                (e.part, e.line or 0): (self._plane_of(e, 0), self._plane_of(e, 1)) for e in lines if self._is_inside(e)
            },
        )

    def _plane(self, element: int, terminal: int) -> Plane:
        """Edge at a terminal, and +1 where its current flows into the element; the zero row where nothing drives."""
        edges = self.graph.elements[element].edges
        edge = edges[terminal]
        target = self.into.get(edge)
        if target is None:
            return len(self.number), 1
        if target == element and edge in self.tied_to_itself:
            return self.number[edge], 1 if edges.index(edge) != terminal else -1
        return self.number[edge], 1 if target == element else -1

    def _is_inside(self, element: Element) -> bool:
        """Whether a line is one of several of its part, so that its planes are not the part's ports."""
        part = self.plan.parts[element.part].part
        return isinstance(part, Lines) and part.line_count > 1

    def _plane_of(self, element: Element, terminal: int) -> Plane:
        edge = element.edges[terminal]
        return self.number[edge], 1 if self.graph.elements[self.into[edge]] is element else -1

    def _against(self) -> set[int]:
        """Edges whose current runs from far to near: some inside loops, where the count of joins decides."""
        inner = {edge for _, op in self.found if isinstance(op, BlockOp) and op.core for edge in op.core.inner}
        if not inner or not self.reached:
            return set()
        away = joins_away(self.plan, self.plan.parts[self.roots[0][1]].id)
        against = set()
        for a, b in self.plan.joins:
            near = b if away.get(b.part, 0) < away.get(a.part, 0) else a
            element, terminal = self.graph.at_port[near]
            edge = self.graph.elements[element].edges[terminal]
            if edge in inner and self._plane(element, terminal)[1] > 0:
                against.add(self.number[edge])
        return against

    def _take(self, edges: list[int]) -> slice:
        """Give the next numbers to `edges`."""
        start = len(self.number)
        for edge in edges:
            self.number[edge] = len(self.number)
        return slice(start, len(self.number))


def _by_height(rows: list[tuple]) -> dict[int, list[tuple]]:  # type: ignore[type-arg]
    found: dict[int, list[tuple]] = {}  # type: ignore[type-arg]
    for row in rows:
        found.setdefault(row[0], []).append(row)
    return found
