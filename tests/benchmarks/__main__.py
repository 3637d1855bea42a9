"""Run the benchmarks: `python -m tests.benchmarks [solver] [window] [start]`."""

from __future__ import annotations

import sys

from tests.benchmarks import solver, start, window

PARTS = {"solver": solver.run, "window": window.run, "start": start.run}

for name in sys.argv[1:] or PARTS:
    PARTS[name]()
