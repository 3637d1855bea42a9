"""Cuts, matched sets, units on the card. Expected lengths: a wave in the cable is 0.695 c/868 MHz = 240.0405 mm."""

from __future__ import annotations

import json
from dataclasses import replace

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QMenu, QPushButton, QWidget
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.look import DARK, LIGHT, Look
from app.panels.controls import MoreButton
from app.panels.menu_button import MenuButton
from app.panels.style import SHEET_WIDTH
from app.store import Store
from app.units import units
from feedlib import Plan
from feedlib.parts import Coax, CoaxEnd
from feedlib.plan_file import parse_plan
from tests.app.card_screen import QUARTER_M, Shown, plan, plan_data, wheel
from tests.hands import settled

A, B = "match A", "match B"
JOINT = CoaxEnd(z0_ohm=109, velocity_factor=1.0, length_m=0.0095)


def lengths_plan() -> Plan:
    """The two dipoles: match A of 40 mm, match B of 50 mm and another cable, and a spare of 30 mm tied to nothing."""
    made = edits.changed_part(plan(), A, length_m=0.04)
    made = edits.changed_part(made, B, length_m=0.05, cable="50 thin")
    return edits.added(made, Coax(cable="75 thin", length_m=0.03), (0.0, 0.0), "spare")[0]


@pytest.fixture
def shown(qtbot: QtBot) -> Shown:
    made = Shown(qtbot, Store(lengths_plan()))
    made.select(A)
    return made


def press(shown: Shown, name: str) -> None:
    """Click on a button."""
    button = shown.control(name)
    assert isinstance(button, QPushButton)
    shown.qtbot.mouseClick(button, Qt.MouseButton.LeftButton)


def take(shown: Shown, menu: QMenu, text: str) -> None:
    """Click on the row of an open menu that has a text."""
    assert menu.isVisible()
    (row,) = [action for action in menu.actions() if action.text() == text]
    shown.qtbot.mouseClick(menu, Qt.MouseButton.LeftButton, pos=menu.actionGeometry(row).center())


def offered(shown: Shown, name: str) -> QMenu:
    """The menu that a button opens."""
    press(shown, name)
    button = shown.control(name)
    assert isinstance(button, MenuButton)
    return button.menu_shown


def coax(shown: Shown, part_id: str) -> Coax:
    found = shown.part(part_id)
    assert isinstance(found, Coax)
    return found


def faults(shown: Shown) -> list[str]:
    return [text for text in shown.texts() if text.startswith("✗ ")]


# Cuts


@pytest.mark.parametrize(
    ("waves", "quarters", "degrees"), [("1/4", 1, "90"), ("3/4", 3, "270"), ("5/4", 5, "450"), ("1/2", 2, "180")]
)
def test_a_chip_cuts_once(shown: Shown, waves: str, quarters: int, degrees: str) -> None:
    assert f"{degrees}° at 868 MHz: {240.0405 / 4 * quarters:.1f} mm" in shown.control(f"Cut to {waves} wave").toolTip()
    press(shown, f"Cut to {waves} wave")
    assert coax(shown, A).length_m == pytest.approx(quarters * QUARTER_M, rel=1e-12)
    assert coax(shown, B).length_m == 0.05
    assert shown.store.stack.undoText() == f"Cut match A to {waves} wave"
    assert shown.store.stack.count() == 1
    shown.store.edit("elsewhere", edits.marked(shown.store.plan, 865e6))
    assert coax(shown, A).length_m == pytest.approx(quarters * QUARTER_M, rel=1e-12), "no hidden constraint"
    shown.store.stack.setIndex(0)
    assert coax(shown, A).length_m == 0.04


def test_any_number_of_degrees(shown: Shown) -> None:
    press(shown, "Cut to any number of degrees")
    line = shown.line("Degrees")
    assert line.hasFocus()
    assert line.text() == "59.99°"  # 360 * 40 / 240.0405
    shown.qtbot.keyClicks(line, "2*60 - 20")
    shown.qtbot.keyClick(line, Qt.Key.Key_Return)
    assert coax(shown, A).length_m == pytest.approx(QUARTER_M * 100 / 90, rel=1e-12)
    assert shown.store.stack.undoText() == "Cut match A to 100°"
    assert not line.isVisible()
    assert shown.control("Cut to any number of degrees").hasFocus()


def test_degrees_that_are_none_say_why_and_escape_leaves(shown: Shown) -> None:
    first = shown.store.plan
    press(shown, "Cut to any number of degrees")
    shown.write("Degrees", "a quarter")
    assert "cannot be read as an angle" in faults(shown)[0]
    shown.write("Degrees", "-90")
    assert faults(shown)[0].startswith("✗ Length wants a number in m, at least 0")
    assert shown.line("Degrees").text() == "-90"
    line = shown.line("Degrees")
    shown.qtbot.keyClick(line, Qt.Key.Key_Escape)
    assert not line.isVisible()
    assert not faults(shown)
    press(shown, "Cut to any number of degrees")
    shown.qtbot.keyClick(line, Qt.Key.Key_Return)
    assert not line.isVisible()
    press(shown, "Cut to any number of degrees")
    shown.select(B)
    assert not line.isVisible()
    assert shown.store.plan is first


def test_the_same_phase_counts_the_ends_of_both(shown: Shown) -> None:
    # 9.5 mm of air are 9.5 mm * 0.695 of the cable.
    shown.store.edit("joint", edits.changed_part(shown.store.plan, B, ends=(JOINT, None)))
    menu = offered(shown, "Cut to the same phase as another section")
    assert [action.text() for action in menu.actions()] == [B, "spare"]
    take(shown, menu, B)
    assert coax(shown, A).length_m == pytest.approx(0.05 + 0.0095 * 0.695, rel=1e-12)
    assert coax(shown, B).length_m == 0.05
    assert shown.store.stack.undoText() == "Cut match A to the same phase as match B"


def test_a_phase_that_cannot_be_reached_says_why(shown: Shown) -> None:
    long = replace(JOINT, length_m=1.0)
    shown.store.edit("joint", edits.changed_part(shown.store.plan, A, ends=(long, None)))
    first = shown.store.plan
    take(shown, offered(shown, "Cut to the same phase as another section"), B)
    assert shown.store.plan is first
    assert faults(shown) == ['✗ Its ends alone are longer than the whole of "match B".']
    press(shown, "Cut to 1/4 wave")
    assert not faults(shown)


def test_an_unknown_cable_cannot_be_cut(shown: Shown) -> None:
    shown.store.edit("lost", edits.changed_part(shown.store.plan, A, cable="lost"))
    press(shown, "Cut to 1/4 wave")
    assert coax(shown, A).length_m == 0.04
    assert "velocity factor is not known" in faults(shown)[0]


# Matched sets


def test_a_section_takes_the_figures_of_the_one_that_it_is_matched_with(shown: Shown) -> None:
    assert "alone" in shown.texts()
    assert "match A takes cable, length and ends of the one" in shown.control("Match with").toolTip()
    menu = offered(shown, "Match with")
    assert [action.text() for action in menu.actions()] == ["match B · 50.0 mm", "spare · 30.0 mm"]
    assert "match A takes cable, length and ends of match B." in menu.actions()[0].toolTip()
    take(shown, menu, "match B · 50.0 mm")
    assert coax(shown, A) == coax(shown, B) == Coax(cable="50 thin", length_m=0.05, matched_set="A")
    assert coax(shown, "spare").matched_set is None
    assert "A: match A, match B" in shown.texts()
    assert shown.store.stack.undoText() == "Match match A with match B"
    shown.store.stack.undo()
    assert shown.store.plan == lengths_plan()
    assert "alone" in shown.texts()


def matched_pair(shown: Shown) -> None:
    take(shown, offered(shown, "Match with"), "match B · 50.0 mm")


def test_one_edit_moves_all_members(shown: Shown) -> None:
    matched_pair(shown)
    count = shown.store.stack.count()

    def both(**fields: object) -> None:
        nonlocal count
        count += 1
        for part_id in (A, B):
            for name, value in fields.items():
                assert getattr(coax(shown, part_id), name) == value
        assert shown.store.stack.count() == count, "one step"

    shown.write("Length", "62 mm")
    both(length_m=0.062)
    wheel(shown.line("Length"), 3)
    wheel(shown.line("Length"), 2)
    both(length_m=0.0625)
    shown.choose("Cable", "75 thin")
    both(cable="75 thin")
    shown.choose("End at T1", "a section")
    both(ends=(CoaxEnd(z0_ohm=75, velocity_factor=0.695, length_m=0.005), None))
    press(shown, "Cut to 1/4 wave")
    assert coax(shown, B).length_m == coax(shown, A).length_m == pytest.approx(QUARTER_M, rel=1e-12)
    assert coax(shown, "spare") == Coax(cable="75 thin", length_m=0.03)
    for _ in range(5):
        shown.store.stack.undo()
    assert coax(shown, A) == coax(shown, B) == Coax(cable="50 thin", length_m=0.05, matched_set="A")


def test_a_catalogue_cable_reaches_all_members(shown: Shown) -> None:
    matched_pair(shown)
    shown.choose("Cable", "RG-58C/U")
    assert coax(shown, B).cable == coax(shown, A).cable == "RG-58C/U"
    assert shown.store.plan.cables["RG-58C/U"].velocity_factor == 0.66


def test_a_third_joins_a_set_and_leaves_it(shown: Shown) -> None:
    matched_pair(shown)
    shown.select("spare")
    menu = offered(shown, "Match with")
    assert [action.text() for action in menu.actions()] == ["A: match A, match B · 50.0 mm"]
    assert "spare takes cable, length and ends of set A." in menu.actions()[0].toolTip()
    take(shown, menu, "A: match A, match B · 50.0 mm")
    assert coax(shown, "spare") == coax(shown, A)
    assert "A: match A, match B, spare" in shown.texts()
    shown.write("Length", "55 mm")
    press(shown, "Leave the set")
    assert coax(shown, "spare") == Coax(cable="50 thin", length_m=0.055)
    assert coax(shown, A).matched_set == coax(shown, B).matched_set == "A"
    assert shown.store.stack.undoText() == "Take spare out of set A"
    shown.select(A)
    press(shown, "Leave the set")
    assert coax(shown, B).matched_set is None, "nothing is matched with itself"
    assert coax(shown, B).length_m == 0.055
    assert "alone" in shown.texts()


def test_without_another_coax_there_is_nothing_to_match(shown: Shown) -> None:
    shown.store.edit("away", edits.removed(shown.store.plan, [B, "spare"]))
    for name in ("Match with", "Cut to the same phase as another section"):
        assert not shown.control(name).isEnabled()
        assert "There is no other coax." in shown.control(name).toolTip()


def test_several_become_a_set_and_leave_it(shown: Shown) -> None:
    shown.select("spare", B, "pad")
    assert "All take cable, length and ends of spare." in shown.texts()
    press(shown, "Make a matched set of the selected coax")
    assert coax(shown, B) == coax(shown, "spare") == Coax(cable="75 thin", length_m=0.03, matched_set="A")
    assert shown.store.stack.undoText() == "Match 2 sections"
    names = {w.accessibleName() for w in shown.card.findChildren(QPushButton) if w.isVisible()}
    assert names == {"Take the selected coax out of their sets", "Delete the selected parts"}
    press(shown, "Take the selected coax out of their sets")
    assert coax(shown, B) == coax(shown, "spare") == Coax(cable="75 thin", length_m=0.03)
    assert shown.store.stack.undoText() == "Take 2 sections out of their sets"
    shown.select(A, "pad")
    assert [b.text() for b in shown.card.findChildren(QPushButton) if b.isVisible()] == ["Delete"]


@pytest.mark.parametrize("look", [LIGHT, DARK], ids=lambda look: look.name)
def test_long_names_stay_on_the_card(qtbot: QtBot, look: Look) -> None:
    data = plan_data()
    for n in range(12):
        part = {"id": f"{n}" + "x" * 60, "kind": "coax", "cable": "75 thin", "length_m": 0.1, "matched_set": "A"}
        data["parts"].append(part)
    shown = Shown(qtbot, Store(parse_plan(json.dumps(data).encode())), look)
    shown.select("0" + "x" * 60)
    (members,) = [text.replace("\u200b", "") for text in shown.texts() if text.startswith("A: ")]
    assert members.startswith("A: 0" + "x" * 22 + "…, 1x")
    assert members.endswith("… and 6 more")
    for widget in shown.card.findChildren(QWidget):
        if widget.isVisible():
            assert widget.mapTo(shown.card, widget.rect().topRight()).x() < SHEET_WIDTH


# Units


def unit_menu(shown: Shown) -> QMenu:
    """The menu at the end of the length's line, opened by a click."""
    (button,) = [b for b in shown.line("Length").findChildren(MoreButton) if b.isVisible()]
    shown.qtbot.mouseClick(button, Qt.MouseButton.LeftButton)
    (menu,) = [m for m in shown.card.findChildren(QMenu) if m.isVisible()]
    return menu


def test_the_unit_is_chosen_at_the_field_and_remembered(qtbot: QtBot, shown: Shown) -> None:
    shown.write("Length", "62.5 mm")
    changed: list[str] = []
    units().changed.connect(lambda: changed.append(units().length))
    menu = unit_menu(shown)
    # 62.5 mm of 240.0405 mm; 62.5/25.4 = 2.4606 in, 78.7 parts of 32; 62.5 mm / (0.695 c) = 300 ps
    assert [a.text() for a in menu.actions()] == ["62.5 mm", "2 15/32 in", "93.7°", "0.260 wl", "300 ps"]
    assert [a.text() for a in menu.actions() if a.isChecked()] == ["62.5 mm"]
    take(shown, menu, "93.7°")
    assert changed == ["deg"]
    assert shown.line("Length").text().startswith("93.7339")
    assert "62.5 mm · 0.260 wl at 868 MHz · 300 ps" in shown.texts()
    shown.write("Length", "90")
    assert coax(shown, A).length_m == pytest.approx(QUARTER_M, rel=1e-12)
    assert shown.line("Length").text() == "90°"
    second = Shown(qtbot, Store(lengths_plan()))
    second.select(B)
    assert second.line("Length").text().endswith("°")
    take(shown, unit_menu(shown), "2 3/8 in")  # 60.0095 mm: 75.6 parts of 32
    second.write("Length", "2 7/16")
    assert coax(second, B).length_m == pytest.approx(2.4375 * 0.0254, rel=1e-12)
    assert second.line("Length").text() == "2 7/16 in"
    assert "61.9 mm" in second.texts(), "in mm at the line's end"


def test_the_unit_has_a_key(shown: Shown) -> None:
    line = shown.line("Length")
    line.setFocus()
    shown.qtbot.keyClick(line, Qt.Key.Key_Down, Qt.KeyboardModifier.AltModifier)
    (menu,) = [m for m in shown.card.findChildren(QMenu) if m.isVisible()]
    for key in (Qt.Key.Key_Down, Qt.Key.Key_Down, Qt.Key.Key_Down, Qt.Key.Key_Down, Qt.Key.Key_Return):
        shown.qtbot.keyClick(menu, key)
    assert units().length == "ps"
    assert line.text().endswith(" ps")


def test_what_is_being_written_outlives_another_unit(shown: Shown) -> None:
    shown.write("Length", "70", enter=False)
    take(shown, unit_menu(shown), "60.0°")  # 40 mm
    assert shown.line("Length").text() == "70"
    shown.qtbot.keyClick(shown.line("Length"), Qt.Key.Key_Return)
    assert coax(shown, A).length_m == pytest.approx(QUARTER_M * 70 / 90, rel=1e-12)


def test_without_a_cable_a_length_is_in_mm(shown: Shown) -> None:
    units().choose_length("wl")
    assert shown.line("Length").text().endswith(" wl")
    shown.store.edit("lost", edits.changed_part(shown.store.plan, A, cable="lost"))
    assert shown.line("Length").text() == "40 mm"
    menu = unit_menu(shown)
    assert [action.text() for action in menu.actions()] == ["40.0 mm", "1 9/16 in"]
    menu.close()
    shown.write("Length", "41")
    assert coax(shown, A).length_m == 0.041


def test_a_cut_is_told_in_inches_to_those_who_think_in_them(shown: Shown) -> None:
    units().choose_length("in")
    shown.select(B)
    # 60.0095/25.4 = 2.3626 in, 75.6 parts of 32
    assert "90° at 868 MHz: 2 3/8 in." in shown.control("Cut to 1/4 wave").toolTip()


# Figures


def test_figures_of_an_older_plan_say_so(qtbot: QtBot, shown: Shown) -> None:
    store = shown.store
    store._solve_s = 1.0  # as after a large harness: solved in the worker
    shown.write("Length", "60 mm")
    assert store.stale
    assert "At 868 MHz, being solved…" in shown.texts()
    settled(store)
    assert "At 868 MHz" in shown.texts()
    store.close()
