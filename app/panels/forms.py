"""Forms: the fields of one record together, and the editors of records within records. Know no kinds of part.

What a form offers has passed the record's own rules. A value that only another field stands against is kept in mind
and tried again with the next entry, so that two fields which must change together can be written one after the other.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from dataclasses import replace
from functools import partial
from typing import Any

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QVBoxLayout, QWidget

from app.editing.wording import format_frequency
from app.look import SIGNS
from app.panels.around import Around
from app.panels.editors import ChoiceEditor, Editor
from app.panels.style import plain_label, set_text
from app.panels.tab_order import tab_through
from feedlib.errors import FieldError, PlanError
from feedlib.schema import Record, specs

_MANY_HERTZ = re.compile(r"\b\d{4,}(\.\d+)?\b")


def refusal(error: PlanError, cls: type[Record]) -> str:
    """The sentence of an error, with labels in place of the fields' names in the file."""
    labels = {name: spec.label for name, spec in specs(cls).items()}
    words = re.compile(r"\b(" + "|".join(map(re.escape, labels)) + r")\b") if labels else re.compile(r"(?!)")
    reason = words.sub(lambda found: labels[found[0]].lower(), error.reason).replace("_", " ")
    field = (error.field or "").split(".")[0]
    if field in labels and specs(cls)[field].unit == "Hz":
        reason = _MANY_HERTZ.sub(lambda found: format_frequency(float(found[0])), reason)
    if field in labels and reason.startswith(("wants ", "is ")):
        reason = f"{labels[field]} {reason}"
    return reason[:1].upper() + reason[1:].rstrip(".") + "."


class RecordForm(QWidget):
    """The fields of a record. `entered`(changes by field name, turned)."""

    entered = Signal(object, bool)

    def __init__(self, cls: type[Record], editors: Mapping[str, Editor]) -> None:
        super().__init__()
        self.editors = dict(editors)
        self._cls = cls
        self._record: Record | None = None
        self._waiting: dict[str, Any] = {}
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(8)
        for name, editor in editors.items():
            layout.addWidget(editor)
            editor.entered.connect(partial(self._entered, name))
            editor.dropped.connect(self._dropped)
        self._fault = plain_label(role="fault")
        self._fault.hide()
        layout.addWidget(self._fault)
        self._layout = layout

    def put_after(self, name: str, widget: QWidget) -> None:
        """Let something stand under a field."""
        self._layout.insertWidget(self._layout.indexOf(self.editors[name]) + 1, widget)

    def fill(self, record: Record, around: Around) -> None:
        """Show a record's values."""
        for name in [n for n in self._waiting if getattr(record, n) != getattr(self._record, n)]:
            del self._waiting[name]
        if record != self._record and not self._waiting:
            self._fault.hide()
        self._record = record
        inside = around.inside(record)
        for name, editor in self.editors.items():
            editor.fill(getattr(record, name), inside)

    def restore(self) -> None:
        """Show the plan's values again in every field."""
        self._waiting = {}
        self._fault.hide()
        for editor in self.editors.values():
            editor.restore()

    def refuse(self, error: PlanError, at: str) -> None:
        """Show why a change was not taken: at the field that the error names, else at the one just written."""
        field = (error.field or "").split(".")[0]
        place = self.editors.get(field if field in self.editors else at)
        sentence = refusal(error, self._cls)
        if place is not None and (field or len(self.editors) == 1):
            place.refuse(sentence)
        else:
            set_text(self._fault, f"{SIGNS['fails']} {sentence}")
            self._fault.show()

    def set_group(self, group: str) -> None:
        """Name what the record is, for those who hear it."""
        for editor in self.editors.values():
            editor.set_group(group)

    def _entered(self, name: str, value: Any, turned: bool) -> None:
        assert self._record is not None
        together = {**self._waiting, name: value}
        self._fault.hide()
        try:
            replace(self._record, **together)
        except FieldError as error:
            if self._holds_alone(name, value):
                self.entered.emit({name: value}, turned)
                return
            if not _out_of_range(self._cls, name, value):
                self._waiting = together
                self.editors[name].hold()
            self.refuse(error, name)
            return
        self._waiting = {}
        self.entered.emit(together, turned)

    def _holds_alone(self, name: str, value: Any) -> bool:
        """Whether a value can be taken while others go on waiting."""
        assert self._record is not None
        try:
            replace(self._record, **{name: value})
        except FieldError:
            return False
        return name not in self._waiting

    def _dropped(self) -> None:
        """Esc in one field gives up what waits in others too."""
        if self._waiting:
            self.restore()


class RecordEditor(Editor):
    """A record that is always there, such as an antenna's wanted current."""

    def __init__(self, label: str, form: RecordForm) -> None:
        super().__init__()
        self._form, self._label = form, label
        self._record: Record | None = None
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(form)
        form.set_group(label)
        form.entered.connect(self._entered)

    def fill(self, value: Any, around: Around) -> None:
        self._record = value
        self._form.fill(value, around)

    def refuse(self, sentence: str) -> None:
        self._form.refuse(PlanError(sentence), "")

    def restore(self) -> None:
        self._form.restore()

    def set_group(self, group: str) -> None:
        self._form.set_group(_named(group, self._label))

    def _entered(self, changes: Mapping[str, Any], turned: bool) -> None:
        assert self._record is not None
        self.entered.emit(replace(self._record, **changes), turned)


class ChosenEditor(Editor):
    """A choice, and under it the editor of what is chosen; the choice None is "not there"."""

    def __init__(self, label: str, words: Mapping[Any, str]) -> None:
        super().__init__()
        self.choice = ChoiceEditor(label, words)
        self._label, self._group = label, ""
        self._editors: dict[Any, Editor] = {}
        self._value: Any = None
        self._around: Around | None = None
        self._waiting: Any = None
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(6)
        self._layout.addWidget(self.choice)
        self.choice.entered.connect(self._choose)
        self.choice.dropped.connect(self.restore)

    def chosen(self, value: Any) -> Any:
        """Which choice a value is."""
        raise NotImplementedError

    def inner(self, which: Any, value: Any) -> Any:
        """What the choice's own editor shows of a value."""
        raise NotImplementedError

    def outer(self, which: Any, inner: Any) -> Any:
        """The value that is made of what the choice's own editor gave."""
        raise NotImplementedError

    def starter(self, which: Any, around: Around) -> Any:
        """What a choice begins with, or None where only a person can say."""
        raise NotImplementedError

    def make(self, which: Any) -> Editor:
        """The editor of a choice."""
        raise NotImplementedError

    def fill(self, value: Any, around: Around) -> None:
        if value != self._value:
            self._waiting = None
        self._value, self._around = value, around
        self._show(self._waiting or self.chosen(value))

    def refuse(self, sentence: str) -> None:
        self.choice.refuse(sentence)

    def restore(self) -> None:
        self._waiting = None
        self.choice.restore()
        if self._around is not None:
            self._show(self.chosen(self._value))
        for editor in self._editors.values():
            editor.restore()

    def set_group(self, group: str) -> None:
        self._group = group
        self.choice.set_group(group)
        for editor in self._editors.values():
            editor.set_group(_named(group, self._label))

    def rename(self, label: str) -> None:
        """Another label."""
        if label != self._label:
            self._label = label
            self.choice.rename(label)
            self.set_group(self._group)

    def _show(self, which: Any) -> None:
        """Show one choice and its editor, made when it is first needed, and hide the others."""
        assert self._around is not None
        self.choice.fill(which, self._around)
        if which is not None and which not in self._editors:
            editor = self._editors[which] = self.make(which)
            editor.set_group(_named(self._group, self._label))
            editor.entered.connect(partial(self._entered, which))
            self._layout.addWidget(editor)
            tab_through(self.choice.control, editor)
        for name, editor in self._editors.items():
            editor.setVisible(name == which)
        if which is not None:
            self._editors[which].fill(self.inner(which, self._value), self._around)

    def _choose(self, which: Any) -> None:
        assert self._around is not None
        if which == self.chosen(self._value):
            self.restore()
        elif which is None:
            self.entered.emit(None, False)
        elif (first := self.starter(which, self._around)) is not None:
            self.entered.emit(self.outer(which, first), False)
        else:
            self._waiting = which
            self._show(which)

    def _entered(self, which: Any, value: Any, turned: bool) -> None:
        self.entered.emit(self.outer(which, value), turned)


class OptionalEditor(ChosenEditor):
    """A record that may be there or not. starter : its first value in a place."""

    def __init__(
        self, label: str, words: str, *, make: Callable[[], RecordForm], starter: Callable[[Around], Record]
    ) -> None:
        super().__init__(label, {None: "none", "there": words})
        self._form, self._first = make, starter

    def chosen(self, value: Any) -> Any:
        return None if value is None else "there"

    def inner(self, which: Any, value: Any) -> Any:
        return value

    def outer(self, which: Any, inner: Any) -> Any:
        return inner

    def starter(self, which: Any, around: Around) -> Any:
        return self._first(around)

    def make(self, which: Any) -> Editor:
        return RecordEditor("", self._form())


class EachEditor(Editor):
    """A tuple with one entry a port, each with an editor of its own."""

    def __init__(self, label: str, editors: tuple[ChosenEditor, ...]) -> None:
        super().__init__()
        self._label, self._editors = label, editors
        self._value: tuple[Any, ...] = ()
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(8)
        for number, editor in enumerate(editors):
            layout.addWidget(editor)
            editor.entered.connect(partial(self._entered, number))

    def fill(self, value: Any, around: Around) -> None:
        self._value = value
        for number, editor in enumerate(self._editors):
            editor.rename(f"{self._label} at {around.beyond(number + 1)}")
            editor.fill(value[number], around)

    def refuse(self, sentence: str) -> None:
        self._editors[0].refuse(sentence)

    def restore(self) -> None:
        for editor in self._editors:
            editor.restore()

    def set_group(self, group: str) -> None:
        for editor in self._editors:
            editor.set_group(group)

    def _entered(self, number: int, value: Any, turned: bool) -> None:
        self.entered.emit((*self._value[:number], value, *self._value[number + 1 :]), turned)


def _out_of_range(cls: type[Record], name: str, value: Any) -> bool:
    """Whether a number is refused by its own range, whatever the other fields are."""
    number = value.real if isinstance(value, complex) else value
    return isinstance(number, int | float) and specs(cls)[name].why_not(number) is not None


def _named(*words: str) -> str:
    return ", ".join(filter(None, words))
