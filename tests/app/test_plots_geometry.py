"""What the plots reckon without a screen: round axes, places of labels, distances, the Smith chart's circles."""

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.plots.match import vswr
from app.plots.placing import distances, pushed_apart
from app.plots.scale import Range, followed, frequency_ticks, nice_range, nice_step, pointed_hz, ticks
from app.plots.smith_grid import limit_circle, reactance_arc, reflection, resistance_circle


@pytest.mark.parametrize(
    ("span", "most", "step"), [(10, 10, 1), (10, 5, 2), (10, 4, 5), (10, 1, 10), (0.7, 8, 0.1), (36e6, 4, 10e6)]
)
def test_steps_are_one_two_or_five(span, most, step):
    assert nice_step(span, most) == pytest.approx(step)


def test_ranges_are_rounded_outwards_from_their_base():
    assert nice_range(Range(0, 26)) == Range(0, 30)
    assert nice_range(Range(-2.3, 2.3)) == Range(-3, 3)
    assert nice_range(Range(1, 1.43), base=1) == pytest.approx(Range(1, 1.5))


def test_an_axis_keeps_its_range_until_it_must_grow_or_is_far_too_wide():
    present = Range(0, 30)
    assert followed(None, Range(0, 26), settled=False) == present
    assert followed(present, Range(0, 29), settled=True) == present
    assert followed(present, Range(0, 31), settled=False) == Range(0, 35)
    assert followed(present, Range(0, 10), settled=False) == present
    assert followed(present, Range(0, 10), settled=True) == Range(0, 10)
    assert followed(present, Range(0, 24), settled=True) == present


def test_ticks_have_true_minus_signs_and_only_the_decimals_they_need():
    assert ticks(Range(-4, 4), 4)[1] == ["−4", "−2", "0", "2", "4"]
    assert ticks(Range(-0.3, 0.3), 4)[1] == ["−0.2", "0.0", "0.2"]
    assert ticks(Range(1, 20.8), 4)[1] == ["5", "10", "15", "20"]


@pytest.mark.parametrize(
    ("shown_hz", "room_px", "texts"),
    [
        ((850e6, 886e6), 300, ["850", "860", "870", "880 MHz"]),
        ((2.4e9, 2.5e9), 300, ["2.40", "2.42", "2.44", "2.46", "2.48", "2.50 GHz"]),
        ((2.4e9, 2.4835e9), 120, ["2.40", "2.45 GHz"]),
        ((1.42e9, 1.4204e9), 400, ["1420.0", "1420.1", "1420.2", "1420.3", "1420.4 MHz"]),
        ((100e3, 500e3), 300, ["100", "200", "300", "400", "500 kHz"]),
    ],
)
def test_frequencies_are_round_and_the_last_one_has_the_unit(shown_hz, room_px, texts):
    places_hz, found = frequency_ticks(Range(*shown_hz), room_px)
    assert found == texts
    unit_hz = {"MHz": 1e6, "GHz": 1e9, "kHz": 1e3}[texts[-1].split()[1]]
    np.testing.assert_allclose(places_hz, [float(text.split()[0]) * unit_hz for text in texts])


def test_a_place_on_the_axis_means_a_round_frequency_that_is_swept():
    swept = Range(860e6, 870e6)
    assert pointed_hz(864_123_456.0, 23e3, swept) == 864.12e6
    assert pointed_hz(859e6, 23e3, swept) == 860e6
    assert pointed_hz(871e6, 23e3, swept) == 870e6


def test_labels_that_touch_make_room_about_their_middle():
    assert pushed_apart([50, 50], 10, 0, 100) == [45, 55]
    assert pushed_apart([52, 50, 51], 10, 0, 100) == [61, 41, 51]
    assert pushed_apart([10, 90], 10, 0, 100) == [10, 90]
    assert pushed_apart([0, 0, 95], 10, 0, 100) == [0, 10, 95]
    assert pushed_apart([100, 100], 10, 0, 100) == [90, 100]
    assert pushed_apart([5, 5, 5], 10, 0, 10) == [0, 5, 10]


@given(st.lists(st.floats(-20, 320), max_size=12))
def test_labels_keep_their_order_their_distance_and_the_room(wanted):
    places = pushed_apart(wanted, 15, 0, 300)
    in_order = [places[n] for n in np.argsort(wanted, kind="stable")]
    assert all(b - a >= 15 - 1e-6 for a, b in pairwise(in_order))
    assert all(-1e-6 <= place <= 300 + 1e-6 for place in places)


def test_distance_is_to_the_line_between_points():
    x, y = np.array([0.0, 10.0, 20.0]), np.array([[0.0, 0.0, np.nan], [0.0, 10.0, 10.0]])
    np.testing.assert_allclose(distances(x, y, (5, 3)), [3, math.sqrt(2)])
    np.testing.assert_allclose(distances(x, y, (13, 4)), [5, 6])
    np.testing.assert_allclose(distances(x[:1], y[:, :1], (3, 4)), [5, 5])
    assert distances(x, np.full((1, 3), np.nan), (0, 0)) == [np.inf]


def test_reflection_of_short_open_and_reference():
    z_ohm = np.array([0, 50, np.inf, 50j, 150, np.nan])
    np.testing.assert_allclose(reflection(z_ohm, 50), [-1, 0, 1, 1j, 0.5, np.nan], atol=1e-12)


@pytest.mark.parametrize(("r", "x"), [(0.2, 2.0), (1.0, math.inf), (5.0, 0.5)])
def test_circles_of_resistance_hold_it_and_end_at_their_reactance(r, x):
    gamma = resistance_circle(r, x)
    z = (1 + gamma[1:-1]) / (1 - gamma[1:-1])
    np.testing.assert_allclose(z.real, r, rtol=1e-6)
    assert np.abs(z.imag).max() <= x
    assert 0 in np.round(z.imag, 9)
    if math.isfinite(x):
        ends = (1 + gamma[[0, -1]]) / (1 - gamma[[0, -1]])
        np.testing.assert_allclose(ends, [r + 1j * x, r - 1j * x], rtol=1e-6)


@pytest.mark.parametrize(("x", "r"), [(0.2, 1.0), (-1.0, 5.0), (5.0, math.inf), (-0.2, math.inf)])
def test_arcs_of_reactance_hold_it_and_stay_in_the_unit_circle(x, r):
    gamma = reactance_arc(x, r)
    assert np.abs(gamma).max() <= 1 + 1e-12
    z = (1 + gamma[:-1]) / (1 - gamma[:-1])
    np.testing.assert_allclose(z.imag, x, rtol=1e-6)
    assert gamma[0] == pytest.approx((1j * x - 1) / (1j * x + 1))
    assert gamma[-1] == pytest.approx(1 if math.isinf(r) else (r + 1j * x - 1) / (r + 1j * x + 1))


@pytest.mark.parametrize("source_ohm", [50 + 0j, 75 + 0j, 30 - 40j])
def test_the_limit_circle_has_the_return_loss_at_its_source(source_ohm):
    gamma = limit_circle(14.0, source_ohm, 50.0)
    z = 50 * (1 + gamma) / (1 - gamma)
    reflected = np.abs((z - source_ohm.conjugate()) / (z + source_ohm))
    np.testing.assert_allclose(-20 * np.log10(reflected), 14)


def test_vswr_of_a_share():
    np.testing.assert_allclose(vswr(np.array([0, 1 / 9, 1 / 4, 1, 1.2])), [1, 2, 3, np.inf, np.inf])
