"""Turning a length in the window until every pixel is repainted: bench, strip, card and three plots, offscreen."""

from __future__ import annotations

import os
import time

import numpy as np

from tests.benchmarks.timing import line
from tests.benchmarks.trees import tree

WANTED_MS = {4: 33, 16: 60, 64: 150}


def turns_ms(antennas: int, turns: int = 120) -> np.ndarray:
    """Milliseconds from a notch of the wheel to the last pixel, for each turn."""
    os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
    from app.look import LIGHT
    from app.run import make_application
    from app.window import Window

    application = make_application()
    window = Window(tree(antennas), None, look=LIGHT, remember=False)
    window.resize(1600, 1000)
    window.show()
    window.build_plots()
    window.store.select(("coax 3",))
    for _ in range(20):
        application.processEvents()
    found = []
    for n in range(turns):
        begin = time.perf_counter()
        window.bench.turn_length(1 if n % 40 < 20 else -1)
        while window.store.stale:
            application.processEvents()
        for _ in range(4):
            application.processEvents()
        found.append(1e3 * (time.perf_counter() - begin))
    window.close_without_asking()
    return np.array(found[5:])


def run() -> None:
    """Print the 95th percentiles."""
    print("Window (turn a length, all pixels repainted, 1600x1000 offscreen, 401 points; milliseconds, p95)")
    for antennas, wanted in WANTED_MS.items():
        found = turns_ms(antennas)
        p95 = float(np.percentile(found, 95))
        line(f"{antennas} antennas (median {np.median(found):.1f})", p95, f"wanted: at most {wanted}")
