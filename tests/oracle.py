"""A second solver of feed harnesses, for tests only: one dense set of linear equations a frequency, clear and slow.

Unknown are the voltage of every node and the current into every terminal of every element. An element of k terminals
brings k equations, a node one (its currents sum to zero; so a port tied to nothing carries none). From a plan only the
data are read; nothing of the program's solver is used.
"""

from __future__ import annotations

import itertools
from collections.abc import Hashable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from feedlib.parts import Antenna, Radio
from feedlib.plan import Placed, Plan, Port
from tests.oracle_elements import Element, elements_of, source

UNIT_OHM = 50.0
"""Currents are counted in V / UNIT_OHM: all unknowns are of one size and the condition number means something."""


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
        norms[norms == 0] = 1  # an equation that says nothing: the matrix is singular, and stays so
        return m / norms[:, None], c / norms, norms

    def port_current(self, x: np.ndarray, port: Port) -> complex:
        """Current into the part at a port, in A."""
        starts = zip(self.elements, self.start, strict=False)
        return sum(x[start + n] for e, start in starts for n, p in enumerate(e.ports) if p == port) / UNIT_OHM


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
    """(S (F, P, P), condition): each terminal driven in turn, all terminals at the reference."""
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
