"""Phase and amplitude from the middle: antennas side by side at one voltage, so that each current is V/Z by hand."""

import numpy as np
import pytest
from hypothesis import given, settings

from feedlib import Answer, solve
from feedlib.phasors import amplitude_from_middle_db, arc_middle_deg, phase_from_middle_deg
from tests.plans import Sketch, random_plans

few = settings(max_examples=60, deadline=None)


def side_by_side(*antennas: tuple[complex, float, float], idle: int = 0, points: int = 1) -> Answer:
    """The answer for antennas (impedance, wanted amplitude and phase) on one T joint, and some joined to nothing."""
    sketch = Sketch(868e6, 870e6 if points > 1 else None, points)
    radio = sketch.add("radio")
    tee = sketch.add("tee", ports=max(3, len(antennas) + 1))
    sketch.join(f"{radio}:1", f"{tee}:1")
    for number, (z_ohm, amplitude, phase_deg) in enumerate(antennas):
        antenna = sketch.antenna(z_ohm, target={"amplitude": amplitude, "phase_deg": phase_deg})
        sketch.join(f"{tee}:{number + 2}", f"{antenna}:1")
    for _ in range(idle):
        sketch.antenna(50)
    return solve(sketch.plan())


@pytest.mark.parametrize(
    ("angles_deg", "middle_deg"),
    [
        ([70], 70),
        ([0, 90], 45),
        ([350, 20], 5),
        ([-10, 20], 5),
        ([100, 200, 250], 175),
        ([300, 0, 30], 345),
        ([10, 130, 260], 15),  # gaps 120, 130, 110: the arc runs from 260 through 10 to 130
        ([np.nan, 350, np.nan, 20], 5),
        ([0, 180], 90),  # both arcs are half a turn; the one that begins at 0
        ([720.0, 720.0], 0),
    ],
)
def test_middle_of_the_smallest_arc(angles_deg, middle_deg):
    found = arc_middle_deg(np.array(angles_deg, float)[:, None])
    np.testing.assert_allclose(found, [middle_deg], atol=1e-9)


def test_middle_is_found_at_each_frequency_by_itself():
    found = arc_middle_deg(np.array([[0.0, 350.0, np.nan], [90.0, 20.0, np.nan]]))
    np.testing.assert_allclose(found, [45, 5, np.nan])


def test_phase_is_that_of_the_current_from_the_middle():
    # arg I = 0, -53.13, 36.87 degrees against the voltage: an arc of 90 degrees about -8.13.
    answer = side_by_side((50, 1, 0), (30 + 40j, 1, 0), (40 - 30j, 1, 0), points=3)
    angle_deg = np.degrees(np.arctan2(3, 4))
    expected = [45 - angle_deg, -45, 45]
    np.testing.assert_allclose(phase_from_middle_deg(answer), [expected] * 3, atol=1e-9)
    np.testing.assert_allclose(phase_from_middle_deg(answer.mark), [expected], atol=1e-9)


def test_wanted_phase_is_taken_off_across_the_turn():
    # Equal currents, wanted 0, 90, 180 and 270 degrees less small errors: errors of 4, 0, -2, 1 are left.
    answer = side_by_side((50, 1, -4), (50, 1, 360), (50, 1, 2), (50, 1, -361))
    np.testing.assert_allclose(phase_from_middle_deg(answer), [[3, -1, -3, 0]], atol=1e-9)


def test_amplitude_is_in_decibels_from_the_mean_of_the_extremes():
    # |I| as 1 : 1/2 : 1/4, wanted 1 : 1 : 1/2; so 0, -6.02, -6.02 dB about -3.01.
    answer = side_by_side((50, 1, 0), (100, 1, 0), (200, 0.5, 0), points=2)
    half_db = 10 * np.log10(2)
    np.testing.assert_allclose(amplitude_from_middle_db(answer), [[half_db, -half_db, -half_db]] * 2, atol=1e-9)
    np.testing.assert_allclose(amplitude_from_middle_db(answer.mark), [[half_db, -half_db, -half_db]], atol=1e-9)


def test_one_antenna_is_its_own_middle():
    answer = side_by_side((30 + 40j, 3, 77))
    np.testing.assert_allclose(phase_from_middle_deg(answer), [[0]], atol=1e-9)
    np.testing.assert_allclose(amplitude_from_middle_db(answer), [[0]], atol=1e-12)


def test_antennas_without_current_have_no_value_and_do_not_move_the_others():
    answer = side_by_side((50, 1, 0), (100, 1, 10), idle=1)
    half_db = 10 * np.log10(2)
    np.testing.assert_allclose(phase_from_middle_deg(answer), [[5, -5, np.nan]], atol=1e-9)
    np.testing.assert_allclose(amplitude_from_middle_db(answer), [[half_db, -half_db, np.nan]], atol=1e-9)


def test_no_current_at_all_and_no_antenna_at_all():
    alone = side_by_side(idle=2, points=2)
    assert np.isnan(phase_from_middle_deg(alone)).all()
    assert np.isnan(amplitude_from_middle_db(alone)).all()
    none = side_by_side(points=2)
    assert phase_from_middle_deg(none).shape == amplitude_from_middle_db(none).shape == (2, 0)


@few
@given(random_plans())
def test_extremes_are_half_the_balance_to_either_side(plan):
    answer = solve(plan)
    fed = answer.antenna_current_a != 0
    phase_deg, amplitude_db = phase_from_middle_deg(answer), amplitude_from_middle_db(answer)
    np.testing.assert_array_equal(np.isnan(phase_deg), ~fed)
    np.testing.assert_array_equal(np.isnan(amplitude_db), ~fed)
    for n in np.flatnonzero(fed.any(axis=1)):
        half_deg = answer.phase_balance_deg[n] / 2
        assert [np.nanmin(phase_deg[n]), np.nanmax(phase_deg[n])] == pytest.approx([-half_deg, half_deg], abs=1e-6)
        if fed[n].all():
            half_db = answer.amplitude_balance_db[n] / 2
            extremes_db = [np.min(amplitude_db[n]), np.max(amplitude_db[n])]
            assert extremes_db == pytest.approx([-half_db, half_db], abs=1e-6)
