"""The solver against scikit-rf, an independent engine, on the same networks.

`Twin` builds each network twice: as a plan, and as a scikit-rf circuit of its lines, resistors and ideal junctions.
"""

import io
from collections.abc import Callable

import numpy as np
import pytest
from skrf.circuit import Circuit
from skrf.frequency import Frequency
from skrf.media import DefinedGammaZ0
from skrf.network import Network

from feedlib import Answer, solve
from tests.plans import Sketch, passive_s, touchstone

C_M_PER_S = 299_792_458.0
START_HZ, STOP_HZ, POINTS = 4.1e8, 1.37e9, 17
CENTRE_HZ = 8.7e8


class Twin:
    """One network in two engines; joins are written once. Terminals are the radio, then the antennas."""

    def __init__(self, reference_ohm: float = 50) -> None:
        self.sketch = Sketch(START_HZ, STOP_HZ, POINTS, reference_ohm=reference_ohm)
        self.frequency = Frequency.from_f(np.linspace(START_HZ, STOP_HZ, POINTS), unit="Hz")
        self.reference_ohm = reference_ohm
        self.networks: dict[str, Network] = {}
        self.loads: dict[str, Network] = {}

    def line(self, gamma_l: np.ndarray, z0_ohm: float, name: str) -> Network:
        """A line as scikit-rf makes it, at 50 ohm."""
        line = DefinedGammaZ0(self.frequency, z0=z0_ohm, gamma=gamma_l).line(1, "m", name=name)
        line.renormalize(50)
        return line

    def quarter(self, z0_ohm: float, name: str, quarters: int = 1) -> Network:
        """A lossless line of so many quarter waves at the centre."""
        return self.line(0.5j * np.pi * quarters * self.frequency.f / CENTRE_HZ, z0_ohm, name)

    def resistor(self, r_ohm: float, name: str) -> Network:
        return DefinedGammaZ0(self.frequency, z0=50).resistor(r_ohm, name=name)

    def terminal(self, name: str, z_ohm: complex = 50) -> None:
        """The radio (first) or an antenna."""
        if self.loads:
            self.sketch.antenna(z_ohm, name)
        else:
            self.sketch.add("radio", name, impedance_ohm=complex(z_ohm))
        self.networks[name] = Circuit.Port(self.frequency, name, z0=self.reference_ohm)
        load = DefinedGammaZ0(self.frequency, z0=50).load((z_ohm - 50) / (z_ohm + 50), name=name)
        self.loads[name] = load

    def coax(self, name: str, length_m: float, z0_ohm: float, skin: float = 0, dielectric: float = 0) -> None:
        velocity_factor = 0.695
        self.sketch.coax(length_m, z0_ohm, name, velocity_factor, skin, dielectric)
        f = self.frequency.f
        loss_db = (skin * np.sqrt(f / 1e6) + dielectric * f / 1e6) * length_m / 100
        phase = 2 * np.pi * f * length_m / (velocity_factor * C_M_PER_S)
        self.networks[name] = self.line(loss_db * np.log(10) / 20 + 1j * phase, z0_ohm, name)

    def tee(self, name: str, ports: int = 3) -> None:
        self.sketch.add("tee", name, ports=ports)
        self.networks[name] = DefinedGammaZ0(self.frequency, z0=50).splitter(ports, name=name)

    def measured(self, name: str, file: dict[str, str]) -> None:
        self.sketch.add("measured", name, touchstone=file)
        text = io.StringIO(file["text"])
        text.name = file["name"]
        read = Network(text)
        read.name = name
        self.networks[name] = read

    def splitter(self, name: str, circuit: Network, form: str, **fields: object) -> None:
        self.sketch.add("splitter", name, form=form, **fields)
        circuit.name = name
        self.networks[name] = circuit

    def join(self, *ports: str) -> None:
        self.sketch.join(*ports)

    def circuit(self, *taken_off: str) -> Network:
        """scikit-rf's network between the terminals that are taken off; loads stand at the others."""
        networks = {**self.networks, **{k: v for k, v in self.loads.items() if k not in taken_off}}
        pairs = [
            [(networks[name], int(number) - 1) for name, number in (port.split(":") for port in join)]
            for join in self.sketch.joins
        ]
        wanted = [name for name in self.loads if name in taken_off]
        found = Circuit(pairs)
        met = [n.name for pair in pairs for n, _ in pair if n.name in wanted]
        order = [met.index(name) for name in wanted]
        return found.network.subnetwork(order)

    def answer(self) -> Answer:
        return solve(self.sketch.plan())

    def check(self) -> None:
        """Harness S, return loss and the input impedance of both engines agree to 1e-9."""
        answer = self.answer()
        names = list(self.loads)
        np.testing.assert_allclose(answer.harness_s, self.circuit(*names).s, rtol=0, atol=1e-9)
        seen = self.circuit(names[0])
        seen.renormalize(50)
        gamma = seen.s[:, 0, 0]
        radio = names[0]
        np.testing.assert_allclose(answer.port_impedance_ohm[f"{radio}:1"], 50 * (1 + gamma) / (1 - gamma), rtol=1e-9)
        np.testing.assert_allclose(10 ** (-answer.return_loss_db / 20), np.abs(gamma), rtol=0, atol=1e-9)


def inner(twin: Twin, connections: Callable[[Callable[[int], tuple]], list[list[tuple]]], ports: int) -> Network:
    """A splitter's circuit as one network at 50 ohm; `connections` is given its outer ports by number."""
    outer = [Circuit.Port(twin.frequency, f"port {n}", z0=50) for n in range(1, ports + 1)]
    found = Circuit(connections(lambda n: (outer[n - 1], 0)))
    order = [n.name for c in found.connections for n, _ in c if n.name.startswith("port ")]
    return found.network.subnetwork([order.index(f"port {n}") for n in range(1, ports + 1)])


def branch_line(twin: Twin) -> Network:
    z = 50.0
    a, b = twin.quarter(z / np.sqrt(2), "1-2"), twin.quarter(z / np.sqrt(2), "4-3")
    c, d = twin.quarter(z, "1-4"), twin.quarter(z, "2-3")
    return inner(
        twin,
        lambda port: [
            [port(1), (a, 0), (c, 0)],
            [port(2), (a, 1), (d, 0)],
            [port(3), (b, 1), (d, 1)],
            [port(4), (b, 0), (c, 1)],
        ],
        4,
    )


def rat_race(twin: Twin) -> Network:
    z = 50.0 * np.sqrt(2)
    a, b, c = twin.quarter(z, "1-2"), twin.quarter(z, "1-3"), twin.quarter(z, "3-4")
    d = twin.quarter(z, "2-4", 3)
    return inner(
        twin,
        lambda port: [
            [port(1), (a, 0), (b, 0)],
            [port(2), (a, 1), (d, 0)],
            [port(3), (b, 1), (c, 0)],
            [port(4), (c, 1), (d, 1)],
        ],
        4,
    )


def wilkinson(twin: Twin, outputs: int) -> Network:
    """Two outputs: one resistor across them; more: resistors to a star point."""
    lines = [twin.quarter(50 * np.sqrt(outputs), f"arm {n}") for n in range(outputs)]
    if outputs == 2:
        across = twin.resistor(100, "across")
        at_outputs = [(across, 0), (across, 1)]
        star = []
    else:
        resistors = [twin.resistor(50, f"r {n}") for n in range(outputs)]
        at_outputs = [(r, 0) for r in resistors]
        star = [[(r, 1) for r in resistors]]
    return inner(
        twin,
        lambda port: [
            [port(1), *((line, 0) for line in lines)],
            *([port(n + 2), (line, 1), at_outputs[n]] for n, line in enumerate(lines)),
            *star,
        ],
        outputs + 1,
    )


def resistive(twin: Twin, outputs: int) -> Network:
    resistors = [twin.resistor(50 * (outputs - 1) / (outputs + 1), f"r {n}") for n in range(outputs + 1)]
    return inner(
        twin,
        lambda port: [*([port(n + 1), (r, 0)] for n, r in enumerate(resistors)), [(r, 1) for r in resistors]],
        outputs + 1,
    )


def test_two_level_tree_of_four_antennas():
    twin = Twin()
    twin.terminal("radio")
    for name, z in zip("ABCD", (50, 45 + 12j, 62 - 20j, 38 + 5j), strict=True):
        twin.terminal(name, z)
    for name in ("T", "T left", "T right"):
        twin.tee(name)
    twin.coax("trunk", 1.31, 50, 3.16)
    twin.join("radio:1", "trunk:1", "trunk:2", "T:1")
    for side, arm, antennas in (("left", 2, "AB"), ("right", 3, "CD")):
        twin.coax(side, 0.183 + 0.01 * arm, 75, 2.9, 0.005)
        twin.join(f"T:{arm}", f"{side}:1", f"{side}:2", f"T {side}:1")
        for n, name in enumerate(antennas, 2):
            twin.coax(f"leg {name}", 0.061 * n, 93, 4)
            twin.join(f"T {side}:{n}", f"leg {name}:1", f"leg {name}:2", f"{name}:1")
    twin.check()


def test_reference_other_than_50_ohm():
    twin = Twin(reference_ohm=75)
    twin.terminal("radio")
    twin.terminal("A", 30 + 20j)
    twin.terminal("B", 70 - 20j)
    twin.tee("T")
    twin.coax("a", 0.2, 50, 3)
    twin.join("radio:1", "T:1", "T:2", "a:1", "a:2", "A:1", "T:3", "B:1")
    twin.check()


def test_branch_line_ring_made_of_coax():
    twin = Twin()
    twin.terminal("radio")
    for name, z in zip("ABC", (50, 60 + 10j, 40), strict=True):
        twin.terminal(name, z)
    quarter_m = 0.695 * C_M_PER_S / CENTRE_HZ / 4
    for n in range(1, 5):
        twin.tee(f"T{n}")
    for a, b, z in ((1, 2, 35), (4, 3, 35), (1, 4, 50), (2, 3, 50)):
        twin.coax(f"ring {a}{b}", quarter_m, z, 3.2, 0.004)
    twin.join("T1:2", "ring 12:1", "ring 12:2", "T2:2", "T2:3", "ring 23:1", "ring 23:2", "T3:2")
    twin.join("T3:3", "ring 43:2", "ring 43:1", "T4:2", "T4:3", "ring 14:2", "ring 14:1", "T1:3")
    twin.join("radio:1", "T1:1", "T2:1", "A:1", "T3:1", "B:1", "T4:1", "C:1")
    twin.check()


@pytest.mark.parametrize("make", [branch_line, rat_race])
def test_hybrids_are_their_circuits(make):
    twin = Twin()
    twin.terminal("radio")
    for name, z in zip("ABC", (50, 30 + 30j, 75), strict=True):
        twin.terminal(name, z)
    twin.splitter("hybrid", make(twin), make.__name__, centre_hz=CENTRE_HZ)
    twin.join("radio:1", "hybrid:1", "hybrid:2", "A:1", "hybrid:3", "B:1", "hybrid:4", "C:1")
    twin.check()


@pytest.mark.parametrize("outputs", [2, 3, 5])
@pytest.mark.parametrize("make", [wilkinson, resistive])
def test_dividers_are_their_circuits(make, outputs):
    twin = Twin()
    twin.terminal("radio")
    fields = {} if make is resistive else {"centre_hz": CENTRE_HZ}
    twin.splitter("divider", make(twin, outputs), make.__name__, outputs=outputs, **fields)
    twin.join("radio:1", "divider:1")
    for n in range(outputs):
        twin.terminal(f"A{n}", 50 + 10 * n)
        twin.coax(f"leg {n}", 0.1 + 0.02 * n, 50, 3)
        twin.join(f"divider:{n + 2}", f"leg {n}:1", f"leg {n}:2", f"A{n}:1")
    twin.check()


def test_two_dividers_back_to_back_are_a_ring():
    twin = Twin()
    twin.terminal("radio")
    twin.terminal("A", 42 + 11j)
    for name in ("first", "second"):
        twin.splitter(name, wilkinson(twin, 2), "wilkinson", centre_hz=CENTRE_HZ)
    twin.coax("upper", 0.21, 50, 3)
    twin.coax("lower", 0.29, 75, 3)
    twin.join("radio:1", "first:1", "first:2", "upper:1", "upper:2", "second:3")
    twin.join("first:3", "lower:1", "lower:2", "second:2", "second:1", "A:1")
    twin.check()


def test_measured_parts_that_are_not_reciprocal():
    grid = np.linspace(START_HZ, STOP_HZ, POINTS)
    twin = Twin()
    twin.terminal("radio")
    twin.terminal("A", 55 - 15j)
    twin.terminal("B", 35 + 5j)
    twin.measured("circulator", touchstone(grid, passive_s(3, 3, POINTS, 0.95, symmetric=False), [50, 75, 12.5]))
    twin.measured("isolator", touchstone(grid, passive_s(5, 2, POINTS, 0.9, symmetric=False), [75, 50]))
    twin.measured("ferrite", touchstone(grid, passive_s(7, 2, POINTS, 0.9, symmetric=False), [50, 50]))
    twin.coax("tie", 0.4, 75, 4)
    for name in ("T1", "T2"):
        twin.tee(name)
    # The last one stands turned in a ring.
    twin.join("radio:1", "isolator:1", "isolator:2", "T1:1", "T2:1", "A:1", "circulator:3", "B:1")
    twin.join("T1:2", "ferrite:2", "ferrite:1", "circulator:1", "circulator:2", "T2:2")
    twin.join("T1:3", "tie:1", "tie:2", "T2:3")
    twin.check()
