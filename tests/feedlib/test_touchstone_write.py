"""Touchstone files written, read back and read by scikit-rf.

[1.1] Touchstone File Format Specification Rev 1.1, IBIS Open Forum (2002).
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
import skrf
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal

from feedlib.touchstone import TouchstoneError, read_touchstone
from feedlib.touchstone_write import write_touchstone


def random_s(ports: int, points: int, seed: int = 1) -> np.ndarray:
    """Matrices (F, P, P) with nothing symmetrical about them."""
    rng = np.random.default_rng(seed)
    shape = (points, ports, ports)
    return (rng.normal(size=shape) + 1j * rng.normal(size=shape)) / (2 * ports)


@pytest.mark.parametrize(("ports", "pairs_of_a_row"), [(3, [3]), (4, [4]), (6, [4, 2]), (10, [4, 4, 2])])
def test_rows_continue_after_four_pairs(ports: int, pairs_of_a_row: list[int]) -> None:
    """[1.1], section on 5 ports and above."""
    s = random_s(ports, 2)
    text = write_touchstone(np.array([1e9, 2e9]), s, 50)
    numbers = [len(line.split()) for line in text.splitlines()[1:]]
    of_a_set = [2 * pairs for _ in range(ports) for pairs in pairs_of_a_row]
    of_a_set[0] += 1
    assert numbers == of_a_set * 2
    assert_array_equal(read_touchstone(text, f"part.s{ports}p").s, s.transpose(1, 2, 0))


def test_written_text() -> None:
    s = np.array([[[0.1, 0.01 + 0.02j], [0.9 - 0.1j, 1 / 3]]])
    text = write_touchstone(np.array([868.1e6]), s, 50, comments=["two lines,\none of them the last", "A–B\x07C"])
    assert text == (
        "! two lines,\n! one of them the last\n! A?B?C\n# Hz S RI R 50\n"
        "868100000.0 0.1 0.0 0.9 -0.1 0.01 0.02 0.3333333333333333 0.0\n"
    )
    assert "# Hz S RI R 37.5\n" in write_touchstone(np.array([1.0]), s, 37.5)


def test_s_that_is_not_finite_is_not_written() -> None:
    s = np.array([[[0.5]], [[np.nan]]])
    with pytest.raises(TouchstoneError, match="is not at 868100000 Hz"):
        write_touchstone(np.array([1e6, 868.1e6]), s, 50)


@given(st.data())
def test_what_is_written_is_read_back_exactly(draw: st.DataObject) -> None:
    ports = draw.draw(st.integers(1, 6))
    frequencies = st.lists(st.floats(0, 1e12), min_size=1, max_size=4, unique=True)
    frequency_hz = np.sort(draw.draw(frequencies))
    count = 2 * len(frequency_hz) * ports**2
    parts = st.lists(st.floats(-1e300, 1e300), min_size=count, max_size=count)
    s = np.array(draw.draw(parts)).view(np.complex128).reshape(-1, ports, ports)
    reference_ohm = draw.draw(st.floats(1e-3, 1e6))
    comments = draw.draw(st.lists(st.text(max_size=20), max_size=2))
    data = read_touchstone(write_touchstone(frequency_hz, s, reference_ohm, comments), f"x.s{ports}p")
    assert_array_equal(data.frequency_hz, frequency_hz)
    assert_array_equal(data.s, s.transpose(1, 2, 0))
    assert data.reference_ohm.tolist() == [reference_ohm] * ports


@pytest.mark.parametrize("ports", [1, 2, 3, 5, 6])
def test_scikit_rf_reads_what_is_written(ports: int, tmp_path: Path) -> None:
    frequency_hz, s = np.linspace(863e6, 870e6, 11), random_s(ports, 11, seed=ports)
    path = tmp_path / f"harness.s{ports}p"
    path.write_text(write_touchstone(frequency_hz, s, 75, ["a harness"]), encoding="ascii")
    network = skrf.Network(str(path))
    assert_allclose(network.f, frequency_hz, rtol=1e-15)
    assert_array_equal(network.s, s)
    assert_array_equal(network.z0, np.full((11, ports), 75))
