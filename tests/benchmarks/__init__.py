"""Benchmarks: figures, not tests. `python -m tests.benchmarks` prints every ratio, each from one interleaved run."""
