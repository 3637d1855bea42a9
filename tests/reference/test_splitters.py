"""Dividers and hybrids: printed numbers against the solver, as a splitter part and as its circuit in coax."""

from __future__ import annotations

from collections.abc import Callable
from math import log10, sqrt

import numpy as np
import pytest

from feedlib.parts import Part, Splitter
from feedlib.parts.splitter import Form
from tests.reference.build import (
    F0_HZ,
    Section,
    antenna,
    centre,
    db,
    expect,
    expect_db,
    expect_deg,
    gamma,
    impedance,
    line,
    reflection,
    rows,
    series,
    sweep,
    swr,
    tee,
)

# Pozar = D. M. Pozar, Microwave Engineering, 4th ed., Wiley 2012; section and equation numbers from memory, values
# computed from them.

Circuit = tuple[str, dict[str, Part | Section]]
Build = Callable[[], Circuit]


def as_part(form: Form, outputs: int = 2) -> Circuit:
    """The splitter itself, an antenna at every port but the first."""
    part = Splitter(form=form, centre_hz=F0_HZ, outputs=outputs)
    ports = range(2, part.ports + 1)
    joins = ", ".join(["radio > S", *(f"S:{n} > A{n}" for n in ports)])
    return joins, {"S": part, **{f"A{n}": antenna(50) for n in ports}}


def wilkinson_circuit(outputs: int) -> Circuit:
    """Quarter waves of sqrt(N)*50 ohm from a T joint, and a star of 50 ohm (one 100 ohm for two outputs)."""
    ports = range(2, outputs + 2)
    joins = ["radio > T"]
    parts: dict[str, Part | Section] = {"T": tee(outputs + 1)}
    for n in ports:
        joins += [f"T:{n} > arm{n} > N{n}", f"N{n}:2 > A{n}"]
        parts |= {f"arm{n}": line(50 * sqrt(outputs), 90), f"N{n}": tee(), f"A{n}": antenna(50)}
    if outputs == 2:
        return ", ".join([*joins, "N2:3 > R > N3:3"]), {**parts, "R": series(100)}
    joins += [f"N{n}:3 > R{n} > star:{n - 1}" for n in ports]
    return ", ".join(joins), {**parts, "star": tee(outputs), **{f"R{n}": series(50) for n in ports}}


def ring(arms: dict[tuple[int, int], Section]) -> Circuit:
    """Four nodes in a ring of sections; the radio is at node 1, an antenna at each other one."""
    joins, taken = ["radio > N1"], dict.fromkeys(range(1, 5), 1)
    parts: dict[str, Part | Section] = {f"N{n}": tee() for n in range(1, 5)}
    for (a, b), section in arms.items():
        taken[a] += 1
        taken[b] += 1
        joins.append(f"N{a}:{taken[a]} > L{a}{b} > N{b}:{taken[b]}")
        parts[f"L{a}{b}"] = section
    joins += [f"N{n} > A{n}" for n in (2, 3, 4)]
    return ", ".join(joins), {**parts, **{f"A{n}": antenna(50) for n in (2, 3, 4)}}


def branch_line_ring() -> Circuit:
    """Pozar, sec. 7.5."""
    main, branch = line(50 / sqrt(2), 90), line(50, 90)
    return ring({(1, 2): main, (4, 3): main, (1, 4): branch, (2, 3): branch})


def rat_race_ring() -> Circuit:
    """Pozar, sec. 7.8."""
    quarter = line(50 * sqrt(2), 90)
    return ring({(1, 2): quarter, (1, 3): quarter, (3, 4): quarter, (2, 4): line(50 * sqrt(2), 270)})


def harness(build: Build, ratio: float) -> np.ndarray:
    """S (P, P) in 50 ohm at f/f0, ports in the circuit's order."""
    joins, parts = build()
    return sweep([ratio], joins, **parts)[ratio].harness_s[0]


def expect_zeros_at_centre(s: np.ndarray, wanted: np.ndarray) -> None:
    """The whole printed matrix, zeros as magnitudes below 1e-9."""
    assert np.abs(s - wanted).max() < 1e-9


def test_dv_01_lossless_t_divider() -> None:
    """DV-01. Pozar, sec. 7.2, Example 7.1 (book figures from memory): 150 and 75 ohm, shares 1/3 and 2/3."""
    parts = {"T": tee(), "a": line(150, 64), "b": line(75, 64), "A": antenna(150), "B": antenna(75)}
    found = centre("radio > T, T:2 > a > A, T:3 > b > B", **parts)
    assert reflection(found) < 1e-9
    assert found.antenna_share[0] == pytest.approx([1 / 3, 2 / 3], rel=1e-9)
    assert found.amplitude_balance_db[0] == pytest.approx(20 * log10(2), rel=1e-9)  # the same voltage at 2 to 1 ohm


DV_01 = """
150 | 75 | 30 | -0.666667
75 | 150 | 37.5 | -0.333333
"""


@pytest.mark.parametrize(("arm", "other", "z_in", "printed"), rows(DV_01))
def test_dv_01_looking_back_into_an_arm(arm: str, other: str, z_in: str, printed: str) -> None:
    """DV-01. The junction from the end of one arm: its line sees 50 ohm and the other arm side by side."""
    found = centre(
        "radio > a > T, T:2 > A, T:3 > b > B",
        radio_ohm=float(arm),
        a=line(float(arm), 180),
        T=tee(),
        A=antenna(50),
        b=line(float(other), 64),
        B=antenna(float(other)),
    )
    expect(impedance(found, "T:1"), z_in, relative=1e-5)
    expect(gamma(impedance(found, "a:1"), float(arm)), printed, relative=1e-5)


DV_02 = """
3 | -0.333333 | 0.666667 | -3.52183
4 | -0.5 | 0.5 | -6.02060
5 | -0.6 | 0.4 | -7.95880
9 | -0.777778 | 0.222222 | -13.06425
"""


@pytest.mark.parametrize(("ports", "same", "across", "across_db"), rows(DV_02))
def test_dv_02_bare_junction(ports: str, same: str, across: str, across_db: str) -> None:
    """DV-02. Pozar, sec. 7.1: S_ij = 2 sqrt(Yi Yj)/sum(Y) - delta_ij."""
    numbers = range(2, int(ports) + 1)
    joins = ", ".join(["radio > T", *(f"T:{n} > A{n}" for n in numbers)])
    s = centre(joins, T=tee(int(ports)), **{f"A{n}": antenna(50) for n in numbers}).harness_s[0]
    for j in range(int(ports)):
        for k in range(int(ports)):
            expect(s[j, k], same if j == k else across, relative=1e-5)
    expect(db(s[1, 0]), across_db, relative=1e-5)


def resistive_circuit() -> Circuit:
    """Three resistors of 50/3 ohm in a star."""
    parts: dict[str, Part | Section] = {f"R{n}": series(50 / 3) for n in (1, 2, 3)}
    joins = "radio > R1 > star, star:2 > R2 > A2, star:3 > R3 > A3"
    return joins, {**parts, "star": tee(), "A2": antenna(50), "A3": antenna(50)}


@pytest.mark.parametrize("build", [lambda: as_part("resistive"), resistive_circuit], ids=["part", "circuit"])
@pytest.mark.parametrize("ratio", [0.3, 1.0])
def test_dv_03_resistive_divider(build: Build, ratio: float) -> None:
    """DV-03. Pozar, sec. 7.2, Fig. 7.7: S_ij = 0.5 (-6.0206 dB), half of the power is dissipated."""
    joins, parts = build()
    found = sweep([ratio], joins, **parts)[ratio]
    expect_zeros_at_centre(found.harness_s[0], (np.ones((3, 3)) - np.eye(3)) / 2)
    expect(db(found.harness_s[0, 1, 0]), "-6.0206", absolute=1e-5)
    assert sum(loss[0] for loss in found.part_loss_share.values()) == pytest.approx(0.5, rel=1e-9)


# f/f0 | S11 dB | S21 dB | S21 deg | S22 dB | S23 dB | S23 deg
DV_04 = """
0.5 | -12.3045 | -3.2736 | -43.3139 | -21.8469 | -11.0551 | -59.1070
0.75 | -17.4529 | -3.0891 | -66.2822 | -34.2315 | -17.1876 | -74.2756
0.9 | -25.1575 | -3.0236 | -80.4638 | -50.2078 | -25.1170 | -83.6489
1.0 | < -200 | -3.0103 | -90.0000 | < -200 | < -200 | --
1.1 | -25.1575 | -3.0236 | -99.5362 | -50.2078 | -25.1170 | 83.6489
1.25 | -17.4529 | -3.0891 | -113.7178 | -34.2315 | -17.1876 | 74.2756
1.5 | -12.3045 | -3.2736 | -136.6861 | -21.8469 | -11.0551 | 59.1070
"""
WILKINSONS = pytest.mark.parametrize(
    "build", [lambda: as_part("wilkinson"), lambda: wilkinson_circuit(2)], ids=["part", "circuit"]
)


@WILKINSONS
@pytest.mark.parametrize("row", rows(DV_04), ids=lambda row: row[0])
def test_dv_04_wilkinson_sweep(build: Build, row: list[str]) -> None:
    """DV-04. Pozar, sec. 7.3, Fig. 7.12."""
    ratio, s11_db, s21_db, s21_deg, s22_db, s23_db, s23_deg = row
    s = harness(build, float(ratio))
    expect_db(s[0, 0], s11_db, absolute=1e-3)
    for output in (1, 2):
        expect_db(s[output, 0], s21_db, absolute=1e-3)
        expect_deg(s[output, 0], s21_deg, absolute=1e-3)
        expect_db(s[output, output], s22_db, absolute=1e-3)
    expect_db(s[1, 2], s23_db, absolute=1e-3)
    expect_deg(s[1, 2], s23_deg, absolute=1e-3)


@WILKINSONS
def test_dv_04_wilkinson_at_centre(build: Build) -> None:
    """DV-04. S21 = S31 = -j/sqrt(2), everything else 0."""
    wanted = np.array([[0, 1, 1], [1, 0, 0], [1, 0, 0]]) * -1j / sqrt(2)
    expect_zeros_at_centre(harness(build, 1.0), wanted)


@WILKINSONS
@pytest.mark.parametrize(("entry", "width"), [((0, 0), 0.367002), ((1, 2), 0.361134), ((1, 1), 1.10354)])
def test_dv_04_wilkinson_bandwidth(build: Build, entry: tuple[int, int], width: float) -> None:
    """DV-04. The terms cross -20 dB at the printed edges, to 1e-5 of the width and half of its last digit."""
    slack = 1e-5 + (0.5e-5 if width > 1 else 0.5e-6)
    for side in (-1, 1):
        inside, outside = (harness(build, 1 + side * (width + d) / 2)[entry] for d in (-slack, slack))
        assert abs(inside) < 0.1 < abs(outside)


K = sqrt(2)
UNEQUAL = {
    "T": tee(),
    "arm2": line(50 * sqrt(K * (1 + K**2)), 90),
    "arm3": line(50 * sqrt((1 + K**2) / K**3), 90),
    "N2": tee(),
    "N3": tee(),
    "R": series(50 * (K + 1 / K)),
}
UNEQUAL_JOINS = "radio > T, T:2 > arm2 > N2, T:3 > arm3 > N3, N2:2 > R > N3:2"


def test_dv_05_unequal_wilkinson_values() -> None:
    """DV-05. Pozar, eq. (7.37), (7.38): the printed values are those of the circuit below."""
    for part, printed in (("arm2", "102.988"), ("arm3", "51.4942")):
        section = UNEQUAL[part]
        assert isinstance(section, Section)
        expect(section.cable.z0_ohm, printed, relative=1e-5)
    expect(50 * (K + 1 / K), "106.066", relative=1e-5)


def test_dv_05_unequal_wilkinson() -> None:
    """DV-05. K^2 = 2 into R2 = 50 K and R3 = 50/K; the higher power goes to the lower impedance."""
    found = centre(UNEQUAL_JOINS + ", N2:3 > A, N3:3 > B", **UNEQUAL, A=antenna(50 * K), B=antenna(50 / K))
    assert reflection(found) < 1e-9
    expect(10 * log10(found.antenna_share[0, 0]), "-4.7712", relative=1e-5)
    expect(10 * log10(found.antenna_share[0, 1]), "-1.7609", relative=1e-5)
    assert abs(found.part_loss_share["R"][0]) < 1e-15


@pytest.mark.parametrize("driven", [2, 3])
def test_dv_05_unequal_wilkinson_outputs(driven: int) -> None:
    """DV-05. S22 = S33 = S23 = 0: an output that is driven is matched, and the other one gets nothing."""
    ohm = {2: 50 * K, 3: 50 / K}
    other = 5 - driven
    found = centre(
        UNEQUAL_JOINS.replace("radio > T", "T > A") + f", radio > N{driven}:3, N{other}:3 > B",
        radio_ohm=ohm[driven],
        **UNEQUAL,
        A=antenna(50),
        B=antenna(ohm[other]),
    )
    assert reflection(found) < 1e-9
    assert found.antenna_share[0, 1] < 1e-18


def test_dv_05_unequal_wilkinson_with_output_transformers() -> None:
    """DV-05. Quarter waves of 59.4604 and 42.0448 ohm bring both outputs to 50 ohm: the whole matrix at centre."""
    found = centre(
        UNEQUAL_JOINS + ", N2:3 > out2 > A, N3:3 > out3 > B",
        **UNEQUAL,
        out2=line(50 * sqrt(K), 90),
        out3=line(50 / sqrt(K), 90),
        A=antenna(50),
        B=antenna(50),
    )
    s = found.harness_s[0]
    expect(50 * sqrt(K), "59.4604", relative=1e-5)
    expect(50 / sqrt(K), "42.0448", relative=1e-5)
    expect(db(s[1, 0]), "-4.7712", relative=1e-5)
    expect(db(s[2, 0]), "-1.7609", relative=1e-5)
    assert abs(s[[0, 1, 2, 1], [0, 1, 2, 2]]).max() < 1e-9


# f/f0 | S11 dB | S21 dB | S21 deg | S31 dB | S31 deg | S41 dB | S21-S31 deg
DV_06 = """
0.8 | -8.5255 | -5.1965 | -53.6404 | -3.3619 | -135.2801 | -10.1676 | 81.6397
0.9 | -14.3381 | -3.6201 | -69.1555 | -3.0430 | -157.9336 | -14.8912 | 88.7780
1.0 | < -200 | -3.0103 | -90.0000 | -3.0103 | 180.0000 | < -200 | 90.0000
1.1 | -14.3381 | -3.6201 | -110.8445 | -3.0430 | 157.9336 | -14.8912 | 91.2220
"""
BRANCH_LINES = pytest.mark.parametrize(
    "build", [lambda: as_part("branch_line"), branch_line_ring], ids=["part", "circuit"]
)


@BRANCH_LINES
@pytest.mark.parametrize("row", rows(DV_06), ids=lambda row: row[0])
def test_dv_06_branch_line_sweep(build: Build, row: list[str]) -> None:
    """DV-06. Pozar, sec. 7.5, eq. (7.61)."""
    ratio, s11_db, s21_db, s21_deg, s31_db, s31_deg, s41_db, between_deg = row
    s = harness(build, float(ratio))
    for entry, printed in ((s[0, 0], s11_db), (s[1, 0], s21_db), (s[2, 0], s31_db), (s[3, 0], s41_db)):
        expect_db(entry, printed, absolute=1e-3)
    for entry, printed in ((s[1, 0], s21_deg), (s[2, 0], s31_deg), (s[1, 0] / s[2, 0], between_deg)):
        expect_deg(entry, printed, absolute=1e-3)


@BRANCH_LINES
def test_dv_06_branch_line_at_centre(build: Build) -> None:
    """DV-06. Pozar, eq. (7.61): the matrix is from memory, its first row was read elsewhere."""
    wanted = np.array([[0, 1j, 1, 0], [1j, 0, 0, 1], [1, 0, 0, 1j], [0, 1, 1j, 0]]) / -sqrt(2)
    expect_zeros_at_centre(harness(build, 1.0), wanted)


# f/f0 | S11 dB | S21 dB | S21 deg | S31 dB | S31 deg | S41 dB | S24 dB | S34 dB | S24-S34 deg
DV_07 = """
0.8 | -15.0041 | -4.1668 | -50.0023 | -2.4755 | -60.5168 | -17.0395 | -2.3605 | -4.1668 | 192.6365
0.9 | -23.8687 | -3.2404 | -70.6724 | -2.8545 | -76.8128 | -24.6427 | -2.8488 | -3.2404 | 186.3184
1.0 | < -200 | -3.0103 | -90.0000 | -3.0103 | -90.0000 | < -200 | -3.0103 | -3.0103 | 180.0000
1.1 | -23.8687 | -3.2404 | -109.3276 | -2.8545 | -103.1872 | -24.6427 | -2.8488 | -3.2404 | 173.6816
"""
RAT_RACES = pytest.mark.parametrize("build", [lambda: as_part("rat_race"), rat_race_ring], ids=["part", "circuit"])


@RAT_RACES
@pytest.mark.parametrize("row", rows(DV_07), ids=lambda row: row[0])
def test_dv_07_rat_race_sweep(build: Build, row: list[str]) -> None:
    """DV-07. Pozar, sec. 7.8, eq. (7.101)."""
    ratio, s11_db, s21_db, s21_deg, s31_db, s31_deg, s41_db, s24_db, s34_db, between_deg = row
    s = harness(build, float(ratio))
    sizes = {(0, 0): s11_db, (1, 0): s21_db, (2, 0): s31_db, (3, 0): s41_db, (1, 3): s24_db, (2, 3): s34_db}
    for entry, printed in sizes.items():
        expect_db(s[entry], printed, absolute=1e-3)
    for value, printed in ((s[1, 0], s21_deg), (s[2, 0], s31_deg), (s[1, 3] / s[2, 3], between_deg)):
        expect_deg(value, printed, absolute=1e-3)


@RAT_RACES
def test_dv_07_rat_race_at_centre(build: Build) -> None:
    """DV-07. Pozar, eq. (7.101), from memory: 1 is the sum, 4 the difference."""
    wanted = np.array([[0, 1, 1, 0], [1, 0, 0, -1], [1, 0, 0, 1], [0, -1, 1, 0]]) * -1j / sqrt(2)
    expect_zeros_at_centre(harness(build, 1.0), wanted)


# N | f/f0 | S11 dB | S21 dB | S21 deg | S22 dB | S23 dB
DV_08 = """
3 | 0.8 | -15.1076 | -4.9073 | -69.4347 | -35.7020 | -21.0161
3 | 1.0 | < -200 | -4.7712 | -90.0000 | < -200 | < -200
3 | 1.2 | -15.1076 | -4.9073 | -110.5653 | -35.7020 | -21.0161
4 | 0.9 | -18.6715 | -6.0800 | -78.8014 | -46.7253 | -28.1936
4 | 1.0 | < -200 | -6.0206 | -90.0000 | < -200 | < -200
"""


@pytest.mark.parametrize("as_circuit", [False, True], ids=["part", "circuit"])
@pytest.mark.parametrize("row", rows(DV_08), ids=lambda row: "-".join(row[:2]))
def test_dv_08_n_way_wilkinson(as_circuit: bool, row: list[str]) -> None:
    """DV-08. E. J. Wilkinson, An N-way hybrid power divider, IRE Trans. MTT 8 (1960) 116-118."""
    count, ratio, s11_db, s21_db, s21_deg, s22_db, s23_db = row
    outputs = int(count)
    s = harness(lambda: wilkinson_circuit(outputs) if as_circuit else as_part("wilkinson", outputs), float(ratio))
    expect_db(s[0, 0], s11_db, absolute=1e-3)
    for j in range(1, outputs + 1):
        expect_db(s[j, 0], s21_db, absolute=1e-3)
        expect_deg(s[j, 0], s21_deg, absolute=1e-3)
        for k in range(1, outputs + 1):
            expect_db(s[j, k], s22_db if j == k else s23_db, absolute=1e-3)


# f/f0 | Zin | SWR
DV_09 = """
0.9 | 54.5804 + 7.02761j | 1.17399
0.95 | 55.8205 + 3.63844j | 1.13864
1.0 | 56.25 | 1.12500
1.05 | 55.8205 - 3.63844j | 1.13864
1.1 | 54.5804 - 7.02761j | 1.17399
"""


@pytest.mark.parametrize(("ratio", "z_in", "printed_swr"), rows(DV_09))
def test_dv_09_two_quarter_wave_legs(ratio: str, z_in: str, printed_swr: str) -> None:
    """DV-09. Pozar, eq. (2.44); the construction is common practice: 50 ohm through 75 ohm legs, in parallel."""
    leg = line(75, 90)
    joins = "radio > T, T:2 > a > A, T:3 > b > B"
    parts = {"T": tee(), "a": leg, "b": leg, "A": antenna(50), "B": antenna(50)}
    found = sweep([float(ratio)], joins, **parts)[float(ratio)]
    expect(impedance(found, "T:1"), z_in, relative=1e-5)
    expect(swr(impedance(found, "T:1")), printed_swr, relative=1e-5)
