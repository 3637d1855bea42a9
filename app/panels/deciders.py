"""Which parts decide a figure at the mark. Knows no widgets."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from feedlib import Answer
from feedlib.conventions import Array
from feedlib.parts import Antenna, Radio, Target


def deciders(answer: Answer, limit: str) -> tuple[str, ...]:
    """The parts to look at for a limit: what a click on its verdict selects."""
    return _DECIDERS[limit](answer)


def _radio(answer: Answer) -> tuple[str, ...]:
    return tuple(p.id for p in answer.plan.parts if isinstance(p.part, Radio))


def _loudest(answer: Answer) -> tuple[str, ...]:
    """The antenna whose current is furthest from the middle of all, in dB against what is wanted."""
    current_a = np.abs(answer.mark.antenna_current_a[0])
    if not current_a.size:
        return ()
    if not current_a.all():
        return (answer.antenna_ids[int(np.argmin(current_a))],)
    level_db = 20 * np.log10(current_a / [target.amplitude for target in _targets(answer)])
    return _furthest(answer, level_db - level_db.mean())


def _most_turned(answer: Answer) -> tuple[str, ...]:
    """The antenna whose phase is furthest from the middle of all, against what is wanted; without current: none."""
    current_a = answer.mark.antenna_current_a[0]
    if not current_a.any():
        return ()
    turned = np.exp(-1j * np.radians([target.phase_deg for target in _targets(answer)]))
    unit = np.where(current_a == 0, 0, current_a * turned / np.where(current_a == 0, 1, np.abs(current_a)))
    off_deg = np.degrees(np.angle(unit * unit.sum().conj()))
    return _furthest(answer, np.where(current_a == 0, 0, off_deg))


def _most_lossy(answer: Answer) -> tuple[str, ...]:
    shares = {part_id: float(share[0]) for part_id, share in answer.mark.part_loss_share.items()}
    return (max(shares, key=shares.__getitem__),) if shares else ()


def _closest_pair(answer: Answer) -> tuple[str, ...]:
    coupled = np.abs(answer.mark.harness_s[0, 1:, 1:])
    if len(coupled) < 2:
        return ()
    np.fill_diagonal(coupled, -1)
    pair = np.unravel_index(np.argmax(coupled), coupled.shape)
    return tuple(answer.antenna_ids[n] for n in sorted(map(int, pair)))


def _targets(answer: Answer) -> list[Target]:
    return [p.part.target for p in answer.plan.parts if isinstance(p.part, Antenna)]


def _furthest(answer: Answer, off: Array) -> tuple[str, ...]:
    """The last of those that are equally far: the first antenna is what people measure the others against."""
    size = np.abs(off)
    return (answer.antenna_ids[int(np.flatnonzero(size >= size.max() - 1e-9)[-1])],)


_DECIDERS: dict[str, Callable[[Answer], tuple[str, ...]]] = {
    "return_loss_db": _radio,
    "amplitude_balance_db": _loudest,
    "phase_balance_deg": _most_turned,
    "harness_loss_db": _most_lossy,
    "isolation_db": _closest_pair,
}
