"""Where things stand on a plot: labels pushed apart, the curve nearest to the pointer; pixels only, no matplotlib."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from feedlib.conventions import Array


def pushed_apart(wanted: Sequence[float], gap: float, low: float, high: float) -> list[float]:
    """Places at least `gap` apart, in the order and as near to the wanted ones as can be; inside low to high.

    Places that touch move as one block, whose middle is the middle of what its members want. Where there is no room
    for all, they stand evenly from low to high.
    """
    count = len(wanted)
    if count > 1 and (count - 1) * gap > high - low:
        gap = (high - low) / (count - 1)
    order = np.argsort(wanted, kind="stable")
    blocks: list[tuple[float, int]] = []  # first place, members
    for place in order:
        start, members = wanted[place], 1
        start = min(max(start, low), high)
        while blocks and start < blocks[-1][0] + blocks[-1][1] * gap:
            before, others = blocks.pop()
            offset = others * gap
            start = (before * others + (start - offset) * members) / (others + members)
            members += others
            start = min(max(start, low), high - (members - 1) * gap)
        blocks.append((start, members))
    places = [0.0] * count
    settled = (start + n * gap for start, members in blocks for n in range(members))
    for place, where in zip(order, settled, strict=True):
        places[place] = where
    return places


def distances(x: Array, y: Array, at: tuple[float, float]) -> Array:
    """(N,) how far each curve is from a point: x (F,) or (N, F), y (N, F); inf for a curve without a place.

    Between two points a curve is straight, where one is nan there is none.
    """
    px, py = np.broadcast_arrays(x - at[0], y - at[1])
    if px.shape[-1] == 1:
        px, py = np.repeat(px, 2, axis=-1), np.repeat(py, 2, axis=-1)
    dx, dy = np.diff(px), np.diff(py)
    square = dx * dx + dy * dy
    share = -(px[:, :-1] * dx + py[:, :-1] * dy) / np.where(square == 0, 1.0, square)
    share = np.clip(share, 0.0, 1.0)
    apart = np.hypot(px[:, :-1] + share * dx, py[:, :-1] + share * dy)
    nearest: Array = np.where(np.isnan(apart), np.inf, apart).min(axis=-1, initial=np.inf)
    return nearest
