"""The harness as an N-port: every antenna and the radio taken off and replaced by the reference.

States away from the root and towards it are found once; the wave from port k to port j then goes through the one
place where their ways part, so each entry of S is one product. Knows topologies, not the figures.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from feedlib.conventions import ComplexArray
from feedlib.errors import SolveError
from feedlib.flows import Network, State, beside, end_states, look_up, through_lines
from feedlib.topology import BlockOp, ChainOp, JoinBatch, LineBatch, Rows

MAX_BYTES = 2e9


def harness_s(network: Network, terminals: Sequence[int]) -> ComplexArray:
    """S (..., P, P, F) at the plan's reference; terminals : part indices of the radio and the antennas, in order.

    SolveError when the array would take more than 2 GB. A terminal tied to nothing has S_kk = 1.
    """
    topology = network.topology
    batch, frequencies = network.table.k.shape[:-2], network.frequency_hz.size
    size = float(np.prod(batch, initial=1.0)) * frequencies * len(terminals) ** 2 * 16
    if size > MAX_BYTES:
        raise SolveError(
            f"the harness's S-parameters would take {size / 1e9:.1f} GB; ask for fewer frequencies or antennas"
        )
    return _Assembly(network, terminals).matrix() if topology.roots else np.ones((0, 0, frequencies), complex)


class _Assembly:
    """Collects, edge by edge, which terminals hang below and how their waves get there."""

    def __init__(self, network: Network, terminals: Sequence[int]) -> None:
        self.network, self.topology = network, network.topology
        self.place = {part: n for n, part in enumerate(terminals)}
        self.reference = network.plan.reference_ohm
        self.s = np.zeros(
            (*network.table.k.shape[:-2], len(terminals), len(terminals), network.frequency_hz.size), complex
        )
        ends_v, ends_i = end_states(network)
        for row, part in enumerate(self.topology.ends):
            if part in self.place:
                ends_v[row], ends_i[row] = self.reference, 1
        self.away_v, self.away_i, self.scales, self.responses = look_up(network, (ends_v, ends_i))
        self.back_v, self.back_i = np.ones_like(self.away_v), np.zeros_like(self.away_v)
        # Per edge: the terminals below, how a driven edge reaches them (down), how they reach the edge (up).
        self.below: dict[int, tuple[list[int], ComplexArray, ComplexArray]] = {}
        self.turns: dict[tuple[int, int], ComplexArray] = {}

    def matrix(self) -> ComplexArray:
        self._look_down()
        for row, part in enumerate(self.topology.ends):
            if part in self.place:
                self._own(part, self.back_v[..., row, :], self.back_i[..., row, :], row)
        for op in self.topology.ops:
            self._gather(op)
        for edge, part in self.topology.roots:
            v, i = self.away_v[..., edge, :], self.away_i[..., edge, :]
            drive = 1 / (v + self.reference * i)
            row = self.place[part]
            self.s[..., row, row, :] = (v - self.reference * i) * drive
            if edge in self.below:
                terminals, down, up = self.below[edge]
                self.s[..., terminals, row, :] = down * drive[..., None, :]
                self.s[..., row, terminals, :] = 2 * self.reference * up
        return self.s

    def _own(self, part: int, v: ComplexArray, i: ComplexArray, edge: int) -> None:
        """A terminal's own reflection, and the start of its ways: V = 2 S_jk at a matched end, 1 V behind the source."""
        drive = 1 / (v + self.reference * i)
        row = self.place[part]
        self.s[..., row, row, :] = (v - self.reference * i) * drive
        down = np.full_like(drive, 2 * self.reference)
        self.below[edge] = ([row], down[..., None, :], drive[..., None, :])

    def _look_down(self) -> None:
        """States of all edges towards the root, with the reference at the roots."""
        network, table, away = self.network, self.network.table, (self.away_v, self.away_i)
        for edge, _ in self.topology.roots:
            self.back_v[..., edge, :], self.back_i[..., edge, :] = self.reference, 1
        for op in reversed(self.topology.ops):
            if isinstance(op, LineBatch):
                z0, q = table.z0_ohm[..., op.rows, :], table.q[..., op.rows, :]
                self._set_back(op.down, through_lines(*self._back(op.up), z0, q))
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

    def _turn(self, at: Rows, other: Rows, up: slice, above: State, beside_it: State, rescale: bool) -> None:
        """Looking into a join from one of its lower edges: upwards and at the other side by side."""
        v, i, scale = beside(above, beside_it, rescale)
        self._set_back(at, (v, i))
        factor: ComplexArray | float = 1.0 if scale is None else scale
        to_up, to_other = beside_it[0] * factor, above[0] * factor
        lower, upper, others = _numbers(at), range(up.start, up.stop), _numbers(other)
        for n, (edge, top, side) in enumerate(zip(lower, upper, others, strict=True)):
            self.turns[edge, top] = to_up[..., n, :]
            self.turns[edge, side] = to_other[..., n, :]

    def _turn_block(self, op: BlockOp) -> None:
        """Looking into a block from each of its lower edges."""
        edges = [*op.down[: op.port], op.up, *op.down[op.port :]]
        v, i = self.away_v[..., edges, :], self.away_i[..., edges, :]
        v[..., op.port, :], i[..., op.port, :] = self._back(op.up)
        for n, edge in enumerate(edges):
            if edge == op.up:
                continue
            rest = [m for m in range(len(edges)) if m != n]
            response = self.network.blocks.scatter[op.up].look(n, v[..., rest, :], i[..., rest, :])
            self._set_back(edge, (response.v, response.i))
            for m, k in zip(rest, np.moveaxis(response.k, -2, 0), strict=True):
                self.turns[edge, edges[m]] = k

    def _gather(self, op: LineBatch | JoinBatch | ChainOp | BlockOp) -> None:
        """Carry the ways below an operation to its upper edge, and fill S where two of them meet."""
        if isinstance(op, LineBatch):
            k = self.network.table.k[..., op.rows, :]
            for n, (up, down) in enumerate(zip(range(op.up.start, op.up.stop), _numbers(op.down), strict=True)):
                self._carry(up, [down], [k[..., n, :]], [k[..., n, :]])
        elif isinstance(op, ChainOp):
            along = np.broadcast_to(self.network.chains[op.up].k, self.network.frequency_hz.shape)
            self._carry(op.up, [op.down], [along], [along])
        elif isinstance(op, JoinBatch):
            scale = self.scales.get(op.up.start)
            pairs = zip(range(op.up.start, op.up.stop), _numbers(op.first), _numbers(op.second), strict=True)
            for n, (up, first, second) in enumerate(pairs):
                down = [self.away_v[..., second, :], self.away_v[..., first, :]]
                if scale is not None:
                    down = [d * scale[..., n, :] for d in down]
                self._carry(up, [first, second], down, [self.turns[first, up], self.turns[second, up]])
        else:
            k = self.responses[op.up].k
            down = [k[..., n, :] for n in range(len(op.down))]
            self._carry(op.up, op.down, down, [self.turns[d, op.up] for d in op.down])

    def _carry(self, up: int, edges: list[int], down: list[ComplexArray], upwards: list[ComplexArray]) -> None:
        found = [
            (edge, *self.below[edge], d, u)
            for edge, d, u in zip(edges, down, upwards, strict=True)
            if edge in self.below
        ]
        for source, from_rows, _, up_ways, _, _ in found:
            for goal, to_rows, down_ways, *_ in found:
                if source != goal:
                    across = up_ways * self.turns[source, goal][..., None, :]
                    block = down_ways[..., :, None, :] * across[..., None, :, :]
                    self.s[..., np.array(to_rows)[:, None], np.array(from_rows)[None, :], :] = block
        if found:
            self.below[up] = (
                [row for _, rows, *_ in found for row in rows],
                np.concatenate([ways * d[..., None, :] for _, _, ways, _, d, _ in found], axis=-2),
                np.concatenate([ways * u[..., None, :] for _, _, _, ways, _, u in found], axis=-2),
            )

    def _back(self, edges: Rows | int) -> State:
        return self.back_v[..., edges, :], self.back_i[..., edges, :]

    def _set_back(self, edges: Rows | int, state: State) -> None:
        self.back_v[..., edges, :], self.back_i[..., edges, :] = state


def _at(state: State, edges: Rows) -> State:
    return state[0][..., edges, :], state[1][..., edges, :]


def _numbers(rows: Rows) -> list[int]:
    return list(range(rows.start, rows.stop)) if isinstance(rows, slice) else rows.tolist()
