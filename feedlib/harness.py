"""The harness as an N-port: every antenna and the radio taken off and replaced by the reference.

States away from the root and towards it are found once; the wave from port k to port j then goes through the one
place where their ways part, so each entry of S is one product. Knows topologies, not the figures.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from feedlib.conventions import Array, ComplexArray
from feedlib.errors import SolveError
from feedlib.flows import ArrayState, Looks, Network, beside, brought_to_one, end_states, look_away, through_lines
from feedlib.topology import BlockOp, ChainOp, JoinBatch, LineBatch, Op, Rows, run

MAX_BYTES = 2e9


def harness_s(network: Network, terminals: Sequence[int], looks: Looks | None = None) -> ComplexArray:
    """S (..., P, P, F) at the plan's reference; terminals : part indices of the radio and the antennas, in order.

    looks : what edges see with the antennas in place, where these are the reference already; else it is worked out.

    SolveError when the array would take more than 2 GB. A terminal tied to nothing has S_kk = 1.
    """
    batch, frequencies = network.shape
    size = bytes_of(len(terminals), frequencies) * float(np.prod(batch, initial=1.0))
    if size > MAX_BYTES:
        raise SolveError(
            f"the harness's S-parameters would take {size / 1e9:.1f} GB; ask for fewer frequencies or antennas"
        )
    return _Assembly(network, terminals, looks).matrix()


def bytes_of(ports: int, frequencies: int) -> float:
    """Size of S with so many ports."""
    return 16.0 * ports**2 * frequencies


class _Assembly:
    """Collects, edge by edge, which terminals hang below and how their waves get there.

    below : per edge, the terminals below it; ways (2, n, F): how a driven edge reaches each of them, and how each of
    them, driven, reaches the edge; and the factor of the two-ports passed since, the same both ways, or None.
    turns : from one edge of a join or block to another, the scale's factor.
    """

    def __init__(self, network: Network, terminals: Sequence[int], looks: Looks | None) -> None:
        self.network, self.topology = network, network.topology
        self.place = {part: n for n, part in enumerate(terminals)}
        self.reference = network.plan.reference_ohm
        batch, frequencies = network.shape
        self.s = np.empty((*batch, len(terminals), len(terminals), frequencies), complex)
        if len(self.topology.roots) > 1:
            self.s[:] = 0
        self.away = looks or look_away(network, end_states(network, self.place, self.reference))
        self.back_v, self.back_i = np.empty_like(self.away.v), np.empty_like(self.away.v)
        self.below: dict[int, tuple[list[int], ComplexArray, ComplexArray | None]] = {}
        self.turns: dict[tuple[int, int], ComplexArray] = {}
        self.back_scales: dict[int, Array] = {}

    def matrix(self) -> ComplexArray:
        self._look_back()
        self._start()
        for op in self.topology.ops:
            self._gather(op)
        for edge, part in self.topology.roots:
            v, i = self.away.v[..., edge, :], self.away.i[..., edge, :]
            drive = 1 / (v + self.reference * i)
            row = self.place[part]
            self.s[..., row, row, :] = (v - self.reference * i) * drive
            if edge in self.below:
                terminals, ways, factor = self.below[edge]
                if factor is not None:
                    ways = ways * factor[..., None, None, :]
                self.s[..., terminals, row, :] = ways[..., 0, :, :] * drive[..., None, :]
                self.s[..., row, terminals, :] = 2 * self.reference * ways[..., 1, :, :]
        return self.s

    def _start(self) -> None:
        """Each terminal's own reflection, and its ways: S_jk = 2 V_j at a matched end, with 1 V behind the source."""
        edges = [edge for edge, part in enumerate(self.topology.ends) if part in self.place]
        rows = [self.place[self.topology.ends[edge]] for edge in edges]
        v, i = self.back_v[..., edges, :], self.reference * self.back_i[..., edges, :]
        drive = 1 / (v + i)
        self.s[..., rows, rows, :] = (v - i) * drive
        ways = np.empty((*v.shape[:-2], 2, *v.shape[-2:]), complex)
        ways[..., 0, :, :] = 2 * self.away.v[..., edges, :]
        ways[..., 1, :, :] = drive
        for n, (edge, row) in enumerate(zip(edges, rows, strict=True)):
            self.below[edge] = [row], ways[..., n : n + 1, :], None

    def _look_back(self) -> None:
        """States of all edges towards the root, with the reference at the roots."""
        network, away = self.network, self.away
        for edge, _ in self.topology.roots:
            self.back_v[..., edge, :], self.back_i[..., edge, :] = self.reference, 1
        for op in reversed(self.topology.ops):
            if isinstance(op, LineBatch):
                out = self._back(op.down)
                through_lines(self._back(op.up), *network.table.rows(op.rows), out)
                if op.rescale:
                    self.back_scales[op.up.start] = brought_to_one(out)
                if not isinstance(op.down, slice):
                    self._set_back(op.down, out)
            elif isinstance(op, JoinBatch):
                first, second = _at(away, op.first), _at(away, op.second)
                above = self._back(op.up)
                self._turn(op.first, op.second, op.up, above, second, op.rescale)
                self._turn(op.second, op.first, op.up, above, first, op.rescale)
            elif isinstance(op, ChainOp):
                c = network.chains[op.up]
                v, i = self._back(op.up)
                self._set_back(op.down, (c.d * v + c.b * i, c.c * v + c.a * i))
            else:
                self._turn_block(op)

    def _turn(self, at: Rows, other: Rows, up: slice, above: ArrayState, beside_it: ArrayState, rescale: bool) -> None:
        """Looking into a join from one of its lower edges: upwards and at the other side by side."""
        out = self._back(at)
        scale = beside(above, beside_it, rescale, out)
        if not isinstance(at, slice):
            self._set_back(at, out)
        to_up, to_other = beside_it[0], above[0]
        if scale is not None:
            to_up, to_other = to_up * scale, to_other * scale
        for n, (edge, top, side) in enumerate(
            zip(_numbers(at), range(up.start, up.stop), _numbers(other), strict=True)
        ):
            self.turns[edge, top] = to_up[..., n, :]
            self.turns[edge, side] = to_other[..., n, :]

    def _turn_block(self, op: BlockOp) -> None:
        """Looking into a block from each of its lower edges."""
        edges = [*op.down[: op.port], op.up, *op.down[op.port :]]
        v, i = self.away.v[..., edges, :], self.away.i[..., edges, :]
        v[..., op.port, :], i[..., op.port, :] = self._back(op.up)
        for n, edge in enumerate(edges):
            if edge == op.up:
                continue
            rest = [m for m in range(len(edges)) if m != n]
            response = self.network.scatter[op.up].look(n, v[..., rest, :], i[..., rest, :])
            self._set_back(edge, (response.v, response.i))
            for m, k in zip(rest, np.moveaxis(response.k, -2, 0), strict=True):
                self.turns[edge, edges[m]] = k

    def _gather(self, op: Op) -> None:
        """Carry the ways below an operation to its upper edge, and fill S where two of them meet."""
        if isinstance(op, LineBatch):
            lines = self.network.table.k[..., op.rows, :]
            for n, (up, down) in enumerate(zip(range(op.up.start, op.up.stop), _numbers(op.down), strict=True)):
                self._along(up, down, lines[..., n, :])
                if op.rescale and up in self.below:
                    self._rescale(
                        up, self.away.scales[op.up.start][..., n, :], self.back_scales[op.up.start][..., n, :]
                    )
        elif isinstance(op, ChainOp):
            along = np.broadcast_to(np.asarray(self.network.chains[op.up].k), self.network.frequency_hz.shape)
            self._along(op.up, op.down, along)
        elif isinstance(op, JoinBatch):
            scale = self.away.scales.get(op.up.start)
            pairs = zip(range(op.up.start, op.up.stop), _numbers(op.first), _numbers(op.second), strict=True)
            for n, (up, first, second) in enumerate(pairs):
                ways = [self.away.v[..., second, :], self.away.v[..., first, :]]
                if scale is not None:
                    ways = [way * scale[..., n, :] for way in ways]
                self._meet(up, [first, second], ways)
        else:
            reached = self.away.responses[op.up].k
            self._meet(op.up, op.down, [reached[..., n, :] for n in range(len(op.down))])

    def _along(self, up: int, down: int, k: ComplexArray) -> None:
        """A reciprocal two-port: the same factor both ways."""
        found = self.below.pop(down, None)
        if found is not None:
            rows, ways, factor = found
            self.below[up] = rows, ways, k if factor is None else factor * k

    def _rescale(self, up: int, down_scale: Array, up_scale: Array) -> None:
        """A line whose states were brought to one, differently each way."""
        rows, ways, factor = self.below[up]
        ways = ways if factor is None else ways * factor[..., None, None, :]
        self.below[up] = rows, ways * np.stack([down_scale, up_scale], -2)[..., :, None, :], None

    def _meet(self, up: int, edges: list[int], down: list[ComplexArray]) -> None:
        """Terminals below several edges of a join or block: S between them, and their ways on to its upper edge."""
        found = []
        for edge, d in zip(edges, down, strict=True):
            if edge in self.below:
                rows, ways, factor = self.below.pop(edge)
                found.append((edge, rows, ways if factor is None else ways * factor[..., None, None, :], d))
        if not found:
            return
        for source, from_rows, from_ways, _ in found:
            for goal, to_rows, to_ways, _ in found:
                if source != goal:
                    across = from_ways[..., 1, :, :] * self.turns[source, goal][..., None, :]
                    self._put(to_rows, from_rows, to_ways[..., 0, :, None, :], across[..., None, :, :])
        rows = [row for _, some, *_ in found for row in some]
        gathered = np.empty((*self.s.shape[:-3], 2, len(rows), self.s.shape[-1]), complex)
        at = 0
        for edge, some, ways, d in found:
            span = slice(at, at + len(some))
            np.multiply(ways[..., 0, :, :], d[..., None, :], out=gathered[..., 0, span, :])
            np.multiply(ways[..., 1, :, :], self.turns[edge, up][..., None, :], out=gathered[..., 1, span, :])
            at = span.stop
        self.below[up] = rows, gathered, None

    def _put(self, to_rows: list[int], from_rows: list[int], down: ComplexArray, up: ComplexArray) -> None:
        """Fill a block of S; terminals in the plan's order make it a plain one."""
        to, source = run(to_rows), run(from_rows)
        if isinstance(to, slice) and isinstance(source, slice):
            np.multiply(down, up, out=self.s[..., to, source, :])
        elif isinstance(to, slice) or isinstance(source, slice):
            self.s[..., to, source, :] = down * up
        else:
            self.s[..., to[:, None], source, :] = down * up

    def _back(self, edges: Rows | int) -> ArrayState:
        return self.back_v[..., edges, :], self.back_i[..., edges, :]

    def _set_back(self, edges: Rows | int, state: ArrayState) -> None:
        self.back_v[..., edges, :], self.back_i[..., edges, :] = state


def _at(looks: Looks, edges: Rows) -> ArrayState:
    return looks.v[..., edges, :], looks.i[..., edges, :]


def _numbers(rows: Rows) -> list[int]:
    return list(range(rows.start, rows.stop)) if isinstance(rows, slice) else [int(n) for n in rows]
