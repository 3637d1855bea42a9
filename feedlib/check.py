"""What is open, missing or beyond its data in a plan: problems for people, each with what to do."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from feedlib.answer import JUDGED
from feedlib.errors import SolveError
from feedlib.graph import joins_away
from feedlib.matched import broken_sets
from feedlib.parts import Antenna, Coax, Radio
from feedlib.plan import Limits, Plan
from feedlib.schema import specs
from feedlib.undetermined import refuse_undetermined


@dataclass(frozen=True, slots=True)
class Problem:
    """One problem. part_id : the part it is at, or None for the plan; port : its port, or None.

    stops : whether the plan cannot be solved while it lasts.
    """

    part_id: str | None
    text: str
    advice: str
    port: int | None = None
    stops: bool = False


def check(plan: Plan) -> tuple[Problem, ...]:
    """All problems of a plan, those that stop it first."""
    found = [
        *_radio(plan),
        *_cables(plan),
        *_data(plan),
        *_loops(plan),
        *_open_ports(plan),
        *_reach(plan),
        *_matched_sets(plan),
        *_limits(plan),
    ]
    return tuple(sorted(found, key=lambda p: not p.stops))


def _radio(plan: Plan) -> Iterator[Problem]:
    radios = [p.id for p in plan.parts if isinstance(p.part, Radio)]
    if not radios:
        yield Problem(None, "There is no radio.", "Put a radio on the bench.", stops=True)
    for extra in radios[1:]:
        yield Problem(extra, "There is more than one radio.", "Take all but one off the bench.", stops=True)
    if not any(isinstance(p.part, Antenna) for p in plan.parts):
        yield Problem(None, "There is no antenna.", "Put the antennas on the bench.")


def _cables(plan: Plan) -> Iterator[Problem]:
    for p in plan.parts:
        if isinstance(p.part, Coax) and p.part.cable not in plan.cables:
            text = f"The cable {p.part.cable!r} is not in the plan."
            yield Problem(p.id, text, "Choose another cable or add this one to the plan.", stops=True)


def _data(plan: Plan) -> Iterator[Problem]:
    wide = plan.sweep or plan.band
    asked = [wide.start_hz, wide.stop_hz, plan.band.marked_hz, *(c.hz for c in plan.channels)]
    for p in plan.parts:
        covers = p.part.covers_hz()
        if covers is not None and not (covers[0] <= min(asked) and max(asked) <= covers[1]):
            text = (
                f"Its data covers {covers[0] / 1e6:.12g} to {covers[1] / 1e6:.12g} MHz; "
                f"the plan asks for {min(asked) / 1e6:.12g} to {max(asked) / 1e6:.12g} MHz."
            )
            yield Problem(p.id, text, "Measure it wider, or narrow the band.", stops=True)


def _loops(plan: Plan) -> Iterator[Problem]:
    try:
        refuse_undetermined(plan)
    except SolveError as error:
        text = "It closes a loop without length or loss."
        yield Problem(error.part, text, "Give a section in it a length, or take one join away.", stops=True)


def _open_ports(plan: Plan) -> Iterator[Problem]:
    joined = {port for join in plan.joins for port in join}
    for p in plan.parts:
        open_ports = [port.number for port in p.ports() if port not in joined]
        for number in open_ports:
            name = "Its port" if p.part.ports == 1 else f"Port {number}"
            advice = (
                "Join it; an open coax end is an open stub."
                if isinstance(p.part, Coax)
                else "Join it, or leave it open."
            )
            yield Problem(p.id, f"{name} is tied to nothing.", advice, number)


def _reach(plan: Plan) -> Iterator[Problem]:
    radio = next((p.id for p in plan.parts if isinstance(p.part, Radio)), None)
    if radio is None:
        return
    away = joins_away(plan, radio)
    joined = {port.part for join in plan.joins for port in join}
    for p in plan.parts:
        if isinstance(p.part, Antenna) and p.id not in away and p.id in joined:
            yield Problem(p.id, "The radio does not reach it.", "Join its branch to the harness.")


def _matched_sets(plan: Plan) -> Iterator[Problem]:
    for broken in broken_sets(plan):
        advice = "Give all its sections one cable, length and ends, or take the odd ones out of the set."
        yield Problem(broken.part_id, broken.text, advice)


def _limits(plan: Plan) -> Iterator[Problem]:
    for name, spec in specs(Limits).items():
        if getattr(plan.limits, name) is not None and name not in JUDGED:
            yield Problem(
                None,
                f"The limit on {spec.label.lower()} is not judged.",
                "It needs the array to be described.",
            )
