"""Verdicts: which frequencies count, what is the worst, and limits met to the last digit."""

import math

import numpy as np
import pytest

from feedlib import solve
from feedlib.answer import Verdict
from tests.plans import Sketch


def verdicts(sketch: Sketch, **limits: float) -> dict[str, Verdict]:
    sketch.top["limits"] = limits
    return {v.limit: v for v in solve(sketch.plan()).verdicts}


def two_antennas(a: complex = 50, b: complex = 50, **top) -> Sketch:
    """Two antennas on a tee, at one frequency unless told otherwise."""
    sketch = Sketch(**{"start_hz": 1e9, **top})
    sketch.add("radio", "radio", impedance_ohm=25 + 0j)
    sketch.add("tee", "T")
    sketch.antenna(a, "A")
    sketch.antenna(b, "B")
    sketch.join("radio:1", "T:1", "T:2", "A:1", "T:3", "B:1")
    return sketch


def detuned(**top) -> Sketch:
    """An antenna resonant at 400 MHz, q = 10: the return loss falls to both sides."""
    sketch = Sketch(**top)
    sketch.add("radio", "radio")
    sketch.add("antenna", "A", impedance={"resonant": {"r_ohm": 50, "f0_hz": 4e8, "q": 10}})
    sketch.join("radio:1", "A:1")
    return sketch


def detuned_return_loss_db(f_hz: float) -> float:
    x = 10 * (f_hz / 4e8 - 4e8 / f_hz)
    return -20 * math.log10(abs(1j * x / (2 + 1j * x)))


AT_LEAST = {
    "return_loss_db": True,
    "amplitude_balance_db": False,
    "phase_balance_deg": False,
    "harness_loss_db": False,
    "isolation_db": True,
}
"""Whether the figure must be at least the limit, else at most."""


def judged() -> Sketch:
    """Two equal antennas, a matched 1.5 dB in front of them, targets that ask for what they do not get."""
    sketch = two_antennas()
    sketch.parts[2]["target"] = {"amplitude": 0.5, "phase_deg": 0}
    sketch.parts[3]["target"] = {"amplitude": 1, "phase_deg": -30}
    sketch.joins[0] = ["radio:1", "P:1"]
    sketch.joins.append(["P:2", "T:1"])
    sketch.add("pad", "P", loss_db=1.5, z0_ohm=25)
    return sketch


@pytest.mark.parametrize(
    ("limit", "figure"),
    [("amplitude_balance_db", 20 * math.log10(2)), ("phase_balance_deg", 30), ("harness_loss_db", 1.5)],
)
def test_figures_known_by_hand(limit, figure):
    verdict = verdicts(judged(), **{limit: 0})[limit]
    assert verdict.worst == pytest.approx(figure, rel=1e-12)
    assert not verdict.holds
    assert (verdict.wanted, verdict.frequency_hz) == (0, 1e9)


def test_return_loss_and_isolation_known_by_hand():
    """200 ohm twice on 50 ohm: 20 log10 3. Between two arms of a tee at 50 ohm: 20 log10 1.5."""
    sketch = two_antennas(200, 200)
    sketch.parts[0]["impedance_ohm"] = [50, 0]
    found = verdicts(sketch, return_loss_db=9, isolation_db=4)
    assert found["return_loss_db"].worst == pytest.approx(20 * math.log10(3), rel=1e-12)
    assert found["return_loss_db"].holds
    assert found["isolation_db"].worst == pytest.approx(20 * math.log10(1.5), rel=1e-12)
    assert not found["isolation_db"].holds


@pytest.mark.parametrize("limit", list(AT_LEAST))
def test_a_limit_holds_exactly_at_its_value_and_not_beyond(limit):
    sketch = judged()
    sketch.parts[0]["impedance_ohm"] = [40, 3]
    figure = verdicts(sketch, **{limit: 0})[limit].worst
    assert figure > 0
    assert verdicts(sketch, **{limit: figure})[limit].holds
    beyond = math.nextafter(figure, math.inf if AT_LEAST[limit] else 0)
    assert not verdicts(sketch, **{limit: beyond})[limit].holds


def test_only_the_limits_that_are_set_are_judged():
    sketch = two_antennas()
    assert verdicts(sketch) == {}
    assert list(verdicts(sketch, isolation_db=1, return_loss_db=1)) == ["return_loss_db", "isolation_db"]


@pytest.mark.parametrize(("start_hz", "stop_hz", "worst_hz"), [(3.96e8, 4.1e8, 4.1e8), (3.9e8, 4.04e8, 3.9e8)])
def test_worst_is_at_an_edge_of_the_band_that_no_grid_point_hits(start_hz, stop_hz, worst_hz):
    """The sweep's points are 300, 400 and 500 MHz; the mark, at 350 MHz, is not in the band."""
    sketch = detuned(start_hz=start_hz, stop_hz=stop_hz, points=2, mark_hz=3.5e8)
    sketch.top["sweep"] = {"start_hz": 3e8, "stop_hz": 5e8, "points": 3}
    verdict = verdicts(sketch, return_loss_db=11)["return_loss_db"]
    assert verdict.frequency_hz == worst_hz
    assert verdict.worst == pytest.approx(detuned_return_loss_db(worst_hz), rel=1e-12)
    assert verdict.holds  # at 300, 350 and 500 MHz it would not
    assert detuned_return_loss_db(3.5e8) < 11


def test_worst_is_at_a_grid_point_inside_the_band():
    """Of the sweep's points only 400 MHz lies in the band, where the loss is largest: a stub's notch."""
    sketch = Sketch(3.9e8, 4.2e8, 2)
    sketch.top["sweep"] = {"start_hz": 3e8, "stop_hz": 5e8, "points": 3}
    sketch.add("radio", "radio")
    sketch.add("tee", "T")
    sketch.coax(299_792_458 / 4e8 / 4, 50, "stub")
    sketch.antenna(50, "A")
    sketch.join("radio:1", "T:1", "T:2", "A:1", "T:3", "stub:1")
    verdict = verdicts(sketch, return_loss_db=0)["return_loss_db"]
    assert verdict.frequency_hz == 4e8
    assert verdict.worst == pytest.approx(0, abs=1e-12)


def test_a_channel_outside_the_band_counts():
    sketch = detuned(
        start_hz=3.98e8,
        stop_hz=4.02e8,
        points=5,
        channels=[{"name": "near", "hz": 4.05e8}, {"name": "far", "hz": 4.3e8}],
    )
    verdict = verdicts(sketch, return_loss_db=15)["return_loss_db"]
    assert verdict.frequency_hz == 4.3e8
    assert verdict.worst == pytest.approx(detuned_return_loss_db(4.3e8), rel=1e-12)
    assert not verdict.holds


def test_an_antenna_without_current_fails_the_amplitude_balance():
    sketch = two_antennas()
    sketch.joins.pop()
    verdict = verdicts(sketch, amplitude_balance_db=100, phase_balance_deg=0)
    assert verdict["amplitude_balance_db"].worst == math.inf
    assert not verdict["amplitude_balance_db"].holds
    assert verdict["phase_balance_deg"].worst == 0
    assert verdict["phase_balance_deg"].holds


def test_nothing_delivered_is_an_infinite_loss_at_every_frequency():
    """An antenna without resistance takes nothing, and what enters the harness is nothing but rounding."""
    sketch = Sketch(1e8, 9e8, 41)
    sketch.add("radio", "radio")
    sketch.coax(0.37, 75, "leg")
    sketch.antenna(30j, "A")
    sketch.join("radio:1", "leg:1", "leg:2", "A:1")
    verdict = verdicts(sketch, harness_loss_db=100)["harness_loss_db"]
    assert verdict.worst == math.inf
    assert not verdict.holds
    assert np.all(solve(sketch.plan()).harness_loss_db == math.inf)


def test_one_antenna_is_balanced_and_isolated():
    sketch = detuned(start_hz=4e8)
    found = verdicts(sketch, amplitude_balance_db=0, phase_balance_deg=0, isolation_db=200)
    assert all(v.holds for v in found.values())


@pytest.mark.parametrize(
    ("targets", "arc"),
    [
        ((0, 0), 0),
        ((170, -170), 20),
        ((0, 350), 10),
        ((-720, 360), 0),
        ((0, 120, 240), 240),
        ((0, 90, 180, 270), 270),
        ((0, 10, 180), 180),
        ((10, 20, 350), 30),
        ((0, 179, 1), 179),
    ],
)
def test_phase_balance_is_the_smallest_arc(targets, arc):
    """All currents are in phase, so the arc is that of the targets, whatever turns they are given with."""
    sketch = Sketch(1e9)
    sketch.add("radio", "radio")
    sketch.add("tee", "T", ports=len(targets) + 1)
    sketch.join("radio:1", "T:1")
    for n, phase in enumerate(targets):
        sketch.antenna(50, f"A{n}", target={"amplitude": 1, "phase_deg": phase})
        sketch.join(f"T:{n + 2}", f"A{n}:1")
    np.testing.assert_allclose(solve(sketch.plan()).phase_balance_deg, arc, atol=1e-9)


def test_phase_balance_of_unequal_legs():
    """A matched leg longer by an eighth of a wave lags by 45 degrees; the target of -40 leaves 5."""
    sketch = Sketch(1e9)
    sketch.add("radio", "radio")
    sketch.add("splitter", "W", form="wilkinson", centre_hz=1e9)
    sketch.coax(299_792_458 / 1e9 / 8, 50, "longer")
    sketch.antenna(50, "A")
    sketch.antenna(50, "B", target={"amplitude": 1, "phase_deg": -40})
    sketch.join("radio:1", "W:1", "W:2", "A:1", "W:3", "longer:1", "longer:2", "B:1")
    np.testing.assert_allclose(solve(sketch.plan()).phase_balance_deg, 5, rtol=1e-10)
