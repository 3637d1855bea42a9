"""Random edits for Hypothesis: any verb of `app.editing.edits` with values that a person may give, refused or not."""

from __future__ import annotations

from collections.abc import Callable

from hypothesis import strategies as st

from app.editing import edits
from feedlib import Plan, PlanError
from feedlib.parts import Antenna, AntennaImpedance, Coax, Load, Pad, Part, Radio, Splitter, Tee, Transformer
from feedlib.plan import Cable, Limits, Port
from feedlib.schema import specs
from tests.plans import frequency, number

NEW_PARTS: tuple[Part, ...] = (
    Radio(),
    Antenna(impedance=AntennaImpedance(fixed_ohm=36 + 21j)),
    Coax(cable="of no catalogue", length_m=0.25),
    Tee(ports=4),
    Splitter(form="resistive", outputs=3),
    Pad(loss_db=3.0),
    Transformer(ratio=2.0),
    Load(impedance_ohm=0j),
)
NAMES = st.one_of(st.sampled_from(["A", "radio", "T1", "é Ω λ/4", "x" * 64]), st.text(min_size=1, max_size=6))
WORDS = st.one_of(st.just(""), st.text(max_size=20))
PLACES = st.tuples(number(-5000, 5000), number(-5000, 5000))

Verb = Callable[[st.DrawFn, Plan], Plan]


def _id(draw: st.DrawFn, plan: Plan) -> str:
    return draw(st.sampled_from([p.id for p in plan.parts]))


def _some_ids(draw: st.DrawFn, plan: Plan) -> tuple[str, ...]:
    return tuple(draw(st.lists(st.sampled_from([p.id for p in plan.parts]), min_size=1, max_size=4, unique=True)))


def _port(draw: st.DrawFn, plan: Plan) -> Port:
    return draw(st.sampled_from([port for p in plan.parts for port in p.ports()]))


def _add(draw: st.DrawFn, plan: Plan) -> Plan:
    return edits.added(plan, draw(st.sampled_from(NEW_PARTS)), draw(PLACES))[0]


def _join(draw: st.DrawFn, plan: Plan) -> Plan:
    a, b = _port(draw, plan), _port(draw, plan)
    return plan if edits.why_no_join(plan, a, b) else edits.joined(plan, a, b)


def _unjoin(draw: st.DrawFn, plan: Plan) -> Plan:
    return edits.unjoined(plan, draw(st.sampled_from(plan.joins))) if plan.joins else plan


def _splice(draw: st.DrawFn, plan: Plan) -> Plan:
    if not plan.joins:
        return plan
    join = draw(st.sampled_from(plan.joins))
    plan, part_id = edits.added(plan, Pad(loss_db=1.0), (0.0, 0.0))
    return edits.spliced(plan, join, part_id)


def _ports(draw: st.DrawFn, plan: Plan) -> Plan:
    return edits.with_ports(plan, _id(draw, plan), draw(st.integers(2, 8)))


def _turn(draw: st.DrawFn, plan: Plan) -> Plan:
    return edits.turned_length(plan, _some_ids(draw, plan), draw(st.sampled_from([1e-3, -1e-3, 5e-5, -0.5])))


def _move(draw: st.DrawFn, plan: Plan) -> Plan:
    return edits.moved(plan, {part_id: draw(PLACES) for part_id in _some_ids(draw, plan)})


def _limit(draw: st.DrawFn, plan: Plan) -> Plan:
    name = draw(st.sampled_from(list(specs(Limits))))
    return edits.with_limit(plan, name, draw(st.one_of(st.none(), number(-1, 60))))


def _cable(draw: st.DrawFn, plan: Plan) -> Plan:
    name = draw(st.sampled_from(["of no catalogue", *plan.cables]))
    cable = Cable(
        z0_ohm=draw(number(20, 150)), velocity_factor=draw(number(0.5, 1)), skin_db_per_100m=draw(number(0, 9))
    )
    return edits.with_cable(plan, name, cable)


PART_VERBS: tuple[Verb, ...] = (
    _add,
    lambda draw, plan: edits.removed(plan, _some_ids(draw, plan)),
    _join,
    _unjoin,
    _splice,
    _ports,
    _turn,
    _move,
    lambda draw, plan: edits.renamed(plan, _id(draw, plan), draw(NAMES)),
    lambda draw, plan: edits.labelled(plan, _id(draw, plan), label=draw(WORDS), note=draw(WORDS)),
)
PLAN_VERBS: tuple[Verb, ...] = (
    _add,
    _limit,
    _cable,
    lambda draw, plan: edits.with_band(plan, start_hz=draw(frequency()), stop_hz=draw(frequency())),
    lambda draw, plan: edits.marked(plan, draw(frequency())),
    lambda draw, plan: edits.retitled(plan, title=draw(WORDS), notes=draw(WORDS)),
)


@st.composite
def random_edit(draw: st.DrawFn, plan: Plan) -> Plan:
    """The plan after one random edit; the same plan where the edit is refused."""
    verbs = PART_VERBS + PLAN_VERBS if plan.parts else PLAN_VERBS
    try:
        return draw(st.sampled_from(verbs))(draw, plan)
    except PlanError:
        return plan
