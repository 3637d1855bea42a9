"""The answer: the contract's figures, each worked out when it is first asked for, from the flows.

All solved frequencies (grid, mark, band edges, channels) go through one evaluation; `Figures` is a view of some of
them. Arrays are read-only.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property
from types import MappingProxyType
from typing import Any, TypeVar

import numpy as np

from feedlib.arcs import smallest_arc_deg
from feedlib.conventions import Array, ComplexArray, Index
from feedlib.flows import Flows, LineValues, Network, network_of
from feedlib.harness import MAX_BYTES, bytes_of, harness_s
from feedlib.impedances import all_impedances, impedance_at
from feedlib.parts import Antenna, Radio
from feedlib.plan import Plan
from feedlib.swells import Swell, sections_of, swells_of
from feedlib.topology import Topology


@dataclass(frozen=True, slots=True)
class Verdict:
    """One limit judged over the band: the worst figure, where it is, and whether the limit holds."""

    limit: str
    wanted: float
    worst: float
    frequency_hz: float
    holds: bool


Frozen = TypeVar("Frozen", bound=np.ndarray[Any, Any])


class Figures:
    """The figures at some of the solved frequencies (F of them); frequency is the first axis, as in the contract."""

    def __init__(self, solved: Solved, part: slice) -> None:
        self._solved, self._part = solved, part

    @property
    def frequency_hz(self) -> Array:
        """(F,)"""
        return self._solved.frequency_hz[self._part]

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

    @cached_property
    def part_loss_share(self) -> Mapping[str, Array]:
        """(F,) by part id, the radio and the antennas left out."""
        return MappingProxyType({key: lost[..., self._part] for key, lost in self._solved.part_loss.items()})

    @cached_property
    def port_impedance_ohm(self) -> Mapping[str, ComplexArray]:
        """(F,) by port: V/I from near to far; inf where I = 0, nan where the radio does not reach."""
        solved = self._solved
        if self.frequency_hz.size == 1 and "port_impedance" not in solved.__dict__:
            return MappingProxyType(all_impedances(solved.topology, solved.flows, self._part))
        return MappingProxyType({key: z[..., self._part] for key, z in solved.port_impedance.items()})

    def impedance_ohm(self, port: str) -> ComplexArray:
        """(F,) one entry of `port_impedance_ohm`, without working out the others."""
        return impedance_at(self._solved.topology, self._solved.flows, port, self._part)

    @property
    def harness_ports(self) -> tuple[str, ...]:
        """The ports of `harness_s` (P)."""
        return self._solved.harness_ports

    @property
    def harness_s(self) -> ComplexArray:
        """(F, P, P) with every antenna and the radio taken off, at the plan's reference."""
        return self._solved.harness_s_at(self._part).transpose(2, 0, 1)

    @property
    def isolation_db(self) -> Array:
        """(F,) smallest -20 log10 |S_ij| over pairs of antennas."""
        return self._solved.isolation_db[..., self._part]

    def voltage_v(self, port: str) -> ComplexArray:
        """(F,) voltage at a port; 0 where the radio does not reach."""
        return self._solved.at_port(port)[0][..., self._part]

    def current_a(self, port: str) -> ComplexArray:
        """(F,) current into the part at a port."""
        return self._solved.at_port(port)[1][..., self._part]


class Answer(Figures):
    """The figures over the grid, at the mark and at the channels, and the verdicts."""

    def __init__(self, solved: Solved, points: int, channels: tuple[str, ...]) -> None:
        super().__init__(solved, slice(0, points))
        self.plan: Plan = solved.plan
        start = points + 2
        self.channels: Mapping[str, Figures] = {
            name: Figures(solved, slice(start + n, start + n + 1)) for n, name in enumerate(channels)
        }
        start += len(channels)
        self.mark = Figures(solved, slice(start, start + 1))

    @cached_property
    def verdicts(self) -> tuple[Verdict, ...]:
        """Every limit that the plan sets, over the grid points inside the band, its edges and every channel."""
        solved, limits, band = self._solved, self.plan.limits, self.plan.band
        f, points = solved.frequency_hz, self.frequency_hz.size
        judged: slice | Index = slice(0, f.size - 1)  # the mark alone, which stands last, is not judged
        if self.plan.sweep is not None:
            grid = (f[:points] >= band.start_hz) & (f[:points] <= band.stop_hz)
            judged = np.concatenate([np.flatnonzero(grid), np.arange(points, f.size - 1)])
            f = f[judged]
        found = []
        for limit, at_least in JUDGED.items():
            wanted = getattr(limits, limit)
            if wanted is None:
                continue
            figure = getattr(solved, limit)[judged]
            worst = int(np.argmin(figure) if at_least else np.argmax(figure))  # nan counts as the worst
            value = float(figure[worst])
            holds = value >= wanted if at_least else value <= wanted
            found.append(Verdict(limit, wanted, value, float(f[worst]), bool(holds)))
        return tuple(found)

    @property
    def holds(self) -> bool:
        """Whether every limit holds."""
        return all(v.holds for v in self.verdicts)

    def swell(self, part_id: str, points: int = 33) -> Swell | None:
        """The standing wave on a coax at the mark: (x from 0 to 1, V(x), forward wave's voltage at its entry).

        From port 1 to port 2 of the cable itself; the entry is the side nearer the radio. None where the radio does
        not reach.
        """
        return self._solved.swells(points).get(part_id)


TINY = 1e-280
"""Squares below this lose digits."""

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

    def __init__(
        self,
        plan: Plan,
        topology: Topology,
        values: LineValues,
        frequency_hz: Array,
        radio: Radio,
        flows: Flows,
        network: Network | None,
    ) -> None:
        self.plan, self.topology, self.values = plan, topology, values
        self.frequency_hz, self.radio, self.flows, self._network = frequency_hz, radio, flows, network
        self._swells: dict[int, dict[str, Swell]] = {}
        self.antennas = [(n, p.id, p.part) for n, p in enumerate(plan.parts) if isinstance(p.part, Antenna)]
        self.antenna_ids = tuple(part_id for _, part_id, _ in self.antennas)
        planes = [topology.planes[n][0] for n, *_ in self.antennas]
        self._antenna_edge = [edge for edge, _ in planes]
        self._antenna_sign = np.array([sign for _, sign in planes], float).reshape(-1, 1)

    @property
    def terminals(self) -> list[int]:
        """Part indices of the radio and the antennas."""
        return [self.topology.roots[0][1], *(n for n, *_ in self.antennas)]

    @property
    def harness_ports(self) -> tuple[str, ...]:
        return tuple(f"{self.plan.parts[n].id}:1" for n in self.terminals)

    @cached_property
    def _at_antennas(self) -> tuple[ComplexArray, ComplexArray, ComplexArray]:
        """(N, F) scale, v and i at the antennas' edges."""
        flows, at = self.flows, self._antenna_edge
        return flows.scale[..., at, :], flows.v[..., at, :], flows.i[..., at, :]

    @cached_property
    def antenna_current_a(self) -> ComplexArray:
        scale, _, i = self._at_antennas
        current = scale * i
        current.view(float)[...] *= self._antenna_sign
        return _frozen(current)

    @cached_property
    def antenna_voltage_v(self) -> ComplexArray:
        scale, v, _ = self._at_antennas
        return _frozen(scale * v)

    @cached_property
    def antenna_share(self) -> Array:
        scale, v, i = self._at_antennas
        share = _real_product(v, i)
        share *= _real_product(scale, scale)
        share *= self._antenna_sign / self.radio.power_w
        return _frozen(share)

    @cached_property
    def _power(self) -> Array:
        """(E + 1, F) power along each edge's current over the available power: |s|^2 Re(v i*)."""
        flows = self.flows
        power = _real_product(flows.v, flows.i)
        power *= _real_product(flows.scale, flows.scale)
        power *= 1 / self.radio.power_w
        return _frozen(power)

    @cached_property
    def reflected_share(self) -> Array:
        edge = self.topology.roots[0][0]
        v, i, zs = self.flows.v[..., edge, :], self.flows.i[..., edge, :], self.radio.impedance_ohm
        back, ahead = v - zs.conjugate() * i, v + zs * i
        return _frozen(_real_product(back, back) / _real_product(ahead, ahead))

    @cached_property
    def return_loss_db(self) -> Array:
        with np.errstate(divide="ignore"):
            return _frozen(-10 * np.log10(self.reflected_share) + 0.0)

    @cached_property
    def amplitude_balance_db(self) -> Array:
        if not self.antennas:
            return _frozen(np.zeros(self.reflected_share.shape))
        wanted = np.array([a.target.amplitude for *_, a in self.antennas])[:, None]
        square = _real_product(self.antenna_current_a, self.antenna_current_a) / wanted**2
        least = square.min(axis=-2)
        if (least > TINY).all():
            return _frozen(10 * np.log10(square.max(axis=-2) / least))
        size = np.abs(self.antenna_current_a) / wanted
        with np.errstate(divide="ignore", invalid="ignore"):
            level = np.log10(size)
            spread = 20 * (level.max(axis=-2) - level.min(axis=-2))
        spread[(size == 0).any(axis=-2)] = np.inf
        return _frozen(spread)

    @cached_property
    def phase_balance_deg(self) -> Array:
        wanted = np.array([a.target.phase_deg for *_, a in self.antennas]).reshape(-1, 1)
        return _frozen(smallest_arc_deg(self.antenna_current_a, wanted))

    @cached_property
    def harness_loss_db(self) -> Array:
        delivered, entered = self.antenna_share.sum(axis=-2), 1 - self.reflected_share
        with np.errstate(divide="ignore", invalid="ignore"):
            loss = -10 * np.log10(delivered / entered) + 0.0
        loss[(delivered <= 0) | (entered <= 0)] = np.inf  # nothing arrives, whatever rounding says
        return _frozen(loss)

    @cached_property
    def part_loss(self) -> dict[str, Array]:
        """(F,) by part id: what flows in less what flows out, over the available power."""
        power = self._rows(self._power)
        found = {}
        for placed, planes in zip(self.plan.parts, self.topology.planes, strict=True):
            if not isinstance(placed.part, Radio | Antenna):
                (edge, sign), *rest = planes
                lost = power[edge] if sign > 0 else -power[edge]
                for edge, sign in rest:
                    lost = lost + power[edge] if sign > 0 else lost - power[edge]
                found[placed.id] = _frozen(np.asarray(lost))
        return found

    @staticmethod
    def _rows(array: Any) -> list[Any]:
        """The rows of (..., R, F), each (..., F)."""
        return list(np.moveaxis(array, -2, 0))

    def at_port(self, port: str) -> tuple[ComplexArray, ComplexArray]:
        """Voltage, and current into the part, each (F,)."""
        edge, sign, _ = self.topology.ports[port]
        scale = self.flows.scale[..., edge, :]
        return scale * self.flows.v[..., edge, :], scale * self.flows.i[..., edge, :] * sign

    @cached_property
    def port_impedance(self) -> dict[str, ComplexArray]:
        """(F,) by port, for all ports."""
        return all_impedances(self.topology, self.flows, slice(None))

    def _network_at(self, part: slice) -> Network:
        return network_of(self.plan, self.topology, self.values, self.frequency_hz[part])

    @cached_property
    def harness_s(self) -> ComplexArray:
        """(P, P, F)"""
        reference = self.plan.reference_ohm
        matched = all(antenna.impedance.fixed_ohm == reference for *_, antenna in self.antennas)
        looks = self.flows.looks if matched else None
        return _frozen(harness_s(self._network or self._network_at(slice(None)), self.terminals, looks))

    def harness_s_at(self, part: slice) -> ComplexArray:
        """(P, P, F) at some frequencies; made for them alone where all would be too much."""
        if bytes_of(len(self.antennas) + 1, self.frequency_hz.size) <= MAX_BYTES:
            return self.harness_s[..., part]
        return _frozen(harness_s(self._network_at(part), self.terminals))

    @cached_property
    def isolation_db(self) -> Array:
        """In slices of frequency where the whole would be too large, so that every harness can be judged."""
        count, total = len(self.antennas), self.frequency_hz.size
        if count < 2:
            return _frozen(np.full(total, np.inf))
        apart = ~np.eye(count, dtype=bool)
        if bytes_of(count + 1, total) <= MAX_BYTES:
            parts: Iterable[ComplexArray] = [self.harness_s]
        else:
            step = max(1, int(MAX_BYTES / 8 / bytes_of(count + 1, 1)))
            parts = (harness_s(self._network_at(slice(n, n + step)), self.terminals) for n in range(0, total, step))
        loudest = np.concatenate([np.abs(s[1:, 1:])[apart].max(axis=0) for s in parts])
        with np.errstate(divide="ignore"):
            return _frozen(-20 * np.log10(loudest) + 0.0)

    def swells(self, points: int) -> dict[str, Swell]:
        """The swells at the mark, by coax."""
        found = self._swells.get(points)
        if found is None:
            at, f = self.frequency_hz.size - 1, float(self.frequency_hz[-1])
            sections = self.topology.kept("sections", lambda: sections_of(self.plan, self.topology))
            found = self._swells[points] = swells_of(sections, self.values, self.flows, at, f, points)
        return found


def _real_product(a: ComplexArray, b: ComplexArray) -> Array:
    """Re(a b*), by real arithmetic."""
    product: Array = a.view(float) * b.view(float)
    found: Array = product[..., 0::2] + product[..., 1::2]
    return found


def _frozen(array: Frozen) -> Frozen:
    array.flags.writeable = False
    return array
