"""The antenna as a load: fixed, resonant or measured impedance, and the current that it should have."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from feedlib.conventions import Array
from feedlib.errors import FieldError
from feedlib.parts.base import End, State
from feedlib.parts.data import TouchstoneText
from feedlib.parts.load import impedance_state
from feedlib.schema import Record, field


@dataclass(frozen=True, slots=True, kw_only=True)
class Resonant(Record):
    """Series RLC: Z = r (1 + j q (f/f0 - f0/f))."""

    r_ohm: float = field("Resistance", unit="ohm", low=0)
    f0_hz: float = field("Resonance", unit="Hz", above=0)
    q: float = field("Q", low=0)


@dataclass(frozen=True, slots=True, kw_only=True)
class AntennaImpedance(Record):
    """Exactly one of the three ways to give an antenna's impedance."""

    fixed_ohm: complex | None = field("Impedance", default=None, unit="ohm", low=0)
    resonant: Resonant | None = field("Resonant", default=None)
    touchstone: TouchstoneText | None = field("Measured", default=None)

    def __post_init__(self) -> None:
        Record.__post_init__(self)
        given = [w for w in ("fixed_ohm", "resonant", "touchstone") if getattr(self, w) is not None]
        if len(given) != 1:
            raise FieldError("", "wants exactly one of fixed_ohm, resonant, touchstone")
        if self.touchstone is not None and self.touchstone.data.ports != 1:
            raise FieldError("touchstone", f"wants a one-port file, got {self.touchstone.data.ports} ports")


@dataclass(frozen=True, slots=True, kw_only=True)
class Target(Record):
    """The current that the antenna should have, against the others."""

    amplitude: float = field("Wanted amplitude", default=1.0, above=0)
    phase_deg: float = field("Wanted phase", default=0.0, unit="deg")


@dataclass(frozen=True, slots=True, kw_only=True)
class Antenna(End):
    """A load at the end of the harness; the order of the plan's parts is the order of antennas."""

    KIND: ClassVar[str] = "antenna"
    LABEL: ClassVar[str] = "antenna"

    impedance: AntennaImpedance = field("Impedance")
    target: Target = field("Wanted current", default=Target())

    def state(self, frequency_hz: Array) -> State:
        if self.impedance.fixed_ohm is not None:
            return impedance_state(self.impedance.fixed_ohm)
        if self.impedance.resonant is not None:
            r = self.impedance.resonant
            z = r.r_ohm * (1 + 1j * r.q * (frequency_hz / r.f0_hz - r.f0_hz / frequency_hz))
            scale = 1 / (np.abs(z) + 50.0)
            return z * scale, scale + 0j
        assert self.impedance.touchstone is not None
        return reflection_state(self.impedance.touchstone, frequency_hz)

    def covers_hz(self) -> tuple[float, float] | None:
        file = self.impedance.touchstone
        return None if file is None else file.covers_hz()


def reflection_state(file: TouchstoneText, frequency_hz: Array) -> State:
    """The state of a measured one-port: V = 1 + S, I = (1 - S)/R."""
    s = file.s_at(frequency_hz)[0, 0]
    return 1 + s, (1 - s) / file.data.reference_ohm[0]
