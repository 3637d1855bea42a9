"""Loops without length, loss or impedance: their circulating current has no single value, so they are refused."""

from __future__ import annotations

from collections.abc import Iterator

from feedlib.errors import SolveError
from feedlib.parts import Antenna, Load, Lumped
from feedlib.parts.base import Junction, Lines, Part
from feedlib.plan import Placed, Plan, Port

GROUND = Port("", 0)


def refuse_undetermined(plan: Plan) -> None:
    """Raise SolveError naming a part of a loop made of joins, tees, zero lengths and shorts only."""
    ties = [(placed, a, b) for placed in plan.parts for a, b in _ties(placed)]
    if not ties:
        return
    head: dict[Port, Port] = {}
    for a, b in plan.joins:
        head[a] = b
    for placed, a, b in ties:
        first, second = _head(head, a), _head(head, b)
        if first == second:
            raise SolveError(
                "it closes a loop without length or loss, whose circulating current is not determined; "
                "give a section in it a length or take one join away",
                part=placed.id,
            )
        head[first] = second


def _ties(placed: Placed) -> Iterator[tuple[Port, Port]]:
    """The pairs of its ports (or port and shield) between which there is nothing."""
    part, ports = placed.part, placed.ports()
    if isinstance(part, Junction):
        for port in ports[1:]:
            yield ports[0], port
    elif (isinstance(part, Lines) and _no_length(part)) or (
        isinstance(part, Lumped) and (part.place == "shunt" or part.is_short)
    ):
        yield ports[0], ports[1]
    if _shorts(part):
        yield ports[0], GROUND


def _no_length(part: Part) -> bool:
    if getattr(part, "loss_db", 0) > 0 or getattr(part, "length_m", 0) > 0:
        return False
    return all(end is None or end.length_m == 0 for end in getattr(part, "ends", ()))


def _shorts(part: Part) -> bool:
    return (
        (isinstance(part, Load) and part.impedance_ohm == 0)
        or (isinstance(part, Antenna) and part.impedance.fixed_ohm == 0)
        or (isinstance(part, Lumped) and part.place == "shunt" and part.is_short)
    )


def _head(head: dict[Port, Port], port: Port) -> Port:
    while port in head:
        port = head[port]
    return port
