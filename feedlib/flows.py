"""The network evaluated on arrays: states up from the ends to the roots, then voltages and currents back down.

Frequency is the last axis, rows (edges, lines) stand before it, batch axes before those. See `feedlib.conventions`
for states. Knows topologies and the families of parts, not the figures that people read.
"""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from typing import cast

import numpy as np

from feedlib.conventions import WAVE_OHM, Array, ComplexArray
from feedlib.errors import SolveError
from feedlib.graph import OPEN
from feedlib.parts import Radio
from feedlib.parts.base import CableFigures, Chain, End, Junction, Line, Lines, ManyPort, TwoPort
from feedlib.parts.measured import Measured
from feedlib.plan import Plan
from feedlib.scatter import Dense, Response, Scatter, Undetermined, joined, renormalised
from feedlib.topology import BlockOp, ChainOp, Core, JoinBatch, LineBatch, Rows, Topology
from feedlib.undetermined import refuse_undetermined

ArrayState = tuple[ComplexArray, ComplexArray]

# glibc hands freed memory back to the system, page by page, until it has once freed a block as large as this; after
# that an answer's arrays come from warm memory, which takes a quarter off the time of a small harness.
np.empty(24 << 20, np.uint8)


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
    """The lines at some frequencies: z0_ohm (..., L, 1), k = e^(-gamma l) and q = k^2 (..., L, F)."""

    z0_ohm: Array
    k: ComplexArray
    q: ComplexArray

    def rows(self, rows: slice) -> tuple[Array, ComplexArray]:
        """(z0_ohm, q) of some lines."""
        return self.z0_ohm[..., rows, :], self.q[..., rows, :]


def line_values(plan: Plan, topology: Topology) -> LineValues:
    """The values of the plan's lines."""
    found: dict[Line, int] = {}
    rows = []
    known: dict[int, tuple[Lines, CableFigures | None, tuple[Line, ...]]] = topology.kept("lines", dict)
    for index, n in topology.lines:
        part = cast(Lines, plan.parts[index].part)
        name = getattr(part, "cable", None)
        cable = None if name is None else plan.cables[name]
        before = known.get(index)
        if before is None or before[0] is not part or before[1] is not cable:  # what did not change is the same object
            before = known[index] = part, cable, part.lines(cable)
        rows.append(found.setdefault(before[2][n], len(found)))
    columns = np.array(list(found), float).reshape(len(found), len(Line._fields)).T
    z0_ohm, delay_s, skin_np, dielectric_np, flat_np = columns
    return LineValues(z0_ohm, delay_s, skin_np, dielectric_np, flat_np, np.array(rows, np.intp))


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
class Network:
    """A plan's values at some frequencies, ready to be evaluated: all that does not stand at an end.

    chains, scatter : by the edge that each hangs at. inside : for cores, the waves into the tied rows for unit waves
    into the outer ports, (..., 2J, P, F).
    """

    plan: Plan
    topology: Topology
    frequency_hz: Array
    table: LineTable
    chains: dict[int, Chain]
    scatter: dict[int, Scatter]
    inside: dict[int, ComplexArray]

    @property
    def shape(self) -> tuple[tuple[int, ...], int]:
        """Batch axes and number of frequencies."""
        return self.table.k.shape[:-2], self.frequency_hz.size


def network_of(plan: Plan, topology: Topology, values: LineValues, frequency_hz: Array) -> Network:
    """The network at these frequencies; SolveError names a loop whose current is not determined."""
    network = Network(plan, topology, frequency_hz, line_table(values, frequency_hz), {}, {}, {})
    for op in topology.ops:
        if isinstance(op, ChainOp):
            part = plan.parts[op.part].part
            assert isinstance(part, TwoPort)
            a, b, c, d, k = part.chain(frequency_hz)
            network.chains[op.up] = Chain(d, b, c, a, k) if op.turned else Chain(a, b, c, d, k)
        elif isinstance(op, BlockOp) and op.core is not None:
            block, network.inside[op.up] = _reduced(plan, op.core, network.table, frequency_hz)
            network.scatter[op.up] = block
        elif isinstance(op, BlockOp):
            assert op.part is not None
            many = plan.parts[op.part].part
            assert isinstance(many, ManyPort)
            network.scatter[op.up] = many.scatter(frequency_hz)
    return network


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
    assert isinstance(thing, ManyPort)
    s, reference = thing.scatter(frequency_hz).matrix()
    return renormalised(s, reference, WAVE_OHM)


def end_states(network: Network, taken_off: Collection[int] = (), reference_ohm: float = 1.0) -> ArrayState:
    """(v, i), each (N, F), of what the plan has at its ends; parts in `taken_off` are replaced by the reference."""
    ends = network.topology.ends
    v: ComplexArray = np.ones((len(ends), network.frequency_hz.size), complex)
    i: ComplexArray = np.zeros_like(v)
    off = [row for row, part in enumerate(ends) if part in taken_off]
    if off:
        v[off], i[off] = reference_ohm, 1
    for row, part in enumerate(ends):
        if part != OPEN and part not in taken_off:
            end = cast("End | Measured", network.plan.parts[part].part)
            v[row], i[row] = end.state(network.frequency_hz)
    return v, i


@dataclass(frozen=True, slots=True)
class Looks:
    """What every edge sees away from the root: v, i (..., E, F), rows inside cores still empty.

    scales, responses : by edge, the scale of each rescaled join or line, and the response of each block, for the way
    back.
    """

    v: ComplexArray
    i: ComplexArray
    scales: dict[int, Array]
    responses: dict[int, Response]


def look_away(network: Network, ends: ArrayState) -> Looks:
    """States of all edges, worked out from the ends to the roots."""
    topology, table = network.topology, network.table
    batch, frequencies = network.shape
    v = np.empty((*batch, topology.edges + 1, frequencies), complex)
    i = np.empty(v.shape, complex)
    v[..., topology.cascaded :, :] = i[..., topology.cascaded :, :] = 0
    looks = Looks(v, i, {}, {})
    count = len(topology.ends)
    v[..., :count, :], i[..., :count, :] = ends
    for op in topology.ops:
        if isinstance(op, LineBatch):
            below = v[..., op.down, :], i[..., op.down, :]
            above = v[..., op.up, :], i[..., op.up, :]
            through_lines(below, *table.rows(op.rows), above)
            if op.rescale:
                looks.scales[op.up.start] = brought_to_one(above)
        elif isinstance(op, JoinBatch):
            first = v[..., op.first, :], i[..., op.first, :]
            second = v[..., op.second, :], i[..., op.second, :]
            scale = beside(first, second, op.rescale, (v[..., op.up, :], i[..., op.up, :]))
            if scale is not None:
                looks.scales[op.up.start] = scale
        elif isinstance(op, ChainOp):
            c = network.chains[op.up]
            below = v[..., op.down, :], i[..., op.down, :]
            v[..., op.up, :] = c.a * below[0] + c.b * below[1]
            i[..., op.up, :] = c.c * below[0] + c.d * below[1]
        else:
            response = _look_block(network, op, v[..., op.down, :], i[..., op.down, :])
            v[..., op.up, :], i[..., op.up, :] = response.v, response.i
            looks.responses[op.up] = response
    return looks


def _look_block(network: Network, op: BlockOp, v: ComplexArray, i: ComplexArray) -> Response:
    try:
        return network.scatter[op.up].look(op.port, v, i)
    except Undetermined:
        index = op.part if op.part is not None else (op.core.elements[0].part if op.core else 0)
        raise SolveError("the waves in it have no single answer", part=network.plan.parts[index].id) from None


def through_lines(state: ArrayState, z0_ohm: Array, q: ComplexArray, out: ArrayState) -> None:
    """States looking into lines: V1 = (e^(gl)/2)[(V2 + Z I2) + q (V2 - Z I2)], Z I1 likewise with a minus.

    The factor e^(gl) is left to the scale (s2 = s1 e^(-gl)), so no loss overflows. Real factors work on the real and
    imaginary parts side by side, which is several times cheaper than complex ones.
    """
    half_v = state[0].view(float) * 0.5
    half_zi = state[1].view(float) * (0.5 * z0_ohm)
    forward = half_v + half_zi
    half_v -= half_zi
    back = half_v.view(complex)
    back *= q
    np.add(forward, half_v, out=out[0].view(float))
    forward -= half_v
    np.multiply(forward, 1 / z0_ohm, out=out[1].view(float))


def beside(first: ArrayState, second: ArrayState, rescale: bool, out: ArrayState) -> Array | None:
    """The parallel join of two states, (V1 V2, I1 V2 + I2 V1), into `out`; returns the scale it was brought to."""
    v, i = out
    np.multiply(first[0], second[0], out=v)
    np.multiply(first[1], second[0], out=i)
    i += second[1] * first[0]
    return brought_to_one(out) if rescale else None


def brought_to_one(state: ArrayState) -> Array:
    """The scale that brings a state to the size of one, which is done in place."""
    v, i = state
    size = np.abs(v) + WAVE_OHM * np.abs(i)
    scale: Array = 1 / np.where(size > 0, size, 1)
    v *= scale
    i *= scale
    return scale


@dataclass(frozen=True, slots=True)
class Flows:
    """Everything at every edge, driven by the radio: V = scale v, I = scale i, each (..., E + 1, F).

    (v, i) is the state that looks away from the root, which no loss drowns; the last row is zero. looks : the same
    with what the way back needs; None where the frequencies were taken in slices.
    """

    v: ComplexArray
    i: ComplexArray
    scale: ComplexArray
    looks: Looks | None


def drive(network: Network, radio: Radio) -> Flows:
    """The flows of a network driven at its first root by the radio; SolveError when they are not determined."""
    topology = network.topology
    looks = look_away(network, end_states(network))
    v, i = looks.v, looks.i
    edge = topology.roots[0][0]
    whole = v[..., edge, :] + radio.impedance_ohm * i[..., edge, :]
    if not whole.all():
        refuse_undetermined(network.plan)
        raise SolveError("the currents have no single answer; some part gives out more than it takes, or loops back")
    scale = np.empty(v.shape, complex)
    scale[..., topology.cascaded :, :] = 0
    for other, _ in topology.roots[1:]:
        scale[..., other, :] = 0
    scale[..., edge, :] = radio.open_circuit_v / whole
    for op in reversed(topology.ops):
        if isinstance(op, LineBatch):
            k = network.table.k[..., op.rows, :]
            put_product(scale, op.down, scale[..., op.up, :], k * looks.scales[op.up.start] if op.rescale else k)
        elif isinstance(op, JoinBatch):
            above = scale[..., op.up, :]
            if op.rescale:
                above = above * looks.scales[op.up.start]
            put_product(scale, op.first, above, v[..., op.second, :])
            put_product(scale, op.second, above, v[..., op.first, :])
        elif isinstance(op, ChainOp):
            scale[..., op.down, :] = scale[..., op.up, :] * network.chains[op.up].k
        else:
            above = scale[..., op.up, :]
            below = looks.responses[op.up].k * above[..., None, :]
            scale[..., op.down, :] = below
            if op.core is not None:
                entering = _waves_into(op, v[..., op.down, :], i[..., op.down, :], below, above)
                inside = np.einsum("...rpf,...pf->...rf", network.inside[op.up], entering)
                leaving, arriving = inside[..., 0::2, :], inside[..., 1::2, :]
                v[..., op.core.inner, :] = (leaving + arriving) * np.sqrt(WAVE_OHM)
                i[..., op.core.inner, :] = (arriving - leaving) / np.sqrt(WAVE_OHM)
                scale[..., op.core.inner, :] = 1
    return Flows(v, i, scale, looks)


def put_product(target: ComplexArray, rows: Rows, a: ComplexArray, b: ComplexArray) -> None:
    """a b into some rows of an array, without a copy where they run on."""
    if isinstance(rows, slice):
        np.multiply(a, b, out=target[..., rows, :])
    else:
        target[..., rows, :] = a * b


def _waves_into(
    op: BlockOp, v: ComplexArray, i: ComplexArray, below: ComplexArray, above: ComplexArray
) -> ComplexArray:
    """The waves that enter a core at its outer ports, in port order."""
    root = np.sqrt(WAVE_OHM)
    return np.insert(0.5 * (v / root - root * i) * below, op.port, above, axis=-2)


SLICE_BYTES = 8e6
"""Frequencies are taken in slices where one array would be larger than this, which bounds what is held at a time."""


def drive_in_slices(
    plan: Plan, topology: Topology, values: LineValues, frequency_hz: Array, radio: Radio
) -> tuple[Flows, Network | None]:
    """The flows at all frequencies, and the network where one slice held them all."""
    step = max(16, int(SLICE_BYTES / (16 * (topology.edges + 1))))
    if step >= frequency_hz.size:
        network = network_of(plan, topology, values, frequency_hz)
        return drive(network, radio), network
    found = [
        drive(network_of(plan, topology, values, frequency_hz[n : n + step]), radio)
        for n in range(0, frequency_hz.size, step)
    ]
    v, i, scale = (np.concatenate([getattr(f, name) for f in found], axis=-1) for name in ("v", "i", "scale"))
    return Flows(v, i, scale, None), None
