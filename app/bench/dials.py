"""The antennas' dials at the mark, worked out once for an answer."""

from __future__ import annotations

import math

import numpy as np

from app.bench.pictures.base import Dial
from feedlib import Answer
from feedlib.phasors import amplitude_from_middle_db, phase_from_middle_deg


def dials_of(answer: Answer | None) -> dict[str, Dial]:
    """The dial of each antenna by id; empty without an answer."""
    if answer is None or not answer.antenna_ids:
        return {}
    mark = answer.mark
    angle, level = phase_from_middle_deg(mark)[0], amplitude_from_middle_db(mark)[0]
    largest = np.nanmax(level) if not np.isnan(level).all() else math.nan
    return {
        antenna: Dial(float(a), 10 ** (float(x - largest) / 20), float(share))
        for antenna, a, x, share in zip(mark.antenna_ids, angle, level, mark.antenna_share[0], strict=True)
    }
