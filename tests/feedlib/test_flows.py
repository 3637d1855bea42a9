"""Batch axes: many builds in one evaluation are the same as each of them alone, rings included."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest

from feedlib import Plan, solve
from feedlib.answer import Solved
from feedlib.compiler import compile_plan
from feedlib.flows import LineValues, drive, line_values, network_of
from feedlib.harness import harness_s
from feedlib.parts import Antenna, AntennaImpedance, Coax, Pad, Radio, Splitter, Tee
from feedlib.plan import Band, Cable, Join, Placed, Port

FREQUENCY_HZ = np.array([100e6, 140e6, 171e6])


def tree() -> Plan:
    """Two antennas on unequal legs, with a pad."""
    return _plan(
        [("T", Tee()), ("leg A", _coax(0.41)), ("leg B", _coax(0.77)), ("pad", Pad(loss_db=1.5))],
        [
            ("radio:1", "T:1"),
            ("T:2", "leg A:1"),
            ("T:3", "pad:1"),
            ("pad:2", "leg B:1"),
            ("leg A:2", "A:1"),
            ("leg B:2", "B:1"),
        ],
    )


def ring() -> Plan:
    """A ring of coax with a hybrid behind it."""
    return _plan(
        [
            ("T", Tee()),
            ("U", Tee()),
            ("leg A", _coax(0.41)),
            ("leg B", _coax(0.77)),
            ("hybrid", Splitter(form="branch_line", centre_hz=140e6)),
        ],
        [
            ("radio:1", "T:1"), ("T:2", "leg A:1"), ("T:3", "leg B:1"), ("leg A:2", "U:2"), ("leg B:2", "U:3"),
            ("U:1", "hybrid:1"), ("hybrid:2", "A:1"), ("hybrid:3", "B:1"),
        ],
    )  # fmt: skip


def _coax(length_m: float) -> Coax:
    return Coax(cable="C", length_m=length_m)


def _plan(parts: list, joins: list[tuple[str, str]]) -> Plan:  # type: ignore[type-arg]
    ends = [("A", 40 - 8j), ("B", 65 + 20j)]
    antennas = [(name, Antenna(impedance=AntennaImpedance(fixed_ohm=z))) for name, z in ends]
    ties: tuple[Join, ...] = tuple(
        tuple(Port(p, int(n)) for p, n in (end.rsplit(":") for end in join))
        for join in joins  # type: ignore[misc]
    )
    return Plan(
        band=Band(start_hz=100e6, stop_hz=171e6, points=3),
        cables={"C": Cable(z0_ohm=75.0, velocity_factor=0.8, skin_db_per_100m=2.0, dielectric_db_per_100m=0.01)},
        parts=tuple(Placed(name, part) for name, part in [("radio", Radio(impedance_ohm=48 + 3j)), *parts, *antennas]),
        joins=ties,
    )


@pytest.mark.parametrize("plan", [tree(), ring()], ids=["tree", "ring"])
def test_a_batch_of_lengths_is_each_length_alone(plan: Plan) -> None:
    topology = compile_plan(plan)
    base = line_values(plan, topology)
    factor = np.array([[1.0, 0.9, 1.3], [0.5, 1.07, 2.0]])  # batch axes (2, 3)
    many = LineValues(
        np.broadcast_to(base.z0_ohm, (2, 3, base.z0_ohm.size)),
        base.delay_s * factor[..., None],
        base.skin_np * factor[..., None],
        base.dielectric_np * factor[..., None],
        np.broadcast_to(base.flat_np, (2, 3, base.flat_np.size)),
        base.row,
    )
    radio = plan.parts[0].part
    assert isinstance(radio, Radio)
    network = network_of(plan, topology, many, FREQUENCY_HZ)
    solved = Solved(plan, topology, many, FREQUENCY_HZ, radio, drive(network, radio), network)
    terminals = solved.terminals
    s = harness_s(network, terminals)
    assert solved.return_loss_db.shape == (2, 3, 3)
    for at in np.ndindex(2, 3):
        parts = tuple(
            replace(p, part=replace(p.part, length_m=p.part.length_m * factor[at])) if isinstance(p.part, Coax) else p
            for p in plan.parts
        )
        alone_plan = replace(plan, parts=parts)
        alone_network = network_of(alone_plan, topology, line_values(alone_plan, topology), FREQUENCY_HZ)
        alone = Solved(
            alone_plan, topology, line_values(alone_plan, topology), FREQUENCY_HZ, radio,
            drive(alone_network, radio), alone_network,
        )  # fmt: skip
        for name in ("antenna_current_a", "antenna_voltage_v", "antenna_share", "return_loss_db", "reflected_share",
                     "amplitude_balance_db", "phase_balance_deg", "harness_loss_db"):  # fmt: skip
            np.testing.assert_allclose(getattr(solved, name)[at], getattr(alone, name), rtol=1e-11, atol=1e-13)
        for port, z_ohm in solved.port_impedance.items():
            np.testing.assert_allclose(z_ohm[at], alone.port_impedance[port], rtol=1e-10)
        for part, lost in solved.part_loss.items():
            np.testing.assert_allclose(lost[at], alone.part_loss[part], atol=1e-13)
        np.testing.assert_allclose(s[at], harness_s(alone_network, terminals), atol=1e-12)


def test_frequency_slices_change_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    plan = replace(tree(), band=Band(start_hz=100e6, stop_hz=171e6, points=301))
    whole = solve(plan)
    monkeypatch.setattr("feedlib.flows.SLICE_BYTES", 1.0)
    sliced = solve(plan)
    np.testing.assert_array_equal(whole.antenna_current_a, sliced.antenna_current_a)
    np.testing.assert_allclose(whole.harness_s, sliced.harness_s, atol=1e-14)


def test_a_long_chain_of_other_impedances_keeps_its_digits() -> None:
    """200 quarter waves of 10 and 200 ohm in turn: A = 1/D = (10/200)^100, so S21 = 2/(A + D) in the references."""
    sections = [Placed(f"coax {n}", Coax(cable="low" if n % 2 == 0 else "high", length_m=0.75)) for n in range(200)]
    names = ["radio", *(p.id for p in sections), "A"]
    joins = tuple((Port(a, 1 if a == "radio" else 2), Port(b, 1)) for a, b in pairwise(names))
    plan = Plan(
        band=Band(start_hz=99_930_819.33, stop_hz=99_930_819.33, points=1),  # c / 3 m: 0.75 m are a quarter wave
        cables={"low": Cable(z0_ohm=10.0, velocity_factor=1.0), "high": Cable(z0_ohm=200.0, velocity_factor=1.0)},
        parts=(
            Placed("radio", Radio()),
            *sections,
            Placed("A", Antenna(impedance=AntennaImpedance(fixed_ohm=50 + 0j))),
        ),
        joins=joins,
    )
    s = solve(plan).harness_s[0]
    assert abs(s[1, 0]) == pytest.approx(2 / (20.0**100 + 20.0**-100), rel=1e-6)
    assert abs(s[0, 1]) == pytest.approx(abs(s[1, 0]), rel=1e-9)
    assert abs(s[0, 0]) == pytest.approx(1, abs=1e-12)
