"""Records and their fields: one description of a field feeds reading, checking, writing and the part card.

A record is a frozen dataclass whose fields are made by `field`. What a file holds besides the known fields is kept
in `extra`. Knows nothing of parts, plans or files.
"""

from __future__ import annotations

import dataclasses
import functools
import math
import types
import typing
from collections.abc import Mapping
from typing import Any, Literal, TypeVar, cast

from feedlib.errors import FieldError, quoted

Json = Any
"""What the JSON reader gives: dict, list, str, int, float, bool or None."""


@dataclasses.dataclass(frozen=True, slots=True)
class Spec:
    """What a field means: label and unit for people, the allowed range, and what may be left unwritten."""

    label: str
    unit: str = ""
    hint: str = ""
    low: float | None = None
    above: float | None = None
    high: float | None = None
    omit_default: bool = False

    def why_not(self, value: float) -> str | None:
        """The sentence that says what is wrong with a number, or None."""
        if not math.isfinite(value):
            return f"wants a finite number, got {value}"
        holds = (
            (self.low is None or value >= self.low)
            and (self.above is None or value > self.above)
            and (self.high is None or value <= self.high)
        )
        return None if holds else f"wants {self.range_text()}, got {value:.12g}"

    def range_text(self) -> str:
        """The allowed range in words."""
        bounds = []
        if self.above is not None:
            bounds.append(f"more than {self.above:g}")
        if self.low is not None:
            bounds.append(f"at least {self.low:g}")
        if self.high is not None:
            bounds.append(f"at most {self.high:g}")
        unit = f" in {self.unit}" if self.unit else ""
        return f"a number{unit}, " + " and ".join(bounds) if bounds else f"a number{unit}"


def field(
    label: str,
    *,
    default: Any = dataclasses.MISSING,
    unit: str = "",
    hint: str = "",
    low: float | None = None,
    above: float | None = None,
    high: float | None = None,
    omit_default: bool = False,
) -> Any:
    """A dataclass field with its `Spec`."""
    spec = Spec(label, unit, hint, low, above, high, omit_default)
    if isinstance(default, Record | Mapping):
        return dataclasses.field(default_factory=lambda: default, metadata={"spec": spec})
    return dataclasses.field(default=default, metadata={"spec": spec})


@dataclasses.dataclass(frozen=True, slots=True, kw_only=True)
class Record:
    """Base of everything that a plan file holds as an object.

    extra : the object's fields that this version does not know, in the order read.
    """

    extra: Mapping[str, Json] = dataclasses.field(default_factory=dict)

    def __post_init__(self) -> None:
        """Check every number's range; records with rules across fields extend this."""
        for name, spec in specs(type(self)).items():
            value = getattr(self, name)
            if isinstance(value, int | float) and not isinstance(value, bool):
                reason = spec.why_not(value)
                if reason:
                    raise FieldError(name, reason)
            elif isinstance(value, complex):
                reason = spec.why_not(value.real)
                if reason is None and not math.isfinite(value.imag):
                    reason = f"wants a finite reactance, got {value.imag}"
                if reason:
                    raise FieldError(name, reason)


R = TypeVar("R", bound=Record)


def specs(cls: type[Record]) -> Mapping[str, Spec]:
    """The described fields of a record, in written order."""
    found: Any = cls  # mypy takes a class of records for something that cannot be hashed
    return _specs(found)


@functools.cache
def _specs(cls: Any) -> Mapping[str, Spec]:
    return {f.name: f.metadata["spec"] for f in dataclasses.fields(cls) if "spec" in f.metadata}


@functools.cache
def _types(cls: Any) -> Mapping[str, Any]:
    return typing.get_type_hints(cls)


@functools.cache
def _required(cls: Any) -> frozenset[str]:
    return frozenset(
        f.name
        for f in dataclasses.fields(cls)
        if f.default is dataclasses.MISSING and f.default_factory is dataclasses.MISSING
    )


def read_record(cls: type[R], data: Json, where: str = "", skip: tuple[str, ...] = ()) -> R:
    """A record from a JSON object; unknown fields go to `extra`.

    Raises FieldError whose field is the path from `where` down. skip : keys that somebody else has read.
    """
    if not isinstance(data, dict):
        raise FieldError(where, f"wants an object, got {_kind(data)}")
    prefix = f"{where}." if where else ""
    fields, record = specs(cls), cast(Any, cls)
    types, required = _types(record), _required(record)
    known: dict[str, Any] = {}
    extra: dict[str, Json] = {}
    for key, value in data.items():
        if key in fields:
            known[key] = _value(types[key], value, prefix + key)
        elif key not in skip:
            extra[key] = value
    for name, spec in fields.items():
        if name in required and name not in known:
            raise FieldError(prefix + name, f"is missing ({spec.label.lower()})")
    try:
        return cls(**known, extra=extra)
    except FieldError as error:
        raise FieldError(prefix + error.field if error.field else where, error.reason) from None


def record_json(record: Record) -> dict[str, Json]:
    """The JSON object of a record: known fields in order, then the unknown ones."""
    out: dict[str, Json] = {}
    for name, spec in specs(type(record)).items():
        value = getattr(record, name)
        if value is None or (spec.omit_default and value == default_of(cast(Any, type(record)), name)):
            continue
        out[name] = _json(value)
    out.update(record.extra)
    return out


@functools.cache
def default_of(cls: Any, name: str) -> Any:
    """The default of a field."""
    found = next(f for f in dataclasses.fields(cls) if f.name == name)
    return found.default_factory() if found.default_factory is not dataclasses.MISSING else found.default


def _json(value: Any) -> Json:
    if isinstance(value, Record):
        return record_json(value)
    if isinstance(value, complex):
        return [value.real, value.imag]
    if isinstance(value, tuple):
        return [_json(v) for v in value]
    if isinstance(value, Mapping):
        return {k: _json(v) for k, v in value.items()}
    return value


def number(value: Json, where: str) -> float:
    """A JSON number as float; FieldError for anything else (true, "0.3", NaN, 1e400 ...)."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise FieldError(where, f"wants a number, got {_kind(value)}")
    try:
        as_float = float(value)
    except OverflowError:
        raise FieldError(where, "is a number beyond every range") from None
    if not math.isfinite(as_float):
        raise FieldError(where, "wants a finite number")
    return as_float


def _pair(value: Json, where: str) -> tuple[float, float]:
    if not isinstance(value, list) or len(value) != 2:
        raise FieldError(where, f"wants two numbers in brackets, got {_kind(value)}")
    return number(value[0], where), number(value[1], where)


def _value(hint: Any, value: Json, where: str) -> Any:
    """A JSON value as the hinted type."""
    origin = typing.get_origin(hint)
    if origin in (typing.Union, types.UnionType):
        choices = [a for a in typing.get_args(hint) if a is not type(None)]
        return _value(choices[0], value, where)
    if hint is float:
        return number(value, where)
    if hint is int:
        as_float = number(value, where)
        if not as_float.is_integer():
            raise FieldError(where, f"wants a whole number, got {value}")
        return int(as_float)
    if hint is complex:
        return complex(*_pair(value, where))
    if hint is str:
        if not isinstance(value, str):
            raise FieldError(where, f"wants text, got {_kind(value)}")
        return value
    if origin is Literal:
        if not isinstance(value, str) or value not in typing.get_args(hint):
            wants = ", ".join(repr(c) for c in typing.get_args(hint))
            raise FieldError(where, f"wants one of {wants}, got {_kind(value)}")
        return value
    if origin is tuple:
        return _tuple(typing.get_args(hint), value, where)
    if isinstance(hint, type) and issubclass(hint, Record):
        return read_record(hint, value, where)
    raise TypeError(f"no reader for {hint}")


def _tuple(hints: tuple[Any, ...], value: Json, where: str) -> tuple[Any, ...]:
    """A JSON list as a tuple; an entry whose hint allows None may be null."""
    if hints == (float, float):
        return _pair(value, where)
    if not isinstance(value, list):
        raise FieldError(where, f"wants a list, got {_kind(value)}")
    if hints[-1] is Ellipsis:
        hints = (hints[0],) * len(value)
    if len(value) != len(hints):
        raise FieldError(where, f"wants {len(hints)} entries, got {len(value)}")
    return tuple(
        None if v is None and type(None) in typing.get_args(h) else _value(h, v, f"{where}[{n}]")
        for n, (h, v) in enumerate(zip(hints, value, strict=True))
    )


def _kind(value: Json) -> str:
    """What was found, short enough for a sentence."""
    if value is None:
        return "null"
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return quoted(value)
    if isinstance(value, list):
        return f"a list of {len(value)}"
    if isinstance(value, dict):
        return "an object"
    return f"{str(value)[:40]}"
