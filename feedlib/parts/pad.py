"""The pad: a matched attenuator."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

from feedlib.conventions import NEPER_PER_DB
from feedlib.parts.base import CableFigures, Line, Lines
from feedlib.schema import field


@dataclass(frozen=True, slots=True, kw_only=True)
class Pad(Lines):
    """S21 = 10^(-loss/20), S11 = 0 in z0: a line of no length with that loss."""

    KIND: ClassVar[str] = "pad"
    LABEL: ClassVar[str] = "pad"

    loss_db: float = field("Loss", unit="dB", low=0)
    z0_ohm: float = field("Impedance", default=50.0, unit="ohm", above=0)

    def lines(self, cable: CableFigures | None) -> tuple[Line, ...]:
        return (Line(self.z0_ohm, 0.0, flat_np=self.loss_db * NEPER_PER_DB),)
