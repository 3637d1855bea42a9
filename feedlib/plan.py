"""The plan: everything that is saved, immutable. Edits make a new plan that shares what did not change."""

from __future__ import annotations

import unicodedata
from collections.abc import Mapping
from dataclasses import dataclass
from dataclasses import field as plain
from types import MappingProxyType
from typing import NamedTuple

import numpy as np

from feedlib.conventions import Array
from feedlib.errors import FieldError, PlanError, quoted
from feedlib.parts import Part
from feedlib.schema import Json, Record, field


class Port(NamedTuple):
    """One port of one part; numbers from 1."""

    part: str
    number: int

    def __str__(self) -> str:
        return f"{self.part}:{self.number}"


Join = tuple[Port, Port]


def read_port(text: str) -> Port:
    """The port written as "<id>:<number>"; FieldError otherwise."""
    part, colon, number = text.rpartition(":")
    if not colon or not number.isascii() or not number.isdigit() or str(int(number[:5])) != number:
        raise FieldError("joins", f'wants a port like "T1:2", got {quoted(text, 80)}')
    return Port(part, int(number))


@dataclass(frozen=True, slots=True, kw_only=True)
class Band(Record):
    """The band as a grid, and the marked frequency."""

    start_hz: float = field("From", unit="Hz", above=0)
    stop_hz: float = field("To", unit="Hz", above=0)
    points: int = field("Points", default=201, low=1, high=10_001)
    mark_hz: float | None = field("Mark", default=None, unit="Hz", above=0)

    def __post_init__(self) -> None:
        Record.__post_init__(self)
        _check_grid(self)
        if self.mark_hz is None:
            object.__setattr__(self, "mark_hz", self.start_hz / 2 + self.stop_hz / 2)

    @property
    def marked_hz(self) -> float:
        """The marked frequency."""
        assert self.mark_hz is not None
        return self.mark_hz


@dataclass(frozen=True, slots=True, kw_only=True)
class Sweep(Record):
    """A wider grid that holds the band: what is solved and plotted."""

    start_hz: float = field("From", unit="Hz", above=0)
    stop_hz: float = field("To", unit="Hz", above=0)
    points: int = field("Points", default=201, low=1, high=10_001)

    def __post_init__(self) -> None:
        Record.__post_init__(self)
        _check_grid(self)


def _check_grid(grid: Band | Sweep) -> None:
    if grid.stop_hz < grid.start_hz:
        raise FieldError("stop_hz", f"wants at least start_hz ({grid.start_hz:.12g}), got {grid.stop_hz:.12g}")
    if grid.points == 1 and grid.start_hz != grid.stop_hz:
        raise FieldError("points", "1 point needs start_hz and stop_hz to be equal")


@dataclass(frozen=True, slots=True, kw_only=True)
class Channel(Record):
    """A named frequency that counts in every verdict."""

    name: str = field("Name")
    hz: float = field("Frequency", unit="Hz", above=0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Limits(Record):
    """What the harness must hold; None = not asked."""

    return_loss_db: float | None = field("Return loss", default=None, unit="dB", low=0)
    amplitude_balance_db: float | None = field("Amplitude balance", default=None, unit="dB", low=0)
    phase_balance_deg: float | None = field("Phase balance", default=None, unit="deg", low=0)
    harness_loss_db: float | None = field("Harness loss", default=None, unit="dB", low=0)
    isolation_db: float | None = field("Isolation", default=None, unit="dB", low=0)
    axial_ratio_db: float | None = field("Axial ratio", default=None, unit="dB", low=0)
    gain_over_one_db: float | None = field("Gain over one antenna", default=None, unit="dB")


@dataclass(frozen=True, slots=True, kw_only=True)
class Cable(Record):
    """A cable's figures: loss in dB per 100 m is skin*sqrt(f/1 MHz) + dielectric*(f/1 MHz)."""

    z0_ohm: float = field("Impedance", unit="ohm", above=0)
    velocity_factor: float = field("Velocity factor", above=0, high=1)
    skin_db_per_100m: float = field("Skin loss at 1 MHz", default=0.0, unit="dB/100 m", low=0)
    dielectric_db_per_100m: float = field("Dielectric loss at 1 MHz", default=0.0, unit="dB/100 m", low=0)

    def loss_db_per_m(self, frequency_hz: float) -> float:
        """Matched loss (dB/m)."""
        mhz = frequency_hz / 1e6
        return float((self.skin_db_per_100m * np.sqrt(mhz) + self.dielectric_db_per_100m * mhz) / 100)


@dataclass(frozen=True, slots=True)
class Placed:
    """A part with its id, its place on the bench and what people call it."""

    id: str
    part: Part
    at: tuple[float, float] = (0.0, 0.0)
    label: str = ""
    note: str = ""

    def __post_init__(self) -> None:
        check_id(self.id)

    @property
    def name(self) -> str:
        """What the bench shows: the label, else the id."""
        return self.label or self.id

    def ports(self) -> tuple[Port, ...]:
        """Its ports in order."""
        return tuple(Port(self.id, n) for n in range(1, self.part.ports + 1))


def check_id(name: str) -> None:
    """Raise PlanError unless `name` may be an id."""
    if not 1 <= len(name) <= 64:
        raise PlanError(f"an id has 1 to 64 characters, got {len(name)}", field="id", part=name[:64] or None)
    if ":" in name or any(unicodedata.category(c) in ("Cc", "Cs") for c in name):
        raise PlanError("an id has no ':' and no control characters", field="id", part=name)


@dataclass(frozen=True, slots=True, kw_only=True)
class Plan:
    """A harness with its band, limits and cables; checks itself when made (PlanError)."""

    band: Band
    title: str = ""
    notes: str = ""
    sweep: Sweep | None = None
    channels: tuple[Channel, ...] = ()
    reference_ohm: float = 50.0
    limits: Limits = plain(default_factory=Limits)
    cables: Mapping[str, Cable] = plain(default_factory=lambda: MappingProxyType({}))
    parts: tuple[Placed, ...] = ()
    joins: tuple[Join, ...] = ()
    extra: Mapping[str, Json] = plain(default_factory=dict)

    def __post_init__(self) -> None:
        if not (np.isfinite(self.reference_ohm) and self.reference_ohm > 0):
            raise PlanError(f"wants a number of ohm, more than 0, got {self.reference_ohm}", field="reference_ohm")
        s, b = self.sweep, self.band
        if s is not None and not (s.start_hz <= b.start_hz and b.stop_hz <= s.stop_hz):
            raise PlanError("the sweep wants to hold the whole band", field="sweep")
        names: set[str] = set()
        for channel in self.channels:
            if channel.name in names:
                raise PlanError(f"two channels are called {quoted(channel.name)}", field="channels")
            names.add(channel.name)
        counts: dict[str, int] = {}
        for placed in self.parts:
            if placed.id in counts:
                raise PlanError("two parts have this id", part=placed.id, field="id")
            counts[placed.id] = placed.part.ports
        taken: set[Port] = set()
        for join in self.joins:
            for port in join:
                if port.part not in counts:
                    raise PlanError(f"{quoted(str(port), 80)} names a part that is not there", field="joins")
                if not 1 <= port.number <= counts[port.part]:
                    raise PlanError(
                        f"{port} names a port that is not there: the part has {counts[port.part]}",
                        field="joins",
                        part=port.part,
                    )
                if port in taken:
                    raise PlanError(
                        f"{port} is joined twice; a branching point is a tee", field="joins", part=port.part
                    )
                taken.add(port)

    def placed(self, part_id: str) -> Placed:
        """The part with that id (KeyError)."""
        for placed in self.parts:
            if placed.id == part_id:
                return placed
        raise KeyError(part_id)

    def mate(self, port: Port) -> Port | None:
        """The port that this one is joined to."""
        for a, b in self.joins:
            if a == port:
                return b
            if b == port:
                return a
        return None

    def grid_hz(self) -> Array:
        """The frequencies that are solved and plotted, (F,)."""
        wide = self.sweep or self.band
        steps = max(1, wide.points - 1)
        grid: Array = np.arange(wide.points, dtype=float)
        grid = grid * ((wide.stop_hz - wide.start_hz) / steps) + wide.start_hz
        grid[-1] = wide.stop_hz  # so far it is numpy.linspace, which takes five times as long
        return grid
