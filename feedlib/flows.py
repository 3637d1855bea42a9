"""The network evaluated on arrays: states up from the ends to the roots, then voltages and currents back down.

Frequency is the last axis, rows (edges, lines) stand before it, batch axes before those. See `feedlib.conventions`
for states. Knows topologies and the families of parts, not the figures that people read.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from feedlib.conventions import WAVE_OHM, Array, ComplexArray
from feedlib.errors import SolveError
from feedlib.graph import OPEN
from feedlib.parts import Radio
from feedlib.parts.base import Chain, End, Junction, Line, Lines, TwoPort
from feedlib.parts.measured import Measured
from feedlib.plan import Plan
from feedlib.scatter import Dense, Response, Scatter, Undetermined, joined, renormalised
from feedlib.topology import BlockOp, ChainOp, Core, JoinBatch, LineBatch, Rows, Topology

State = tuple[ComplexArray, ComplexArray]


@dataclass(frozen=True, slots=True)
class LineValues:
    """The lines of a plan as columns: each (..., U); row n of the line table uses entry row[n].

    Lines that are alike share one entry. Leading axes are builds.
    """

    z0_ohm: Array
    delay_s: Array
    skin_np: Array
    dielectric_np: Array
    flat_np: Array
    row: Rows


@dataclass(frozen=True, slots=True)
class LineTable:
    """The lines at all frequencies: z0_ohm (..., L, 1), k = e^(-gamma l) and q = k^2 (..., L, F)."""

    z0_ohm: Array
    k: ComplexArray
    q: ComplexArray


def line_values(plan: Plan, topology: Topology) -> LineValues:
    """The values of the plan's lines; SolveError names a coax whose cable is missing."""
    found: dict[Line, int] = {}
    rows = []
    lines_of: dict[int, tuple[Line, ...]] = {}
    for part, n in topology.lines:
        lines = lines_of.get(part)
        if lines is None:
            lines = lines_of[part] = _lines(plan, part)
        rows.append(found.setdefault(lines[n], len(found)))
    columns = np.array(list(found), float).reshape(len(found), len(Line._fields)).T
    return LineValues(*columns, row=np.array(rows, np.intp))


def _lines(plan: Plan, part: int) -> tuple[Line, ...]:
    placed = plan.parts[part]
    assert isinstance(placed.part, Lines)
    cable = getattr(placed.part, "cable", None)
    try:
        return placed.part.lines(None if cable is None else plan.cables.get(cable))
    except LookupError:
        raise SolveError(f"its cable {cable!r} is not in the plan; choose another or add it", part=placed.id) from None


def line_table(values: LineValues, frequency_hz: Array) -> LineTable:
    """The lines at all frequencies (F,)."""
    mhz = frequency_hz / 1e6
    loss_np = values.skin_np[..., None] * np.sqrt(mhz) + values.dielectric_np[..., None] * mhz
    loss_np += values.flat_np[..., None]
    size = np.exp(-loss_np)
    phase = (2 * np.pi * values.delay_s)[..., None] * frequency_hz
    k = np.empty(phase.shape, complex)
    np.multiply(size, np.cos(phase), out=k.real)
    np.multiply(size, np.sin(phase), out=k.imag)
    np.negative(k.imag, out=k.imag)
    q = k * k
    return LineTable(values.z0_ohm[..., values.row, None], k[..., values.row, :], q[..., values.row, :])


@dataclass(frozen=True, slots=True)
class Blocks:
    """What cores and parts with a matrix are at these frequencies, by the edge that each hangs at.

    inside : for cores, the waves into the tied rows for unit waves into the outer ports (..., 2J, P, F).
    """

    scatter: dict[int, Scatter]
    inside: dict[int, ComplexArray]


@dataclass(frozen=True, slots=True)
class Network:
    """A plan's values at its frequencies, ready to be evaluated: what does not depend on what stands at the ends."""

    plan: Plan
    topology: Topology
    frequency_hz: Array
    table: LineTable
    chains: dict[int, Chain]
    blocks: Blocks

    def at(self, part: slice) -> Network:
        """The same network at some of its frequencies."""
        whole = np.arange(self.frequency_hz.size)[part]
        if whole.size == self.frequency_hz.size:
            return self
        table = LineTable(self.table.z0_ohm, self.table.k[..., part], self.table.q[..., part])
        return network_from(self.plan, self.topology, table, self.frequency_hz[part])


def network_of(plan: Plan, topology: Topology, values: LineValues, frequency_hz: Array) -> Network:
    """The network; SolveError names a loop whose current is not determined."""
    return network_from(plan, topology, line_table(values, frequency_hz), frequency_hz)


def network_from(plan: Plan, topology: Topology, table: LineTable, frequency_hz: Array) -> Network:
    """The network whose lines are evaluated already."""
    chains: dict[int, Chain] = {}
    scatter: dict[int, Scatter] = {}
    inside: dict[int, ComplexArray] = {}
    for op in topology.ops:
        if isinstance(op, ChainOp):
            part = plan.parts[op.part].part
            assert isinstance(part, TwoPort)
            a, b, c, d, k = part.chain(frequency_hz)
            chains[op.up] = Chain(d, b, c, a, k) if op.turned else Chain(a, b, c, d, k)
        elif isinstance(op, BlockOp):
            if op.core is None:
                assert op.part is not None
                scatter[op.up] = plan.parts[op.part].part.scatter(frequency_hz)  # type: ignore[attr-defined]
            else:
                scatter[op.up], inside[op.up] = _reduced(plan, op.core, table, frequency_hz)
    return Network(plan, topology, frequency_hz, table, chains, Blocks(scatter, inside))


def _reduced(plan: Plan, core: Core, table: LineTable, frequency_hz: Array) -> tuple[Dense, ComplexArray]:
    """A core as one block: all its parts' matrices at one reference, with the tied ports eliminated."""
    total = sum(len(e.edges) for e in core.elements)
    batch = table.k.shape[:-2]
    matrix = np.zeros((*batch, total, total, frequency_hz.size), complex)
    for element, line, start in zip(core.elements, core.lines, core.starts, strict=True):
        span = slice(start, start + len(element.edges))
        matrix[..., span, span, :] = _waves(plan, element.part, line, table, frequency_hz)
    try:
        s, inside = joined(matrix, core.tied, core.outer)
    except Undetermined:
        names = [plan.parts[e.part].id for e in core.elements]
        raise SolveError("it is on a loop whose circulating current is not determined", part=names[0]) from None
    return Dense(s, np.full(len(core.outer), WAVE_OHM)), inside


def _waves(plan: Plan, part: int, line: int, table: LineTable, frequency_hz: Array) -> ComplexArray:
    """The matrix of one element at WAVE_OHM."""
    if line != OPEN:
        z0, k, q = table.z0_ohm[..., line, :], table.k[..., line, :], table.q[..., line, :]
        step = (z0 - WAVE_OHM) / (z0 + WAVE_OHM)
        den = 1 - step**2 * q
        same, across = step * (1 - q) / den, k * (1 - step**2) / den
        return np.stack([np.stack([same, across], -2), np.stack([across, same], -2)], -3)
    thing = plan.parts[part].part
    if isinstance(thing, Junction):
        return np.broadcast_to((2 / thing.ports - np.eye(thing.ports))[..., None], (thing.ports, thing.ports, 1))
    if isinstance(thing, TwoPort):
        a, b, c, d, k = (np.broadcast_to(np.asarray(x), frequency_hz.shape) for x in thing.chain(frequency_hz))
        b, c = b / WAVE_OHM, c * WAVE_OHM
        den = a + b + c + d
        return np.array([[(a + b - c - d) / den, 2 * k / den], [2 * k / den, (d + b - c - a) / den]])
    s, reference = thing.scatter(frequency_hz).matrix()  # type: ignore[attr-defined]
    return renormalised(s, reference, WAVE_OHM)


def end_states(network: Network) -> State:
    """(v, i), each (N, F), of what the plan has at its ends."""
    plan, f = network.plan, network.frequency_hz
    v = np.ones((len(network.topology.ends), f.size), complex)
    i = np.zeros_like(v)
    for row, part in enumerate(network.topology.ends):
        if part != OPEN:
            end = plan.parts[part].part
            assert isinstance(end, End | Measured)
            v[row], i[row] = end.state(f)
    return v, i


def look_up(network: Network, ends: State) -> tuple[ComplexArray, ComplexArray, dict[int, Array], dict[int, Response]]:
    """States of all cascaded edges (..., E, F), looking away from the root.

    Also, by edge, the scale of each rescaled join and the response of each block, for the way back.
    """
    topology, table = network.topology, network.table
    shape = (*table.k.shape[:-2], topology.cascaded, network.frequency_hz.size)
    v, i = np.empty(shape, complex), np.empty(shape, complex)
    count = len(topology.ends)
    v[..., :count, :], i[..., :count, :] = ends
    scales: dict[int, Array] = {}
    responses: dict[int, Response] = {}
    for op in topology.ops:
        if isinstance(op, LineBatch):
            v[..., op.up, :], i[..., op.up, :] = through_lines(
                v[..., op.down, :],
                i[..., op.down, :],
                table.z0_ohm[..., op.rows, :],
                table.q[..., op.rows, :],
            )
        elif isinstance(op, JoinBatch):
            first = v[..., op.first, :], i[..., op.first, :]
            second = v[..., op.second, :], i[..., op.second, :]
            v[..., op.up, :], i[..., op.up, :], scale = beside(first, second, op.rescale)
            if scale is not None:
                scales[op.up.start] = scale
        elif isinstance(op, ChainOp):
            c = network.chains[op.up]
            below = v[..., op.down, :], i[..., op.down, :]
            v[..., op.up, :] = c.a * below[0] + c.b * below[1]
            i[..., op.up, :] = c.c * below[0] + c.d * below[1]
        else:
            response = _look_block(network, op, v[..., op.down, :], i[..., op.down, :])
            v[..., op.up, :], i[..., op.up, :] = response.v, response.i
            responses[op.up] = response
    return v, i, scales, responses


def _look_block(network: Network, op: BlockOp, v: ComplexArray, i: ComplexArray) -> Response:
    try:
        return network.blocks.scatter[op.up].look(op.port, v, i)
    except Undetermined:
        index = op.part if op.part is not None else (op.core.elements[0].part if op.core else 0)
        raise SolveError("the waves in it have no single answer", part=network.plan.parts[index].id) from None


def through_lines(v: ComplexArray, i: ComplexArray, z0_ohm: Array, q: ComplexArray) -> State:
    """States looking into lines: V1 = (e^(gl)/2)[(V2 + Z I2) + q (V2 - Z I2)], Z I1 likewise with a minus.

    The factor e^(gl) is left to the scale (s2 = s1 e^(-gl)), so no loss overflows.
    """
    half_v, half_zi = 0.5 * v, (0.5 * z0_ohm) * i
    forward = half_v + half_zi
    back = half_v
    back -= half_zi
    back = back * q
    return forward + back, (forward - back) / z0_ohm


def beside(first: State, second: State, rescale: bool) -> tuple[ComplexArray, ComplexArray, Array | None]:
    """The parallel join of two states, (V1 V2, I1 V2 + I2 V1), and the scale that it was brought to."""
    v = first[0] * second[0]
    i = first[1] * second[0]
    i += second[1] * first[0]
    if not rescale:
        return v, i, None
    size = np.abs(v) + WAVE_OHM * np.abs(i)
    scale = 1 / np.where(size > 0, size, 1)
    return v * scale, i * scale, scale


@dataclass(frozen=True, slots=True)
class Flows:
    """Everything at every edge, driven by the radio.

    v, i : (..., E + 1, F) actual voltage and current, the last row zero; state_v, state_i : (..., C, F) the states
    looking away from the root; open_circuit_v and source_ohm are the radio's.
    """

    v: ComplexArray
    i: ComplexArray
    state_v: ComplexArray
    state_i: ComplexArray


def drive(network: Network, radio: Radio) -> Flows:
    """The flows of a network driven at its first root by the radio; SolveError when they are not determined."""
    topology = network.topology
    state_v, state_i, scales, responses = look_up(network, end_states(network))
    edge = topology.roots[0][0]
    with np.errstate(divide="ignore", invalid="ignore"):
        top = radio.open_circuit_v / (state_v[..., edge, :] + radio.impedance_ohm * state_i[..., edge, :])
    if not np.isfinite(top).all():
        raise SolveError(
            "the current is not determined: two shorts side by side, or data that gives out more than it takes"
        )
    batch, frequencies = state_v.shape[:-2], state_v.shape[-1]
    scale = np.zeros(state_v.shape, complex)
    scale[..., edge, :] = top
    v = np.zeros((*batch, topology.edges + 1, frequencies), complex)
    i = np.zeros_like(v)
    for op in reversed(topology.ops):
        if isinstance(op, LineBatch):
            scale[..., op.down, :] = scale[..., op.up, :] * network.table.k[..., op.rows, :]
        elif isinstance(op, JoinBatch):
            above = scale[..., op.up, :]
            if op.rescale:
                above = above * scales[op.up.start]
            scale[..., op.first, :] = above * state_v[..., op.second, :]
            scale[..., op.second, :] = above * state_v[..., op.first, :]
        elif isinstance(op, ChainOp):
            scale[..., op.down, :] = scale[..., op.up, :] * network.chains[op.up].k
        else:
            above = scale[..., op.up, :]
            below = responses[op.up].k * above[..., None, :]
            scale[..., op.down, :] = below
            if op.core is not None:
                _fill_core(op, network.blocks.inside[op.up], above, below, state_v, state_i, v, i)
    cascaded = topology.cascaded
    np.multiply(scale, state_v, out=v[..., :cascaded, :])
    np.multiply(scale, state_i, out=i[..., :cascaded, :])
    return Flows(v, i, state_v, state_i)


def _fill_core(
    op: BlockOp,
    inside: ComplexArray,
    above: ComplexArray,
    below: ComplexArray,
    state_v: ComplexArray,
    state_i: ComplexArray,
    v: ComplexArray,
    i: ComplexArray,
) -> None:
    """Voltages and currents at a core's inner edges, from the waves that enter it."""
    assert op.core is not None
    root = np.sqrt(WAVE_OHM)
    outward = 0.5 * (state_v[..., op.down, :] / root - root * state_i[..., op.down, :])
    entering = np.insert(outward * below, op.port, above, axis=-2)
    waves = np.einsum("...rpf,...pf->...rf", inside, entering)
    leaving, arriving = waves[..., 0::2, :], waves[..., 1::2, :]
    v[..., op.core.inner, :] = root * (leaving + arriving)
    i[..., op.core.inner, :] = (arriving - leaving) / root


def standing_wave(
    entry: tuple[ComplexArray, ComplexArray],
    exit_: tuple[ComplexArray, ComplexArray],
    line: Line,
    frequency_hz: float,
    points: int,
) -> tuple[Array, ComplexArray, complex]:
    """Voltage along a line from its entry, at one frequency: (x from 0 to 1, V(x), forward wave at the entry).

    entry : V and I into the line at its entry; exit_ : V and I out of it at its far end. Written with the forward
    wave from the entry and the backward wave from the far end, so that both factors decay.
    """
    mhz = frequency_hz / 1e6
    loss_np = line.flat_np + line.skin_np * np.sqrt(mhz) + line.dielectric_np * mhz
    gamma_l = complex(loss_np, 2 * np.pi * frequency_hz * line.delay_s)
    forward = 0.5 * (entry[0] + line.z0_ohm * entry[1])
    backward = 0.5 * (exit_[0] - line.z0_ohm * exit_[1])
    x = np.linspace(0, 1, points)
    return x, forward * np.exp(-gamma_l * x) + backward * np.exp(-gamma_l * (1 - x)), complex(forward)
