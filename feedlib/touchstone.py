"""Touchstone files, versions 1 and 2, as S-parameters, and their use; opens no file, knows no plan."""

from __future__ import annotations

import math
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from feedlib.conventions import Array, ComplexArray, Index
from feedlib.errors import FeedError, quoted
from feedlib.touchstone_syntax import (
    DataSets,
    Line,
    Options,
    Refusal,
    Section,
    check_count,
    check_noise,
    choice,
    content_lines,
    read_data_sets,
    read_options,
    read_resistances,
    read_sections,
    whole_number,
)

_PORTS_IN_NAME = re.compile(r"\.s([0-9]{1,4})p$", re.IGNORECASE)
_ROW_SIGNS = {"Z": (1, 1), "Y": (-1, -1), "H": (1, -1), "G": (-1, 1)}
"""Of ports 1 and 2: 1 where the parameters' row gives the port's voltage, -1 where it gives the current."""


class TouchstoneError(FeedError):
    """Touchstone data that cannot be used: one sentence, with the file's name and the line number."""


@dataclass(frozen=True, slots=True, eq=False)
class NetworkData:
    """S-parameters of one file at its own references; the arrays are read-only.

    frequency_hz : (F,) strictly increasing.
    s : (P, P, F); s[i, j] is the wave out of port i by the wave into port j.
    reference_ohm : (P,) real, > 0.
    """

    frequency_hz: Array
    s: ComplexArray
    reference_ohm: Array

    def __post_init__(self) -> None:
        for array in (self.frequency_hz, self.s, self.reference_ohm):
            array.setflags(write=False)

    @property
    def ports(self) -> int:
        """Number of ports P."""
        return len(self.reference_ohm)


def read_touchstone(text: str, name: str) -> NetworkData:
    """The network data of a file as S-parameters at the file's own references.

    The ending of ``name`` (.s1p, .s2p, ...) gives the number of ports; a version 2 file states it, and must
    agree. Noise data are checked for their form and left out. Raises TouchstoneError.
    """
    lines = content_lines(text)
    ending = _PORTS_IN_NAME.search(name)
    ports_in_name = int(ending[1]) if ending else None
    try:
        if not lines:
            raise Refusal(1, "there are no data, only blank lines or comments")
        read = _read_version_2 if lines[0][1].startswith("[") else _read_version_1
        return read(lines, ports_in_name)
    except Refusal as refusal:
        raise TouchstoneError(f"{quoted(name)}, line {refusal.line}: {refusal}") from None


def interpolate(data: NetworkData, frequency_hz: Array) -> ComplexArray:
    """S (P, P, F') at the wanted frequencies (F',), linear in Re and Im between the file's own.

    A straight line between passive matrices stays passive. Outside the data S is nan, never extrapolated;
    a single point serves only its own frequency.
    """
    wanted_hz, known_hz = np.asarray(frequency_hz, dtype=np.float64), data.frequency_hz
    inside = (wanted_hz >= known_hz[0]) & (wanted_hz <= known_hz[-1])
    within_hz = np.where(inside, wanted_hz, known_hz[0])
    lower = np.searchsorted(known_hz, within_hz, side="right") - 1
    upper = np.minimum(lower + 1, len(known_hz) - 1)
    step_hz = np.where(upper > lower, known_hz[upper] - known_hz[lower], 1.0)
    weight = (within_hz - known_hz[lower]) / step_hz
    s: ComplexArray = (1 - weight) * data.s[..., lower] + weight * data.s[..., upper]
    s[..., ~inside] = complex(math.nan, math.nan)
    return s


def _read_version_1(lines: Sequence[Line], ports_in_name: int | None) -> NetworkData:
    options = read_options(*lines[0])
    if not ports_in_name:
        raise Refusal(options.line, "the file's name must end in .s1p, .s2p and so on, to say the number of ports")
    rows = [row for row in lines[1:] if not row[1].startswith("#")]  # only the first option line counts
    if not rows:
        raise Refusal(options.line, "there are no data, only the option line")
    sets, noise = read_data_sets(rows, ports_in_name, pairs=ports_in_name**2, unit_power=options.unit_power)
    check_noise(noise, options.unit_power)
    places = _places(ports_in_name, "FULL", "21_12")
    reference_ohm = _option_reference(options, ports_in_name)
    return _network_data(sets, places, options, reference_ohm, unit_ohm=np.ones(ports_in_name))


def _read_version_2(lines: Sequence[Line], ports_in_name: int | None) -> NetworkData:
    sections = read_sections(lines)
    options = read_options(*lines[1])
    if "Mixed-Mode Order" in sections:
        line = sections["Mixed-Mode Order"].line
        raise Refusal(line, "mixed-mode data cannot be used; save them with single-ended ports")
    ports = whole_number(sections, "Number of Ports")
    if ports_in_name not in (None, ports):
        line = sections["Number of Ports"].line
        raise Refusal(line, f"[Number of Ports] is {ports}, but the file's name says {ports_in_name}")
    for keyword in ("Two-Port Data Order", "Noise Data"):
        if keyword in sections and ports != 2:
            raise Refusal(sections[keyword].line, f"[{keyword}] must stand only in a file of two ports")
    order = choice(sections, "Two-Port Data Order", ("21_12", "12_21")) if ports == 2 else "12_21"
    shape = "FULL"
    if "Matrix Format" in sections:
        shape = choice(sections, "Matrix Format", ("FULL", "LOWER", "UPPER"))
    pairs = ports**2 if shape == "FULL" else ports * (ports + 1) // 2
    data = sections["Network Data"]
    if not data.below:
        raise Refusal(data.line, "there are no data below [Network Data]")
    sets, noise = read_data_sets(data.below, ports, pairs=pairs, unit_power=options.unit_power)
    if noise:
        raise Refusal(noise[0][0], "the frequency must be above that of the data set before")
    check_count(sections, "Number of Frequencies", len(sets.lines))
    if "Noise Data" in sections:
        check_noise(sections["Noise Data"].below, options.unit_power)
        check_count(sections, "Number of Noise Frequencies", len(sections["Noise Data"].below))
    reference_ohm = _keyword_reference(sections, options, ports)
    places = _places(ports, shape, order)
    return _network_data(sets, places, options, reference_ohm, unit_ohm=reference_ohm)


def _option_reference(options: Options, ports: int) -> Array:
    if len(options.reference_ohm) not in (1, ports):
        raise Refusal(options.line, f"R must be followed by one resistance, or by one for each port, {ports}")
    return np.broadcast_to(np.array(options.reference_ohm), ports).copy()


def _keyword_reference(sections: Mapping[str, Section], options: Options, ports: int) -> Array:
    if "Reference" not in sections:
        return _option_reference(options, ports)
    section = sections["Reference"]
    words = section.arguments + [word for _, content in section.below for word in content.split()]
    reference_ohm = np.array(read_resistances(section.line, words))
    if len(reference_ohm) != ports:
        raise Refusal(section.line, f"[Reference] must give one resistance for each of the {ports} ports")
    return reference_ohm


def _places(ports: int, shape: str, two_port_order: str) -> Index:
    """Row and column (2, pairs) of each pair of a data set."""
    if shape == "FULL":
        places = np.indices((ports, ports)).reshape(2, -1)
    else:
        places = np.array(np.tril_indices(ports) if shape == "LOWER" else np.triu_indices(ports))
    return places[::-1] if ports == 2 and two_port_order == "21_12" else places


def _network_data(
    sets: DataSets, places: Index, options: Options, reference_ohm: Array, *, unit_ohm: Array
) -> NetworkData:
    ports = len(reference_ohm)
    rows, columns = places
    pairs = np.array(sets.numbers).reshape(len(sets.lines), -1, 2)
    matrices = np.empty((len(sets.lines), ports, ports), dtype=np.complex128)
    with np.errstate(all="ignore"):  # what overflows is refused below, with its line
        values = _complex_values(pairs[..., 0], pairs[..., 1], options.number_format)
        matrices[:, columns, rows] = values  # half a matrix stands for a symmetrical one
        matrices[:, rows, columns] = values
        s = matrices if options.parameter == "S" else _s_of_immittances(matrices, options, unit_ohm)
    not_finite = np.flatnonzero(~np.isfinite(s).all(axis=(1, 2)))
    if not_finite.size:
        raise Refusal(sets.lines[not_finite[0]], "the data set from here on must have finite S-parameters")
    return NetworkData(np.array(sets.frequency_hz), np.ascontiguousarray(s.transpose(1, 2, 0)), reference_ohm)


def _complex_values(first: Array, second: Array, number_format: str) -> ComplexArray:
    values = np.empty(first.shape, dtype=np.complex128)
    if number_format == "RI":
        values.real, values.imag = first, second
    else:
        magnitude = 10 ** (first / 20) if number_format == "DB" else first
        angle_rad = np.deg2rad(second)
        values.real, values.imag = magnitude * np.cos(angle_rad), magnitude * np.sin(angle_rad)
    return values


def _s_of_immittances(matrices: ComplexArray, options: Options, unit_ohm: Array) -> ComplexArray:
    """S (F, P, P) of Z, Y, H or G (F, P, P); nan where there is none.

    Voltages are counted in sqrt(unit_ohm), currents in 1/sqrt(unit_ohm), unit_ohm (P,): 1 for version 1,
    which stores normalised data, else the reference. So v = a + b and i = a - b at each port, and a matrix
    m that gives one of them (v: d = 1, i: d = -1) from the other has S = d (m + 1)^-1 (m - 1).
    """
    ports = len(unit_ohm)
    if options.parameter in "HG" and ports != 2:
        raise Refusal(options.line, f"{options.parameter}-parameters are for two ports only, not for {ports}")
    sign = np.resize(_ROW_SIGNS[options.parameter], ports)
    unit = unit_ohm ** (-sign / 2)
    normalised = matrices * np.outer(unit, unit)
    denominator = normalised + np.eye(ports)
    singular = ~(np.abs(np.linalg.slogdet(denominator).sign) > 0)
    denominator[singular] = math.nan  # as it is, solve would refuse the whole stack
    s: ComplexArray = sign[:, np.newaxis] * np.linalg.solve(denominator, normalised - np.eye(ports))
    return s
