"""ABCD matrices, conversions, VSWR and mismatch: printed numbers against the solver."""

from __future__ import annotations

from math import log10, sqrt
from typing import NamedTuple

import numpy as np
import pytest

from feedlib import Figures
from feedlib.parts import Part, Transformer
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
    series,
    shunt,
    swr,
)

# Pozar = D. M. Pozar, Microwave Engineering, 4th ed., Wiley 2012; section and table numbers from memory, values
# computed from them.

Matrix = tuple[tuple[str, str], tuple[str, str]]


class Way(NamedTuple):
    """Voltages and currents of a cascade that is driven at port 1; i2 flows out of port 2."""

    v1: complex
    i1: complex
    v2: complex
    i2: complex


def driven(end: complex | None, **cascade: Part | Section) -> Way:
    """The cascade into an impedance, or open (None)."""
    names = list(cascade)
    if end is None:
        found = centre(" > ".join(["radio", *names]), **cascade)
    else:
        found = centre(" > ".join(["radio", *names, "end"]), **cascade, end=load(end))
    first, last = f"{names[0]}:1", f"{names[-1]}:2"
    v, i = found.voltage_v, found.current_a
    return Way(complex(v(first)[0]), complex(i(first)[0]), complex(v(last)[0]), complex(-i(last)[0]))


def abcd(**cascade: Part | Section) -> np.ndarray:
    """ABCD by its definition: port 2 open, then shorted."""
    opened, shorted = driven(None, **cascade), driven(0, **cascade)
    return np.array(
        [[opened.v1 / opened.v2, shorted.v1 / shorted.i2], [opened.i1 / opened.v2, shorted.i1 / shorted.i2]]
    )


def scattering(reference_ohm: float = 50.0, **cascade: Part | Section) -> np.ndarray:
    """The 2x2 harness S of a cascade."""
    joins = " > ".join(["radio", *cascade, "A"])
    return centre(joins, reference_ohm=reference_ohm, **cascade, A=antenna(50)).harness_s[0]


def expect_matrix(got: np.ndarray, printed: Matrix, *, relative: float) -> None:
    """Entry by entry."""
    for row, printed_row in zip(got, printed, strict=True):
        for value, text in zip(row, printed_row, strict=True):
            expect(complex(value), text, relative=relative)


def test_ab_01_line() -> None:
    """AB-01. Pozar, Tables 4.1 and 4.2: 75 ohm, 60 degrees. The entry 0 is met to 1e-9."""
    found = abcd(L=line(75, 60))
    expect_matrix(found, (("0.5", "64.9519j"), ("0.011547j", "0.5")), relative=1e-5)
    assert abs(found[0, 0].imag) < 1e-9
    through, across = "0.299539 + 0.159636j", "0.442396 - 0.830107j"
    expect_matrix(scattering(L=line(75, 60)), ((through, across), (across, through)), relative=1e-5)


def test_ab_02_series_impedance() -> None:
    """AB-02 (a). Pozar, Tables 4.1 and 4.2: 25 + 30j ohm in series."""
    same, across = "0.24357 + 0.181543j", "0.75643 - 0.181543j"
    expect_matrix(scattering(Z=series(25, 30)), ((same, across), (across, same)), relative=1e-5)


def test_ab_02_shunt_admittance() -> None:
    """AB-02 (b). 0.010 - 0.004j S in shunt."""
    same, across = "-0.205087 + 0.063593j", "0.794913 + 0.063593j"
    expect_matrix(scattering(Y=shunt(0.010, -0.004)), ((same, across), (across, same)), relative=1e-5)


def test_ab_02_transformer() -> None:
    """AB-02 (c). A = 2, D = 1/2."""
    found = scattering(N=Transformer(ratio=2.0))
    expect_matrix(found, (("0.6", "0.8"), ("0.8", "-0.6")), relative=1e-9)
    expect_matrix(abcd(N=Transformer(ratio=2.0)), (("2", "0"), ("0", "0.5")), relative=1e-9)


AB_03 = {"Z": series(10, 5), "L": line(75, 50, loss_db=0.3), "Y": shunt(0.002, 0.006)}


def test_ab_03_cascade() -> None:
    """AB-03. Pozar, sec. 4.4: 10 + 5j ohm, then 75 ohm 50 degrees 0.3 dB, then 0.002 + 0.006j S."""
    found = abcd(**AB_03)
    expect_matrix(
        found,
        (
            ("0.245153 + 0.299869j", "7.96481 + 60.9681j"),
            ("0.00142363 + 0.014132j", "0.643171 + 0.0264635j"),
        ),
        relative=1e-5,
    )
    assert np.linalg.det(found) == pytest.approx(1, abs=1e-12)
    across = "0.353797 - 0.712239j"
    expect_matrix(
        scattering(**AB_03),
        (("0.225149 + 0.249435j", across), (across, "0.171236 - 0.130779j")),
        relative=1e-5,
    )


def test_ab_04_same_cascade_as_z_and_y() -> None:
    """AB-04. Pozar, Table 4.2: Z from open ports, Y from shorted ones, each port driven in turn."""
    backwards = {name: AB_03[name] for name in ("Y", "L", "Z")}
    open_1, open_2 = driven(None, **AB_03), driven(None, **backwards)
    across = "7.0568 - 70.0506j"
    expect(open_1.v1 / open_1.i1, "22.736 - 15.057j", relative=1e-5)
    expect(open_1.v2 / open_1.i1, across, relative=1e-5)
    expect(open_2.v2 / open_2.i1, across, relative=1e-5)
    expect(open_2.v1 / open_2.i1, "6.39252 - 44.8678j", relative=1e-5)
    short_1, short_2 = driven(0, **AB_03), driven(0, **backwards)
    across = "-0.00210679 + 0.0161268j"
    expect(short_1.i1 / short_1.v1, "0.0017818 - 0.0103165j", relative=1e-5)
    expect(-short_1.i2 / short_1.v1, across, relative=1e-5)
    expect(-short_2.i2 / short_2.v1, across, relative=1e-5)
    expect(short_2.i1 / short_2.v1, "0.00535241 - 0.00332177j", relative=1e-5)


def power_waves(source_ohm: complex, load_ohm: complex, **cascade: Part | Section) -> tuple[complex, complex]:
    """S11 and S21 in power waves: a radio of the one reference, an antenna of the other, 1 W available."""
    joins = " > ".join(["radio", *cascade, "A"])
    found = centre(joins, radio_ohm=source_ohm, **cascade, A=antenna(load_ohm))
    z = impedance(found, "radio:1")
    s11 = (z - source_ohm.conjugate()) / (z + source_ohm)
    s21 = sqrt(load_ohm.real) * complex(found.antenna_current_a[0, 0])
    assert reflection(found) == pytest.approx(abs(s11), rel=1e-9)
    assert found.antenna_share[0, 0] == pytest.approx(abs(s21) ** 2, rel=1e-9)
    return s11, s21


AB_05 = {"L": line(75, 60, loss_db=0.5), "Z": series(5, 8)}
AB_05_TURNED = {name: AB_05[name] for name in ("Z", "L")}
# References | S11 | S21 (= S12, the network is reciprocal) | S22
AB_05_ROWS = """
50+10j | 75-20j | 0.134717 + 0.0792665j | 0.442858 - 0.786023j | 0.172239 + 0.0464704j
50+0j | 75+0j | 0.222367 - 0.0466848j | 0.41233 - 0.788537j | 0.130711 + 0.184987j
"""


@pytest.mark.parametrize(("z1", "z2", "s11", "s21", "s22"), rows(AB_05_ROWS))
def test_ab_05_power_waves(z1: str, z2: str, s11: str, s21: str, s22: str) -> None:
    """AB-05. K. Kurokawa, IEEE Trans. MTT 13 (1965) 194; D. A. Frickey, IEEE Trans. MTT 42 (1994) 205.

    A radio of complex impedance is what this program has of complex references; pseudo-waves it has none.
    """
    forth = power_waves(complex(z1), complex(z2), **AB_05)
    back = power_waves(complex(z2), complex(z1), **AB_05_TURNED)
    expect(forth[0], s11, relative=1e-5)
    expect(forth[1], s21, relative=1e-5)
    expect(back[0], s22, relative=1e-5)
    expect(back[1], s21, relative=1e-5)


@pytest.mark.parametrize(("reference", "printed"), [("50", "-0.333333j"), ("75", "-0.221239 - 0.318584j")])
def test_ab_06_one_port_at_two_references(reference: str, printed: str) -> None:
    """AB-06. Kurokawa 1965; Marks and Williams, J. Res. NIST 97 (1992) 533: 40 - 30j ohm."""
    found = centre("radio > end", reference_ohm=float(reference), end=load(40 - 30j))
    expect(complex(found.harness_s[0, 0, 0]), printed, relative=1e-5)


def test_ab_06_conjugate_match_is_no_reflection() -> None:
    """AB-06. The trap: a radio of 40 + 30j ohm sees a match (power waves), not 0.75 (pseudo-waves)."""
    found = centre("radio > A", radio_ohm=40 + 30j, A=antenna(40 - 30j))
    assert reflection(found) < 1e-9
    assert found.return_loss_db[0] > 180
    assert found.antenna_share[0, 0] == pytest.approx(1, rel=1e-12)


AB_07 = """
1.05 | 0.0243902 | 32.25568 | 0.00258432 | 0.0594884
1.1 | 0.047619 | 26.44439 | 0.00985913 | 0.226757
1.2 | 0.0909091 | 20.82785 | 0.0360412 | 0.826446
1.5 | 0.2 | 13.97940 | 0.177288 | 4
2 | 0.333333 | 9.54243 | 0.511525 | 11.1111
3 | 0.5 | 6.02060 | 1.24939 | 25
5 | 0.666667 | 3.52183 | 2.55273 | 44.4444
10 | 0.818182 | 1.74300 | 4.80725 | 66.9421
"""


@pytest.mark.parametrize(("vswr", "size", "return_loss_db", "mismatch_db", "reflected_percent"), rows(AB_07))
def test_ab_07_mismatch(vswr: str, size: str, return_loss_db: str, mismatch_db: str, reflected_percent: str) -> None:
    """AB-07. Pozar, eq. (2.38)-(2.41): loads above and below 50 ohm, through 77 degrees of 50 ohm line."""
    for ohm in (50 * float(vswr), 50 / float(vswr)):
        found = centre("radio > L > A", L=line(50, 77), A=antenna(ohm))
        expect(swr(impedance(found, "L:1")), vswr, relative=1e-5)
        expect(reflection(found), size, relative=1e-5)
        expect(found.return_loss_db[0], return_loss_db, relative=1e-5)
        expect(-10 * log10(found.antenna_share[0, 0]), mismatch_db, relative=1e-5)
        expect(100 * found.reflected_share[0], reflected_percent, relative=1e-5)


# Matched loss | SWR of the load | total loss | SWR at the input
AB_08 = """
1 | 1 | 1.00000 | 1.00000
1 | 2 | 1.19586 | 1.72026
1 | 3 | 1.50385 | 2.31765
1 | 5 | 2.12348 | 3.25127
1 | 10 | 3.42370 | 4.71273
3 | 1 | 3.00000 | 1.00000
3 | 2 | 3.38859 | 1.40114
3 | 3 | 3.96772 | 1.66878
3 | 5 | 5.03862 | 2.00357
3 | 10 | 7.00770 | 2.39019
"""


@pytest.mark.parametrize("degrees", [20, 720])
@pytest.mark.parametrize(("matched_db", "load_swr", "total_db", "input_swr"), rows(AB_08))
def test_ab_08_loss_of_a_mismatched_line(
    matched_db: str, load_swr: str, total_db: str, input_swr: str, degrees: float
) -> None:
    """AB-08. ARRL Handbook / Antenna Book, total loss of a mismatched line; exact for a real Z0, at any length."""
    section = line(50, degrees, loss_db=float(matched_db))
    found = centre("radio > L > A", L=section, A=antenna(50 * float(load_swr)))
    expect(found.harness_loss_db[0], total_db, relative=1e-5)
    expect(swr(impedance(found, "L:1")), input_swr, relative=1e-5)
    assert dissipated(found, "L") == pytest.approx(float(total_db), rel=2e-5)


def dissipated(found: Figures, part: str) -> float:
    """Loss in dB from the power that stays in one part."""
    entering = 1 - found.reflected_share[0]
    return float(-10 * np.log10(1 - found.part_loss_share[part][0] / entering))


@pytest.mark.parametrize("ohm", [25, 100])
def test_ab_09_line_loss_as_power_ratio(ohm: float) -> None:
    """AB-09. ARRL Handbook / Antenna Book: 45 degrees, 0.2 dB, SWR 2 on either side."""
    found = centre("radio > L > A", L=line(50, 45, loss_db=0.2), A=antenna(ohm))
    expect(found.harness_loss_db[0], "0.247506", absolute=1e-5)
    expect(abs(gamma(impedance(found, "A:1"))), "0.333333", absolute=1e-6)
