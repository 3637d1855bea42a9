"""Coax: a length of cable, with an optional further lossless section outside each end."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

from feedlib.conventions import NEPER_PER_DB, SPEED_OF_LIGHT_M_PER_S
from feedlib.parts.base import CableFigures, Line, Lines
from feedlib.schema import Record, field


@dataclass(frozen=True, slots=True, kw_only=True)
class CoaxEnd(Record):
    """A connector or solder joint as a lossless line outside the cable."""

    z0_ohm: float = field("Impedance", unit="ohm", above=0)
    velocity_factor: float = field("Velocity factor", above=0, high=1)
    length_m: float = field("Length", unit="m", low=0)

    @property
    def line(self) -> Line:
        """It as a line."""
        return Line(self.z0_ohm, self.length_m / (self.velocity_factor * SPEED_OF_LIGHT_M_PER_S))


@dataclass(frozen=True, slots=True, kw_only=True)
class Coax(Lines):
    """A cable section: gamma = alpha + j 2 pi f/(velocity_factor c), real characteristic impedance.

    ABCD of a line: Pozar, Microwave Engineering, 4th ed., Table 4.1.
    """

    KIND: ClassVar[str] = "coax"
    LABEL: ClassVar[str] = "coax"

    cable: str = field("Cable")
    length_m: float = field("Length", unit="m", low=0)
    ends: tuple[CoaxEnd | None, CoaxEnd | None] = field("Ends", default=(None, None), omit_default=True)
    matched_set: str | None = field("Matched set", default=None, hint="sections that share one cable, length and ends")

    @property
    def line_count(self) -> int:
        return 1 + sum(e is not None for e in self.ends)

    def lines(self, cable: CableFigures | None) -> tuple[Line, ...]:
        assert cable is not None
        main = Line(
            cable.z0_ohm,
            self.length_m / (cable.velocity_factor * SPEED_OF_LIGHT_M_PER_S),
            cable.skin_db_per_100m * self.length_m / 100 * NEPER_PER_DB,
            cable.dielectric_db_per_100m * self.length_m / 100 * NEPER_PER_DB,
        )
        first, last = self.ends
        before = () if first is None else (first.line,)
        after = () if last is None else (last.line,)
        return (*before, main, *after)

    @property
    def main_line(self) -> int:
        """Which of `lines` is the cable itself."""
        return 0 if self.ends[0] is None else 1
