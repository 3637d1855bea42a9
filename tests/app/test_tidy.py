"""The tidy layout: no body on another, no join across another, from the radio to the right."""

from __future__ import annotations

import dataclasses
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.editing.tidy import tidied
from app.editing.tree import tree_with, trees_of
from feedlib import Plan, read_plan, solve
from feedlib.parts import Coax, CoaxEnd, Radio
from feedlib.plan import Placed, Port
from tests.app.laid_out import crossing, measured, overlapping
from tests.plans import Sketch, random_plans

EXAMPLES = sorted((Path(__file__).parents[2] / "assets" / "examples").glob("*.feedplan"))


def tidy(plan: Plan) -> Plan:
    """The plan laid out by the sizes of the bench's pictures."""
    return tidied(plan, *measured(plan))


def at(plan: Plan, part_id: str) -> tuple[float, float]:
    return plan.placed(part_id).at


def grows(plan: Plan) -> bool:
    """Whether every part stands to the right of the one that it hangs at."""
    tree = trees_of(plan)[0]
    return all(at(plan, own.part)[0] > at(plan, near.part)[0] for near, own in tree.up.values())


# Any tree

ANY_WAY = ("coax", "coax", "tee", "pad", "lumped", "resistive")
"""The same from both sides: joined by any port. The others are joined by port 1."""


def add_part(draw: st.DrawFn, sketch: Sketch) -> tuple[str, int, list[int]]:
    """A random part: its id, its port towards the radio, and its other ports."""
    kind = draw(st.sampled_from([*ANY_WAY, "wilkinson", "branch_line", "rat_race", "transformer"]))
    fields: dict[str, Any] = {}
    if kind == "coax":
        length = st.floats(0, 30) if draw(st.booleans()) else st.sampled_from([0.0, 0.06, 0.25])
        part_id, ports = sketch.coax(draw(length)), 2
    elif kind == "tee":
        ports = draw(st.sampled_from([3, 3, 3, 4, 5, 12]))
        part_id = sketch.add("tee", ports=ports)
    elif kind in ("pad", "lumped", "transformer"):
        fields = {"pad": {"loss_db": 3}, "lumped": {"place": "shunt", "c_f": 1e-12}, "transformer": {"ratio": 2}}[kind]
        part_id, ports = sketch.add(kind, **fields), 2
    else:
        outputs = draw(st.integers(2, 5)) if kind in ("resistive", "wilkinson") else 2
        ports = outputs + 1 if kind in ("resistive", "wilkinson") else 4
        part_id = sketch.add("splitter", form=kind, centre_hz=868e6, outputs=outputs)
    near = draw(st.integers(1, ports)) if kind in ANY_WAY else 1
    if kind in ("branch_line", "rat_race"):
        near = draw(st.sampled_from([1, 4]))
    return part_id, near, [n for n in range(1, ports + 1) if n != near]


@st.composite
def trees(draw: st.DrawFn) -> Plan:
    """A random tree of up to 25 parts at the radio, its last ports open, in loads or in antennas."""
    sketch = Sketch()
    free = [f"{sketch.add('radio', 'radio')}:1"]
    for _ in range(draw(st.integers(0, 25))):
        if not free:
            break
        port = free.pop(draw(st.integers(0, len(free) - 1)))
        end = draw(st.integers(0, 7))
        if end == 0:
            part_id, near, others = sketch.antenna(), 1, list[int]()
        elif end == 1:
            part_id, near, others = sketch.add("load", impedance_ohm=50 + 0j), 1, list[int]()
        else:
            part_id, near, others = add_part(draw, sketch)
        pair = (port, f"{part_id}:{near}")
        sketch.join(*(pair if draw(st.booleans()) else pair[::-1]))
        free += [f"{part_id}:{n}" for n in others]
    plan = sketch.plan()
    return dataclasses.replace(plan, parts=tuple(draw(st.permutations(plan.parts))))


@given(trees())
def test_a_tree_is_laid_out_without_overlap_or_crossing(plan: Plan) -> None:
    after = tidy(plan)
    assert overlapping(after) == []
    assert crossing(after) == []
    assert grows(after)
    assert at(after, "radio") == (0.0, 0.0)


@given(random_plans())
def test_any_plan_is_laid_out_on_the_grid_without_overlap(plan: Plan) -> None:
    """Rings, loose pieces and parts joined from behind as well."""
    after = tidy(plan)
    assert overlapping(after) == []
    assert all(x % 12 == 0 and y % 12 == 0 for x, y in (p.at for p in after.parts))
    assert grows(after)
    assert tidy(after) == after
    reached = set(trees_of(after)[0].order)
    lowest = max(at(after, i)[1] for i in reached)
    assert all(p.at[1] > lowest for p in after.parts if p.id not in reached)


@given(random_plans())
def test_a_tidy_plan_is_the_same_harness(plan: Plan) -> None:
    """Turned parts and all: equal currents in all antennas, by the solver."""
    before, after = solve(plan), solve(tidy(plan))
    assert after.antenna_ids == before.antenna_ids
    radio = plan.placed(trees_of(plan)[0].root).part
    assert isinstance(radio, Radio)
    tolerance_a = 1e-9 * max(1.0, np.sqrt(radio.power_w / 1.0))  # against the current into 1 ohm
    np.testing.assert_allclose(after.antenna_current_a, before.antenna_current_a, rtol=1e-7, atol=tolerance_a)


@given(random_plans(), st.randoms(use_true_random=False))
def test_the_layout_does_not_hang_on_where_parts_stood(plan: Plan, random: Any) -> None:
    strewn = tuple(
        dataclasses.replace(p, at=(random.uniform(-9e3, 9e3), random.uniform(-9e3, 9e3))) for p in plan.parts
    )
    assert tidy(dataclasses.replace(plan, parts=strewn)) == tidy(plan)


# Single rules


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda p: p.stem)
def test_an_example_keeps_its_joins(path: Path) -> None:
    plan = read_plan(path)
    after = tidy(plan)
    assert (overlapping(after), crossing(after), grows(after)) == ([], [], True)
    assert dataclasses.replace(after, parts=plan.parts) == plan


def star(arms: int) -> Sketch:
    """A radio at a T joint with so many arms of one coax and one antenna."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    sketch.add("tee", "T", ports=arms + 1)
    sketch.join("radio:1", "T:1")
    for n in range(arms):
        sketch.coax(0.05 + 0.3 * (n % 3), part_id=f"leg {n}")
        sketch.antenna(part_id=f"A{n}")
        sketch.join(f"T:{n + 2}", f"leg {n}:1", f"leg {n}:2", f"A{n}:1")
    return sketch


@pytest.mark.parametrize("arms", [2, 3, 8, 40])
def test_leaves_stand_in_port_order_and_apart(arms: int) -> None:
    plan = tidy(star(arms).plan())
    rows = [at(plan, f"A{n}")[1] for n in range(arms)]
    assert all(b - a >= 140 for a, b in pairwise(rows))
    assert [at(plan, f"leg {n}")[1] for n in range(arms)] == rows
    assert sum(rows) == pytest.approx(0, abs=12 * arms)  # the radio looks at their middle
    assert crossing(plan) == []


def test_gaps_are_wider_beside_a_joint() -> None:
    sketch = star(2)
    sketch.coax(0.1, part_id="tail")
    sketch.joins.remove(["leg 0:2", "A0:1"])
    sketch.join("leg 0:2", "tail:1", "tail:2", "A0:1")
    plan = tidy(sketch.plan())
    sizes, _ = measured(plan)

    def room(left: str, right: str) -> float:
        return at(plan, right)[0] - at(plan, left)[0] - (sizes[left][0] + sizes[right][0]) / 2

    assert 110 <= room("radio", "T") < 122
    assert 110 <= room("T", "leg 0") < 122
    assert 60 <= room("leg 1", "A1") < 72
    assert 60 <= room("tail", "A0") < 72


def test_sections_drawn_backwards_are_turned_about_with_their_ends() -> None:
    sketch = Sketch()
    sketch.add("radio", "radio")
    plug = {"z0_ohm": 40, "velocity_factor": 0.8, "length_m": 0.01}
    sketch.coax(0.1, part_id="leg", ends=[plug, None])
    sketch.antenna(part_id="A")
    sketch.join("radio:1", "leg:2", "A:1", "leg:1")
    plan = tidy(sketch.plan())
    assert plan.joins == ((Port("radio", 1), Port("leg", 1)), (Port("A", 1), Port("leg", 2)))
    leg = plan.placed("leg").part
    assert isinstance(leg, Coax)
    assert leg.ends == (None, CoaxEnd(z0_ohm=40, velocity_factor=0.8, length_m=0.01))


def test_a_section_that_its_matched_set_holds_fast_is_not_turned() -> None:
    """Turned, its ends would differ from those of the others in the set."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    plug = {"z0_ohm": 40, "velocity_factor": 0.8, "length_m": 0.01}
    sketch.coax(0.1, part_id="leg", ends=[plug, None], matched_set="A")
    sketch.join("radio:1", "leg:2")
    plan = sketch.plan()
    assert tidy(plan).joins == plan.joins


def test_a_part_with_fields_of_a_later_version_is_not_turned() -> None:
    """What these mean may hang on the direction."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    sketch.coax(0.1, part_id="leg", taper="towards port 2")
    sketch.join("radio:1", "leg:2")
    plan = sketch.plan()
    assert tidy(plan).joins == plan.joins


def test_a_tall_part_keeps_within_its_own_rows() -> None:
    """A T joint of many ports, with an antenna above all and a hybrid with a large tree at its fourth port."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    sketch.add("tee", "first")
    sketch.add("tee", "tall", ports=40)
    sketch.add("splitter", "hybrid", form="branch_line", centre_hz=868e6)
    sketch.add("tee", "wide", ports=9)
    sketch.antenna(part_id="beside")
    sketch.antenna(part_id="upper")
    sketch.antenna(part_id="lower")
    sketch.join("radio:1", "first:1", "first:2", "beside:1", "first:3", "tall:1", "tall:2", "upper:1")
    sketch.join("tall:40", "hybrid:1", "hybrid:4", "wide:1", "hybrid:2", "lower:1")
    for n in range(8):
        sketch.join(f"wide:{n + 2}", f"{sketch.antenna(part_id=f'A{n}')}:1")
    plan = tidy(sketch.plan())
    assert overlapping(plan) == []
    assert crossing(plan) == []


def test_a_tee_faces_the_radio_with_its_first_port() -> None:
    sketch = Sketch()
    sketch.add("radio", "radio")
    sketch.add("tee", "T")
    sketch.antenna(part_id="A")
    sketch.antenna(part_id="B")
    sketch.join("radio:1", "T:3", "T:1", "A:1", "T:2", "B:1")
    plan = tidy(sketch.plan())
    ties = {frozenset(map(str, join)) for join in plan.joins}
    assert ties == {frozenset(pair) for pair in (("radio:1", "T:1"), ("T:3", "A:1"), ("T:2", "B:1"))}
    assert at(plan, "B")[1] < at(plan, "A")[1]


def test_what_hangs_at_the_left_of_a_hybrid_stands_below_its_legs() -> None:
    sketch = Sketch()
    sketch.add("radio", "radio")
    sketch.add("splitter", "hybrid", form="branch_line", centre_hz=868e6)
    sketch.add("load", "termination", impedance_ohm=50 + 0j)
    for name in ("A", "B"):
        sketch.antenna(part_id=name)
    sketch.join("radio:1", "hybrid:1", "hybrid:4", "termination:1", "hybrid:2", "A:1", "hybrid:3", "B:1")
    plan = tidy(sketch.plan())
    assert at(plan, "A")[1] < at(plan, "hybrid")[1] < at(plan, "B")[1] < at(plan, "termination")[1]
    assert crossing(plan) == []


@pytest.mark.parametrize("arms", [("2", "3"), ("3", "2")])
@pytest.mark.parametrize("near", ["1", "2"])
def test_what_closes_a_ring_stands_between_its_neighbours(arms: tuple[str, str], near: str) -> None:
    """T with two arms that end in T joints of their own; a coax ties these together, by whichever ports."""
    sketch = star(2)
    across, away = arms
    for n in (0, 1):
        sketch.add("tee", f"end {n}")
        sketch.joins.remove([f"leg {n}:2", f"A{n}:1"])
        sketch.join(f"leg {n}:2", f"end {n}:1", f"end {n}:{away}", f"A{n}:1")
    sketch.coax(0.1, part_id="across")
    sketch.join(f"end 0:{across}", f"across:{near}", f"across:{3 - int(near)}", f"end 1:{across}")
    plan = tidy(sketch.plan())
    assert at(plan, "end 0")[1] < at(plan, "across")[1] < at(plan, "end 1")[1]
    assert at(plan, "A0")[1] < at(plan, "across")[1] < at(plan, "A1")[1]
    assert at(plan, "across")[0] > at(plan, "end 0")[0]
    assert overlapping(plan) == []


def test_loose_pieces_stand_below_in_rows_and_look_right() -> None:
    sketch = star(2)
    for n in range(12):
        sketch.coax(0.2, part_id=f"loose {n}")
        sketch.antenna(part_id=f"L{n}")
        sketch.join(f"L{n}:1", f"loose {n}:1")  # backwards
    plan = tidy(sketch.plan())
    assert overlapping(plan) == []
    assert all(at(plan, f"loose {n}")[0] < at(plan, f"L{n}")[0] for n in range(12))
    assert all(at(plan, f"loose {n}")[1] > at(plan, "A1")[1] for n in range(12))
    rows = {at(plan, f"loose {n}")[1] for n in range(12)}
    assert 1 < len(rows) < 12


def test_plans_without_radio_and_without_parts() -> None:
    assert tidy(Sketch().plan()) == Sketch().plan()
    sketch = Sketch()
    for n in range(3):
        sketch.add("tee", f"T{n}")
    sketch.join("T0:2", "T1:1")
    plan = tidy(sketch.plan())
    assert overlapping(plan) == []
    assert at(plan, "T0")[0] < at(plan, "T1")[0]


def test_a_thousand_parts() -> None:
    """A binary tree, and one long chain, which nothing may walk by recursion."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    free = ["radio:1"]
    for n in range(333):
        sketch.coax(0.1, part_id=f"c{n}")
        sketch.add("tee", f"T{n}")
        sketch.join(free.pop(0), f"c{n}:1", f"c{n}:2", f"T{n}:1")
        free += [f"T{n}:2", f"T{n}:3"]
    for n, port in enumerate(free):
        sketch.antenna(part_id=f"A{n}")
        sketch.join(port, f"A{n}:1")
    assert len(sketch.parts) == 1001
    plan = tidy(sketch.plan())
    assert overlapping(plan) == []
    assert grows(plan)
    chain = Sketch()
    last = f"{chain.add('radio', 'radio')}:1"
    for n in range(1500):
        chain.add("pad", f"p{n}", loss_db=0.1)
        chain.join(last, f"p{n}:1")
        last = f"p{n}:2"
    assert {y for _, y in (p.at for p in tidy(chain.plan()).parts)} == {0.0}


def test_a_loose_harness_hangs_at_its_joint() -> None:
    """Not at the antenna that comes first in the plan."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    for name in "ABC":
        sketch.antenna(part_id=name)
    sketch.add("tee", "T")
    sketch.join("A:1", "T:1", "B:1", "T:2", "C:1", "T:3")
    plan = sketch.plan()
    assert trees_of(plan)[1].root == "T"


def test_the_root_of_a_plan_is_its_radio() -> None:
    plan = star(3).plan()
    assert trees_of(plan)[0].root == "radio"
    assert tree_with(plan, "A2").root == "radio"
    assert tree_with(plan, "A2").parent("radio") is None
    loose = dataclasses.replace(plan, parts=(*plan.parts, Placed("other", Radio())))
    assert [tree.root for tree in trees_of(loose)] == ["radio", "other"]
