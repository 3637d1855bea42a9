"""The solver against scikit-rf's Circuit, after one length has changed, and with 1,024 antennas."""

from __future__ import annotations

import warnings
from dataclasses import replace

import numpy as np

from app.editing.edits import turned_length
from feedlib import Answer, Plan, solve
from feedlib.compiler import compile_plan
from feedlib.parts import Coax, Tee
from tests.benchmarks.timing import interleaved, line
from tests.benchmarks.trees import tree


def everything(answer: Answer, *, with_s: bool = True) -> None:
    """Ask for each figure of the contract, over the band and at the mark."""
    for figures in (answer, answer.mark):
        _ = figures.antenna_current_a, figures.antenna_voltage_v, figures.antenna_share, figures.return_loss_db
        _ = figures.amplitude_balance_db, figures.phase_balance_deg, figures.harness_loss_db, figures.reflected_share
        _ = list(figures.port_impedance_ohm.values()), list(figures.part_loss_share.values())
        if with_s:
            _ = figures.harness_s
    _ = answer.verdicts


def shown(answer: Answer) -> None:
    """Ask for what the window shows: verdicts, plots' curves, dials, flags, swells."""
    _ = answer.verdicts, answer.return_loss_db, answer.antenna_current_a, answer.impedance_ohm("radio:1")
    mark = answer.mark
    _ = mark.antenna_share, mark.antenna_current_a, mark.port_impedance_ohm
    for placed in answer.plan.parts:
        if isinstance(placed.part, Coax):
            answer.swell(placed.id)


class OtherEngine:
    """The same tree in scikit-rf: lines made by a medium, tied by Circuit; each T is one node."""

    def __init__(self, plan: Plan) -> None:
        import skrf
        from skrf.circuit import Circuit

        self.plan, self.circuit = plan, Circuit
        self.frequency = skrf.Frequency.from_f(plan.grid_hz(), unit="hz")
        self.connections = self._connections(self._networks())

    def circuit_alone(self) -> np.ndarray:
        """Circuit from finished networks to the external S."""
        return self.circuit(self.connections).s_external

    def whole(self) -> np.ndarray:
        """Lines evaluated, Circuit made and solved."""
        return self.circuit(self._connections(self._networks())).s_external

    def _networks(self) -> dict[str, object]:
        from skrf.media import DefinedGammaZ0

        found: dict[str, object] = {}
        f = self.frequency.f
        for placed in self.plan.parts:
            if isinstance(placed.part, Coax):
                cable = self.plan.cables[placed.part.cable]
                loss_db = cable.skin_db_per_100m * np.sqrt(f / 1e6) + cable.dielectric_db_per_100m * f / 1e6
                gamma = loss_db / 100 * np.log(10) / 20 + 2j * np.pi * f / (cable.velocity_factor * 299_792_458)
                made = DefinedGammaZ0(self.frequency, z0=cable.z0_ohm, gamma=gamma)
                network = made.line(placed.part.length_m, "m", name=placed.id)
                network.renormalize(50)
                found[placed.id] = network
        return found

    def _connections(self, networks: dict[str, object]) -> list[list[tuple[object, int]]]:
        kinds = {p.id: p.part for p in self.plan.parts}
        nodes: dict[str, list[tuple[object, int]]] = {}
        plain = []

        def end(part: str, number: int) -> tuple[object, int]:
            if part in networks:
                return networks[part], number - 1
            return self.circuit.Port(self.frequency, part, z0=50), 0

        for join in self.plan.joins:
            tees = [p.part for p in join if isinstance(kinds[p.part], Tee)]
            ends = [end(*p) for p in join if not isinstance(kinds[p.part], Tee)]
            if tees:
                nodes.setdefault(tees[0], []).extend(ends)
            else:
                plain.append(ends)
        return [*plain, *nodes.values()]


def run() -> None:
    """Print the ratios."""
    warnings.simplefilter("ignore")
    print("Solver (medians of one interleaved run; four antennas, two levels, 401 points)")
    plan, other = tree(4), OtherEngine(tree(4))
    s = solve(plan).harness_s
    assert np.abs(np.sort(np.abs(s[0].ravel())) - np.sort(np.abs(other.whole()[0].ravel()))).max() < 1e-9
    topology = compile_plan(plan)
    coax = next(p.id for p in plan.parts if p.id != "radio" and isinstance(p.part, Coax))
    turned = [turned_length(plan, [coax], n * 0.0005) for n in (1, 2)]
    times = interleaved(
        {
            "ours": lambda: everything(solve(plan)),
            "without s": lambda: everything(solve(plan), with_s=False),
            "turned": lambda: shown(solve(turned[0], topology)),
            "theirs": other.whole,
            "circuit": other.circuit_alone,
        },
        40,
    )
    m = {name: float(np.median(t)) for name, t in times.items()}
    print(f"  whole answer {1e3 * m['ours']:.2f} ms, without harness_s {1e3 * m['without s']:.2f} ms")
    print(f"  scikit-rf: lines and Circuit {1e3 * m['theirs']:.1f} ms, of it Circuit {1e3 * m['circuit']:.1f} ms")
    line("lines and Circuit / whole answer", m["theirs"] / m["ours"], "wanted: at least 30")
    line("lines and Circuit / answer without harness_s", m["theirs"] / m["without s"], "wanted: at least 45")
    line("Circuit from finished lines / whole answer", m["circuit"] / m["ours"], "for information")
    line("what the window shows after a turned length / whole answer", m["turned"] / m["ours"], "wanted: at most 0.4")
    large = replace(tree(1024), title="")
    times = interleaved(
        {
            "small": lambda: everything(solve(plan), with_s=False),
            "large": lambda: everything(solve(large), with_s=False),
        },
        8,
    )
    per_part = float(np.median(times["large"])) / len(large.parts)
    per_part /= float(np.median(times["small"])) / len(plan.parts)
    line("1,024 antennas, cost per part / the same at 4 antennas", per_part, "wanted: at most 1.5")
