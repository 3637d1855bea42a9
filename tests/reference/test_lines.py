"""Quarter-wave, multisection, stub and series-section matching: printed numbers against the solver."""

from __future__ import annotations

from math import acos, atan, cos, degrees, pi, radians, sqrt

import pytest

from tests.reference.build import (
    Section,
    antenna,
    centre,
    expect,
    gamma,
    impedance,
    line,
    load,
    reflection,
    rows,
    sweep,
    swr,
    tee,
)

# Pozar = D. M. Pozar, Microwave Engineering, 4th ed., Wiley 2012. Its section and equation numbers are from memory;
# the printed numbers are computed from the equation that is named, and were computed twice.


def transformer(z_ohm: list[float], load_ohm: float, source_ohm: float, ratios: list[float]) -> list[float]:
    """|Gamma| at each f/f0 of quarter-wave sections, the first next to the source."""
    sections: dict[str, Section] = {f"s{n}": line(z, 90) for n, z in enumerate(z_ohm)}
    joins = " > ".join(["radio", *sections, "A"])
    found = sweep(ratios, joins, radio_ohm=source_ohm, A=antenna(load_ohm), **sections)
    return [reflection(found[r]) for r in ratios]


def edges(fractional_width: float) -> list[float]:
    """Both ends of a band around f0, as f/f0."""
    return [1 - fractional_width / 2, 1 + fractional_width / 2]


def test_tl_01_quarter_wave_band_edges() -> None:
    """TL-01. Pozar, sec. 2.5 and 5.4, eq. (5.33): 10 ohm to 50 ohm, SWR 1.5; the book quotes 29 %."""
    z1_ohm = sqrt(500)
    expect(z1_ohm, "22.3607", relative=1e-5)
    for ratio in ("0.85342", "1.14658"):
        side = -1 if float(ratio) < 1 else 1
        wider, narrower = (float(ratio) + side * step * 1.5e-5 for step in (1, -1))
        outside, inside = transformer([z1_ohm], 10, 50, [wider, narrower])
        assert inside < 0.2 < outside


TL_02 = """
0.5 | 16.6667 + 14.9071j | 0.534522 | 5.4407
0.8 | 36.1803 + 19.0211j | 0.266405 | 11.4892
0.9 | 45.542 + 12.5875j | 0.138569 | 17.1667
1.1 | 45.542 - 12.5875j | 0.138569 | 17.1667
1.5 | 16.6667 - 14.9071j | 0.534522 | 5.4407
"""


@pytest.mark.parametrize(("ratio", "z_ohm", "size", "return_loss_db"), rows(TL_02))
def test_tl_02_quarter_wave_sweep(ratio: str, z_ohm: str, size: str, return_loss_db: str) -> None:
    """TL-02. Pozar, eq. (2.44)."""
    found = sweep([float(ratio)], "radio > Q > A", Q=line(sqrt(500), 90), A=antenna(10))[float(ratio)]
    expect(impedance(found, "Q:1"), z_ohm, relative=1e-4)
    expect(reflection(found), size, relative=1e-4)
    expect(found.return_loss_db[0], return_loss_db, relative=1e-4)


def test_tl_02_quarter_wave_at_centre() -> None:
    """TL-02. At f0 the match is perfect: |Gamma| below 1e-9."""
    assert reflection(centre("radio > Q > A", Q=line(sqrt(500), 90), A=antenna(10))) < 1e-9


@pytest.mark.parametrize(("size", "width"), rows("0.05 | 0.180897\n0.1 | 0.367002\n0.2 | 0.783653"))
def test_tl_03_bandwidth_of_100_to_50_ohm(size: str, width: str) -> None:
    """TL-03. Pozar, eq. (5.33). The edge is met to 1e-5 of the width and half of its last digit."""
    slack = 1e-5 * float(width) + 0.5e-6
    inner, outer = edges(float(width) - slack), edges(float(width) + slack)
    assert max(transformer([sqrt(5000)], 100, 50, inner)) < float(size)
    assert min(transformer([sqrt(5000)], 100, 50, outer)) > float(size)


def test_tl_03_no_edge_above_one_third() -> None:
    """TL-03. For a ratio of 2 |Gamma| never exceeds 1/3: the band is unlimited from there on."""
    ratios = [0.01, 0.25, 0.5, 0.75, 1, 1.25, 1.5, 1.75, 1.99, 2]
    assert max(transformer([sqrt(5000)], 100, 50, ratios)) <= 1 / 3 + 1e-12


def test_tl_04_binomial_by_small_reflections() -> None:
    """TL-04. Pozar, sec. 5.6, eq. (5.53), (5.55): 91.7 / 70.7 / 54.5 ohm; the width of 70 % is from memory.

    The theory is of first order: at its edges |Gamma| is 0.05 to the square of the reflections, here to 3 %.
    """
    z_ohm = [91.7004, 70.7107, 54.5254]
    at_centre, low, high = transformer(z_ohm, 50, 100, [1.0, *edges(0.702954)])
    assert at_centre < 1e-6  # six printed digits
    assert low == pytest.approx(0.05, rel=0.03)
    assert high == pytest.approx(low, rel=1e-9)


# N, r | Z1/Z0 ... ZN/Z0
TL_05 = """
1.5 | 1.10668 1.35540
3 | 1.31607 2.27951
6 | 1.56508 3.83366
10 | 1.77828 5.62341
1.5 | 1.05202 1.22474 1.42582
3 | 1.14793 1.73205 2.61340
6 | 1.25438 2.44949 4.78322
10 | 1.34089 3.16228 7.45775
1.5 | 1.02570 1.13512 1.32144 1.46242
3 | 1.07176 1.41051 2.12688 2.79914
6 | 1.12153 1.75529 3.41824 5.34984
10 | 1.16129 2.06509 4.84240 8.61114
"""


@pytest.mark.parametrize(("r", "z"), rows(TL_05))
def test_tl_05_exact_maximally_flat(r: str, z: str) -> None:
    """TL-05. Pozar, Table 5.1 (entries from memory), exact: P_LR - 1 = ((r - 1)^2/4r) cos^2N(theta).

    The five printed digits of the sections leave 2e-5 of |Gamma|.
    """
    ratio, sections = float(r), [50 * float(v) for v in z.split()]
    wanted_f = [0.25, 0.5, 0.7, 0.9, 1.0, 1.2, 1.6]
    for f, size in zip(wanted_f, transformer(sections, 50 * ratio, 50, wanted_f), strict=True):
        excess = (ratio - 1) ** 2 / (4 * ratio) * cos(pi / 2 * f) ** (2 * len(sections))
        assert size == pytest.approx(sqrt(excess / (1 + excess)), abs=2e-5)


def test_tl_06_chebyshev_by_small_reflections() -> None:
    """TL-06. Pozar, sec. 5.7, eq. (5.61)-(5.64); the book's 57.5 / 70.7 / 87.0 ohm, 101 % are from memory.

    First order again: |Gamma| at the edges and in the lobes is 0.05 to 5 %, and 0 at f0 to the six printed digits.
    """
    inside = [0.6 + 0.0025 * n for n in range(321)]
    low, high, *size = transformer([57.4807, 70.7107, 86.9858], 100, 50, [*edges(1.00606), *inside])
    assert low == pytest.approx(0.05, rel=0.05)
    assert high == pytest.approx(low, rel=1e-9)
    assert max(size) == pytest.approx(0.05, rel=0.05)
    assert size[160] < 1e-6


# Gamma_m | r | Z1/Z0 ... ZN/Z0 | theta_m in degrees | df/f0
TL_07 = """
0.05 | 1.5 | 1.13472 1.32191 | 51.1254 | 0.86388
0.05 | 2 | 1.21934 1.64023 | 60.1278 | 0.66383
0.05 | 4 | 1.45004 2.75854 | 69.2825 | 0.46039
0.05 | 10 | 1.82333 5.48446 | 74.8878 | 0.33583
0.05 | 2 | 1.14971 1.41421 1.73956 | 44.9829 | 1.00038
0.05 | 4 | 1.26738 2.00000 3.15612 | 54.2942 | 0.79346
0.05 | 10 | 1.43911 3.16228 6.94873 | 60.8412 | 0.64797
0.2 | 2 | 1.26784 1.36239 1.46801 1.57748 | 16.1981 | 1.64004
0.2 | 4 | 1.36810 1.74828 2.28796 2.92376 | 27.2113 | 1.39530
"""


@pytest.mark.parametrize(("ripple", "r", "z", "theta_m_deg", "width"), rows(TL_07))
def test_tl_07_exact_equal_ripple(ripple: str, r: str, z: str, theta_m_deg: str, width: str) -> None:
    """TL-07. Pozar, sec. 5.7, Table 5.2; Collin, Foundations for Microwave Engineering.

    |Gamma| is the ripple at both printed edges and at every maximum between, where T_N = +-1: sec(theta_m)
    cos(theta) = cos(m pi/N). Five printed digits leave 3e-5.
    """
    sections, wanted = [50 * float(v) for v in z.split()], float(ripple)
    edge = cos(radians(float(theta_m_deg)))
    count = len(sections)
    maxima = [acos(edge * cos(m * pi / count)) * 2 / pi for m in range(count + 1)]
    found = transformer(sections, 50 * float(r), 50, [*maxima, *edges(float(width))])
    assert found == pytest.approx([wanted] * len(found), abs=3e-5)


def test_tl_07_three_digit_row_is_not_equal_ripple() -> None:
    """TL-07, caution: 1.1475 / 1.4142 / 1.7429, as remembered from a printed table, has a mid lobe of 0.04763."""
    inside = [0.7 + 0.0025 * n for n in range(241)]
    expect(max(transformer([57.375, 70.71, 87.145], 100, 50, inside)), "0.04763", absolute=1e-5)


def test_tl_08_lossy_line() -> None:
    """TL-08. Pozar, eq. (2.91): 1 dB, 0.3 wavelength, 25 + 40j ohm."""
    found = centre("radio > L > A", L=line(50, 108, loss_db=1.0), A=antenna(25 + 40j))
    expect(impedance(found, "L:1"), "24.2333 - 22.471j", relative=1e-5)
    expect(reflection(found), "0.440805", relative=1e-5)
    expect(abs(gamma(impedance(found, "A:1"))), "0.55494", relative=1e-5)


@pytest.mark.parametrize("z0_ohm", [10, 50, 75, 300])
def test_tl_09_half_wave_repeats_the_load(z0_ohm: float) -> None:
    """TL-09. Pozar, sec. 2.3."""
    found = centre("radio > L > A", L=line(z0_ohm, 180), A=antenna(33 - 12j))
    assert impedance(found, "L:1") == pytest.approx(33 - 12j, rel=1e-9)


def test_tl_09_beside_the_half_wave() -> None:
    """TL-09. At 1.02 f0 with 75 ohm."""
    found = sweep([1.02], "radio > L > A", L=line(75, 180), A=antenna(33 - 12j))[1.02]
    expect(impedance(found, "L:1"), "32.4492 - 8.09815j", relative=1e-5)


TL_10 = """
15 | 20.0962j | -279.904j
30 | 43.3013j | -129.904j
45 | 75j | -75j
60 | 129.904j | -43.3013j
"""


@pytest.mark.parametrize(("theta_deg", "shorted", "opened"), rows(TL_10))
def test_tl_10_stubs(theta_deg: str, shorted: str, opened: str) -> None:
    """TL-10. Pozar, eq. (2.45), (2.46): 75 ohm stubs."""
    stub = line(75, float(theta_deg))
    expect(impedance(centre("radio > S > end", S=stub, end=load(0)), "S:1"), shorted, relative=1e-5)
    expect(impedance(centre("radio > S", S=stub), "S:1"), opened, relative=1e-5)


def test_tl_10_quarter_wave_stubs_divide_by_nothing() -> None:
    """TL-10. A shorted quarter wave across a matched line is not there; an open one is a short."""
    branch = "radio > T, T:2 > A, T:3 > S"
    clear = centre(branch + " > end", T=tee(), A=antenna(50), S=line(75, 90), end=load(0))
    assert reflection(clear) < 1e-9
    assert abs(impedance(clear, "S:1")) > 1e12
    blocked = centre(branch, T=tee(), A=antenna(50), S=line(75, 90))
    assert reflection(blocked) == pytest.approx(1, abs=1e-9)
    assert blocked.antenna_share[0, 0] < 1e-18
    assert abs(impedance(blocked, "S:1")) < 1e-12


BRAMHAM_DEG = degrees(atan(sqrt(50 * 75 / (50**2 + 50 * 75 + 75**2))))


def test_tl_11_twelfth_wave() -> None:
    """TL-11. B. Bramham, Electronic Engineering 33 (1961) 42; D. T. Emerson, The Twelfth-Wave Transformer, QST, June
    1997 (0.0815 wavelength): the 75 ohm section stands next to the 50 ohm line."""
    expect(BRAMHAM_DEG, "29.333874", absolute=1e-5)
    near, far = line(75, BRAMHAM_DEG), line(50, BRAMHAM_DEG)
    found = sweep([0.8, 0.9, 1.0, 1.1, 1.2], "radio > near > far > A", near=near, far=far, A=antenna(75))
    assert impedance(found[1.0], "near:1") == pytest.approx(50, rel=1e-12)
    for ratio, printed in ((0.8, "1.14842"), (0.9, "1.07458"), (1.1, "1.07956"), (1.2, "1.16978")):
        expect(swr(impedance(found[ratio], "near:1")), printed, absolute=1e-5)


def test_tl_11_twelfth_wave_in_the_wrong_order() -> None:
    """TL-11. With the two sections exchanged the SWR is 1.5."""
    found = centre("radio > near > far > A", near=line(50, BRAMHAM_DEG), far=line(75, BRAMHAM_DEG), A=antenna(75))
    expect(swr(impedance(found, "near:1")), "1.50000", absolute=1e-5)


# Z0 | Z1 | load | l1, the Z0 line at the load | l2, the Z1 section
TL_12 = """
50 | 75 | 38 | 124.61721 | 19.29055
50 | 75 | 38 | 55.38279 | 160.70945
50 | 75 | 25 | 104.96322 | 58.05194
50 | 75 | 25 | 75.03678 | 121.94806
50 | 75 | 35+15j | 87.63733 | 37.48192
50 | 75 | 35+15j | 37.35469 | 142.51808
75 | 50 | 50 | 29.33387 | 29.33387
75 | 50 | 50 | 150.66613 | 150.66613
"""


@pytest.mark.parametrize(("z0", "z1", "load_ohm", "l1_deg", "l2_deg"), rows(TL_12))
def test_tl_12_series_section(z0: str, z1: str, load_ohm: str, l1_deg: str, l2_deg: str) -> None:
    """TL-12. F. A. Regier, Series-Section Transformers, QST, July 1978, and Proc. IEEE, July 1971 (from memory).

    Half a unit of the last printed digit of an angle is 1e-7 rad: as much of |Gamma| may be left.
    """
    found = centre(
        "radio > main > l2 > l1 > A",
        radio_ohm=float(z0),
        main=line(float(z0), 33),
        l2=line(float(z1), float(l2_deg)),
        l1=line(float(z0), float(l1_deg)),
        A=antenna(complex(load_ohm)),
    )
    assert reflection(found) < 2.5e-7


def test_tl_12_series_section_in_full() -> None:
    """TL-12. The first row with its angles unrounded, from the formulas of the source: a match to 1e-12."""
    n, r = 75 / 50, 38 / 50
    tan_l2 = sqrt((r - 1) ** 2 / (r * (n - 1 / n) ** 2 - (r - 1) ** 2))
    tan_l1 = (n - r / n) * tan_l2 / (r - 1)
    l1, l2 = line(50, degrees(atan(tan_l1)) + 180), line(75, degrees(atan(tan_l2)))
    found = centre("radio > l2 > l1 > A", l1=l1, l2=l2, A=antenna(38))
    assert impedance(found, "l2:1") == pytest.approx(50, rel=1e-12)
