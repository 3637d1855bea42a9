"""The fields of the part card under real clicks, keys and wheel turns."""

from __future__ import annotations

from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QLabel,
)
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.panels.tab_order import controls
from app.store import Store
from feedlib.parts import Antenna, Coax, Lumped, Splitter
from tests.app.card_screen import F_HZ, ONE_PORT, QUARTER_M, C, Shown, load_file, plan, wheel


@pytest.fixture
def shown(qtbot: QtBot) -> Shown:
    return Shown(qtbot, Store(plan()))


# Writing into fields


@pytest.mark.parametrize(
    ("text", "length_m"),
    [
        ("62 mm", 0.062),
        ("62", 0.062),
        ("2 7/16 in", 2.4375 * 0.0254),
        ("1,5 m", 1.5),
        ("90deg", QUARTER_M),
        ("0.5 wl", 2 * QUARTER_M),
        ("312 ps", 312e-12 * 0.695 * C),
    ],
)
def test_a_length_in_any_writing(shown: Shown, text: str, length_m: float) -> None:
    shown.select("match B")
    shown.write("Length", text)
    assert shown.part("match B").length_m == pytest.approx(length_m, rel=1e-12)
    assert shown.part("match A").length_m == QUARTER_M
    assert shown.line("Length").text().endswith(" mm")
    shown.store.stack.undo()
    assert shown.part("match B").length_m == QUARTER_M


def test_a_length_is_told_in_every_unit(shown: Shown) -> None:
    shown.select("match B")
    shown.write("Length", "62.5 mm")
    assert shown.line("Length").text() == "62.5 mm"
    # 0.0625 m of 0.2400380 m: 93.7 degrees; 0.0625 m / (0.695 c) = 300 ps
    assert "93.7° at 868 MHz · 0.260 wl · 300 ps" in shown.texts()
    assert "2 15/32 in" in shown.texts()  # 62.5/25.4 = 2.4606, 78.7 parts of 32


def test_a_bad_value_says_why_and_stays_for_mending(shown: Shown) -> None:
    shown.select("match B")
    first = shown.store.plan
    shown.write("Length", "62 mmm")
    assert shown.store.plan is first
    assert shown.line("Length").text() == "62 mmm"
    (sentence,) = [t for t in shown.texts() if t.startswith("✗")]
    assert "'mmm' is not a unit here" in sentence
    shown.write("Name", "leg B")  # another field is taken; the bad one still waits
    assert shown.line("Length").text() == "62 mmm"
    assert sentence in shown.texts()
    shown.select("match A")
    shown.select("match B")
    assert not [t for t in shown.texts() if t.startswith("✗")]
    assert shown.line("Length").text() != "62 mmm"


def test_escape_brings_the_value_back(shown: Shown) -> None:
    shown.select("pad")
    shown.write("Loss", "much")
    assert shown.line("Loss").text() == "much"
    shown.qtbot.keyClick(shown.line("Loss"), Qt.Key.Key_Escape)
    assert shown.line("Loss").text() == "3 dB"
    assert not [t for t in shown.texts() if t.startswith("✗")]
    shown.write("Loss", "4", enter=False)
    shown.qtbot.keyClick(shown.line("Loss"), Qt.Key.Key_Escape)
    shown.line("Id").setFocus()
    assert shown.part("pad").loss_db == 3


def test_a_value_out_of_range_names_the_range(shown: Shown) -> None:
    shown.select("pad")
    shown.write("Loss", "-3 dB")
    assert shown.part("pad").loss_db == 3
    assert "✗ Loss wants a number in dB, at least 0, got -3." in shown.texts()
    shown.write("Loss", "6")
    assert shown.part("pad").loss_db == 6
    assert not [t for t in shown.texts() if t.startswith("✗")]


def test_a_field_is_taken_when_the_focus_leaves_it(shown: Shown) -> None:
    shown.select("pad")
    shown.write("Loss", "10 dB", enter=False)
    assert shown.part("pad").loss_db == 3
    shown.qtbot.keyClick(shown.line("Loss"), Qt.Key.Key_Tab)
    assert shown.part("pad").loss_db == 10
    assert shown.store.stack.count() == 1


@pytest.mark.parametrize(
    ("part_id", "field", "text", "attribute", "value", "shown_text"),
    [
        ("splitter", "Impedance", "75 ohm", "z0_ohm", 75.0, "75 Ω"),
        ("splitter", "Outputs", "4", "outputs", 4, "4"),
        ("splitter", "Centre", "0.868 GHz", "centre_hz", 868e6, "868 MHz"),
        ("lumped", "Inductance", "8.2", "l_h", 8.2e-9, "8.2 nH"),
        ("lumped", "Capacitance", "3.3 pF", "c_f", 3.3e-12, "3.3 pF"),
        ("transformer", "Ratio V1/V2", "-1", "ratio", -1.0, "-1"),
        ("load", "Impedance", "36 - j12.5", "impedance_ohm", 36 - 12.5j, "36 - j12.5 Ω"),
        ("radio", "Power", "27 dBm", "power_w", 10**2.7 / 1000, None),
        ("T1", "Ports", "5", "ports", 5, "5"),
    ],
)
def test_quantities(
    shown: Shown, part_id: str, field: str, text: str, attribute: str, value: complex, shown_text: str | None
) -> None:
    shown.select(part_id)
    shown.write(field, text)
    assert getattr(shown.part(part_id), attribute) == pytest.approx(value, rel=1e-12)
    if shown_text is not None:
        assert shown.line(field).text() == shown_text


def test_a_whole_number_is_whole(shown: Shown) -> None:
    shown.select("T1")
    shown.write("Ports", "3.5")
    assert shown.part("T1").ports == 3
    assert "✗ '3.5' is not a whole number; try 4." in shown.texts()


def test_an_optional_value_can_be_emptied(shown: Shown) -> None:
    shown.select("lumped")
    shown.write("Inductance", "8.2 nH")
    shown.write("Resistance", "")
    assert shown.part("lumped") == Lumped(place="series", l_h=8.2e-9)


def test_two_fields_that_must_change_together(shown: Shown) -> None:
    shown.select("lumped")
    shown.write("Resistance", "")
    assert shown.part("lumped").r_ohm == 10
    assert "✗ Resistance wants at least one of resistance, inductance, capacitance." in shown.texts()
    shown.write("Name", "coil")  # the empty line still waits
    assert shown.line("Resistance").text() == ""
    shown.write("Capacitance", "1 pF")
    assert shown.part("lumped") == Lumped(place="series", c_f=1e-12)
    assert shown.store.stack.count() == 2
    assert not [t for t in shown.texts() if t.startswith("✗")]


def test_a_form_that_needs_a_centre_waits_for_it(shown: Shown) -> None:
    shown.select("splitter")
    shown.choose("Form", "wilkinson")
    assert shown.part("splitter").form == "resistive"
    assert shown.control("Form").currentText() == "wilkinson"
    (sentence,) = [t for t in shown.texts() if t.startswith("✗")]
    assert sentence.startswith("✗ Centre is missing")
    shown.write("Centre", "868 MHz")
    assert shown.part("splitter") == Splitter(form="wilkinson", centre_hz=868e6)
    assert not [t for t in shown.texts() if t.startswith("✗")]
    shown.choose("Form", "branch line")
    assert shown.part("splitter").form == "branch_line"


def test_a_choice_that_waits_is_dropped_on_escape(shown: Shown) -> None:
    shown.select("splitter")
    shown.choose("Form", "wilkinson")
    shown.qtbot.keyClick(shown.control("Form"), Qt.Key.Key_Escape)
    assert shown.control("Form").currentText() == "resistive"


def test_what_is_being_written_is_not_overwritten(shown: Shown) -> None:
    shown.select("match B")
    shown.write("Length", "70", enter=False)
    store = shown.store
    store.edit("elsewhere", edits.changed_part(store.plan, "match B", cable="50 thin", length_m=0.05))
    assert shown.line("Length").text() == "70"
    assert shown.control("Cable").currentText() == "50 thin"
    shown.qtbot.keyClick(shown.line("Length"), Qt.Key.Key_Return)
    assert shown.part("match B") == Coax(cable="50 thin", length_m=0.07)


def test_undo_fills_the_fields_again(shown: Shown) -> None:
    shown.select("pad")
    shown.write("Loss", "6 dB")
    shown.store.stack.undo()
    assert shown.line("Loss").text() == "3 dB"
    shown.store.stack.redo()
    assert shown.line("Loss").text() == "6 dB"


# The wheel. At 868 MHz in a cable of 0.695 a fifth of a degree is 0.133 mm: the step is 0.1 mm.


@pytest.mark.parametrize(
    ("notches", "modifier", "by_m"),
    [
        (1, Qt.KeyboardModifier.NoModifier, 0.1e-3),
        (-3, Qt.KeyboardModifier.NoModifier, -0.3e-3),
        (2, Qt.KeyboardModifier.ShiftModifier, 2e-3),
        (1, Qt.KeyboardModifier.AltModifier, 0.01e-3),
    ],
)
def test_the_wheel_turns_a_length(shown: Shown, notches: int, modifier: Qt.KeyboardModifier, by_m: float) -> None:
    shown.select("match B")
    shown.write("Length", "60 mm")
    wheel(shown.line("Length"), notches, modifier)
    assert shown.part("match B").length_m == pytest.approx(0.06 + by_m, abs=1e-12)


def test_one_turn_is_one_step_to_undo(shown: Shown) -> None:
    shown.select("match B")
    shown.write("Length", "60 mm")
    for _ in range(5):
        wheel(shown.line("Length"), 1)
    assert shown.line("Length").text() == "60.5 mm"
    assert shown.store.stack.undoText() == "Lengthen match B"
    shown.store.stack.undo()
    assert shown.part("match B").length_m == 0.06


def test_no_length_is_turned_below_zero(shown: Shown) -> None:
    shown.select("match B")
    shown.write("Length", "0.5 mm")
    wheel(shown.line("Length"), -1, Qt.KeyboardModifier.ShiftModifier)
    assert shown.part("match B").length_m == 0
    assert shown.store.stack.undoText() == "Shorten match B"


def test_the_wheel_changes_nothing_else(shown: Shown) -> None:
    shown.select("match B")
    first = shown.store.plan
    for control in controls(shown.card):
        if control.accessibleName() != "Length":
            control.setFocus()
            wheel(control, 1)
    label = next(x for x in shown.card.findChildren(QLabel) if x.text() == "Length" and x.isVisible())
    wheel(label, 1)
    assert shown.store.plan is first


# Cables, ends, antennas, files


def test_a_catalogue_cable_comes_into_the_plan_with_its_figures(shown: Shown) -> None:
    shown.select("match B")
    shown.choose("Cable", "RG-58C/U")
    cable = shown.store.plan.cables["RG-58C/U"]
    assert shown.part("match B").cable == "RG-58C/U"
    assert (cable.z0_ohm, cable.velocity_factor) == (50, 0.66)
    # The type's data: 38.55 dB per 100 m at 450 MHz, 58.2 at 850 MHz; the fit's worst error is 0.4 %.
    assert 100 * cable.loss_db_per_m(450e6) == pytest.approx(38.55, rel=0.005)
    assert 100 * cable.loss_db_per_m(850e6) == pytest.approx(58.2, rel=0.005)
    assert any("Loss fitted to 5 points" in t for t in shown.texts())
    assert shown.store.stack.count() == 1
    shown.store.stack.undo()
    assert "RG-58C/U" not in shown.store.plan.cables
    assert shown.part("match B").cable == "75 thin"


def test_types_without_loss_data_cannot_be_chosen(shown: Shown) -> None:
    shown.select("match B")
    box = shown.control("Cable")
    row = next(n for n in range(box.count()) if box.itemText(n).startswith("RG-63B/U"))
    assert box.itemText(row) == "RG-63B/U (no loss data)"
    assert "not offered" in box.itemData(row, Qt.ItemDataRole.ToolTipRole)
    shown.choose("Cable", "RG-63B/U")
    assert shown.part("match B").cable == "75 thin"


def test_a_weak_fit_is_told(shown: Shown) -> None:
    shown.select("match B")
    shown.choose("Cable", "RG-174A/U (weak fit, from memory)")
    assert any("Weak fit" in t for t in shown.texts())
    shown.choose("Cable", "50 thin")
    assert not any("Weak fit" in t for t in shown.texts())


def test_an_end_of_a_coax(shown: Shown) -> None:
    shown.select("match A")
    shown.choose("End at A", "a section")
    near, far = shown.part("match A").ends
    assert near is None
    assert (far.z0_ohm, far.velocity_factor) == (75, 0.695)
    shown.write("End at A, Impedance", "109")
    shown.write("End at A, Velocity factor", "1")
    shown.write("End at A, Length", "9.5 mm")
    far = shown.part("match A").ends[1]
    assert (far.z0_ohm, far.velocity_factor, far.length_m) == (109, 1, 0.0095)
    # 9.5 mm in air at 868 MHz: 9.9 degrees
    assert any(t.startswith("9.9° at 868 MHz") for t in shown.texts())
    shown.choose("End at A", "none")
    assert shown.part("match A").ends == (None, None)


def test_an_antenna_in_three_ways(shown: Shown, tmp_path: Path) -> None:
    shown.select("A")
    shown.write("Impedance, Value", "40 + j10")
    assert shown.part("A").impedance.fixed_ohm == 40 + 10j
    shown.choose("Impedance", "resonant")
    assert (shown.part("A").impedance.resonant.r_ohm, shown.part("A").impedance.resonant.f0_hz) == (40, F_HZ)
    shown.write("Impedance, Resonant, Q", "12")
    assert shown.part("A").impedance.resonant.q == 12
    shown.choose("Impedance", "measured file")
    assert shown.part("A").impedance.resonant is not None, "there is no file yet"
    assert "No file yet." in shown.texts()
    shown.qtbot.keyClick(shown.control("Impedance"), Qt.Key.Key_Escape)
    assert shown.control("Impedance").currentText() == "resonant"
    shown.choose("Impedance", "measured file")
    load_file(shown, "Load a Touchstone file…", tmp_path / "dipole.s1p", ONE_PORT)
    file = shown.part("A").impedance.touchstone
    assert (file.name, file.text) == ("dipole.s1p", ONE_PORT)
    assert "Measured: dipole.s1p" in shown.texts()
    assert "1 port, 800 MHz to 900 MHz, 2 points" in shown.texts()
    shown.choose("Impedance", "fixed")
    assert shown.part("A").impedance.fixed_ohm == 50


def test_wanted_current(shown: Shown) -> None:
    shown.select("B")
    shown.write("Wanted current, Wanted amplitude", "0.5")
    shown.write("Wanted current, Wanted phase", "-90")
    antenna = shown.part("B")
    assert isinstance(antenna, Antenna)
    assert (antenna.target.amplitude, antenna.target.phase_deg) == (0.5, -90)


def test_a_measured_file_is_replaced_or_refused(shown: Shown, tmp_path: Path) -> None:
    shown.select("measured")
    assert "File: filter.s1p" in shown.texts()
    load_file(shown, "Replace filter.s1p", tmp_path / "broken.s1p", "# MHz S RI R 50\n800 0.1\n")
    assert shown.part("measured").touchstone.name == "filter.s1p"
    (sentence,) = [t for t in shown.texts() if t.startswith("✗")]
    assert "broken.s1p" in sentence
    assert "line 2" in sentence
    two_port = "# MHz S RI R 50\n800 0 0 1 0 1 0 0 0\n"
    load_file(shown, "Replace filter.s1p", tmp_path / "through.s2p", two_port)
    assert shown.part("measured").ports == 2
    assert not [t for t in shown.texts() if t.startswith("✗ b")]
