"""A lumped element: R, L and C in series or in shunt."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar, Literal

import numpy as np

from feedlib.conventions import Array, ComplexArray
from feedlib.errors import FieldError
from feedlib.parts.base import Chain, TwoPort
from feedlib.schema import Record, field


@dataclass(frozen=True, slots=True, kw_only=True)
class Lumped(TwoPort):
    """Series impedance or shunt admittance (Pozar, 4th ed., Table 4.1) of R, L, C wired in series or in parallel."""

    KIND: ClassVar[str] = "lumped"
    LABEL: ClassVar[str] = "lumped element"

    place: Literal["series", "shunt"] = field("Place")
    r_ohm: float | None = field("Resistance", default=None, unit="ohm", low=0)
    l_h: float | None = field("Inductance", default=None, unit="H", above=0)
    c_f: float | None = field("Capacitance", default=None, unit="F", above=0)
    wiring: Literal["series", "parallel"] = field("R, L, C wired in", default="series")

    def __post_init__(self) -> None:
        Record.__post_init__(self)
        if self.r_ohm is None and self.l_h is None and self.c_f is None:
            raise FieldError("r_ohm", "wants at least one of r_ohm, l_h, c_f")

    def ratio(self, frequency_hz: Array) -> tuple[ComplexArray, ComplexArray]:
        """(n, d), each (F,), with Z = n/d: a short is (0, 1), an open is (1, 0)."""
        w = 2 * np.pi * frequency_hz
        one: ComplexArray = np.ones(w.shape, complex)
        if self.wiring == "series":
            z = one * (self.r_ohm or 0.0) + 1j * w * (self.l_h or 0.0)
            return (z if self.c_f is None else z + 1 / (1j * w * self.c_f)), one
        if self.r_ohm == 0:
            return 0 * one, one
        y = one * (1 / self.r_ohm if self.r_ohm else 0.0) + 1j * w * (self.c_f or 0.0)
        return one, (y if self.l_h is None else y + 1 / (1j * w * self.l_h))

    def chain(self, frequency_hz: Array) -> Chain:
        n, d = self.ratio(frequency_hz)
        # Kept near one in size, so that long chains of odd values stay in range.
        scale = 1 / (np.abs(n) / 50 + np.abs(d))
        n, d = n * scale, d * scale
        return Chain(d, n, 0j, d, d) if self.place == "series" else Chain(n, 0j, d, n, n)

    @property
    def is_short(self) -> bool:
        """Whether its impedance is zero at every frequency."""
        if self.r_ohm != 0:
            return False
        return self.wiring == "parallel" or (self.l_h is None and self.c_f is None)
