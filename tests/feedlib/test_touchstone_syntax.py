"""What is accepted and what is refused of Touchstone files, version 1.

[1.1] Touchstone File Format Specification Rev 1.1, IBIS Open Forum (2002). IBIS TSIRD 5.1.
"""

from __future__ import annotations

import re
import string
from contextlib import suppress

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal

from feedlib.errors import FeedError
from feedlib.touchstone import TouchstoneError, read_touchstone

TWO_PORT_ROW = "0.1 0.0 0.9 -0.1 0.01 0.02 0.2 0.0"
TWO_PORT_S = [[0.1, 0.01 + 0.02j], [0.9 - 0.1j, 0.2]]
THREE_PORT_ROWS = ".1 0 .12 0 .13 0\n.21 0 .22 0 .23 0\n.31 0 .32 0 .33 0"
CLEAN_TWO_PORT = f"# MHz S RI R 50\n100 {TWO_PORT_ROW}\n200 {TWO_PORT_ROW}\n"


# --- The option line, [1.1]


@pytest.mark.parametrize(
    ("option_line", "frequency_hz", "s11", "reference_ohm"),
    [
        ("#", 2e9, 0.5j, 50),
        ("# RI R 75 MHz", 2e6, 0.5 + 90j, 75),
        ("# kHz S DB R 50", 2e3, 10 ** (0.5 / 20) * 1j, 50),
        ("# Hz", 2.0, 0.5j, 50),
        ("# r 12.5 ma s hz", 2.0, 0.5j, 12.5),
        ("#GHZ S MA R 50", 2e9, 0.5j, 50),
    ],
)
def test_option_line_in_any_order_and_case_with_defaults(
    option_line: str, frequency_hz: float, s11: complex, reference_ohm: float
) -> None:
    data = read_touchstone(f"{option_line}\n2 0.5 90\n", "load.s1p")
    assert data.frequency_hz.tolist() == [frequency_hz]
    assert data.reference_ohm.tolist() == [reference_ohm]
    assert data.ports == 1
    assert_allclose(data.s[0, 0], [s11], rtol=1e-15, atol=1e-15)


def test_one_resistance_for_each_port_on_the_option_line() -> None:
    """IBIS TSIRD 5.1."""
    data = read_touchstone(f"# MHz S RI R 50 75\n100 {TWO_PORT_ROW}\n", "part.s2p")
    assert data.reference_ohm.tolist() == [50, 75]
    assert_array_equal(data.s[..., 0], TWO_PORT_S)


@pytest.mark.parametrize(
    ("text", "hertz"),
    [
        ("868.1", "868.1e6"),
        ("2483.5", "2483.5e6"),
        ("8.681e2", "868.1e6"),
        ("0.1", "0.1e6"),
        (".3E+0", "3e5"),
    ],
)
def test_a_frequency_is_the_nearest_number_to_what_is_written(text: str, hertz: str) -> None:
    assert read_touchstone(f"# MHz\n{text} 0 0\n", "load.s1p").frequency_hz.tolist() == [float(hertz)]


# --- Noise, [1.1] noise section and example 8

NETWORK_ROWS = "2 .95 -26 3.57 157 .04 76 .66 -14\n22 .60 -144 1.30 40 .14 40 .56 -85"
NOISE_ROWS = "4 .7 .64 69 .38\n18 2.7 .46 -33 .40"


def test_noise_block_is_left_out() -> None:
    text = f"# GHZ S MA R 50\n{NETWORK_ROWS}\n! NOISE PARAMETERS\n{NOISE_ROWS}\n"
    data = read_touchstone(text, "amplifier.s2p")
    assert data.frequency_hz.tolist() == [2e9, 22e9]
    assert_allclose(np.abs(data.s[1, 0]), [3.57, 1.30], rtol=1e-15)
    assert_allclose(np.angle(data.s[0, 0], deg=True), [-26, -144], rtol=1e-15)


def test_noise_block_may_begin_at_the_last_network_frequency() -> None:
    data = read_touchstone(f"# GHz S MA\n{NETWORK_ROWS}\n22 .7 .64 69 .38\n", "amplifier.s2p")
    assert data.frequency_hz.tolist() == [2e9, 22e9]


@pytest.mark.parametrize(
    ("rows", "line"),
    [
        (f"{NETWORK_ROWS}\n4 .7 .64 69\n", 4),
        (f"{NETWORK_ROWS}\n4 .7 .64 69 .38\n18 2.7 .46 -33\n", 5),
        (f"{NETWORK_ROWS}\n4 .7 .64 69 .38\n3 2.7 .46 -33 .4\n", 5),
        (f"{NETWORK_ROWS}\n4 .7 .64 69 .38\n30 {TWO_PORT_ROW}\n", 5),
        (f"{NETWORK_ROWS}\n4 .7 .64 69 nan\n", 4),
        (f"{NETWORK_ROWS}\n4 {TWO_PORT_ROW}\n", 4),
    ],
)
def test_rows_after_a_drop_that_are_no_noise_data_are_refused(rows: str, line: int) -> None:
    with pytest.raises(TouchstoneError, match=rf'^"amplifier\.s2p", line {line}: '):
        read_touchstone(f"# GHz S MA\n{rows}", "amplifier.s2p")


def test_a_drop_is_no_noise_block_with_other_than_two_ports() -> None:
    with pytest.raises(TouchstoneError, match=r'^"load\.s1p", line 3: the frequency must be above'):
        read_touchstone("# GHz\n2 .5 0\n1 .7 .64 69 .38\n", "load.s1p")


# --- The whole file, [1.1]

SAME_AS_CLEAN = {
    "blank and comment lines": CLEAN_TWO_PORT.replace("\n", "\n\n! comment # [x] nan\n   \n"),
    "comment before the option line": "! first\n" + CLEAN_TWO_PORT,
    "comment after the last number": CLEAN_TWO_PORT.replace("0.2 0.0", "0.2 0.0 ! last"),
    "comment that touches the number": CLEAN_TWO_PORT.replace("0.2 0.0", "0.2 0.0! last"),
    "CR line ends": CLEAN_TWO_PORT.replace("\n", "\r"),
    "CR+LF line ends": CLEAN_TWO_PORT.replace("\n", "\r\n"),
    "no line end at the end": CLEAN_TWO_PORT.rstrip("\n"),
    "tabs": CLEAN_TWO_PORT.replace(" ", "\t"),
    "blanks around": CLEAN_TWO_PORT.replace("\n", "  \n \t"),
    "lower case, other order": CLEAN_TWO_PORT.replace("# MHz S RI R 50", "# r 50 ri mhz s"),
    "second option line": CLEAN_TWO_PORT.replace("\n200", "\n# GHz Z DB R 1\n200"),
    "usual number forms": CLEAN_TWO_PORT.replace("100", "1.0E+02").replace("0.9", "+.9").replace("0.0 ", "-0. "),
    "rows split in two": CLEAN_TWO_PORT.replace(" 0.01 0.02", "\n  0.01 0.02"),
    "byte order mark": "\ufeff" + CLEAN_TWO_PORT,
}


@pytest.mark.parametrize("text", SAME_AS_CLEAN.values(), ids=SAME_AS_CLEAN)
def test_accepted_with_the_same_numbers_as_the_clean_file(text: str) -> None:
    data = read_touchstone(text, "part.s2p")
    assert data.frequency_hz.tolist() == [100e6, 200e6]
    assert data.reference_ohm.tolist() == [50, 50]
    assert_array_equal(data.s[..., 0], TWO_PORT_S)
    assert_array_equal(data.s[..., 1], TWO_PORT_S)


ROW = f"100 {TWO_PORT_ROW}"
REFUSED = {
    "no option line": ("part.s2p", ROW, 1, "option line"),
    "data before the option line": (
        "part.s2p",
        f"! x\n{ROW}\n# MHz S RI R 50\n200 {TWO_PORT_ROW}",
        2,
        "option line",
    ),
    "unknown unit": ("part.s2p", f"\n# THz S RI R 50\n{ROW}", 2, "'THZ'"),
    "unknown format": ("part.s2p", f"# MHz S XY R 50\n{ROW}", 1, "'XY'"),
    "two units": ("part.s2p", f"# MHz GHz S RI\n{ROW}", 1, "'GHZ'"),
    "R without number": ("part.s2p", f"# MHz S RI R\n{ROW}", 1, "above zero"),
    "R without number but more": ("part.s2p", f"# R MHz S RI\n{ROW}", 1, "above zero"),
    "R of zero": ("part.s2p", f"# MHz S RI R 0\n{ROW}", 1, "above zero"),
    "R below zero": ("part.s2p", f"# MHz S RI R -50\n{ROW}", 1, "above zero"),
    "R twice": ("part.s2p", f"# MHz S RI R 50 R 75\n{ROW}", 1, "'R'"),
    "number without R": ("part.s2p", f"# MHz S RI 50\n{ROW}", 1, "'50'"),
    "three R for two ports": ("part.s2p", f"# MHz S RI R 50 50 50\n{ROW}", 1, "R must be followed by"),
    "8 numbers": ("part.s2p", "# MHz S RI\n100 .1 0 .2 0 .3 0 .4", 2, "not 8 numbers"),
    "8 numbers later on": ("part.s2p", f"# MHz S RI\n{ROW}\n200 .1 0 .2 0 .3 0 .4", 3, "not more"),
    "7 numbers": ("part.s2p", f"# MHz S RI\n100 .1 0 .2 0 .3 0\n200 {TWO_PORT_ROW}", 3, "from line 2 on has"),
    "10 numbers": ("part.s2p", f"# MHz S RI\n{ROW} .5", 2, "not 10 numbers"),
    "10 numbers later on": ("part.s2p", f"# MHz S RI\n{ROW}\n200 {TWO_PORT_ROW} 1", 3, "not more"),
    "11 numbers": ("part.s2p", f"# MHz S RI\n{ROW} .5 .5", 2, "8 numbers, not more"),
    "a missing row": (
        "part.s3p",
        "# MHz S RI\n1 1 0 1 0 1 0\n1 0 1 0 1 0",
        3,
        "12 numbers, but 3-port data need 18",
    ),
    "a missing row inside": (
        "part.s3p",
        f"# MHz S RI\n1 1 0 1 0 1 0\n1 0 1 0 1 0\n2 {THREE_PORT_ROWS}",
        4,
        "from line 2 on has a frequency and 12 numbers, but 3-port data need 18",
    ),
    "falling frequency, 1 port": ("load.s1p", "# MHz\n2 0 0\n1 0 0", 3, "the frequency must be above"),
    "falling frequency, 2 ports": (
        "part.s2p",
        f"# MHz\n{ROW}\n50 {TWO_PORT_ROW}",
        3,
        "the frequency must be above",
    ),
    "falling frequency, 3 ports": (
        "part.s3p",
        f"# MHz\n2 {THREE_PORT_ROWS}\n1 {THREE_PORT_ROWS}",
        5,
        "the frequency must be above",
    ),
    "repeated frequency": ("load.s1p", "# MHz\n2 0 0\n! x\n2.0 0 0", 4, "the frequency must be above"),
    "repeated frequency, 2 ports": ("part.s2p", f"# MHz\n{ROW}\n{ROW}", 3, "the frequency must be above"),
    "frequency below zero": ("load.s1p", "# MHz\n-1 0 0", 2, "not below zero"),
    "nan": ("load.s1p", "# MHz\n1 0 0\n2 nan 0", 3, "'nan' must be a number"),
    "inf": ("load.s1p", "# MHz\n1 0 0\n2 0 -inf", 3, "'-inf' must be a number"),
    "text": ("load.s1p", "# MHz\n1 0 0\n2 zero 0", 3, "'zero' must be a number"),
    "foreign digits": ("load.s1p", "# MHz\n1 0 0\n2 ٣ 0", 3, "must be a number"),
    "underscore": ("load.s1p", "# MHz\n1 0 0\n2 1_0 0", 3, "'1_0' must be a number"),
    "beyond all numbers": ("load.s1p", "# MHz\n1 0 0\n2 1e999 0", 3, "'1e999' must be a number"),
    "frequency beyond all numbers": ("load.s1p", "# GHz\n1e300 0 0", 2, "must be finite"),
    "exponent without end": ("load.s1p", f"# GHz\n1e-{'9' * 5000} 0 0", 2, "must be finite"),
    "decibels beyond all numbers": ("load.s1p", "# GHz DB\n1 0 0\n2 9999 0", 3, "finite S-parameters"),
    "impedance without S": ("load.s1p", "# GHz Z RI\n1 1 0\n2 -1 0", 3, "finite S-parameters"),
    "empty": ("load.s1p", "", 1, "no data"),
    "comments only": ("load.s1p", "! one\n\n! two\n", 1, "no data"),
    "option line only": ("load.s1p", "! one\n# MHz S RI R 50\n! two\n", 2, "no data"),
    "3-port data in .s2p": ("part.s2p", f"# MHz S RI\n1 {THREE_PORT_ROWS}", 3, "2-port data must have"),
    "2-port data in .s3p": ("part.s3p", f"# MHz S RI\n{ROW}\n200 {TWO_PORT_ROW}", 3, "3-port data need 18"),
    "2-port data in .s1p": ("part.s1p", f"# MHz S RI\n{ROW}", 2, "1-port data must have"),
    "name without number of ports": ("part.txt", CLEAN_TWO_PORT, 1, "must end in .s1p"),
    "version 1 as .ts": ("part.ts", CLEAN_TWO_PORT, 1, "must end in .s1p"),
    "no ports at all": ("part.s0p", CLEAN_TWO_PORT, 1, "must end in .s1p"),
    "H of one port": ("load.s1p", "# MHz H RI\n1 1 0", 1, "two ports only"),
    "keyword of version 2": ("load.s1p", "# MHz\n[Number of Ports] 1\n1 0 0", 2, "'[Number'"),
}


@pytest.mark.parametrize(("name", "text", "line", "about"), REFUSED.values(), ids=REFUSED)
def test_refused_in_one_sentence_with_the_line(name: str, text: str, line: int, about: str) -> None:
    with pytest.raises(TouchstoneError) as refusal:
        read_touchstone(text, name)
    sentence = str(refusal.value)
    assert sentence.startswith(f'"{name}", line {line}: ')
    assert about in sentence
    assert "\n" not in sentence
    assert len(sentence) < 160
    assert isinstance(refusal.value, FeedError)


SCRAPS = """#|# Z RI R 5|[Version] 2.0|[Network Data]|[End]|[Reference]|[Noise Data]|[Number of Ports] 1
[Number of Frequencies] 1|1|2 3|1 0 0|2 -1 0|1e308 1e308 1|!|\r| |nan|[|]"""


@given(
    st.lists(st.sampled_from(re.split(r"[|\n]", SCRAPS)) | st.text(string.printable, max_size=5), max_size=25),
    st.sampled_from(["\n", " ", ""]),
)
def test_any_text_ends_in_finite_data_or_in_a_refusal(scraps: list[str], between: str) -> None:
    with suppress(TouchstoneError):
        data = read_touchstone(between.join(scraps), "x.s1p")
        assert np.isfinite(data.s).all()
        assert (np.diff(data.frequency_hz) > 0).all()
