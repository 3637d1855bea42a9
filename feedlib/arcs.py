"""The smallest arc that holds a set of angles: how wide it is, and where its middle is."""

from __future__ import annotations

import numpy as np

from feedlib.conventions import Array, ComplexArray


def smallest_arc_deg(current: ComplexArray, wanted_deg: Array) -> Array:
    """(F,) smallest arc that holds every arg(current) - wanted (N, F); currents of 0 are left out.

    Angles are taken against the first antenna, so that the common case, all within half a turn, needs no sorting.
    """
    if current.shape[-2] < 2:
        return np.zeros((*current.shape[:-2], current.shape[-1]))
    error = np.degrees(np.angle(current)) - wanted_deg
    angle = error - error[..., :1, :]
    angle -= 360 * np.rint(angle / 360)
    arc: Array = angle.max(axis=-2) - angle.min(axis=-2)
    wide = arc > 180
    if not current.all():
        wide |= (current == 0).any(axis=-2)
    if wide.any():
        arc[wide] = _arc_by_gaps_deg(np.where(current == 0, np.nan, error)[..., wide])
    return arc


def _arc_by_gaps_deg(angle_deg: Array) -> Array:
    """(F,) a turn less the largest gap between neighbouring angles (N, F); nan are left out; 0 for none."""
    ordered = np.sort(np.mod(angle_deg, 360), axis=-2)  # nan last
    # A left-out angle repeats the smallest one, and sorted again it opens no gap.
    ordered = np.sort(np.where(np.isnan(ordered), ordered[..., :1, :], ordered), axis=-2)
    gaps = np.diff(ordered, axis=-2, append=ordered[..., :1, :] + 360.0)
    found: Array = np.nan_to_num(360.0 - gaps.max(axis=-2))
    return found


def arc_middle_deg(angle_deg: Array) -> Array:
    """(F,) the middle of the smallest arc that holds all angles (N, F), 0 to 360.

    nan are left out; nan where no angle is left. Of several smallest arcs the one that begins lowest in 0 to 360.
    """
    if not angle_deg.size:
        return np.full(angle_deg.shape[-1], np.nan)
    ordered = np.sort(np.mod(angle_deg, 360.0), axis=0)  # nan last
    # A left-out angle repeats the smallest one, and sorted again it opens no gap.
    ordered = np.sort(np.where(np.isnan(ordered), ordered[:1], ordered), axis=0)
    gap = ordered - np.roll(ordered, 1, axis=0)
    gap[0] += 360.0
    after = np.argmax(np.nan_to_num(gap), axis=0)[None]
    start, largest = (np.take_along_axis(a, after, axis=0)[0] for a in (ordered, gap))
    middle_deg: Array = np.mod(start + (360.0 - largest) / 2, 360.0)
    return middle_deg
