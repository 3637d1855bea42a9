"""What is accepted and what is refused of Touchstone files, version 2.

[2] Touchstone File Format Specification
Version 2.0, IBIS Open Forum (2009), and Version 2.1 (2024). IBIS TSIRD 4.1.
"""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose, assert_array_equal

from feedlib.touchstone import TouchstoneError, read_touchstone

TWO_PORT_ROW = "0.1 0.0 0.9 -0.1 0.01 0.02 0.2 0.0"
TWO_PORT_S = [[0.1, 0.01 + 0.02j], [0.9 - 0.1j, 0.2]]


def version_2(*middle: str, data: str, option_line: str = "# MHz S RI R 50", end: str = "[End]") -> str:
    return "\n".join(["[Version] 2.0", option_line, *middle, "[Network Data]", data, end]) + "\n"


EXAMPLE_6 = """! [2] example 6
[Version] {version}
# GHz S MA R 50
[Number of Ports] 4
[Number of Frequencies] 1
[Reference] 50 75
0.01 0.01
[Matrix Format] {matrix_format}
[Network Data]
{rows}
[End]
"""
LOWER = """5.00000 0.60 161.24
0.40 -42.20 0.60 161.20
0.42 -66.58 0.53 -79.34 0.60 161.24
0.53 -79.34 0.42 -66.58 0.40 -42.20 0.60 161.24"""
UPPER = """5.00000 0.60 161.24 0.40 -42.20 0.42 -66.58 0.53 -79.34
0.60 161.20 0.53 -79.34 0.42 -66.58
0.60 161.24 0.40 -42.20
0.60 161.24"""
FULL = """5.00000 0.60 161.24 0.40 -42.20 0.42 -66.58 0.53 -79.34
0.40 -42.20 0.60 161.20 0.53 -79.34 0.42 -66.58
0.42 -66.58 0.53 -79.34 0.60 161.24 0.40 -42.20
0.53 -79.34 0.42 -66.58 0.40 -42.20 0.60 161.24"""


@pytest.mark.parametrize("version", ["2.0", "2.1"])
@pytest.mark.parametrize(("matrix_format", "rows"), [("Lower", LOWER), ("UPPER", UPPER), ("full", FULL)])
def test_reference_and_matrix_format(version: str, matrix_format: str, rows: str) -> None:
    text = EXAMPLE_6.format(version=version, matrix_format=matrix_format, rows=rows)
    data = read_touchstone(text, "cable.ts")
    assert data.reference_ohm.tolist() == [50, 75, 0.01, 0.01]
    assert data.frequency_hz.tolist() == [5e9]
    s = data.s[..., 0]
    assert_allclose(s[0, 0], -0.568124 + 0.192963j, atol=1e-6)
    assert_allclose([s[0, 1], s[1, 0], s[3, 2], s[2, 3]], [0.296322 - 0.268688j] * 4, atol=1e-6)
    assert_allclose([s[3, 0], s[0, 3]], [0.0980397 - 0.520853j] * 2, atol=1e-6)


def test_all_keywords_at_once_in_lower_case() -> None:
    text = f"""! a comment first
[version] 2.1
# mhz s ri r 10
# GHz Z DB R 20
[number  of ports] 2 ! a comment after it
[Begin Information]
[Manufacturer] nobody
1 2 3 nan
[End] of this text
[End Information]
[Two-Port Data Order] 12_21
[number of frequencies] 2
[Number of Noise Frequencies] 1
[reference]
40
60
[network data]
100 {TWO_PORT_ROW}
# Hz
200 0.1 0.0 0.9 -0.1
0.01 0.02 0.2 0.0
[noise data]
100 1 .5 0 20
[end]
! the last word
"""
    data = read_touchstone(text, "part.s2p")
    assert data.frequency_hz.tolist() == [100e6, 200e6]
    assert data.reference_ohm.tolist() == [40, 60]
    assert_array_equal(data.s[..., 0], np.transpose(TWO_PORT_S))
    assert_array_equal(data.s[..., 1], np.transpose(TWO_PORT_S))


def test_option_line_gives_the_reference_where_no_keyword_does() -> None:
    text = version_2("[Number of Ports] 1", "[Number of Frequencies] 1", data="1 0 0", option_line="# R 93")
    assert read_touchstone(text, "load.s1p").reference_ohm.tolist() == [93]


GOOD_2 = f"""[Version] 2.0
# MHz S RI R 50
[Number of Ports] 2
[Two-Port Data Order] 21_12
[Number of Frequencies] 1
[Number of Noise Frequencies] 1
[Reference] 50 75
[Matrix Format] Full
[Network Data]
100 {TWO_PORT_ROW}
[Noise Data]
100 1 .5 0 20
[End]
"""


@pytest.mark.parametrize(
    ("wrong", "right", "line", "about"),
    [
        ("[Version] 1.0", "[Version] 2.0", 1, "2.0"),
        ("[Version]", "[Version] 2.0", 1, "2.0"),
        ("[Versoin] 2.0", "[Version] 2.0", 1, "Versoin"),
        ("[Number of Ports] 2", "# MHz S RI R 50\n[Number of Ports] 2", 2, "option line"),
        ("", "[Number of Ports] 2\n", 8, "Number of Ports"),
        ("[Number of Ports] 3", "[Number of Ports] 2", 3, "name says 2"),
        ("[Number of Ports] two", "[Number of Ports] 2", 3, "whole number"),
        ("[Number of Ports] 2 2", "[Number of Ports] 2", 3, "whole number"),
        ("[Number of Ports] 0", "[Number of Ports] 2", 3, "whole number"),
        ("", "[Two-Port Data Order] 21_12\n", 8, "Two-Port Data Order"),
        ("[Two-Port Data Order] 21_21", "[Two-Port Data Order] 21_12", 4, "21_12, 12_21"),
        ("", "[Number of Frequencies] 1\n", 8, "Number of Frequencies"),
        ("[Number of Frequencies] 2", "[Number of Frequencies] 1", 5, "is 2, but the file has 1"),
        ("", "[Number of Noise Frequencies] 1\n", 8, "Number of Noise Frequencies"),
        ("[Number of Noise Frequencies] 3", "[Number of Noise Frequencies] 1", 6, "is 3, but the file has 1"),
        ("[Reference] 50", "[Reference] 50 75", 7, "each of the 2 ports"),
        ("[Reference] 50 75 75", "[Reference] 50 75", 7, "each of the 2 ports"),
        ("[Reference] 50 -75", "[Reference] 50 75", 7, "above zero"),
        ("[Reference]", "[Reference] 50 75", 7, "above zero"),
        ("[Matrix Format] Half", "[Matrix Format] Full", 8, "FULL, LOWER, UPPER"),
        ("[Matrix Format] Full\n1 2 3", "[Matrix Format] Full", 9, "'1 2 3' must not stand here"),
        ("[Mixed-Mode Order] D1,2 C1,2", "[Matrix Format] Full", 8, "mixed-mode"),
        ("[Reference] 50 75\n[Reference] 50 75", "[Reference] 50 75", 8, "only once"),
        ("[Begin Information]\n[Matrix Format] Full", "[Matrix Format] Full", 8, "[End Information]"),
        ("[Network Data]\n", f"[Network Data]\n100 {TWO_PORT_ROW}\n", 9, "no data"),
        (f"100 {TWO_PORT_ROW}\n100 1 .5 0 20", f"100 {TWO_PORT_ROW}", 11, "the frequency must be above"),
        ("", "[Network Data]\n", 9, "must not stand here"),
        ("100 1 .5 0", "100 1 .5 0 20", 12, "five numbers"),
        ("", "[End]\n", 12, "[End] is missing"),
        ("[End]\n1 2 3", "[End]", 14, "must not stand here"),
    ],
)
def test_broken_rules_of_version_2_are_refused(wrong: str, right: str, line: int, about: str) -> None:
    read_touchstone(GOOD_2, "part.s2p")
    assert GOOD_2.count(right) == 1
    with pytest.raises(TouchstoneError) as refusal:
        read_touchstone(GOOD_2.replace(right, wrong), "part.s2p")
    sentence = str(refusal.value)
    assert sentence.startswith(f'"part.s2p", line {line}: ')
    assert about in sentence


def test_keywords_after_the_data_are_refused() -> None:
    middle = ("[Number of Ports] 1", "[Number of Frequencies] 1")
    text = version_2(*middle, data="1 0 0\n[Reference] 50")
    with pytest.raises(TouchstoneError, match=r'^"load\.ts", line 5: after \[Network Data\] must come \[End\]'):
        read_touchstone(text, "load.ts")


@pytest.mark.parametrize("keyword", ["[Two-Port Data Order] 21_12", "[Noise Data]"])
def test_keywords_of_two_ports_are_refused_with_other_numbers_of_ports(keyword: str) -> None:
    header, below = (keyword, "") if "Order" in keyword else ("! none", f"\n{keyword}\n1 1 1 1 1")
    middle = ("[Number of Ports] 1", header, "[Number of Frequencies] 1")
    with pytest.raises(TouchstoneError, match="must stand only in a file of two ports"):
        read_touchstone(version_2(*middle, data=f"1 0 0{below}"), "load.s1p")


NETWORK_ROWS = "2 .95 -26 3.57 157 .04 76 .66 -14\n22 .60 -144 1.30 40 .14 40 .56 -85"
NOISE_HEADER = ("[Number of Ports] 2", "[Two-Port Data Order] 21_12", "[Number of Frequencies] 2")


def test_noise_data_are_left_out() -> None:
    """[2] example 17."""
    middle = (*NOISE_HEADER, "[Number of Noise Frequencies] 2", "[Reference] 50 25")
    rows = f"{NETWORK_ROWS}\n[Noise Data]\n4 .7 .64 69 19\n18 2.7 .46 -33 20"
    data = read_touchstone(version_2(*middle, data=rows, option_line="# GHz S MA"), "amplifier.s2p")
    assert data.frequency_hz.tolist() == [2e9, 22e9]
    assert data.reference_ohm.tolist() == [50, 25]
