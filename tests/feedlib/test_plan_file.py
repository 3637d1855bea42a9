"""The plan file as the contract describes it: values, defaults, written form, round trips."""

from __future__ import annotations

import json
import re
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings

from feedlib import Plan, read_plan, write_plan
from feedlib.parts import KINDS, Antenna, Coax, Radio
from feedlib.plan import Port
from feedlib.plan_file import format_plan, parse_plan
from tests.feedlib.plan_documents import EXAMPLE, LEAST, ONE_PORT, Document, documents, is_unknown, part, plan_document


def reread(plan: Plan) -> Plan:
    """The plan after writing and reading."""
    return parse_plan(format_plan(plan).encode())


def written_part(document: Document) -> Document:
    """A part as it is written after reading, without its id and kind."""
    written = json.loads(format_plan(parse_plan(json.dumps(plan_document(document)).encode())))
    found: Document = written["parts"][0]
    return {key: value for key, value in found.items() if key not in ("id", "kind")}


def test_example_has_the_values_that_stand_in_it() -> None:
    plan = parse_plan(EXAMPLE.encode())
    assert (plan.title, plan.notes, plan.reference_ohm) == ("Two-dipole gateway", "", 50.0)
    band = plan.band
    assert (band.start_hz, band.stop_hz, band.points, band.mark_hz) == (863e6, 870e6, 201, 868e6)
    limits = plan.limits
    assert (limits.return_loss_db, limits.amplitude_balance_db, limits.phase_balance_deg) == (20, 0.5, 5)
    assert (limits.harness_loss_db, limits.isolation_db) == (None, None)
    assert list(plan.cables) == ["RG-316", "RG-179"]
    cable = plan.cables["RG-179"]
    assert (cable.z0_ohm, cable.velocity_factor) == (75, 0.695)
    assert (cable.skin_db_per_100m, cable.dielectric_db_per_100m) == (2.9, 0.005)
    assert [p.id for p in plan.parts] == ["radio", "T1", "match A", "match B", "A", "B"]
    assert [p.at for p in plan.parts] == [(0, 0), (120, 0), (240, -120), (240, 120), (420, -120), (420, 120)]
    radio, leg, antenna = (plan.placed(name).part for name in ("radio", "match A", "A"))
    assert isinstance(radio, Radio)
    assert (radio.impedance_ohm, radio.power_w) == (50 + 0j, 1)
    assert isinstance(leg, Coax)
    assert (leg.cable, leg.length_m, leg.ends) == ("RG-179", 0.06, (None, None))
    assert isinstance(antenna, Antenna)
    assert (antenna.impedance.fixed_ohm, antenna.target.amplitude, antenna.target.phase_deg) == (50 + 0j, 1, 0)
    assert plan.joins[1] == (Port("T1", 2), Port("match A", 1))
    assert len(plan.joins) == 5


def test_example_is_written_back_byte_for_byte(tmp_path: Path) -> None:
    first, second = tmp_path / "first.feedplan", tmp_path / "second.feedplan"
    first.write_bytes(EXAMPLE.encode())
    write_plan(read_plan(first), second)
    assert second.read_bytes() == EXAMPLE.encode()


def test_other_layouts_read_the_same() -> None:
    plan = parse_plan(EXAMPLE.encode())
    document = json.loads(EXAMPLE)
    for text in (
        json.dumps(document),
        json.dumps(document, indent=8),
        json.dumps(document, ensure_ascii=True, separators=(",", ":")),
        EXAMPLE.replace("\n", "\r\n"),
        json.dumps(dict(reversed(document.items()))),
    ):
        assert format_plan(parse_plan(text.encode())) == EXAMPLE
        assert parse_plan(text.encode()) == plan


def test_byte_order_mark_is_read_and_not_written() -> None:
    assert format_plan(parse_plan(b"\xef\xbb\xbf" + EXAMPLE.encode())) == EXAMPLE


def test_least_plan_has_the_defaults() -> None:
    text = '{"format": "feedwright-plan", "version": 1, "band": {"start_hz": 100, "stop_hz": 300}}'
    assert (
        format_plan(parse_plan(text.encode()))
        == """{
  "format": "feedwright-plan",
  "version": 1,
  "title": "",
  "notes": "",
  "band": {"start_hz": 100, "stop_hz": 300, "points": 201, "mark_hz": 200},
  "reference_ohm": 50,
  "limits": {},
  "cables": {},
  "parts": [],
  "joins": []
}
"""
    )


DEFAULTS: dict[str, Document] = {
    "radio": {"impedance_ohm": [50, 0], "power_w": 1},
    "antenna": {"target": {"amplitude": 1, "phase_deg": 0}},
    "coax": {},
    "tee": {"ports": 3},
    "splitter": {"z0_ohm": 50, "outputs": 2},
    "lumped": {"wiring": "series"},
    "pad": {"z0_ohm": 50},
    "transformer": {},
    "load": {},
    "measured": {},
}


def test_tables_here_know_every_kind() -> None:
    assert set(LEAST) == set(DEFAULTS) == set(KINDS)


@pytest.mark.parametrize("kind", LEAST)
def test_default_of_every_field_that_is_not_required(kind: str) -> None:
    assert written_part(part(kind)) == {**LEAST[kind], **DEFAULTS[kind], "at": [0, 0]}


def test_default_of_half_a_target() -> None:
    assert written_part(part("antenna", target={"phase_deg": 90}))["target"] == {"amplitude": 1, "phase_deg": 90}


FULL: list[Document] = [
    {"kind": "radio", "impedance_ohm": [30, -12.5], "power_w": 0.25},
    {"kind": "antenna", "impedance": {"fixed_ohm": [0, 1]}, "target": {"amplitude": 0.5, "phase_deg": -90}},
    {
        "kind": "antenna",
        "impedance": {"resonant": {"r_ohm": 72, "f0_hz": 868000000, "q": 9.5}},
        "target": {"amplitude": 1, "phase_deg": 0},
    },
    {"kind": "antenna", "impedance": {"touchstone": ONE_PORT}, "target": {"amplitude": 1, "phase_deg": 0}},
    {
        "kind": "coax",
        "cable": "C",
        "length_m": 0.06,
        "ends": [None, {"z0_ohm": 50, "velocity_factor": 0.7, "length_m": 0.001}],
    },
    {"kind": "tee", "ports": 5},
    {"kind": "splitter", "form": "wilkinson", "z0_ohm": 75, "centre_hz": 2400000000, "outputs": 4},
    {"kind": "lumped", "place": "shunt", "r_ohm": 0, "l_h": 1e-9, "c_f": 2.2e-12, "wiring": "parallel"},
    {"kind": "pad", "loss_db": 6, "z0_ohm": 75},
    {"kind": "transformer", "ratio": -0.5},
    {"kind": "load", "impedance_ohm": [0, 0]},
    {"kind": "measured", "touchstone": ONE_PORT},
]


@pytest.mark.parametrize("fields", FULL, ids=lambda fields: fields["kind"])
def test_written_line_of_a_part_is_in_the_order_of_the_table(fields: Document) -> None:
    """id, kind, the fields of the kind, at, label, note, then what is not known."""
    line = {"id": "Ω", **fields, "at": [96, -0.5], "label": "oben", "note": 'say "ja"', "colour": [1, {"b": None}]}
    shuffled = dict(reversed(line.items()))
    text = format_plan(parse_plan(json.dumps(plan_document(shuffled)).encode()))
    assert f'  "parts": [\n    {json.dumps(line, ensure_ascii=False)}\n  ],\n' in text


def test_unknown_fields_are_kept_at_every_level_in_their_order() -> None:
    unknown = {"z": 1, "a": [True, None, 0.25], "later": {"y": "天線", "x": {}}}
    antenna = {
        "id": "A",
        "kind": "antenna",
        "impedance": {"resonant": {"r_ohm": 72, "f0_hz": 1, "q": 2, **unknown}, **unknown},
        "target": {"amplitude": 1, "phase_deg": 0, **unknown},
        "at": [0, 0],
        **unknown,
    }
    coax = {
        "id": "leg",
        "kind": "coax",
        "cable": "C",
        "length_m": 1,
        "ends": [{"z0_ohm": 50, "velocity_factor": 1, "length_m": 0, **unknown}, None],
        "at": [0, 0],
        **unknown,
    }
    measured = {"id": "M", "kind": "measured", "touchstone": {**ONE_PORT, **unknown}, "at": [0, 0], **unknown}
    document = {
        "format": "feedwright-plan",
        "version": 1,
        "title": "",
        "notes": "",
        "band": {"start_hz": 1, "stop_hz": 2, "points": 2, "mark_hz": 1, **unknown},
        "sweep": {"start_hz": 0.5, "stop_hz": 3, "points": 2, **unknown},
        "channels": [{"name": "one", "hz": 1, **unknown}],
        "reference_ohm": 50,
        "limits": {"isolation_db": 20, **unknown},
        "cables": {
            "C": {
                "z0_ohm": 50,
                "velocity_factor": 1,
                "skin_db_per_100m": 0,
                "dielectric_db_per_100m": 0,
                **unknown,
            }
        },
        "parts": [antenna, coax, measured],
        "joins": [["A:1", "leg:1"]],
        **unknown,
    }
    written = format_plan(parse_plan(json.dumps(document).encode()))
    assert json.dumps(json.loads(written)) == json.dumps(document)  # as text, so that the order counts


@pytest.mark.parametrize(
    ("token", "written"),
    [
        ("50.0", "50"),
        ("5e1", "50"),
        ("0.1", "0.1"),
        ("0.1000000000000000055", "0.1"),
        ("868e6", "868000000"),
        ("123456789012345678", "123456789012345680"),
        ("1e-12", "1e-12"),
        ("2.2E-12", "2.2e-12"),
        ("5e-324", "5e-324"),
        ("1.7976931348623157e308", None),
        ("0.30000000000000004", "0.30000000000000004"),
        ("9007199254740993", "9007199254740992"),
        ("1E+2", "100"),
    ],
)
def test_numbers_are_written_shortest_and_whole_ones_without_a_point(token: str, written: str | None) -> None:
    text = json.dumps(plan_document(part("pad", loss_db="@"))).replace('"@"', token)
    found = re.search(r'"loss_db": ([^,]*),', format_plan(parse_plan(text.encode())))
    assert found
    assert float(found[1]) == float(token)
    assert "." not in found[1] or not float(token).is_integer()
    assert written is None or found[1] == written


def test_minus_zero_is_written_as_zero() -> None:
    text = json.dumps(plan_document(part("load", impedance_ohm="@"))).replace('"@"', "[0, -0.0]")
    assert '"impedance_ohm": [0, 0]' in format_plan(parse_plan(text.encode()))


@settings(max_examples=150, deadline=None)
@given(documents())
def test_any_document_survives_reading_and_writing(document: Document) -> None:
    """Nothing that stood in the file is lost or changed, and what was written once is written so for ever."""
    plan = parse_plan(json.dumps(document).encode())
    text = format_plan(plan)
    assert parse_plan(text.encode()) == plan
    assert format_plan(reread(plan)) == text
    assert_holds(json.loads(text), document)
    assert format_plan(parse_plan(json.dumps(document, ensure_ascii=False).encode())) == text


@settings(max_examples=50, deadline=None)
@given(documents())
def test_any_written_file_has_one_part_and_one_join_a_line(document: Document) -> None:
    text = format_plan(parse_plan(json.dumps(document).encode()))
    lines = text.split("\n")
    assert lines[0] == "{"
    assert lines[-2:] == ["}", ""]
    for key in ("parts", "joins"):
        if not document[key]:
            assert f'  "{key}": []' in text
            continue
        start = lines.index(f'  "{key}": [')
        block = [line.rstrip(",") for line in lines[start + 1 : start + 1 + len(document[key])]]
        assert all(line.startswith("    ") and not line.startswith("     ") for line in block)
        read = [json.loads(line) for line in block]
        assert read == document[key] if key == "joins" else [p["id"] for p in read] == [p["id"] for p in document[key]]
        assert lines[start + 1 + len(block)].rstrip(",") == "  ]"


def assert_holds(written: Any, given: Any) -> None:
    """Everything of the document stands in the file too; keys that are new to it may stand before and between."""
    if isinstance(given, dict):
        assert isinstance(written, dict)
        for key, value in given.items():
            if key in written or LEFT_OUT.get(key, key) != value:
                assert_holds(written[key], value)
        unknown_in, unknown_out = ([key for key in side if is_unknown(key)] for side in (given, written))
        assert unknown_out == unknown_in
    elif isinstance(given, list):
        assert isinstance(written, list)
        assert len(written) == len(given)
        for a, b in zip(written, given, strict=True):
            assert_holds(a, b)
    elif isinstance(given, bool) or given is None or isinstance(given, str):
        assert type(written) is type(given)
        assert written == given
    else:
        assert not isinstance(written, bool)
        assert written == given or float(written) == float(given)


LEFT_OUT: Document = {"ends": [None, None], "label": "", "note": "", "channels": []}
"""What is not written because it says nothing."""
