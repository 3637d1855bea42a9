"""Special harnesses against closed forms: sections of special lengths, stubs, rings, shorts, odd sources, odd plans.

Lossless lines here have velocity factor 1 and a length of 1 m unless a test says otherwise.
"""

import numpy as np
import pytest

from feedlib import solve
from feedlib.answer import Answer
from tests import oracle
from tests.plans import Sketch, touchstone

C_M_PER_S = 299_792_458.0


def at_quarters(quarters: float) -> float:
    """The frequency at which 1 m is so many quarter waves."""
    return quarters * C_M_PER_S / 4


def fed(sketch: Sketch, z_ohm: complex = 50) -> Sketch:
    """The sketch with a radio called "radio"."""
    sketch.add("radio", "radio", impedance_ohm=complex(z_ohm))
    return sketch


def one_line(f_hz: float, end: complex | None, z0_ohm: float = 75, radio_ohm: complex = 50) -> Answer:
    """Radio, 1 m of lossless line, an antenna of impedance `end` (None: nothing)."""
    sketch = fed(Sketch(f_hz), radio_ohm)
    sketch.coax(1, z0_ohm, "line")
    sketch.join("radio:1", "line:1")
    if end is not None:
        sketch.antenna(end, "A")
        sketch.join("line:2", "A:1")
    return solve(sketch.plan())


def line_input(z_end: complex, z0_ohm: float, gamma_l: complex) -> complex:
    """Input impedance of a line (Pozar, 4th ed., eq. 2.91)."""
    t = np.tanh(gamma_l)
    return z0_ohm * (z_end + z0_ohm * t) / (z0_ohm + z_end * t)


def at_radio(answer: Answer) -> complex:
    return complex(answer.port_impedance_ohm["radio:1"][0])


# Sections of special lengths


@pytest.mark.parametrize("end", [50 + 0j, 12.5 - 80j, 0j, 300 + 200j])
def test_antenna_straight_on_the_radio(end):
    sketch = fed(Sketch(1e9), 50)
    sketch.antenna(end, "A")
    sketch.join("A:1", "radio:1")
    answer = solve(sketch.plan())
    current = 2 * np.sqrt(50) / (50 + end)
    np.testing.assert_allclose(answer.antenna_current_a, [[current]], rtol=1e-13)
    np.testing.assert_allclose(answer.antenna_voltage_v, [[current * end]], rtol=1e-13, atol=1e-15)
    np.testing.assert_allclose(answer.antenna_share, [[abs(current) ** 2 * end.real]], rtol=1e-12, atol=1e-15)
    np.testing.assert_allclose(answer.port_impedance_ohm["A:1"], [end], rtol=1e-13, atol=1e-13)
    np.testing.assert_allclose(answer.harness_s, [[[0, 1], [1, 0]]], atol=1e-14)


def test_section_without_length_is_a_join():
    sketch = fed(Sketch(1e9))
    ends = [{"z0_ohm": 20, "velocity_factor": 0.5, "length_m": 0}] * 2
    sketch.coax(0, 93, "line", skin_db_per_100m=30, ends=ends)
    sketch.antenna(30 + 40j, "A")
    sketch.join("radio:1", "line:1", "line:2", "A:1")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.antenna_current_a, [[2 * np.sqrt(50) / (80 + 40j)]], rtol=1e-13)
    np.testing.assert_allclose(answer.part_loss_share["line"], 0, atol=1e-14)


@pytest.mark.parametrize("end", [50 + 0j, 20 - 30j, 400 + 0j])
def test_half_wave_repeats_and_quarter_wave_inverts(end):
    half, quarter = one_line(at_quarters(2), end), one_line(at_quarters(1), end)
    assert at_radio(half) == pytest.approx(end, rel=1e-12)
    assert at_radio(quarter) == pytest.approx(75**2 / end, rel=1e-12)
    np.testing.assert_allclose(half.antenna_current_a, [[-2 * np.sqrt(50) / (50 + end)]], rtol=1e-12)
    into_line = 2 * np.sqrt(50) / (50 + 75**2 / end)
    np.testing.assert_allclose(quarter.antenna_voltage_v, [[-75j * into_line]], rtol=1e-12)


@pytest.mark.parametrize(
    ("quarters", "end", "short"), [(1, None, True), (2, None, False), (1, 0j, False), (2, 0j, True), (4, None, False)]
)
def test_open_and_shorted_ends_of_quarter_and_half_waves(quarters, end, short):
    answer = one_line(at_quarters(quarters), end)
    z_ohm = at_radio(answer)
    assert abs(z_ohm) < 1e-12 if short else abs(z_ohm) > 1e14 or np.isinf(z_ohm)
    np.testing.assert_allclose(answer.reflected_share, 1, rtol=1e-12)
    np.testing.assert_allclose(answer.return_loss_db, 0, atol=1e-11)
    np.testing.assert_allclose(answer.part_loss_share["line"], 0, atol=1e-12)
    if end is None:
        assert np.isinf(answer.port_impedance_ohm["line:2"][0])


def test_a_line_of_any_length_open_or_shorted():
    for quarters in (0.1, 0.5, 1.3, 2.9):
        theta = quarters * np.pi / 2
        assert at_radio(one_line(at_quarters(quarters), None)) == pytest.approx(-75j / np.tan(theta), rel=1e-11)
        assert at_radio(one_line(at_quarters(quarters), 0j)) == pytest.approx(75j * np.tan(theta), rel=1e-11)


# Stubs and tees


@pytest.mark.parametrize("quarters", [0.3, 1.0, 1.7, 2.0])
@pytest.mark.parametrize("shorted", [False, True])
def test_stub_beside_an_antenna(quarters, shorted):
    """V = E Yf/(Yf + 1/Z + Y of the stub), all multiplied by sin or cos so that no length is special."""
    sketch = fed(Sketch(at_quarters(quarters)))
    sketch.add("tee", "T")
    sketch.coax(1, 30, "stub")
    sketch.antenna(60 + 20j, "A")
    sketch.join("radio:1", "T:2", "T:1", "stub:2", "T:3", "A:1")
    if shorted:
        sketch.add("load", "short", impedance_ohm=0j)
        sketch.join("stub:1", "short:1")
    answer = solve(sketch.plan())
    theta = quarters * np.pi / 2
    n, d = (-1j * np.cos(theta), np.sin(theta)) if shorted else (1j * np.sin(theta), np.cos(theta))
    voltage = 2 * np.sqrt(50) / 50 * d / ((1 / 50 + 1 / (60 + 20j)) * d + n / 30)
    np.testing.assert_allclose(answer.antenna_voltage_v, [[voltage]], rtol=1e-12, atol=1e-14)
    for port in ("stub:2", "T:1", "T:2"):
        np.testing.assert_allclose(answer.voltage_v(port), voltage, rtol=1e-12, atol=1e-14)


def test_tee_with_open_arms_is_a_join():
    sketch = fed(Sketch(1e9))
    sketch.add("tee", "T", ports=5)
    sketch.antenna(20 + 10j, "A")
    sketch.join("radio:1", "T:4", "A:1", "T:2")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.antenna_current_a, [[2 * np.sqrt(50) / (70 + 10j)]], rtol=1e-13)
    assert np.isinf(answer.port_impedance_ohm["T:1"][0])
    assert answer.current_a("T:3")[0] == 0


# Rings


def test_ring_of_two_unlike_sections():
    """The admittance matrices of the two sections add up (Pozar, 4th ed., table 4.2)."""
    sketch = fed(Sketch(1e8, 9e8, 9))
    for name in ("T1", "T2"):
        sketch.add("tee", name)
    sketch.coax(0.7, 50, "a")
    sketch.coax(1.1, 93, "b")
    sketch.antenna(35 - 25j, "A")
    sketch.join("radio:1", "T1:1", "T1:2", "a:1", "a:2", "T2:2", "T1:3", "b:2", "b:1", "T2:3", "T2:1", "A:1")
    answer = solve(sketch.plan())
    theta = 2 * np.pi * answer.frequency_hz / C_M_PER_S * np.array([[0.7], [1.1]])
    y = 1 / np.array([[50], [93]])
    own, cross = np.sum(-1j * y / np.tan(theta), axis=0), np.sum(1j * y / np.sin(theta), axis=0)
    z_in = 1 / (own - cross**2 / (own + 1 / (35 - 25j)))
    np.testing.assert_allclose(answer.port_impedance_ohm["T1:1"], z_in, rtol=1e-10)
    np.testing.assert_allclose(answer.antenna_share[:, 0] + answer.reflected_share, 1, rtol=1e-12)


def test_section_that_comes_back_to_its_own_tee():
    """Both ends have one voltage: an admittance of 2 tanh(gamma l/2)/Z0. Near is the port that the join names first."""
    sketch = fed(Sketch(3e8))
    sketch.add("tee", "T", ports=4)
    sketch.coax(0.4, 70, "loop", skin_db_per_100m=40)
    sketch.antenna(50, "A")
    sketch.join("T:1", "radio:1", "T:2", "loop:1", "loop:2", "T:3", "T:4", "A:1")
    answer = solve(sketch.plan())
    gamma_l = 0.4 * (40 * np.sqrt(300) / 100 * np.log(10) / 20 + 2j * np.pi * 3e8 / C_M_PER_S)
    loop = 2 * np.tanh(gamma_l / 2) / 70
    assert at_radio(answer) == pytest.approx(1 / (1 / 50 + loop), rel=1e-12)
    for port in ("T:2", "loop:1", "T:3", "loop:2"):
        assert answer.port_impedance_ohm[port][0] == pytest.approx(2 / loop, rel=1e-12)


def test_near_and_far_in_a_ring_where_both_sides_are_as_far_from_the_radio():
    """The current in the middle of a balanced ring is zero; moved off balance, its sign tells the side named first."""
    found = []
    for swap in (False, True):
        sketch = fed(Sketch(2e8))
        sketch.add("tee", "T")
        sketch.coax(0.2, 50, "a")
        sketch.coax(0.3, 50, "b")
        sketch.join("radio:1", "T:1", "T:2", "a:1", "T:3", "b:1")
        sketch.join(*(("b:2", "a:2") if swap else ("a:2", "b:2")))
        answer = solve(sketch.plan())
        found.append(answer.port_impedance_ohm["a:2"][0])
        assert answer.port_impedance_ohm["a:2"] == answer.port_impedance_ohm["b:2"]
        current = answer.current_a("a:2" if swap else "b:2")
        assert found[-1] == pytest.approx(answer.voltage_v("a:2")[0] / current[0], rel=1e-12)
    assert found[0] == pytest.approx(-found[1], rel=1e-12)


def test_splitter_with_two_of_its_own_ports_joined():
    """A branch-line coupler at its centre with 2 and 3 tied: what comes back from 2 and 3 leaves by 1 and 4."""
    sketch = fed(Sketch(1e9))
    sketch.add("splitter", "H", form="branch_line", centre_hz=1e9)
    sketch.antenna(50, "A")
    sketch.join("radio:1", "H:1", "H:2", "H:3", "H:4", "A:1")
    answer = solve(sketch.plan())
    # S21 = -j/sqrt2, S31 = -1/sqrt2 and the like: b1 = S12 S31 + S13 S21, b4 = S42 S31 + S43 S21.
    np.testing.assert_allclose(answer.harness_s[0, 0, 0], 1j, atol=1e-12)
    np.testing.assert_allclose(answer.harness_s[0, 1, 0], 0, atol=1e-12)


@pytest.mark.parametrize("form", ["wilkinson", "branch_line", "rat_race"])
@pytest.mark.parametrize("multiple", [2, 4, 6, 8])
def test_splitters_at_even_multiples_of_their_centre(form, multiple):
    """The ring inside resonates there, but not at its ports: S is what the circuit's S on both sides comes to."""
    sketch = fed(Sketch(multiple * 1e8))
    sketch.add("splitter", "H", form=form, centre_hz=1e8)
    sketch.join("radio:1", "H:1")
    for n in range(2, 4 if form == "wilkinson" else 5):
        sketch.antenna(50, f"A{n}")
        sketch.join(f"H:{n}", f"A{n}:1")
    plan = sketch.plan()
    s, condition = oracle.harness_s(plan, multiple * 1e8 * np.array([1 - 1e-6, 1 + 1e-6]))
    assert condition < 1e9
    np.testing.assert_allclose(solve(plan).harness_s[0], s.mean(axis=0), atol=1e-9)


# Sources and ends


def test_conjugate_match_of_a_complex_source():
    sketch = fed(Sketch(1e9), 30 + 40j)
    sketch.antenna(30 - 40j, "A")
    sketch.join("radio:1", "A:1")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.antenna_share, 1, rtol=1e-14)
    np.testing.assert_allclose(answer.reflected_share, 0, atol=1e-14)
    assert answer.return_loss_db[0] > 300


def test_complex_source_on_its_own_impedance():
    """|(Z - Zs*)/(Z + Zs)|^2 = |j X/Zs|^2 = 0.64; the current is E/(2 Zs), with the radio's E real and positive."""
    sketch = Sketch(1e9)
    sketch.add("radio", "radio", impedance_ohm=30 + 40j, power_w=7)
    sketch.antenna(30 + 40j, "A")
    sketch.join("radio:1", "A:1")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.reflected_share, 0.64, rtol=1e-13)
    np.testing.assert_allclose(answer.return_loss_db, -10 * np.log10(0.64), rtol=1e-13)
    np.testing.assert_allclose(answer.antenna_current_a, [[2 * np.sqrt(210) / (60 + 80j)]], rtol=1e-13)
    np.testing.assert_allclose(answer.antenna_share, 0.36, rtol=1e-13)


@pytest.mark.parametrize("fields", [{"r_ohm": 0}, {"r_ohm": 0, "l_h": 1e-9, "c_f": 1e-12, "wiring": "parallel"}])
def test_lumped_short(fields):
    """In series it is a join; in shunt nothing passes and nothing enters."""
    sketch = fed(Sketch(1e9))
    sketch.add("lumped", "X", place="series", **fields)
    sketch.antenna(20, "A")
    sketch.join("radio:1", "X:2", "X:1", "A:1")
    np.testing.assert_allclose(solve(sketch.plan()).antenna_share, 4 * 50 * 20 / 70**2, rtol=1e-13)
    sketch.parts[1]["place"] = "shunt"
    answer = solve(sketch.plan())
    assert answer.antenna_current_a[0, 0] == 0
    np.testing.assert_allclose(answer.reflected_share, 1, rtol=1e-14)
    np.testing.assert_allclose(answer.harness_s[0], [[-1, 0], [0, -1]], atol=1e-14)


def test_transformer_and_pad():
    """A ratio of -2 turns 50 into 200 ohm and the phase by 180 degrees; the pad is matched in its own impedance."""
    sketch = fed(Sketch(1e9), 200)
    sketch.add("pad", "P", loss_db=7, z0_ohm=200)
    sketch.add("transformer", "X", ratio=-2)
    sketch.antenna(50, "A")
    sketch.join("radio:1", "P:2", "P:1", "X:1", "X:2", "A:1")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.port_impedance_ohm["X:1"], 200, rtol=1e-13)
    np.testing.assert_allclose(answer.antenna_voltage_v, [[-np.sqrt(50) * 10 ** (-7 / 20)]], rtol=1e-13)
    np.testing.assert_allclose(answer.part_loss_share["P"], 1 - 10**-0.7, rtol=1e-13)
    np.testing.assert_allclose(answer.harness_loss_db, 7, rtol=1e-13)


def test_one_point_of_data_serves_its_own_frequency():
    """S = 1 is an open antenna: its current is exactly zero, so it is left out of the phases and not of the sizes."""
    sketch = fed(Sketch(1e9))
    sketch.add("tee", "T")
    sketch.add("antenna", "A", impedance={"touchstone": touchstone([1e9], np.ones((1, 1, 1)), [50])})
    sketch.antenna(50, "B")
    sketch.join("radio:1", "T:1", "T:2", "A:1", "T:3", "B:1")
    answer = solve(sketch.plan())
    assert answer.antenna_current_a[0, 0] == 0
    np.testing.assert_allclose(answer.antenna_voltage_v, np.sqrt(50), rtol=1e-14)
    assert answer.amplitude_balance_db[0] == np.inf
    assert answer.phase_balance_deg[0] == 0
    assert np.isinf(answer.port_impedance_ohm["A:1"][0])


# Plans that are hardly built


def test_radio_tied_to_nothing():
    sketch = fed(Sketch(1e9), 30 + 10j)
    sketch.antenna(50, "A")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.harness_s, [np.eye(2)], atol=1e-15)
    np.testing.assert_allclose(answer.reflected_share, 1, rtol=1e-14)
    assert answer.return_loss_db[0] == pytest.approx(0, abs=1e-13)
    assert np.isinf(answer.port_impedance_ohm["radio:1"][0])
    assert np.isnan(answer.port_impedance_ohm["A:1"][0])
    np.testing.assert_allclose(answer.voltage_v("radio:1"), 2 * np.sqrt(30), rtol=1e-14)
    assert answer.antenna_current_a.tolist() == [[0]]
    assert answer.antenna_share.tolist() == [[0]]


def test_antenna_tied_to_nothing():
    sketch = fed(Sketch(1e9))
    sketch.antenna(50, "loose")
    sketch.antenna(50, "A")
    sketch.join("radio:1", "A:1")
    answer = solve(sketch.plan())
    assert answer.harness_ports == ("radio:1", "loose:1", "A:1")
    np.testing.assert_allclose(answer.harness_s[0], [[0, 0, 1], [0, 1, 0], [1, 0, 0]], atol=1e-14)
    np.testing.assert_allclose(answer.antenna_share, [[0, 1]], atol=1e-14)
    assert answer.amplitude_balance_db[0] == np.inf
    assert answer.phase_balance_deg[0] == 0


def test_two_antennas_tied_together_apart_from_the_radio():
    sketch = fed(Sketch(1e9))
    sketch.antenna(50, "A")
    for name in "BC":
        sketch.antenna(50, name)
    sketch.add("pad", "P", loss_db=6)
    sketch.join("radio:1", "A:1", "B:1", "P:2", "C:1", "P:1")
    answer = solve(sketch.plan())
    t = 10 ** (-6 / 20)
    expected = [[0, 1, 0, 0], [1, 0, 0, 0], [0, 0, 0, t], [0, 0, t, 0]]
    np.testing.assert_allclose(answer.harness_s[0], expected, atol=1e-14)
    np.testing.assert_allclose(answer.isolation_db, 6, rtol=1e-13)
    assert np.isnan(answer.port_impedance_ohm["P:1"][0])
    assert answer.part_loss_share["P"][0] == 0


def test_no_antenna():
    sketch = fed(Sketch(1e9))
    sketch.add("load", "L", impedance_ohm=50 + 0j)
    sketch.join("radio:1", "L:1")
    answer = solve(sketch.plan())
    assert answer.antenna_current_a.shape == (1, 0)
    np.testing.assert_allclose(answer.part_loss_share["L"], 1, rtol=1e-14)
    np.testing.assert_allclose(answer.harness_s, [[[0]]], atol=1e-14)
    assert answer.harness_loss_db[0] == np.inf
