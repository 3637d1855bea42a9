"""The standing wave along a coax against closed forms: V(x) = V2 cosh(gamma (l - x)) + Z0 I2 sinh(gamma (l - x))."""

import numpy as np
import pytest

from feedlib import solve
from tests.plans import Sketch

C_M_PER_S = 299_792_458.0
MARK_HZ = 3e8
WAVE_M = C_M_PER_S / MARK_HZ


def fed(**top) -> Sketch:
    """A sketch whose band is not where its mark is, with a radio."""
    sketch = Sketch(1e8, 2e8, 3, mark_hz=MARK_HZ, **top)
    sketch.add("radio", "radio")
    return sketch


@pytest.mark.parametrize("turned", [False, True])
def test_quarter_wave_into_an_antenna(turned):
    """75 ohm into 20 ohm: the voltage falls from 281.25 to 20 ohm times the currents; x runs from port 1 to port 2."""
    sketch = fed()
    sketch.coax(WAVE_M / 4, 75, "line")
    sketch.antenna(20, "A")
    near, far = (2, 1) if turned else (1, 2)
    sketch.join("radio:1", f"line:{near}", f"line:{far}", "A:1")
    answer = solve(sketch.plan())
    x, voltage, forward = answer.swell("line", points=41)
    i1 = 2 * np.sqrt(50) / (50 + 75**2 / 20)
    i2 = -1j * i1 * 75 / 20
    np.testing.assert_allclose(x, np.linspace(0, 1, 41), rtol=1e-15)
    rest = np.pi / 2 * (x if turned else 1 - x)
    np.testing.assert_allclose(voltage, 20 * i2 * np.cos(rest) + 75j * i2 * np.sin(rest), rtol=1e-11, atol=1e-13)
    assert forward == pytest.approx((75**2 / 20 + 75) * i1 / 2, rel=1e-12)
    np.testing.assert_allclose(voltage[0 if turned else -1], answer.mark.antenna_voltage_v[0, 0], rtol=1e-12)


@pytest.mark.parametrize("turned", [False, True])
@pytest.mark.parametrize("waves", [0.15, 0.25, 0.6])
def test_open_stub_beside_an_antenna(waves, turned):
    """|V| = |V at the open end| |cos|; the forward wave is half of the open end's voltage, turned back."""
    sketch = fed()
    sketch.add("tee", "T")
    sketch.coax(waves * WAVE_M, 30, "stub")
    sketch.antenna(60 + 20j, "A")
    sketch.join("radio:1", "T:1", "T:2", f"stub:{2 if turned else 1}", "A:1", "T:3")
    x, voltage, forward = solve(sketch.plan()).swell("stub")
    theta = 2 * np.pi * waves
    n, d = 1j * np.sin(theta), np.cos(theta)
    at_open = 2 * np.sqrt(50) / 50 / ((1 / 50 + 1 / (60 + 20j)) * d + n / 30)
    rest = theta * (x if turned else 1 - x)
    np.testing.assert_allclose(voltage, at_open * np.cos(rest), rtol=1e-11, atol=1e-12)
    assert forward == pytest.approx(at_open / 2 * np.exp(1j * theta), rel=1e-11)


def test_matched_cable_with_loss_falls_evenly():
    sketch = fed()
    sketch.coax(30, 50, "line", skin_db_per_100m=4)
    sketch.antenna(50, "A")
    sketch.join("radio:1", "line:1", "line:2", "A:1")
    x, voltage, forward = solve(sketch.plan()).swell("line")
    loss_db = 30 * 4 * np.sqrt(300) / 100
    expected = np.sqrt(50) * 10 ** (-loss_db * x / 20) * np.exp(-2j * np.pi * 30 / WAVE_M * x)
    np.testing.assert_allclose(voltage, expected, rtol=1e-11)
    assert forward == pytest.approx(np.sqrt(50), rel=1e-12)


def test_ends_are_outside_the_swell():
    """An eighth wave of 30 ohm at port 1 and of 90 ohm at port 2; the cable between them is 0.2 waves of 75 ohm."""
    sketch = fed()
    ends = [{"z0_ohm": z, "velocity_factor": 0.5, "length_m": WAVE_M / 16} for z in (30, 90)]
    sketch.coax(0.2 * WAVE_M, 75, "line", ends=ends)
    sketch.antenna(40 - 10j, "A")
    sketch.join("radio:1", "line:1", "line:2", "A:1")
    answer = solve(sketch.plan())
    x, voltage, forward = answer.swell("line")
    half = np.sqrt(0.5)
    v_a, i_a = answer.mark.antenna_voltage_v[0, 0], answer.mark.antenna_current_a[0, 0]
    v2, i2 = half * (v_a + 90j * i_a), half * (1j / 90 * v_a + i_a)
    rest = 0.4 * np.pi * (1 - x)
    np.testing.assert_allclose(voltage, v2 * np.cos(rest) + 75j * i2 * np.sin(rest), rtol=1e-11)
    i1 = 1j / 75 * v2 * np.sin(rest[0]) + i2 * np.cos(rest[0])
    assert forward == pytest.approx((voltage[0] + 75 * i1) / 2, rel=1e-11)
    z_in_front = answer.mark.port_impedance_ohm["line:1"][0]
    v1 = half * (voltage[0] + 30j * i1)
    assert v1 / (half * (1j / 30 * voltage[0] + i1)) == pytest.approx(z_in_front, rel=1e-11)


def test_ring_of_two_halves():
    """A ring fed at a tee: both halves carry the same wave, and no current passes the join in the middle."""
    sketch = fed()
    sketch.add("tee", "T")
    for name in ("a", "b"):
        sketch.coax(0.1 * WAVE_M, 50, name)
    sketch.join("radio:1", "T:1", "T:2", "a:1", "T:3", "b:2", "a:2", "b:1")
    answer = solve(sketch.plan())
    z_half = -50j / np.tan(0.2 * np.pi)
    at_tee = 2 * np.sqrt(50) * (z_half / 2) / (50 + z_half / 2)
    for name, turned in (("a", False), ("b", True)):
        x, voltage, _ = answer.swell(name)
        rest = 0.2 * np.pi * (x if turned else 1 - x)
        np.testing.assert_allclose(voltage, at_tee * np.cos(rest) / np.cos(0.2 * np.pi), rtol=1e-11)


def test_kilometres_of_cable_are_finite_and_loose_cable_has_no_swell():
    sketch = fed()
    sketch.coax(60_000, 50, "long", skin_db_per_100m=10)
    sketch.coax(1, 50, "loose")
    sketch.join("radio:1", "long:2")
    answer = solve(sketch.plan())
    x, voltage, forward = answer.swell("long")
    np.testing.assert_allclose(voltage[[0, -1]], [0, np.sqrt(50)], rtol=1e-12)
    assert forward == pytest.approx(np.sqrt(50), rel=1e-12)
    assert np.isfinite(voltage).all()
    assert answer.swell("loose") is None
    assert x.size == voltage.size
