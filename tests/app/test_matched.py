"""Matched sets: made, left, changed and turned together; what a file holds unmatched is told."""

from __future__ import annotations

import dataclasses
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.editing.edits import turned_length
from app.editing.matched import free_set_name, letters, matched, set_of, unmatched, with_coax
from feedlib import Plan, PlanError, check
from feedlib.matched import broken_sets, matched_sets
from feedlib.parts import Coax, CoaxEnd
from feedlib.plan_file import format_plan, parse_plan
from tests.plans import Sketch

PLUG = {"z0_ohm": 40, "velocity_factor": 0.8, "length_m": 0.01}


def bench(**sets: str) -> Plan:
    """Five sections a to e of 0.1 to 0.5 m, each of a cable of its own, in the sets that are given; and an antenna."""
    sketch = Sketch()
    for n, name in enumerate("abcde"):
        fields: dict[str, Any] = {"matched_set": sets[name]} if name in sets else {}
        sketch.coax((n + 1) / 10, 50 + n, part_id=name, ends=[PLUG, None] if name == "a" else [None, None], **fields)
    sketch.antenna(part_id="A")
    return sketch.plan()


def coax(plan: Plan, part_id: str) -> Coax:
    part = plan.placed(part_id).part
    assert isinstance(part, Coax)
    return part


def lengths(plan: Plan, ids: str = "abcde") -> list[float]:
    return [coax(plan, i).length_m for i in ids]


# Made


def test_a_new_set_takes_everything_from_its_first_section() -> None:
    plan = matched(bench(), ["b", "a", "d"])
    assert matched_sets(plan) == {"A": ("a", "b", "d")}
    assert lengths(plan) == [0.2, 0.2, 0.3, 0.2, 0.5]
    assert [coax(plan, i).cable for i in "abd"] == ["b", "b", "b"]
    assert [coax(plan, i).ends for i in "abd"] == [(None, None)] * 3
    plan = matched(bench(), ["a", "e"])
    assert coax(plan, "e").ends == (CoaxEnd(z0_ohm=40, velocity_factor=0.8, length_m=0.01), None)
    assert plan.placed("c") == bench().placed("c")


def test_sets_are_called_by_the_next_free_letter() -> None:
    plan = matched(matched(bench(), ["a", "b"]), ["c", "d"])
    assert matched_sets(plan) == {"A": ("a", "b"), "B": ("c", "d")}
    assert matched_sets(matched(bench(a="B", b="B"), ["d", "e"])) == {"B": ("a", "b"), "A": ("d", "e")}
    assert [letters(n) for n in (1, 2, 26, 27, 28, 52, 53, 702, 703)] == [
        "A",
        "B",
        "Z",
        "AA",
        "AB",
        "AZ",
        "BA",
        "ZZ",
        "AAA",
    ]
    full = Sketch()
    for n in range(26):
        for name in (f"x{n}", f"y{n}"):
            full.coax(1, part_id=name, matched_set=chr(ord("A") + n))
    assert free_set_name(full.plan()) == "AA"


def test_sections_join_the_set_of_the_first() -> None:
    plan = matched(bench(a="B", b="B"), ["b", "d"])
    assert matched_sets(plan) == {"B": ("a", "b", "d")}
    assert lengths(plan, "abd") == [0.2, 0.2, 0.2]  # the others of the set as well


def test_a_set_that_loses_all_but_one_section_dissolves() -> None:
    plan = matched(bench(a="A", b="A", c="B", d="B"), ["a", "c"])
    assert matched_sets(plan) == {"A": ("a", "b", "c")}
    assert coax(plan, "d").matched_set is None
    assert coax(plan, "d").length_m == 0.4


def test_sets_that_an_edit_does_not_touch_stay_as_they_are() -> None:
    plan = bench(e="lone")
    assert matched_sets(matched(plan, ["a", "b"])) == {"A": ("a", "b"), "lone": ("e",)}
    assert matched_sets(unmatched(matched(plan, ["a", "b"]), ["a"])) == {"lone": ("e",)}


@pytest.mark.parametrize("ids", [[], ["a"], ["A"], ["a", "A"], ["a", "a"]])
def test_one_section_makes_no_set(ids: list[str]) -> None:
    with pytest.raises(PlanError, match="at least two coax"):
        matched(bench(), ids)


def test_what_is_no_coax_is_left_out() -> None:
    plan = matched(bench(), ["A", "c", "d"])
    assert matched_sets(plan) == {"A": ("c", "d")}
    assert lengths(plan, "cd") == [0.3, 0.3]


def test_one_section_of_a_broken_set_mends_it() -> None:
    plan = bench(a="A", b="A", c="A")
    assert broken_sets(plan)
    assert broken_sets(matched(plan, ["b"])) == ()
    assert lengths(matched(plan, ["b"]), "abc") == [0.2, 0.2, 0.2]


# Left


def test_a_section_that_leaves_keeps_its_figures() -> None:
    plan = matched(bench(), ["a", "b", "c", "d"])
    after = unmatched(plan, ["b", "A", "e"])
    assert matched_sets(after) == {"A": ("a", "c", "d")}
    assert coax(after, "b") == dataclasses.replace(coax(plan, "b"), matched_set=None)


def test_the_last_two_part_together() -> None:
    assert matched_sets(unmatched(matched(bench(), ["a", "b"]), ["b"])) == {}
    assert matched_sets(unmatched(matched(bench(), ["a", "b", "c"]), ["a", "c"])) == {}


def test_members() -> None:
    plan = bench(d="A", b="A")
    assert set_of(plan, "b") == set_of(plan, "d") == ("b", "d")
    assert set_of(plan, "a") == ("a",)
    assert set_of(plan, "A") == ("A",)
    assert set_of(bench(a="", b=""), "a") == ("a",)  # a name of no letters is none


# Changed together


def test_cable_length_and_ends_reach_all_and_nothing_else_does() -> None:
    plan = matched(bench(), ["a", "b", "c"])
    end = CoaxEnd(z0_ohm=60, velocity_factor=0.7, length_m=0.02)
    after = with_coax(plan, "b", length_m=0.7, cable="e", ends=(None, end))
    for part_id in "abc":
        part = coax(after, part_id)
        assert (part.length_m, part.cable, part.ends, part.matched_set) == (0.7, "e", (None, end), "A")
    assert [after.placed(i) for i in "de"] == [plan.placed(i) for i in "de"]
    alone = with_coax(plan, "b", extra={"reach_m": 1})
    assert coax(alone, "b").extra == {"reach_m": 1}
    assert coax(alone, "a") == coax(plan, "a")
    assert lengths(with_coax(plan, "d", length_m=0.9)) == [0.1, 0.1, 0.1, 0.9, 0.5]


def test_a_value_out_of_range_is_refused() -> None:
    with pytest.raises(PlanError, match="length_m"):
        with_coax(matched(bench(), ["a", "b"]), "a", length_m=-1)


def test_one_turn_moves_all_members_once() -> None:
    plan = matched(bench(), ["a", "b", "c"])
    assert lengths(turned_length(plan, ["b"], 0.05)) == [0.15, 0.15, 0.15, 0.4, 0.5]
    assert lengths(turned_length(plan, ["a", "b", "c", "d"], 0.05)) == [0.15, 0.15, 0.15, 0.45, 0.5]
    assert lengths(turned_length(plan, ["d"], 0.05)) == [0.1, 0.1, 0.1, 0.45, 0.5]
    assert lengths(turned_length(plan, ["c"], -9)) == [0, 0, 0, 0.4, 0.5]


def test_a_turn_of_a_broken_set_moves_each_by_the_same() -> None:
    assert lengths(turned_length(bench(a="A", b="A"), ["a"], 0.05), "abc") == [0.15, 0.25, 0.3]


@given(st.data())
def test_sets_that_edits_make_are_never_broken(data: st.DataObject) -> None:
    plan = bench()
    ids = st.lists(st.sampled_from(["a", "b", "c", "d", "e", "A"]), max_size=5)
    for _ in range(data.draw(st.integers(1, 15))):
        verb = data.draw(st.sampled_from([matched, unmatched, turned_length, with_coax]))
        try:
            if verb is with_coax:
                plan = with_coax(plan, data.draw(st.sampled_from("abcde")), length_m=data.draw(st.floats(0, 9)))
            elif verb is turned_length:
                plan = turned_length(plan, data.draw(ids), data.draw(st.floats(-1, 1)))
            else:
                plan = verb(plan, data.draw(ids))
        except PlanError:
            continue
        assert broken_sets(plan) == ()
        assert all(len(members) > 1 for members in matched_sets(plan).values())
        assert parse_plan(format_plan(plan).encode()) == plan


# What a file may hold


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"length_m": 0.1}, "lengths"),
        ({"cable": "b"}, "cables"),
        ({"ends": (None, CoaxEnd(z0_ohm=50, velocity_factor=1, length_m=0))}, "ends"),
        ({"cable": "b", "length_m": 0.1}, "cables and lengths"),
        ({"cable": "b", "length_m": 0.1, "ends": (CoaxEnd(z0_ohm=1, velocity_factor=1, length_m=1), None)},
         "cables, lengths and ends"),
    ],
)  # fmt: skip
def test_a_set_that_is_not_matched_is_a_problem_at_its_odd_section(changes: dict[str, Any], words: str) -> None:
    plan = matched(bench(), ["c", "d", "e"])
    assert not [p for p in check(plan) if "matched" in p.text]
    odd = dataclasses.replace(coax(plan, "d"), **changes)
    parts = tuple(dataclasses.replace(p, part=odd) if p.id == "d" else p for p in plan.parts)
    (problem,) = (p for p in check(dataclasses.replace(plan, parts=parts)) if "matched" in p.text)
    assert (problem.part_id, problem.port, problem.stops) == ("d", None, False)
    assert problem.text == f"The matched set A is not matched: its {words} differ."
    assert problem.advice.endswith(".")


def test_what_differs_is_gathered_over_the_whole_set() -> None:
    (broken,) = broken_sets(matched(bench(a="X", b="X", c="X", d="Y", e="Z"), ["d", "e"]))
    assert (broken.name, broken.part_id, broken.differs) == ("X", "b", ("cable", "length_m", "ends"))


def test_a_strange_name_of_a_set_stays_on_one_line() -> None:
    (broken,) = broken_sets(bench(a="my set\n", b="my set\n"))
    assert broken.text.startswith('The matched set "my set\\n" is not matched: ')
