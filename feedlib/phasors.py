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
    current = figures.antenna_current_a.T
    wanted_deg = np.array([antenna.target.phase_deg for *_, antenna in figures._solved.antennas])
    error_deg = np.where(current == 0, np.nan, np.degrees(np.angle(current)) - wanted_deg[:, None])
    return _less_whole_turns_deg(error_deg - _middle_deg(error_deg)).T


def amplitude_from_middle_db(figures: Figures) -> Array:
    """(F, N) 20 log10(|I| / target amplitude), from the mean of its largest and smallest."""
    wanted = [antenna.target.amplitude for *_, antenna in figures._solved.antennas]
    size = np.abs(figures.antenna_current_a) / wanted
    level_db = 20 * np.log10(np.where(size == 0, np.nan, size))
    largest, smallest = (pick.reduce(level_db, axis=-1, initial=np.nan) for pick in (np.fmax, np.fmin))
    from_middle_db: Array = level_db - (largest + smallest)[:, None] / 2
    return from_middle_db


def _middle_deg(angle_deg: Array) -> Array:
    """(F,) the middle of the smallest arc that holds all angles (N, F), but for whole turns.

    Taken against the first antenna the common case, all within half a turn, needs no sorting.
    """
    if len(angle_deg):
        against_deg = _less_whole_turns_deg(angle_deg - angle_deg[0])
        low_deg, high_deg = against_deg.min(axis=0), against_deg.max(axis=0)
        if (high_deg - low_deg < 180.0).all():
            middle_deg: Array = angle_deg[0] + (low_deg + high_deg) / 2
            return middle_deg
    return arc_middle_deg(angle_deg)


def _less_whole_turns_deg(angle_deg: Array) -> Array:
    """The angles from -180 to 180."""
    turned_deg: Array = angle_deg - 360.0 * np.round(angle_deg / 360.0)
    return turned_deg
