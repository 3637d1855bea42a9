"""The answer: the contract's figures, each worked out when it is first asked for, from the flows.

All solved frequencies (grid, mark, band edges, channels) go through one evaluation; `Figures` is a view of some of
them. Arrays are read-only.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np

from feedlib.conventions import Array, ComplexArray, Index
from feedlib.flows import Flows, Network, standing_wave
from feedlib.harness import MAX_BYTES, harness_s
from feedlib.parts import Antenna, Radio
from feedlib.parts.base import Lines
from feedlib.plan import Plan, Port, read_port


class PerKey(Mapping[str, Any]):
    """A read-only mapping whose values are made when asked for."""

    def __init__(self, keys: tuple[str, ...], make: Callable[[str], Any]) -> None:
        self._keys, self._make = dict.fromkeys(keys), make

    def __getitem__(self, key: str) -> Any:
        if key not in self._keys:
            raise KeyError(key)
        return self._make(key)

    def __iter__(self) -> Iterator[str]:
        return iter(self._keys)

    def __len__(self) -> int:
        return len(self._keys)


@dataclass(frozen=True, slots=True)
class Verdict:
    """One limit judged over the band: the worst figure, where it is, and whether the limit holds."""

    limit: str
    wanted: float
    worst: float
    frequency_hz: float
    holds: bool


class Figures:
    """The figures at some of the solved frequencies (F of them); frequency is the first axis, as in the contract."""

    def __init__(self, solved: Solved, part: slice) -> None:
        self._solved, self._part = solved, part

    @property
    def frequency_hz(self) -> Array:
        """(F,)"""
        return self._solved.network.frequency_hz[self._part]

    @property
    def antenna_ids(self) -> tuple[str, ...]:
        """The antennas in plan order (N)."""
        return self._solved.antenna_ids

    @property
    def antenna_current_a(self) -> ComplexArray:
        """(F, N) current into each antenna, rms."""
        return self._solved.antenna_current_a[..., self._part].T

    @property
    def antenna_voltage_v(self) -> ComplexArray:
        """(F, N) voltage at each antenna's port, rms."""
        return self._solved.antenna_voltage_v[..., self._part].T

    @property
    def antenna_share(self) -> Array:
        """(F, N) delivered over available power."""
        return self._solved.antenna_share[..., self._part].T

    @property
    def return_loss_db(self) -> Array:
        """(F,) at the radio: -20 log10 |(Z - Zs*)/(Z + Zs)|."""
        return self._solved.return_loss_db[..., self._part]

    @property
    def reflected_share(self) -> Array:
        """(F,) the share of the available power that does not enter the harness."""
        return self._solved.reflected_share[..., self._part]

    @property
    def amplitude_balance_db(self) -> Array:
        """(F,) largest less smallest of 20 log10(|I| / target amplitude)."""
        return self._solved.amplitude_balance_db[..., self._part]

    @property
    def phase_balance_deg(self) -> Array:
        """(F,) smallest arc that holds every arg(I) - target phase."""
        return self._solved.phase_balance_deg[..., self._part]

    @property
    def harness_loss_db(self) -> Array:
        """(F,) -10 log10(sum delivered / (available - reflected))."""
        return self._solved.harness_loss_db[..., self._part]

    @property
    def part_loss_share(self) -> Mapping[str, Array]:
        """(F,) by part id, the radio and the antennas left out."""
        losses = self._solved.part_loss
        return PerKey(tuple(losses), lambda key: losses[key][..., self._part])

    @property
    def port_impedance_ohm(self) -> Mapping[str, ComplexArray]:
        """(F,) by port: V/I from near to far; inf where I = 0, nan where the radio does not reach."""
        return PerKey(self._solved.ports, lambda key: self._solved.impedance(read_port(key), self._part))

    @property
    def harness_ports(self) -> tuple[str, ...]:
        """The ports of `harness_s` (P)."""
        return self._solved.harness_ports

    @cached_property
    def harness_s(self) -> ComplexArray:
        """(F, P, P) with every antenna and the radio taken off, at the plan's reference."""
        return _frozen(self._solved.harness_s(self._part).transpose(2, 0, 1))

    @property
    def isolation_db(self) -> Array:
        """(F,) smallest -20 log10 |S_ij| over pairs of antennas."""
        return self._solved.isolation_db[..., self._part]

    def voltage_v(self, port: str) -> ComplexArray:
        """(F,) voltage at a port; 0 where the radio does not reach."""
        return self._solved.at_port(read_port(port))[0][..., self._part]

    def current_a(self, port: str) -> ComplexArray:
        """(F,) current into the part at a port."""
        return self._solved.at_port(read_port(port))[1][..., self._part]


class Answer(Figures):
    """The figures over the grid, at the mark and at the channels, and the verdicts."""

    def __init__(self, solved: Solved, points: int, channels: tuple[str, ...]) -> None:
        super().__init__(solved, slice(0, points))
        self.plan: Plan = solved.network.plan
        self.mark = Figures(solved, slice(points, points + 1))
        start = points + 3
        self.channels: Mapping[str, Figures] = {
            name: Figures(solved, slice(start + n, start + n + 1)) for n, name in enumerate(channels)
        }

    @cached_property
    def verdicts(self) -> tuple[Verdict, ...]:
        """Every limit that the plan sets, over the grid points inside the band, its edges and every channel."""
        solved, limits = self._solved, self.plan.limits
        band = self.plan.band
        f = solved.network.frequency_hz
        points = self.frequency_hz.size
        inside = np.flatnonzero((f[:points] >= band.start_hz) & (f[:points] <= band.stop_hz))
        judged = np.concatenate([inside, np.arange(points + 1, f.size)])
        found = []
        for limit, at_least in JUDGED.items():
            wanted = getattr(limits, limit)
            if wanted is None:
                continue
            figure = getattr(solved, limit)[judged]
            worst = int(np.argmin(figure) if at_least else np.argmax(figure))  # nan counts as the worst
            value = float(figure[worst])
            holds = value >= wanted if at_least else value <= wanted
            found.append(Verdict(limit, wanted, value, float(f[judged[worst]]), bool(holds)))
        return tuple(found)

    @property
    def holds(self) -> bool:
        """Whether every limit holds."""
        return all(v.holds for v in self.verdicts)

    def swell(self, part_id: str, points: int = 33) -> tuple[Array, ComplexArray, complex] | None:
        """The standing wave on a coax at the mark, from port 1 to port 2 of the cable itself.

        (x from 0 to 1, V(x), forward wave's voltage at its entry); None where the radio does not reach. The entry
        is the side nearer the radio.
        """
        return self._solved.swell(part_id, self.frequency_hz.size, points)


JUDGED: dict[str, bool] = {
    "return_loss_db": True,
    "amplitude_balance_db": False,
    "phase_balance_deg": False,
    "harness_loss_db": False,
    "isolation_db": True,
}
"""The limits that this version judges: True = at least, False = at most."""


class Solved:
    """Flows and the figures made of them, frequency last; the one place where figures are worked out."""

    def __init__(self, network: Network, flows: Flows, radio: Radio) -> None:
        self.network, self.flows, self.radio = network, flows, radio
        plan, topology = network.plan, network.topology
        self.ports = tuple(map(str, topology.port_row))
        self.antennas = [(n, p) for n, p in enumerate(plan.parts) if isinstance(p.part, Antenna)]
        self.antenna_ids = tuple(p.id for _, p in self.antennas)
        self.terminals = [topology.roots[0][1], *(n for n, _ in self.antennas)]
        self.harness_ports = tuple(f"{plan.parts[n].id}:1" for n in self.terminals)
        rows = topology.part_start[[n for n, _ in self.antennas]]
        self._antenna_edge: Index = topology.port_edge[rows]
        self._antenna_sign = topology.port_sign[rows][:, None]

    @cached_property
    def antenna_current_a(self) -> ComplexArray:
        return _frozen(self.flows.i[..., self._antenna_edge, :] * self._antenna_sign)

    @cached_property
    def antenna_voltage_v(self) -> ComplexArray:
        return _frozen(self.flows.v[..., self._antenna_edge, :])

    @cached_property
    def antenna_share(self) -> Array:
        v, i = self.antenna_voltage_v, self.antenna_current_a
        return _frozen((v.real * i.real + v.imag * i.imag) / self.radio.power_w)

    @cached_property
    def _reflection(self) -> Array:
        edge = self.network.topology.roots[0][0]
        v, i, zs = (
            self.flows.state_v[..., edge, :],
            self.flows.state_i[..., edge, :],
            self.radio.impedance_ohm,
        )
        return np.abs((v - zs.conjugate() * i) / (v + zs * i))

    @cached_property
    def return_loss_db(self) -> Array:
        with np.errstate(divide="ignore"):
            return _frozen(-20 * np.log10(self._reflection) + 0.0)

    @cached_property
    def reflected_share(self) -> Array:
        return _frozen(self._reflection**2)

    @cached_property
    def amplitude_balance_db(self) -> Array:
        if not self.antennas:
            return _frozen(np.zeros(self._reflection.shape))
        wanted = np.array([p.part.target.amplitude for _, p in self.antennas])[:, None]  # type: ignore[attr-defined]
        size = np.abs(self.antenna_current_a) / wanted
        with np.errstate(divide="ignore", invalid="ignore"):
            spread = 20 * np.log10(size.max(axis=-2) / size.min(axis=-2))
        return _frozen(np.where(size.min(axis=-2) == 0, np.inf, spread))

    @cached_property
    def phase_error_deg(self) -> Array:
        """(N, F) arg(I) - target phase, in 0 to 360; nan where I = 0."""
        wanted = np.array([p.part.target.phase_deg for _, p in self.antennas]).reshape(-1, 1)  # type: ignore[attr-defined]
        current = self.antenna_current_a
        return np.where(current == 0, np.nan, np.mod(np.degrees(np.angle(current)) - wanted, 360.0))

    @cached_property
    def phase_balance_deg(self) -> Array:
        return _frozen(smallest_arc_deg(self.phase_error_deg))

    @cached_property
    def harness_loss_db(self) -> Array:
        with np.errstate(divide="ignore", invalid="ignore"):
            return _frozen(-10 * np.log10(self.antenna_share.sum(axis=-2) / (1 - self.reflected_share)) + 0.0)

    @cached_property
    def part_loss(self) -> dict[str, Array]:
        """(F,) by part id: what flows in less what flows out, over the available power."""
        topology, plan = self.network.topology, self.network.plan
        v, i = self.flows.v, self.flows.i
        power = (v.real * i.real + v.imag * i.imag) / self.radio.power_w
        into = power[..., topology.port_edge, :] * topology.port_sign[:, None]
        lost = _frozen(np.add.reduceat(into, topology.part_start, axis=-2))
        return {p.id: lost[..., n, :] for n, p in enumerate(plan.parts) if not isinstance(p.part, Radio | Antenna)}

    def at_port(self, port: Port) -> tuple[ComplexArray, ComplexArray]:
        """Voltage, and current into the part, each (F,)."""
        topology = self.network.topology
        row = topology.port_row[port]
        edge = topology.port_edge[row]
        return self.flows.v[..., edge, :], self.flows.i[..., edge, :] * topology.port_sign[row]

    def impedance(self, port: Port, part: slice) -> ComplexArray:
        """V/I from near to far at some of the frequencies; from the state where there is one, which no loss drowns."""
        topology = self.network.topology
        row = topology.port_row[port]
        far, edge = topology.far[row], topology.port_edge[row]
        v = self.flows.v[..., edge, part]
        if far == 0:
            return _frozen(np.full(v.shape, complex(np.nan, np.nan)))
        if edge < topology.cascaded:
            v, i = self.flows.state_v[..., edge, part], self.flows.state_i[..., edge, part]
        else:
            i = self.flows.i[..., edge, part] * far
        with np.errstate(divide="ignore", invalid="ignore"):
            return _frozen(np.where(i == 0, complex(np.inf, 0), v / i))

    def harness_s(self, part: slice) -> ComplexArray:
        """(P, P, F) at some of the frequencies."""
        return harness_s(self.network.at(part), self.terminals)

    @cached_property
    def isolation_db(self) -> Array:
        """In slices of frequency, so that no harness is too large to be judged."""
        count, total = len(self.antennas), self.network.frequency_hz.size
        if count < 2:
            return _frozen(np.full(total, np.inf))
        step = max(1, int(MAX_BYTES / 8 / (16 * (count + 1) ** 2)))
        apart = ~np.eye(count, dtype=bool)
        loudest = [np.abs(self.harness_s(slice(n, n + step))[1:, 1:])[apart].max(axis=0) for n in range(0, total, step)]
        with np.errstate(divide="ignore"):
            return _frozen(-20 * np.log10(np.concatenate(loudest)) + 0.0)

    def swell(self, part_id: str, at: int, points: int) -> tuple[Array, ComplexArray, complex] | None:
        topology, plan = self.network.topology, self.network.plan
        index = next(n for n, p in enumerate(plan.parts) if p.id == part_id)
        part = plan.parts[index].part
        assert isinstance(part, Lines)
        number = getattr(part, "main_line", 0)
        planes = topology.line_planes.get((index, number))
        row = topology.part_start[index]
        if planes is None or topology.far[row] == 0:
            return None
        cable = getattr(part, "cable", None)
        line = part.lines(None if cable is None else plan.cables[cable])[number]
        (edge_1, sign_1), (edge_2, sign_2) = planes
        v, i = self.flows.v[..., at], self.flows.i[..., at]
        first = v[..., edge_1], sign_1 * i[..., edge_1]
        second = v[..., edge_2], sign_2 * i[..., edge_2]
        f = float(self.network.frequency_hz[at])
        # The current runs from near to far; where it runs into port 1, port 1 is the entry.
        if topology.port_sign[row] == topology.far[row]:
            return standing_wave(first, (second[0], -second[1]), line, f, points)
        x, along, forward = standing_wave(second, (first[0], -first[1]), line, f, points)
        return x, along[::-1], forward


def smallest_arc_deg(angle_deg: Array) -> Array:
    """(F,) smallest arc that holds all angles (N, F) in 0 to 360; nan are left out; 0 for fewer than two."""
    if angle_deg.shape[-2] < 2:
        return np.zeros((*angle_deg.shape[:-2], angle_deg.shape[-1]))
    ordered = np.sort(angle_deg, axis=-2)  # nan last
    first = ordered[..., :1, :]
    ordered = np.where(np.isnan(ordered), first, ordered) if np.isnan(ordered).any() else ordered
    # A left-out angle now repeats the first one; sorted again it opens no gap.
    ordered = np.sort(ordered, axis=-2)
    gaps = np.diff(ordered, axis=-2, append=ordered[..., :1, :] + 360.0)
    return np.nan_to_num(360.0 - gaps.max(axis=-2))


def _frozen(array: Any) -> Any:
    array.flags.writeable = False
    return array
