"""The antennas' currents against what is wanted of them, as a dial or a curve shows them; must not know limits.

Both figures are taken from the middle, so that all of them lie within half a limit to either side exactly when the
balance holds that limit. With Figures of F frequencies and N antennas both are (F, N), nan where I = 0.
"""

from __future__ import annotations

import numpy as np

from feedlib.answer import Figures
from feedlib.arcs import arc_middle_deg
from feedlib.conventions import Array


def phase_from_middle_deg(figures: Figures) -> Array:
    """(F, N) arg(I) - target phase, from the middle of the smallest arc that holds them all; -180 to 180."""
    current = figures.antenna_current_a
    wanted_deg = [antenna.target.phase_deg for *_, antenna in figures._solved.antennas]
    error_deg = np.where(current == 0, np.nan, np.degrees(np.angle(current)) - wanted_deg)
    from_middle_deg: Array = np.mod(error_deg - arc_middle_deg(error_deg.T)[:, None] + 180.0, 360.0) - 180.0
    return from_middle_deg


def amplitude_from_middle_db(figures: Figures) -> Array:
    """(F, N) 20 log10(|I| / target amplitude), from the mean of its largest and smallest."""
    wanted = [antenna.target.amplitude for *_, antenna in figures._solved.antennas]
    size = np.abs(figures.antenna_current_a) / wanted
    level_db = 20 * np.log10(np.where(size == 0, np.nan, size))
    largest, smallest = (pick.reduce(level_db, axis=-1, initial=np.nan) for pick in (np.fmax, np.fmin))
    from_middle_db: Array = level_db - (largest + smallest)[:, None] / 2
    return from_middle_db
