"""Published power dividers and hybrids, swept as the real circuits of ideal lines a quarter wave at `centre_hz`.

Each is solved in closed form by its symmetry (even and odd modes; Reed and Wheeler, IRE Trans. MTT 4 (1956) 246),
with sines and cosines instead of tangents, so that no frequency is special.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import ClassVar, Literal

import numpy as np

from feedlib.conventions import Array, ComplexArray
from feedlib.errors import FieldError
from feedlib.parts.base import ManyPort
from feedlib.scatter import Dense, Scatter, Star
from feedlib.schema import Record, field

Form = Literal["wilkinson", "resistive", "branch_line", "rat_race"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Splitter(ManyPort):
    """Port 1 is common (wilkinson, resistive), in (branch_line) or the sum (rat_race)."""

    KIND: ClassVar[str] = "splitter"
    LABEL: ClassVar[str] = "splitter"

    form: Form = field("Form")
    z0_ohm: float = field("Impedance", default=50.0, unit="ohm", above=0)
    centre_hz: float | None = field("Centre", default=None, unit="Hz", above=0)
    outputs: int = field("Outputs", default=2, low=2, high=1024)

    def __post_init__(self) -> None:
        Record.__post_init__(self)
        if self.centre_hz is None and self.form != "resistive":
            raise FieldError(
                "centre_hz", f"is missing (the frequency at which the {self.form}'s lines are a quarter wave)"
            )
        if self.outputs != 2 and self.form in ("branch_line", "rat_race"):
            raise FieldError("outputs", f"a {self.form} always has 4 ports; leave outputs out")

    @property
    def ports(self) -> int:
        return 4 if self.form in ("branch_line", "rat_race") else self.outputs + 1

    def scatter(self, frequency_hz: Array) -> Scatter:
        quarter = np.pi / 2 * frequency_hz / (self.centre_hz or 1.0)
        return FORMS[self.form](self, quarter)


def _wilkinson(part: Splitter, theta: Array) -> Star:
    """E. J. Wilkinson, IRE Trans. MTT 8 (1960) 116: lines sqrt(N) z0, a resistor z0 from each output to a star point.

    Outputs alike: one line z0/sqrt(N) into z0/N, no current in the resistors. Outputs against each other: the common
    node and the star are at zero, leaving a shorted line and z0 across each output.
    """
    n = part.outputs
    c, s = np.cos(theta), np.sin(theta)
    # Alike: ABCD of the line z0/sqrt(N) between z0 and z0/N, all over z0.
    line, load = 1 / np.sqrt(n), 1 / n
    den = c * (load + 1) + 1j * s * (line + load / line)
    common = (c * (load - 1) + 1j * s * (line - load / line)) / den
    alike = (c * (1 - load) + 1j * s * (line - load / line)) / den
    through = 2 * np.sqrt(load) / den / np.sqrt(n)
    apart = 1j * c / (2 * np.sqrt(n) * s - 1j * c)
    return Star(common, through, apart, (alike - apart) / n, n, part.z0_ohm)


def _resistive(part: Splitter, theta: Array) -> Star:
    """N+1 equal ports, each through r = z0 (N-1)/(N+1) to a star point (Pozar, 4th ed., sec. 7.2)."""
    n = part.outputs
    r = (n - 1) / (n + 1)
    apart = (r - 1) / (r + 1)
    shared = (1 - apart) / (n + 1)
    flat: ComplexArray = np.ones(theta.shape, complex)
    common, spread, own = (np.asarray(x * flat, complex) for x in (apart + shared, shared, apart))
    return Star(common, spread, own, spread, n, part.z0_ohm)


def _branch_line(part: Splitter, theta: Array) -> Dense:
    """Lines 1-2 and 4-3 of z0/sqrt(2), 1-4 and 2-3 of z0 (Pozar, 4th ed., sec. 7.5), from its four modes."""
    c, s = np.cos(theta / 2), np.sin(theta / 2)
    main, branch = np.sqrt(2.0), 1.0
    # Half a line, open at a plane of symmetry: y tan; shorted: -y cot. b is their sum, times the cosines and sines.
    modes = (
        ((1, 1, 1, 1), c, (main + branch) * s),
        ((1, -1, -1, 1), s * c, branch * s * s - main * c * c),
        ((1, 1, -1, -1), s * c, main * s * s - branch * c * c),
        ((1, -1, 1, -1), s, -(main + branch) * c),
    )
    out = np.zeros((4, 4, theta.size), complex)
    for signs, one, b in modes:
        gamma = (one - 1j * b) / (one + 1j * b)
        out += np.multiply.outer(np.outer(signs, signs) / 4, gamma)
    return Dense(out, np.full(4, part.z0_ohm))


def _rat_race(part: Splitter, theta: Array) -> Dense:
    """Ring sqrt(2) z0: 1-2, 1-3, 3-4 a quarter wave, 2-4 three quarters (Pozar, 4th ed., sec. 7.8).

    Mirrored about the middles of 1-3 and 2-4 (1 <-> 3, 2 <-> 4), each mode is a stub, a line and a stub.
    """
    y = 1 / np.sqrt(2.0)
    c, s = np.cos(theta), np.sin(theta)
    short_c, short_s = np.cos(theta / 2), np.sin(theta / 2)
    long_c, long_s = np.cos(3 * theta / 2), np.sin(3 * theta / 2)
    modes = []
    for even in (True, False):
        # Stub admittance n/d: open j y tan, shorted -j y cot.
        n1, d1 = (1j * y * short_s, short_c) if even else (-1j * y * short_c, short_s)
        n2, d2 = (1j * y * long_s, long_c) if even else (-1j * y * long_c, long_s)
        # [d1 0; n1 d1] [c js/y; jsy c] [d2 0; n2 d2]
        a = d1 * (c * d2 + 1j * s / y * n2)
        b = d1 * 1j * s / y * d2
        lower_c = n1 * c + d1 * 1j * s * y
        lower_d = n1 * 1j * s / y + d1 * c
        cc = lower_c * d2 + lower_d * n2
        dd = lower_d * d2
        den = a + b + cc + dd
        modes.append(((a + b - cc - dd) / den, 2 * d1 * d2 / den, (dd + b - cc - a) / den))
    (r1e, te, r2e), (r1o, to, r2o) = modes
    same1, cross1 = (r1e + r1o) / 2, (r1e - r1o) / 2
    same2, cross2 = (r2e + r2o) / 2, (r2e - r2o) / 2
    near, far = (te + to) / 2, (te - to) / 2
    rows = (
        (same1, near, cross1, far),
        (near, same2, far, cross2),
        (cross1, far, same1, near),
        (far, cross2, near, same2),
    )
    return Dense(np.array(rows), np.full(4, part.z0_ohm))


FORMS: dict[Form, Callable[[Splitter, Array], Scatter]] = {
    "wilkinson": _wilkinson,
    "resistive": _resistive,
    "branch_line": _branch_line,
    "rat_race": _rat_race,
}
