"""Plan files for tests: the written example, the least that each kind needs, and random documents for Hypothesis."""

from __future__ import annotations

import json
import unicodedata
from typing import Any

import pytest
from hypothesis import strategies as st

from feedlib import PlanError
from feedlib.plan_file import parse_plan

Document = dict[str, Any]

EXAMPLE = """{
  "format": "feedwright-plan",
  "version": 1,
  "title": "Two-dipole gateway",
  "notes": "",
  "band": {"start_hz": 863000000, "stop_hz": 870000000, "points": 201, "mark_hz": 868000000},
  "reference_ohm": 50,
  "limits": {"return_loss_db": 20, "amplitude_balance_db": 0.5, "phase_balance_deg": 5},
  "cables": {
    "RG-316": {"z0_ohm": 50, "velocity_factor": 0.695, "skin_db_per_100m": 3.16, "dielectric_db_per_100m": 0},
    "RG-179": {"z0_ohm": 75, "velocity_factor": 0.695, "skin_db_per_100m": 2.9, "dielectric_db_per_100m": 0.005}
  },
  "parts": [
    {"id": "radio", "kind": "radio", "impedance_ohm": [50, 0], "power_w": 1, "at": [0, 0]},
    {"id": "T1", "kind": "tee", "ports": 3, "at": [120, 0]},
    {"id": "match A", "kind": "coax", "cable": "RG-179", "length_m": 0.06, "at": [240, -120]},
    {"id": "match B", "kind": "coax", "cable": "RG-179", "length_m": 0.06, "at": [240, 120]},
    {"id": "A", "kind": "antenna", "impedance": {"fixed_ohm": [50, 0]}, "target": {"amplitude": 1, "phase_deg": 0}, "at": [420, -120]},
    {"id": "B", "kind": "antenna", "impedance": {"fixed_ohm": [50, 0]}, "target": {"amplitude": 1, "phase_deg": 0}, "at": [420, 120]}
  ],
  "joins": [
    ["radio:1", "T1:1"],
    ["T1:2", "match A:1"],
    ["T1:3", "match B:1"],
    ["match A:2", "A:1"],
    ["match B:2", "B:1"]
  ]
}
"""  # noqa: E501

ONE_PORT = {"name": "dipole.s1p", "text": "# MHz S RI R 50\n100 0.1 0\n900 0.2 -0.1\n"}
TWO_PORT = {"name": "filter.s2p", "text": "# MHz S RI R 50\n100 0 0 1 0 1 0 0 0\n900 0 0 0 1 0 1 0 0\n"}

LEAST: dict[str, Document] = {
    "radio": {},
    "antenna": {"impedance": {"fixed_ohm": [50, 0]}},
    "coax": {"cable": "C", "length_m": 1},
    "tee": {},
    "splitter": {"form": "wilkinson", "centre_hz": 868000000},
    "lumped": {"place": "series", "r_ohm": 5},
    "pad": {"loss_db": 3},
    "transformer": {"ratio": 2},
    "load": {"impedance_ohm": [0, 0]},
    "measured": {"touchstone": TWO_PORT},
}
"""What each kind requires, and nothing else."""


def plan_document(*parts: Document, joins: list[Any] | None = None, **top: Any) -> Document:
    """A document with these parts and the least else."""
    head = {"format": "feedwright-plan", "version": 1, "band": {"start_hz": 1e8, "stop_hz": 2e8}}
    return {**head, "parts": list(parts), "joins": joins or [], **top}


def part(kind: str, part_id: str = "X", **fields: Any) -> Document:
    """A part with the least that its kind requires, changed by `fields`."""
    return {"id": part_id, "kind": kind, **LEAST[kind], **fields}


def refusal(document: Document | str | bytes) -> PlanError:
    """The error of a document that must be refused; its text is one line that any screen can show."""
    if isinstance(document, dict):
        document = json.dumps(document)
    with pytest.raises(PlanError) as caught:
        parse_plan(document.encode() if isinstance(document, str) else document)
    text = str(caught.value)
    assert text
    assert not any(unicodedata.category(c) in ("Cc", "Cs", "Zl", "Zp") for c in text), repr(text)
    assert len(text) < 500
    return caught.value


# Random documents

SCRIPTS = 'aZ09 _-/()äß–Ωλ°天線антенна مقسمקוκεραία📡e\u0301\u200d"\\'
TEXTS = st.text(st.sampled_from(SCRIPTS) | st.characters(exclude_categories=["Cs"]), max_size=12)
IDS = st.text(
    st.sampled_from(SCRIPTS) | st.characters(exclude_categories=["Cs", "Cc"], exclude_characters=":"),
    min_size=1,
    max_size=12,
)
JSON_VALUES = st.recursive(
    st.none()
    | st.booleans()
    | st.integers(-(10**25), 10**25)
    | st.floats(allow_nan=False, allow_infinity=False)
    | TEXTS,
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(TEXTS, inner, max_size=3),
    max_leaves=4,
)
INSIDE = ("extra", "data", "KIND", "state", "__class__", "self")
"""Words of the program's own insides must be as unknown as any other."""
UNKNOWN = st.dictionaries(TEXTS.map(lambda t: "x" + t) | st.sampled_from(INSIDE), JSON_VALUES, max_size=2)


def is_unknown(key: str) -> bool:
    """Whether a random document's field is one of those that no plan file knows."""
    return key.startswith("x") or key in INSIDE


def numbers(low: float, high: float = 1e300) -> st.SearchStrategy[float]:
    """Floats and whole numbers of all sizes in a range."""
    whole = st.integers(int(max(low, -(10**6))) + 1, int(min(high, 10**6))) if high >= 2 else st.just(1)
    return st.floats(low, high) | whole


ANY = numbers(-1e300)
POSITIVE = numbers(1e-300)
NOT_NEGATIVE = numbers(0)
FACTOR = numbers(1e-9, 1)


def pairs(first: st.SearchStrategy[float]) -> st.SearchStrategy[list[float]]:
    """[re, im] with `first` as the real part."""
    return st.tuples(first, ANY).map(list)


@st.composite
def objects(
    draw: st.DrawFn,
    required: dict[str, st.SearchStrategy[Any]] | None = None,
    optional: dict[str, st.SearchStrategy[Any]] | None = None,
) -> Document:
    """A JSON object with its fields in any order, some of the optional ones, and unknown ones between."""
    found = draw(st.fixed_dictionaries(required or {}, optional=optional or {}))
    found.update(draw(UNKNOWN))
    return dict(draw(st.permutations(list(found.items()))))


ENDS = objects({"z0_ohm": POSITIVE, "velocity_factor": FACTOR, "length_m": NOT_NEGATIVE})
FILES_1 = objects({"name": st.just(ONE_PORT["name"]), "text": st.just(ONE_PORT["text"])})
FILES_2 = objects({"name": st.just(TWO_PORT["name"]), "text": st.just(TWO_PORT["text"])})
RESONANT = objects({"r_ohm": NOT_NEGATIVE, "f0_hz": POSITIVE, "q": NOT_NEGATIVE})
IMPEDANCES = (
    objects({"fixed_ohm": pairs(NOT_NEGATIVE)}) | objects({"resonant": RESONANT}) | objects({"touchstone": FILES_1})
)
CABLES = objects(
    {"z0_ohm": POSITIVE, "velocity_factor": FACTOR},
    {"skin_db_per_100m": NOT_NEGATIVE, "dielectric_db_per_100m": NOT_NEGATIVE},
)
LIMITS = objects(
    optional=dict.fromkeys(
        ["return_loss_db", "amplitude_balance_db", "phase_balance_deg", "harness_loss_db", "isolation_db"], NOT_NEGATIVE
    )
)
PLACE = {"at": st.tuples(ANY, ANY).map(list), "label": TEXTS, "note": TEXTS}


def parts(kind: str, part_id: str) -> st.SearchStrategy[Document]:
    """Parts of one kind, with the fields of the contract's table."""
    required, optional = {
        "radio": ({}, {"impedance_ohm": pairs(POSITIVE), "power_w": POSITIVE}),
        "antenna": (
            {"impedance": IMPEDANCES},
            {"target": objects(optional={"amplitude": POSITIVE, "phase_deg": ANY})},
        ),
        "coax": (
            {"cable": TEXTS, "length_m": NOT_NEGATIVE},
            {"ends": st.tuples(st.none() | ENDS, st.none() | ENDS).map(list)},
        ),
        "tee": ({}, {"ports": st.integers(3, 9)}),
        "splitter": (
            {"form": st.sampled_from(["wilkinson", "resistive"]), "centre_hz": POSITIVE},
            {"z0_ohm": POSITIVE, "outputs": st.integers(2, 9)},
        ),
        "lumped": (
            {"place": st.sampled_from(["series", "shunt"]), "r_ohm": NOT_NEGATIVE},
            {"l_h": POSITIVE, "c_f": POSITIVE, "wiring": st.sampled_from(["series", "parallel"])},
        ),
        "pad": ({"loss_db": NOT_NEGATIVE}, {"z0_ohm": POSITIVE}),
        "transformer": ({"ratio": ANY.filter(bool)}, {}),
        "load": ({"impedance_ohm": pairs(NOT_NEGATIVE)}, {}),
        "measured": ({"touchstone": FILES_2}, {}),
    }[kind]
    own = {"id": st.just(part_id), "kind": st.just(kind)}
    return objects({**own, **required}, {**optional, **PLACE})


@st.composite
def documents(draw: st.DrawFn) -> Document:
    """A plan document with any parts, joins, cables and unknown fields."""
    ids = draw(st.lists(IDS, max_size=4, unique=True))
    made = [draw(parts(draw(st.sampled_from(sorted(LEAST))), part_id)) for part_id in ids]
    loose = draw(st.permutations([f"{p['id']}:{n}" for p in made for n in range(1, _port_count(p) + 1)]))
    count = draw(st.integers(0, len(loose) // 2))
    joins = [[loose[2 * n], loose[2 * n + 1]] for n in range(count)]
    start, stop = sorted([draw(POSITIVE), draw(POSITIVE)])
    band = {"start_hz": st.just(start), "stop_hz": st.just(stop)}
    points = st.integers(1 if start == stop else 2, 10_001)
    return draw(
        objects(
            {
                "format": st.just("feedwright-plan"),
                "version": st.just(1),
                "band": objects(band, {"points": points, "mark_hz": POSITIVE}),
                "parts": st.just(made),
                "joins": st.just(joins),
            },
            {
                "title": TEXTS,
                "notes": TEXTS,
                "reference_ohm": POSITIVE,
                "limits": LIMITS,
                "cables": st.dictionaries(TEXTS, CABLES, max_size=2),
                "sweep": objects(band, {"points": points}),
                "channels": st.lists(
                    objects({"name": TEXTS, "hz": POSITIVE}), max_size=2, unique_by=lambda c: c["name"]
                ),
            },
        )
    )


def _port_count(document: Document) -> int:
    return {
        "radio": 1,
        "antenna": 1,
        "load": 1,
        "tee": document.get("ports", 3),
        "splitter": document.get("outputs", 2) + 1,
    }.get(document["kind"], 2)
