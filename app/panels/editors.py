"""Editors: one for each type of value, with its label, its line of soft text and the sentence of a refusal.

An editor reads and shows; it never changes a plan. Knows no kinds of part.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from app.editing.entry import EntryError, read_complex_ohm, read_quantity
from app.editing.wording import editable_impedance, editable_quantity, field_unit
from app.look import SIGNS
from app.panels.around import Around
from app.panels.controls import ChoiceBox, LineField, NoteField
from app.panels.style import plain_label, set_text

LABEL_WIDTH = 108


class Editor(QWidget):
    """A field. `entered`(value, turned): a value that was read; turned : by the wheel, one of many. `dropped`: Esc."""

    entered = Signal(object, bool)
    dropped = Signal()

    def fill(self, value: Any, around: Around) -> None:
        """Show the plan's value; what is being typed, and what was refused, stays."""
        raise NotImplementedError

    def refuse(self, sentence: str) -> None:
        """Say why the plan did not take the value."""
        raise NotImplementedError

    def restore(self) -> None:
        """Show the plan's value again, whatever was typed."""
        raise NotImplementedError

    def hold(self) -> None:
        """Keep what was entered in sight, though the plan has not taken it yet."""

    def set_group(self, group: str) -> None:
        """Name what the field belongs to, for those who hear it."""
        raise NotImplementedError


class FieldEditor(Editor):
    """An editor with one control. wide : the label stands above the control instead of beside it."""

    def __init__(self, label: str, control: QWidget, *, wide: bool = False, hint: str = "") -> None:
        super().__init__()
        self.control, self._name, self._group, self._hint = control, label, "", hint
        self.label = plain_label(label, "soft")
        self.under = plain_label(hint, "soft")
        self.fault = plain_label(role="fault")
        self._value: Any = None
        self._around: Around | None = None
        self._held = False
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(2)
        if wide:
            layout.addWidget(self.label)
            layout.addWidget(control)
        else:
            self.label.setFixedWidth(LABEL_WIDTH)
            row = QHBoxLayout()
            row.setSpacing(6)
            row.addWidget(self.label)
            row.addWidget(control, 1)
            layout.addLayout(row)
        layout.addWidget(self.under)
        layout.addWidget(self.fault)
        self.under.setVisible(bool(hint))
        self.fault.hide()

    def fill(self, value: Any, around: Around) -> None:
        same = value == self._value
        self._value, self._around = value, around
        if self.being_typed or (same and (self.refused or self._held)):
            return
        self.restore()

    def refuse(self, sentence: str) -> None:
        set_text(self.fault, f"{SIGNS['fails']} {sentence}")
        self._mark(True)

    def hold(self) -> None:
        self._held = True

    def restore(self) -> None:
        self._held = False
        self._mark(False)
        if self._around is not None:
            self.show_value(self._value, self._around)

    def show_value(self, value: Any, around: Around) -> None:
        """Put a value into the control."""
        raise NotImplementedError

    def set_group(self, group: str) -> None:
        self._group = group
        self.control.setAccessibleName(", ".join(filter(None, (group, self._name))))

    def rename(self, label: str) -> None:
        """Another label."""
        self._name = label
        set_text(self.label, label)
        self.set_group(self._group)

    @property
    def being_typed(self) -> bool:
        """Whether a person is in the middle of it."""
        return False

    @property
    def refused(self) -> bool:
        """Whether a sentence stands under the control."""
        return not self.fault.isHidden()

    def say(self, text: str) -> None:
        """The soft line under the control."""
        shown = text or self._hint
        set_text(self.under, shown)
        self.under.setVisible(bool(shown))

    def _mark(self, bad: bool) -> None:
        if bad == self.refused:
            return
        self.fault.setVisible(bad)
        self.control.setProperty("bad", bad)
        self.control.style().unpolish(self.control)
        self.control.style().polish(self.control)

    def _drop(self) -> None:
        self.restore()
        self.dropped.emit()

    def _enter(self, value: Any, turned: bool = False) -> None:
        """Offer a value; where nothing came of it but no refusal either, the plan's own text comes back."""
        self._held = False
        self._mark(False)
        self.entered.emit(value, turned)
        if not (self.refused or self._held):
            self.restore()


class TextEditor(FieldEditor):
    """A value written in one line. optional : an empty line is None."""

    LINE: ClassVar[type[LineField]] = LineField

    def __init__(
        self, label: str, *, optional: bool = False, wide: bool = False, hint: str = "", placeholder: str = ""
    ) -> None:
        self.line = self.LINE(label)
        self.line.setPlaceholderText(placeholder)
        super().__init__(label, self.line, wide=wide, hint=hint)
        self._optional = optional
        self.line.typed.connect(self._typed)
        self.line.restored.connect(self._drop)

    def read(self, text: str, around: Around) -> Any:
        """The value that a text says (EntryError)."""
        return text

    def write(self, value: Any, around: Around) -> str:
        """The text of a value."""
        return str(value)

    def show_value(self, value: Any, around: Around) -> None:
        self.line.show_text("" if value is None else self.write(value, around))

    @property
    def being_typed(self) -> bool:
        return self.line.hasFocus() and self.line.isModified()

    def _typed(self, text: str) -> None:
        assert self._around is not None
        try:
            value = None if self._optional and not text.strip() else self.read(text, self._around)
        except EntryError as error:
            self.refuse(str(error))
        else:
            self._enter(value)


class QuantityEditor(TextEditor):
    """A number with a unit; a unit that nobody writes stands at the line's end."""

    def __init__(self, label: str, unit: str, **look: Any) -> None:
        super().__init__(label, **look)
        self._unit = "" if "/" in unit else unit
        if "/" in unit:
            self.line.set_note(unit)

    def read(self, text: str, around: Around) -> float:
        return read_quantity(text, unit=self._unit, bare_unit=field_unit(self._unit))

    def write(self, value: Any, around: Around) -> str:
        return editable_quantity(value, unit=self._unit)


class WholeEditor(TextEditor):
    """A whole number."""

    def read(self, text: str, around: Around) -> int:
        value = read_quantity(text, unit="")
        if not value.is_integer():
            raise EntryError(f"'{text.strip()}' is not a whole number; try {round(value)}.")
        return int(value)


class ImpedanceEditor(TextEditor):
    """A complex impedance in ohm."""

    def read(self, text: str, around: Around) -> complex:
        return read_complex_ohm(text)

    def write(self, value: Any, around: Around) -> str:
        return editable_impedance(value)


class ChoiceEditor(FieldEditor):
    """One of a few words."""

    def __init__(self, label: str, words: Mapping[Any, str], *, wide: bool = False, hint: str = "") -> None:
        self.box = ChoiceBox(label)
        super().__init__(label, self.box, wide=wide, hint=hint)
        self._values = list(words)
        self.box.addItems(list(words.values()))
        self.box.activated.connect(self._chosen)
        self.box.restored.connect(self._drop)

    def show_value(self, value: Any, around: Around) -> None:
        self.box.setCurrentIndex(self._values.index(value))

    def _chosen(self, index: int) -> None:
        self._enter(self._values[index])


class NoteEditor(FieldEditor):
    """Lines of free text."""

    def __init__(self, label: str) -> None:
        self.text = NoteField()
        super().__init__(label, self.text, wide=True)
        self.text.setAccessibleName(label)
        self.text.typed.connect(self._enter)
        self.text.restored.connect(self._drop)

    def show_value(self, value: Any, around: Around) -> None:
        if value != self.text.toPlainText():
            self.text.setPlainText(value)
        self.text.document().setModified(False)

    @property
    def being_typed(self) -> bool:
        return self.text.hasFocus() and self.text.document().isModified()
