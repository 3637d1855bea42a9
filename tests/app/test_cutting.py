"""Cuts by electrical length, equal phases, and plans moved to another frequency."""

from __future__ import annotations

import dataclasses
import math
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given

from app.editing.cutting import CUTS_DEG, cut_length_m, cut_to, electrical_deg, moved_to_frequency, same_phase_as
from app.editing.matched import matched
from feedlib import Plan, PlanError, SolveError, solve
from feedlib.parts import Antenna, AntennaImpedance, Coax, CoaxEnd, Load, Lumped, Measured, Pad, Part, Splitter, Tee
from feedlib.plan import Band, Cable, Channel
from tests.plans import Sketch, frequency, passive_s, random_plans, touchstone

C = 299_792_458.0
PLUG = {"z0_ohm": 50, "velocity_factor": 0.8, "length_m": 0.012}


def chain(mark_hz: float = 868e6, **fields: Any) -> Plan:
    """radio - near (vf 0.66) - far (vf 0.8) - antenna, matched and lossless."""
    sketch = Sketch(0.9 * mark_hz, 1.1 * mark_hz, 11, mark_hz=mark_hz)
    sketch.add("radio", "radio")
    sketch.coax(0.4, part_id="near", velocity_factor=0.66, **fields)
    sketch.coax(0.3, part_id="far", velocity_factor=0.8)
    sketch.antenna(part_id="A")
    sketch.join("radio:1", "near:1", "near:2", "far:1", "far:2", "A:1")
    return sketch.plan()


def coax(plan: Plan, part_id: str) -> Coax:
    part = plan.placed(part_id).part
    assert isinstance(part, Coax)
    return part


# Cut to


def test_a_quarter_wave_of_solid_polyethylene_at_144_mhz() -> None:
    """c/144 MHz = 2.081892 m; times 0.66 / 4 = 343.5 mm."""
    assert cut_length_m(Cable(z0_ohm=50, velocity_factor=0.66), 90, 144e6) == pytest.approx(0.3435122, abs=1e-7)


@pytest.mark.parametrize(("name", "waves"), [("quarter wave", 1), ("half wave", 2), ("3/4 wave", 3), ("5/4 wave", 5)])
def test_the_usual_cuts_in_quarter_waves(name: str, waves: int) -> None:
    plan = cut_to(chain(), "near", CUTS_DEG[name])
    assert coax(plan, "near").length_m == pytest.approx(waves * 0.66 * C / 868e6 / 4, rel=1e-14)
    assert electrical_deg(plan, coax(plan, "near"), 868e6) == pytest.approx(90 * waves, abs=1e-9)
    assert electrical_deg(plan, coax(plan, "near"), 434e6) == pytest.approx(45 * waves, abs=1e-9)
    assert coax(plan, "far") == coax(chain(), "far")


@pytest.mark.parametrize("degrees", [0.0, 12.5, 90.0, 360.0])
def test_a_matched_wave_lags_by_what_was_cut(degrees: float) -> None:
    """By the solver: V2 = V1 exp(-j theta) on a matched line."""
    plan = cut_to(cut_to(chain(), "near", degrees), "far", 0)
    (current,) = solve(plan).mark.antenna_current_a[0]
    assert np.angle(current * np.exp(1j * np.radians(degrees))) == pytest.approx(0, abs=1e-9)


def test_the_ends_come_on_top_of_a_cut() -> None:
    plan = cut_to(cut_to(chain(ends=[PLUG, PLUG]), "near", 90), "far", 0)
    assert electrical_deg(plan, coax(plan, "near"), 868e6) == pytest.approx(90)
    (current,) = solve(plan).mark.antenna_current_a[0]
    ends_deg = 360 * 868e6 * 2 * 0.012 / (0.8 * C)
    assert np.degrees(np.angle(current)) == pytest.approx(-90 - ends_deg)


def test_a_cut_reaches_the_whole_matched_set_by_its_own_cable() -> None:
    plan = cut_to(matched(chain(), ["near", "far"]), "far", 180)
    assert coax(plan, "near").length_m == coax(plan, "far").length_m == pytest.approx(0.66 * C / 868e6 / 2)


def test_what_cannot_be_cut() -> None:
    with pytest.raises(PlanError, match="only coax"):
        cut_to(chain(), "A", 90)
    with pytest.raises(PlanError, match="length_m"):
        cut_to(chain(), "near", -1)
    bare = dataclasses.replace(chain(), cables={})
    with pytest.raises(PlanError, match='"near" is not in the plan'):
        cut_to(bare, "near", 90)
    with pytest.raises(PlanError, match="not in the plan"):
        electrical_deg(bare, coax(bare, "near"), 1e9)


# Same phase


def lags_deg(plan: Plan, part_id: str, frequency_hz: float) -> float:
    """How much a matched wave lags behind through one section, ends and all, from the section's own lines."""
    part = coax(plan, part_id)
    return sum(360 * frequency_hz * line.delay_s for line in part.lines(plan.cables[part.cable]))


def test_other_cable_same_phase() -> None:
    """0.3 m at 0.8 is as long as 0.3 * 0.66 / 0.8 m at 0.66."""
    plan = same_phase_as(chain(), "near", "far")
    assert coax(plan, "near").length_m == pytest.approx(0.2475, rel=1e-14)
    assert coax(plan, "far").length_m == 0.3


def test_ends_count_for_the_phase() -> None:
    plan = same_phase_as(chain(ends=[PLUG, None]), "near", "far")
    assert coax(plan, "near").length_m == pytest.approx(0.2475 - 0.012 / 0.8 * 0.66, rel=1e-13)
    for frequency_hz in (1e8, 868e6):
        assert lags_deg(plan, "near", frequency_hz) == pytest.approx(lags_deg(plan, "far", frequency_hz), rel=1e-12)
    plan = same_phase_as(plan, "far", "near")
    assert coax(plan, "far").length_m == pytest.approx(0.3)


def test_ends_that_are_too_long_already() -> None:
    plan = cut_to(chain(ends=[PLUG, None]), "far", 5)
    with pytest.raises(PlanError, match=r'"near".*ends alone'):
        same_phase_as(plan, "near", "far")


def test_same_phase_reaches_the_matched_set() -> None:
    sketch = Sketch(868e6)
    for name, length in (("a", 0.1), ("b", 0.1), ("c", 0.5)):
        sketch.coax(length, part_id=name, velocity_factor=0.7)
    plan = same_phase_as(matched(sketch.plan(), ["a", "b"]), "a", "c")
    assert [coax(plan, i).length_m for i in "abc"] == [pytest.approx(0.5), pytest.approx(0.5), 0.5]


# Another frequency


def test_every_kind_of_part_at_half_the_frequency() -> None:
    sketch = Sketch(
        860e6, 870e6, 11, mark_hz=868e6, channels=[{"name": "up", "hz": 868e6}, {"name": "down", "hz": 864e6}],
        sweep={"start_hz": 800e6, "stop_hz": 900e6, "points": 21}, limits={"return_loss_db": 20},
    )  # fmt: skip
    sketch.add("radio", "radio", impedance_ohm=50 + 3j)
    sketch.coax(0.4, part_id="leg", velocity_factor=0.66, skin_db_per_100m=3, ends=[PLUG, None])
    sketch.add("splitter", "wilkinson", form="wilkinson", centre_hz=868e6)
    sketch.add("splitter", "resistive", form="resistive")
    sketch.add("lumped", "lumped", place="series", l_h=8e-9, c_f=3e-12, r_ohm=7)
    sketch.add("lumped", "resistor", place="shunt", r_ohm=7)
    sketch.antenna(40 - 10j, "fixed")
    sketch.add("antenna", "resonant", impedance={"resonant": {"r_ohm": 48, "f0_hz": 866e6, "q": 8}})
    sketch.add("tee", "tee")
    sketch.add("pad", "pad", loss_db=3)
    sketch.add("transformer", "transformer", ratio=2)
    sketch.add("load", "load", impedance_ohm=50 + 1j)
    before = sketch.plan()
    after, left = moved_to_frequency(before, 434e6)
    assert left == ()
    assert after.band == Band(start_hz=430e6, stop_hz=435e6, points=11, mark_hz=434e6)
    assert after.sweep is not None
    assert (after.sweep.start_hz, after.sweep.stop_hz, after.sweep.points) == (400e6, 450e6, 21)
    assert [(c.name, c.hz) for c in after.channels] == [("up", 434e6), ("down", 432e6)]
    changed: dict[str, Part] = {
        "leg": Coax(cable="leg", length_m=0.8, ends=(CoaxEnd(z0_ohm=50, velocity_factor=0.8, length_m=0.024), None)),
        "wilkinson": Splitter(form="wilkinson", centre_hz=434e6),
        "lumped": Lumped(place="series", l_h=16e-9, c_f=6e-12, r_ohm=7),
    }
    for placed in before.parts:
        if placed.id == "resonant":
            continue
        assert after.placed(placed.id).part == changed.get(placed.id, placed.part)
    resonant = after.placed("resonant").part
    assert isinstance(resonant, Antenna)
    assert resonant.impedance.resonant is not None
    assert (resonant.impedance.resonant.f0_hz, resonant.impedance.resonant.q) == (433e6, 8)
    assert (after.cables, after.joins, after.limits) == (before.cables, before.joins, before.limits)


def test_measured_data_cannot_move_and_is_named() -> None:
    sketch = Sketch()
    data = touchstone([8e8, 9e8], passive_s(1, 1, 2, 0.5, True), [50.0])
    sketch.add("measured", "M", touchstone=data)
    sketch.add("antenna", "A", impedance={"touchstone": data})
    sketch.antenna(part_id="B")
    before = sketch.plan()
    after, left = moved_to_frequency(before, 1e8)
    assert left == ("M", "A")
    assert after.parts == before.parts


@pytest.mark.parametrize("mark_hz", [0.0, -1.0, math.nan, math.inf])
def test_a_mark_that_cannot_be_is_refused(mark_hz: float) -> None:
    with pytest.raises(PlanError, match="mark_hz"):
        moved_to_frequency(chain(), mark_hz)


@pytest.mark.parametrize("mark_hz", [1e300, 1e-300])
def test_a_frequency_beyond_all_numbers_is_refused(mark_hz: float) -> None:
    plan = chain()
    wide = dataclasses.replace(plan, band=dataclasses.replace(plan.band, start_hz=1e-20, stop_hz=1e20))
    with pytest.raises(PlanError):
        moved_to_frequency(wide, mark_hz)


def unmeasured(part: Part) -> Part:
    """A part without data that can stand in for a measured one."""
    if isinstance(part, Measured):
        stand_ins = {1: Load(impedance_ohm=20 + 5j), 2: Pad(loss_db=2, z0_ohm=40), 3: Tee()}
        return stand_ins[part.ports]
    if isinstance(part, Antenna) and part.impedance.touchstone is not None:
        return dataclasses.replace(part, impedance=AntennaImpedance(fixed_ohm=30 + 5j))
    return part


def with_loss_kept(cable: Cable, longer: float) -> Cable:
    """A cable whose sections, cut longer at a lower frequency by the same ratio, lose what they lost before."""
    return dataclasses.replace(cable, skin_db_per_100m=cable.skin_db_per_100m / math.sqrt(longer))


@given(random_plans(), frequency())
def test_a_moved_plan_does_at_each_new_frequency_what_it_did_at_the_old_one(plan: Plan, mark_hz: float) -> None:
    parts = tuple(dataclasses.replace(p, part=unmeasured(p.part)) for p in plan.parts)
    plan = dataclasses.replace(plan, parts=parts)
    after, left = moved_to_frequency(plan, mark_hz)
    assert left == ()
    ratio = mark_hz / plan.band.marked_hz
    cables = {name: with_loss_kept(cable, 1 / ratio) for name, cable in after.cables.items()}
    after = dataclasses.replace(after, cables=cables)
    try:
        old = solve(plan)
    except SolveError:
        assume(False)
    new = solve(after)
    assert after.band.mark_hz == mark_hz
    np.testing.assert_allclose(new.frequency_hz, old.frequency_hz * ratio, rtol=1e-14)
    np.testing.assert_allclose(new.mark.antenna_share, old.mark.antenna_share, rtol=1e-6, atol=1e-9)
    np.testing.assert_allclose(new.antenna_share, old.antenna_share, rtol=1e-6, atol=1e-9)


@given(random_plans(), frequency())
def test_there_and_back_is_where_it_was(plan: Plan, mark_hz: float) -> None:
    channels = (Channel(name="at the mark", hz=plan.band.marked_hz),)
    there, _ = moved_to_frequency(dataclasses.replace(plan, channels=channels), mark_hz)
    assert there.band.mark_hz == there.channels[0].hz == mark_hz
    back, _ = moved_to_frequency(there, plan.band.marked_hz)
    assert back.band.mark_hz == plan.band.mark_hz
    for placed, first in zip(back.parts, plan.parts, strict=True):
        if isinstance(first.part, Coax):
            assert isinstance(placed.part, Coax)
            assert placed.part.length_m == pytest.approx(first.part.length_m, rel=1e-14)
