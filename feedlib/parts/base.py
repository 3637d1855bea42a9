"""What every kind of part is: a record of its fields and the network that the solver is given for it.

A part is pure physics: it has no id and no place. A kind belongs to exactly one of the families below; the solver
knows the families, never the kinds.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar, NamedTuple, Protocol

import numpy as np

from feedlib.conventions import Array, ComplexArray
from feedlib.scatter import Scatter
from feedlib.schema import Record

State = tuple[ComplexArray | np.complex128, ComplexArray | np.complex128]
"""(v, i) up to scale, each (..., F), or one number for all frequencies; i flows into the part."""


class Chain(NamedTuple):
    """A two-port up to scale: [V1; I1] = (1/k) [[a, b], [c, d]] [V2; I2], I2 flowing out of port 2.

    Each entry is (F,) complex or a scalar. Reciprocal: a d - b c = k^2.
    """

    a: ComplexArray | complex
    b: ComplexArray | complex
    c: ComplexArray | complex
    d: ComplexArray | complex
    k: ComplexArray | complex


class Line(NamedTuple):
    """A uniform line: attenuation in Np is flat_np + skin_np*sqrt(f/1 MHz) + dielectric_np*(f/1 MHz)."""

    z0_ohm: float
    delay_s: float
    skin_np: float = 0.0
    dielectric_np: float = 0.0
    flat_np: float = 0.0


class CableFigures(Protocol):
    """What a line needs to know of a cable; see `feedlib.plan.Cable`."""

    @property
    def z0_ohm(self) -> float: ...
    @property
    def velocity_factor(self) -> float: ...
    @property
    def skin_db_per_100m(self) -> float: ...
    @property
    def dielectric_db_per_100m(self) -> float: ...


@dataclass(frozen=True, slots=True, kw_only=True)
class Part(Record):
    """A thing with numbered ports. KIND is the file's word, LABEL the trade's."""

    KIND: ClassVar[str]
    LABEL: ClassVar[str]

    @property
    def ports(self) -> int:
        """How many ports it has."""
        raise NotImplementedError

    def covers_hz(self) -> tuple[float, float] | None:
        """The lowest and highest frequency that the part has data for; None where a formula serves all."""
        return None


@dataclass(frozen=True, slots=True, kw_only=True)
class End(Part):
    """A part with one port, seen as an impedance."""

    @property
    def ports(self) -> int:
        return 1

    def state(self, frequency_hz: Array) -> State:
        """(v, i) looking into it, each (F,)."""
        raise NotImplementedError


@dataclass(frozen=True, slots=True, kw_only=True)
class Lines(Part):
    """A part with two ports that is a cascade of uniform lines, listed from port 1 to port 2."""

    @property
    def ports(self) -> int:
        return 2

    @property
    def line_count(self) -> int:
        """How many lines the cascade has."""
        return 1

    def lines(self, cable: CableFigures | None) -> tuple[Line, ...]:
        """The `line_count` lines; cable : the figures of the cable that the part names."""
        raise NotImplementedError


@dataclass(frozen=True, slots=True, kw_only=True)
class TwoPort(Part):
    """A part with two ports that is neither line nor data."""

    @property
    def ports(self) -> int:
        return 2

    def chain(self, frequency_hz: Array) -> Chain:
        """Its chain matrix, port 1 to port 2."""
        raise NotImplementedError


@dataclass(frozen=True, slots=True, kw_only=True)
class Junction(Part):
    """A part whose ports share one voltage and whose currents sum to zero."""


@dataclass(frozen=True, slots=True, kw_only=True)
class ManyPort(Part):
    """A part that is given by its scattering matrix."""

    def scatter(self, frequency_hz: Array) -> Scatter:
        """Its waves at its own references."""
        raise NotImplementedError
