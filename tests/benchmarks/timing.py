"""Interleaved timing: each round gives every candidate its turn, so that a noisy machine is noisy for all of them."""

from __future__ import annotations

import gc
import time
from collections.abc import Callable, Mapping

import numpy as np

TURN_S = 0.03


def interleaved(candidates: Mapping[str, Callable[[], object]], rounds: int) -> dict[str, np.ndarray]:
    """Seconds of one run of each candidate, one figure a round, after one round that does not count.

    A turn lasts at least TURN_S, by running a quick candidate several times, so that none is measured on the cold
    caches that another left behind.
    """
    seconds: dict[str, list[float]] = {name: [] for name in candidates}
    for n in range(rounds + 1):
        for name, work in candidates.items():
            gc.collect()
            begin, runs = time.perf_counter(), 0
            while runs == 0 or time.perf_counter() - begin < TURN_S:
                work()
                runs += 1
            if n:
                seconds[name].append((time.perf_counter() - begin) / runs)
    return {name: np.array(s) for name, s in seconds.items()}


def line(what: str, figure: float, wanted: str) -> None:
    """Print one result."""
    print(f"  {what:66s} {figure:8.2f}   ({wanted})")
