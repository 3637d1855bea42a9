"""Scattering blocks: many ports answered one at a time, looking in at one port with states at all others.

Knows nothing of parts or plans. Waves are Kurokawa's at real references (see `feedlib.conventions`).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np

from feedlib.conventions import Array, ComplexArray


class Undetermined(ArithmeticError):
    """The waves in a block have no single answer (a loop without length or loss)."""


@dataclass(frozen=True, slots=True)
class Response:
    """What one port sees, and how its wave reaches the others.

    v, i : (..., F) state looking into the port, for a unit incident wave.
    k : (..., n, F) scale of the state at each other port, in port order without the one looked into.
    """

    v: ComplexArray
    i: ComplexArray
    k: ComplexArray


class Scatter(Protocol):
    """A block of `ports` ports."""

    @property
    def ports(self) -> int:
        """How many ports it has."""

    def look(self, port: int, v: ComplexArray, i: ComplexArray) -> Response:
        """The response at `port` (from 0); v, i : (..., n, F) states outwards at the other ports, in order."""

    def matrix(self) -> tuple[ComplexArray, Array]:
        """S (..., P, P, F) and the real reference of each port (P,)."""


@dataclass(frozen=True, slots=True)
class Dense:
    """A block with a full matrix: s (..., P, P, F), reference_ohm (P,) real and positive."""

    s: ComplexArray
    reference_ohm: Array

    @property
    def ports(self) -> int:
        return int(self.reference_ohm.size)

    def matrix(self) -> tuple[ComplexArray, Array]:
        return self.s, self.reference_ohm

    def look(self, port: int, v: ComplexArray, i: ComplexArray) -> Response:
        # Outwards at port q: a_q = alpha s_q goes back in, b_q = beta s_q came out; b = S a closes it.
        others = [n for n in range(self.ports) if n != port]
        root = np.sqrt(self.reference_ohm)
        alpha, beta = _outward(v, i, root[others])
        to_others = self.s[..., others, port, :]
        matrix = -self.s[..., others, :, :][..., others, :] * alpha[..., None, :, :]
        diagonal = np.arange(len(others))
        matrix[..., diagonal, diagonal, :] += beta
        k = solve_stack(matrix, to_others[..., None, :])[..., 0, :]
        back = self.s[..., port, port, :] + np.sum(self.s[..., port, others, :] * (alpha * k), axis=-2)
        return Response((1 + back) * root[port], (1 - back) / root[port], k)


@dataclass(frozen=True, slots=True)
class Star:
    """A common port and N equal others whose matrix is a diagonal plus a constant, so that N may be large.

    S00 = common, S0k = Sk0 = through, Skj = apart (k = j only) + shared; each (F,). One reference for all ports.
    """

    common: ComplexArray
    through: ComplexArray
    apart: ComplexArray
    shared: ComplexArray
    outputs: int
    reference_ohm: float

    @property
    def ports(self) -> int:
        return self.outputs + 1

    def matrix(self) -> tuple[ComplexArray, Array]:
        s = np.empty((self.ports, self.ports, self.common.size), complex)
        s[:] = self.shared
        s[0, :] = s[:, 0] = self.through
        s[0, 0] = self.common
        rest = np.arange(1, self.ports)
        s[rest, rest] += self.apart
        return s, np.full(self.ports, self.reference_ohm)

    def look(self, port: int, v: ComplexArray, i: ComplexArray) -> Response:
        root = np.sqrt(self.reference_ohm)
        alpha, beta = _outward(v, i, np.full(self.ports - 1, root))
        if port == 0:
            apart = beta - self.apart * alpha
            total = np.sum(alpha / apart, axis=-2)
            drive = self.through / (1 - self.shared * total)
            k = drive[..., None, :] / apart
            back = self.common + self.through * drive * total
        else:
            # Output waves sum to w = a_port + sum(alpha s); the common port answers with through * w.
            apart = beta[..., 1:, :] - self.apart * alpha[..., 1:, :]
            at_common = beta[..., 0, :] - self.common * alpha[..., 0, :]
            gain = self.shared + self.through**2 * alpha[..., 0, :] / at_common
            total = np.sum(alpha[..., 1:, :] / apart, axis=-2)
            wave = 1 / (1 - gain * total)
            k = np.concatenate(
                [(self.through * wave / at_common)[..., None, :], (gain * wave)[..., None, :] / apart],
                axis=-2,
            )
            back = self.apart + gain * wave
        return Response((1 + back) * root, (1 - back) / root, k)


def _outward(v: ComplexArray, i: ComplexArray, root: Array) -> tuple[ComplexArray, ComplexArray]:
    """Waves of outward states up to scale: alpha back into the block, beta out of it."""
    r = root[:, None]
    return 0.5 * (v / r - r * i), 0.5 * (v / r + r * i)


def solve_stack(matrix: ComplexArray, right: ComplexArray) -> ComplexArray:
    """The solution (..., n, m, F) of matrix (..., n, n, F) times x = right (..., n, m, F)."""
    if matrix.shape[-2] == 0:
        return np.zeros(right.shape, complex)
    try:
        found = np.asarray(np.linalg.solve(np.moveaxis(matrix, -1, -3), np.moveaxis(right, -1, -3)), complex)
    except np.linalg.LinAlgError:
        raise Undetermined from None
    return np.moveaxis(found, -3, -1)


def joined(blocks: ComplexArray, inner: list[tuple[int, int]], outer: list[int]) -> tuple[ComplexArray, ComplexArray]:
    """The matrix that is left when ports are tied: (S of the outer ports, incident waves at the inner ports).

    blocks : (..., n, n, F) block-diagonal matrix of all parts at one common reference; inner : pairs of tied rows;
    outer : the rows that stay open to the outside. Returns S (..., P, P, F) and T (..., 2J, P, F): the waves into
    inner rows inner[0][0], inner[0][1], inner[1][0] ... for unit waves into the outer ports.
    """
    rows = [row for pair in inner for row in pair]
    mates = [row for a, b in inner for row in (b, a)]
    # a(row) = b(mate): a_in = S[mates, rows] a_in + S[mates, outer] a_out
    matrix = -blocks[..., mates, :, :][..., rows, :]
    diagonal = np.arange(len(rows))
    matrix[..., diagonal, diagonal, :] += 1
    inside = solve_stack(matrix, blocks[..., mates, :, :][..., outer, :])
    to_outer = blocks[..., outer, :, :]
    s = to_outer[..., outer, :] + np.einsum("...ijf,...jkf->...ikf", to_outer[..., rows, :], inside)
    return s, inside


def renormalised(s: ComplexArray, from_ohm: Array, to_ohm: float | Array) -> ComplexArray:
    """S (..., P, P, F) at another real reference, without a detour over impedances, which need not exist.

    from_ohm : (P,); to_ohm : one for all ports, or (P,). Undetermined where a port is the exact negative of its new
    reference.

    S' = D^-1 (S - G)(1 - G S)^-1 D with G = (to - from)/(to + from), D = 2 sqrt(from to)/(from + to) (diagonal);
    Kurokawa 1965 for real references.
    """
    g = (to_ohm - from_ohm) / (to_ohm + from_ohm)
    if not g.any():
        return s
    d = 2 * np.sqrt(from_ohm * to_ohm) / (from_ohm + to_ohm)
    eye = np.eye(g.size)[..., None]
    minus = np.asarray(s - g[:, None, None] * eye, complex)
    under = np.asarray(eye - g[:, None, None] * s, complex)
    # X (1 - G S) = (S - G): solve the transposed system.
    turned = solve_stack(np.swapaxes(under, -3, -2), np.swapaxes(minus, -3, -2))
    return np.asarray(np.swapaxes(turned, -3, -2) * (d / d[:, None])[..., None], complex)
