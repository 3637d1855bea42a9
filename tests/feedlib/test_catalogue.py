"""The cable catalogue against its own list of sources, an independent fit, and hand-read rows."""

import csv
import dataclasses
import re

import numpy as np
import pytest
from scipy.constants import c as LIGHT_M_PER_S
from scipy.optimize import nnls

from feedlib.assets_place import ASSETS
from feedlib.catalogue import CatalogueCable, figures, load_catalogue, quality_sentence
from feedlib.errors import FeedError
from feedlib.loss_fit import fit_loss

CABLES = {cable.type: cable for cable in load_catalogue()}
SOURCES = (ASSETS / "cables" / "coax-sources.md").read_text(encoding="utf-8")
with (ASSETS / "cables" / "coax.csv").open(encoding="utf-8", newline="") as file:
    ROWS = list(csv.DictReader(file))

FITTED = [cable for cable in CABLES.values() if cable.attenuation_points]
NO_ATTENUATION = {"RG-63B/U", "RG-83/U", "RG-225/U", "RG-302/U", "RG-304/U", "RG-400/U", "RG-401/U"}

# The field that each single cell of the file becomes.
FIELDS = {
    "m17_sheet": "m17_sheet",
    "z0_ohm": "z0_ohm",
    "z0_tol_ohm": "z0_tolerance_ohm",
    "velocity_factor": "velocity_factor",
    "capacitance_pf_per_m": "capacitance_f_per_m",
    "dielectric": "dielectric",
    "inner_conductor": "inner_conductor",
    "inner_diameter_mm": "inner_diameter_m",
    "dielectric_diameter_mm": "dielectric_diameter_m",
    "outer_diameter_mm": "outer_diameter_m",
    "min_bend_radius_mm": "min_bend_radius_m",
    "mass_g_per_m": "mass_kg_per_m",
    "max_temperature_c": "max_temperature_c",
    "max_voltage_v_rms": "max_voltage_v",
    "max_frequency_ghz": "max_frequency_hz",
}


def consistency_table() -> dict[str, list[str]]:
    """The cells after the type of each row of the printed table "Consistency check"."""
    section = SOURCES.split("## Consistency check")[1]
    rows = [[cell.strip() for cell in line.split("|")[1:-1]] for line in section.splitlines() if "|" in line]
    return {row[0]: row[1:] for row in rows if row[0].startswith("RG-")}


def documented() -> dict[str, set[str]]:
    """The columns, and ``att@<MHz>`` points, that "Fields by source" gives to a document, by type."""
    cells: dict[str, set[str]] = {cable_type: set() for cable_type in CABLES}
    for line in SOURCES.split("## Fields by source")[1].split("##")[0].splitlines():
        if entry := re.match(r"- \*\*S\d\d\*\* - (RG-.*)", line):
            for cable in entry[1].split("; "):
                cable_type, names = cable.split(": ")
                cells[cable_type].update(names.split(", "))
    return cells


TABLE = consistency_table()
DOCUMENTED = documented()


# -- the rows ----------------------------------------------------------------------------------------


def test_every_row_loads_in_the_order_of_the_file() -> None:
    assert [cable.type for cable in load_catalogue()] == [row["type"] for row in ROWS] == list(TABLE)
    assert len(CABLES) == 31  # stated at the top of the list of sources


def test_the_figures_of_rg_316_in_si_units() -> None:
    cable = CABLES["RG-316/U"]
    assert cable.m17_sheet == "M17/113"
    assert (cable.z0_ohm, cable.z0_tolerance_ohm, cable.velocity_factor) == (50, 2, 0.695)
    assert cable.capacitance_f_per_m == 95.1e-12
    assert cable.dielectric == "PTFE"
    assert cable.inner_conductor == "7 x 0.17 mm silver-plated copper-clad steel"
    assert (cable.inner_diameter_m, cable.dielectric_diameter_m) == (0.00051, 0.00152)
    assert (cable.outer_diameter_m, cable.min_bend_radius_m) == (0.00249, 0.0127)
    assert cable.mass_kg_per_m == 0.018
    assert (cable.max_temperature_c, cable.max_voltage_v, cable.max_frequency_hz) == (200, 900, 3e9)
    assert cable.attenuation_points == ((400e6, 65.62), (1e9, 98.43), (3e9, 170))
    assert cable.power_points == ()
    assert cable.source_ids == ("S07", "S10", "S12", "S22", "MEM")
    assert cable.notes.startswith("from memory, unverified: z0_tol_ohm")


def test_power_points_in_hertz_and_watts() -> None:
    points = ((50e6, 450), (100e6, 300), (200e6, 200), (400e6, 135), (1e9, 80))
    assert CABLES["RG-58C/U"].power_points == points


def test_an_empty_cell_is_none() -> None:
    cable = CABLES["RG-83/U"]
    unknown = {field.name for field in dataclasses.fields(cable) if getattr(cable, field.name) is None}
    assert unknown == {
        "m17_sheet",
        "z0_tolerance_ohm",
        "min_bend_radius_m",
        "mass_kg_per_m",
        "max_temperature_c",
        "max_voltage_v",
        "max_frequency_hz",
        "fit",
    }


# VF = 1 / (c Z0 C) holds for a lossless line. Exceptions by the list of sources: nominal figures of the
# air-spaced types are rounded; the capacitance of RG-59B/U is a whole number of pF per foot.
VELOCITY_EXCEPTIONS_PERCENT = {"RG-62A/U": -3.6, "RG-63B/U": -3.1, "RG-59B/U": -2.2}


@pytest.mark.parametrize("cable", CABLES.values(), ids=CABLES)
def test_velocity_factor_agrees_with_capacitance(cable: CatalogueCable) -> None:
    assert cable.capacitance_f_per_m is not None
    from_capacitance = 1 / (LIGHT_M_PER_S * cable.z0_ohm * cable.capacitance_f_per_m)
    off_percent = 100 * (from_capacitance / cable.velocity_factor - 1)
    assert off_percent == pytest.approx(float(TABLE[cable.type][0]), abs=0.051)
    if cable.type in VELOCITY_EXCEPTIONS_PERCENT:
        assert off_percent == pytest.approx(VELOCITY_EXCEPTIONS_PERCENT[cable.type], abs=0.051)
    else:
        assert abs(off_percent) < 1


# -- the marks "from memory" -------------------------------------------------------------------------


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row["type"])
def test_from_memory_is_what_no_document_is_listed_for(row: dict[str, str]) -> None:
    cable, listed = CABLES[row["type"]], DOCUMENTED[row["type"]]
    from_memory = {field for column, field in FIELDS.items() if row[column] and column not in listed}
    points_mhz = row["att_f_mhz"].split(";") if row["att_f_mhz"] else []
    points_hz = {float(f_mhz) * 1e6 for f_mhz in points_mhz if f"att@{f_mhz}" not in listed}
    assert cable.attenuation_from_memory_hz == points_hz
    assert cable.from_memory - {"attenuation_points", "power_points"} == from_memory
    assert ("attenuation_points" in cable.from_memory) == bool(points_hz)
    # "All power ratings are from memory."
    assert ("power_points" in cable.from_memory) == bool(cable.power_points)


def test_as_much_is_from_memory_as_the_list_of_sources_counts() -> None:
    # "128 of the 405 filled single cells and 51 of the 132 attenuation points come from a document"
    single = [cable.from_memory - {"attenuation_points", "power_points"} for cable in CABLES.values()]
    assert sum(map(len, single)) == 405 - 128
    assert sum(len(cable.attenuation_from_memory_hz) for cable in CABLES.values()) == 132 - 51


@pytest.mark.parametrize(
    ("cable_type", "fields", "points_hz"),
    [
        ("RG-213/U", {"max_temperature_c", "power_points"}, set()),
        (
            "RG-174A/U",
            {"max_temperature_c", "max_voltage_v", "max_frequency_hz", "attenuation_points", "m17_sheet"},
            {400e6, 1e9},
        ),
        (
            "RG-187A/U",  # all points, none named one by one; no dielectric diameter, no sheet
            {
                "z0_ohm",
                "z0_tolerance_ohm",
                "velocity_factor",
                "capacitance_f_per_m",
                "dielectric",
                "inner_conductor",
                "inner_diameter_m",
                "outer_diameter_m",
                "max_temperature_c",
                "max_voltage_v",
                "max_frequency_hz",
                "attenuation_points",
            },
            {200e6, 400e6, 1e9, 3e9},
        ),
    ],
)
def test_from_memory_read_by_hand(cable_type: str, fields: set[str], points_hz: set[float]) -> None:
    assert CABLES[cable_type].from_memory == fields
    assert CABLES[cable_type].attenuation_from_memory_hz == points_hz


# -- the fit -----------------------------------------------------------------------------------------


def assert_fit_is_nnls(points: tuple[tuple[float, float], ...]) -> None:
    frequency_mhz = np.array([f_hz / 1e6 for f_hz, _ in points])
    table = np.array([db_per_100m for _, db_per_100m in points])
    weighted = np.stack([np.sqrt(frequency_mhz) / table, frequency_mhz / table], axis=1)
    expected, _ = nnls(weighted, np.ones(len(points)))
    fit = fit_loss(points)
    assert fit is not None
    assert [fit.skin_db_per_100m, fit.dielectric_db_per_100m] == pytest.approx(expected, rel=1e-9, abs=1e-12)
    off = (expected[0] * np.sqrt(frequency_mhz) + expected[1] * frequency_mhz) / table - 1
    assert fit.worst_error == pytest.approx(np.max(np.abs(off)), rel=1e-9, abs=1e-12)


@pytest.mark.parametrize("cable", FITTED, ids=lambda cable: cable.type)
def test_fit_is_the_non_negative_least_squares_one(cable: CatalogueCable) -> None:
    assert_fit_is_nnls(cable.attenuation_points)


def test_fit_of_a_table_steeper_than_frequency_is_dielectric_only() -> None:
    steep = ((10e6, 1.0), (100e6, 14.0), (1e9, 200.0))
    assert_fit_is_nnls(steep)
    fit = fit_loss(steep)
    assert fit is not None
    assert fit.skin_db_per_100m == 0 < fit.dielectric_db_per_100m


def test_fit_gives_back_a_table_made_from_known_coefficients() -> None:
    # 2 sqrt(f) + 0.05 f at 1, 4 and 100 MHz
    fit = fit_loss([(1e6, 2.05), (4e6, 4.2), (100e6, 25.0)])
    assert fit is not None
    assert (fit.skin_db_per_100m, fit.dielectric_db_per_100m) == pytest.approx((2, 0.05), rel=1e-12)
    assert not fit.weak


@pytest.mark.parametrize("cable", FITTED, ids=lambda cable: cable.type)
def test_fit_is_the_printed_one(cable: CatalogueCable) -> None:
    _, _, points, _, _, coefficients, worst, _ = TABLE[cable.type]
    skin, dielectric = map(float, coefficients.split(", "))
    worst_percent, worst_mhz = map(float, worst.split(" at "))
    fit = cable.fit
    assert fit is not None
    assert fit.points == int(points)
    assert fit.skin_db_per_100m == pytest.approx(skin, abs=0.00051)
    assert fit.dielectric_db_per_100m == pytest.approx(dielectric, abs=0.000051)
    assert 100 * fit.worst_deviation == pytest.approx(worst_percent, abs=0.051)
    assert fit.worst_frequency_hz == worst_mhz * 1e6


def test_weak_fits_are_flagged() -> None:
    weak = {cable.type for cable in FITTED if cable.fit is not None and cable.fit.weak}
    worst_percent = {cable_type: float(row[6].split()[0]) for cable_type, row in TABLE.items() if row[6]}
    printed = {cable_type for cable_type, percent in worst_percent.items() if abs(percent) > 10}
    assert weak == printed == {"RG-174A/U", "RG-178B/U", "RG-188A/U", "RG-196A/U"}


def test_one_point_gives_skin_loss_only_and_is_weak() -> None:
    fit = fit_loss([(100e6, 10.0)])  # 10 dB at 100 MHz is 1 dB at 1 MHz under the square root
    assert fit is not None
    assert (fit.skin_db_per_100m, fit.dielectric_db_per_100m) == pytest.approx((1, 0), abs=1e-12)
    assert fit.weak


def test_types_without_attenuation_are_not_offered() -> None:
    assert {cable.type for cable in CABLES.values() if not cable.offered} == NO_ATTENUATION
    assert all(CABLES[cable_type].fit is None for cable_type in NO_ATTENUATION)


# -- what goes out: plan figures and the sentence ----------------------------------------------------


def test_figures_are_those_that_a_plan_keeps() -> None:
    assert figures(CABLES["RG-316/U"]) == {
        "z0_ohm": 50,
        "velocity_factor": 0.695,
        "skin_db_per_100m": 3.162,
        "dielectric_db_per_100m": 0,
    }


@pytest.mark.parametrize("cable", FITTED, ids=lambda cable: cable.type)
def test_figures_have_at_most_four_digits(cable: CatalogueCable) -> None:
    fit, kept = cable.fit, figures(cable)
    assert fit is not None
    for name in ("skin_db_per_100m", "dielectric_db_per_100m"):
        digits = repr(kept[name]).split("e")[0].replace(".", "").strip("0")
        assert len(digits) <= 4
        assert kept[name] == pytest.approx(getattr(fit, name), rel=5e-4)


def test_figures_of_a_type_without_attenuation_are_refused() -> None:
    with pytest.raises(FeedError, match=r"no attenuation for RG-63B/U"):
        figures(CABLES["RG-63B/U"])


@pytest.mark.parametrize(
    ("cable_type", "sentence"),
    [
        (
            "RG-316/U",
            "Loss fitted to 3 points, worst error 3.6 % at 400 MHz; "
            "from memory: attenuation at 400 and 1000 MHz, bend radius, voltage and 3 minor figures.",
        ),
        (
            "RG-213/U",
            "Loss fitted to 6 points, worst error 3.3 % at 30 MHz; from memory: power and 1 minor figure.",
        ),
        ("RG-6A/U", "Loss fitted to 2 points, worst error 7.4 % at 30 MHz; from memory: 4 minor figures."),
        (
            "RG-178B/U",
            "Weak fit: loss reads 17 % low at 10 MHz; "
            "from memory: velocity factor, attenuation, bend radius, voltage and 6 minor figures.",
        ),
        (
            "RG-59B/U",
            "Loss fitted to 8 points, worst error 4.7 % at 10 MHz; "
            "from memory: attenuation at 5 of 8 points, voltage, power and 3 minor figures.",
        ),
        ("RG-400/U", "No attenuation data: not offered."),
    ],
)
def test_quality_sentence(cable_type: str, sentence: str) -> None:
    assert quality_sentence(CABLES[cable_type]) == sentence


def test_quality_sentence_of_a_lone_point_and_of_a_fully_documented_type() -> None:
    lone = ((100e6, 10.0),)
    cable = dataclasses.replace(
        CABLES["RG-58C/U"],
        attenuation_points=lone,
        fit=fit_loss(lone),
        from_memory=frozenset(),
    )
    assert quality_sentence(cable) == "Weak fit: loss known at 100 MHz only."
