"""The load: a fixed termination."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from feedlib.conventions import Array
from feedlib.parts.base import End, State
from feedlib.schema import field


def impedance_state(impedance_ohm: complex) -> State:
    """The state of a constant impedance: (Z, 1) up to scale, kept near one in size."""
    scale = 1 / (abs(impedance_ohm) + 50.0)
    return np.complex128(impedance_ohm * scale), np.complex128(scale)


@dataclass(frozen=True, slots=True, kw_only=True)
class Load(End):
    """A termination `impedance_ohm`; [0, 0] is a short."""

    KIND: ClassVar[str] = "load"
    LABEL: ClassVar[str] = "load"

    impedance_ohm: complex = field("Impedance", unit="ohm", low=0, hint="0 is a short")

    def state(self, frequency_hz: Array) -> State:
        return impedance_state(self.impedance_ohm)
