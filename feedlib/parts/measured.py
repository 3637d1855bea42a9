"""A measured part: an N-port from a Touchstone file."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from feedlib.conventions import Array
from feedlib.parts.antenna import reflection_state
from feedlib.parts.base import ManyPort, State
from feedlib.parts.data import TouchstoneText
from feedlib.scatter import Dense, Scatter
from feedlib.schema import field


@dataclass(frozen=True, slots=True, kw_only=True)
class Measured(ManyPort):
    """Data at the file's own references, linear in Re and Im between its points, never extrapolated."""

    KIND: ClassVar[str] = "measured"
    LABEL: ClassVar[str] = "measured part"

    touchstone: TouchstoneText = field("File")

    @property
    def ports(self) -> int:
        return self.touchstone.data.ports

    def scatter(self, frequency_hz: Array) -> Scatter:
        return Dense(self.touchstone.s_at(frequency_hz), np.asarray(self.touchstone.data.reference_ohm))

    def state(self, frequency_hz: Array) -> State:
        """(v, i) of a one-port file."""
        return reflection_state(self.touchstone, frequency_hz)

    def covers_hz(self) -> tuple[float, float] | None:
        return self.touchstone.covers_hz()
