"""Edits of the plan itself, and any edits at all: what they make can be written, read back, and solved or told."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.editing import edits
from feedlib import Plan, PlanError, SolveError, check, solve
from feedlib.parts import Radio
from feedlib.plan import Cable, Channel
from feedlib.plan_file import format_plan, parse_plan
from tests.plans import Sketch, random_plans
from tests.random_edits import random_edit


def chain() -> Plan:
    """radio - one - two - antenna A."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    for name in ("one", "two"):
        sketch.coax(0.1, part_id=name)
    sketch.antenna(50, "A")
    sketch.join("radio:1", "one:1", "one:2", "two:1", "two:2", "A:1")
    return sketch.plan()


def test_a_cable_comes_in_and_changes() -> None:
    plan = chain()
    thin = Cable(z0_ohm=75, velocity_factor=0.7)
    after = edits.with_cable(plan, "thin", thin)
    assert after.cables == {**plan.cables, "thin": thin}
    assert "thin" not in plan.cables
    assert edits.with_cable(after, "thin", replace(thin, z0_ohm=93)).cables["thin"].z0_ohm == 93


@pytest.mark.parametrize(
    ("band", "sweep", "mark_hz"),
    [
        ({"start_hz": 900e6, "stop_hz": 910e6}, None, 900e6),
        ({"start_hz": 800e6, "stop_hz": 860e6}, None, 860e6),
        ({"start_hz": 866e6}, None, 868e6),
        ({"stop_hz": 865e6}, (860e6, 880e6), 868e6),
        ({"start_hz": 863e6, "mark_hz": 869e6}, None, 869e6),
    ],
)
def test_another_band_keeps_the_mark_inside(
    band: dict[str, float], sweep: tuple[float, float] | None, mark_hz: float
) -> None:
    wide = {"sweep": {"start_hz": sweep[0], "stop_hz": sweep[1]}} if sweep else {}
    plan = Sketch(860e6, 870e6, 11, mark_hz=868e6, **wide).plan()
    after = edits.with_band(plan, **band)
    assert after.band == replace(plan.band, **{"mark_hz": mark_hz, **band})


def test_a_band_that_cannot_be_is_refused() -> None:
    plan = Sketch(860e6, 870e6, 11, sweep={"start_hz": 850e6, "stop_hz": 880e6}).plan()
    for band in ({"start_hz": 871e6}, {"points": 0}, {"stop_hz": 890e6}):
        with pytest.raises(PlanError):
            edits.with_band(plan, **band)


def test_mark_limit_and_title() -> None:
    plan = Sketch(860e6, 870e6, 11, title="old", notes="n", limits={"return_loss_db": 20}).plan()
    assert edits.marked(plan, 861.5e6).band == replace(plan.band, mark_hz=861.5e6)
    assert edits.with_limit(plan, "phase_balance_deg", 5.0).limits == replace(plan.limits, phase_balance_deg=5.0)
    assert edits.with_limit(plan, "return_loss_db", None).limits == replace(plan.limits, return_loss_db=None)
    after = edits.retitled(plan, title="")
    assert (after.title, after.notes) == ("", "n")
    after = edits.retitled(plan, notes="")
    assert (after.title, after.notes) == ("old", "")
    assert replace(after, notes="n") == plan


def test_a_new_plan_is_a_radio_that_wants_antennas() -> None:
    plan = edits.new_plan()
    assert [p.part for p in plan.parts] == [Radio()]
    told = [p.text for p in check(plan)]
    assert "There is no antenna." in told
    assert not any(p.stops for p in check(plan))
    assert parse_plan(format_plan(plan).encode()) == plan


def test_plain_text_is_one_line() -> None:
    assert edits.plain_text("a\x00b\nc\td\x7f\x85e é Ω <b>") == "a b c d  e é Ω <b>"


# Any of them


@given(random_plans(), st.data())
def test_what_any_edits_make_can_be_written_and_read_back(plan: Plan, data: st.DataObject) -> None:
    first, text = plan, format_plan(plan)
    for _ in range(data.draw(st.integers(1, 12))):
        plan = data.draw(random_edit(plan))
        written = format_plan(plan)
        assert parse_plan(written.encode()) == plan
        assert format_plan(parse_plan(written.encode())) == written
    assert format_plan(first) == text


@given(random_plans(), st.data())
def test_what_any_edits_make_is_solved_or_told(plan: Plan, data: st.DataObject) -> None:
    """What stops a plan is a problem on the bench too."""
    for _ in range(data.draw(st.integers(1, 12))):
        plan = data.draw(random_edit(plan))
    if not any(problem.stops for problem in check(plan)):
        assert solve(plan).frequency_hz.size == plan.grid_hz().size
    else:
        with pytest.raises(SolveError):
            solve(plan)


def test_channels_and_unknown_fields_survive_edits() -> None:
    plan = replace(chain(), channels=(Channel(name="up", hz=868e6),), extra={"drums": {"d": 1}})
    after = edits.removed(edits.renamed(plan, "two", "2"), ["2"])
    assert (after.channels, after.extra) == (plan.channels, plan.extra)
