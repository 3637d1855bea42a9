"""What a plan file may not say: every type and range of the contract's tables, ids, ports and joins."""

from __future__ import annotations

import copy
import json
from typing import Any

import pytest

from feedlib.plan_file import format_plan, parse_plan
from tests.feedlib.plan_documents import LEAST, ONE_PORT, TWO_PORT, Document, part, plan_document, refusal

END = {"z0_ohm": 50, "velocity_factor": 0.7, "length_m": 0.01}
RESONANT = {"r_ohm": 72, "f0_hz": 868e6, "q": 9}
BASES: dict[str, Document] = {
    "radio": part("radio", impedance_ohm=[50, 0], power_w=1),
    "antenna": part("antenna", target={"amplitude": 1, "phase_deg": 0}),
    "resonant": part("antenna", impedance={"resonant": RESONANT}),
    "measured antenna": part("antenna", impedance={"touchstone": ONE_PORT}),
    "coax": part("coax", ends=[END, None]),
    "tee": part("tee", ports=3),
    "wilkinson": part("splitter", outputs=2, z0_ohm=50),
    "resistive": part("splitter", form="resistive", outputs=2, z0_ohm=50),
    "lumped": part("lumped", l_h=1e-9, c_f=1e-12, wiring="series"),
    "pad": part("pad", z0_ohm=50),
    "transformer": part("transformer"),
    "load": part("load"),
    "measured": part("measured"),
}
NOT_FINITE = ("NaN", "Infinity", "-Infinity", "1e400", "-1e400", "1" + 400 * "0")
NO_NUMBER = ("true", "false", '"0.3"', "null", "[1]", "{}", *NOT_FINITE)
NO_PAIR = (
    "50",
    "[50]",
    "[50, 0, 0]",
    '["50", 0]',
    "[50, true]",
    "[NaN, 0]",
    "[0, Infinity]",
    "[1e400, 0]",
    '"50"',
    "null",
)
NO_TEXT = ("1", "true", "null", "[]", "{}")
NO_OBJECT = ("1", "true", "null", '"x"', "[]")
NO_LIST = ("1", "true", "null", '"x"', "{}")

# Base | path of the field | what it may not be | what it may be
Case = tuple[str, str, tuple[str, ...], tuple[str, ...]]
PART_FIELDS: list[Case] = [
    ("radio", "impedance_ohm", (*NO_PAIR, "[0, 50]", "[-1, 0]"), ("[1e-9, -300]",)),
    ("radio", "power_w", (*NO_NUMBER, "0", "-1"), ("1e-12", "5")),
    ("antenna", "impedance", (*NO_OBJECT, "{}"), ()),
    ("antenna", "impedance.fixed_ohm", (*NO_PAIR, "[-1, 0]"), ("[0, 0]", "[0, -42.5]")),
    ("antenna", "target", NO_OBJECT, ("{}",)),
    ("antenna", "target.amplitude", (*NO_NUMBER, "0", "-1"), ("1e-3", "40")),
    ("antenna", "target.phase_deg", NO_NUMBER, ("-720", "0", "1e6")),
    ("resonant", "impedance.resonant", (*NO_OBJECT, "{}"), ()),
    ("resonant", "impedance.resonant.r_ohm", (*NO_NUMBER, "-1"), ("0",)),
    ("resonant", "impedance.resonant.f0_hz", (*NO_NUMBER, "0", "-1"), ("1",)),
    ("resonant", "impedance.resonant.q", NO_NUMBER, ("0", "100")),
    ("measured antenna", "impedance.touchstone", (*NO_OBJECT, json.dumps(TWO_PORT)), ()),
    ("measured antenna", "impedance.touchstone.name", NO_TEXT, ('"other.s1p"',)),
    ("measured antenna", "impedance.touchstone.text", (*NO_TEXT, '""', '"nonsense"'), ()),
    ("coax", "cable", NO_TEXT, ('"not there"', '""')),
    ("coax", "length_m", (*NO_NUMBER, "-1e-9"), ("0", "3000")),
    ("coax", "ends", (*NO_LIST, "[]", "[null]", "[null, null, null]", "[1, null]", "[null, []]"), ("[null, null]",)),
    ("coax", "ends.0.z0_ohm", (*NO_NUMBER, "0", "-50"), ("1",)),
    ("coax", "ends.0.velocity_factor", (*NO_NUMBER, "0", "1.000001", "-0.5"), ("1", "0.01")),
    ("coax", "ends.0.length_m", (*NO_NUMBER, "-1e-9"), ("0",)),
    ("tee", "ports", (*NO_NUMBER, "2", "1027", "3.5", "0", "-3"), ("3", "1026", "4.0")),
    ("wilkinson", "form", (*NO_TEXT, '"hybrid"', '""', '"Wilkinson"'), ()),
    ("wilkinson", "z0_ohm", (*NO_NUMBER, "0", "-50"), ("75",)),
    ("wilkinson", "centre_hz", (*NO_NUMBER, "0", "-1"), ("1",)),
    ("wilkinson", "outputs", (*NO_NUMBER, "1", "1025", "2.5"), ("2", "1024")),
    ("resistive", "outputs", (*NO_NUMBER, "1", "1025", "2.5"), ("2", "1024")),
    ("lumped", "place", (*NO_TEXT, '"across"', '"Series"'), ('"shunt"',)),
    ("lumped", "r_ohm", (*NO_NUMBER, "-1"), ("0",)),
    ("lumped", "l_h", (*NO_NUMBER, "0", "-1e-9"), ("1e-15",)),
    ("lumped", "c_f", (*NO_NUMBER, "0", "-1e-12"), ("1e-18",)),
    ("lumped", "wiring", (*NO_TEXT, '"star"'), ('"parallel"',)),
    ("pad", "loss_db", (*NO_NUMBER, "-0.1"), ("0", "200")),
    ("pad", "z0_ohm", (*NO_NUMBER, "0", "-50"), ("75",)),
    ("transformer", "ratio", (*NO_NUMBER, "0", "-0.0"), ("-2", "1e-3")),
    ("load", "impedance_ohm", (*NO_PAIR, "[-1, 0]"), ("[0, 0]", "[0, -1e9]")),
    ("measured", "touchstone", NO_OBJECT, ()),
    ("measured", "touchstone.name", NO_TEXT, ('"other.s2p"',)),
    ("measured", "touchstone.text", (*NO_TEXT, '""', '"# MHz S RI R 50"'), ()),
    (
        "pad",
        "at",
        (*NO_LIST, "[]", "[1]", "[1, 2, 3]", "[true, 0]", '["1", 0]', "[NaN, 0]", "[0, 1e400]"),
        ("[-1, 2.5]",),
    ),
    ("pad", "label", NO_TEXT, ('""', '"天線"')),
    ("pad", "note", NO_TEXT, ('""', '"two\\nlines"')),
]

TOP = plan_document(
    title="",
    notes="",
    band={"start_hz": 100, "stop_hz": 300, "points": 3, "mark_hz": 200},
    sweep={"start_hz": 50, "stop_hz": 400, "points": 3},
    channels=[{"name": "one", "hz": 150}],
    reference_ohm=50,
    limits={},
    cables={"C": {"z0_ohm": 50, "velocity_factor": 0.7, "skin_db_per_100m": 1, "dielectric_db_per_100m": 0}},
)
PLAN_FIELDS: list[tuple[str, tuple[str, ...], tuple[str, ...]]] = [
    ("title", NO_TEXT, ('"天線"',)),
    ("notes", NO_TEXT, ('"a\\nb"',)),
    ("band", (*NO_OBJECT, "{}"), ('{"start_hz": 60, "stop_hz": 60, "points": 1}',)),
    ("band.start_hz", (*NO_NUMBER, "0", "-1", "300.001"), ("100", "300")),
    ("band.stop_hz", (*NO_NUMBER, "0", "-1", "99"), ("100",)),
    ("band.points", (*NO_NUMBER, "0", "-1", "1", "2.5", "10002"), ("2", "10001", "201.0")),
    ("band.mark_hz", NO_NUMBER, ("100", "300")),
    ("sweep", (*NO_OBJECT[:2], '"x"', "[]", "{}"), ()),
    ("sweep.start_hz", (*NO_NUMBER, "0", "-1", "101", "1000"), ("100",)),
    ("sweep.stop_hz", (*NO_NUMBER, "0", "299"), ("300",)),
    ("sweep.points", (*NO_NUMBER, "0", "1", "10002"), ("10001",)),
    ("channels", (*NO_LIST, "[1]", '[{"name": "a"}]', '[{"hz": 1}]'), ("[]",)),
    ("channels.0.name", NO_TEXT, ('"868"',)),
    ("channels.0.hz", (*NO_NUMBER, "0", "-1"), ("1",)),
    ("reference_ohm", (*NO_NUMBER, "0", "-50"), ("75",)),
    ("limits", NO_OBJECT, ("{}",)),
    *((f"limits.{name}", NO_NUMBER, ("20", "0.5")) for name in ("return_loss_db", "amplitude_balance_db")),
    *(
        (f"limits.{name}", NO_NUMBER, ("20", "0.5"))
        for name in ("phase_balance_deg", "harness_loss_db", "isolation_db")
    ),
    ("cables", NO_OBJECT, ("{}",)),
    ("cables.C", (*NO_OBJECT, "{}"), ()),
    ("cables.C.z0_ohm", (*NO_NUMBER, "0", "-50"), ("300",)),
    ("cables.C.velocity_factor", (*NO_NUMBER, "0", "-1", "1.0001"), ("1", "0.05")),
    ("cables.C.skin_db_per_100m", (*NO_NUMBER, "-1e-9"), ("0",)),
    ("cables.C.dielectric_db_per_100m", (*NO_NUMBER, "-1e-9"), ("0",)),
    ("parts", (*NO_LIST, "[1]", "[null]", "[[]]"), ("[]",)),
    ("joins", (*NO_LIST, "[1]", '["A:1"]', "[{}]", '[["A:1"]]', "[[1, 2]]", '[["A:1", "B:1", "C:1"]]'), ("[]",)),
]


def with_token(document: Document, path: str, token: str) -> str:
    """The document as JSON with the raw text `token` for the value at a path like "ends.0.z0_ohm"."""
    changed: Any = copy.deepcopy(document)
    at: Any = changed
    *way, last = [int(word) if word.isdigit() else word for word in path.split(".")]
    for word in way:
        at = at[word]
    at[last] = "@"
    return json.dumps(changed).replace('"@"', token)


def words(path: str) -> list[str]:
    """The names of a path, without list places."""
    return [word for word in path.split(".") if not word.isdigit()]


def is_no_json_number(token: str) -> bool:
    """Whether the file is refused for a word in it, before any part is known."""
    return any(word in token for word in ("NaN", "Infinity", "1e400"))


def flat(cases: list[Case], wanted: int) -> list[tuple[str, str, str]]:
    return [(base, path, token) for base, path, *tokens in cases for token in tokens[wanted]]


@pytest.mark.parametrize(("base", "path", "token"), flat(PART_FIELDS, 0))
def test_part_field_is_refused_with_part_and_field(base: str, path: str, token: str) -> None:
    text = json.dumps(plan_document("@")).replace('"@"', with_token(BASES[base], path, token))  # type: ignore[arg-type]
    error = refusal(text)
    if not is_no_json_number(token):
        assert error.part == "X"
        assert '"X"' in str(error)
        named = error.field or ""
        assert words(path)[0] in named
        assert words(path)[-1] in named or words(path)[-1] in error.reason
        assert named in str(error)


@pytest.mark.parametrize(("base", "path", "token"), flat(PART_FIELDS, 1))
def test_part_field_may_be_at_the_end_of_its_range(base: str, path: str, token: str) -> None:
    text = json.dumps(plan_document("@")).replace('"@"', with_token(BASES[base], path, token))  # type: ignore[arg-type]
    assert parse_plan(text.encode()).parts[0].id == "X"


@pytest.mark.parametrize(("path", "token"), [(path, token) for path, bad, _ in PLAN_FIELDS for token in bad])
def test_plan_field_is_refused_by_name(path: str, token: str) -> None:
    error = refusal(with_token(TOP, path, token))
    if not is_no_json_number(token):
        assert words(path)[0] in (error.field or "")
        # Of two ends that are in the wrong order either may be named.
        assert words(path)[-1] in str(error) or words(path)[0] in ("band", "sweep")


@pytest.mark.parametrize(("path", "token"), [(path, token) for path, _, good in PLAN_FIELDS for token in good])
def test_plan_field_may_be_at_the_end_of_its_range(path: str, token: str) -> None:
    parse_plan(with_token(TOP, path, token).encode())


@pytest.mark.parametrize(("kind", "field"), [(kind, field) for kind, least in LEAST.items() for field in least])
def test_required_field_is_missed_by_name(kind: str, field: str) -> None:
    document = part(kind)
    del document[field]
    error = refusal(plan_document(document))
    assert error.part == "X"
    assert field in str(error)


@pytest.mark.parametrize("field", ["z0_ohm", "velocity_factor", "length_m"])
def test_required_field_of_an_end_is_missed_by_name(field: str) -> None:
    end = {key: value for key, value in END.items() if key != field}
    error = refusal(plan_document(part("coax", ends=[None, end])))
    assert (error.part, error.field) == ("X", f"ends[1].{field}")


@pytest.mark.parametrize("form", ["branch_line", "rat_race"])
def test_hybrids_have_four_ports_and_a_centre(form: str) -> None:
    hybrid = part("splitter", form=form)
    assert parse_plan(json.dumps(plan_document(hybrid)).encode()).parts[0].part.ports == 4
    assert refusal(plan_document({**hybrid, "outputs": 3})).field == "outputs"
    del hybrid["centre_hz"]
    assert refusal(plan_document(hybrid)).field == "centre_hz"


def test_resistive_splitter_needs_no_centre() -> None:
    document = {"id": "X", "kind": "splitter", "form": "resistive", "outputs": 5}
    assert parse_plan(json.dumps(plan_document(document)).encode()).parts[0].part.ports == 6


@pytest.mark.parametrize(
    "ways",
    [
        ("fixed_ohm", "resonant"),
        ("resonant", "touchstone"),
        ("fixed_ohm", "touchstone"),
        ("fixed_ohm", "resonant", "touchstone"),
    ],
)
def test_antenna_has_one_impedance(ways: tuple[str, ...]) -> None:
    given = {"fixed_ohm": [50, 0], "resonant": RESONANT, "touchstone": ONE_PORT}
    error = refusal(plan_document(part("antenna", impedance={way: given[way] for way in ways})))
    assert (error.part, error.field) == ("X", "impedance")
    assert "fixed_ohm, resonant, touchstone" in str(error)


@pytest.mark.parametrize("kind", ["Radio", "", "amplifier", None, 1, True, [], {}])
def test_unknown_kind(kind: Any) -> None:
    error = refusal(plan_document({"id": "X", "kind": kind}))
    assert (error.part, error.field) == ("X", "kind")
    assert "coax" in str(error)  # what would be right
    assert refusal(plan_document({"id": "X"})).field == "kind"


@pytest.mark.parametrize(
    "bad", ["", "a:b", ":", "a\nb", "a\x00b", "\t", "a\x7f", "a\x85", "\x9f", "x" * 65, "天" * 65, 5, None, True, ["X"]]
)
def test_ids_that_are_none(bad: Any) -> None:
    refusal(plan_document(part("pad", bad)))


@pytest.mark.parametrize("good", ["x", "天" * 64, "match A", "é", "'", '"', "\\", "a/b", "T1.2", "#", " "])
def test_ids_of_any_script(good: str) -> None:
    text = json.dumps(plan_document(part("pad", good)))
    assert parse_plan(format_plan(parse_plan(text.encode())).encode()).parts[0].id == good


def test_part_without_an_id() -> None:
    error = refusal(plan_document(part("pad", "A"), {"kind": "pad", "loss_db": 1}))
    assert error.field == "parts[1]"


def test_two_parts_of_one_id() -> None:
    error = refusal(plan_document(part("pad", "A"), part("load", "B"), part("tee", "A")))
    assert (error.part, error.field) == ("A", "id")


PAD_AND_TEE = [part("pad", "P"), part("tee", "T 1")]


NO_PORTS = ["P:0", "P:3", "P:01", "P:+1", "P:-1", "P:1.0", "P:1e0", "P:١", "P", "P:", ":1", ":", "P:1:1", "p:1", "Q:1"]


@pytest.mark.parametrize("port", [*NO_PORTS, "", "P: 1", "P:1 ", " P:1", "P:" + 30 * "9", "P:" + 5000 * "1"])
def test_join_to_a_port_that_is_not_there(port: str) -> None:
    for join in ([port, "T 1:1"], ["T 1:1", port]):
        error = refusal(plan_document(*PAD_AND_TEE, joins=[["P:2", "T 1:3"], join]))
        assert error.field == "joins"


@pytest.mark.parametrize(
    "joins",
    [
        [["P:1", "T 1:1"], ["P:1", "T 1:2"]],
        [["P:1", "T 1:1"], ["T 1:1", "P:2"]],
        [["P:1", "P:1"]],
        [["P:1", "T 1:1"]] * 2,
    ],
)
def test_port_that_is_joined_twice(joins: list[list[str]]) -> None:
    error = refusal(plan_document(*PAD_AND_TEE, joins=joins))
    assert error.field == "joins"
    assert "twice" in str(error)
    assert "tee" in str(error)


def test_two_channels_of_one_name() -> None:
    channels = [{"name": "low", "hz": 1}, {"name": "low", "hz": 2}]
    error = refusal(plan_document(channels=channels))
    assert error.field == "channels"
    assert '"low"' in str(error)


@pytest.mark.parametrize(
    "version", ["0", "-1", "2", "99", "1.5", "true", '"1"', "null", "[1]", "{}", "1e400", "9" * 3000]
)
def test_versions_of_other_programs(version: str) -> None:
    error = refusal(json.dumps(plan_document(version="@")).replace('"@"', version))
    assert error.field == "version" or version == "1e400"


def test_missing_version_and_band() -> None:
    for field in ("version", "band"):
        document = plan_document()
        del document[field]
        assert refusal(document).field == field


@pytest.mark.parametrize("wrong", ["", "feedwright", "FEEDWRIGHT-PLAN", None, 1, ["feedwright-plan"]])
def test_other_formats(wrong: Any) -> None:
    assert "feedwright-plan" in str(refusal(plan_document(format=wrong)))
    assert "feedwright-plan" in str(refusal({"version": 1, "band": {}}))


@pytest.mark.parametrize("text", ["[]", "null", "1", '"feedwright-plan"', "true"])
def test_json_that_is_no_object(text: str) -> None:
    assert "feedwright-plan" in str(refusal(text))
