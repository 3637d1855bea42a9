"""The command line: what it prints and writes, its exit codes, and one line for everything that is wrong."""

from __future__ import annotations

import csv
import json
import os
import subprocess
import sys
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import skrf

from app.cli import main
from feedlib import Answer, read_plan, solve, write_plan
from tests.feedlib.plan_documents import ONE_PORT
from tests.plans import Sketch

ROOT = Path(__file__).parent.parent.parent


def saved(sketch: Sketch, folder: Path) -> Path:
    """The plan as a file."""
    path = folder / "harness.feedplan"
    write_plan(sketch.plan(), path)
    return path


def bare_tee(**top: Any) -> Sketch:
    """1 W into two antennas of 50 ohm side by side, so 25 ohm at the radio.

    By hand: |reflection| = 25/75, return loss 20 log10 3 = 9.5424 dB, share (1 - 1/9)/2 = 44.44 % each, open-circuit
    voltage 2 sqrt(1 W * 50 ohm) = 14.142 V, so 4.714 V at each antenna and 94.28 mA in it.
    """
    sketch = Sketch(1e8, 2e8, 3, title="Bare T joint", **top)
    sketch.add("radio", "radio")
    sketch.add("tee", "T1")
    for name in ("A", "B"):
        sketch.antenna(50, name)
    sketch.join("radio:1", "T1:1", "T1:2", "A:1", "T1:3", "B:1")
    return sketch


def full_harness() -> Sketch:
    """Something of everything that the figures can be: losses, channels, an open port, an antenna tied to nothing."""
    sketch = Sketch(
        1e8, 2e8, 5, reference_ohm=75, limits={"return_loss_db": 1}, channels=[{"name": "low", "hz": 1.1e8}]
    )
    sketch.add("radio", "radio", power_w=5)
    sketch.add("tee", "T1", ports=4)
    sketch.coax(1.3, 75, "leg A", 0.66, skin_db_per_100m=3)
    sketch.coax(0.9, 75, "leg B", 0.7, skin_db_per_100m=4)
    sketch.antenna(60 + 20j, "A")
    sketch.antenna(40 - 10j, "B")
    sketch.antenna(50, "loose")
    sketch.join("radio:1", "T1:1", "T1:2", "leg A:1", "T1:3", "leg B:2", "leg A:2", "A:1", "leg B:1", "B:1")
    return sketch


def run_module(*words: str, without: tuple[str, ...] = (), **changed: str) -> subprocess.CompletedProcess[str]:
    """`python -m app` in a process of its own."""
    environment = {k: v for k, v in os.environ.items() if k not in without} | changed
    command = [sys.executable, "-m", "app", *words]
    return subprocess.run(command, cwd=ROOT, env=environment, capture_output=True, text=True, timeout=120)


def refused(words: list[str], capsys: pytest.CaptureFixture[str]) -> str:
    """What stands on stderr after a command that must be refused: one line, and nothing on stdout."""
    code = main(words)
    told = capsys.readouterr()
    assert (code, told.out) == (2, "")
    assert told.err.startswith("feedwright: ")
    assert told.err.endswith("\n")
    assert len(told.err.splitlines()) == 1
    return told.err


# solve: the exit code and the summary


@pytest.mark.parametrize(
    ("limits", "code"),
    [
        ({}, 0),
        ({"return_loss_db": 9.54}, 0),
        ({"return_loss_db": 9.55}, 1),
        ({"amplitude_balance_db": 0.1, "return_loss_db": 9.55}, 1),
        ({"amplitude_balance_db": 0.1, "phase_balance_deg": 0.1, "return_loss_db": 9.5}, 0),
    ],
)
def test_the_exit_code_says_whether_every_limit_holds(tmp_path: Path, limits: dict[str, float], code: int) -> None:
    """9.5424 dB by hand."""
    assert main(["solve", str(saved(bare_tee(limits=limits), tmp_path))]) == code


def test_the_summary(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """The plan, each verdict with its figure, and at the mark every antenna's share and current."""
    limits = {"return_loss_db": 10, "amplitude_balance_db": 0.5}
    assert main(["solve", str(saved(bare_tee(limits=limits, mark_hz=1.5e8), tmp_path))]) == 1
    told = capsys.readouterr()
    assert told.err == ""
    head, *lines = told.out.splitlines()
    assert head == "Bare T joint: 4 parts, 2 antennas, 100 to 200 MHz"
    (loss,) = [line for line in lines if "return loss" in line and "wants" in line]
    assert loss.startswith("FAILS ")
    assert " 9.542 dB " in loss
    assert "wants >= 10)" in loss
    (balance,) = [line for line in lines if "amplitude balance" in line]
    assert balance.startswith("holds ")
    assert " 0.000 dB " in balance
    assert "at 150 MHz: return loss 9.54 dB" in lines
    for name in ("A", "B"):
        assert f"  {name}: 44.44 % of the power, 0.09428 A at +0.00 deg" in lines


def test_the_summary_tells_what_is_left_open(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A half-built plan is solved, and its problems stand below the figures."""
    assert main(["solve", str(saved(full_harness(), tmp_path))]) == 0
    notes = [line for line in capsys.readouterr().out.splitlines() if line.startswith("note: ")]
    assert {line.split(": ")[1] for line in notes} == {"T1", "loose"}


def test_a_screen_of_plain_letters_is_enough(tmp_path: Path) -> None:
    """A title may hold any letter, a terminal may not."""
    path = saved(bare_tee(limits={"phase_balance_deg": 1}), tmp_path)
    path.write_text(path.read_text(encoding="utf-8").replace("Bare T joint", "75 Ω, 天線"), encoding="utf-8")
    done = run_module("solve", str(path), PYTHONIOENCODING="ascii")
    assert (done.returncode, done.stderr) == (0, "")
    assert done.stdout.startswith("75 ")
    assert "44.44 %" in done.stdout


def test_a_title_cannot_steer_the_terminal(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Control characters are not passed on, line ends neither."""
    path = saved(bare_tee(), tmp_path)
    text = path.read_text(encoding="utf-8").replace("Bare T joint", r"one\u001b[31m\r\ntwo\u0007\u009b")
    path.write_text(text, encoding="utf-8")
    assert main(["solve", str(path)]) == 0
    out = capsys.readouterr().out
    assert all(c.isprintable() for c in out.replace("\n", ""))
    assert "two" in out.splitlines()[0]


# solve: the files


FIGURES = (
    "frequency_hz", "antenna_current_a", "antenna_voltage_v", "antenna_share", "port_impedance_ohm", "return_loss_db",
    "amplitude_balance_db", "phase_balance_deg", "harness_loss_db", "reflected_share", "part_loss_share",
)  # fmt: skip
"""The names of the Python answer, less those that are tested by themselves."""


def written_json(words: list[str], path: Path) -> dict[str, Any]:
    """The file of `solve --json`; strict JSON only, so NaN and Infinity would raise."""
    main([*words, "--json", str(path)])
    return json.loads(path.read_text(encoding="utf-8"), parse_constant=pytest.fail)


def assert_written(written: Any, figure: Any) -> None:
    """Every number stands there to its last bit, complex as [re, im], what is not finite as null."""
    if isinstance(figure, Mapping):
        assert list(written) == list(figure)
        for key, inner in figure.items():
            assert_written(written[key], inner)
    elif isinstance(figure, np.ndarray) and figure.ndim:
        assert len(written) == len(figure)
        for inner_written, inner in zip(written, figure, strict=True):
            assert_written(inner_written, inner)
    elif not np.isfinite(figure):
        assert written is None
    elif isinstance(figure, complex):
        assert written == [figure.real, figure.imag]
    else:
        assert written == figure


def test_json_holds_every_figure(tmp_path: Path) -> None:
    """Over the grid, at the mark and at each channel: the same as in Python."""
    path = saved(full_harness(), tmp_path)
    written = written_json(["solve", str(path)], tmp_path / "out.json")
    answer = solve(read_plan(path))
    assert written["harness_ports"] == ["radio:1", "A:1", "B:1", "loose:1"]
    assert written["antenna_ids"] == ["A", "B", "loose"]
    places = {"grid": (written, answer), "mark": (written["mark"], answer.mark)}
    places["low"] = (written["channels"]["low"], answer.channels["low"])
    assert list(written["channels"]) == ["low"]
    for where, figures in places.values():
        assert "harness_s" not in where
        for name in FIGURES:
            assert_written(where[name], getattr(figures, name))
    (verdict,) = answer.verdicts
    names = ("limit", "wanted", "worst", "frequency_hz", "holds")
    assert written["verdicts"] == [{name: getattr(verdict, name) for name in names}]
    # What the plan has of inf and nan: no current in an antenna, an open port, a port that the radio does not reach.
    assert written["amplitude_balance_db"] == [None] * 5
    assert written["port_impedance_ohm"]["T1:4"] == [None] * 5
    assert written["port_impedance_ohm"]["loose:1"] == [None] * 5


def test_json_with_s_holds_the_harness_as_well(tmp_path: Path) -> None:
    """Rows and columns in the order of harness_ports."""
    path = saved(full_harness(), tmp_path)
    written = written_json(["solve", str(path), "--with-s"], tmp_path / "out.json")
    answer = solve(read_plan(path))
    assert np.shape(written["harness_s"]) == (5, 4, 4, 2)
    assert_written(written["harness_s"], answer.harness_s)
    assert_written(written["mark"]["harness_s"], answer.mark.harness_s)
    assert_written(written["channels"]["low"]["harness_s"], answer.channels["low"].harness_s)


@pytest.mark.parametrize("antennas", [1, 2, 3])
def test_touchstone_is_read_by_others(tmp_path: Path, antennas: int) -> None:
    """An independent reader finds the harness S, its references and frequencies."""
    sketch = full_harness()
    gone = [p["id"] for p in sketch.parts if p["kind"] == "antenna"][antennas:]
    sketch.parts = [p for p in sketch.parts if p["id"] not in gone]
    sketch.joins = [j for j in sketch.joins if not any(port.split(":")[0] in gone for port in j)]
    path = saved(sketch, tmp_path)
    out = tmp_path / f"harness.s{antennas + 1}p"
    main(["solve", str(path), "--touchstone", str(out)])
    answer, network = solve(read_plan(path)), skrf.Network(str(out))
    np.testing.assert_array_equal(network.f, answer.frequency_hz)
    np.testing.assert_allclose(network.s, answer.harness_s, rtol=0, atol=1e-15)
    assert (network.z0 == 75).all()


def test_csv_holds_the_figures_over_frequency(tmp_path: Path) -> None:
    """One row a frequency; each antenna with its share, and its current by size and phase."""
    path, out = saved(full_harness(), tmp_path), tmp_path / "figures.csv"
    main(["solve", str(path), "--csv", str(out)])
    with out.open(encoding="utf-8", newline="") as file:
        rows = list(csv.DictReader(file))
    columns = {name: np.array([float(row[name]) for row in rows]) for name in rows[0]}
    answer: Answer = solve(read_plan(path))
    names = ["frequency_hz", "return_loss_db", "reflected_share", "amplitude_balance_db", "phase_balance_deg"]
    for name in (*names, "harness_loss_db"):
        np.testing.assert_array_equal(columns[name], getattr(answer, name))
    for n, antenna in enumerate(answer.antenna_ids):
        np.testing.assert_array_equal(columns[f"{antenna} share"], answer.antenna_share[:, n])
        phasor = columns[f"{antenna} current_a"] * np.exp(1j * np.radians(columns[f"{antenna} phase_deg"]))
        np.testing.assert_allclose(phasor, answer.antenna_current_a[:, n], rtol=1e-14)


def test_a_pipe_is_written_to_and_not_replaced(tmp_path: Path) -> None:
    """So is /dev/null, which must never become a file."""
    path, pipe = saved(bare_tee(), tmp_path), tmp_path / "pipe"
    os.mkfifo(pipe)
    reader = os.open(pipe, os.O_RDONLY | os.O_NONBLOCK)
    try:
        assert main(["solve", str(path), "--csv", str(pipe)]) == 0
        assert pipe.is_fifo()
        assert os.read(reader, 1000).startswith(b"frequency_hz,return_loss_db")
    finally:
        os.close(reader)


# What is wrong is one line


@pytest.mark.parametrize(
    "words",
    [
        ["solve"],
        ["solve", "PLAN", "PLAN"],
        ["solve", "PLAN", "--nope"],
        ["solve", "PLAN", "--json"],
        ["solve", "PLAN", "--json", ""],
        ["solve", "PLAN", "--js", "OUT"],
        ["solve", "--json", "OUT"],
        ["picture"],
        ["picture", "PLAN"],
        ["picture", "PLAN", "--out"],
        ["picture", "--out", "OUT"],
        ["picture", "PLAN", "--out", "OUT", "--light"],
        ["PLAN", "PLAN"],
        ["--nope"],
        ["draw", "PLAN"],
    ],
)
def test_wrong_usage(tmp_path: Path, capsys: pytest.CaptureFixture[str], words: list[str]) -> None:
    """Nothing is written then."""
    path, out = saved(bare_tee(), tmp_path), tmp_path / "out"
    refused([{"PLAN": str(path), "OUT": str(out)}.get(word, word) for word in words], capsys)
    assert not out.exists()


PLAN_HEAD = '{"format": "feedwright-plan", "version": 1, "band": {"start_hz": 1e8, "stop_hz": 2e8}'


@pytest.mark.parametrize("verb", [["solve"], ["picture", "--out", "x.png"], []])
@pytest.mark.parametrize(
    ("content", "named"),
    [
        (b"", "JSON"),
        (b"\xff\xfe\x00", "UTF-8"),
        (b'{"format": "letter"}', "not a plan"),
        (PLAN_HEAD.replace("1,", "99,").encode() + b"}", "99"),
        (PLAN_HEAD.encode() + b', "parts": [{"id": "X", "kind": "magnet"}]}', "magnet"),
        (PLAN_HEAD.encode() + b', "joins": [["X:1", "Y:1"]]}', "X:1"),
        (PLAN_HEAD.encode() + b', "parts": [{"id": "X", "kind": "pad", "loss_db": -1}]}', '"X"'),
    ],
)
def test_a_bad_plan(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], verb: list[str], content: bytes, named: str
) -> None:
    """The sentence names the file and what is wrong in it."""
    path = tmp_path / "bad.feedplan"
    path.write_bytes(content)
    sentence = refused([*verb, str(path)], capsys)
    assert "bad.feedplan" in sentence
    assert named in sentence


@pytest.mark.parametrize("verb", [["solve"], ["picture", "--out", "x.png"], []])
@pytest.mark.parametrize("name", ["nothing.feedplan", ".", "two\nlines", "bytes \udcff"])
def test_a_plan_that_cannot_be_read(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], verb: list[str], name: str
) -> None:
    """A file that is not there, a folder, and names that no terminal can show."""
    assert "cannot be read" in refused([*verb, str(tmp_path / name)], capsys)


def unsolvable() -> dict[str, tuple[Sketch, str]]:
    """Plans that open and cannot be solved, and what the sentence must name."""
    no_radio, two_radios, no_cable, no_data = Sketch(), bare_tee(), bare_tee(), bare_tee()
    no_radio.antenna(50, "A")
    two_radios.add("radio", "second")
    no_cable.add("coax", "leg", cable="RG-0", length_m=1)
    no_data.add("antenna", "dish", impedance={"touchstone": {**ONE_PORT, "text": "# MHz S RI R 50\n150 0 0\n"}})
    return {
        "no radio": (no_radio, "radio"),
        "two radios": (two_radios, '"second"'),
        "no cable": (no_cable, '"leg"'),
        "no data": (no_data, '"dish"'),
    }


@pytest.mark.parametrize("why", list(unsolvable()))
def test_a_plan_that_cannot_be_solved(tmp_path: Path, capsys: pytest.CaptureFixture[str], why: str) -> None:
    """The part that stops it is named; a file that is there stays as it is."""
    sketch, named = unsolvable()[why]
    path, out = saved(sketch, tmp_path), tmp_path / "old.json"
    out.write_text("old")
    sentence = refused(["solve", str(path), "--json", str(out)], capsys)
    assert named in sentence
    assert "harness.feedplan" in sentence
    assert out.read_text() == "old"


@pytest.mark.parametrize("option", ["--json", "--csv", "--touchstone"])
@pytest.mark.parametrize("target", ["no such folder/out", "a folder"])
def test_an_output_that_cannot_be_written(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], option: str, target: str
) -> None:
    """The file that was asked for is named, and nothing half-written stays."""
    path = saved(bare_tee(), tmp_path)
    (tmp_path / "a folder").mkdir()
    assert str(tmp_path / target) in refused(["solve", str(path), option, str(tmp_path / target)], capsys)
    assert sorted(p.name for p in tmp_path.rglob("*")) == ["a folder", "harness.feedplan"]
