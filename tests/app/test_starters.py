"""Starters: right by hand calculation and by the solver, cut to quarter waves, tidy, and honest in their notes."""

from __future__ import annotations

import dataclasses
import math
import re
from itertools import product
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.editing.cutting import electrical_deg
from app.editing.quarter_wave import Asked, NamedCable, best_match, nearest_cable
from app.editing.starters import STARTERS, Starter
from app.editing.tidy import tidied
from feedlib import Plan, PlanError, check, solve
from feedlib.catalogue import figures, load_catalogue
from feedlib.matched import broken_sets, matched_sets
from feedlib.parts import Antenna, Coax, Load, Radio, Splitter, Tee
from feedlib.plan import Cable
from feedlib.plan_file import format_plan, parse_plan
from tests.app.laid_out import crossing, measured, overlapping
from tests.plans import number

FIFTY: NamedCable = ("fifty", Cable(z0_ohm=50, velocity_factor=0.66))
SEVENTY_FIVE: NamedCable = ("seventy-five", Cable(z0_ohm=75, velocity_factor=0.82))
BY_KEY = {starter.key: starter for starter in STARTERS}
F_HZ = 144.3e6


def of_catalogue(name: str) -> NamedCable:
    kept: dict[str, Any] = next(figures(c) for c in load_catalogue() if c.type == name)
    return name, Cable(**kept)


def built(
    key: str, impedance_ohm: float = 50.0, feeder: NamedCable = FIFTY, match: NamedCable = SEVENTY_FIVE,
    frequency_hz: float = F_HZ,
) -> Plan:  # fmt: skip
    starter = BY_KEY[key]
    return starter.build(frequency_hz, impedance_ohm, feeder_cable=feeder, match_cable=match, measure=measured)


def lossless(plan: Plan) -> Plan:
    """The plan with its cables' losses taken out."""
    no_loss = {n: dataclasses.replace(c, skin_db_per_100m=0, dielectric_db_per_100m=0) for n, c in plan.cables.items()}
    return dataclasses.replace(plan, cables=no_loss)


def sections(plan: Plan) -> dict[str, Coax]:
    return {p.id: p.part for p in plan.parts if isinstance(p.part, Coax)}


every = pytest.mark.parametrize("starter", STARTERS, ids=lambda s: s.key)


def test_all_starters_are_there() -> None:
    antennas = {key: sum(isinstance(p.part, Antenna) for p in built(key).parts) for key in BY_KEY}
    assert antennas == {
        "two": 2, "three": 3, "four": 4, "four_two_levels": 4, "six": 6, "eight": 8,
        "quadrature_delay": 2, "quadrature_hybrid": 2, "sequential": 4, "wilkinson": 2,
    }  # fmt: skip
    assert len({s.label for s in STARTERS}) == len(STARTERS)
    for starter in STARTERS:
        assert starter.asks[:3] == ("frequency", "impedance", "feeder cable")
        assert len(starter.asks) <= 4


# Matched as calculated by hand

HAND_OHM = {
    "two": 56.25,  # 75^2/50/2
    "three": 57.66,  # 93^2/50/3
    "four": 45.125,  # 95^2/50/4
    "four_two_levels": 50,  # 75^2/56.25/2
    "six": 51.2533,  # 93^2/56.25/3
    "eight": 56.25,  # behind 56.25 and 50
    "quadrature_delay": 56.25,
    "quadrature_hybrid": 50,
    "sequential": 50,
    "wilkinson": 50,
}


@every
def test_return_loss_at_the_mark_by_hand(starter: Starter) -> None:
    (found_db,) = solve(lossless(built(starter.key))).mark.return_loss_db
    hand_ohm = HAND_OHM[starter.key]
    if hand_ohm == 50:
        assert found_db > 150
    else:
        assert found_db == pytest.approx(-20 * math.log10(abs(hand_ohm - 50) / (hand_ohm + 50)), abs=1e-3)


LAGS_DEG = {"quadrature_delay": [0, 90], "quadrature_hybrid": [0, 90], "sequential": [0, 90, 180, 270]}


@every
def test_equal_currents_with_the_phases_that_are_wanted(starter: Starter) -> None:
    plan = built(starter.key)
    (current_a,) = solve(plan).mark.antenna_current_a
    lags = np.array(LAGS_DEG.get(starter.key, [0.0] * current_a.size))
    wanted = current_a[0] * np.exp(-1j * np.radians(lags))
    np.testing.assert_allclose(current_a, wanted, rtol=0, atol=1e-9 * abs(current_a[0]))
    targets = [p.part.target for p in plan.parts if isinstance(p.part, Antenna)]
    assert [(t.amplitude, t.phase_deg) for t in targets] == [(1, -lag) for lag in lags]


@every
def test_lossless_cables_lose_nothing(starter: Starter) -> None:
    """All that enters is shared by the antennas in equal parts, nothing ends in a resistor."""
    mark = solve(lossless(built(starter.key))).mark
    share = (1 - mark.reflected_share[0]) / len(mark.antenna_ids)
    assert mark.antenna_share[0] == pytest.approx([share] * len(mark.antenna_ids), rel=1e-9)


@every
@pytest.mark.parametrize("frequency_hz", [7.1e6, 144.3e6, 868e6])
def test_with_real_cables_every_limit_holds(starter: Starter, frequency_hz: float) -> None:
    plan = built(starter.key, 50, of_catalogue("RG-58C/U"), of_catalogue("RG-59B/U"), frequency_hz)
    verdicts = solve(plan).verdicts
    assert len(verdicts) == 3
    assert [v.limit for v in verdicts if not v.holds] == []
    assert plan.limits.return_loss_db == 20


# Cut and drawn


@every
@pytest.mark.parametrize("frequency_hz", [1.8e6, 144.3e6, 5.8e9])
def test_sections_are_cut_for_the_velocity_factor_of_their_cable(starter: Starter, frequency_hz: float) -> None:
    plan = built(starter.key, frequency_hz=frequency_hz)
    for part_id, coax in sections(plan).items():
        degrees = {"feeder": 360.0, "half wave": 180.0}.get(part_id, 90.0)
        assert electrical_deg(plan, coax, frequency_hz) == pytest.approx(degrees, abs=1e-9)
    assert sections(built("two"))["match A"].length_m == pytest.approx(0.82 * 299_792_458 / F_HZ / 4, rel=1e-14)


@every
def test_the_band_is_one_percent_about_the_mark(starter: Starter) -> None:
    band = built(starter.key, frequency_hz=100e6).band
    assert (band.start_hz, band.marked_hz, band.stop_hz) == (99e6, 100e6, 101e6)


@every
@pytest.mark.parametrize("frequency_hz", [1.8e6, 144.3e6, 5.8e9])
@pytest.mark.parametrize("impedance_ohm", [12.5, 50, 300])
def test_starters_are_tidy(starter: Starter, frequency_hz: float, impedance_ohm: float) -> None:
    plan = built(starter.key, impedance_ohm, frequency_hz=frequency_hz)
    assert overlapping(plan) == []
    assert crossing(plan) == []
    assert tidied(plan, *measured(plan)) == plan


@every
def test_nothing_is_missing_or_open(starter: Starter) -> None:
    plan = built(starter.key)
    assert check(plan) == ()
    assert parse_plan(format_plan(plan).encode()) == plan
    assert plan.title
    assert set(plan.cables) == {coax.cable for coax in sections(plan).values()}


def test_equal_sections_are_matched_sets() -> None:
    assert matched_sets(built("two")) == {"A": ("match A", "match B")}
    assert matched_sets(built("six")) == {
        "A": ("trunk 1", "trunk 2", "trunk 3"),
        "B": tuple(f"match {c}" for c in "ABCDEF"),
    }
    eight = matched_sets(built("eight"))
    assert [len(members) for members in eight.values()] == [2, 4, 8]
    assert matched_sets(built("sequential"))["C"] == ("delay B", "delay D")
    assert matched_sets(built("wilkinson")) == {"A": ("leg A", "leg B")}
    for key in BY_KEY:
        assert broken_sets(built(key)) == ()


def test_joints_have_as_many_ports_as_they_need() -> None:
    ports = {key: [p.part.ports for p in built(key).parts if isinstance(p.part, Tee)] for key in BY_KEY}
    assert ports["four"] == [5]
    assert ports["four_two_levels"] == ports["sequential"] == [3, 3, 3]
    assert ports["six"] == [4, 3, 3, 3]
    assert ports["eight"] == [3] * 7
    assert ports["wilkinson"] == ports["quadrature_hybrid"] == []


def test_splitters_are_of_the_systems_impedance_and_frequency() -> None:
    for key, part_id, form in (("wilkinson", "splitter", "wilkinson"), ("quadrature_hybrid", "hybrid", "branch_line")):
        assert built(key).placed(part_id).part == Splitter(form=form, z0_ohm=50, centre_hz=F_HZ)  # type: ignore[arg-type]
    assert built("quadrature_hybrid").placed("termination").part == Load(impedance_ohm=50 + 0j)


# Cables


def test_a_given_cable_that_is_ideal_is_taken() -> None:
    """sqrt(50 * 50 * N): 100 ohm for four, 86.6 for three."""
    for key, z0_ohm in (("four", 100.0), ("three", 50 * math.sqrt(3)), ("two", 50 * math.sqrt(2))):
        plan = built(key, match=("own", Cable(z0_ohm=z0_ohm, velocity_factor=0.7)))
        assert set(plan.cables) == {"fifty", "own"}
        assert solve(plan).mark.return_loss_db[0] > 150
        assert "an ideal match" in plan.notes


def test_a_cable_of_the_catalogue_helps_out_and_is_named() -> None:
    plan = built("three")
    assert sections(plan)["match A"].cable == "RG-62A/U"
    assert "Taken from the catalogue: RG-62A/U; those asked for would leave 16.9 dB at best." in plan.notes
    assert "57.66 Ω" in plan.notes
    assert "catalogue" not in built("two").notes


def test_no_cable_of_the_catalogue_is_taken_beyond_its_frequency() -> None:
    """The only one of 93 ohm is specified up to 1 GHz."""
    assert sections(built("three", frequency_hz=2.4e9))["match A"].cable != "RG-62A/U"


def test_no_more_of_the_catalogue_than_needed() -> None:
    """Four of 160 ohm in two pairs. 93 and 50 ohm: 93^2/160/2 = 27.03, 50^2/27.03/2 = 46.25 ohm, 28.2 dB, one foreign
    cable. 93 and 52 ohm: 50.02 ohm would be better still, with two."""
    plan = built("four_two_levels", 160)
    used = sections(plan)
    assert (used["trunk 1"].cable, used["match A"].cable) == ("fifty", "RG-62A/U")
    assert "46.25 Ω, a return loss of 28.2 dB" in plan.notes


def test_where_nothing_is_near_the_given_cable_stays_and_the_notes_say_so() -> None:
    """Four of 200 ohm at one T joint want 200 ohm; 75 is the best of the two: 75^2/200/4 = 7.03 ohm, 2.45 dB."""
    plan = built("four", 200)
    assert sections(plan)["match A"].cable == "seventy-five"
    assert "7.031 Ω, a return loss of 2.46 dB" in plan.notes
    assert "No cable of the catalogue would match much better." in plan.notes
    assert plan.limits.return_loss_db == 10


@given(number(10, 400), number(20, 150), number(20, 150), st.sampled_from([(2,), (3,), (2, 2), (3, 2), (2, 2, 2)]))
def test_no_choice_of_the_given_cables_is_better(
    impedance_ohm: float, feeder_ohm: float, match_ohm: float, counts: tuple[int, ...]
) -> None:
    asked = Asked(
        F_HZ,
        impedance_ohm,
        ("feeder", Cable(z0_ohm=feeder_ohm, velocity_factor=1)),
        ("match", Cable(z0_ohm=match_ohm, velocity_factor=1)),
    )
    match = best_match(asked, counts)
    for z0s in product((feeder_ohm, match_ohm), repeat=len(counts)):
        z_ohm = impedance_ohm
        for count, z0_ohm in zip(reversed(counts), reversed(z0s), strict=True):
            z_ohm = z0_ohm**2 / z_ohm / count
        reflection = abs(z_ohm - asked.radio_ohm) / (z_ohm + asked.radio_ohm)
        loss_db = -20 * math.log10(max(reflection, 1e-15))
        assert match.return_loss_db >= min(loss_db, 20) - 1e-9  # from the catalogue comes only what is better
    foreign = {name for name, _ in match.cables} - {"feeder", "match"}
    assert match.return_loss_db >= 15 if foreign else True
    assert bool(match.caution) == (bool(foreign) or match.return_loss_db < 20)


@given(
    st.sampled_from(["two", "three", "four", "four_two_levels", "six", "eight", "quadrature_delay", "sequential"]),
    number(10, 400),
    number(20, 150),
    number(20, 150),
)
def test_the_notes_say_what_the_solver_finds(key: str, impedance_ohm: float, feeder: float, match: float) -> None:
    """Any antennas and cables, delays into antennas that they do not match as well; losses taken out."""
    plan = built(
        key,
        impedance_ohm,
        ("feeder", Cable(z0_ohm=feeder, velocity_factor=0.7)),
        ("match", Cable(z0_ohm=match, velocity_factor=0.8)),
    )
    answer = solve(lossless(plan)).mark
    shown_ohm = answer.port_impedance_ohm["T1:1"][0]
    (said,) = re.findall(r"(?:show|shows) ([0-9.e+]+) Ω, (?:a return|an ideal)", plan.notes)
    assert complex(shown_ohm) == pytest.approx(float(said), rel=6e-4)
    if found := re.findall(r"a return loss of ([0-9.]+) dB", plan.notes):
        assert answer.return_loss_db[0] == pytest.approx(float(found[0]), abs=0.051)


def test_a_system_of_75_ohm() -> None:
    """Feeder and antennas of 75 ohm: the radio is taken for 75 ohm too; two want 106 ohm."""
    plan = built("two", 75, feeder=SEVENTY_FIVE)
    radio = plan.placed("radio").part
    assert isinstance(radio, Radio)
    assert (radio.impedance_ohm, plan.reference_ohm) == (75, 75)
    assert solve(plan).verdicts[0].holds
    near_50 = built("two", feeder=("52", Cable(z0_ohm=52, velocity_factor=0.7)))
    assert (near_50.placed("radio").part, near_50.reference_ohm) == (Radio(impedance_ohm=50 + 0j), 50)


def test_a_delay_is_of_the_cable_nearest_to_its_antenna() -> None:
    assert sections(built("quadrature_delay", 72))["delay B"].cable == "seventy-five"
    assert sections(built("quadrature_delay", 50))["delay B"].cable == "fifty"
    plan = built("quadrature_delay", 94)
    assert sections(plan)["delay B"].cable in ("RG-62A/U", "RG-180B/U", "RG-195A/U")
    assert "No cable is near" not in plan.notes
    far = built("quadrature_delay", 200)
    assert "No cable is near 200 Ω: the current behind a delay is 6.47 dB off." in far.notes  # 20 log10(200/95)
    asked = Asked(F_HZ, 50, FIFTY, SEVENTY_FIVE)
    assert nearest_cable(asked, 51) == FIFTY


def test_one_cable_starters_do_not_use_the_other() -> None:
    for key in ("wilkinson", "quadrature_hybrid"):
        assert "match cable" not in BY_KEY[key].asks
        assert "seventy-five" not in built(key, 112.5).cables


@every
def test_notes_are_a_few_sentences(starter: Starter) -> None:
    for impedance_ohm in (50.0, 72.0, 200.0):
        notes = built(starter.key, impedance_ohm).notes
        assert 2 <= len(re.findall(r"[.:;] |\.$", notes)) <= 8
        assert 80 < len(notes) < 600
        assert "  " not in notes
        assert notes.endswith(".")


@pytest.mark.parametrize(
    ("frequency_hz", "impedance_ohm"), [(0, 50), (-1, 50), (math.nan, 50), (1e8, 0), (1e8, -5), (1e8, math.nan)]
)
def test_what_cannot_be_is_refused(frequency_hz: float, impedance_ohm: float) -> None:
    with pytest.raises(PlanError):
        built("two", impedance_ohm, frequency_hz=frequency_hz)
