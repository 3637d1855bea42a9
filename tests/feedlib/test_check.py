"""Problems of half-built plans: where, what is wrong, what to do, and whether solving stops."""

from __future__ import annotations

import dataclasses
import json
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from feedlib import Plan, Problem, SolveError, check, solve
from feedlib.parts import Radio
from feedlib.plan_file import parse_plan
from tests.feedlib.plan_documents import EXAMPLE, LEAST, ONE_PORT, TWO_PORT, Document, part, plan_document
from tests.plans import random_plans

CABLES = {"C": {"z0_ohm": 50, "velocity_factor": 0.7}}
RADIO = {"id": "radio", "kind": "radio"}
ANTENNA = part("antenna", "A")


def plan_of(*parts: Document, joins: list[Any] | None = None, **top: Any) -> Plan:
    """A plan from 100 to 200 MHz."""
    return parse_plan(json.dumps(plan_document(*parts, joins=joins, **{"cables": CABLES, **top})).encode())


def about(plan: Plan, part_id: str | None) -> list[Problem]:
    """The problems at one part, or those of the plan as a whole."""
    return [p for p in check(plan) if p.part_id == part_id]


def only(problems: list[Problem], *words: str) -> Problem:
    """The one problem whose text has all these words; it also says what to do."""
    found = [p for p in problems if all(word in p.text for word in words)]
    assert len(found) == 1, problems
    assert found[0].text.endswith(".")
    assert found[0].advice.endswith(".")
    assert "\n" not in found[0].text + found[0].advice
    return found[0]


def stopped(plan: Plan, part_id: str | None) -> str:
    """What solving says, which stops at that part."""
    with pytest.raises(SolveError) as caught:
        solve(plan)
    assert caught.value.part == part_id
    assert part_id is None or part_id in str(caught.value)
    return str(caught.value)


def test_sound_plan_has_no_problem() -> None:
    plan = parse_plan(EXAMPLE.encode())
    assert check(plan) == ()
    assert solve(plan).antenna_ids == ("A", "B")


def test_empty_plan_opens() -> None:
    plan = plan_of()
    assert [p.stops for p in check(plan)] == [True, False]
    only(about(plan, None), "no radio")
    only(about(plan, None), "no antenna")


def test_no_radio() -> None:
    plan = plan_of(ANTENNA)
    assert only(about(plan, None), "no radio").stops
    assert "radio" in stopped(plan, None)


def test_two_radios() -> None:
    plan = plan_of(RADIO, ANTENNA, {**RADIO, "id": "second"}, {**RADIO, "id": "third"}, joins=[["radio:1", "A:1"]])
    assert only(about(plan, "second"), "more than one radio").stops
    assert only(about(plan, "third"), "more than one radio").stops
    assert about(plan, "radio") == []
    assert "radio" in stopped(plan, "second")


def test_no_antenna_does_not_stop() -> None:
    plan = plan_of(RADIO, part("load", "L", impedance_ohm=[50, 0]), joins=[["radio:1", "L:1"]])
    assert not only(about(plan, None), "no antenna").stops
    answer = solve(plan)
    assert answer.antenna_ids == ()
    assert answer.antenna_current_a.shape == (201, 0)
    assert answer.part_loss_share["L"] == pytest.approx(1, rel=1e-12)
    assert answer.reflected_share.max() < 1e-12


def test_cable_that_is_not_there() -> None:
    leg = part("coax", "leg", cable="RG-999")
    plan = plan_of(RADIO, leg, ANTENNA, joins=[["radio:1", "leg:1"], ["leg:2", "A:1"]])
    problem = only(about(plan, "leg"), "RG-999")
    assert problem.stops
    assert "cable" in problem.advice
    assert "RG-999" in stopped(plan, "leg")


def test_cable_of_a_loose_coax_is_missed_as_well() -> None:
    plan = plan_of(RADIO, part("coax", "leg", cable="RG-999"), ANTENNA, joins=[["radio:1", "A:1"]])
    only(about(plan, "leg"), "RG-999")


@pytest.mark.parametrize(
    ("loose", "ports"),
    [
        (part("coax", "X"), [1, 2]),
        (part("tee", "X", ports=4), [1, 2, 3, 4]),
        (part("splitter", "X"), [1, 2, 3]),
        (part("splitter", "X", form="rat_race"), [1, 2, 3, 4]),
        (part("lumped", "X"), [1, 2]),
        (part("pad", "X"), [1, 2]),
        (part("transformer", "X"), [1, 2]),
        (part("load", "X"), [1]),
        (part("antenna", "X"), [1]),
        (part("measured", "X"), [1, 2]),
    ],
    ids=lambda value: value["kind"] if isinstance(value, dict) else "",
)
def test_open_ports_are_listed_one_by_one_and_do_not_stop(loose: Document, ports: list[int]) -> None:
    plan = plan_of(RADIO, ANTENNA, loose, joins=[["radio:1", "A:1"]])
    assert [p.port for p in about(plan, "X")] == ports
    assert not any(p.stops for p in check(plan))
    for number in ports:
        problem = next(p for p in about(plan, "X") if p.port == number)
        assert "tied to nothing" in problem.text
        assert len(ports) == 1 or f"Port {number} " in problem.text
        assert "open" in problem.advice
    share = solve(plan).antenna_share[:, 0]
    assert share == pytest.approx(1, rel=1e-12)  # what hangs loose changes nothing


def test_open_radio() -> None:
    plan = plan_of(RADIO, ANTENNA)
    assert only(about(plan, "radio"), "tied to nothing").port == 1
    assert only(about(plan, "A"), "tied to nothing").port == 1
    answer = solve(plan)
    assert answer.reflected_share == pytest.approx(1, rel=1e-12)
    assert not answer.antenna_current_a.any()


@pytest.mark.parametrize("radio_first", [True, False])
@pytest.mark.parametrize("kind", [kind for kind in LEAST if kind != "radio"])
def test_first_two_parts_on_a_bench_are_solved(kind: str, radio_first: bool) -> None:
    loose = part(kind, "X")
    plan = plan_of(*([RADIO, loose] if radio_first else [loose, RADIO]))
    assert solve(plan).reflected_share == pytest.approx(1, rel=1e-12)


def test_open_stub_is_named_as_one() -> None:
    parts = RADIO, part("tee", "T"), part("coax", "stub"), ANTENNA
    plan = plan_of(*parts, joins=[["radio:1", "T:1"], ["T:2", "A:1"], ["T:3", "stub:1"]])
    problem = only(list(check(plan)), "tied to nothing")
    assert (problem.part_id, problem.port, problem.stops) == ("stub", 2, False)
    assert "open stub" in problem.advice


def test_antenna_that_the_radio_does_not_reach() -> None:
    parts = RADIO, ANTENNA, part("antenna", "far"), part("coax", "leg")
    plan = plan_of(*parts, joins=[["radio:1", "A:1"], ["leg:1", "far:1"]])
    assert not only(about(plan, "far"), "radio", "reach").stops
    answer = solve(plan)
    assert not answer.antenna_current_a[:, 1].any()


# 100 to 900 MHz is what both files cover.
def measured(band: Document, **top: Any) -> Plan:
    """A measured antenna behind a measured part."""
    antenna = part("antenna", "A", impedance={"touchstone": ONE_PORT})
    filter_ = part("measured", "filter", touchstone=TWO_PORT)
    joins = [["radio:1", "filter:1"], ["filter:2", "A:1"]]
    return plan_of(RADIO, filter_, antenna, joins=joins, band=band, **top)


BAND = {"start_hz": 100e6, "stop_hz": 900e6}


@pytest.mark.parametrize(
    "asked",
    [
        {"band": {"start_hz": 99e6, "stop_hz": 200e6}},
        {"band": {"start_hz": 200e6, "stop_hz": 901e6}},
        {"band": {"start_hz": 99e6, "stop_hz": 99e6, "points": 1}},
        {"band": {**BAND, "mark_hz": 950e6}},
        {"band": BAND, "channels": [{"name": "low", "hz": 50e6}]},
        {"band": BAND, "sweep": {"start_hz": 90e6, "stop_hz": 900e6}},
    ],
    ids=["below", "above", "one point", "mark", "channel", "sweep"],
)
def test_data_that_does_not_cover_what_is_asked(asked: Document) -> None:
    plan = measured(**asked)
    for part_id in ("filter", "A"):
        problem = only(about(plan, part_id), "100 to 900 MHz")
        assert problem.stops
        assert "band" in problem.advice
    assert "100 to 900 MHz" in stopped(plan, "filter")


def test_data_that_just_covers() -> None:
    plan = measured(BAND)
    assert check(plan) == ()
    assert solve(plan).frequency_hz[-1] == 900e6


def test_one_point_serves_only_its_own_frequency() -> None:
    file = {"name": "one.s1p", "text": "# MHz S RI R 50\n144 0 0\n"}
    antenna = part("antenna", "A", impedance={"touchstone": file})
    joins = [["radio:1", "A:1"]]
    there = plan_of(RADIO, antenna, joins=joins, band={"start_hz": 144e6, "stop_hz": 144e6, "points": 1})
    assert check(there) == ()
    assert solve(there).antenna_share[0, 0] == pytest.approx(1, rel=1e-12)
    beside = plan_of(RADIO, antenna, joins=joins, band={"start_hz": 144e6, "stop_hz": 144.001e6})
    assert only(about(beside, "A"), "144 to 144 MHz").stops
    stopped(beside, "A")


ZERO = part("coax", "zero", length_m=0)
LOOPS: dict[str, tuple[list[Document], list[list[str]]]] = {
    "tee on itself": ([part("tee", "T2")], [["T:3", "T2:1"], ["T2:2", "T2:3"]]),
    "two tees": ([part("tee", "T2")], [["T:3", "T2:1"], ["T:4", "T2:2"]]),
    "no length": ([part("tee", "T2"), ZERO], [["T:3", "T2:1"], ["T:4", "zero:1"], ["zero:2", "T2:2"]]),
    "no loss": (
        [part("tee", "T2"), part("pad", "zero", loss_db=0)],
        [["T:3", "T2:1"], ["T:4", "zero:1"], ["zero:2", "T2:2"]],
    ),
    "no ohms": (
        [part("tee", "T2"), part("lumped", "zero", r_ohm=0)],
        [["T:3", "T2:1"], ["T:4", "zero:1"], ["zero:2", "T2:2"]],
    ),
    "two shorts": ([part("load", "S1"), part("load", "S2")], [["T:3", "S1:1"], ["T:4", "S2:1"]]),
}


@pytest.mark.parametrize("loop", LOOPS.values(), ids=LOOPS)
def test_loop_whose_current_is_not_determined(loop: tuple[list[Document], list[list[str]]]) -> None:
    parts, joins = loop
    plan = plan_of(
        RADIO, part("tee", "T", ports=4), ANTENNA, *parts, joins=[["radio:1", "T:1"], ["T:2", "A:1"], *joins]
    )
    problem = next(p for p in check(plan) if "loop" in p.text)
    assert problem.stops
    assert problem.part_id in {"T", *(p["id"] for p in parts)}
    assert "length" in problem.advice
    assert "loop" in stopped(plan, problem.part_id)


@pytest.mark.parametrize(
    "tie",
    [
        part("coax", "tie", length_m=1e-3),
        part("coax", "tie", length_m=0, ends=[None, {"z0_ohm": 50, "velocity_factor": 1, "length_m": 1e-3}]),
        part("pad", "tie", loss_db=0.1),
        part("lumped", "tie", r_ohm=0.1),
    ],
    ids=lambda tie: tie["kind"],
)
def test_loop_with_some_length_or_loss_is_fine(tie: Document) -> None:
    joins = [
        ["radio:1", "T:1"],
        ["T:2", "A:1"],
        ["T:3", "T2:1"],
        ["T:4", "tie:1"],
        ["tie:2", "T2:2"],
        ["T2:3", "end:1"],
    ]
    end = part("load", "end", impedance_ohm=[75, 0])
    plan = plan_of(RADIO, part("tee", "T", ports=4), ANTENNA, part("tee", "T2"), tie, end, joins=joins)
    assert check(plan) == ()
    assert solve(plan).reflected_share.max() < 1


@pytest.mark.parametrize(("limit", "name"), [("axial_ratio_db", "axial ratio"), ("gain_over_one_db", "gain over one")])
def test_limit_that_is_not_judged_yet(limit: str, name: str) -> None:
    plan = plan_of(RADIO, ANTENNA, joins=[["radio:1", "A:1"]], limits={limit: 3, "return_loss_db": 10})
    assert not only(about(plan, None), name).stops
    assert [v.limit for v in solve(plan).verdicts] == ["return_loss_db"]


def test_what_stops_comes_first() -> None:
    loose = [part("pad", "P"), part("coax", "leg", cable="RG-999"), part("tee", "T")]
    stops = [p.stops for p in check(plan_of(*loose))]
    assert stops == sorted(stops, reverse=True)
    assert stops.count(True) == 2  # no radio, no cable


@settings(max_examples=100, deadline=None)
@given(random_plans(), st.data())
def test_solving_stops_exactly_where_a_problem_says_so(plan: Plan, data: st.DataObject) -> None:
    """Whatever is taken away from a sound plan, it stays a plan whose problems can be listed."""
    parts = data.draw(st.lists(st.sampled_from(plan.parts), unique_by=lambda p: p.id)) if plan.parts else []
    left = {p.id for p in parts}
    joins = tuple(j for j in plan.joins if left.issuperset(port.part for port in j) and data.draw(st.booleans()))
    cables = {name: cable for name, cable in plan.cables.items() if data.draw(st.integers(0, 9))}
    broken = dataclasses.replace(plan, parts=tuple(parts), joins=joins, cables=cables)
    problems = check(broken)
    stopping = {p.part_id for p in problems if p.stops}
    assert {p.part_id for p in problems} <= {None, *left}
    joined = {port for join in joins for port in join}
    open_ports = {(p.id, port.number) for p in parts for port in p.ports() if port not in joined}
    assert {(p.part_id, p.port) for p in problems if p.port is not None} == open_ports
    assert (None in stopping) == (not any(isinstance(p.part, Radio) for p in parts))
    if stopping:
        with pytest.raises(SolveError) as caught:
            solve(broken)
        assert caught.value.part in stopping
    else:
        solve(broken)
