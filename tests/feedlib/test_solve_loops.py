"""Loops whose circulating current is not determined are refused, and only those."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from feedlib import SolveError, solve
from feedlib.plan import Plan
from tests import oracle
from tests.plans import Sketch

C_M_PER_S = 299_792_458.0


def fed(antennas: str = "") -> Sketch:
    """A sketch with a radio and antennas of 50 ohm by their letters."""
    sketch = Sketch(1e9)
    sketch.add("radio", "radio")
    for name in antennas:
        sketch.antenna(50, name)
    return sketch


def refused(plan: Plan) -> SolveError:
    with pytest.raises(SolveError) as caught:
        solve(plan)
    return caught.value


def loop_between_tees(*sections: str) -> Sketch:
    """Two tees tied by two sections: each "join", "coax", "pad" or "series"; all without length, loss or impedance."""
    sketch = fed("A")
    for name in ("T1", "T2"):
        sketch.add("tee", name)
    sketch.join("radio:1", "T1:1", "T2:1", "A:1")
    for arm, section in enumerate(sections, 2):
        name = f"{section} {arm}"
        if section == "join":
            sketch.join(f"T1:{arm}", f"T2:{arm}")
            continue
        if section == "coax":
            sketch.coax(0, 50, name, skin_db_per_100m=10)
        elif section == "pad":
            sketch.add("pad", name, loss_db=0)
        else:
            sketch.add("lumped", name, place="series", r_ohm=0)
        sketch.join(f"T1:{arm}", f"{name}:2", f"{name}:1", f"T2:{arm}")
    return sketch


@pytest.mark.parametrize("sections", [("join", "join"), ("coax", "coax"), ("coax", "join"), ("pad", "series")])
def test_loop_without_length_is_refused_with_a_part_in_it(sections):
    in_loop = {"T1", "T2", *(f"{s} {n}" for n, s in enumerate(sections, 2))}
    assert refused(loop_between_tees(*sections).plan()).part in in_loop


def test_tee_tied_to_itself_is_refused():
    sketch = fed("A")
    sketch.add("tee", "T", ports=4)
    sketch.join("radio:1", "T:1", "T:2", "T:4", "T:3", "A:1")
    assert refused(sketch.plan()).part == "T"


def test_two_shorts_on_one_tee_are_refused():
    sketch = fed()
    sketch.add("tee", "T")
    for name in ("X", "Y"):
        sketch.add("load", name, impedance_ohm=0j)
    sketch.join("radio:1", "T:1", "T:2", "X:1", "T:3", "Y:1")
    assert refused(sketch.plan()).part in {"T", "X", "Y"}


def test_a_millimetre_of_coax_makes_a_loop_determined():
    """Beside a join, both its ends are at one voltage: an admittance of 2 tanh(gamma l/2)/Z0."""
    sketch = loop_between_tees("join", "coax")
    next(p for p in sketch.parts if p["kind"] == "coax")["length_m"] = 0.001
    answer = solve(sketch.plan())
    half_nepers = 0.001 / 2 * 10 * np.sqrt(1000) / 100 * np.log(10) / 20
    loop_s = 2 * np.tanh(half_nepers + 1j * np.pi * 1e9 * 0.001 / C_M_PER_S) / 50
    np.testing.assert_allclose(answer.port_impedance_ohm["radio:1"], 1 / (1 / 50 + loop_s), rtol=1e-9)


@pytest.mark.parametrize(("ratio", "determined"), [(1, False), (-1, True), (3, True)])
def test_transformer_beside_a_join(ratio, determined):
    """A ratio of 1 leaves a current free; another one shorts both tees."""
    sketch = fed("A")
    for name in ("T1", "T2"):
        sketch.add("tee", name)
    sketch.add("transformer", "X", ratio=ratio)
    sketch.join("radio:1", "T1:1", "T1:2", "T2:2", "T1:3", "X:1", "X:2", "T2:3", "T2:1", "A:1")
    if not determined:
        assert refused(sketch.plan()).part in {"T1", "T2", "X"}
        return
    answer = solve(sketch.plan())
    np.testing.assert_allclose(answer.reflected_share, 1, rtol=1e-12)
    np.testing.assert_allclose(answer.antenna_current_a, 0, atol=1e-12)


def test_loop_that_neither_radio_nor_antenna_reaches_does_no_harm():
    sketch = fed("A")
    sketch.add("tee", "T")
    sketch.coax(0, 50, "ring")
    sketch.join("radio:1", "A:1", "T:1", "ring:1", "ring:2", "T:2")
    np.testing.assert_allclose(solve(sketch.plan()).antenna_share, 1, rtol=1e-13)


@st.composite
def ideal_nets(draw: st.DrawFn) -> Plan:
    """Parts without length or loss, resistors, shorts and two antennas, their ports tied at random."""
    sketch = fed("AB")
    ports = ["radio:1", "A:1", "B:1"]
    for _ in range(draw(st.integers(1, 8))):
        kind = draw(st.sampled_from(["tee", "coax", "transformer", "series", "shunt", "load", "pad"]))
        count = 2
        if kind == "tee":
            count = draw(st.integers(3, 4))
            part = sketch.add("tee", ports=count)
        elif kind == "coax":
            part = sketch.coax(0)
        elif kind == "transformer":
            part = sketch.add("transformer", ratio=draw(st.sampled_from([1, -1, 2, 0.5, -2])))
        elif kind in ("series", "shunt"):
            part = sketch.add("lumped", place=kind, r_ohm=draw(st.sampled_from([0, 20, 50])))
        elif kind == "load":
            count = 1
            part = sketch.add("load", impedance_ohm=draw(st.sampled_from([0j, 0j, 30 + 5j])))
        else:
            part = sketch.add("pad", loss_db=draw(st.sampled_from([0, 0, 3])))
        ports += [f"{part}:{n}" for n in range(1, count + 1)]
    mixed = draw(st.permutations(ports))
    sketch.join(*mixed[: 2 * draw(st.integers(0, len(mixed) // 2))])
    return sketch.plan()


@settings(max_examples=300, deadline=None)
@given(ideal_nets())
def test_refused_are_just_the_nets_whose_equations_are_singular(plan):
    at = np.array([1e9])
    condition = max(oracle.driven(plan, at).condition, oracle.harness_s(plan, at)[1])
    assert condition < 1e6 or condition > 1e12
    if condition > 1e12:
        assert refused(plan).part in {p.id for p in plan.parts}
    else:
        answer = solve(plan)
        expected = oracle.driven(plan, at)
        scale_a = expected.scale_v[:, None] / 50
        assert np.all(np.abs(answer.antenna_current_a - expected.antenna_current_a) <= 1e-9 * scale_a)
        np.testing.assert_allclose(answer.harness_s, oracle.harness_s(plan, at)[0], rtol=0, atol=1e-9)
