"""Cuts: lengths set once by electrical length, and a whole plan moved to another frequency. Know no Qt.

The electrical length of a section is that of its cable alone, as it is cut: 360 degrees a wavelength in the cable.
Its ends (connectors, solder joints) come on top. Only `same_phase_as` counts them, since they turn the phase too.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from app.editing.edits import marked
from app.editing.matched import with_coax
from feedlib.conventions import SPEED_OF_LIGHT_M_PER_S, guided_wavelength_m
from feedlib.errors import PlanError, quoted
from feedlib.parts import Antenna, Coax, CoaxEnd, Lumped, Measured, Part, Resonant, Splitter
from feedlib.plan import Cable, Plan

CUTS_DEG = {"quarter wave": 90.0, "half wave": 180.0, "3/4 wave": 270.0, "5/4 wave": 450.0}
"""The usual cuts by the trade's names."""


def electrical_deg(plan: Plan, coax: Coax, frequency_hz: float) -> float:
    """Electrical length of a section's cable, without its ends (degrees)."""
    return 360 * coax.length_m / guided_wavelength_m(frequency_hz, _cable(plan, coax).velocity_factor)


def cut_length_m(cable: Cable, degrees: float, frequency_hz: float) -> float:
    """The length of a cable that is so many electrical degrees long (m)."""
    return degrees / 360 * guided_wavelength_m(frequency_hz, cable.velocity_factor)


def cut_to(plan: Plan, part_id: str, degrees: float) -> Plan:
    """A coax, and its matched set with it, with so many electrical degrees at the mark; its ends come on top."""
    cable = _cable(plan, _coax(plan, part_id))
    return with_coax(plan, part_id, length_m=cut_length_m(cable, degrees, plan.band.marked_hz))


def same_phase_as(plan: Plan, part_id: str, other_id: str) -> Plan:
    """A coax, and its matched set with it, as long electrically as another one, the ends of both included.

    The delays are made equal, so that a matched wave comes through with the same phase at every frequency.
    """
    coax, other = _coax(plan, part_id), _coax(plan, other_id)
    per_m = 1 / (_cable(plan, coax).velocity_factor * SPEED_OF_LIGHT_M_PER_S)
    wanted_s = other.length_m / (_cable(plan, other).velocity_factor * SPEED_OF_LIGHT_M_PER_S) + _ends_delay_s(other)
    length_m = (wanted_s - _ends_delay_s(coax)) / per_m
    if length_m < 0:
        raise PlanError(f"its ends alone are longer than the whole of {quoted(other_id)}", part=part_id)
    return with_coax(plan, part_id, length_m=length_m)


def moved_to_frequency(plan: Plan, new_mark_hz: float) -> tuple[Plan, tuple[str, ...]]:
    """The plan for another marked frequency, and the ids of the parts that could not move.

    Band, sweep, channels and mark scale, and with them all electrical lengths stay (coax and its ends are cut anew),
    splitters and resonances keep their place in the band, lumped L and C their reactance. A cable's loss is what it
    has at the new frequency. Measured data cannot move: such parts stay as they are and are named.
    """
    old_hz = plan.band.marked_hz
    new_hz = marked(plan, new_mark_hz).band.marked_hz  # refuses what no mark can be

    def moved_hz(frequency_hz: float) -> float:
        # Divided first, so that what stands on the mark stays on it, and never out of order.
        return frequency_hz / old_hz * new_hz

    band, sweep = plan.band, plan.sweep
    if sweep is not None:
        sweep = replace(sweep, start_hz=moved_hz(sweep.start_hz), stop_hz=moved_hz(sweep.stop_hz))
    moved = replace(
        plan,
        band=replace(band, start_hz=moved_hz(band.start_hz), stop_hz=moved_hz(band.stop_hz), mark_hz=new_hz),
        sweep=sweep,
        channels=tuple(replace(c, hz=moved_hz(c.hz)) for c in plan.channels),
        parts=tuple(replace(p, part=_moved(p.part, moved_hz, old_hz / new_hz)) for p in plan.parts),
    )
    return moved, tuple(p.id for p in plan.parts if _is_measured(p.part))


def _moved(part: Part, moved_hz: Callable[[float], float], longer: float) -> Part:
    """A part for another frequency; lengths, inductances and capacitances are multiplied by `longer`."""
    if isinstance(part, Coax):
        first, last = (end and replace(end, length_m=end.length_m * longer) for end in part.ends)
        return replace(part, length_m=part.length_m * longer, ends=(first, last))
    if isinstance(part, Splitter) and part.centre_hz is not None:
        return replace(part, centre_hz=moved_hz(part.centre_hz))
    if isinstance(part, Lumped):
        l_h, c_f = (None if value is None else value * longer for value in (part.l_h, part.c_f))
        return replace(part, l_h=l_h, c_f=c_f)
    if isinstance(part, Antenna) and part.impedance.resonant is not None:
        resonant: Resonant = replace(part.impedance.resonant, f0_hz=moved_hz(part.impedance.resonant.f0_hz))
        return replace(part, impedance=replace(part.impedance, resonant=resonant))
    return part


def _is_measured(part: Part) -> bool:
    return isinstance(part, Measured) or (isinstance(part, Antenna) and part.impedance.touchstone is not None)


def _coax(plan: Plan, part_id: str) -> Coax:
    part = plan.placed(part_id).part
    if not isinstance(part, Coax):
        raise PlanError(f"only coax is cut to a length, this is a {part.LABEL}", part=part_id)
    return part


def _cable(plan: Plan, coax: Coax) -> Cable:
    cable = plan.cables.get(coax.cable)
    if cable is None:
        raise PlanError(f"the cable {quoted(coax.cable)} is not in the plan, so its velocity factor is not known")
    return cable


def _ends_delay_s(coax: Coax) -> float:
    return sum(end.line.delay_s for end in coax.ends if isinstance(end, CoaxEnd))
