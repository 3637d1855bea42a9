"""Coax as a thing on the workbench: loss laws, cut lengths, equal legs; printed numbers against the solver."""

from __future__ import annotations

from math import sqrt

import numpy as np
import pytest

from feedlib import Answer, solve
from feedlib.conventions import SPEED_OF_LIGHT_M_PER_S, guided_wavelength_m
from feedlib.parts import CoaxEnd, Transformer
from feedlib.plan import Cable
from tests.reference.build import (
    Section,
    antenna,
    centre,
    circuit,
    deg,
    expect,
    impedance,
    line,
    reflection,
    rows,
    sweep,
    swr,
    tee,
)


def one_section(section: Section, *frequencies_hz: float, antenna_ohm: complex = 50.0) -> Answer:
    """Radio, one section, antenna; a channel named by each frequency."""
    plan = circuit("radio > L > A", {"L": section, "A": antenna(antenna_ohm)}, frequencies_hz)
    return solve(plan)


# Conductor and dielectric loss of a 0.91 / 3.02 mm PTFE coax at 1 GHz, dB/m
CX_01_CONDUCTOR, CX_01_DIELECTRIC = 0.326674, 0.0525092


@pytest.mark.parametrize(("frequency_hz", "printed"), [(1e8, "0.108554"), (1e9, "0.379183"), (1e10, "1.55813")])
def test_cx_02_loss_laws(frequency_hz: float, printed: str) -> None:
    """CX-01, CX-02. Pozar, Microwave Engineering, 4th ed., Table 2.1 and sec. 2.7: the conductor's loss goes as
    sqrt(f), the dielectric's as f. Coefficients from 1 GHz, the total at other frequencies."""
    cable = Cable(
        z0_ohm=49.8705,
        velocity_factor=0.693375,
        skin_db_per_100m=CX_01_CONDUCTOR * 100 / sqrt(1000),
        dielectric_db_per_100m=CX_01_DIELECTRIC * 100 / 1000,
    )
    expect(cable.loss_db_per_m(frequency_hz), printed, relative=1e-5)
    found = one_section(Section(cable, 1.0), frequency_hz, antenna_ohm=49.8705)
    expect(found.mark.harness_loss_db[0], printed, relative=1e-5)


def test_cx_06_two_cables_side_by_side() -> None:
    """CX-06. Transmission-line theory; common practice: two 75 ohm quarter waves in parallel are one of 37.5 ohm and
    turn 50 ohm into 28.125 ohm."""
    found = centre(
        "radio > T1, T1:2 > a > T2:2, T1:3 > b > T2:3, T2 > A",
        T1=tee(),
        a=line(75, 90),
        b=line(75, 90),
        T2=tee(),
        A=antenna(50),
    )
    assert impedance(found, "T1:1") == pytest.approx(28.125, rel=1e-9)


CX_07 = """
2.26 | 0.66519
2.29 | 0.660819
2.1 | 0.690066
1.56 | 0.800641
1.4 | 0.845154
1.0 | 1
"""


@pytest.mark.parametrize(("eps_r", "velocity_factor"), rows(CX_07))
def test_cx_07_velocity_factor_from_permittivity(eps_r: str, velocity_factor: str) -> None:
    """CX-07. Wire-maker tables: c/(4 f sqrt(eps_r)) of cable with the printed velocity factor is a quarter wave.

    Its open end is seen as a short; the reactance that is left is Z0 times the error of the angle."""
    length_m = SPEED_OF_LIGHT_M_PER_S / (4 * 1e9 * sqrt(float(eps_r)))
    cable = Cable(z0_ohm=50.0, velocity_factor=float(velocity_factor))
    plan = circuit("radio > stub", {"stub": Section(cable, length_m)}, [1e9])
    left_deg = np.degrees(impedance(solve(plan).mark, "stub:1").imag / 50)
    assert abs(left_deg) < 90 * 1.5e-5 / float(velocity_factor)


def test_cx_08_open_end_repeats() -> None:
    """CX-08. Definition of time-domain reflectometry: S11 of an open 5 m cable, velocity factor 0.66, repeats every
    c VF/(2 L) = 19.7863 MHz."""
    cable = Cable(z0_ohm=50.0, velocity_factor=0.66)
    wanted_hz = [400e6, 400e6 + 19.7863e6]
    answer = solve(circuit("radio > L", {"L": Section(cable, 5.0)}, wanted_hz))
    first, second = (answer.channels[str(f)].harness_s[0, 0, 0] for f in wanted_hz)
    assert abs(first - second) < 2 * np.pi * 1e-5
    halfway = solve(circuit("radio > L", {"L": Section(cable, 5.0)}, [400e6 + 19.7863e6 / 2]))
    assert abs(first + halfway.mark.harness_s[0, 0, 0]) < 2 * np.pi * 1e-5


CX_09 = """
144e6 | 0.66 | 0.261999
432e6 | 0.66 | 0.785998
5800e6 | 0.69 | 10.0939
"""


@pytest.mark.parametrize(("frequency_hz", "velocity_factor", "printed"), rows(CX_09))
def test_cx_09_phase_of_a_millimetre(frequency_hz: str, velocity_factor: str, printed: str) -> None:
    """CX-09. Definition: 360 dl/(lambda VF), 1 mm more in one of two legs."""
    cable = Cable(z0_ohm=50.0, velocity_factor=float(velocity_factor))
    parts = {
        "T": tee(),
        "a": Section(cable, 0.3),
        "b": Section(cable, 0.301),
        "A": antenna(50),
        "B": antenna(50),
    }
    found = solve(circuit("radio > T, T:2 > a > A, T:3 > b > B", parts, [float(frequency_hz)])).mark
    expect(deg(found.antenna_current_a[0, 0] / found.antenna_current_a[0, 1]), printed, absolute=1e-5)
    expect(found.phase_balance_deg[0], printed, absolute=1e-5)


def test_cp_01_quarter_wave_at_5_8_ghz() -> None:
    """CP-01. Common practice, no source: at 5.8 GHz and velocity factor 0.69 a quarter wave is 8.9 mm."""
    expect(guided_wavelength_m(5.8e9, 1.0) * 100, "5.16884", relative=1e-5)
    expect(guided_wavelength_m(5.8e9, 0.69) / 4 * 1000, "8.91624", relative=1e-5)
    cable = Cable(z0_ohm=75.0, velocity_factor=0.69)
    found = one_section(Section(cable, 8.91624e-3), 5.8e9).mark
    expect(impedance(found, "L:1"), "112.50", relative=1e-5)


def test_cp_01_solder_joints_are_taken_off_the_cut() -> None:
    """CP-01. Common practice, no source: two joints of 1 mm each leave 6.91624 mm to cut."""
    joint = CoaxEnd(z0_ohm=75.0, velocity_factor=0.69, length_m=1e-3)
    cable = Cable(z0_ohm=75.0, velocity_factor=0.69)
    found = one_section(Section(cable, 6.91624e-3, (joint, joint)), 5.8e9).mark
    expect(impedance(found, "L:1"), "112.50", relative=1e-5)
    without = one_section(Section(cable, 6.91624e-3), 5.8e9).mark
    assert abs(impedance(without, "L:1") - 112.5) > 10


def test_cp_02_two_antennas_through_75_ohm() -> None:
    """CP-02. Common practice, no source: 112.5 ohm each, 56.25 ohm in parallel, 24.6 dB; as cut at 5.8 GHz."""
    leg = Section(Cable(z0_ohm=75.0, velocity_factor=0.69), 8.91624e-3)
    parts = {"T": tee(), "a": leg, "b": leg, "A": antenna(50), "B": antenna(50)}
    found = solve(circuit("radio > T, T:2 > a > A, T:3 > b > B", parts, [5.8e9])).mark
    expect(impedance(found, "a:1"), "112.50", relative=1e-5)
    expect(impedance(found, "b:1"), "112.50", relative=1e-5)
    expect(impedance(found, "T:1"), "56.250", relative=1e-5)
    expect(reflection(found), "0.0588235", absolute=1e-5)
    expect(found.return_loss_db[0], "24.6090", absolute=1e-4)
    expect(swr(impedance(found, "radio:1")), "1.1250", absolute=1e-5)
    assert found.antenna_share[0, 0] == pytest.approx(found.antenna_share[0, 1], rel=1e-12)


def test_cp_03_equal_legs_stay_in_phase() -> None:
    """CP-03. Common practice, no source: equal legs, 0 degrees at every frequency."""
    leg = line(75, 233)
    parts = {"T": tee(), "a": leg, "b": leg, "A": antenna(50), "B": antenna(50)}
    found = sweep([0.2, 0.77, 1.0, 1.3], "radio > T, T:2 > a > A, T:3 > b > B", **parts)
    assert all(f.phase_balance_deg[0] < 1e-9 for f in found.values())
    assert all(f.amplitude_balance_db[0] < 1e-9 for f in found.values())


@pytest.mark.parametrize(("ratio", "error_deg"), [(1.0, 0.0), (1.05, 9.0), (0.95, 9.0)])
def test_cp_03_a_flipped_antenna_and_a_half_wave(ratio: float, error_deg: float) -> None:
    """CP-03. Common practice, no source: a half wave makes up for a reversed antenna at f0 only."""
    parts = {
        "T": tee(),
        "a": line(50, 100),
        "b": line(50, 100),
        "half": line(50, 180),
        "flip": Transformer(ratio=-1.0),
        "A": antenna(50),
        "B": antenna(50),
    }
    found = sweep([ratio], "radio > T, T:2 > a > A, T:3 > b > half > flip > B", **parts)[ratio]
    assert found.phase_balance_deg[0] == pytest.approx(error_deg, abs=1e-9)
