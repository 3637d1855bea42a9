"""Impedances at ports: of all at once, or of a few one by one. Knows flows and topologies, not the other figures."""

from __future__ import annotations

import numpy as np

from feedlib.conventions import ComplexArray
from feedlib.flows import Flows
from feedlib.topology import Topology


def impedance_at(topology: Topology, flows: Flows, port: str, part: slice) -> ComplexArray:
    """(F,) V/I from near to far at one port, at some of the frequencies; KeyError for a port that is not there."""
    edge, _, far = topology.ports[port]
    return _impedance(flows.v[..., edge, part], flows.i[..., edge, part], far)


def all_impedances(topology: Topology, flows: Flows, part: slice) -> dict[str, ComplexArray]:
    """(F,) by port, for all ports, at some of the frequencies."""
    z_ohm = _impedance(flows.v[..., part], flows.i[..., part], 1)
    rows = list(z_ohm if z_ohm.ndim == 2 else np.moveaxis(z_ohm, -2, 0))
    unknown = _impedance(rows[0], rows[0], 0)
    return {
        port: rows[edge] if far > 0 else unknown if far == 0 else _turned(rows[edge])
        for port, (edge, _, far) in topology.ports.items()
    }


def _frozen(array: ComplexArray) -> ComplexArray:
    array.flags.writeable = False
    return array


def _impedance(v: ComplexArray, i: ComplexArray, far: int) -> ComplexArray:
    """v/i, inf where i = 0; turned where the current runs from far to near, nan where nothing is known."""
    if far == 0:
        return _frozen(np.full(v.shape, complex(np.nan, np.nan)))
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        z = v / i
    if not i.all():
        z[i == 0] = np.inf
    return _turned(z) if far < 0 else _frozen(z)


def _turned(z_ohm: ComplexArray) -> ComplexArray:
    """The impedance for the current's other direction; an open stays an open."""
    turned: ComplexArray = np.where(np.isinf(z_ohm), z_ohm, -z_ohm)
    return _frozen(turned)
