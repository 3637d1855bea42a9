"""From the types of a record's fields to their editors: the one place where an editor is chosen."""

from __future__ import annotations

import functools
import types
import typing
from collections.abc import Callable, Mapping
from dataclasses import replace
from typing import Any, Literal

from app.panels.around import Around
from app.panels.cable_editor import CableEditor
from app.panels.editors import (
    ChoiceEditor,
    Editor,
    ImpedanceEditor,
    QuantityEditor,
    TextEditor,
    WholeEditor,
)
from app.panels.file_editor import FileEditor
from app.panels.forms import ChosenEditor, EachEditor, OptionalEditor, RecordEditor, RecordForm
from app.panels.length_editor import LengthEditor
from feedlib.parts import AntennaImpedance, CoaxEnd, Resonant, TouchstoneText
from feedlib.plan import Sweep
from feedlib.schema import Record, Spec, specs

FIRST_END_M = 0.005
FIRST_Q = 10.0


def form_for(cls: type[Record]) -> RecordForm:
    """A form with an editor for every described field of a record that has no row of its own."""
    hints = _hints(cls)
    shown = {name: spec for name, spec in specs(cls).items() if name not in _ELSEWHERE}
    return RecordForm(cls, {name: editor_for(name, hints[name], spec) for name, spec in shown.items()})


def editor_for(name: str, hint: Any, spec: Spec) -> Editor:
    """The editor for a field of that name and type."""
    optional = type(None) in typing.get_args(hint)
    if typing.get_origin(hint) in (typing.Union, types.UnionType):
        hint = next(a for a in typing.get_args(hint) if a is not type(None))
    if typing.get_origin(hint) is Literal:
        return ChoiceEditor(spec.label, {word: word.replace("_", " ") for word in typing.get_args(hint)})
    if typing.get_origin(hint) is tuple:
        return EachEditor(spec.label.removesuffix("s"), tuple(_entry(h) for h in typing.get_args(hint)))
    if hint is AntennaImpedance:
        return WayEditor(spec.label)
    if hint is TouchstoneText:
        return FileEditor(spec.label)
    if isinstance(hint, type) and issubclass(hint, Record):
        return optional_editor(spec.label, hint) if optional else RecordEditor(spec.label, form_for(hint))
    if name in _NAMED:
        return _NAMED[name](spec.label)
    look: dict[str, Any] = {"optional": optional, "hint": spec.hint[:1].upper() + spec.hint[1:]}
    if optional:
        look["placeholder"] = "none"
    if hint is float:
        return LengthEditor(spec.label, **look) if spec.unit == "m" else QuantityEditor(spec.label, spec.unit, **look)
    return _SCALARS[hint](spec.label, **look)


class WayEditor(ChosenEditor):
    """An antenna's impedance in one of the three ways to give it."""

    def __init__(self, label: str) -> None:
        super().__init__(label, {"fixed_ohm": "fixed", "resonant": "resonant", "touchstone": "measured file"})

    def chosen(self, value: Any) -> Any:
        return next(name for name in specs(AntennaImpedance) if getattr(value, name) is not None)

    def inner(self, which: Any, value: Any) -> Any:
        return getattr(value, which)

    def outer(self, which: Any, inner: Any) -> Any:
        return AntennaImpedance(**{which: inner}, extra=self._value.extra)

    def starter(self, which: Any, around: Around) -> Any:
        fixed_ohm = self._value.fixed_ohm
        if which == "fixed_ohm":
            return complex(around.plan.reference_ohm)
        if which == "resonant":
            r_ohm = around.plan.reference_ohm if fixed_ohm is None else fixed_ohm.real
            return Resonant(r_ohm=r_ohm, f0_hz=around.frequency_hz, q=FIRST_Q)
        return None

    def make(self, which: Any) -> Editor:
        spec = specs(AntennaImpedance)[which]
        # None says "given in another way" here, so no field of a way may be left empty.
        bare = typing.get_args(_hints(AntennaImpedance)[which])[0]
        return editor_for(which, bare, replace(spec, label="Value") if which == "fixed_ohm" else spec)


def _entry(hint: Any) -> ChosenEditor:
    return optional_editor("", next(a for a in typing.get_args(hint) if a is not type(None)))


def optional_editor(label: str, cls: type[Record]) -> OptionalEditor:
    """The editor of a record that may be there or not."""
    words, starter = _OPTIONAL[cls]
    return OptionalEditor(label, words, make=functools.partial(form_for, cls), starter=starter)


def _first_end(around: Around) -> CoaxEnd:
    cable = around.cable
    z0_ohm, velocity_factor = (cable.z0_ohm, cable.velocity_factor) if cable else (50.0, 0.7)
    return CoaxEnd(z0_ohm=z0_ohm, velocity_factor=velocity_factor, length_m=FIRST_END_M)


def _first_sweep(around: Around) -> Sweep:
    band = around.plan.band
    margin_hz = (band.stop_hz - band.start_hz) or band.start_hz / 100
    low_hz = max(band.start_hz - margin_hz, band.start_hz / 2)
    return Sweep(start_hz=low_hz, stop_hz=band.stop_hz + margin_hz)


_OPTIONAL: dict[type[Record], tuple[str, Callable[[Around], Record]]] = {
    CoaxEnd: ("a section", _first_end),
    Sweep: ("wider", _first_sweep),
}
"""Records that may be there or not: the word for "there", and how each begins."""

_NAMED: Mapping[str, Callable[[str], Editor]] = {"cable": CableEditor}
"""Texts that name something of the plan."""

_ELSEWHERE = {"matched_set"}
"""Fields of one part that are changed together with other parts, in rows of their own."""

_SCALARS: Mapping[Any, Callable[..., Editor]] = {int: WholeEditor, complex: ImpedanceEditor, str: TextEditor}


def _hints(cls: type[Record]) -> Mapping[str, Any]:
    return typing.get_type_hints(cls)
