"""Interleaved timing: each round runs every candidate once, so that a noisy machine is noisy for all of them."""

from __future__ import annotations

import gc
import time
from collections.abc import Callable, Mapping

import numpy as np


def interleaved(candidates: Mapping[str, Callable[[], object]], rounds: int) -> dict[str, np.ndarray]:
    """Seconds of each candidate in each round, after one round that does not count."""
    seconds: dict[str, list[float]] = {name: [] for name in candidates}
    for n in range(rounds + 1):
        for name, work in candidates.items():
            gc.collect(0)
            begin = time.perf_counter()
            work()
            if n:
                seconds[name].append(time.perf_counter() - begin)
    return {name: np.array(s) for name, s in seconds.items()}


def line(what: str, figure: float, wanted: str) -> None:
    """Print one result."""
    print(f"  {what:66s} {figure:8.2f}   ({wanted})")
