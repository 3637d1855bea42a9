"""Loops without length, loss or impedance: their circulating current has no single value, so they are refused.

Ports between which there is nothing share a voltage, or have it in a fixed ratio where ideal transformers tie them.
A tie between ports that are tied already closes a loop: with the same ratio both ways its current is free; with
another ratio it holds the voltage at zero, as a short does. Known by union-find with ratios.
"""

from __future__ import annotations

import math
from collections.abc import Iterator

from feedlib.errors import SolveError
from feedlib.graph import joins_away
from feedlib.parts import Antenna, Load, Lumped, Radio, Transformer
from feedlib.parts.base import Junction, Lines, Part
from feedlib.plan import Placed, Plan, Port

GROUND = Port("", 0)
SHORTEST_M = 1e-12
"""A section shorter than an atom is no length: the current around a loop of such would be rounding noise."""


def refuse_undetermined(plan: Plan) -> None:
    """Raise SolveError naming a part of a loop made of joins, tees, transformers, zero lengths and shorts only.

    Only what the radio or an antenna reaches counts; the rest is not solved.
    """
    reached = joins_away(plan, *(p.id for p in plan.parts if isinstance(p.part, Radio | Antenna)))
    nets = _Nets()
    for a, b in plan.joins:
        nets.tie(a, b, 1.0)
    for placed in plan.parts:
        if placed.id not in reached:
            continue
        for a, b, ratio in _ties(placed):
            if not nets.tie(a, b, ratio):
                raise SolveError(
                    "it closes a loop without length or loss, whose circulating current is not determined; "
                    "give a section in it a length or take one join away",
                    part=placed.id,
                )


class _Nets:
    """Ports tied together: V(port) = ratio * V(head)."""

    def __init__(self) -> None:
        self._above: dict[Port, tuple[Port, float]] = {}

    def tie(self, a: Port, b: Port, ratio: float) -> bool:
        """Tie V(a) = ratio * V(b); False when that leaves a current free."""
        (head_a, ratio_a), (head_b, ratio_b) = self._head(a), self._head(b)
        if head_a != head_b:
            # the ground stays a head, so that what it holds is known
            if head_a == GROUND:
                head_a, ratio_a, head_b, ratio_b, ratio = head_b, ratio_b, head_a, ratio_a, 1 / ratio
            self._above[head_a] = (head_b, ratio * ratio_b / ratio_a)
            return True
        if head_a == GROUND or math.isclose(ratio_a, ratio * ratio_b, rel_tol=1e-12):
            return False
        self._above[head_a] = (GROUND, 1.0)
        return True

    def _head(self, port: Port) -> tuple[Port, float]:
        ratio = 1.0
        while port in self._above:
            port, step = self._above[port]
            ratio *= step
        return port, ratio


def _ties(placed: Placed) -> Iterator[tuple[Port, Port, float]]:
    """The pairs of its ports (or port and shield) whose voltages it ties, with V(first) = ratio * V(second)."""
    part, ports = placed.part, placed.ports()
    if isinstance(part, Junction):
        for port in ports[1:]:
            yield ports[0], port, 1.0
    elif isinstance(part, Transformer):
        yield ports[0], ports[1], part.ratio
    elif (isinstance(part, Lines) and _no_length(part)) or (
        isinstance(part, Lumped) and (part.place == "shunt" or part.is_short)
    ):
        yield ports[0], ports[1], 1.0
    if is_short(part):
        yield ports[0], GROUND, 1.0


def is_short(part: Part) -> bool:
    """Whether it ties its port to the shield with nothing between."""
    return (
        (isinstance(part, Load) and part.impedance_ohm == 0)
        or (isinstance(part, Antenna) and part.impedance.fixed_ohm == 0)
        or (isinstance(part, Lumped) and part.place == "shunt" and part.is_short)
    )


def _no_length(part: Part) -> bool:
    if getattr(part, "loss_db", 0) > 0 or getattr(part, "length_m", 0) > SHORTEST_M:
        return False
    return all(end is None or end.length_m <= SHORTEST_M for end in getattr(part, "ends", ()))
