"""The examples that ship with the program: sound files, honest lengths, and what each one shows, worked by hand.

Losses by hand are skin * sqrt(f/MHz) + dielectric * f/MHz of the cable's figures, times the length over 100 m.
"""

from __future__ import annotations

import dataclasses
import re
from cmath import phase as angle
from itertools import pairwise
from math import degrees, exp, log10, sqrt, tanh
from typing import Any

import pytest

from feedlib import Answer, Plan, check, read_plan, solve
from feedlib.assets_place import ASSETS
from feedlib.catalogue import figures, load_catalogue
from feedlib.parts import Antenna, Coax, Radio
from feedlib.parts.antenna import AntennaImpedance
from feedlib.plan_file import format_plan

FOLDER = ASSETS / "examples"
GATEWAY, MAST, PANEL, QUADRATURE, BOAT = NAMES = (
    "two-dipole-gateway",
    "four-dipole-mast",
    "panel-four-2g4",
    "quadrature-pair",
    "survey-boat-mismatched",
)
every = pytest.mark.parametrize("name", NAMES)

ODD_QUARTERS = {
    (GATEWAY, "match north"): 1,
    (GATEWAY, "match south"): 1,
    (MAST, "trunk upper"): 5,
    (MAST, "trunk lower"): 5,
    (MAST, "leg 1"): 3,
    (MAST, "leg 2"): 3,
    (MAST, "leg 3"): 3,
    (MAST, "leg 4"): 3,
    (BOAT, "port leg"): 5,
}
"""How many quarter waves each matching section is at the mark; the boat's waits for its 75 ohm cable."""


def example(name: str) -> Plan:
    """The example as it ships."""
    return read_plan(FOLDER / f"{name}.feedplan")


def turned(plan: Plan, part_id: str, **fields: Any) -> Plan:
    """The plan with some fields of one part changed."""
    parts = tuple(
        dataclasses.replace(p, part=dataclasses.replace(p.part, **fields)) if p.id == part_id else p for p in plan.parts
    )
    assert parts != plan.parts
    return dataclasses.replace(plan, parts=parts)


def fixed(impedance_ohm: complex) -> AntennaImpedance:
    """An antenna's impedance that is the same at all frequencies."""
    return AntennaImpedance(fixed_ohm=impedance_ohm)


def impedance_ohm(answer: Answer, port: str) -> complex:
    """Impedance at a port at the mark."""
    return complex(answer.mark.port_impedance_ohm[port][0])


def current_a(answer: Answer, antenna: str) -> complex:
    """Current into an antenna at the mark."""
    return complex(answer.mark.antenna_current_a[0, answer.antenna_ids.index(antenna)])


def share(answer: Answer, antenna: str) -> float:
    """An antenna's share of the available power at the mark."""
    return float(answer.mark.antenna_share[0, answer.antenna_ids.index(antenna)])


def lag_deg(answer: Answer, early: str, late: str) -> float:
    """By how much the current of one antenna lags that of another at the mark."""
    return degrees(angle(current_a(answer, early) / current_a(answer, late)))


def odd_quarter_ohm(load_ohm: complex, loss_db: float, z0_ohm: float = 75) -> complex:
    """What an odd number of quarter waves shows: z0^2/load, and with loss tanh(gamma l) = 1/tanh(alpha l)."""
    coth = 1 / tanh(loss_db / (20 * log10(exp(1))))
    return z0_ohm * (load_ohm + z0_ohm * coth) / (z0_ohm + load_ohm * coth)


def standing_loss_db(loss_db: float, swr: float) -> float:
    """Loss of a short line with a standing wave: the matched loss times (S + 1/S)/2."""
    return loss_db * (swr + 1 / swr) / 2


def return_loss_db(reflection: complex, loss_db: float) -> float:
    """Return loss through a matched line that loses `loss_db` each way."""
    return -20 * log10(abs(reflection)) + 2 * loss_db


# -- the files -------------------------------------------------------------------------------------


def test_the_five_and_no_others() -> None:
    assert {path.name for path in FOLDER.iterdir()} == {f"{name}.feedplan" for name in NAMES}


@every
def test_file_is_in_written_form(name: str) -> None:
    written = (FOLDER / f"{name}.feedplan").read_bytes()
    assert format_plan(example(name)).encode() == written


@every
def test_nothing_is_left_open(name: str) -> None:
    assert check(example(name)) == ()


@pytest.mark.parametrize("name", [n for n in NAMES if n != BOAT])
def test_limits_hold(name: str) -> None:
    verdicts = {v.limit: v.holds for v in solve(example(name)).verdicts}
    assert {"return_loss_db", "amplitude_balance_db", "phase_balance_deg", "harness_loss_db"} <= verdicts.keys()
    assert all(verdicts.values()), verdicts


def test_boat_misses_match_and_phase() -> None:
    verdicts = {v.limit: v.holds for v in solve(example(BOAT)).verdicts}
    assert verdicts == {
        "return_loss_db": False,
        "amplitude_balance_db": True,
        "phase_balance_deg": False,
        "harness_loss_db": True,
    }


@pytest.mark.parametrize(("name", "part_id"), ODD_QUARTERS)
def test_matching_sections_are_odd_quarter_waves(name: str, part_id: str) -> None:
    plan = example(name)
    part = plan.placed(part_id).part
    assert isinstance(part, Coax)
    wave_m = plan.cables[part.cable].velocity_factor * 299_792_458 / plan.band.marked_hz
    assert 360 * part.length_m / wave_m == pytest.approx(90 * ODD_QUARTERS[name, part_id], abs=1)
    assert part.ends == (None, None)  # a connector outside the cut would lengthen it


@every
def test_every_75_ohm_section_is_a_named_match(name: str) -> None:
    plan = example(name)
    matches = [p.id for p in plan.parts if isinstance(p.part, Coax) and plan.cables[p.part.cable].z0_ohm == 75]
    assert [(name, part_id) for part_id in matches] == [key for key in ODD_QUARTERS if key[0] == name != BOAT]


@every
def test_cables_are_the_catalogues(name: str) -> None:
    plan = example(name)
    catalogue = {cable.type: cable for cable in load_catalogue()}
    highest_hz = (plan.sweep or plan.band).stop_hz
    for cable_type, cable in plan.cables.items():
        published = figures(catalogue[cable_type])
        assert {field: getattr(cable, field) for field in published} == published
        assert (catalogue[cable_type].max_frequency_hz or 0) >= highest_hz


SENTENCE = re.compile(r"(?<=[.:])\s+(?=[A-Z0-9])")
TRADE_WORDS = {"T", "VSWR", "MHz", "GHz", "Wilkinson", "NS", "EW"}
"""Capitalised words that are no names; a published method keeps the name that it is known by."""


@every
def test_notes_are_a_few_sentences(name: str) -> None:
    notes = example(name).notes
    assert 2 <= len(SENTENCE.split(notes)) <= 5
    assert notes.endswith(".")
    assert "\n" not in notes


@every
def test_no_names_of_people_and_brands(name: str) -> None:
    plan = example(name)
    sentences = [*SENTENCE.split(plan.notes), plan.title]
    sentences += [text for p in plan.parts for text in (p.id, p.label, p.note)]
    sentences += [channel.name for channel in plan.channels]
    said = {word for sentence in sentences for word in re.findall(r"[\w/-]+", sentence)[1:]}
    capital = {word for word in said if word[:1].isupper() and not re.fullmatch(r"T\d|Ω|RG-\d+\w?/U", word)}
    assert capital <= TRADE_WORDS


@every
def test_bench_runs_from_radio_to_antennas(name: str) -> None:
    plan = example(name)
    radio = [p.at for p in plan.parts if isinstance(p.part, Radio)]
    antennas = [p.at for p in plan.parts if isinstance(p.part, Antenna)]
    between = [p.at for p in plan.parts if not isinstance(p.part, Radio | Antenna)]
    assert max(x for x, _ in radio) < min(x for x, _ in between)
    assert max(x for x, _ in between) < min(x for x, _ in antennas)
    assert len({x for x, _ in antennas}) == 1
    # A dial and the two lines of text below it need 140 units.
    assert all(below - above >= 140 for above, below in pairwise(sorted(y for _, y in antennas)))


# -- what each one shows, by hand ------------------------------------------------------------------


def test_gateway_by_hand() -> None:
    """At 868 MHz: RG-223/U 44.67, RG-179B/U 77.98, RG-316/U 93.16 dB/100 m.

    75^2/50 = 112.5 ohm a match, two side by side 56.25; the loss of the matches takes 0.4 % off.
    """
    answer = solve(example(GATEWAY))
    feeder_db, match_db, tail_db = 0.4467 * 2.5, 0.7798 * 0.06, 0.9316 * 0.251
    match_ohm = odd_quarter_ohm(50, match_db)
    assert match_ohm == pytest.approx(112.0, abs=0.1)
    assert impedance_ohm(answer, "T1:2") == pytest.approx(match_ohm, rel=1e-3)
    tee_ohm = match_ohm / 2
    assert impedance_ohm(answer, "T1:1") == pytest.approx(tee_ohm, rel=1e-3)
    reflection = (tee_ohm - 50) / (tee_ohm + 50)
    assert answer.mark.return_loss_db[0] == pytest.approx(return_loss_db(reflection, feeder_db), abs=0.05)
    # 75 ohm into 50: a standing wave of 1.5 on the match.
    lost_db = feeder_db + standing_loss_db(match_db, 1.5) + tail_db
    assert answer.mark.harness_loss_db[0] == pytest.approx(lost_db, abs=0.01)


def test_gateway_needles_meet_at_equal_tails() -> None:
    """2 mm in a guided wave of 0.695 * 299.79 / 868 m = 240.0 mm are 3.0 degrees."""
    plan = example(GATEWAY)
    assert lag_deg(solve(plan), "north", "south") == pytest.approx(360 * 2 / 240.0, abs=0.02)
    assert abs(lag_deg(solve(turned(plan, "tail south", length_m=0.25)), "north", "south")) < 1e-6


def test_mast_by_hand() -> None:
    """At 163.5 MHz: RG-213/U 9.436, RG-11A/U 9.509 dB/100 m. 50 -> 112.5, paired 56.25 -> 100, paired 50 ohm."""
    answer = solve(example(MAST))
    feeder_db, trunk_db, leg_db = 0.09436 * 18, 0.09509 * 1.513, 0.09509 * 0.908
    pair_ohm = odd_quarter_ohm(50, leg_db) / 2
    trunk_ohm = odd_quarter_ohm(pair_ohm, trunk_db)
    for pair in ("upper", "lower"):
        assert impedance_ohm(answer, f"T {pair}:1") == pytest.approx(pair_ohm, rel=3e-3)
        assert impedance_ohm(answer, f"trunk {pair}:1") == pytest.approx(trunk_ohm, rel=3e-3)
    assert pair_ohm == pytest.approx(56.25, rel=0.01)
    assert impedance_ohm(answer, "T0:1") == pytest.approx(trunk_ohm / 2, rel=3e-3)
    # Standing waves: 75 over 50 on the legs, 75 over 56.25 on the trunks.
    lost_db = feeder_db + standing_loss_db(trunk_db, 75 / 56.25) + standing_loss_db(leg_db, 1.5)
    assert answer.mark.harness_loss_db[0] == pytest.approx(lost_db, abs=0.005)
    # Equal currents, so the 52 ohm dipole takes more power than the 48 ohm one.
    assert share(answer, "dipole 2") / share(answer, "dipole 1") == pytest.approx(52 / 48, rel=3e-3)


def test_mast_legs_force_the_current_within_a_pair() -> None:
    """A trunk gives its T joint the same current whatever stands there; the pair's voltage, and with it both its
    currents, goes as 1/(sum of the pair's resistances): (70 + 52)/(51 + 49) less than the lower pair."""
    answer = solve(turned(example(MAST), "dipole 1", impedance=fixed(70)))
    first, second, lower = (abs(current_a(answer, f"dipole {n}")) for n in (1, 2, 3))
    assert first / second == pytest.approx(1, abs=5e-3)
    assert lower / second == pytest.approx(122 / 100, rel=0.01)


def test_panel_by_hand() -> None:
    """At 2440 MHz: RG-316/U 156.19, RG-405/U 115.28 dB/100 m. Every patch 45 ohm: all four echoes -1/19."""
    answer = solve(example(PANEL))
    pigtail_db, legs_db = 1.5619 * 0.3, 1.1528 * (0.06 + 0.075)
    reflection = (45 - 50) / (45 + 50)
    expected_db = return_loss_db(reflection, pigtail_db + legs_db)
    assert answer.mark.return_loss_db[0] == pytest.approx(expected_db, abs=0.02)
    quarter = (1 - reflection**2) * 10 ** (-(pigtail_db + legs_db) / 10) / 4
    for antenna in answer.antenna_ids:
        assert share(answer, antenna) == pytest.approx(quarter, rel=2e-3)
    # The longest leg lags the shortest by 0.5 mm of 85.4 mm.
    assert answer.mark.phase_balance_deg[0] == pytest.approx(360 * 0.5 / 85.39, abs=0.01)


def test_panel_patches_keep_their_share_beside_a_bad_one() -> None:
    """Half of the bad patch's echo ends in the resistor of its own splitter; the others are not told."""
    plan = example(PANEL)
    before = solve(plan)
    after = solve(turned(plan, "upper left", impedance=fixed(500)))
    for antenna in ("lower left", "upper right", "lower right"):
        assert share(after, antenna) == pytest.approx(share(before, antenna), rel=2e-3)
    to_patch_db, leg_db = 1.5619 * 0.3 + 1.1528 * 0.135, 1.1528 * 0.075
    echo = (450 / 550 + 5 / 95) ** 2  # against the neighbour's own small echo of -5/95
    caught = 10 ** (-(to_patch_db + leg_db) / 10) / 4 * echo / 2
    assert after.mark.part_loss_share["split left"][0] == pytest.approx(caught, rel=0.01)


def dipole_detuning(f0_mhz: float) -> float:
    """X/R of a series resonance of Q 8 at 137.5 MHz."""
    return 8 * (137.5 / f0_mhz - f0_mhz / 137.5)


def test_quadrature_pair_by_hand() -> None:
    """At 137.5 MHz: RG-213/U 8.582, RG-58C/U 19.06 dB/100 m.

    Through the hybrid -j/sqrt 2 and -1/sqrt 2 (Pozar, Microwave Engineering, 4th ed., sec. 7.5): of the two echoes
    half the difference comes back to the receiver, half the sum goes into the termination.
    """
    answer = solve(example(QUADRATURE))
    feeder_db, leg_db = 0.08582 * 12, 0.1906 * 0.8
    north, east = (1j * x / (2 + 1j * x) for x in map(dipole_detuning, (134.5, 135.0)))
    back = return_loss_db((north - east) / 2, feeder_db + leg_db)
    assert answer.mark.return_loss_db[0] == pytest.approx(back, abs=0.05)
    warmed = abs(north + east) ** 2 / 4 * 10 ** (-(feeder_db + 2 * leg_db) / 10)
    assert answer.mark.part_loss_share["termination"][0] == pytest.approx(warmed, rel=3e-3)
    # Well matched as it seems, each dipole alone is no better than 16 dB.
    assert -20 * log10(abs(north)) < 16 < 35 < back
    # 90 degrees, less the difference of the two detuned currents' angles.
    lag = 90 + degrees(angle((1 - north) / (1 - east)))
    assert lag_deg(answer, "NS", "EW") == pytest.approx(lag, abs=0.02)


def test_quadrature_pair_leg_turns_its_needle() -> None:
    """40 mm in a guided wave of 0.66 * 299.79 / 137.5 m = 1439 mm are 10 degrees."""
    plan = example(QUADRATURE)
    longer = solve(turned(plan, "leg EW", length_m=0.84))
    assert lag_deg(longer, "NS", "EW") - lag_deg(solve(plan), "NS", "EW") == pytest.approx(360 * 40 / 1439, abs=0.02)
    assert not {v.limit: v.holds for v in longer.verdicts}["phase_balance_deg"]


def test_boat_by_hand() -> None:
    """At 433.92 MHz RG-58C/U loses 37.81 dB/100 m and has a guided wave of 456.0 mm. Two 50 ohm legs are 25 ohm."""
    answer = solve(example(BOAT))
    assert impedance_ohm(answer, "T1:1") == pytest.approx(25, rel=1e-6)
    assert answer.mark.return_loss_db[0] == pytest.approx(return_loss_db((25 - 50) / (25 + 50), 0.3781 * 4), abs=0.01)
    assert lag_deg(answer, "port whip", "starboard whip") == pytest.approx(360 * 70 / 456.0, abs=0.05)


def test_boat_is_mended_as_its_notes_say() -> None:
    """The length mends the phase, the 75 ohm cable the match: 75^2/50/2 = 56.25 ohm."""
    plan = turned(example(BOAT), "starboard leg", length_m=0.57)
    holds = {v.limit: v.holds for v in solve(plan).verdicts}
    assert holds["phase_balance_deg"]
    assert not holds["return_loss_db"]
    for leg in ("port leg", "starboard leg"):
        plan = turned(plan, leg, cable="RG-59B/U")
    mended = solve(plan)
    assert mended.holds
    # RG-59B/U at 433.92 MHz: 24.36 dB/100 m.
    assert impedance_ohm(mended, "T1:1") == pytest.approx(odd_quarter_ohm(50, 0.2436 * 0.57) / 2, rel=1e-3)


def test_losses_by_hand_are_the_plans() -> None:
    """The dB/100 m that the cases above use, from the coefficients that stand in the files."""
    said = {
        (GATEWAY, "RG-223/U"): 44.67,
        (GATEWAY, "RG-179B/U"): 77.98,
        (GATEWAY, "RG-316/U"): 93.16,
        (MAST, "RG-213/U"): 9.436,
        (MAST, "RG-11A/U"): 9.509,
        (PANEL, "RG-316/U"): 156.19,
        (PANEL, "RG-405/U"): 115.28,
        (QUADRATURE, "RG-213/U"): 8.582,
        (QUADRATURE, "RG-58C/U"): 19.06,
        (BOAT, "RG-58C/U"): 37.81,
        (BOAT, "RG-59B/U"): 24.36,
    }
    for (name, cable_type), db_per_100m in said.items():
        plan = example(name)
        cable, mhz = plan.cables[cable_type], plan.band.marked_hz / 1e6
        by_hand = cable.skin_db_per_100m * sqrt(mhz) + cable.dielectric_db_per_100m * mhz
        assert by_hand == pytest.approx(db_per_100m, rel=2e-4), (name, cable_type)
