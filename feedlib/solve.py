"""Solve a plan: compile its topology, evaluate it at all asked frequencies, answer."""

from __future__ import annotations

import numpy as np

from feedlib.answer import Answer, Solved
from feedlib.compiler import compile_plan
from feedlib.conventions import Array
from feedlib.errors import SolveError, quoted
from feedlib.flows import drive_in_slices, line_values
from feedlib.parts import Coax, Radio
from feedlib.plan import Plan
from feedlib.topology import Topology
from feedlib.undetermined import is_short, refuse_undetermined


def solve(plan: Plan, topology: Topology | None = None) -> Answer:
    """The answer to a plan; SolveError names the part that stops it.

    topology : that of an earlier plan, used again when it still fits.
    """
    radio = _only_radio(plan)
    grid_hz, band = plan.grid_hz(), plan.band
    rest_hz = [band.start_hz, band.stop_hz, *(c.hz for c in plan.channels), band.marked_hz]
    frequency_hz = np.concatenate([grid_hz, rest_hz])
    frequency_hz.flags.writeable = False
    _refuse_uncovered(plan, frequency_hz)
    _refuse_missing_cables(plan)
    if topology is None or not topology.fits(plan):
        topology = compile_plan(plan)
    # Two shorts side by side leave no state, which shows where the radio drives them; elsewhere they are looked for.
    if topology.has_loops or (len(topology.roots) > 1 and sum(is_short(p.part) for p in plan.parts) > 1):
        refuse_undetermined(plan)
    values = line_values(plan, topology)
    flows, network = drive_in_slices(plan, topology, values, frequency_hz, radio)
    solved = Solved(plan, topology, values, frequency_hz, radio, flows, network)
    return Answer(solved, grid_hz.size, tuple(c.name for c in plan.channels))


def _only_radio(plan: Plan) -> Radio:
    radios = [p for p in plan.parts if isinstance(p.part, Radio)]
    if not radios:
        raise SolveError("the plan has no radio; put one on the bench")
    if len(radios) > 1:
        raise SolveError("the plan has more than one radio; take all but one off", part=radios[1].id)
    assert isinstance(radios[0].part, Radio)
    return radios[0].part


def _refuse_missing_cables(plan: Plan) -> None:
    for placed in plan.parts:
        if isinstance(placed.part, Coax) and placed.part.cable not in plan.cables:
            cable = quoted(placed.part.cable)
            raise SolveError(f"its cable {cable} is not in the plan; choose another or add it", part=placed.id)


def _refuse_uncovered(plan: Plan, frequency_hz: Array) -> None:
    for placed in plan.parts:
        covers = placed.part.covers_hz()
        if covers is None:
            continue
        low, high = float(frequency_hz.min()), float(frequency_hz.max())
        if not (covers[0] <= low and high <= covers[1]):
            raise SolveError(
                f"its data covers {covers[0] / 1e6:.12g} to {covers[1] / 1e6:.12g} MHz, "
                f"the plan asks for {low / 1e6:.12g} to {high / 1e6:.12g} MHz",
                part=placed.id,
            )
