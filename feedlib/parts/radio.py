"""The radio: a source of given available power behind its impedance."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import ClassVar

from feedlib.parts.base import Part
from feedlib.schema import field


@dataclass(frozen=True, slots=True, kw_only=True)
class Radio(Part):
    """Available power `power_w` behind `impedance_ohm`; open-circuit voltage 2 sqrt(P Re Zs), real and positive."""

    KIND: ClassVar[str] = "radio"
    LABEL: ClassVar[str] = "radio"

    impedance_ohm: complex = field("Impedance", default=50 + 0j, unit="ohm", above=0)
    power_w: float = field("Power", default=1.0, unit="W", above=0, hint="available power into a matched load")

    @property
    def ports(self) -> int:
        return 1

    @property
    def open_circuit_v(self) -> float:
        """Open-circuit voltage (V rms)."""
        return 2 * math.sqrt(self.power_w * self.impedance_ohm.real)
