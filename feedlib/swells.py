"""The standing wave along each coax at one frequency, all sections in one go. Knows flows, not what is drawn."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from feedlib.conventions import Array, ComplexArray, Index
from feedlib.flows import Flows, LineValues
from feedlib.parts import Coax
from feedlib.plan import Plan
from feedlib.topology import Topology

Swell = tuple[Array, ComplexArray, complex]
"""x from 0 to 1 (P,), the voltage there (P,) from port 1 to port 2, and the forward wave's voltage at the entry."""


@dataclass(frozen=True, slots=True)
class Sections:
    """The coax of a topology that the radio reaches: what of a swell does not depend on values.

    rows : in the line table; entry, exit : edges at the side nearer the radio and at the other, with the sign that
    turns the edge's current into the section; straight : whether port 1 is the entry.
    """

    names: list[str]
    rows: list[int]
    entry: Index
    entry_sign: Index
    exit: Index
    exit_sign: Index
    straight: list[bool]


def sections_of(plan: Plan, topology: Topology) -> Sections:
    """The sections of a plan, found once for its topology."""
    names, rows, planes, straight = [], [], [], []
    for row, (index, number) in enumerate(topology.lines):
        placed = plan.parts[index]
        if isinstance(placed.part, Coax) and number == placed.part.main_line:
            _, sign, far = topology.ports[f"{placed.id}:1"]
            if far:
                first, second = topology.line_planes.get((index, number)) or topology.planes[index]
                names.append(placed.id)
                rows.append(row)
                planes.append((*first, *second) if sign == far else (*second, *first))
                straight.append(sign == far)
    entry, entry_sign, exit_, exit_sign = np.array(planes, np.intp).reshape(-1, 4).T
    return Sections(names, rows, entry, entry_sign, exit_, exit_sign, straight)


def swells_of(
    sections: Sections, values: LineValues, flows: Flows, at: int, frequency_hz: float, points: int
) -> dict[str, Swell]:
    """The swell of each section, by id.

    V(x) = A e^(-gamma x) + B e^(-gamma (l - x)) with the forward wave A at the entry and the backward wave B at the
    far end (Pozar, Microwave Engineering, 4th ed., sec. 2.7), so both factors decay and no loss overflows.
    """
    columns = (values.z0_ohm, values.delay_s, values.skin_np, values.dielectric_np)
    z0_ohm, delay_s, skin_np, dielectric_np = np.array(columns)[:, values.row][:, sections.rows]
    mhz = frequency_hz / 1e6
    gamma_l = skin_np * np.sqrt(mhz) + dielectric_np * mhz + 2j * np.pi * frequency_hz * delay_s
    scale, v, i = flows.scale[:, at], flows.v[:, at], flows.i[:, at]
    entry, exit_ = sections.entry, sections.exit
    forward = 0.5 * scale[entry] * (v[entry] + z0_ohm * i[entry] * sections.entry_sign)
    backward = 0.5 * scale[exit_] * (v[exit_] + z0_ohm * i[exit_] * sections.exit_sign)
    x = np.arange(points) / (points - 1)
    fall = np.exp(-gamma_l[:, None] * x)
    along = forward[:, None] * fall + backward[:, None] * fall[:, ::-1]
    rows = zip(sections.names, along, sections.straight, forward.tolist(), strict=True)
    return {name: (x, row if straight else row[::-1], wave) for name, row, straight, wave in rows}
