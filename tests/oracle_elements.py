"""The oracle's elements: what each demands of the voltages and currents at its terminals, and which a part is made of.

Written from the contract alone; splitters are taken apart into their lines and resistors.
"""

from __future__ import annotations

from collections.abc import Callable, Hashable, Iterator
from dataclasses import dataclass

import numpy as np

from feedlib.parts import Antenna, Coax, Load, Lumped, Measured, Pad, Radio, Splitter, Tee, TouchstoneText, Transformer
from feedlib.plan import Placed, Plan, Port

C_M_PER_S = 299_792_458.0

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
