"""Random harnesses: every figure against the oracle's dense equations, conservation laws, and changes without effect.

How figures are compared. Rounding is relative to the largest voltage (or current times 50 ohm) in the network,
`scale_v`, so voltages and currents may differ by TOLERANCE of it, and what is made of them by what that allows.
Draws whose equations have a condition number above WORST_CONDITION are left out: 1e6 x 2e-16 is well below TOLERANCE.
"""

import dataclasses

import numpy as np
import pytest
from hypothesis import Phase, assume, find, given, settings
from hypothesis import strategies as st

from feedlib import solve
from feedlib.parts import Antenna, Measured, Radio
from feedlib.plan import Plan
from tests import oracle
from tests.plans import Sketch, cut, doubled, plain_coaxes, random_plans, touchstone, turned

TOLERANCE = 1e-9
WORST_CONDITION = 1e6

few = settings(max_examples=60, deadline=None)
many = settings(max_examples=120, deadline=None)


def reference(plan: Plan, frequency_hz: np.ndarray) -> oracle.Driven:
    """The oracle's flows; a draw that is too near to a resonance without loss is left out."""
    found = oracle.driven(plan, frequency_hz)
    assume(found.condition < WORST_CONDITION)
    return found


def close(got: np.ndarray, expected: np.ndarray, tolerance: np.ndarray | float = TOLERANCE) -> None:
    """Assert that two arrays of one shape differ by no more than `tolerance` (an array: one value each)."""
    assert got.shape == expected.shape
    off = np.abs(got - expected)
    assert np.all(off <= tolerance), f"off by up to {np.max(off - tolerance)} more than allowed"


def views(plan: Plan) -> list:
    """The answer with its marks and channels: everything that shows figures."""
    answer = solve(plan)
    return [answer, answer.mark, *answer.channels.values()]


@many
@given(random_plans())
def test_flows_at_every_port_are_the_oracles(plan):
    for figures in views(plan):
        expected = reference(plan, figures.frequency_hz)
        for port, voltage_v in expected.voltage_v.items():
            close(figures.voltage_v(str(port)), voltage_v, TOLERANCE * expected.scale_v)
            close(figures.current_a(str(port)), expected.current_a[port], TOLERANCE * expected.scale_v / 50)


@many
@given(random_plans())
def test_antenna_and_power_figures_are_the_oracles(plan):
    for figures in views(plan):
        expected = reference(plan, figures.frequency_hz)
        assert figures.antenna_ids == tuple(p.id for p in expected.antennas)
        scale_v = expected.scale_v[:, None]
        power = expected.scale_v**2 / 50 / expected.radio.part.power_w
        close(figures.antenna_voltage_v, expected.antenna_voltage_v, TOLERANCE * scale_v)
        close(figures.antenna_current_a, expected.antenna_current_a, TOLERANCE * scale_v / 50)
        close(figures.antenna_share, expected.antenna_share, TOLERANCE * power[:, None])
        assert set(figures.part_loss_share) == set(expected.part_loss_share)
        for part, lost in expected.part_loss_share.items():
            close(figures.part_loss_share[part], lost, TOLERANCE * power)
        close(figures.reflected_share, expected.reflection**2)
        close(10 ** (-figures.return_loss_db / 20), expected.reflection)


@many
@given(random_plans())
def test_port_impedances_are_the_oracles(plan):
    """|V - Z I| with the oracle's V and I, which asks of Z just as many digits as V and I have."""
    answer = solve(plan)
    expected = reference(plan, answer.frequency_hz)
    assert set(answer.port_impedance_ohm) == {str(port) for port in expected.voltage_v}
    for port, voltage_v in expected.voltage_v.items():
        z_ohm, current_a = answer.port_impedance_ohm[str(port)], expected.near_to_far(port)
        if current_a is None:
            assert np.isnan(z_ohm).all()
            continue
        assert not np.isnan(z_ohm).any()
        finite = np.isfinite(z_ohm)
        floor_v, floor_a = TOLERANCE * expected.scale_v, TOLERANCE * expected.scale_v / 50
        assert np.all(np.abs(current_a)[~finite] <= floor_a[~finite])
        z_ohm, v, i = z_ohm[finite], voltage_v[finite], current_a[finite]
        assert np.all(np.abs(v - z_ohm * i) <= floor_v[finite] + np.abs(z_ohm) * floor_a[finite])


@few
@given(random_plans())
def test_balances_and_harness_loss_are_by_their_definitions(plan):
    """From the answer's own currents and shares, which are compared above."""
    answer = solve(plan)
    current_a = answer.antenna_current_a
    assume(answer.antenna_ids)
    np.testing.assert_allclose(
        answer.amplitude_balance_db, oracle.amplitude_balance_db(plan, current_a), rtol=1e-12, atol=1e-9
    )
    # An arc of nothing may come out as nothing or as a whole turn less nothing, so far as rounding goes.
    off = answer.phase_balance_deg - oracle.phase_balance_deg(plan, current_a)
    np.testing.assert_allclose(off, 0, atol=1e-9)
    entered, delivered = 1 - answer.reflected_share, answer.antenna_share.sum(axis=1)
    sure = entered > 1e-6
    got = entered[sure] * 10 ** (-answer.harness_loss_db[sure] / 10)
    np.testing.assert_allclose(got, delivered[sure], rtol=1e-9, atol=1e-12)


@many
@given(random_plans())
def test_shares_add_up_to_the_available_power(plan):
    answer = solve(plan)
    reference(plan, answer.frequency_hz)
    total = answer.reflected_share + answer.antenna_share.sum(axis=1)
    total = total + sum(answer.part_loss_share.values(), np.zeros(total.shape))
    np.testing.assert_allclose(total, 1, rtol=0, atol=1e-9)


@many
@given(random_plans())
def test_harness_s_is_the_oracles_and_passive(plan):
    answer = solve(plan)
    expected, condition = oracle.harness_s(plan, answer.frequency_hz)
    assume(condition < WORST_CONDITION)
    radio = next(p.id for p in plan.parts if isinstance(p.part, Radio))
    antennas = [p.id for p in plan.parts if isinstance(p.part, Antenna)]
    assert answer.harness_ports == tuple(f"{name}:1" for name in [radio, *antennas])
    close(answer.harness_s, expected)
    assert np.linalg.svd(answer.harness_s, compute_uv=False).max() <= 1 + 1e-9


@few
@given(random_plans())
def test_isolation_is_the_smallest_between_antennas(plan):
    answer = solve(plan)
    count = len(answer.antenna_ids)
    assume(count > 1)
    s = np.abs(answer.harness_s[:, 1:, 1:])
    loudest = [max(s[f, i, j] for i in range(count) for j in range(count) if i != j) for f in range(len(s))]
    np.testing.assert_allclose(10 ** (-answer.isolation_db / 20), loudest, rtol=1e-9)


@few
@given(random_plans(reciprocal=True))
def test_reciprocal_parts_make_a_reciprocal_harness(plan):
    answer = solve(plan)
    assume(oracle.harness_s(plan, answer.frequency_hz)[1] < WORST_CONDITION)
    close(answer.harness_s, answer.harness_s.transpose(0, 2, 1))


@few
@given(random_plans(), st.randoms(use_true_random=False))
def test_order_of_parts_and_joins_does_not_matter(plan, random):
    first = solve(plan)
    assume(oracle.harness_s(plan, first.frequency_hz)[1] < WORST_CONDITION)
    expected = reference(plan, first.frequency_hz)
    parts, joins = list(plan.parts), list(plan.joins)
    random.shuffle(parts)
    random.shuffle(joins)
    second = solve(dataclasses.replace(plan, parts=tuple(parts), joins=tuple(joins)))
    place = [second.harness_ports.index(port) for port in first.harness_ports]
    close(second.harness_s[:, place][:, :, place], first.harness_s)
    for placed in plan.parts:
        for port in placed.ports():
            close(second.voltage_v(str(port)), first.voltage_v(str(port)), TOLERANCE * expected.scale_v)


def same_answer(first: Plan, second: Plan) -> None:
    """Assert that two plans of the same antennas have the same figures."""
    a = solve(first)
    expected = reference(first, a.frequency_hz)
    reference(second, a.frequency_hz)
    assume(max(oracle.harness_s(p, a.frequency_hz)[1] for p in (first, second)) < WORST_CONDITION)
    b = solve(second)
    close(b.antenna_current_a, a.antenna_current_a, TOLERANCE * expected.scale_v[:, None] / 50)
    close(b.antenna_voltage_v, a.antenna_voltage_v, TOLERANCE * expected.scale_v[:, None])
    close(b.reflected_share, a.reflected_share)
    close(b.harness_s, a.harness_s)


@few
@given(random_plans(), st.data())
def test_a_coax_cut_in_two_is_the_whole(plan, data):
    assume(plain_coaxes(plan))
    name = data.draw(st.sampled_from(plain_coaxes(plan)))
    pieces = cut(plan, name, data.draw(st.floats(0, 1)))
    same_answer(plan, pieces)
    whole, parted = solve(plan).part_loss_share[name], solve(pieces).part_loss_share
    power = reference(plan, solve(plan).frequency_hz).scale_v ** 2 / 50
    radio = next(p.part for p in plan.parts if isinstance(p.part, Radio))
    close(parted[name] + parted["cut"], whole, TOLERANCE * power / radio.power_w)


@few
@given(random_plans(), st.data())
def test_a_coax_turned_end_for_end_is_the_same(plan, data):
    assume(plain_coaxes(plan))
    same_answer(plan, turned(plan, data.draw(st.sampled_from(plain_coaxes(plan)))))


@few
@given(random_plans(), st.data())
def test_two_coaxes_side_by_side_are_one_of_half_their_impedance(plan, data):
    """The pair closes a loop, so what a tree answers by cascading comes out of the way that serves loops too."""
    long_enough = [name for name in plain_coaxes(plan) if plan.placed(name).part.length_m > 1e-6]
    assume(long_enough)  # a loop of next to no length has a current of next to no certainty
    same_answer(plan, doubled(plan, data.draw(st.sampled_from(long_enough))))


def test_random_plans_reach_what_they_are_for():
    """Hypothesis finds each case within its bounds; fails when a strategy no longer makes it."""

    def with_ring(plan: Plan) -> bool:
        reached = oracle.joins_from(plan, next(p.id for p in plan.parts if isinstance(p.part, Radio)))
        joins = [j for j in plan.joins if j[0].part in reached]
        return len(joins) >= len(reached) and len({p.part for j in joins for p in j}) > 3

    def one_way(plan: Plan) -> bool:
        files = [p.part.touchstone.data.s for p in plan.parts if isinstance(p.part, Measured)]
        return any(len(s) == 3 and not np.allclose(s, s.transpose(1, 0, 2)) for s in files)

    quick = settings(max_examples=2000, deadline=None, database=None, phases=[Phase.generate])
    for case in (with_ring, one_way, lambda plan: sum(isinstance(p.part, Antenna) for p in plan.parts) == 8):
        assert find(random_plans(), case, settings=quick)


@pytest.mark.parametrize("gain", [2.0, 8.0])
def test_shares_add_up_with_an_amplifier(gain):
    """An active part gives a negative loss share."""
    s = np.array([[[0.1, 0.05], [gain, -0.2]]])
    sketch = Sketch(4e8)
    sketch.add("radio", "radio")
    sketch.add("measured", "amplifier", touchstone=touchstone([4e8], s, [50, 50]))
    sketch.antenna(40 + 10j, "A")
    sketch.join("radio:1", "amplifier:1", "amplifier:2", "A:1")
    answer = solve(sketch.plan())
    assert answer.part_loss_share["amplifier"][0] < 0
    total = answer.reflected_share + answer.part_loss_share["amplifier"] + answer.antenna_share[:, 0]
    np.testing.assert_allclose(total, 1, atol=1e-9)
