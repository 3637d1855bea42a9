"""Files that are broken, torn or made to hurt: each is refused in one line or is a plan, never anything else."""

from __future__ import annotations

import json
import os
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from feedlib import Plan, PlanError, read_plan
from feedlib.plan_file import format_plan, parse_plan
from tests.feedlib.plan_documents import EXAMPLE, LEAST, documents, part, plan_document, refusal

EVERY_KIND = format_plan(
    parse_plan(
        json.dumps(
            plan_document(
                *(part(kind, f"{kind} 天", label="Ä", later={"é": [1.5, None]}) for kind in LEAST),
                joins=[["radio 天:1", "coax 天:1"], ["tee 天:1", "coax 天:2"]],
                title="αβγ",
            )
        ).encode()
    )
).encode()


def outcome(data: bytes) -> Plan | None:
    """The plan, which then also survives writing; None where it was refused in one line."""
    try:
        plan = parse_plan(data)
    except PlanError as error:
        said = str(error)
    else:
        assert parse_plan(format_plan(plan).encode()) == plan
        return plan
    assert "\n" not in said
    assert said.encode()  # any screen can show it
    return None


@pytest.mark.parametrize("whole", [EXAMPLE.encode(), EVERY_KIND], ids=["example", "every kind"])
def test_torn_file_is_never_a_plan(whole: bytes) -> None:
    """Cut at every byte, also within a character; only the newline at the end may be missing."""
    assert outcome(whole[:-1]) is not None
    for length in range(len(whole) - 1):
        assert outcome(whole[:length]) is None


@pytest.mark.parametrize("lost", range(0, len(EXAMPLE), 7))
def test_file_that_lost_its_beginning_is_no_plan(lost: int) -> None:
    if lost:
        assert outcome(EXAMPLE.encode()[lost:]) is None


@settings(max_examples=300, deadline=None)
@given(st.lists(st.tuples(st.integers(0, len(EVERY_KIND) - 1), st.integers(0, 255)), min_size=1, max_size=4))
def test_flipped_bytes_are_refused_or_read(flips: list[tuple[int, int]]) -> None:
    data = bytearray(EVERY_KIND)
    for at, byte in flips:
        data[at] = byte
    outcome(bytes(data))


@settings(max_examples=150, deadline=None)
@given(st.data())
def test_pieces_moved_within_a_file_are_refused_or_read(data: st.DataObject) -> None:
    places = st.integers(0, len(EXAMPLE))
    a, b = sorted([data.draw(places), data.draw(places)])
    at = data.draw(places)
    outcome((EXAMPLE[:at] + EXAMPLE[a:b] + EXAMPLE[at:]).encode())
    outcome((EXAMPLE[:a] + EXAMPLE[b:]).encode())


@settings(max_examples=100, deadline=None)
@given(st.binary(max_size=60) | st.text(max_size=60).map(lambda t: t.encode(errors="surrogatepass")))
def test_any_bytes_are_no_plan(data: bytes) -> None:
    assert outcome(data) is None


TOKENS = [
    *'{}[],:"',
    "1e999",
    "-0",
    "null",
    "true",
    "NaN",
    '"\\ud800"',
    '"id"',
    '"A:1"',
    "[0, 0]",
    "{}",
    "\\",
    "0.5",
    "9" * 400,
]


@settings(max_examples=150, deadline=None)
@given(documents(), st.data())
def test_any_document_with_a_word_exchanged_is_refused_or_read(
    document: dict[str, object], data: st.DataObject
) -> None:
    words = json.dumps(document).split(" ")
    words[data.draw(st.integers(0, len(words) - 1))] = data.draw(st.sampled_from(TOKENS))
    outcome(" ".join(words).encode())


@pytest.mark.parametrize(
    "text",
    [
        "",
        " ",
        "\n",
        "\x00",
        "{",
        "}",
        "{}",
        "[]",
        "nul",
        "{'format': 1}",
        '{"format": "feedwright-plan",}',
        "// plan",
        "\ufeff",
    ],
)
def test_small_nonsense(text: str) -> None:
    refusal(text)


@pytest.mark.parametrize("tail", ["x", "{}", ",", "\x00", "]", EXAMPLE])
def test_more_after_the_end(tail: str) -> None:
    refusal(EXAMPLE + tail)


def test_comments_and_trailing_commas_are_no_json() -> None:
    refusal(EXAMPLE.replace('"version": 1,', '"version": 1, // first'))
    refusal(EXAMPLE.replace('"match B:2", "B:1"]', '"match B:2", "B:1"],'))
    error = refusal(EXAMPLE.replace('"notes": "",', '"notes": "" '))
    assert "line 6" in str(error)  # where the comma is missed
    assert "JSON" in str(error)


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ('"notes": ""', '"notes": "", "notes": ""'),
        ('"points": 201', '"points": 201, "points": 201'),
        ('"ports": 3', '"ports": 3, "ports": 4'),
        ('"id": "T1"', '"id": "T1", "id": "T2"'),
        ('"phase_deg": 0}', '"phase_deg": 0, "phase_deg": 1}'),
        ('"RG-316":', '"RG-179":'),
        ('"title":', '"later": {"x": 1, "x": 1}, "title":'),
        ('"title":', '"later": {"\\u0041": 1, "A": 1}, "title":'),
    ],
)
def test_key_that_stands_twice(old: str, new: str) -> None:
    assert old in EXAMPLE
    error = refusal(EXAMPLE.replace(old, new, 1))
    assert "twice" in str(error)


@pytest.mark.parametrize("token", ["1e400", "-1e400", "NaN", "Infinity", "-Infinity", "[1, [1e999]]", '{"x": 1e309}'])
def test_no_infinity_in_fields_that_are_not_known(token: str) -> None:
    """It could be read, but there is no JSON to write it."""
    for document in (
        plan_document(later="@"),
        plan_document(part("pad", later="@")),
        plan_document(part("antenna", target={"later": "@"})),
    ):
        refusal(json.dumps(document).replace('"@"', token))


@pytest.mark.parametrize("digits", [309, 4300, 5000, 200_000])
def test_numbers_of_many_digits(digits: int) -> None:
    for document in (plan_document(part("pad", loss_db="@")), plan_document(reference_ohm="@")):
        refusal(json.dumps(document).replace('"@"', digits * "9"))
    outcome(json.dumps(plan_document(later="@")).replace('"@"', digits * "9").encode())
    outcome(json.dumps(plan_document(later="@")).replace('"@"', "0." + digits * "3").encode())


def test_band_at_the_end_of_all_numbers() -> None:
    plan = outcome(json.dumps(plan_document(band={"start_hz": 1.2e308, "stop_hz": 1.6e308})).encode())
    assert plan is None or plan.band.mark_hz == pytest.approx(1.4e308)


@pytest.mark.parametrize("depth", [50, 100, 200, 300, 400, 500, 700, 900, 980, *range(985, 1005), 2000, 10**5])
@pytest.mark.parametrize("brackets", ["[]", "{}", "[]\\u0041"])
def test_deep_nesting(depth: int, brackets: str) -> None:
    opened, closed, inner = {
        "[]": ("[", "]", "1"),
        "{}": ('{"x":', "}", "1"),
        "[]\\u0041": ("[", "]", '"\\u0041"'),
    }[brackets]
    nested = depth * opened + inner + depth * closed
    for document in (plan_document(later="@"), plan_document(part("pad", later="@")), plan_document(title="@")):
        outcome(json.dumps(document).replace('"@"', nested).encode())


@pytest.mark.parametrize("lone", ["\\ud800", "\\udfff", "a\\ud83d", "\\ude00\\ud83d"])
def test_half_characters(lone: str) -> None:
    for document in (
        plan_document(title="@"),
        plan_document(part("pad", label="@")),
        plan_document(part("pad", "@")),
        plan_document(part("coax", cable="@")),
        plan_document(later=["@"]),
        plan_document(**{"@": 1}),  # type: ignore[arg-type]
        plan_document(kind="@"),
        plan_document(joins=[["@:1", "@:2"]]),
        plan_document({**part("pad"), "kind": "@"}),
    ):
        refusal(json.dumps(document).replace("@", lone))
    refusal('{"' + lone + '": 1, "' + lone + '": 2}')


def test_whole_characters_beyond_the_first_plane() -> None:
    plan = outcome(json.dumps(plan_document(title="\U0001f4e1")).encode())
    assert plan is not None
    assert plan.title == "\U0001f4e1"


@pytest.mark.parametrize("coding", ["utf-16", "utf-32", "utf-16-le"])
def test_other_codings(coding: str) -> None:
    refusal(EXAMPLE.encode(coding))


@pytest.mark.parametrize("wrong", [b"\xff", b"\xc3", b"\xed\xa0\x80", b"\xc0\x80", b"\xf5\x80\x80\x80", b"\xe5\xa4"])
def test_bytes_that_are_not_utf_8(wrong: bytes) -> None:
    data = EXAMPLE.encode().replace(b"gateway", wrong)
    error = refusal(data)
    assert "UTF-8" in str(error)
    assert str(data.index(wrong)) in str(error)


# Text of the file that comes back in a message must not break the line: a message is one line.
TWO_LINES = "a\\nb\\u2028c\\u001b[0m"


@pytest.mark.parametrize(
    "document",
    [
        plan_document(reference_ohm="@"),
        plan_document(cables={"@": {"z0_ohm": "@"}}),
        plan_document(cables={"@": 1}),
        plan_document(joins=[["@", "B:1"]]),
        plan_document(joins=[["@:1", "B:1"]]),
        plan_document(part("pad"), joins=[["X:1", "@:1"]]),
        plan_document({**part("pad"), "kind": "@"}),
        plan_document(part("pad", "@")),
        plan_document(part("pad", loss_db="@")),
        plan_document(part("lumped", place="@")),
        plan_document(part("splitter", form="@")),
        plan_document(part("measured", touchstone={"name": "@", "text": "@"})),
        plan_document(part("measured", touchstone={"name": "@.s2p", "text": "# MHz\n@"})),
        plan_document(part("antenna", impedance={"touchstone": {"name": "@", "text": ""}})),
        plan_document(channels=[{"name": "@", "hz": 1}] * 2),
        plan_document(format="@"),
        plan_document(version="@"),
        plan_document(band={"start_hz": "@", "stop_hz": 1}),
    ],
)
def test_message_of_one_line_about_text_of_two(document: dict[str, object]) -> None:
    refusal(json.dumps(document).replace("@", TWO_LINES))


def test_message_of_one_line_about_a_key_of_two() -> None:
    refusal('{"' + TWO_LINES + '": 1, "' + TWO_LINES + '": 2}')


def test_message_about_long_text_is_short() -> None:
    text = "x" * 100_000
    for document in (
        plan_document(reference_ohm=text),
        plan_document(part("pad", text)),
        plan_document({**part("pad"), "kind": text}),
        plan_document(joins=[[text, "A:1"]]),
        plan_document(joins=[[text + ":1", "A:1"]]),
        plan_document(cables={text: 1}),
        plan_document(channels=[{"name": text, "hz": 1}] * 2),
        plan_document(part("measured", touchstone={"name": text, "text": text})),
        plan_document(part("measured", touchstone={"name": "a.s2p", "text": "# MHz\n" + text})),
    ):
        refusal(document)
    refusal('{"' + text + '": 1, "' + text + '": 2}')


@pytest.mark.parametrize("byte", [b"\x00", b"[", b"{", b"0", b"7", b" ", b'"', b"\xff"])
def test_a_hundred_megabytes_of_nonsense(tmp_path: Path, byte: bytes) -> None:
    path = tmp_path / "huge.feedplan"
    path.write_bytes(byte * 100_000_000)
    with pytest.raises(PlanError):
        read_plan(path)
    path.unlink()


def test_file_beyond_every_size_is_not_even_read(tmp_path: Path) -> None:
    path = tmp_path / "huge.feedplan"
    with path.open("wb") as file:
        os.truncate(file.fileno(), 10**12)
    with pytest.raises(PlanError, match="MB"):
        read_plan(path)


def test_twenty_thousand_channels_are_no_trap() -> None:
    """Names are compared once each: a square of them would take seconds, and 2*10^5 of them minutes."""
    plan = outcome(json.dumps(plan_document(channels=[{"name": str(n), "hz": n + 1} for n in range(20_000)])).encode())
    assert plan is not None
    assert len(plan.channels) == 20_000


def test_paths_that_are_no_files(tmp_path: Path) -> None:
    for path in (tmp_path, tmp_path / "missing.feedplan", tmp_path / "no" / "where.feedplan", "nul\0byte", "", "a\nb"):
        with pytest.raises(PlanError) as caught:
            read_plan(path)
        assert "\n" not in str(caught.value)
        assert str(caught.value).encode()


def test_message_names_the_file_that_cannot_be_read(tmp_path: Path) -> None:
    with pytest.raises(PlanError, match=r"天線\.feedplan"):
        read_plan(tmp_path / "天線.feedplan")


def test_read_plan_takes_text_and_path(tmp_path: Path) -> None:
    path = tmp_path / "天線.feedplan"
    path.write_bytes(EVERY_KIND)
    assert read_plan(path) == read_plan(str(path))
