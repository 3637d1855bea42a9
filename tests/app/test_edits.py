"""Edits of parts and joins: what each verb changes, and what it leaves alone."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.editing import edits
from feedlib import Plan, PlanError, solve
from feedlib.parts import Antenna, AntennaImpedance, Coax, Load, Pad, Part, Radio, Splitter, Tee, Transformer
from feedlib.plan import Placed, Port
from tests.plans import Sketch, random_plans


def port(text: str) -> Port:
    part, _, number = text.rpartition(":")
    return Port(part, int(number))


def joins(plan: Plan) -> set[frozenset[str]]:
    """The joins without order and direction."""
    return {frozenset((str(a), str(b))) for a, b in plan.joins}


def tied(*pairs: str) -> set[frozenset[str]]:
    """Joins written as "radio:1 T1:1"."""
    return {frozenset(pair.split(" - ")) for pair in pairs}


def chain() -> Plan:
    """radio - one - two - three - antenna A, all 50 ohm."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    for name in ("one", "two", "three"):
        sketch.coax(0.1, part_id=name)
    sketch.antenna(50, "A")
    sketch.join("radio:1", "one:1", "one:2", "two:1", "two:2", "three:1", "three:2", "A:1")
    return sketch.plan()


def ring() -> Plan:
    """A radio and an antenna on a T joint with four ports, whose two other ports are tied through one coax."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    sketch.add("tee", "T1", ports=4)
    sketch.coax(0.1, part_id="around")
    sketch.antenna(50, "A")
    sketch.join("radio:1", "T1:1", "T1:2", "around:1", "around:2", "T1:3", "T1:4", "A:1")
    return sketch.plan()


def coax(plan: Plan, part_id: str) -> Coax:
    part = plan.placed(part_id).part
    assert isinstance(part, Coax)
    return part


# One part


def test_a_changed_part_leaves_the_others_as_they_are() -> None:
    plan = chain()
    after = edits.changed_part(plan, "two", length_m=0.3)
    assert coax(after, "two").length_m == 0.3
    assert coax(plan, "two").length_m == 0.1
    assert [p.id for p in after.parts] == [p.id for p in plan.parts]
    assert all(a is b for a, b in zip(after.parts, plan.parts, strict=True) if a.id != "two")
    assert after.joins == plan.joins


def test_a_value_out_of_range_is_refused() -> None:
    with pytest.raises(PlanError, match="length_m"):
        edits.changed_part(chain(), "two", length_m=-0.1)


@pytest.mark.parametrize(("ports", "left"), [(3, {2, 3}), (4, {2, 3, 4}), (5, {2, 3, 4})])
def test_joins_to_ports_that_a_part_loses_go_and_the_others_stay(ports: int, left: set[int]) -> None:
    sketch = Sketch()
    sketch.add("radio", "radio")
    sketch.add("tee", "T1", ports=4)
    sketch.join("radio:1", "T1:1")
    for number in (2, 3, 4):
        sketch.join(f"{sketch.antenna(50, f'A{number}')}:1", f"T1:{number}")
    after = edits.with_ports(sketch.plan(), "T1", ports)
    assert after.placed("T1").part == Tee(ports=ports)
    assert joins(after) == tied("radio:1 - T1:1", *(f"A{n}:1 - T1:{n}" for n in left))


def test_ports_of_a_splitter_count_its_common_port() -> None:
    plan, part_id = edits.added(chain(), Splitter(form="resistive", outputs=2), (0, 0))
    after = edits.with_ports(plan, part_id, 5)
    assert after.placed(part_id).part == Splitter(form="resistive", outputs=4)
    assert after.placed(part_id).part.ports == 5


def test_a_part_with_fixed_ports_keeps_them() -> None:
    plan = chain()
    assert edits.with_ports(plan, "one", 7) is plan


@pytest.mark.parametrize("ports", [2, 1027])
def test_a_tee_with_too_few_or_many_ports_is_refused(ports: int) -> None:
    with pytest.raises(PlanError, match="ports"):
        edits.with_ports(ring(), "T1", ports)


def test_lengths_are_turned_to_whole_nanometres_and_never_below_zero() -> None:
    plan = edits.turned_length(chain(), ["one", "three", "A"], 0.2)
    assert [coax(plan, i).length_m for i in ("one", "two", "three")] == [0.3, 0.1, 0.3]  # 0.1 + 0.2 in binary is not
    assert plan.placed("A") is not None
    plan = edits.turned_length(plan, ["one", "two"], -0.25)
    assert [coax(plan, i).length_m for i in ("one", "two", "three")] == [0.05, 0.0, 0.3]


def test_a_matched_set_is_turned_as_one_and_only_once() -> None:
    plan = chain()
    for part_id in ("one", "three"):
        plan = edits.changed_part(plan, part_id, matched_set="A")
    for chosen in (["one"], ["one", "three"]):
        after = edits.turned_length(plan, chosen, 0.05)
        assert [coax(after, i).length_m for i in ("one", "two", "three")] == [0.15, 0.1, 0.15]


@pytest.mark.parametrize(
    ("part", "grows"),
    [
        (Tee(ports=1025), True),
        (Tee(ports=1026), False),
        (Splitter(form="resistive", outputs=1023), True),
        (Splitter(form="resistive", outputs=1024), False),
        (Splitter(form="rat_race", centre_hz=868e6), False),
        (Pad(loss_db=1.0), False),
    ],
)
def test_a_junction_grows_up_to_its_range(part: Part, grows: bool) -> None:
    assert edits.can_grow(part) == grows
    if grows:
        plan, part_id = edits.added(Sketch().plan(), part, (0, 0))
        assert edits.with_ports(plan, part_id, part.ports + 1).placed(part_id).part.ports == part.ports + 1


def test_a_moved_part_is_the_same_part() -> None:
    plan = chain()
    after = edits.moved(plan, {"two": (12.0, -36.0), "A": (7.5, 0.25)})
    assert after.placed("two").at == (12.0, -36.0)
    assert after.placed("A").at == (7.5, 0.25)
    assert after.placed("two").part is plan.placed("two").part
    assert after.placed("one") is plan.placed("one")
    assert replace(after, parts=plan.parts) == plan


def test_label_and_note_one_without_the_other() -> None:
    plan = edits.labelled(chain(), "two", label="tail", note="RG-316")
    assert (plan.placed("two").label, plan.placed("two").note, plan.placed("two").name) == ("tail", "RG-316", "tail")
    plan = edits.labelled(plan, "two", label="")
    assert (plan.placed("two").label, plan.placed("two").note, plan.placed("two").name) == ("", "RG-316", "two")
    plan = edits.labelled(plan, "two", note="")
    assert plan == chain()


# Ids


def test_a_renamed_part_keeps_its_place_among_the_parts_and_its_joins() -> None:
    after = edits.renamed(ring(), "T1", "split")
    assert [p.id for p in after.parts] == ["radio", "split", "around", "A"]
    assert joins(after) == tied("radio:1 - split:1", "split:2 - around:1", "around:2 - split:3", "split:4 - A:1")
    assert edits.renamed(after, "split", "T1") == ring()
    assert edits.renamed(ring(), "T1", "T1") == ring()


def test_a_renamed_part_tied_to_itself() -> None:
    plan, part_id = edits.added(Sketch().plan(), Pad(loss_db=1.0), (0, 0), "pad")
    plan = edits.renamed(edits.joined(plan, port("pad:1"), port("pad:2")), part_id, "p")
    assert joins(plan) == tied("p:1 - p:2")


@pytest.mark.parametrize("name", ["one", "", "a:b", "line\nbreak", "\x00", "x" * 65, "\ud800"])
def test_an_id_that_cannot_be_is_refused(name: str) -> None:
    with pytest.raises(PlanError):
        edits.renamed(chain(), "two", name)


def test_free_ids() -> None:
    plan = Sketch().plan()
    given: dict[str, list[str]] = {"antenna": [], "tee": [], "radio": [], "pad": []}
    antenna = Antenna(impedance=AntennaImpedance(fixed_ohm=50 + 0j))
    for _ in range(28):
        plan, part_id = edits.added(plan, antenna, (0, 0))
        given["antenna"].append(part_id)
    for part in (Tee(), Tee(), Radio(), Radio(), Pad(loss_db=1.0), Pad(loss_db=1.0)):
        plan, part_id = edits.added(plan, part, (1.0, 2.0))
        given[part.KIND].append(part_id)
    assert "".join(given["antenna"]) == "ABCDEFGHIJKLMNOPQRSTUVWXYZ" + "AAAB"
    assert given["tee"] == ["T1", "T2"]
    assert given["radio"] == ["radio", "radio 1"]
    assert given["pad"] == ["pad 1", "pad 2"]
    assert plan.parts[-1] == Placed("pad 2", Pad(loss_db=1.0), (1.0, 2.0))


def test_antennas_beyond_the_letters_and_gaps_are_filled_first() -> None:
    letters = [chr(c) for c in range(65, 91)]
    names = [*letters, *(a + b for a in letters for b in letters)]
    antenna = Antenna(impedance=AntennaImpedance(fixed_ohm=50 + 0j))
    plan = replace(Sketch().plan(), parts=tuple(Placed(name, antenna) for name in names))
    assert edits.free_id(plan, antenna) == "antenna 1"
    assert edits.free_id(edits.removed(plan, ["QX", "B"]), antenna) == "B"


# Taking away


def test_a_chain_heals_where_a_two_port_goes() -> None:
    after = edits.removed(chain(), ["two"])
    assert [p.id for p in after.parts] == ["radio", "one", "three", "A"]
    assert joins(after) == tied("radio:1 - one:1", "one:2 - three:1", "three:2 - A:1")


@pytest.mark.parametrize("order", [("one", "two"), ("two", "one"), ("one", "two", "three"), ("three", "one", "two")])
def test_a_chain_heals_over_neighbours_that_go_together(order: tuple[str, ...]) -> None:
    after = edits.removed(chain(), order)
    rest = tied("radio:1 - three:1", "three:2 - A:1") if len(order) == 2 else tied("radio:1 - A:1")
    assert joins(after) == rest


def test_a_chain_ends_where_its_end_goes_as_well() -> None:
    for order in (("three", "A"), ("A", "three")):
        assert joins(edits.removed(chain(), order)) == tied("radio:1 - one:1", "one:2 - two:1")


def test_a_chain_turned_about_heals_at_the_right_ports() -> None:
    sketch = Sketch()
    for name in ("a", "b", "c"):
        sketch.coax(0.1, part_id=name)
    sketch.join("b:2", "a:1", "c:2", "b:1")
    assert joins(edits.removed(sketch.plan(), ["b"])) == tied("a:1 - c:2")


def test_a_branching_part_leaves_its_arms_open() -> None:
    after = edits.removed(ring(), ["T1"])
    assert joins(after) == set()
    assert [p.id for p in after.parts] == ["radio", "around", "A"]


def test_an_end_part_leaves_its_port_open() -> None:
    assert joins(edits.removed(chain(), ["A"])) == tied("radio:1 - one:1", "one:2 - two:1", "two:2 - three:1")


def test_a_two_port_with_one_end_open_heals_nothing() -> None:
    sketch = Sketch()
    sketch.coax(0.1, part_id="a")
    sketch.coax(0.1, part_id="b")
    sketch.join("a:2", "b:1")
    assert joins(edits.removed(sketch.plan(), ["b"])) == set()


def test_a_part_tied_to_itself_just_goes() -> None:
    plan, _ = edits.added(chain(), Pad(loss_db=1.0), (0, 0), "pad")
    after = edits.removed(edits.joined(plan, port("pad:1"), port("pad:2")), ["pad"])
    assert after == chain()


def test_a_ring_opens_where_its_last_section_goes() -> None:
    """Healed, the joint would be tied to itself without any length, which no plan can be solved with."""
    after = edits.removed(ring(), ["around"])
    assert joins(after) == tied("radio:1 - T1:1", "T1:4 - A:1")
    assert solve(after).antenna_share[0, 0] == pytest.approx(1.0)  # 50 ohm on 50 ohm takes all


@pytest.mark.parametrize("order", [("left", "right"), ("right", "left")])
def test_a_ring_of_two_sections_opens_when_both_go(order: tuple[str, str]) -> None:
    plan, _ = edits.added(ring(), Pad(loss_db=3.0), (0, 0), "right")
    plan = edits.renamed(edits.spliced(plan, (port("around:2"), port("T1:3")), "right"), "around", "left")
    assert joins(edits.removed(plan, order)) == tied("radio:1 - T1:1", "T1:4 - A:1")


@pytest.mark.parametrize("order", [("left", "right"), ("right", "left")])
def test_two_sections_side_by_side_leave_one_join(order: tuple[str, str]) -> None:
    """The first that goes heals; a second join beside it would close a loop without length."""
    sketch = Sketch()
    sketch.add("radio", "radio")
    for name in ("T1", "T2"):
        sketch.add("tee", name)
    sketch.coax(0.1, part_id="left")
    sketch.coax(0.2, part_id="right")
    sketch.antenna(50, "A")
    sketch.join("radio:1", "T1:1", "T1:2", "left:1", "left:2", "T2:2", "T1:3", "right:1", "right:2", "T2:3")
    sketch.join("T2:1", "A:1")
    arm = 2 if order[0] == "left" else 3
    wanted = tied("radio:1 - T1:1", "A:1 - T2:1", f"T1:{arm} - T2:{arm}")
    plan = sketch.plan()
    assert joins(edits.removed(plan, order)) == wanted
    one_by_one = edits.removed(edits.removed(plan, order[:1]), order[1:])
    assert joins(one_by_one) == wanted
    assert solve(one_by_one).antenna_share[0, 0] == pytest.approx(1.0)


@given(random_plans(), st.data())
def test_removal_leaves_no_trace_and_ties_only_what_hung_together(plan: Plan, data: st.DataObject) -> None:
    gone = data.draw(st.lists(st.sampled_from([p.id for p in plan.parts]), unique=True))
    after = edits.removed(plan, gone)
    assert [p.id for p in after.parts] == [p.id for p in plan.parts if p.id not in gone]
    kept = {join for join in plan.joins if not {join[0].part, join[1].part} & set(gone)}
    assert kept <= set(after.joins)
    for a, b in set(after.joins) - kept:  # a healed join leads from one to the other through parts that went
        at = plan.mate(a)
        while at is not None and at.part in gone:
            assert plan.placed(at.part).part.ports == 2
            at = plan.mate(Port(at.part, 3 - at.number))
        assert at == b


# Joins


def test_join_rules() -> None:
    plan, _ = edits.added(chain(), Tee(), (0, 0), "T1")
    assert edits.why_no_join(plan, port("T1:1"), port("T1:1")) == "a port cannot be joined to itself"
    taken = "one:1 is joined already; a branching point is a T joint"
    assert edits.why_no_join(plan, port("one:1"), port("T1:1")) == taken
    assert edits.why_no_join(plan, port("T1:1"), port("one:1")) == taken
    assert edits.why_no_join(plan, port("T1:1"), port("T1:2")) is None


@given(random_plans(), st.data())
def test_the_rule_and_the_edit_agree(plan: Plan, data: st.DataObject) -> None:
    ports = st.sampled_from([p for placed in plan.parts for p in placed.ports()])
    a, b = data.draw(ports), data.draw(ports)
    if edits.why_no_join(plan, a, b) is None:
        assert edits.joined(plan, a, b).mate(a) == b
    else:
        with pytest.raises(PlanError):
            edits.joined(plan, a, b)


def test_a_join_made_and_taken_away() -> None:
    plan, _ = edits.added(chain(), Tee(), (0, 0), "T1")
    after = edits.joined(plan, port("T1:3"), port("T1:2"))
    assert after.joins == (*plan.joins, (port("T1:3"), port("T1:2")))
    assert edits.unjoined(after, (port("T1:3"), port("T1:2"))) == plan
    assert edits.unjoined(plan, (port("T1:3"), port("T1:2"))) == plan


@pytest.mark.parametrize("part", [Pad(loss_db=3.0), Transformer(ratio=2.0), Tee()])
def test_a_part_spliced_into_a_join(part: Part) -> None:
    plan, part_id = edits.added(chain(), part, (0, 0), "new")
    after = edits.spliced(plan, (port("one:2"), port("two:1")), part_id)
    gone, new = tied("one:2 - two:1"), tied("one:2 - new:1", "new:2 - two:1")
    assert joins(after) == (joins(chain()) - gone) | new
    if part.ports == 2:
        assert joins(edits.removed(after, ["new"])) == joins(chain())


def test_a_part_that_is_tied_already_cannot_be_spliced_in() -> None:
    with pytest.raises(PlanError, match="joined twice"):
        edits.spliced(chain(), (port("one:2"), port("two:1")), "three")
    plan, _ = edits.added(chain(), Load(impedance_ohm=50 + 0j), (0, 0), "end")
    with pytest.raises(PlanError, match="not there"):
        edits.spliced(plan, (port("one:2"), port("two:1")), "end")
