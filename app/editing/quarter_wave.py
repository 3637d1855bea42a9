"""Quarter waves that match antennas to a radio, of the cables asked for or else of the catalogue. Knows no plan.

N equal branches of Z, each behind a quarter wave of Z1, show Z1^2/(Z N) (Pozar, Microwave Engineering, 4th ed.,
sec. 2.5). Of the cables asked for those are taken that match best. Where they leave less than GOOD_DB of return loss,
some of the catalogue take their place if these come near to what is wanted, as few as will do.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import partial
from itertools import product
from typing import Any

from app.editing.wording import format_db
from feedlib.catalogue import figures, load_catalogue
from feedlib.errors import PlanError
from feedlib.plan import Cable

NamedCable = tuple[str, Cable]

GOOD_DB = 20.0
"""Return loss from which on the cables asked for are good enough."""
NEAR_DB, MUCH_DB = 15.0, 1.0
"""Return loss from which on the catalogue's may replace them, and by how much they must be better."""
EQUAL_DB = 0.5
"""By how much the currents of antennas may differ."""
NEAR_50_OHM = 5.0


@dataclass(frozen=True, slots=True)
class Asked:
    """The answers to a starter's questions. impedance_ohm : of each antenna."""

    frequency_hz: float
    impedance_ohm: float
    feeder: NamedCable
    match: NamedCable

    def __post_init__(self) -> None:
        if not 0 < self.impedance_ohm < math.inf:
            raise PlanError("wants a number of ohm, more than 0", field="impedance_ohm")

    @property
    def radio_ohm(self) -> float:
        """50 ohm, or what a feeder of another kind has: then all is taken to be of that impedance."""
        z0_ohm = self.feeder[1].z0_ohm
        return 50.0 if abs(z0_ohm - 50) <= NEAR_50_OHM else z0_ohm

    def pool(self) -> list[NamedCable]:
        """The cables asked for, then one of each further impedance of the catalogue that serves the frequency."""
        pool = {self.match[1].z0_ohm: self.match}
        pool.setdefault(self.feeder[1].z0_ohm, self.feeder)
        for cable in load_catalogue():
            serves = cable.max_frequency_hz is None or self.frequency_hz <= cable.max_frequency_hz
            if cable.offered and serves and cable.type not in (self.match[0], self.feeder[0]):
                kept: dict[str, Any] = figures(cable)
                pool.setdefault(cable.z0_ohm, (cable.type, Cable(**kept)))
        return list(pool.values())


@dataclass(frozen=True, slots=True)
class Match:
    """Quarter waves that match: one cable a level, from the radio to the antennas.

    shown_ohm : what the first junction shows; caution : a sentence where the cables asked for will not do, or empty.
    """

    cables: tuple[NamedCable, ...]
    shown_ohm: float
    return_loss_db: float
    caution: str


def best_match(asked: Asked, counts: Sequence[int]) -> Match:
    """The best quarter waves for a tree of antennas. counts : branches at each junction, from the radio on."""
    own = [asked.match, asked.feeder]

    def shown_ohm(cables: Sequence[NamedCable]) -> float:
        z_ohm = asked.impedance_ohm
        for count, (_, cable) in zip(reversed(counts), reversed(cables), strict=True):
            z_ohm = cable.z0_ohm**2 / z_ohm / count
        return z_ohm

    def return_loss_db(cables: Sequence[NamedCable]) -> float:
        z_ohm, radio_ohm = shown_ohm(cables), asked.radio_ohm
        return -20 * math.log10(max(abs(z_ohm - radio_ohm) / (z_ohm + radio_ohm), 1e-15))

    best, caution = max(product(own, repeat=len(counts)), key=return_loss_db), ""
    if (own_db := return_loss_db(best)) < GOOD_DB:
        caution = "No cable of the catalogue would match much better."
        trials = list(product(asked.pool(), repeat=len(counts)))
        best_db = max(map(return_loss_db, trials))
        if best_db >= max(NEAR_DB, own_db + MUCH_DB):
            good = [cables for cables in trials if return_loss_db(cables) >= min(GOOD_DB, best_db)]
            best = min(good, key=lambda cables: (sum(c not in own for c in cables), -return_loss_db(cables)))
            foreign = " and ".join(dict.fromkeys(name for name, cable in best if (name, cable) not in own))
            caution = f"Taken from the catalogue: {foreign}; those asked for would leave {format_db(own_db)} at best."
    return Match(best, shown_ohm(best), return_loss_db(best), caution)


def nearest_cable(asked: Asked, z_ohm: float) -> NamedCable:
    """The cable to lead on to an impedance, so that it turns the phase and little else.

    One asked for, if that will do.
    """
    own = min((asked.feeder, asked.match), key=partial(error_db, z_ohm))
    return own if error_db(z_ohm, own) <= EQUAL_DB else min((own, *asked.pool()), key=partial(error_db, z_ohm))


def error_db(z_ohm: float, cable: NamedCable) -> float:
    """By how much the current behind a quarter wave differs from that of a matched one."""
    return abs(20 * math.log10(cable[1].z0_ohm / z_ohm))
