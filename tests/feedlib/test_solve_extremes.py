"""The largest and the smallest: kilometres of cable, a thousand antennas, ten thousand frequencies; what is refused."""

import dataclasses

import numpy as np
import pytest

from feedlib import SolveError, solve
from feedlib.compiler import compile_plan
from feedlib.parts import Coax
from feedlib.plan import Port
from tests import oracle
from tests.plans import Sketch, touchstone

C_M_PER_S = 299_792_458.0
THIN = {"velocity_factor": 0.695, "skin_db_per_100m": 5.2, "dielectric_db_per_100m": 0.01}


def fed(sketch: Sketch, antennas: str = "", z_ohm: complex = 50) -> Sketch:
    """The sketch with a radio and antennas of 50 ohm by their letters."""
    sketch.add("radio", "radio", impedance_ohm=complex(z_ohm))
    for name in antennas:
        sketch.antenna(50, name)
    return sketch


# Loss


def test_three_kilometres_of_thin_coax_at_6_ghz():
    """Over 10,000 dB: the radio sees the cable's impedance, nothing arrives, and every figure is a number."""
    sketch = fed(Sketch(5.9e9, 6.1e9, 5), "AB")
    sketch.add("tee", "T")
    sketch.coax(3000, 75, "trunk", **THIN)
    sketch.coax(3000, 75, "leg", **THIN)
    sketch.join("radio:1", "trunk:2", "trunk:1", "T:1", "T:2", "A:1", "T:3", "leg:1", "leg:2", "B:1")
    answer = solve(sketch.plan())
    assert 3000 * (5.2 * np.sqrt(6000) + 0.01 * 6000) / 100 > 10_000
    np.testing.assert_allclose(answer.port_impedance_ohm["radio:1"], 75, rtol=1e-13)
    np.testing.assert_allclose(answer.port_impedance_ohm["T:1"], 1 / (1 / 50 + 1 / 75), rtol=1e-13)
    np.testing.assert_allclose(answer.return_loss_db, 20 * np.log10(125 / 25), rtol=1e-13)
    np.testing.assert_allclose(answer.part_loss_share["trunk"], 24 / 25, rtol=1e-13)
    assert np.all(answer.antenna_share == 0)
    assert np.all(answer.harness_loss_db == np.inf)
    # One antenna apart from the trunk, 50 ohm and 75 ohm in parallel from the tee; the other sees its leg.
    tee = 1 / (1 / 75 + 1 / 75)
    s = np.zeros((3, 3))
    s[0, 0] = s[2, 2] = 1 / 5
    s[1, 1] = (tee - 50) / (tee + 50)
    np.testing.assert_allclose(answer.harness_s, np.broadcast_to(s, (5, 3, 3)), atol=1e-14)
    assert np.isfinite(answer.antenna_current_a).all()
    assert np.isfinite(answer.antenna_voltage_v).all()
    assert not np.isnan(answer.amplitude_balance_db).any()
    assert not np.isnan(answer.isolation_db).any()


@pytest.mark.parametrize("loss_db", [200, 1500, 3150, 5000])
def test_what_arrives_through_a_great_loss_keeps_its_digits(loss_db):
    """Two antennas, one behind a matched loss: the balance in dB is that loss, however small the current is."""
    sketch = fed(Sketch(1e9), "AB")
    sketch.add("tee", "T")
    sketch.add("pad", "P", loss_db=loss_db)
    sketch.join("radio:1", "T:1", "T:2", "A:1", "T:3", "P:1", "P:2", "B:1")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.amplitude_balance_db, loss_db, rtol=1e-12)
    np.testing.assert_allclose(answer.phase_balance_deg, 0, atol=1e-12)
    current = 2 * np.sqrt(50) / 50 / 3 * 10 ** (-loss_db / 20)
    np.testing.assert_allclose(answer.antenna_current_a[:, 1], current, rtol=1e-11)
    assert np.abs(answer.harness_s[0, 2, 0]) == pytest.approx(2 / 3 * 10 ** (-loss_db / 20), rel=1e-11)
    np.testing.assert_allclose(answer.isolation_db, loss_db - 20 * np.log10(2 / 3), rtol=1e-11)


@pytest.mark.parametrize("loss_db", [200, 1500, 3150, 5000])
def test_phases_behind_a_great_loss_keep_their_digits(loss_db):
    """Two antennas behind one loss; the leg of one is an eighth of a wave longer, matched by the splitter."""
    sketch = fed(Sketch(1e9), "AB")
    sketch.add("pad", "P", loss_db=loss_db)
    sketch.add("splitter", "W", form="wilkinson", centre_hz=1e9)
    sketch.coax(C_M_PER_S / 1e9 / 8, 50, "longer")
    sketch.join("radio:1", "P:1", "P:2", "W:1", "W:2", "A:1", "W:3", "longer:1", "longer:2", "B:1")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.phase_balance_deg, 45, rtol=1e-10)
    np.testing.assert_allclose(answer.amplitude_balance_db, 0, atol=1e-10)


def test_matched_loss_of_a_cable_is_its_figure():
    """3.16 dB per 100 m at 1 MHz times sqrt(f) plus 0.01 times f: 20 m at 400 MHz lose 13.44 dB."""
    sketch = fed(Sketch(4e8), "A")
    sketch.coax(20, 50, "c", velocity_factor=0.7, skin_db_per_100m=3.16, dielectric_db_per_100m=0.01)
    sketch.join("radio:1", "c:1", "c:2", "A:1")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.harness_loss_db, 13.44, rtol=1e-12)
    turns = 4e8 * 20 / (0.7 * C_M_PER_S)
    expected = np.sqrt(50) / 50 * 10 ** (-13.44 / 20) * np.exp(-2j * np.pi * turns)
    np.testing.assert_allclose(answer.antenna_current_a, [[expected]], rtol=1e-11)


# Number of antennas


def test_ten_levels_of_tees_feed_1024_antennas():
    """All legs of a level are alike, so half of what enters a tee goes each way and one path stands for all."""
    sketch = fed(Sketch(4e8, 9e8, 3))
    row, length, z0 = ["radio:1"], 0.11, 70.0
    for level in range(10):
        below = []
        for n, above in enumerate(row):
            tee = sketch.add("tee", f"T{level} {n}")
            sketch.join(above, f"{tee}:1")
            for arm in (2, 3):
                leg = sketch.coax(length, z0, f"leg {level} {n} {arm}", skin_db_per_100m=10)
                sketch.join(f"{tee}:{arm}", f"{leg}:1")
                below.append(f"{leg}:2")
        row = below
    for n, above in enumerate(row):
        sketch.antenna(60 - 15j, f"A{n}")
        sketch.join(above, f"A{n}:1")
    answer = solve(sketch.plan())
    f = answer.frequency_hz
    gamma_l = length * (0.1 * np.sqrt(f / 1e6) * np.log(10) / 20 + 2j * np.pi * f / C_M_PER_S)
    z, current_ratio = np.full(3, 60 - 15j), np.ones(3, complex)
    for _ in range(10):
        current_ratio = current_ratio / (np.cosh(gamma_l) + z * np.sinh(gamma_l) / z0) / 2
        z = z0 * (z + z0 * np.tanh(gamma_l)) / (z0 + z * np.tanh(gamma_l)) / 2
    np.testing.assert_allclose(answer.port_impedance_ohm["radio:1"], z, rtol=1e-10)
    current = 2 * np.sqrt(50) / (50 + z) * current_ratio
    np.testing.assert_allclose(answer.antenna_current_a, np.repeat(current[:, None], 1024, axis=1), rtol=1e-9)
    np.testing.assert_allclose(answer.amplitude_balance_db, 0, atol=1e-9)
    np.testing.assert_allclose(answer.phase_balance_deg, 0, atol=1e-9)
    total = answer.reflected_share + answer.antenna_share.sum(axis=1) + sum(answer.part_loss_share.values())
    np.testing.assert_allclose(total, 1, atol=1e-9)
    s = answer.harness_s
    assert s.shape == (3, 1025, 1025)
    np.testing.assert_allclose(s, s.transpose(0, 2, 1), atol=1e-12)
    # A wave into the radio port ends in 1,024 equal ones, and the power of no column is more than it brought.
    np.testing.assert_allclose(s[:, 1:, 0], np.repeat(s[:, 1:2, 0], 1024, axis=1), rtol=1e-9)
    assert np.max(np.sum(np.abs(s) ** 2, axis=1)) <= 1 + 1e-9


def test_wilkinson_of_1024_outputs():
    """At its centre S_k1 = -j/32 and all else is nothing; elsewhere the arms stand side by side, alike."""
    sketch = fed(Sketch(8e8, 1e9, 2))
    sketch.add("splitter", "W", form="wilkinson", outputs=1024, centre_hz=1e9)
    sketch.join("radio:1", "W:1")
    for n in range(1024):
        sketch.antenna(50, f"A{n}")
        sketch.join(f"W:{n + 2}", f"A{n}:1")
    answer = solve(sketch.plan())
    expected = np.zeros((1025, 1025), complex)
    expected[1:, 0] = expected[0, 1:] = -1j / 32
    np.testing.assert_allclose(answer.harness_s[1], expected, atol=1e-12)
    t, z0 = np.tan(0.4 * np.pi), 50 * 32
    z_in = z0 * (50 + 1j * z0 * t) / (z0 + 50j * t) / 1024
    np.testing.assert_allclose(answer.port_impedance_ohm["W:1"][0], z_in, rtol=1e-11)
    np.testing.assert_allclose(answer.antenna_share.sum(axis=1), 1 - answer.reflected_share, rtol=1e-10)


def test_tee_of_1025_ports():
    """S_ij = 2/n - delta_ij."""
    sketch = fed(Sketch(1e9))
    sketch.add("tee", "T", ports=1025)
    sketch.join("radio:1", "T:513")
    for n in range(1024):
        sketch.antenna(50, f"A{n}")
        sketch.join(f"A{n}:1", f"T:{n + 1 if n < 512 else n + 2}")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.harness_s[0], 2 / 1025 - np.eye(1025), atol=1e-12)
    np.testing.assert_allclose(answer.port_impedance_ohm["T:513"], 50 / 1024, rtol=1e-12)
    np.testing.assert_allclose(answer.antenna_current_a, 2 * np.sqrt(50) / (50 * 1025), rtol=1e-11)


def test_harness_over_2_gb_is_refused_and_the_rest_is_not():
    """1,001 ports at 126 frequencies are 2.02e9 bytes; at 124 they would be 1.99e9."""
    sketch = fed(Sketch(1e8, 2e8, 126))
    sketch.add("tee", "T", ports=1001)
    sketch.join("radio:1", "T:1")
    for n in range(1000):
        sketch.antenna(50, f"A{n}")
        sketch.join(f"T:{n + 2}", f"A{n}:1")
    answer = solve(sketch.plan())
    with pytest.raises(SolveError):
        answer.harness_s  # noqa: B018
    assert answer.antenna_share.shape == (126, 1000)
    assert answer.mark.harness_s.shape == (1, 1001, 1001)


# Frequencies


@pytest.mark.parametrize("points", [1, 2, 10_001])
def test_one_frequency_and_ten_thousand(points):
    sketch = fed(Sketch(1e8, 1e8 if points == 1 else 3e9, points), "A")
    sketch.coax(0.83, 93, "c")
    sketch.join("radio:1", "c:1", "c:2", "A:1")
    answer = solve(sketch.plan())
    f = np.linspace(1e8, 3e9, points) if points > 1 else np.array([1e8])
    np.testing.assert_array_equal(answer.frequency_hz, f)
    t = np.tan(2 * np.pi * f * 0.83 / C_M_PER_S)
    np.testing.assert_allclose(answer.port_impedance_ohm["c:1"], 93 * (50 + 93j * t) / (93 + 50j * t), rtol=1e-9)
    assert answer.harness_s.shape == (points, 2, 2)


def test_ten_thousand_frequencies_of_many_parts():
    """Too much to be held at a time; single frequencies, the mark and a channel against the oracle."""
    top = {"mark_hz": 5.55e8, "channels": [{"name": "c", "hz": 7.77e8}]}
    sketch = fed(Sketch(3e8, 2.7e9, 10_001, **top))
    sketch.add("splitter", "H", form="branch_line", centre_hz=1e9)
    sketch.add("tee", "ring", ports=6)
    sketch.coax(0.31, 75, "loop", skin_db_per_100m=20)
    sketch.join("radio:1", "H:1", "H:2", "ring:1", "ring:2", "loop:1", "loop:2", "ring:3", "H:3", "ring:4")
    for n, port in enumerate(("H:4", "ring:5", "ring:6")):
        sketch.add("tee", f"T{n}", ports=8)
        sketch.join(port, f"T{n}:1")
        for arm in range(2, 9):
            leg = sketch.coax(0.05 * arm + 0.013 * n, 50 + 5 * arm, f"leg {n}{arm}", skin_db_per_100m=8)
            sketch.antenna(complex(40 + arm, 10 * n - 10), f"A{n}{arm}")
            sketch.join(f"T{n}:{arm}", f"{leg}:1", f"{leg}:2", f"A{n}{arm}:1")
    plan = sketch.plan()
    answer = solve(plan)
    picked = np.array([0, 1, 17, 1234, 4999, 5000, 7777, 9999, 10_000])
    for figures, at in ((answer, picked), (answer.mark, [0]), (answer.channels["c"], [0])):
        expected = oracle.driven(plan, figures.frequency_hz[at])
        scale_a = expected.scale_v[:, None] / 50
        assert np.all(np.abs(figures.antenna_current_a[at] - expected.antenna_current_a) <= 1e-9 * scale_a)
        np.testing.assert_allclose(figures.reflected_share[at], expected.reflection**2, atol=1e-9)
        near = expected.near_to_far(Port("loop", 2))
        z_ohm = expected.voltage_v[Port("loop", 2)] / near
        np.testing.assert_allclose(figures.port_impedance_ohm["loop:2"][at], z_ohm, rtol=1e-7)
        s, _ = oracle.harness_s(plan, figures.frequency_hz[at])
        np.testing.assert_allclose(figures.harness_s[at], s, atol=1e-9)
        loudest = np.abs(s[:, 1:, 1:] * ~np.eye(21, dtype=bool)).max(axis=(1, 2))
        np.testing.assert_allclose(figures.isolation_db[at], -20 * np.log10(loudest), atol=1e-8)


def test_marks_and_channels_are_solved_themselves():
    """None of them is on the grid; a loss proportional to f tells what frequency was solved."""
    sketch = fed(Sketch(1e8, 2e8, 2, mark_hz=1.234567e8, channels=[{"name": "far", "hz": 7.5e8}]), "A")
    sketch.coax(100, 50, "c", dielectric_db_per_100m=0.01)
    sketch.join("radio:1", "c:1", "c:2", "A:1")
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.harness_loss_db, [1, 2], rtol=1e-12)
    assert answer.mark.frequency_hz.tolist() == [1.234567e8]
    np.testing.assert_allclose(answer.mark.harness_loss_db, 1.234567, rtol=1e-12)
    np.testing.assert_allclose(answer.channels["far"].harness_loss_db, 7.5, rtol=1e-12)
    assert answer.channels["far"].antenna_share.shape == (1, 1)
    assert answer.channels["far"].harness_s.shape == (1, 2, 2)


# What stops a plan


def refused(sketch: Sketch) -> SolveError:
    with pytest.raises(SolveError) as caught:
        solve(sketch.plan())
    return caught.value


def test_plans_that_cannot_be_solved_name_the_part():
    sketch = Sketch(1e9)
    sketch.antenna(50, "A")
    assert refused(sketch).part is None
    for name in ("first", "second"):
        sketch.add("radio", name)
    assert refused(sketch).part in {"first", "second"}

    sketch = fed(Sketch(1e9), "A")
    sketch.add("coax", "leg", cable="not there", length_m=1)
    sketch.join("radio:1", "leg:1", "leg:2", "A:1")
    assert refused(sketch).part == "leg"


@pytest.mark.parametrize(
    "top",
    [
        {"start_hz": 0.9e8, "stop_hz": 1.5e8, "points": 3},
        {"start_hz": 1.5e8, "stop_hz": 2.1e8, "points": 3},
        {"start_hz": 1.5e8, "mark_hz": 0.5e8},
        {"start_hz": 1.5e8, "channels": [{"name": "x", "hz": 3e8}]},
        {"start_hz": 1.5e8, "sweep": {"start_hz": 1e8, "stop_hz": 4e8, "points": 3}},
    ],
)
@pytest.mark.parametrize("kind", ["antenna", "measured"])
def test_data_are_never_extrapolated(top, kind):
    """100 to 200 MHz are known; band, mark, channel or sweep asks for more."""
    file = touchstone([1e8, 2e8], np.full((2, 1, 1), 0.5 + 0j), [50])
    sketch = fed(Sketch(**top))
    fields = {"impedance": {"touchstone": file}} if kind == "antenna" else {"touchstone": file}
    sketch.add(kind, "data", **fields)
    sketch.join("radio:1", "data:1")
    assert refused(sketch).part == "data"


def test_data_between_their_points_are_straight_lines():
    """S goes from 0.2 to 0.2 + 0.4j; a quarter of the way it is 0.2 + 0.1j, and the ends themselves are covered."""
    file = touchstone([1e8, 2e8], np.array([[[0.2 + 0j]], [[0.2 + 0.4j]]]), [50])
    sketch = fed(Sketch(1e8, 2e8, 5))
    sketch.add("antenna", "A", impedance={"touchstone": file})
    sketch.join("radio:1", "A:1")
    answer = solve(sketch.plan())
    s = 0.2 + np.array([0, 0.1, 0.2, 0.3, 0.4]) * 1j
    np.testing.assert_allclose(answer.reflected_share, np.abs(s) ** 2, rtol=1e-13)
    np.testing.assert_allclose(answer.antenna_current_a[:, 0], (1 - s) / np.sqrt(50), rtol=1e-13)


# The answer as an object


def every_array(answer):
    yield from (answer.frequency_hz, answer.antenna_current_a, answer.antenna_voltage_v, answer.antenna_share)
    yield from (answer.return_loss_db, answer.amplitude_balance_db, answer.phase_balance_deg, answer.harness_loss_db)
    yield from (answer.reflected_share, answer.harness_s, answer.isolation_db)
    yield from answer.port_impedance_ohm.values()
    yield from answer.part_loss_share.values()


def test_arrays_are_read_only_and_ports_must_exist():
    sketch = fed(Sketch(1e9, 2e9, 3, channels=[{"name": "c", "hz": 1e9}]), "AB")
    sketch.add("tee", "T", ports=4)
    sketch.join("radio:1", "T:1", "T:2", "A:1", "T:3", "B:1")
    answer = solve(sketch.plan())
    for figures in (answer, answer.mark, answer.channels["c"]):
        for array in every_array(figures):
            with pytest.raises(ValueError, match="read-only"):
                array[...] = 0
    assert set(answer.port_impedance_ohm) == {"radio:1", "A:1", "B:1", "T:1", "T:2", "T:3", "T:4"}
    assert set(answer.part_loss_share) == {"T"}
    with pytest.raises(KeyError):
        answer.port_impedance_ohm["T:5"]


def test_a_topology_used_again_gives_the_same_answer():
    """After a change of length it still fits; after one of the joins it does not, and is not used."""
    sketch = fed(Sketch(4e8, 9e8, 7), "AB")
    for name in ("T1", "T2"):
        sketch.add("tee", name)
    for name in ("a", "b", "leg A", "leg B"):
        sketch.coax(0.3, 75, name, skin_db_per_100m=5)
    sketch.join("radio:1", "T1:1", "T1:2", "a:1", "T1:3", "b:1", "a:2", "T2:1", "b:2", "T2:2", "T2:3", "leg A:1")
    sketch.join("leg A:2", "A:1")
    first = sketch.plan()
    topology = compile_plan(first)
    longer = tuple(
        dataclasses.replace(p, part=dataclasses.replace(p.part, length_m=0.5))
        if isinstance(p.part, Coax) and p.id != "b"
        else p
        for p in first.parts
    )
    again = dataclasses.replace(first, parts=longer)
    sketch.join("leg B:1", "B:1")
    other = sketch.plan()
    for plan in (first, again, other):
        for one, two in zip(every_array(solve(plan, topology)), every_array(solve(plan)), strict=True):
            np.testing.assert_array_equal(one, two)
    assert np.abs(solve(again).harness_s - solve(first).harness_s).max() > 0.1
