"""The units that a person wants to see, remembered from one time to the next. Knows no plan and no widget."""

from __future__ import annotations

from functools import cache

from PySide6.QtCore import QObject, QSettings, Signal

from app.editing.entry import LengthUnit

LENGTH_UNITS: tuple[LengthUnit, ...] = ("mm", "in", "deg", "wl", "ps")
"""What a length can be shown in; degrees and wavelengths are those at the mark."""

_LENGTH = "units/length"


class Units(QObject):
    """The choice; it is kept in the settings and nowhere else. `changed` when it is another one."""

    changed = Signal()

    @property
    def length(self) -> LengthUnit:
        """The unit that fields show a length in, and that a bare number in them has."""
        kept = QSettings().value(_LENGTH)
        return next((unit for unit in LENGTH_UNITS if unit == kept), "mm")

    def choose_length(self, unit: LengthUnit) -> None:
        """Show lengths in another unit from now on."""
        if unit != self.length:
            QSettings().setValue(_LENGTH, unit)
            self.changed.emit()


@cache
def units() -> Units:
    """The one choice that all views share."""
    return Units()
