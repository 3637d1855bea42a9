"""The command line: the window, and verbs that need no screen. Bad input is one line on stderr and exit code 2."""

from __future__ import annotations

import argparse
import csv
import io
import json
import math
import sys
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any, NoReturn

import numpy as np

from app.editing.edits import plain_text
from feedlib import Answer, FeedError, Figures, Plan, PlanError, SolveError, check, read_plan, solve
from feedlib.answer import JUDGED
from feedlib.errors import quoted
from feedlib.plan_file import write_atomically
from feedlib.schema import specs
from feedlib.touchstone_write import write_touchstone

VERBS = ("solve", "picture")


class Refused(Exception):
    """What the command line cannot do, in one sentence."""


class _Parser(argparse.ArgumentParser):
    def __init__(self, **words: Any) -> None:
        super().__init__(**words, allow_abbrev=False)  # an option's short form would have to stay for ever

    def error(self, message: str) -> NoReturn:
        raise Refused(message)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns the exit code."""
    words = list(sys.argv[1:] if arguments is None else arguments)
    if isinstance(sys.stdout, io.TextIOWrapper):
        sys.stdout.reconfigure(errors="replace")  # a title may hold any letter, a terminal may not
    try:
        if words and words[0] in VERBS:
            return _solve(words[1:]) if words[0] == "solve" else _picture(words[1:])
        return _window(words)
    except (Refused, FeedError) as error:
        sentence = str(error)
    except OSError as error:
        sentence = f"{error.filename or 'the file'}: {error.strerror or error}"
    print("feedwright: " + plain_text(" ".join(sentence.split())), file=sys.stderr)
    return 2


def _solve(words: Sequence[str]) -> int:
    parser = _Parser(prog="feedwright solve", description="Solve a plan; exit code 0 when every limit holds, 1 if not.")
    parser.add_argument("plan", metavar="PLAN")
    parser.add_argument("--json", metavar="FILE", help="all figures")
    parser.add_argument("--with-s", action="store_true", help="the harness S-parameters in the JSON file as well")
    parser.add_argument("--touchstone", metavar="FILE", help="the harness S-parameters")
    parser.add_argument("--csv", metavar="FILE", help="the figures over frequency as a table")
    options = parser.parse_args(words)
    plan = _read(options.plan)
    try:
        answer = solve(plan)
    except SolveError as error:
        raise Refused(f"{_shown(options.plan)}: {error}") from None
    if options.json is not None:
        _write(options.json, json.dumps(answer_json(answer, with_s=options.with_s), indent=1) + "\n")
    if options.touchstone is not None:
        _write(options.touchstone, _touchstone(answer))
    if options.csv is not None:
        _write(options.csv, _csv(answer))
    print(_summary(answer))
    for problem in check(plan):
        print(f"note: {problem.part_id or 'plan'}: {problem.text}")
    return 0 if answer.holds else 1


def _read(path: str) -> Plan:
    try:
        return read_plan(path)
    except PlanError as error:
        sentence = str(error)
        raise Refused(sentence if repr(path) in sentence else f"{_shown(path)}: {sentence}") from None


def _write(path: str, content: str | bytes) -> None:
    try:
        write_atomically(path, content.encode() if isinstance(content, str) else content)
    except OSError as error:
        raise Refused(f"{_shown(path)} cannot be written: {error.strerror or error}") from None


def _shown(path: str) -> str:
    return quoted(path, 4096)


def _summary(answer: Answer) -> str:
    plan, mark = answer.plan, answer.mark
    band = f"{plan.band.start_hz / 1e6:.12g} to {plan.band.stop_hz / 1e6:.12g} MHz"
    names = specs(type(plan.limits))
    lines = [f"{plan.title or 'untitled'}: {len(plan.parts)} parts, {len(answer.antenna_ids)} antennas, {band}"]
    for v in answer.verdicts:
        spec, sign = names[v.limit], ">=" if JUDGED[v.limit] else "<="
        lines.append(
            f"{'holds' if v.holds else 'FAILS'}  {spec.label.lower():18s} {v.worst:8.3f} {spec.unit}"
            f" at {v.frequency_hz / 1e6:.6g} MHz (wants {sign} {v.wanted:g})"
        )
    lines.append(f"at {plan.band.marked_hz / 1e6:.6g} MHz: return loss {mark.return_loss_db[0]:.2f} dB")
    for n, name in enumerate(answer.antenna_ids):
        current = complex(mark.antenna_current_a[0, n])
        phase = math.degrees(math.atan2(current.imag, current.real))
        share = 100 * float(mark.antenna_share[0, n])
        lines.append(f"  {name}: {share:.2f} % of the power, {abs(current):.4g} A at {phase:+.2f} deg")
    return "\n".join(map(plain_text, lines))


FIGURES = (
    "frequency_hz", "antenna_current_a", "antenna_voltage_v", "antenna_share", "return_loss_db", "reflected_share",
    "amplitude_balance_db", "phase_balance_deg", "harness_loss_db", "part_loss_share", "port_impedance_ohm",
)  # fmt: skip


def answer_json(answer: Answer, *, with_s: bool) -> dict[str, Any]:
    """The answer under the names of its attributes; complex as [re, im], inf and nan as null."""
    out: dict[str, Any] = {"antenna_ids": list(answer.antenna_ids), "harness_ports": list(answer.harness_ports)}
    out |= _figures_json(answer, with_s)
    out["mark"] = _figures_json(answer.mark, with_s)
    out["channels"] = {name: _figures_json(figures, with_s) for name, figures in answer.channels.items()}
    out["verdicts"] = [
        {
            "limit": v.limit,
            "wanted": v.wanted,
            "worst": _plain(v.worst),
            "frequency_hz": v.frequency_hz,
            "holds": v.holds,
        }
        for v in answer.verdicts
    ]
    return out


def _figures_json(figures: Figures, with_s: bool) -> dict[str, Any]:
    names = (*FIGURES, "harness_s") if with_s else FIGURES
    return {name: _plain(getattr(figures, name)) for name in names}


def _plain(value: Any) -> Any:
    if isinstance(value, Mapping):
        return {key: _plain(v) for key, v in value.items()}
    if isinstance(value, np.ndarray):
        if np.iscomplexobj(value):
            value = np.stack([value.real, value.imag], axis=-1)
            lost = ~np.isfinite(value).all(axis=-1)
            pairs = value.astype(object)
            return _with_null(pairs.tolist(), lost.tolist())
        return _with_null(value.tolist(), (~np.isfinite(value)).tolist())
    return value if math.isfinite(value) else None


def _with_null(value: Any, lost: Any) -> Any:
    """The nested lists with null where `lost` says so."""
    if isinstance(lost, list):
        return [_with_null(v, gone) for v, gone in zip(value, lost, strict=True)]
    return None if lost else value


def _touchstone(answer: Answer) -> str:
    comments = [f"ports: {', '.join(answer.harness_ports)}"]
    return write_touchstone(answer.frequency_hz, answer.harness_s, answer.plan.reference_ohm, comments)


def _csv(answer: Answer) -> str:
    names = ["return_loss_db", "reflected_share", "amplitude_balance_db", "phase_balance_deg", "harness_loss_db"]
    columns: dict[str, Any] = {"frequency_hz": answer.frequency_hz} | {n: getattr(answer, n) for n in names}
    for n, antenna in enumerate(answer.antenna_ids):
        current = answer.antenna_current_a[:, n]
        columns[f"{antenna} share"] = answer.antenna_share[:, n]
        columns[f"{antenna} current_a"] = np.abs(current)
        columns[f"{antenna} phase_deg"] = np.degrees(np.angle(current))
    text = io.StringIO(newline="")
    table = csv.writer(text)
    table.writerow(columns)
    table.writerows(zip(*(c.tolist() for c in columns.values()), strict=True))
    return text.getvalue()


def _picture(words: Sequence[str]) -> int:
    parser = _Parser(prog="feedwright picture", description="Draw the window as it would be shown.")
    parser.add_argument("plan", metavar="PLAN")
    parser.add_argument("--out", metavar="FILE.png", required=True)
    parser.add_argument("--size", metavar="WxH", default="1600x1000", type=_size)
    parser.add_argument("--dark", action="store_true")
    options = parser.parse_args(words)
    plan = _read(options.plan)
    from app.screen import why_no_qt

    reason = why_no_qt()
    if reason is not None:
        raise Refused(reason)
    from app.run import draw_picture

    _write(options.out, draw_picture(plan, Path(options.plan), options.size, dark=options.dark))
    return 0


def _size(text: str) -> tuple[int, int]:
    width, _, height = text.partition("x")
    if not (width.isascii() and width.isdigit() and height.isascii() and height.isdigit()):
        raise argparse.ArgumentTypeError(f"wants a size like 1600x1000, got {text!r}")
    size = int(width[:6]), int(height[:6])
    if not (900 <= size[0] <= 8000 and 600 <= size[1] <= 8000):
        raise argparse.ArgumentTypeError(f"wants 900x600 (the least window) to 8000x8000, got {text!r}")
    return size


def _window(words: Sequence[str]) -> int:
    parser = _Parser(
        prog="feedwright",
        description="Feed several antennas from one radio through coax.",
        epilog="Verbs that need no screen: feedwright solve PLAN; feedwright picture PLAN --out FILE.png",
    )
    parser.add_argument("plan", metavar="PLAN", nargs="?")
    options = parser.parse_args(words)
    path = Path(options.plan) if options.plan is not None else None
    plan = _read(options.plan) if options.plan is not None else None
    from app.screen import why_no_window

    reason = why_no_window()
    if reason is not None:
        raise Refused(reason)
    from app.run import run_window

    return run_window(plan, path)
