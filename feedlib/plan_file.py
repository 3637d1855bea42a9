"""Plan files: read strictly, written in one form, atomically. Knows the file's shape, not what parts mean."""

from __future__ import annotations

import contextlib
import json
import os
import tempfile
from collections.abc import Callable
from pathlib import Path
from types import MappingProxyType
from typing import Any

from feedlib.errors import FieldError, PlanError, quoted
from feedlib.parts import KINDS
from feedlib.plan import Band, Cable, Channel, Join, Limits, Placed, Plan, Sweep, read_port
from feedlib.schema import Json, number, read_record, record_json

FORMAT, VERSION = "feedwright-plan", 1
MAX_BYTES = 256 * 1024 * 1024
MIGRATIONS: dict[int, Callable[[dict[str, Json]], dict[str, Json]]] = {}
"""Version -> what makes the next version of it."""

PLAN_FIELDS = (
    "format", "version", "title", "notes", "band", "sweep", "channels", "reference_ohm", "limits", "cables", "parts",
    "joins",
)  # fmt: skip
PART_FIELDS = ("id", "kind", "at", "label", "note")


def read_plan(path: str | os.PathLike[str]) -> Plan:
    """The plan in a file; PlanError says in one sentence what is wrong and where."""
    try:
        size = os.path.getsize(path)
        if size > MAX_BYTES:
            raise PlanError(f"the file has {size / 1e6:.0f} MB; a plan has at most {MAX_BYTES / 1e6:.0f} MB")
        data = Path(path).read_bytes()
    except (OSError, ValueError) as error:
        if isinstance(error, PlanError):
            raise
        raise PlanError(f"{os.fspath(path)!r} cannot be read: {getattr(error, 'strerror', None) or error}") from None
    return parse_plan(data)


def parse_plan(data: bytes) -> Plan:
    """The plan in a file's bytes."""
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise PlanError(f"not a plan: byte {error.start} is not UTF-8 text") from None
    try:
        top = json.loads(text, object_pairs_hook=_object, parse_constant=_constant, parse_float=_float)
    except json.JSONDecodeError as error:
        raise PlanError(f"not JSON: line {error.lineno}, column {error.colno}: {error.msg}") from None
    except RecursionError:
        raise PlanError(TOO_DEEP) from None
    except PlanError:
        raise
    except ValueError:
        raise PlanError("not a plan: a number has too many digits") from None
    if not isinstance(top, dict) or top.get("format") != FORMAT:
        raise PlanError(f'not a plan: wants an object with "format": "{FORMAT}"')
    _refuse_odd(top)
    return _plan(_migrated(top))


MAX_DEPTH = 100
TOO_DEEP = f"not a plan: brackets are nested too deeply (at most {MAX_DEPTH})"


def _object(pairs: list[tuple[str, Json]]) -> dict[str, Json]:
    found: dict[str, Json] = {}
    for key, value in pairs:
        if key in found:
            raise PlanError(f"the key {quoted(key)} stands twice in one object")
        found[key] = value
    return found


def _float(text: str) -> float:
    value = float(text)
    if value in (float("inf"), float("-inf")):
        raise PlanError(f"{text[:40]} is a number beyond every range")
    return value


def _constant(name: str) -> Json:
    raise PlanError(f"{name} is not a number that a plan may hold")


def _refuse_odd(top: Json) -> None:
    """Refuse what could be read and not be written again: deep nesting, and half characters (lone surrogates)."""
    level = [top]
    for _ in range(MAX_DEPTH):
        inner: list[Json] = []
        for value in level:
            if isinstance(value, dict):
                inner.extend(value)
                inner.extend(value.values())
            elif isinstance(value, list):
                inner.extend(value)
            elif isinstance(value, str) and not value.isascii() and any("\ud800" <= c <= "\udfff" for c in value):
                raise PlanError(f"the text {quoted(value)} holds half a character (a lone surrogate)")
        if not inner:
            return
        level = inner
    raise PlanError(TOO_DEEP)


def _migrated(top: dict[str, Json]) -> dict[str, Json]:
    version = top.get("version")
    if isinstance(version, bool) or not isinstance(version, int) or version < 1:
        raise PlanError(f"wants a whole number from 1 to {VERSION}", field="version")
    if version > VERSION:
        raise PlanError(
            f"the plan is of version {quoted(str(version))}; this program reads up to {VERSION}", field="version"
        )
    while version < VERSION:
        top = MIGRATIONS[version](top)
        version += 1
    return top


def _plan(top: dict[str, Json]) -> Plan:
    if "band" not in top:
        raise PlanError("is missing", field="band")
    sweep, channels = top.get("sweep"), _list(top.get("channels", []), "channels")
    return Plan(
        title=_text(top.get("title", ""), "title"),
        notes=_text(top.get("notes", ""), "notes"),
        band=read_record(Band, top["band"], "band"),
        sweep=None if sweep is None else read_record(Sweep, sweep, "sweep"),
        channels=tuple(read_record(Channel, c, f"channels[{n}]") for n, c in enumerate(channels)),
        reference_ohm=number(top.get("reference_ohm", 50), "reference_ohm"),
        limits=read_record(Limits, top.get("limits", {}), "limits"),
        cables=MappingProxyType(
            {
                name: read_record(Cable, c, f"cables {quoted(name)}")
                for name, c in _dict(top.get("cables", {}), "cables").items()
            }
        ),
        parts=tuple(_placed(p, n) for n, p in enumerate(_list(top.get("parts", []), "parts"))),
        joins=tuple(_join(j) for j in _list(top.get("joins", []), "joins")),
        extra={key: value for key, value in top.items() if key not in PLAN_FIELDS},
    )


def _placed(data: Json, n: int) -> Placed:
    if not isinstance(data, dict) or not isinstance(data.get("id"), str):
        raise PlanError('wants an object with an "id"', field=f"parts[{n}]")
    part_id = data["id"]
    kind = data.get("kind")
    if not isinstance(kind, str) or kind not in KINDS:
        raise PlanError(f"wants one of {', '.join(KINDS)}, got {quoted(str(kind))}", part=part_id, field="kind")
    try:
        at = data.get("at", [0, 0])
        if not isinstance(at, list) or len(at) != 2:
            raise FieldError("at", "wants two numbers in brackets")
        return Placed(
            id=part_id,
            part=read_record(KINDS[kind], data, skip=PART_FIELDS),
            at=(number(at[0], "at"), number(at[1], "at")),
            label=_text(data.get("label", ""), "label"),
            note=_text(data.get("note", ""), "note"),
        )
    except FieldError as error:
        raise PlanError(error.reason, part=part_id, field=error.field) from None


def _join(data: Json) -> Join:
    if not isinstance(data, list) or len(data) != 2 or not all(isinstance(p, str) for p in data):
        raise PlanError('wants two ports, like ["T1:2", "leg A:1"]', field="joins")
    return read_port(data[0]), read_port(data[1])


def _text(value: Json, where: str) -> str:
    if not isinstance(value, str):
        raise FieldError(where, "wants text")
    return value


def _list(value: Json, where: str) -> list[Json]:
    if not isinstance(value, list):
        raise FieldError(where, "wants a list")
    return value


def _dict(value: Json, where: str) -> dict[str, Json]:
    if not isinstance(value, dict):
        raise FieldError(where, "wants an object")
    return value


def write_plan(plan: Plan, path: str | os.PathLike[str]) -> None:
    """Write the plan atomically: after a crash at any point the old file or the new one is there, never half."""
    write_atomically(path, format_plan(plan).encode())


def write_atomically(path: str | os.PathLike[str], data: bytes) -> None:
    """Put `data` at `path` in one step (OSError when that fails; the old file is then untouched).

    A pipe or a device is written to as it is; it must not be replaced by a file.
    """
    if os.path.exists(path) and not os.path.isfile(path):
        Path(path).write_bytes(data)
        return
    target = Path(os.path.realpath(path))
    handle, name = tempfile.mkstemp(prefix=".saving-", suffix=".part", dir=target.parent)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        _copy_mode(target, Path(name))
        os.replace(name, target)
    except BaseException:
        with contextlib.suppress(OSError):
            os.unlink(name)
        raise
    with contextlib.suppress(OSError):  # some file systems cannot sync a folder; the file itself is safe
        folder = os.open(target.parent, os.O_RDONLY)
        try:
            os.fsync(folder)
        finally:
            os.close(folder)


def _copy_mode(old: Path, new: Path) -> None:
    """Keep the permissions of the file that is replaced; a new file gets the usual ones."""
    try:
        mode = old.stat().st_mode & 0o777
    except OSError:
        mask = os.umask(0)
        os.umask(mask)
        mode = 0o666 & ~mask
    os.chmod(new, mode)


def format_plan(plan: Plan) -> str:
    """The written form: indent 2, one part, join, cable or small object a line."""
    top: dict[str, str] = {
        "format": _line(FORMAT),
        "version": _line(VERSION),
        "title": _line(plan.title),
        "notes": _line(plan.notes),
        "band": _line(record_json(plan.band)),
    }
    if plan.sweep is not None:
        top["sweep"] = _line(record_json(plan.sweep))
    if plan.channels:
        top["channels"] = _lines([_line(record_json(c)) for c in plan.channels], "[]")
    top["reference_ohm"] = _line(plan.reference_ohm)
    top["limits"] = _line(record_json(plan.limits))
    top["cables"] = _lines([f"{_line(name)}: {_line(record_json(c))}" for name, c in plan.cables.items()], "{}")
    top["parts"] = _lines([_line(placed_json(p)) for p in plan.parts], "[]")
    top["joins"] = _lines([_line([str(a), str(b)]) for a, b in plan.joins], "[]")
    top.update({key: _line(value) for key, value in plan.extra.items()})
    return "{\n" + ",\n".join(f"  {_line(key)}: {text}" for key, text in top.items()) + "\n}\n"


def placed_json(placed: Placed) -> dict[str, Json]:
    """A part as the file writes it: id, kind, its fields, its place, then what is not known."""
    own = {k: v for k, v in record_json(placed.part).items() if k not in placed.part.extra}
    out: dict[str, Json] = {"id": placed.id, "kind": placed.part.KIND, **own, "at": list(placed.at)}
    if placed.label:
        out["label"] = placed.label
    if placed.note:
        out["note"] = placed.note
    return {**out, **placed.part.extra}


def _lines(entries: list[str], brackets: str) -> str:
    if not entries:
        return brackets
    return brackets[0] + "\n" + ",\n".join(f"    {e}" for e in entries) + "\n  " + brackets[1]


def _line(value: Any) -> str:
    """One line of JSON with the shortest numbers that read back the same."""
    if isinstance(value, dict):
        return "{" + ", ".join(f"{_line(k)}: {_line(v)}" for k, v in value.items()) + "}"
    if isinstance(value, list | tuple):
        return "[" + ", ".join(_line(v) for v in value) + "]"
    if isinstance(value, float):
        return format_number(value)
    return json.dumps(value, ensure_ascii=False)


def format_number(value: float) -> str:
    """Shortest text that reads back the same; whole numbers without a point, no minus zero."""
    text = repr(value)
    if text.endswith(".0"):
        text = text[:-2]
    elif "." in text and value.is_integer():
        text = str(int(value))
    return "0" if text == "-0" else text
