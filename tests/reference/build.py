"""Published circuits as plans, and printed numbers as they stand on paper. Knows no expected value."""

from __future__ import annotations

import re
from collections.abc import Iterable
from itertools import pairwise
from math import pi, sqrt
from types import MappingProxyType
from typing import NamedTuple

import numpy as np

from feedlib import Figures, Plan, solve
from feedlib.parts import Antenna, AntennaImpedance, Coax, CoaxEnd, Load, Lumped, Part, Radio, Tee
from feedlib.plan import Band, Cable, Channel, Join, Placed, Port

F0_HZ = 299_792_458.0
"""Centre of every circuit that is given in degrees: one wavelength is 1 m."""


class Section(NamedTuple):
    """A coax section with the cable that it is cut from."""

    cable: Cable
    length_m: float
    ends: tuple[CoaxEnd | None, CoaxEnd | None] = (None, None)


def line(z0_ohm: float, degrees: float, loss_db: float = 0.0) -> Section:
    """A section of that electrical length and matched loss at F0_HZ, half of the loss skin and half dielectric."""
    length_m, mhz = degrees / 360, F0_HZ / 1e6
    half_db_per_100m = loss_db / 2 * 100 / length_m if loss_db else 0.0
    cable = Cable(
        z0_ohm=z0_ohm,
        velocity_factor=1.0,
        skin_db_per_100m=half_db_per_100m / sqrt(mhz),
        dielectric_db_per_100m=half_db_per_100m / mhz,
    )
    return Section(cable, length_m)


def series(r_ohm: float, x_ohm: float = 0.0) -> Lumped:
    """r + jx in series, as R, L and C at F0_HZ."""
    w = 2 * pi * F0_HZ
    return Lumped(
        place="series",
        r_ohm=r_ohm,
        l_h=x_ohm / w if x_ohm > 0 else None,
        c_f=-1 / (w * x_ohm) if x_ohm < 0 else None,
    )


def shunt(g_s: float, b_s: float = 0.0) -> Lumped:
    """g + jb in shunt, as R, L and C in parallel at F0_HZ."""
    w = 2 * pi * F0_HZ
    return Lumped(
        place="shunt",
        wiring="parallel",
        r_ohm=1 / g_s,
        l_h=-1 / (w * b_s) if b_s < 0 else None,
        c_f=b_s / w if b_s > 0 else None,
    )


def antenna(impedance_ohm: complex) -> Antenna:
    """An antenna of fixed impedance."""
    return Antenna(impedance=AntennaImpedance(fixed_ohm=complex(impedance_ohm)))


def load(impedance_ohm: complex) -> Load:
    """A termination; 0 is a short."""
    return Load(impedance_ohm=complex(impedance_ohm))


def tee(ports: int = 3) -> Tee:
    """A parallel junction."""
    return Tee(ports=ports)


def circuit(
    joins: str,
    parts: dict[str, Part | Section],
    frequencies_hz: Iterable[float],
    *,
    radio_ohm: complex = 50.0,
    reference_ohm: float = 50.0,
) -> Plan:
    """The plan of a 1 W radio and these parts, with a channel at each frequency.

    joins : chains like "radio > T, T:2 > arm > A": a chain enters a part at port 1 and leaves it at port 2; its
    first and last part may name another port, and stand for port 1 otherwise.
    """
    cables = {name: part.cable for name, part in parts.items() if isinstance(part, Section)}
    placed = [Placed("radio", Radio(impedance_ohm=complex(radio_ohm)))]
    for name, part in parts.items():
        if isinstance(part, Section):
            part = Coax(cable=name, length_m=part.length_m, ends=part.ends)
        placed.append(Placed(name, part))
    channels = [Channel(name=str(f), hz=f) for f in dict.fromkeys(frequencies_hz)]
    start_hz, stop_hz = min(c.hz for c in channels), max(c.hz for c in channels)
    return Plan(
        band=Band(start_hz=start_hz, stop_hz=stop_hz, points=2),
        channels=tuple(channels),
        reference_ohm=reference_ohm,
        cables=MappingProxyType(cables),
        parts=tuple(placed),
        joins=tuple(join for chain in joins.split(",") for join in _chain(chain)),
    )


def _chain(text: str) -> list[Join]:
    words = [word.strip() for word in text.split(">")]
    found = []
    for n, (a, b) in enumerate(pairwise(words)):
        leaves = a if ":" in a else f"{a}:{1 if n == 0 else 2}"
        enters = b if ":" in b else f"{b}:1"
        found.append((_port(leaves), _port(enters)))
    return found


def _port(text: str) -> Port:
    name, number = text.split(":")
    return Port(name, int(number))


def sweep(
    ratios: Iterable[float],
    joins: str,
    *,
    radio_ohm: complex = 50.0,
    reference_ohm: float = 50.0,
    **parts: Part | Section,
) -> dict[float, Figures]:
    """The solved figures (F = 1) at each f/F0; the keywords are the parts' ids, in plan order."""
    ratios = list(ratios)
    frequencies_hz = [r * F0_HZ for r in ratios]
    plan = circuit(joins, parts, frequencies_hz, radio_ohm=radio_ohm, reference_ohm=reference_ohm)
    answer = solve(plan)
    return {r: answer.channels[str(f)] for r, f in zip(ratios, frequencies_hz, strict=True)}


def centre(joins: str, *, radio_ohm: complex = 50.0, reference_ohm: float = 50.0, **parts: Part | Section) -> Figures:
    """The solved figures (F = 1) at F0."""
    return sweep([1.0], joins, radio_ohm=radio_ohm, reference_ohm=reference_ohm, **parts)[1.0]


def impedance(figures: Figures, port: str) -> complex:
    """Z at a port at the figures' only frequency."""
    return complex(figures.port_impedance_ohm[port][0])


def reflection(figures: Figures) -> float:
    """Size of the reflection coefficient at the radio."""
    return float(np.sqrt(figures.reflected_share[0]))


def gamma(impedance_ohm: complex, z0_ohm: float = 50.0) -> complex:
    """(Z - Z0)/(Z + Z0)."""
    return (impedance_ohm - z0_ohm) / (impedance_ohm + z0_ohm)


def swr(impedance_ohm: complex, z0_ohm: float = 50.0) -> float:
    """Standing wave ratio of an impedance in a line."""
    size = abs(gamma(impedance_ohm, z0_ohm))
    return (1 + size) / (1 - size)


def db(ratio: complex) -> float:
    """20 log10 of the size; -inf for 0."""
    with np.errstate(divide="ignore"):
        return float(20 * np.log10(np.abs(ratio)))


def deg(ratio: complex) -> float:
    """Angle in degrees."""
    return float(np.degrees(np.angle(ratio)))


def expect(got: complex, printed: str, *, relative: float = 0.0, absolute: float = 0.0) -> None:
    """Fail unless a figure is the printed one, to the tolerance and half a unit of the last printed digit.

    printed : a number as on paper: "-0.53452", "30.5 + 40j". One of fewer than five digits is taken as exact, and 0
    is met to 1e-9. A relative tolerance is one of the magnitude.
    """
    wanted = complex(printed.replace(" ", ""))
    rounding = [_half_unit(number) for number in re.findall(r"[\d.]+", printed)]
    allowed = max(relative * abs(wanted), absolute, 0.0 if wanted else 1e-9) + float(np.linalg.norm(rounding))
    assert abs(got - wanted) <= allowed, f"got {got}, printed {printed}, allowed {allowed:.2g}"


def _half_unit(number: str) -> float:
    whole, _, decimals = number.partition(".")
    return 0.5 * 10.0 ** -len(decimals) if len((whole + decimals).lstrip("0")) >= 5 else 0.0


def expect_db(ratio: complex, printed: str, *, absolute: float) -> None:
    """`expect` for 20 log10 of a ratio; "< -200" means zero, tested as 1e-9."""
    if printed == "< -200":
        assert abs(ratio) < 1e-9
    else:
        expect(db(ratio), printed, absolute=absolute)


def expect_deg(ratio: complex, printed: str, *, absolute: float) -> None:
    """`expect` for an angle in degrees, modulo 360; "--" has none."""
    if printed != "--":
        wanted = float(printed)
        expect(wanted + (deg(ratio) - wanted + 180) % 360 - 180, printed, absolute=absolute)


def rows(table: str) -> list[list[str]]:
    """The cells of a printed table: one row a line, bars between the cells."""
    return [[cell.strip() for cell in row.split("|")] for row in table.strip().splitlines()]
