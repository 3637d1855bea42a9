"""Touchstone data read, interpolated and renormalised, against published examples, scikit-rf and hand arithmetic.

[1.1] Touchstone File Format Specification Rev 1.1, IBIS Open Forum (2002). [2] Touchstone File Format Specification
Version 2.0, IBIS Open Forum (2009), and Version 2.1 (2024).
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
import skrf
from numpy.testing import assert_allclose, assert_array_equal
from skrf.network import g2s, h2s, renormalize_s, y2s, z2s

from feedlib.conventions import Array, ComplexArray
from feedlib.scatter import Undetermined, renormalised
from feedlib.touchstone import NetworkData, interpolate, read_touchstone
from feedlib.touchstone_write import write_touchstone

TWO_PORT_ROW = "0.1 0.0 0.9 -0.1 0.01 0.02 0.2 0.0"
TWO_PORT_S = [[0.1, 0.01 + 0.02j], [0.9 - 0.1j, 0.2]]
THREE_PORT_ROWS = ".1 0 .12 0 .13 0\n.21 0 .22 0 .23 0\n.31 0 .32 0 .33 0"
THREE_PORT_S = [[0.1, 0.12, 0.13], [0.21, 0.22, 0.23], [0.31, 0.32, 0.33]]
CLEAN_TWO_PORT = f"# MHz S RI R 50\n100 {TWO_PORT_ROW}\n200 {TWO_PORT_ROW}\n"


def random_s(ports: int, points: int, seed: int = 1) -> np.ndarray:
    """Matrices (F, P, P) with nothing symmetrical about them."""
    rng = np.random.default_rng(seed)
    shape = (points, ports, ports)
    return (rng.normal(size=shape) + 1j * rng.normal(size=shape)) / (2 * ports)


def version_2(*middle: str, data: str, option_line: str = "# MHz S RI R 50", end: str = "[End]") -> str:
    return "\n".join(["[Version] 2.0", option_line, *middle, "[Network Data]", data, end]) + "\n"


# --- Values


def test_magnitude_and_angle() -> None:
    data = read_touchstone("# MHz S MA R 50\n2.000 0.894 -12.136\n", "load.s1p")
    assert data.frequency_hz.tolist() == [2e6]
    assert_allclose(data.s[0, 0, 0], 0.87402029 - 0.1879482j, atol=1e-7)


def impedance_ohm(data: NetworkData) -> complex:
    gamma = complex(data.s[0, 0, 0])
    return float(data.reference_ohm[0]) * (1 + gamma) / (1 - gamma)


def test_impedance_of_version_1_is_normalised_to_the_reference() -> None:
    data = read_touchstone("# MHz Z MA R 75\n100 0.99 -4\n", "load.s1p")
    assert_allclose(impedance_ohm(data), 74.069131 - 5.1794182j, rtol=1e-7)


def test_impedance_of_version_2_is_in_ohms() -> None:
    """[2] example 10."""
    middle = ("[Number of Ports] 1", "[Number of Frequencies] 1", "[Reference] 20")
    text = version_2(*middle, data="100 74.25 -4", option_line="# MHz Z MA")
    data = read_touchstone(text, "load.ts")
    assert data.reference_ohm.tolist() == [20]
    assert_allclose(impedance_ohm(data), 74.069131 - 5.1794182j, rtol=1e-7)


def test_the_three_number_formats_say_the_same() -> None:
    s = random_s(3, 2)[0].ravel()
    pairs = {
        "RI": (s.real, s.imag),
        "MA": (np.abs(s), np.angle(s, deg=True)),
        "DB": (20 * np.log10(np.abs(s)), np.angle(s, deg=True)),
    }
    for number_format, columns in pairs.items():
        rows = np.column_stack(columns).reshape(3, 6)
        lines = "\n".join(" ".join(map(repr, row)) for row in rows.tolist())
        data = read_touchstone(f"# Hz S {number_format}\n1 {lines}\n", "part.s3p")
        assert_allclose(data.s[..., 0].ravel(), s, rtol=1e-13)


# --- Immittances, against scikit-rf; the ideal transformer by hand

IMMITTANCES = {
    "Z": np.array([[30 + 20j, 12 - 5j], [7 + 3j, 80 - 10j]]),
    "Y": np.array([[0.02 - 0.01j, -0.004j], [-0.003 + 0.001j, 0.011 + 0.02j]]),
    "H": np.array([[25 + 5j, 0.3 - 0.1j], [-2 + 1j, 0.004 + 0.002j]]),
    "G": np.array([[0.01 + 0.003j, -0.2 + 0.1j], [1.5 - 0.5j, 60 + 5j]]),
}
ORACLE = {"Z": z2s, "Y": y2s, "H": h2s, "G": g2s}
OHM_POWER = {
    "Z": np.array([[1, 1], [1, 1]]),
    "Y": np.array([[-1, -1], [-1, -1]]),
    "H": np.array([[1, 0], [0, -1]]),
    "G": np.array([[-1, 0], [0, 1]]),
}
"""The unit of each entry is ohm to this power: what version 1 divides by R to the same power."""


def in_columns(matrix: np.ndarray) -> str:
    return " ".join(f"{value.real!r} {value.imag!r}" for value in matrix.T.ravel().tolist())


@pytest.mark.parametrize("parameter", "ZYHG")
def test_immittances_of_version_1_are_normalised(parameter: str) -> None:
    matrix = IMMITTANCES[parameter]
    stored = matrix / 75.0 ** OHM_POWER[parameter]
    data = read_touchstone(f"# MHz {parameter} RI R 75\n100 {in_columns(stored)}\n", "part.s2p")
    assert_allclose(data.s[..., 0], ORACLE[parameter](matrix[np.newaxis], z0=75)[0], rtol=1e-12)


@pytest.mark.parametrize("parameter", "ZYHG")
def test_immittances_of_version_2_are_not_normalised(parameter: str) -> None:
    matrix = IMMITTANCES[parameter]
    text = version_2(
        "[Number of Ports] 2",
        "[Two-Port Data Order] 21_12",
        "[Number of Frequencies] 1",
        "[Reference] 50 75",
        data=f"100 {in_columns(matrix)}",
        option_line=f"# MHz {parameter} RI R 10",
    )
    data = read_touchstone(text, "part.s2p")
    assert data.reference_ohm.tolist() == [50, 75]
    assert_allclose(data.s[..., 0], ORACLE[parameter](matrix[np.newaxis], z0=[50, 75])[0], rtol=1e-12)


@pytest.mark.parametrize("parameter", "ZY")
def test_immittances_of_three_ports(parameter: str) -> None:
    matrix = random_s(3, 1)[0] + np.eye(3)
    rows = "\n".join(" ".join(f"{z.real!r} {z.imag!r}" for z in row) for row in matrix.tolist())
    data = read_touchstone(f"# Hz {parameter} RI R 1\n1 {rows}\n", "part.s3p")
    assert_allclose(data.s[..., 0], ORACLE[parameter](matrix[np.newaxis], z0=1)[0], rtol=1e-12)


@pytest.mark.parametrize(("parameter", "row"), [("H", "0 0 -2 0 2 0 0 0"), ("G", "0 0 .5 0 -.5 0 0 0")])
def test_ideal_transformer_which_has_neither_z_nor_y(parameter: str, row: str) -> None:
    """V1 = 2 V2, I2 = -2 I1: S11 = (n^2 - 1)/(n^2 + 1) = 0.6, S21 = 2n/(n^2 + 1) = 0.8."""
    data = read_touchstone(f"# MHz {parameter} RI R 50\n100 {row}\n", "part.s2p")
    assert_allclose(data.s[..., 0], [[0.6, 0.8], [0.8, -0.6]], rtol=1e-15)


def test_resistances_for_each_port_normalise_z_by_the_root_of_their_product() -> None:
    """IBIS TSIRD 5.1: version 1 data stay normalised; Z12 belongs to both ports."""
    matrix = IMMITTANCES["Z"]
    stored = matrix / np.sqrt(np.outer([50, 75], [50, 75]))
    data = read_touchstone(f"# MHz Z RI R 50 75\n100 {in_columns(stored)}\n", "part.s2p")
    assert_allclose(data.s[..., 0], z2s(matrix[np.newaxis], z0=[50, 75])[0], rtol=1e-12)


# --- Order of the entries


def test_two_ports_stand_in_columns() -> None:
    """[1.1]: 11, 21, 12, 22."""
    assert_array_equal(read_touchstone(CLEAN_TWO_PORT, "part.s2p").s[..., 0], TWO_PORT_S)


@pytest.mark.parametrize(("order", "s"), [("21_12", TWO_PORT_S), ("12_21", np.transpose(TWO_PORT_S))])
def test_two_port_data_order_of_version_2(order: str, s: np.ndarray) -> None:
    middle = ("[Number of Ports] 2", f"[Two-Port Data Order] {order}", "[Number of Frequencies] 1")
    data = read_touchstone(version_2(*middle, data=f"100 {TWO_PORT_ROW}"), "part.s2p")
    assert_array_equal(data.s[..., 0], s)


def test_three_ports_stand_in_rows() -> None:
    """[1.1], section on 3 ports."""
    data = read_touchstone(f"# GHz S RI\n1 {THREE_PORT_ROWS}\n", "part.S3P")
    assert_array_equal(data.s[..., 0], THREE_PORT_S)
    assert data.s.shape == (3, 3, 1)


@pytest.mark.parametrize("number_format", ["ri", "ma", "db"])
@pytest.mark.parametrize("ports", [1, 2, 3, 5, 6])
def test_what_scikit_rf_writes_is_read(ports: int, number_format: str, tmp_path: Path) -> None:
    frequency = skrf.Frequency(863, 870, 11, unit="MHz")
    network = skrf.Network(frequency=frequency, s=random_s(ports, 11, seed=ports), z0=75)
    network.write_touchstone("measured", dir=str(tmp_path), form=number_format)
    name = f"measured.s{ports}p"
    data = read_touchstone((tmp_path / name).read_text(encoding="utf-8"), name)
    assert_allclose(data.frequency_hz, network.f, rtol=1e-15)
    assert_allclose(data.s, network.s.transpose(1, 2, 0), rtol=1e-12)
    assert data.reference_ohm.tolist() == [75] * ports


def test_data_are_read_only() -> None:
    data = read_touchstone(CLEAN_TWO_PORT, "part.s2p")
    for array in (data.frequency_hz, data.s, data.reference_ohm):
        with pytest.raises(ValueError, match="read-only"):
            array[...] = 0


# --- Interpolation


def test_interpolation_is_linear_in_re_and_im() -> None:
    rng = np.random.default_rng(3)
    known_hz = np.cumsum(rng.uniform(0.1, 1, 30))
    s = random_s(3, 30)
    data = read_touchstone(write_touchstone(known_hz, s, 50), "part.s3p")
    wanted_hz = rng.uniform(known_hz[0], known_hz[-1], 200)
    found = interpolate(data, wanted_hz)
    assert found.shape == (3, 3, 200)
    for row in range(3):
        for column in range(3):
            expected = np.interp(wanted_hz, known_hz, s[:, row, column])
            assert_allclose(found[row, column], expected, rtol=1e-12, atol=1e-15)


def test_interpolation_gives_the_data_at_their_own_frequencies_in_any_order() -> None:
    data = read_touchstone(write_touchstone(np.array([0.1, 0.3, 0.7]), random_s(2, 3), 50), "part.s2p")
    assert_array_equal(interpolate(data, data.frequency_hz), data.s)
    assert_array_equal(interpolate(data, data.frequency_hz[[2, 0, 2, 1]]), data.s[..., [2, 0, 2, 1]])


def test_nothing_is_extrapolated() -> None:
    data = read_touchstone("# Hz S RI\n10 .5 0\n20 .7 .2\n", "load.s1p")
    below, above = np.nextafter(10, 0), np.nextafter(20, 30)
    found = interpolate(data, np.array([0, below, 10, 15, 20, above, np.inf, np.nan]))[0, 0]
    outside = [True, True, False, False, False, True, True, True]
    assert_array_equal(np.isnan(found.real), outside)
    assert_array_equal(np.isnan(found.imag), outside)
    assert_allclose(found[2:5], [0.5, 0.6 + 0.1j, 0.7 + 0.2j], rtol=1e-15)


def test_whole_numbers_as_frequencies() -> None:
    data = read_touchstone("# Hz S RI\n10 .5 0\n20 .7 .2\n", "load.s1p")
    assert_allclose(interpolate(data, np.array([10, 15])), [[[0.5, 0.6 + 0.1j]]], rtol=1e-15)
    assert interpolate(data, np.array([])).shape == (1, 1, 0)


def test_one_point_serves_only_its_own_frequency() -> None:
    data = read_touchstone("# MHz S RI\n868.1 .5 .25\n", "load.s1p")
    found = interpolate(data, np.array([868e6, 868.1e6, 868.2e6]))[0, 0]
    assert found[1] == 0.5 + 0.25j
    assert np.isnan(found[[0, 2]]).all()


# --- Renormalisation


def renormalise(s: ComplexArray, from_ohm: float | Array, to_ohm: float | Array) -> ComplexArray:
    return renormalised(s, np.broadcast_to(np.asarray(from_ohm, float), len(s)), to_ohm)


def test_renormalised_two_port() -> None:
    """Pozar, Microwave Engineering, 4th ed., Wiley 2012, table 4.2; Frickey, IEEE Trans. MTT 42 (1994) 205."""
    s = np.array([[0.2 + 0.1j, 0.6 - 0.3j], [0.6 - 0.3j, -0.1 + 0.2j]])[..., np.newaxis]
    both = [[0.0583965 + 0.0336842j, 0.607666 - 0.26976j], [0.607666 - 0.26976j, -0.243165 + 0.119061j]]
    second = [[0.255624 + 0.0315931j, 0.586749 - 0.265165j], [0.586749 - 0.265165j, -0.301344 + 0.184261j]]
    assert_allclose(renormalise(s, 50, 75)[..., 0], both, atol=1e-5)
    assert_allclose(renormalise(s, 50, np.array([50.0, 75.0]))[..., 0], second, atol=1e-5)


def test_renormalised_load() -> None:
    """40 - j30 ohm; K. Kurokawa, IEEE Trans. MTT 13 (1965) 194, at real references."""
    at_75 = renormalise(np.array([[[-1j / 3]]]), 50, 75)
    assert_allclose(at_75, [[[-0.221239 - 0.318584j]]], atol=1e-6)


@pytest.mark.parametrize("ports", [1, 2, 3, 5])
def test_renormalisation_against_scikit_rf(ports: int) -> None:
    rng = np.random.default_rng(ports)
    s = random_s(ports, 7)
    from_ohm, to_ohm = rng.uniform(10, 200, (2, ports))
    expected = renormalize_s(s, from_ohm, to_ohm)
    assert_allclose(renormalise(s.transpose(1, 2, 0), from_ohm, to_ohm), expected.transpose(1, 2, 0), rtol=1e-11)


def test_open_short_and_through_are_ordinary_values() -> None:
    ends = np.array([[1, 0], [0, -1]], dtype=complex)[..., np.newaxis]
    assert_allclose(renormalise(ends, 50, np.array([75.0, 20.0])), ends, atol=1e-15)
    # No Z and no Y: a through from 50 to 75 ohm has S11 = (75 - 50)/(75 + 50) = 0.2, S21 = sqrt(1 - 0.2^2).
    through = np.array([[0, 1], [1, 0]], dtype=complex)[..., np.newaxis]
    transmitted = np.sqrt(0.96)
    expected = [[0.2, transmitted], [transmitted, -0.2]]
    assert_allclose(renormalise(through, 33, np.array([50.0, 75.0]))[..., 0], expected, atol=1e-15)


def test_renormalisation_keeps_what_is_not_known_apart() -> None:
    data = read_touchstone("# Hz S RI R 50\n10 .2 0\n", "load.s1p")  # 75 ohm
    found = renormalise(interpolate(data, np.array([9.0, 10.0, 11.0])), data.reference_ohm, 75)
    assert_array_equal(np.isnan(found[0, 0]), [True, False, True])
    assert_allclose(found[0, 0, 1], 0, atol=1e-16)


def test_a_negative_resistance_has_no_s_at_its_own_reference() -> None:
    with pytest.raises(Undetermined):
        renormalise(np.array([[[3.0 + 0j]]]), 50, 100)  # -100 ohm
