"""S-parameters written as a Touchstone file of version 1; opens no file, knows no plan."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from feedlib.conventions import Array, ComplexArray
from feedlib.touchstone import TouchstoneError

_PAIRS_PER_LINE = 4  # at most, by the specification


def write_touchstone(frequency_hz: Array, s: ComplexArray, reference_ohm: float, comments: Sequence[str] = ()) -> str:
    """The text of a file in Hz, Re and Im with all digits, every port at the one reference.

    frequency_hz : (F,) not below zero, strictly increasing. s : (F, P, P), finite, else TouchstoneError. The
    comments come first; the format knows only ASCII, so any other character becomes a question mark.
    """
    not_finite = np.flatnonzero(~np.isfinite(s).all(axis=(1, 2)))
    if not_finite.size:
        bad_hz = float(frequency_hz[not_finite[0]])
        raise TouchstoneError(f"S must be finite to be written to a Touchstone file, but is not at {bad_hz:.9g} Hz")
    lines = [f"! {_ascii(line)}" for comment in comments for line in comment.splitlines()]
    lines.append(f"# Hz S RI R {float(reference_ohm)!r}".removesuffix(".0"))
    if s.shape[-1] == 2:
        s = s.transpose(0, 2, 1).reshape(-1, 1, 4)  # two ports stand on one line, in the order 11 21 12 22
    for one_frequency_hz, rows in zip(frequency_hz.tolist(), s, strict=True):
        first, *others = _data_lines(rows)
        lines += [f"{float(one_frequency_hz)!r} {first}", *others]
    return "\n".join(lines) + "\n"


def _data_lines(rows: ComplexArray) -> Iterator[str]:
    """The lines of one data set, each matrix row (rows, pairs) on lines of its own."""
    for row in np.stack([rows.real, rows.imag], axis=-1).reshape(len(rows), -1).tolist():
        for start in range(0, len(row), 2 * _PAIRS_PER_LINE):
            yield " ".join(map(repr, row[start : start + 2 * _PAIRS_PER_LINE]))


def _ascii(text: str) -> str:
    return "".join(character if " " <= character <= "~" else "?" for character in text)
