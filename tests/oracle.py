"""A second solver of feed harnesses, for tests only: one dense set of linear equations a frequency, clear and slow.

Unknown are the voltage of every node and the current into every terminal of every element. An element of k terminals
brings k equations, a node one (its currents sum to zero; so a port tied to nothing carries none). Splitters are taken
apart into their lines and resistors. From a plan only the data are read; nothing of the program's solver is used.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable, Hashable, Iterator
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from feedlib.parts import Antenna, Coax, Load, Lumped, Measured, Pad, Radio, Splitter, Tee, TouchstoneText, Transformer
from feedlib.plan import Placed, Plan, Port

C_M_PER_S = 299_792_458.0
UNIT_OHM = 50.0
"""Currents are counted in V / UNIT_OHM, so that all unknowns are of one size and the condition number means something."""

Equations = Callable[[float], tuple[np.ndarray, np.ndarray, np.ndarray]]
"""Of a frequency (Hz): (A, B, c) with A V + B I = c; one row for each terminal, currents into the element."""


@dataclass(frozen=True)
class Element:
    """equations : what it demands; nodes : where its terminals are; ports : the plan's port of each, None inside."""

    equations: Equations
    nodes: tuple[Hashable, ...]
    ports: tuple[Port | None, ...]


# Equations of the elements


def impedance(n: complex, d: complex) -> Equations:
    """One terminal, Z = n/d to ground."""
    return lambda f: (np.array([[d]]), np.array([[-n]]), np.zeros(1))


def source(open_circuit_v: float, z_ohm: complex) -> Equations:
    """One terminal: V = E + Z I with I into the source."""
    return lambda f: (np.array([[1]]), np.array([[-z_ohm]]), np.array([open_circuit_v]))


def line(z0_ohm: float, travel: Callable[[float], complex]) -> Equations:
    """Two terminals; travel(f) is e^(-gamma l): what leaves one end as V - Z I entered the other as V + Z I."""

    def equations(f: float) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        t = travel(f)
        return (
            np.array([[1, -t], [-t, 1]]),
            np.array([[-z0_ohm, -t * z0_ohm], [-t * z0_ohm, -z0_ohm]]),
            np.zeros(2),
        )

    return equations


def quarter_line(z0_ohm: float, centre_hz: float, quarters: int = 1) -> Equations:
    """A lossless line of so many quarter waves at the centre."""
    return line(z0_ohm, lambda f: np.exp(-0.5j * np.pi * quarters * f / centre_hz))


def resistor(r_ohm: float) -> Equations:
    """Two terminals: V1 - V2 = r I1, I1 + I2 = 0."""
    return lambda f: (np.array([[1, -1], [0, 0]]), np.array([[-r_ohm, 0], [1, 1]]), np.zeros(2))


def junction(count: int) -> Equations:
    """Equal voltage at all terminals, currents sum to zero."""
    a, b = np.zeros((count, count)), np.zeros((count, count))
    for k in range(1, count):
        a[k, 0], a[k, k] = 1, -1
    b[0, :] = 1
    return lambda f: (a, b, np.zeros(count))


def transformer(ratio: float) -> Equations:
    """V1 = n V2, n I1 = -I2."""
    return lambda f: (np.array([[1, -ratio], [0, 0]]), np.array([[0, 0], [ratio, 1]]), np.zeros(2))


def lumped(part: Lumped) -> Equations:
    """Series or shunt Z = n/d, both polynomials in s = jw, so that resonances are ordinary values."""

    def equations(f: float) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        s = 2j * np.pi * f
        r, l_h, c_f = part.r_ohm, part.l_h, part.c_f
        branches = [
            *([] if r is None else [(r, 1)]),
            *([] if l_h is None else [(s * l_h, 1)]),
            *([] if c_f is None else [(1, s * c_f)]),
        ]
        n, d = branches[0]
        for n2, d2 in branches[1:]:
            n, d = (n * d2 + n2 * d, d * d2) if part.wiring == "series" else (n * n2, n * d2 + n2 * d)
        if part.place == "series":
            return np.array([[d, -d], [0, 0]]), np.array([[-n, 0], [1, 1]]), np.zeros(2)
        return np.array([[1, -1], [d, 0]]), np.array([[0, 0], [-n, -n]]), np.zeros(2)

    return equations


def measured(file: TouchstoneText) -> Equations:
    """(1 - S) r^-1/2 V = (1 + S) r^1/2 I at the file's own references."""
    data = file.data

    def equations(f: float) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        s = np.array(
            [
                [np.interp(f, data.frequency_hz, s.real) + 1j * np.interp(f, data.frequency_hz, s.imag) for s in row]
                for row in data.s
            ]
        )
        root = np.sqrt(np.asarray(data.reference_ohm))
        one = np.eye(data.ports)
        return (one - s) / root, -(one + s) * root, np.zeros(data.ports)

    return equations


# A plan's parts as elements


def elements_of(plan: Plan, placed: Placed, node: dict[Port, Hashable]) -> Iterator[Element]:
    """The elements of one part."""
    part, ports = placed.part, placed.ports()
    at = [node[p] for p in ports]

    def whole(equations: Equations) -> Element:
        return Element(equations, tuple(at), ports)

    if isinstance(part, Radio):
        yield whole(source(2 * np.sqrt(part.power_w * part.impedance_ohm.real), part.impedance_ohm))
    elif isinstance(part, Antenna):
        yield whole(antenna(part))
    elif isinstance(part, Load):
        yield whole(impedance(part.impedance_ohm, 1))
    elif isinstance(part, Tee):
        yield whole(junction(part.ports))
    elif isinstance(part, Transformer):
        yield whole(transformer(part.ratio))
    elif isinstance(part, Lumped):
        yield whole(lumped(part))
    elif isinstance(part, Measured):
        yield whole(measured(part.touchstone))
    elif isinstance(part, Pad):
        loss = 10 ** (-part.loss_db / 20)
        yield whole(line(part.z0_ohm, lambda f: loss))
    elif isinstance(part, Coax):
        yield from coax(plan, placed.id, part, node)
    elif isinstance(part, Splitter):
        yield from splitter(placed.id, part, node)
    else:
        raise TypeError(part)


def antenna(part: Antenna) -> Equations:
    """One terminal: fixed, resonant or measured."""
    given = part.impedance
    if given.touchstone is not None:
        return measured(given.touchstone)
    if given.fixed_ohm is not None:
        return impedance(given.fixed_ohm, 1)
    r = given.resonant
    assert r is not None
    return lambda f: (
        np.array([[1]]),
        np.array([[-r.r_ohm * (1 + 1j * r.q * (f / r.f0_hz - r.f0_hz / f))]]),
        np.zeros(1),
    )


def coax(plan: Plan, name: str, part: Coax, node: dict[Port, Hashable]) -> Iterator[Element]:
    """The cable, and a lossless line outside each of its ends that has one."""
    cable = plan.cables[part.cable]

    def travel(f: float) -> complex:
        mhz = f / 1e6
        db = (cable.skin_db_per_100m * np.sqrt(mhz) + cable.dielectric_db_per_100m * mhz) * part.length_m / 100
        return 10 ** (-db / 20) * np.exp(-2j * np.pi * f * part.length_m / (cable.velocity_factor * C_M_PER_S))

    def end_travel(length_m: float, velocity_factor: float) -> Callable[[float], complex]:
        return lambda f: np.exp(-2j * np.pi * f * length_m / (velocity_factor * C_M_PER_S))

    sections = [line(cable.z0_ohm, travel)]
    for side, end in enumerate(part.ends):
        if end is not None:
            section = line(end.z0_ohm, end_travel(end.length_m, end.velocity_factor))
            sections = [*sections, section] if side else [section, *sections]
    first, last = Port(name, 1), Port(name, 2)
    nodes = [node[first], *((name, "inside", n) for n in range(1, len(sections))), node[last]]
    ports = [first, *[None] * (len(sections) - 1), last]
    for n, section in enumerate(sections):
        yield Element(
            section, (nodes[n], nodes[n + 1]), (ports[n] if n == 0 else None, last if n == len(sections) - 1 else None)
        )


def splitter(name: str, part: Splitter, node: dict[Port, Hashable]) -> Iterator[Element]:
    """The published circuits as the contract describes them: lines and resistors between the ports."""
    z0, star = part.z0_ohm, (name, "star")

    def between(equations: Equations, a: int, b: int | None) -> Element:
        first, second = Port(name, a), Port(name, b) if b else None
        return Element(equations, (node[first], node[second] if second else star), (first, second))

    centre = part.centre_hz or 1.0
    if part.form == "wilkinson":
        for n in range(2, part.outputs + 2):
            yield between(quarter_line(np.sqrt(part.outputs) * z0, centre), 1, n)
            yield between(resistor(z0), n, None)
    elif part.form == "resistive":
        for n in range(1, part.outputs + 2):
            yield between(resistor(z0 * (part.outputs - 1) / (part.outputs + 1)), n, None)
    elif part.form == "branch_line":
        for a, b, z in ((1, 2, z0 / np.sqrt(2)), (4, 3, z0 / np.sqrt(2)), (1, 4, z0), (2, 3, z0)):
            yield between(quarter_line(z, centre), a, b)
    else:
        for a, b, quarters in ((1, 2, 1), (1, 3, 1), (3, 4, 1), (2, 4, 3)):
            yield between(quarter_line(np.sqrt(2) * z0, centre, quarters), a, b)


# The equations of a whole network


class System:
    """Elements tied at nodes; solved at one frequency at a time."""

    def __init__(self, elements: list[Element]) -> None:
        self.elements = elements
        names = dict.fromkeys(n for e in elements for n in e.nodes)
        self.node_row = {name: row for row, name in enumerate(names)}
        self.start = list(itertools.accumulate((len(e.nodes) for e in elements), initial=len(names)))
        self.size = self.start[-1]

    def matrix(self, f: float) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """(M, c, norms): M x = c with rows brought to norm 1 by dividing by norms."""
        m, c = np.zeros((self.size, self.size), complex), np.zeros(self.size, complex)
        for element, start in zip(self.elements, self.start, strict=False):
            a, b, right = element.equations(f)
            rows = slice(start, start + len(element.nodes))
            for terminal, name in enumerate(element.nodes):
                m[rows, self.node_row[name]] += a[:, terminal]
                m[self.node_row[name], start + terminal] = 1
            m[rows, rows] = b / UNIT_OHM
            c[rows] = right
        norms = np.linalg.norm(m, axis=1)
        return m / norms[:, None], c / norms, norms

    def port_current(self, x: np.ndarray, port: Port) -> complex:
        """Current into the part at a port, in A."""
        return sum(
            x[start + n]
            for element, start in zip(self.elements, self.start, strict=False)
            for n, p in enumerate(element.ports)
            if p == port
        ) / UNIT_OHM


def nodes_of(plan: Plan) -> dict[Port, Hashable]:
    """The node of every port: one a join, one for each port that is tied to nothing."""
    node: dict[Port, Hashable] = {port: port for placed in plan.parts for port in placed.ports()}
    for n, (a, b) in enumerate(plan.joins):
        node[a] = node[b] = n
    return node


def joins_from(plan: Plan, start: str) -> dict[str, int]:
    """How many joins each part is away from a part, by relaxing until nothing changes."""
    away = {start: 0}
    while True:
        nearer = {}
        for a, b in plan.joins:
            for here, there in ((a.part, b.part), (b.part, a.part)):
                if here in away and away[here] + 1 < away.get(there, len(plan.parts)):
                    nearer[there] = away[here] + 1
        if not nearer:
            return away
        away.update(nearer)


# The figures


@dataclass(frozen=True)
class Driven:
    """Everything that the radio drives, frequency first; ports that it does not reach have 0 V and 0 A.

    scale_v : (F,) the largest unknown in V (currents times UNIT_OHM): what rounding is relative to.
    """

    plan: Plan
    frequency_hz: np.ndarray
    voltage_v: dict[Port, np.ndarray]
    current_a: dict[Port, np.ndarray]
    scale_v: np.ndarray
    condition: float

    @cached_property
    def radio(self) -> Placed:
        return next(p for p in self.plan.parts if isinstance(p.part, Radio))

    @cached_property
    def away(self) -> dict[str, int]:
        return joins_from(self.plan, self.radio.id)

    @property
    def antennas(self) -> list[Placed]:
        return [p for p in self.plan.parts if isinstance(p.part, Antenna)]

    def _at_antennas(self, values: dict[Port, np.ndarray]) -> np.ndarray:
        columns = [values[Port(p.id, 1)] for p in self.antennas]
        return np.stack(columns, axis=1) if columns else np.zeros((self.frequency_hz.size, 0), complex)

    @property
    def antenna_voltage_v(self) -> np.ndarray:
        return self._at_antennas(self.voltage_v)

    @property
    def antenna_current_a(self) -> np.ndarray:
        return self._at_antennas(self.current_a)

    @property
    def antenna_share(self) -> np.ndarray:
        return np.real(self.antenna_voltage_v * self.antenna_current_a.conj()) / self.radio.part.power_w

    @property
    def part_loss_share(self) -> dict[str, np.ndarray]:
        return {
            p.id: sum(np.real(self.voltage_v[q] * self.current_a[q].conj()) for q in p.ports())
            / self.radio.part.power_w
            for p in self.plan.parts
            if not isinstance(p.part, Radio | Antenna)
        }

    @property
    def reflection(self) -> np.ndarray:
        """(F,) |(Z - Zs*)/(Z + Zs)| at the radio."""
        port, zs = Port(self.radio.id, 1), self.radio.part.impedance_ohm
        v, i = self.voltage_v[port], -self.current_a[port]
        return np.abs((v - np.conj(zs) * i) / (v + zs * i))

    def near_to_far(self, port: Port) -> np.ndarray | None:
        """(F,) current from near to far at a port's join; None where the radio does not reach."""
        if port.part not in self.away:
            return None
        for a, b in self.plan.joins:
            if port in (a, b):
                far = a if self.away[b.part] < self.away[a.part] else b
                return self.current_a[far]
        return self.current_a[port]


def driven(plan: Plan, frequency_hz: np.ndarray) -> Driven:
    """The plan driven by its radio."""
    radio = next(p for p in plan.parts if isinstance(p.part, Radio))
    reached, node = joins_from(plan, radio.id), nodes_of(plan)
    system = System([e for p in plan.parts if p.id in reached for e in elements_of(plan, p, node)])
    ports = [port for placed in plan.parts for port in placed.ports()]
    voltage = {port: np.zeros(frequency_hz.size, complex) for port in ports}
    current = {port: np.zeros(frequency_hz.size, complex) for port in ports}
    scale, condition = np.zeros(frequency_hz.size), 0.0
    for k, f in enumerate(frequency_hz):
        m, c, _ = system.matrix(float(f))
        condition = max(condition, condition_of(m))
        if not np.isfinite(condition):
            break
        x = np.linalg.solve(m, c)
        scale[k] = np.abs(x).max()
        for port in ports:
            if port.part in reached:
                voltage[port][k] = x[system.node_row[node[port]]]
                current[port][k] = system.port_current(x, port)
    return Driven(plan, frequency_hz, voltage, current, scale, condition)


def harness_s(plan: Plan, frequency_hz: np.ndarray) -> tuple[np.ndarray, float]:
    """(S (F, P, P), condition): each terminal driven in turn by 1 V of incident wave, all terminals at the reference."""
    r = plan.reference_ohm
    radio = [p for p in plan.parts if isinstance(p.part, Radio)]
    terminals = [Port(p.id, 1) for p in radio + [p for p in plan.parts if isinstance(p.part, Antenna)]]
    reached = set().union(*(joins_from(plan, t.part) for t in terminals))
    node = nodes_of(plan)
    system = System(
        [
            e
            for p in plan.parts
            if p.id in reached
            for e in (
                [Element(source(0, r), (node[Port(p.id, 1)],), (Port(p.id, 1),))]
                if isinstance(p.part, Radio | Antenna)
                else elements_of(plan, p, node)
            )
        ]
    )
    row = {e.ports[0]: start for e, start in zip(system.elements, system.start, strict=False)}
    s, condition = np.zeros((frequency_hz.size, len(terminals), len(terminals)), complex), 0.0
    for k, f in enumerate(frequency_hz):
        m, _, norms = system.matrix(float(f))
        condition = max(condition, condition_of(m))
        if not np.isfinite(condition):
            break
        right = np.zeros((system.size, len(terminals)), complex)
        for n, t in enumerate(terminals):
            right[row[t], n] = 2 / norms[row[t]]
        x = np.linalg.solve(m, right)
        for n, t in enumerate(terminals):
            # 1 V goes in, V - 1 comes out; the current into the source is that out of the harness.
            s[k, n] = (x[system.node_row[node[t]]] + r / UNIT_OHM * x[row[t]]) / 2
    return s, condition


def condition_of(m: np.ndarray) -> float:
    """Condition number in the 1-norm; inf for a singular matrix."""
    try:
        return float(np.linalg.cond(m, 1))
    except np.linalg.LinAlgError:
        return float("inf")


def amplitude_balance_db(plan: Plan, current_a: np.ndarray) -> np.ndarray:
    """(F,) of antenna currents (F, N)."""
    wanted = [p.part.target.amplitude for p in plan.parts if isinstance(p.part, Antenna)]
    found = []
    for row in np.abs(current_a) / wanted:
        found.append(np.inf if min(row) == 0 else max(20 * np.log10(a / b) for a in row for b in row))
    return np.array(found)


def phase_balance_deg(plan: Plan, current_a: np.ndarray) -> np.ndarray:
    """(F,) smallest arc: every antenna tried as its beginning."""
    wanted = np.array([p.part.target.phase_deg for p in plan.parts if isinstance(p.part, Antenna)])
    found = []
    for row in current_a:
        phases = (np.degrees(np.angle(row)) - wanted)[row != 0]
        found.append(min((max((q - p) % 360 for q in phases) for p in phases), default=0.0))
    return np.array(found)
