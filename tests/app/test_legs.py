"""Legs: walking along a harness, its branches, the same leg again, and parts copied as text."""

from __future__ import annotations

import dataclasses
from itertools import pairwise
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.editing.edits import joined, removed
from app.editing.legs import Direction, branch_of, copied_text, neighbour, numbered, pasted, same_leg_again
from app.editing.matched import matched
from app.editing.tree import trees_of
from feedlib import Plan, PlanError, solve
from feedlib.matched import broken_sets, matched_sets
from feedlib.parts import Antenna, Coax, Splitter, Tee
from feedlib.plan import Port
from feedlib.plan_file import format_plan, parse_plan
from tests.app.laid_out import overlapping
from tests.plans import Sketch, random_plans


def port(text: str) -> Port:
    part, _, number = text.rpartition(":")
    return Port(part, int(number))


def ties(plan: Plan) -> set[frozenset[str]]:
    return {frozenset(map(str, join)) for join in plan.joins}


def coax(plan: Plan, part_id: str) -> Coax:
    part = plan.placed(part_id).part
    assert isinstance(part, Coax)
    return part


def add_leg(sketch: Sketch, at: str, name: str, y: float, length_m: float = 0.1) -> None:
    """A match and a tail with an antenna, in a row."""
    sketch.coax(length_m, 75, part_id=f"match {name}", at=[300, y])
    sketch.coax(0.2, part_id=f"tail {name}", at=[560, y])
    sketch.antenna(part_id=name, at=[760, y])
    sketch.join(at, f"match {name}:1", f"match {name}:2", f"tail {name}:1", f"tail {name}:2", f"{name}:1")


def pair(ports: int = 3, **tee: Any) -> Sketch:
    """radio - feeder - T1 with the legs A (above) and B."""
    sketch = Sketch()
    sketch.add("radio", "radio", at=[-420, 0])
    sketch.coax(3.0, part_id="feeder", at=[-100, 0])
    sketch.add("tee", "T1", ports=ports, at=[100, 0], **tee)
    sketch.join("radio:1", "feeder:1", "feeder:2", "T1:1")
    add_leg(sketch, "T1:2", "A", -72)
    add_leg(sketch, "T1:3", "B", 72)
    return sketch


def two_levels() -> Plan:
    """radio - T0 with the trunks up (T up with A, B) and down (T down with C and a bare stub, which is shorter)."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    sketch.add("tee", "T0")
    sketch.join("radio:1", "T0:1")
    for n, name in ((2, "up"), (3, "down")):
        sketch.coax(0.2, part_id=f"trunk {name}")
        sketch.add("tee", f"T {name}")
        sketch.join(f"T0:{n}", f"trunk {name}:1", f"trunk {name}:2", f"T {name}:1")
    for at, name in (("T up:2", "A"), ("T up:3", "B"), ("T down:2", "C")):
        sketch.coax(0.1, part_id=f"leg {name}")
        sketch.antenna(part_id=name)
        sketch.join(at, f"leg {name}:1", f"leg {name}:2", f"{name}:1")
    sketch.coax(0.05, part_id="stub")
    sketch.join("T down:3", "stub:1")
    return sketch.plan()


def ring() -> Plan:
    """radio - T1; T1 - left - T2 and T1 - right - T2 side by side; T2 - leg - A."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    for name in ("T1", "T2"):
        sketch.add("tee", name)
    for name in ("left", "right", "leg"):
        sketch.coax(0.1, part_id=name)
    sketch.antenna(part_id="A")
    sketch.join("radio:1", "T1:1", "T1:2", "left:1", "left:2", "T2:1", "T1:3", "right:1", "right:2", "T2:2")
    sketch.join("T2:3", "leg:1", "leg:2", "A:1")
    return sketch.plan()


# Walking


@pytest.mark.parametrize(
    ("start", "keys", "end"),
    [
        ("radio", "right right right right right", "A"),
        ("A", "left left left left left", "radio"),
        ("radio", "left", None),
        ("A", "right", None),
        ("A", "down", "B"),
        ("B", "down", "C"),  # across to the other trunk, equally far out
        ("C", "down", "stub"),  # a branch that is shorter ends before
        ("stub", "down", None),
        ("stub", "up", "leg C"),
        ("C", "up", "B"),
        ("A", "up", None),
        ("leg A", "down", "leg B"),
        ("trunk up", "down", "trunk down"),
        ("T down", "up", "T up"),
        ("T0", "up", None),
        ("radio", "down", None),
    ],
)
def test_walking(start: str, keys: str, end: str | None) -> None:
    plan = two_levels()
    at: str | None = start
    moves: list[Direction] = keys.split()  # type: ignore[assignment]
    for key in moves:
        assert at is not None
        at = neighbour(plan, at, key)
    assert at == end


@given(random_plans(), st.data())
def test_walking_leads_from_the_radio_everywhere_and_back(plan: Plan, data: st.DataObject) -> None:
    tree = trees_of(plan)[0]
    at = data.draw(st.sampled_from(tree.order))
    steps = 0
    while (nearer := neighbour(plan, at, "left")) is not None:
        assert {at, nearer} in [{a.part, b.part} for a, b in plan.joins]
        at, steps = nearer, steps + 1
    assert at == tree.root
    assert steps < len(tree.order)
    # All parts of a row are met by going down from its first one, and again by going up.
    found, column = {at}, [at]
    while column:
        column = [i for parent in column for i in tree.down[parent]]
        for one, next_one in pairwise(column):
            if tree.parent(one) == tree.parent(next_one):
                assert neighbour(plan, one, "down") == next_one
                assert neighbour(plan, next_one, "up") == one
        found |= set(column)
    assert found == set(tree.order)


# Branches


@pytest.mark.parametrize(
    ("part_id", "branch"),
    [
        ("A", "A"),
        ("leg A", "leg A,A"),
        ("T up", "T up,leg A,A,leg B,B"),
        ("trunk down", "trunk down,T down,leg C,C,stub"),
        ("T0", "T0,trunk up,T up,trunk down,T down,leg A,A,leg B,B,leg C,C,stub"),
        ("radio", "radio,T0,trunk up,T up,trunk down,T down,leg A,A,leg B,B,leg C,C,stub"),
    ],
)
def test_a_branch_is_what_hangs_at_a_part(part_id: str, branch: str) -> None:
    assert ",".join(branch_of(two_levels(), part_id)) == branch


def test_a_branch_stops_where_a_ring_leads_round() -> None:
    plan = ring()
    assert branch_of(plan, "left") == ("left",)
    assert branch_of(plan, "right") == ("right",)
    assert branch_of(plan, "T2") == ("T2", "leg", "A")
    assert branch_of(plan, "T1") == ("T1", "T2", "left", "right", "leg", "A")


def test_a_branch_that_the_radio_does_not_reach() -> None:
    plan = dataclasses.replace(two_levels(), joins=two_levels().joins[2:])  # without radio - T0 and T0 - trunk up
    assert branch_of(plan, "T up") == ("T up", "leg A", "A", "leg B", "B")
    assert branch_of(plan, "radio") == ("radio",)


@given(random_plans(), st.data())
def test_a_branch_is_what_falls_off_with_its_part(plan: Plan, data: st.DataObject) -> None:
    """By taking the part away and asking what the radio still reaches."""
    tree = trees_of(plan)[0]
    part_id = data.draw(st.sampled_from(tree.order))
    joins = tuple(j for j in plan.joins if part_id not in (j[0].part, j[1].part))
    left = set(trees_of(dataclasses.replace(plan, joins=joins))[0].order) - {part_id}
    expected = set(tree.order) - left if part_id != tree.root else set(tree.order)
    assert set(branch_of(plan, part_id)) == expected


# The same leg again


@pytest.mark.parametrize("chosen", [["match B"], ["B"], ["B", "tail B"], ["tail B", "match B"]])
def test_the_same_leg_again_on_a_full_tee(chosen: list[str]) -> None:
    plan = pair().plan()
    after, new = same_leg_again(plan, chosen)
    assert new == ("match C", "tail C", "C")
    assert after.placed("T1").part == Tee(ports=4)
    added = {("T1:4", "match C:1"), ("match C:2", "tail C:1"), ("tail C:2", "C:1")}
    assert ties(after) == ties(plan) | {frozenset(tie) for tie in added}
    assert after.placed("C").part == plan.placed("B").part
    assert [p.id for p in after.parts] == [*(p.id for p in plan.parts), *new]
    assert matched_sets(after) == {"A": ("match B", "match C"), "B": ("tail B", "tail C")}
    assert coax(after, "match C").length_m == coax(plan, "match B").length_m
    assert after.cables == plan.cables


def test_copies_stay_in_the_sets_of_their_originals() -> None:
    plan = matched(pair().plan(), ["match A", "match B"])
    after, _ = same_leg_again(plan, ["A"])
    assert matched_sets(after) == {"A": ("match A", "match B", "match C"), "B": ("tail A", "tail C")}
    again, new = same_leg_again(after, ["C"])
    assert new == ("match D", "tail D", "D")
    assert matched_sets(again)["B"] == ("tail A", "tail C", "tail D")
    assert again.placed("T1").part == Tee(ports=5)
    assert broken_sets(again) == ()


def test_three_equal_legs_share_the_power() -> None:
    after, _ = same_leg_again(pair().plan(), ["B"])
    shares = solve(after).mark.antenna_share[0]
    assert shares == pytest.approx([shares[0]] * 3, rel=1e-12)
    assert shares[0] > 0.1


def test_the_copy_stands_below_all_in_its_way() -> None:
    for chosen in ("A", "B"):
        after, new = same_leg_again(pair().plan(), [chosen])
        assert [after.placed(i).at for i in new] == [(300, 216), (560, 216), (760, 216)]
        assert overlapping(after) == []


def test_a_free_port_is_taken_first() -> None:
    after, _ = same_leg_again(pair(ports=5).plan(), ["A"])
    assert after.placed("T1").part == Tee(ports=5)
    assert after.mate(port("T1:4")) == port("match C:1")
    after, _ = same_leg_again(removed(pair(ports=3).plan(), ["match A", "tail A", "A"]), ["B"])
    assert after.mate(port("T1:2")) == port("match A:1")
    assert after.placed("T1").part == Tee(ports=3)


def test_a_port_may_be_chosen() -> None:
    plan = pair(ports=6).plan()
    after, _ = same_leg_again(plan, ["A"], port("T1:6"))
    assert after.mate(port("T1:6")) == port("match C:1")
    with pytest.raises(PlanError, match="joined already"):
        same_leg_again(plan, ["A"], port("T1:3"))


def test_the_branch_of_a_joint_hangs_at_the_next_joint() -> None:
    after, new = same_leg_again(two_levels(), ["T up"])
    assert new == ("trunk up 2", "T up 2", "leg D", "D", "leg E", "E")
    assert after.mate(port("T0:4")) == port("trunk up 2:1")
    assert after.mate(port("T up 2:3")) == port("leg E:1")
    assert after.mate(port("leg E:2")) == port("E:1")


def test_a_leg_drawn_backwards_hangs_by_the_same_port() -> None:
    sketch = pair()
    sketch.joins.remove(["T1:2", "match A:1"])
    sketch.joins.remove(["match A:2", "tail A:1"])
    sketch.join("match A:2", "T1:2", "match A:1", "tail A:1")
    after, _ = same_leg_again(sketch.plan(), ["A"])
    assert after.mate(port("T1:4")) == port("match C:2")
    assert after.mate(port("tail C:1")) == port("match C:1")


def splitter_pair(form: str, outputs: int = 2, arms: tuple[int, int] = (2, 3)) -> Sketch:
    sketch = Sketch()
    sketch.add("radio", "radio")
    sketch.add("splitter", "split", form=form, centre_hz=868e6, outputs=outputs)
    sketch.join("radio:1", "split:1")
    for n, name in zip(arms, "AB", strict=True):
        sketch.antenna(part_id=name)
        sketch.join(f"split:{n}", f"{name}:1")
    return sketch


@pytest.mark.parametrize("form", ["wilkinson", "resistive"])
def test_a_full_splitter_gets_one_output_more(form: str) -> None:
    after, new = same_leg_again(splitter_pair(form).plan(), ["B"])
    part = after.placed("split").part
    assert isinstance(part, Splitter)
    assert (part.form, part.outputs) == (form, 3)
    assert new == ("C",)
    assert after.mate(port("split:4")) == port("C:1")


@pytest.mark.parametrize("form", ["branch_line", "rat_race"])
def test_a_hybrid_gets_no_more_and_nothing_on_its_isolated_port(form: str) -> None:
    plan = splitter_pair(form).plan()
    assert plan.mate(port("split:4")) is None
    with pytest.raises(PlanError, match=r'part "split".*no free port'):
        same_leg_again(plan, ["A"])
    after, _ = same_leg_again(removed(plan, ["B"]), ["A"])
    assert after.mate(port("split:3")) == port("B:1")


@pytest.mark.parametrize("chosen", ["radio", "feeder", "T1"])
def test_what_hangs_at_no_junction_cannot_be_had_again(chosen: str) -> None:
    with pytest.raises(PlanError, match="no T joint or splitter"):
        same_leg_again(pair().plan(), [chosen])


def test_a_common_port_that_is_open_is_left_to_the_radio() -> None:
    """Legs at a splitter that nothing feeds yet."""
    plan = splitter_pair("wilkinson").plan()
    plan = dataclasses.replace(plan, joins=plan.joins[1:])
    after, _ = same_leg_again(plan, ["A"])
    assert after.mate(port("split:1")) is None
    assert after.mate(port("split:4")) == port("C:1")
    assert after.placed("split").part.ports == 4


def test_the_free_port_after_the_leg_is_taken_before_one_above_it() -> None:
    plan = splitter_pair("wilkinson", 5, (3, 5)).plan()
    assert same_leg_again(plan, ["A"])[0].mate(port("split:4")) == port("C:1")
    assert same_leg_again(plan, ["B"])[0].mate(port("split:6")) == port("C:1")
    full_below = splitter_pair("wilkinson", 3, (3, 4)).plan()
    assert same_leg_again(full_below, ["B"])[0].mate(port("split:2")) == port("C:1")


def test_labels_are_not_doubled_and_notes_are_kept() -> None:
    sketch = splitter_pair("wilkinson")
    sketch.parts[-1] |= {"label": "north", "note": "hot side up"}
    after, new = same_leg_again(sketch.plan(), ["B"])
    copy = after.placed(new[0])
    assert (copy.label, copy.note, copy.name) == ("", "hot side up", "C")


@given(random_plans(), st.data())
def test_the_same_leg_again_doubles_a_branch_and_changes_nothing_else(plan: Plan, data: st.DataObject) -> None:
    chosen = data.draw(st.sampled_from([p.id for p in plan.parts]))
    try:
        after, new = same_leg_again(plan, [chosen])
    except PlanError:
        return
    assert parse_plan(format_plan(after).encode()) == after
    (hung,) = ({a, b} for a, b in after.joins if (a.part in new) != (b.part in new))
    (head,) = (p.part for p in hung if p.part in new)
    assert set(branch_of(after, head)) == set(new)
    kinds = [p.part.KIND for p in plan.parts]
    assert [p.part.KIND for p in after.parts][: len(kinds)] == kinds
    assert set(plan.joins) <= set(after.joins)
    inner = [j for j in after.joins if j[0].part in new and j[1].part in new]
    assert len(after.joins) == len(plan.joins) + len(inner) + 1


# As text


def test_copied_and_pasted_into_another_plan() -> None:
    plan = pair().plan()
    text = copied_text(plan, ["match A", "tail A", "A", "T1"])
    other, new = pasted(Sketch(433e6).plan(), text, (1000, 500))
    assert new == ("T1", "match A", "tail A", "A")
    assert ties(other) == {
        frozenset(tie) for tie in (("T1:2", "match A:1"), ("match A:2", "tail A:1"), ("tail A:2", "A:1"))
    }
    assert set(other.cables) == {"match A", "tail A"}
    assert [p.part for p in other.parts] == [plan.placed(i).part for i in new]
    xs, ys = zip(*(p.at for p in other.parts), strict=True)
    assert (min(xs) + max(xs)) / 2 == pytest.approx(1000, abs=6)
    assert (min(ys) + max(ys)) / 2 == pytest.approx(500, abs=6)
    assert max(xs) - min(xs) == 660
    assert other.band.start_hz == 433e6


def test_the_text_is_a_plan_of_its_own() -> None:
    plan = pair().plan()
    piece = parse_plan(copied_text(plan, ["A", "tail A"]).encode())
    assert [p.id for p in piece.parts] == ["tail A", "A"]
    assert piece.joins == ((port("tail A:2"), port("A:1")),)
    assert list(piece.cables) == ["tail A"]


def test_ids_are_made_free() -> None:
    plan = pair().plan()
    after, new = pasted(plan, copied_text(plan, [p.id for p in plan.parts]), (0, 900))
    assert new == ("radio 2", "feeder 2", "T2", "match C", "tail C", "C", "match D", "tail D", "D")
    assert after.mate(port("T2:3")) == port("match D:1")
    assert after.cables == plan.cables
    again, new = pasted(after, copied_text(plan, ["T1", "feeder"]), (0, 900))
    assert new == ("feeder 3", "T3")
    assert again.mate(port("feeder 3:2")) == port("T3:1")


@pytest.mark.parametrize(
    ("name", "following"),
    [
        ("T1", "T2 T3"),
        ("leg", "leg 2|leg 3"),
        ("coax 9", "coax 10|coax 11"),
        ("x" * 64, "x" * 62 + " 2|" + "x" * 62 + " 3"),
        ("9" * 64, "9" * 54 + "1000000000|" + "9" * 54 + "1000000001"),
    ],
)
def test_names_of_the_same_kind(name: str, following: str) -> None:
    names = numbered(name)
    assert [next(names), next(names)] == following.split("|" if "|" in following else " ")


def test_cables_of_one_name_and_other_figures() -> None:
    plan = pair().plan()
    text = copied_text(plan, ["match A"])
    thin = dataclasses.replace(plan.cables["match A"], velocity_factor=0.5)
    there = dataclasses.replace(plan, cables={"match A": thin, "match A 2": thin})
    there = dataclasses.replace(there, parts=(), joins=())
    after, _ = pasted(there, text, (0, 0))
    assert coax(after, "match A").cable == "match A 3"
    assert after.cables == {"match A": thin, "match A 2": thin, "match A 3": plan.cables["match A"]}
    again, new = pasted(after, text, (0, 0))
    assert again.cables == after.cables
    assert coax(again, new[0]).cable == "match A 3"


def test_two_cables_never_end_up_as_one() -> None:
    """The other plan has "X" of other figures; the piece has "X" and "X 2"."""
    sketch = Sketch()
    sketch.coax(1, 50, part_id="X")
    sketch.coax(1, 75, part_id="X 2")
    other = Sketch()
    other.coax(1, 93, part_id="X")
    after, new = pasted(other.plan(), copied_text(sketch.plan(), ["X", "X 2"]), (0, 0))
    assert [after.cables[coax(after, i).cable].z0_ohm for i in new] == [50, 75]
    assert after.cables["X"].z0_ohm == 93


def test_matched_sets_of_a_piece() -> None:
    plan = matched(pair().plan(), ["match A", "match B"])
    both = copied_text(plan, ["match A", "match B"])
    assert matched_sets(pasted(plan, both, (0, 0))[0]) == {"A": ("match A", "match B", "match A 2", "match B 2")}
    longer = matched(pair().plan(), ["tail A", "tail B"])  # has a set A of its own, unlike this one
    assert matched_sets(pasted(longer, both, (0, 0))[0]) == {
        "A": ("tail A", "tail B"),
        "B": ("match A 2", "match B 2"),
    }
    assert matched_sets(pasted(Sketch().plan(), both, (0, 0))[0]) == {"A": ("match A", "match B")}
    two_sets = matched(plan, ["tail A", "tail B"])
    legs = copied_text(two_sets, ["match A", "match B", "tail A", "tail B"])
    names = matched_sets(pasted(longer, legs, (0, 0))[0])
    assert [len(members) for members in names.values()] == [2, 2, 2]
    alone = copied_text(plan, ["match A"])
    assert matched_sets(pasted(Sketch().plan(), alone, (0, 0))[0]) == {}
    assert matched_sets(pasted(plan, alone, (0, 0))[0]) == {"A": ("match A", "match B", "match A 2")}


@pytest.mark.parametrize(
    "text",
    ["", "hello", "[]", "{}", "NaN", '{"format": "other"}', "\ud800", "[" * 5000, "\x00", '{"a": 1, "a": 2}',
     '{"format": "feedwright-plan", "version": 1, "band": {"start_hz": 1, "stop_hz": 2}}'],
)  # fmt: skip
def test_foreign_text_is_refused_in_one_sentence(text: str) -> None:
    with pytest.raises(PlanError) as caught:
        pasted(pair().plan(), text, (0, 0))
    assert str(caught.value) == "this text holds no parts: copy some on a bench, and paste them here"


def test_a_damaged_copy_says_what_is_wrong() -> None:
    text = copied_text(pair().plan(), ["tail A"]).replace('"length_m": 0.2', '"length_m": -0.2')
    with pytest.raises(PlanError, match=r'part "tail A", length_m: wants'):
        pasted(pair().plan(), text, (0, 0))
    with pytest.raises(PlanError, match="version"):
        pasted(pair().plan(), copied_text(pair().plan(), ["A"]).replace('"version": 1', '"version": 99'), (0, 0))


@given(random_plans(), random_plans(), st.data())
def test_what_is_pasted_is_what_was_copied(plan: Plan, other: Plan, data: st.DataObject) -> None:
    chosen = data.draw(st.lists(st.sampled_from([p.id for p in plan.parts]), min_size=1, unique=True))
    after, new = pasted(other, copied_text(plan, chosen), (24.0, -36.0))
    assert after.parts[: len(other.parts)] == other.parts
    assert after.joins[: len(other.joins)] == other.joins
    assert {name: after.cables[name] for name in other.cables} == other.cables
    old = [p for p in plan.parts if p.id in chosen]
    assert [p.part.KIND for p in after.parts[len(other.parts) :]] == [p.part.KIND for p in old]
    ids = {p.id: i for p, i in zip(old, new, strict=True)}
    moved = [
        (Port(ids[a.part], a.number), Port(ids[b.part], b.number))
        for a, b in plan.joins
        if {a.part, b.part} <= ids.keys()
    ]
    assert list(after.joins[len(other.joins) :]) == moved
    for placed in old:
        copy = after.placed(ids[placed.id]).part
        if isinstance(placed.part, Coax):
            assert isinstance(copy, Coax)
            assert after.cables[copy.cable] == plan.cables[placed.part.cable]
            copy = dataclasses.replace(copy, cable=placed.part.cable)
        assert copy == placed.part


def test_antenna_letters_are_the_next_free() -> None:
    sketch = Sketch()
    for name in ("A", "B", "D", "north"):
        sketch.antenna(part_id=name)
    plan = sketch.plan()
    after, new = pasted(plan, copied_text(plan, ["A", "north", "D"]), (0, 0))
    assert new == ("C", "E", "F")
    assert all(isinstance(after.placed(i).part, Antenna) for i in new)


def test_a_leg_pasted_and_joined_works_as_the_first() -> None:
    plan = pair(ports=4).plan()
    after, new = pasted(plan, copied_text(plan, ["match B", "tail B", "B"]), (500, 216))
    after = joined(after, port("T1:4"), Port(new[0], 1))
    leg, _ = same_leg_again(plan, ["B"])
    assert solve(after).mark.antenna_share == pytest.approx(solve(leg).mark.antenna_share, rel=1e-12)
