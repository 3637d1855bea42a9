"""Starters: ready small harnesses, cut for a frequency, an antenna impedance and two cables. Knows no Qt."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import partial
from typing import Literal

from app.editing.cutting import cut_length_m
from app.editing.edits import added, changed_part, joined, spliced, with_cable
from app.editing.matched import letters, matched
from app.editing.quarter_wave import EQUAL_DB, Asked, Match, NamedCable, best_match, error_db, nearest_cable
from app.editing.tidy import PortSides, Sizes, tidied
from app.editing.wording import format_db, format_frequency
from feedlib.parts import Antenna, AntennaImpedance, Coax, Load, Part, Radio, Splitter, Target, Tee
from feedlib.plan import Band, Limits, Plan, Port

Question = Literal["frequency", "impedance", "feeder cable", "match cable"]
Measure = Callable[[Plan], tuple[Sizes, PortSides]]
"""What a bench draws: the sizes of all bodies of a plan, and where their ports stand."""

LIMITS_DB = (20.0, 15.0, 10.0)
"""Return loss that a starter may ask for: the first that its match holds by 1 dB, else the last."""
LONGER_DB = 1.0
"""Amplitude balance asked of antennas of which one hangs behind three quarter waves more of cable than another."""
PERFECT_DB = 60.0
HALF_BAND = 0.01
QUARTER_DEG, HALF_DEG, WHOLE_DEG = 90.0, 180.0, 360.0
LEVELS = ("trunk", "arm", "match")
"""What quarter waves are called, from the radio to the antennas; with two levels there is no arm."""
REACH = "Give the feeder its real length; where a quarter wave does not reach, cut its set to 3/4 or 5/4 of a wave."


# Drawing


def _fed(asked: Asked) -> tuple[Plan, Port]:
    """A plan of a radio and its feeder, one wave long so that it hides nothing at the mark; and its open end."""
    low_hz, high_hz = (round(asked.frequency_hz * (1 + part), 3) for part in (-HALF_BAND, HALF_BAND))
    band = Band(start_hz=low_hz, stop_hz=high_hz, mark_hz=asked.frequency_hz)
    plan = Plan(band=band, reference_ohm=asked.radio_ohm)
    plan, radio = added(plan, Radio(impedance_ohm=asked.radio_ohm + 0j), (0.0, 0.0))
    return _line(plan, Port(radio, 1), "feeder", asked.feeder, WHOLE_DEG)


def _line(plan: Plan, at: Port, part_id: str, cable: NamedCable, degrees: float) -> tuple[Plan, Port]:
    """A section of so many degrees at the mark, joined to a port; and its far end."""
    length_m = cut_length_m(cable[1], degrees, plan.band.marked_hz)
    plan = _ended(with_cable(plan, *cable), at, Coax(cable=cable[0], length_m=length_m), part_id)
    return plan, Port(part_id, 2)


def _ended(plan: Plan, at: Port, part: Part, part_id: str) -> Plan:
    """A part joined to a port by its own port 1."""
    plan, part_id = added(plan, part, (0.0, 0.0), part_id)
    return joined(plan, at, Port(part_id, 1))


def _antenna(asked: Asked, phase_deg: float = 0.0) -> Antenna:
    impedance = AntennaImpedance(fixed_ohm=asked.impedance_ohm + 0j)
    return Antenna(impedance=impedance, target=Target(phase_deg=phase_deg))


def _next(plan: Plan, kind: str) -> int:
    """One more than there are parts of a kind, or sections of a name."""
    return 1 + sum(kind in (p.part.KIND, p.id.partition(" ")[0]) for p in plan.parts)


def _branched(plan: Plan, at: Port, asked: Asked, levels: Sequence[tuple[int, NamedCable, str]]) -> Plan:
    """T joints, quarter waves and antennas at a port. levels : branches, their cable and name, from here on."""
    (count, cable, name), *further = levels
    tee = f"T{_next(plan, 'tee')}"
    plan = _ended(plan, at, Tee(ports=count + 1), tee)
    for number in range(2, count + 2):
        letter = letters(_next(plan, "antenna"))
        part_id = f"{name} {_next(plan, name) if further else letter}"
        plan, end = _line(plan, Port(tee, number), part_id, cable, QUARTER_DEG)
        plan = _branched(plan, end, asked, further) if further else _ended(plan, end, _antenna(asked), letter)
    return plan


def _matched_by_name(plan: Plan, *names: str) -> Plan:
    """The sections of each name as one matched set."""
    for name in names:
        sections = [p.id for p in plan.parts if p.id.startswith(f"{name} ")]
        plan = matched(plan, sections) if len(sections) > 1 else plan
    return plan


def _told(plan: Plan, title: str, return_loss_db: float, *notes: str, equal_db: float = EQUAL_DB) -> Plan:
    """The plan with its title, limits that it can hold, and notes."""
    least_db = next((limit for limit in LIMITS_DB if return_loss_db >= limit + 1), LIMITS_DB[-1])
    limits = Limits(return_loss_db=least_db, amplitude_balance_db=equal_db, phase_balance_deg=5.0)
    return replace(plan, title=title, limits=limits, notes=" ".join(filter(None, notes)))


def _match_words(asked: Asked, match: Match) -> str:
    """What the match shows, in words."""
    quality = (
        "an ideal match" if match.return_loss_db > PERFECT_DB else f"a return loss of {format_db(match.return_loss_db)}"
    )
    return f"{match.shown_ohm:.4g} Ω, {quality} at {format_frequency(asked.frequency_hz)}"


def _tree(asked: Asked, counts: tuple[int, ...], match: Match) -> Plan:
    """A radio, its feeder and a tree of antennas."""
    names = LEVELS if len(counts) == len(LEVELS) else (LEVELS[0], LEVELS[-1])[-len(counts) :]
    plan, end = _fed(asked)
    plan = _branched(plan, end, asked, list(zip(counts, match.cables, names, strict=True)))
    return _matched_by_name(plan, *names)


def _equal(title: str, counts: tuple[int, ...], asked: Asked) -> Plan:
    """Antennas with equal currents behind equal paths."""
    match = best_match(asked, counts)
    plan = _tree(asked, counts, match)
    name, cable = match.cables[-1]
    shown = "together they show" if len(counts) == 1 else "at the first T joint the whole shows"
    first = (
        f"Each match is a quarter wave of {name}: it shows {cable.z0_ohm**2 / asked.impedance_ohm:.4g} Ω for its "
        f"{asked.impedance_ohm:g} Ω antenna, and {shown} {_match_words(asked, match)}."
    )
    return _told(plan, title, match.return_loss_db, first, match.caution, REACH)


def _delayed(plan: Plan, before: str, part_id: str, cable: NamedCable, degrees: float) -> Plan:
    """A further section in the join at a part's port 1."""
    join = next(j for j in plan.joins if j[1] == Port(before, 1))
    part = Coax(cable=cable[0], length_m=cut_length_m(cable[1], degrees, plan.band.marked_hz))
    plan, part_id = added(with_cable(plan, *cable), part, (0.0, 0.0), part_id)
    return spliced(plan, join, part_id)


def _late(plan: Plan, lags_deg: dict[str, float]) -> Plan:
    """The antennas with the phases that they should have."""
    for antenna, lag_deg in lags_deg.items():
        plan = changed_part(plan, antenna, target=Target(phase_deg=-lag_deg))
    return plan


def _half_delayed(asked: Asked, counts: tuple[int, ...]) -> tuple[Match, NamedCable, str]:
    """The match for a tree in which every other antenna hangs behind a quarter wave more; the cable of that; a caution.

    Such a pair loads its junction as two antennas of R and Z^2/R do, or both of them of the mean.
    """
    delay = nearest_cable(asked, asked.impedance_ohm)
    mean_ohm = (asked.impedance_ohm + delay[1].z0_ohm ** 2 / asked.impedance_ohm) / 2
    match = best_match(replace(asked, impedance_ohm=mean_ohm), counts)
    off_db = error_db(asked.impedance_ohm, delay)
    caution = f"No cable is near {asked.impedance_ohm:g} Ω: the current behind a delay is {format_db(off_db)} off."
    return match, delay, " ".join(filter(None, (match.caution, caution if off_db > EQUAL_DB else "")))


def _quadrature_by_delay(asked: Asked) -> Plan:
    match, delay, caution = _half_delayed(asked, (2,))
    plan = _delayed(_tree(asked, (2,), match), "B", "delay B", delay, QUARTER_DEG)
    first = (
        f"A further quarter wave of {delay[0]} makes B lag A by 90°; the T joint shows {_match_words(asked, match)}."
    )
    hand = "Which hand a pair of crossed antennas makes hangs on which of them lags and where its hot side points."
    title = "Quadrature pair by delay"
    return _told(_late(plan, {"B": 90.0}), title, match.return_loss_db, first, caution, hand)


def _sequential(asked: Asked) -> Plan:
    match, delay, caution = _half_delayed(asked, (2, 2))
    half = min((asked.feeder, asked.match), key=partial(error_db, asked.radio_ohm))  # a half wave hides its impedance
    plan = _delayed(_tree(asked, (2, 2), match), "T3", "half wave", half, HALF_DEG)
    for antenna in ("B", "D"):
        plan = _delayed(plan, antenna, f"delay {antenna}", delay, QUARTER_DEG)
    plan = _late(_matched_by_name(plan, "delay"), {"B": 90.0, "C": 180.0, "D": 270.0})
    first = (
        f"Each antenna lags the one before by 90°: B and D by a quarter wave of {delay[0]}, C and D by a half wave of "
        f"{half[0]} before their T joint; the first T joint shows {_match_words(asked, match)}."
    )
    turned = (
        "Turn each antenna by 90° against the one before, the way round that its hand wants; otherwise they cancel."
    )
    title, loss_db = "Four in sequential rotation", match.return_loss_db
    return _told(plan, title, loss_db, first, caution, turned, equal_db=LONGER_DB)


def _split(asked: Asked, part_id: str, part: Splitter) -> tuple[Plan, Match]:
    """A radio, its feeder, and two antennas behind equal legs at ports 2 and 3 of a splitter."""
    match = best_match(asked, (1,))
    plan, end = _fed(asked)
    plan = _ended(plan, end, part, part_id)
    for number, letter in ((2, "A"), (3, "B")):
        plan, end = _line(plan, Port(part_id, number), f"leg {letter}", match.cables[0], QUARTER_DEG)
        plan = _ended(plan, end, _antenna(asked), letter)
    return _matched_by_name(plan, "leg"), match


def _quadrature_by_hybrid(asked: Asked) -> Plan:
    hybrid = Splitter(form="branch_line", z0_ohm=asked.radio_ohm, centre_hz=asked.frequency_hz)
    plan, match = _split(asked, "hybrid", hybrid)
    plan = _late(_ended(plan, Port("hybrid", 4), Load(impedance_ohm=asked.radio_ohm + 0j), "termination"), {"B": 90.0})
    first = (
        f"The hybrid splits in equal parts and makes B lag A by 90°; each leg shows it {_match_words(asked, match)}."
    )
    echoes = "Equal echoes of both antennas end in the termination, so that a good return loss says little about them."
    return _told(plan, "Quadrature pair by hybrid", math.inf, first, match.caution, echoes)


def _wilkinson_pair(asked: Asked) -> Plan:
    wilkinson = Splitter(form="wilkinson", z0_ohm=asked.radio_ohm, centre_hz=asked.frequency_hz)
    plan, match = _split(asked, "splitter", wilkinson)
    first = f"The splitter gives both antennas the same current; each leg shows it {_match_words(asked, match)}."
    apart = "Where one antenna changes, its echo ends in the splitter's resistor and the other one keeps its share."
    return _told(plan, "Wilkinson pair", match.return_loss_db, first, match.caution, apart)


@dataclass(frozen=True, slots=True)
class Starter:
    """One starter. asks : the questions whose answers `build` heeds."""

    key: str
    label: str
    asks: tuple[Question, ...]
    draw: Callable[[Asked], Plan]

    def build(
        self,
        frequency_hz: float,
        impedance_ohm: float,
        *,
        feeder_cable: NamedCable,
        match_cable: NamedCable,
        measure: Measure,
    ) -> Plan:
        """The harness, laid out tidily. impedance_ohm : of each antenna; measure : what a bench draws."""
        match = match_cable if "match cable" in self.asks else feeder_cable
        plan = self.draw(Asked(frequency_hz, impedance_ohm, feeder_cable, match))
        return tidied(plan, *measure(plan))


_ONE_CABLE: tuple[Question, ...] = ("frequency", "impedance", "feeder cable")
_TWO_CABLES: tuple[Question, ...] = (*_ONE_CABLE, "match cable")


def _equals(key: str, label: str, *counts: int) -> Starter:
    return Starter(key, label, _TWO_CABLES, partial(_equal, label, counts))


STARTERS: tuple[Starter, ...] = (
    _equals("two", "Two antennas", 2),
    _equals("three", "Three antennas", 3),
    _equals("four", "Four antennas at one T joint", 4),
    _equals("four_two_levels", "Four antennas in two pairs", 2, 2),
    _equals("six", "Six antennas in three pairs", 3, 2),
    _equals("eight", "Eight antennas in pairs", 2, 2, 2),
    Starter("quadrature_delay", "Quadrature pair by delay", _TWO_CABLES, _quadrature_by_delay),
    Starter("quadrature_hybrid", "Quadrature pair by hybrid", _ONE_CABLE, _quadrature_by_hybrid),
    Starter("sequential", "Four in sequential rotation", _TWO_CABLES, _sequential),
    Starter("wilkinson", "Wilkinson pair", _ONE_CABLE, _wilkinson_pair),
)
