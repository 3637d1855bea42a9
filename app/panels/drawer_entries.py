"""What the parts drawer offers, and the part that each entry begins as in a plan. Knows no widgets."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import NamedTuple

from app.editing import edits
from app.panels.shelf import stocked
from feedlib.conventions import guided_wavelength_m
from feedlib.parts import (
    Antenna,
    AntennaImpedance,
    Coax,
    Load,
    Lumped,
    Pad,
    Part,
    Radio,
    Splitter,
    Tee,
    Transformer,
)
from feedlib.parts.splitter import Form
from feedlib.plan import Cable, Plan

MEASURED = "measured"
"""The entry that is made of a file, which a person must choose first."""

FIRST_CABLE = "RG-58C/U"
FIRST_LOSS_DB = 3.0
FIRST_RATIO = 2.0


class Entry(NamedTuple):
    """What can be put on the bench. make : the part for a plan, and the plan with the cable that it needs."""

    label: str
    make: Callable[[Plan], tuple[Plan, Part]]


def entries() -> dict[str, Entry]:
    """Everything that can be made without a file, by key, in the drawer's order."""
    return {
        "coax": Entry("coax", _coax),
        "tee": Entry("T joint", lambda plan: (plan, Tee())),
        "wilkinson": Entry("Wilkinson splitter", _splitter("wilkinson")),
        "resistive": Entry("resistive splitter", _splitter("resistive")),
        "branch_line": Entry("branch-line hybrid", _splitter("branch_line")),
        "rat_race": Entry("rat-race hybrid", _splitter("rat_race")),
        "antenna": Entry("antenna", _antenna),
        "pad": Entry("pad", lambda plan: (plan, Pad(loss_db=FIRST_LOSS_DB, z0_ohm=plan.reference_ohm))),
        "lumped": Entry("lumped element", _lumped),
        "transformer": Entry("transformer", lambda plan: (plan, Transformer(ratio=FIRST_RATIO))),
        "load": Entry("load", lambda plan: (plan, Load(impedance_ohm=complex(plan.reference_ohm)))),
        "radio": Entry("radio", lambda plan: (plan, Radio(impedance_ohm=complex(plan.reference_ohm)))),
    }


def _coax(plan: Plan) -> tuple[Plan, Part]:
    """A quarter wave at the mark of the plan's first cable."""
    if plan.cables:
        name = next(iter(plan.cables))
    else:
        name = FIRST_CABLE
        plan = stocked(plan, name)
        if name not in plan.cables:
            plan = edits.with_cable(plan, name, Cable(z0_ohm=50.0, velocity_factor=0.66))
    wavelength_m = guided_wavelength_m(plan.band.marked_hz, plan.cables[name].velocity_factor)
    # To a tenth of a millimetre, as cables are cut; finer only where that would be coarse.
    digits = max(4, 2 - math.floor(math.log10(wavelength_m)))
    return plan, Coax(cable=name, length_m=round(wavelength_m / 4, digits))


def _splitter(form: Form) -> Callable[[Plan], tuple[Plan, Part]]:
    """A splitter for the middle of the band; the resistive one has no middle."""

    def make(plan: Plan) -> tuple[Plan, Part]:
        centre_hz = None if form == "resistive" else (plan.band.start_hz + plan.band.stop_hz) / 2
        return plan, Splitter(form=form, z0_ohm=plan.reference_ohm, centre_hz=centre_hz)

    return make


def _antenna(plan: Plan) -> tuple[Plan, Part]:
    return plan, Antenna(impedance=AntennaImpedance(fixed_ohm=complex(plan.reference_ohm)))


def _lumped(plan: Plan) -> tuple[Plan, Part]:
    """A series coil of as many ohms at the mark as the reference."""
    l_h = plan.reference_ohm / (2 * math.pi * plan.band.marked_hz)
    return plan, Lumped(place="series", l_h=float(f"{l_h:.1e}"))
