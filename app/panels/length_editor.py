"""The field of a length: turned by the wheel, told in every unit, shown in the one that is chosen. Changes no plan."""

from __future__ import annotations

from functools import partial
from typing import Any

from PySide6.QtCore import QPoint, Qt, Signal
from PySide6.QtGui import QActionGroup, QKeyEvent, QResizeEvent, QWheelEvent
from PySide6.QtWidgets import QMenu

from app.editing.entry import LengthUnit, read_length_m
from app.editing.wording import editable_length, format_frequency, format_length, wheel_step_m
from app.panels.around import Around
from app.panels.controls import LineField, MoreButton
from app.panels.editors import TextEditor
from app.panels.style import tooltip
from app.units import LENGTH_UNITS, units

NOTCH = 120
"""One notch of a wheel in Qt's eighths of a degree."""

NEEDS_NO_CABLE: tuple[LengthUnit, ...] = ("mm", "in")
AT_THE_MARK: tuple[LengthUnit, ...] = ("deg", "wl")


class LengthField(LineField):
    """A line that the wheel turns as long as `turns` is set, with a button for the unit; Alt+Down is its key.

    `turned`(notches, modifiers).
    """

    turned = Signal(float, object)

    def __init__(self, name: str) -> None:
        super().__init__(name)
        self.turns = False
        self.unit = MoreButton(self)
        self.unit.setAccessibleName("Unit of lengths")
        self.unit.setToolTip(tooltip("The unit that lengths are shown in (Alt+Down)"))
        self.keep_free(22)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self.unit.setGeometry(self.width() - 26, 0, 26, self.height())

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Down and event.modifiers() & Qt.KeyboardModifier.AltModifier:
            self.unit.click()
        else:
            super().keyPressEvent(event)

    def wheelEvent(self, event: QWheelEvent) -> None:
        if not self.turns or self.isModified():
            event.ignore()
            return
        event.accept()
        # With Alt held down some systems report the wheel as turned sideways.
        self.turned.emit((event.angleDelta().y() or event.angleDelta().x()) / NOTCH, event.modifiers())


class LengthEditor(TextEditor):
    """A length; the line's end and the text under it say it in the other units."""

    LINE = LengthField

    def __init__(self, label: str, **look: Any) -> None:
        super().__init__(label, wide=True, **look)
        self._notches = 0.0
        assert isinstance(self.line, LengthField)
        self.line.turned.connect(self._turned)
        self.menu = QMenu(self.line)  # a menu of anything else would end the writing in the line
        self.line.unit.clicked.connect(self._offer)
        units().changed.connect(self._unit_changed)

    def read(self, text: str, around: Around) -> float:
        return read_length_m(text, default_unit=_unit(around), **_known(around))

    def write(self, value: Any, around: Around) -> str:
        return editable_length(value, _unit(around), **_known(around))

    def show_value(self, value: Any, around: Around) -> None:
        super().show_value(value, around)
        assert isinstance(self.line, LengthField)
        self.line.turns = value is not None and around.velocity_factor is not None
        if value is None:
            return
        others = [unit for unit in _tellable(around) if unit != _unit(around)]
        noted: LengthUnit = "in" if "in" in others else "mm"
        self.line.set_note(format_length(value, noted, **_known(around)))
        told = {unit: format_length(value, unit, **_known(around)) for unit in others if unit != noted}
        if (first := next((unit for unit in told if unit in AT_THE_MARK), None)) is not None:
            told[first] += f" at {format_frequency(around.frequency_hz)}"
        self.say(" · ".join(told.values()))

    def _offer(self) -> None:
        """The units, each with what the length is in it."""
        around, menu = self._around, self.menu
        assert around is not None
        menu.clear()
        group = QActionGroup(menu)
        for unit in _tellable(around):
            action = menu.addAction(unit if self._value is None else format_length(self._value, unit, **_known(around)))
            action.setCheckable(True)
            action.setChecked(unit == _unit(around))
            action.triggered.connect(partial(units().choose_length, unit))
            group.addAction(action)
        menu.setActiveAction(group.checkedAction())
        menu.popup(self.line.mapToGlobal(QPoint(0, self.line.height())))

    def _unit_changed(self) -> None:
        if not (self.being_typed or self.refused):
            self.restore()

    def _turned(self, notches: float, modifiers: Qt.KeyboardModifier) -> None:
        """A notch is one step, with Shift ten, with Alt a tenth of one."""
        around = self._around
        assert around is not None
        assert around.velocity_factor is not None
        self._notches += notches
        whole = int(self._notches)
        if not whole:
            return
        self._notches -= whole
        step_m = wheel_step_m(frequency_hz=around.frequency_hz, velocity_factor=around.velocity_factor)
        if modifiers & Qt.KeyboardModifier.ShiftModifier:
            step_m *= 10
        elif modifiers & Qt.KeyboardModifier.AltModifier:
            step_m /= 10
        self._enter(max(0.0, round(self._value + whole * step_m, 9)), turned=True)


def _known(around: Around) -> dict[str, Any]:
    """What the electrical units need."""
    return {"frequency_hz": around.frequency_hz, "velocity_factor": around.velocity_factor}


def _tellable(around: Around) -> tuple[LengthUnit, ...]:
    """The units that a length can be told in there."""
    return NEEDS_NO_CABLE if around.velocity_factor is None else LENGTH_UNITS


def _unit(around: Around) -> LengthUnit:
    """The chosen unit, or mm where the velocity factor that it needs is not known."""
    chosen = units().length
    return chosen if chosen in _tellable(around) else "mm"
