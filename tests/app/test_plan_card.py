"""The plan card and the side sheet under real clicks and keys."""

from __future__ import annotations

import json
import os
from typing import Any

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtWidgets import QApplication, QComboBox, QLabel, QLineEdit, QPlainTextEdit, QPushButton, QWidget
from pytestqt.qtbot import QtBot

from app.look import DARK, LIGHT, Look
from app.panels.blocks import ProblemCard
from app.panels.plan_card import PlanCard
from app.panels.side_sheet import SideSheet
from app.panels.style import SHEET_WIDTH
from app.panels.tab_order import controls
from app.store import Store
from feedlib.plan import Channel, Limits
from feedlib.plan_file import parse_plan

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")


def store(**changes: Any) -> Store:
    """A radio, a T joint with one open port, a coax and an antenna."""
    data: dict[str, Any] = {
        "format": "feedwright-plan",
        "version": 1,
        "title": "Orchard",
        "band": {"start_hz": 863e6, "stop_hz": 870e6, "points": 8, "mark_hz": 868e6},
        "limits": {"return_loss_db": 20, "phase_balance_deg": 5},
        "channels": [{"name": "uplink", "hz": 864e6}],
        "cables": {"50 thin": {"z0_ohm": 50, "velocity_factor": 0.7, "skin_db_per_100m": 3}},
        "parts": [
            {"id": "radio", "kind": "radio"},
            {"id": "T1", "kind": "tee"},
            {"id": "leg", "kind": "coax", "cable": "50 thin", "length_m": 0.3},
            {"id": "A", "kind": "antenna", "impedance": {"fixed_ohm": [50, 0]}},
        ],
        "joins": [["radio:1", "T1:1"], ["T1:2", "leg:1"], ["leg:2", "A:1"]],
        **changes,
    }
    return Store(parse_plan(json.dumps(data).encode()))


class Shown:
    """A plan card on a screen, and what a person can find on it."""

    def __init__(self, qtbot: QtBot, store: Store, look: Look = LIGHT) -> None:
        self.store, self.qtbot = store, qtbot
        self.card = PlanCard(store, look)
        self.card.setFixedWidth(SHEET_WIDTH)
        qtbot.addWidget(self.card)
        self.card.show()
        with qtbot.waitActive(self.card):
            self.card.activateWindow()

    def control(self, name: str) -> Any:
        QApplication.processEvents()  # what was just added is shown when it is its turn
        found = [w for w in self.card.findChildren(QWidget) if w.accessibleName() == name and w.isVisible()]
        assert found, f"no control is called {name!r}"
        return found[0]

    def write(self, name: str, text: str) -> None:
        line = self.control(name)
        line.setFocus()
        line.selectAll()
        if text:
            self.qtbot.keyClicks(line, text)
        else:
            self.qtbot.keyClick(line, Qt.Key.Key_Delete)
        self.qtbot.keyClick(line, Qt.Key.Key_Return)

    def press(self, name: str) -> None:
        self.qtbot.mouseClick(self.control(name), Qt.MouseButton.LeftButton)

    def texts(self) -> list[str]:
        QApplication.processEvents()
        return [label.text() for label in self.card.findChildren(QLabel) if label.isVisible() and label.text()]

    def faults(self) -> list[str]:
        return [text for text in self.texts() if text.startswith("✗ ")]


@pytest.fixture
def shown(qtbot: QtBot) -> Shown:
    return Shown(qtbot, store())


@pytest.mark.parametrize("look", [LIGHT, DARK], ids=lambda look: look.name)
def test_everything_fits_the_sheet_and_has_a_name(qtbot: QtBot, look: Look) -> None:
    long = "a cable with a very long name that no sheet is wide enough for"
    cable = {"z0_ohm": 50, "velocity_factor": 0.7}
    channels = [{"name": "a channel with a long name", "hz": 863.125e6}]
    sweep = {"start_hz": 850e6, "stop_hz": 880e6, "points": 31}
    shown = Shown(qtbot, store(cables={"50 thin": cable, long: cable}, channels=channels, sweep=sweep), look)
    shown.press(f"{long}, show figures")
    for widget in shown.card.findChildren(QWidget):
        if widget.isVisible() and not isinstance(widget.parentWidget(), QLineEdit | QComboBox | QPlainTextEdit):
            right = widget.mapTo(shown.card, widget.rect().topRight()).x()
            assert right < SHEET_WIDTH, f"{widget} reaches {right}"
    assert all(control.accessibleName() for control in controls(shown.card))
    assert all(label.textFormat() == Qt.TextFormat.PlainText for label in shown.card.findChildren(QLabel))


def test_title_and_notes(shown: Shown) -> None:
    shown.write("Title", "Two dipoles")
    assert shown.store.plan.title == "Two dipoles"
    notes = shown.control("Notes")
    notes.setFocus()
    shown.qtbot.keyClicks(notes, "north mast")
    shown.control("Title").setFocus()
    assert shown.store.plan.notes == "north mast"


def test_band_and_mark(shown: Shown) -> None:
    shown.write("Points", "15")
    shown.write("Mark", "865.5")
    shown.write("From", "0.862 GHz")
    band = shown.store.plan.band
    assert (band.start_hz, band.stop_hz, band.points, band.mark_hz) == (862e6, 870e6, 15, 865.5e6)
    assert shown.control("From").text() == "862 MHz"


def test_a_band_can_be_moved_edge_by_edge(shown: Shown) -> None:
    shown.write("From", "2400 MHz")
    assert shown.store.plan.band.start_hz == 863e6, "from beyond to waits"
    assert shown.control("From").text() == "2400 MHz"
    assert shown.faults() == ["✗ To wants at least from (2.4 GHz), got 870 MHz."]
    shown.write("To", "2480 MHz")
    band = shown.store.plan.band
    assert (band.start_hz, band.stop_hz, band.mark_hz) == (2400e6, 2480e6, 2400e6), "the mark stays inside"
    assert not shown.faults()
    assert shown.store.stack.count() == 1


def test_a_waiting_edge_is_given_up_on_escape(shown: Shown) -> None:
    shown.write("From", "2400 MHz")
    shown.qtbot.keyClick(shown.control("To"), Qt.Key.Key_Escape)
    assert shown.control("From").text() == "863 MHz"
    assert not shown.faults()
    shown.write("To", "880 MHz")
    assert shown.store.plan.band.start_hz == 863e6


def test_a_sweep_holds_the_band(shown: Shown) -> None:
    box = shown.control("Sweep")
    box.setFocus()
    shown.qtbot.keyClick(box, Qt.Key.Key_Down)
    sweep = shown.store.plan.sweep
    assert sweep is not None
    assert sweep.start_hz < 863e6 < 870e6 < sweep.stop_hz
    shown.write("Sweep, From", "865 MHz")
    assert shown.store.plan.sweep == sweep
    assert shown.faults() == ["✗ The sweep wants to hold the whole band."]
    shown.write("Sweep, From", "860 MHz")
    assert shown.store.plan.sweep.start_hz == 860e6
    shown.qtbot.keyClick(box, Qt.Key.Key_Up)
    assert shown.store.plan.sweep is None


def test_limits_are_set_and_taken_away(shown: Shown) -> None:
    shown.write("Return loss", "")
    shown.write("Harness loss", "1 dB")
    shown.write("Phase balance", "-3")
    assert shown.store.plan.limits == Limits(phase_balance_deg=5, harness_loss_db=1)
    assert shown.faults() == ["✗ Phase balance wants a number in deg, at least 0, got -3."]
    visible = {w.accessibleName() for w in shown.card.findChildren(QLineEdit) if w.isVisible()}
    assert "Isolation" in visible
    assert "Axial ratio" not in visible, "nothing judges it yet"


def test_a_limit_that_nothing_judges_is_shown_where_a_plan_has_it(qtbot: QtBot) -> None:
    shown = Shown(qtbot, store(limits={"axial_ratio_db": 3}))
    assert shown.control("Axial ratio").text() == "3 dB"
    assert "The limit on axial ratio is not judged." in shown.texts()


def test_radio_and_reference(shown: Shown) -> None:
    shown.write("Power", "27 dBm")
    assert shown.store.plan.placed("radio").part.power_w == pytest.approx(0.501187, rel=1e-6)  # type: ignore[attr-defined]
    shown.write("Reference", "75")
    assert shown.store.plan.reference_ohm == 75
    shown.write("Reference", "0")
    assert shown.store.plan.reference_ohm == 75
    assert len(shown.faults()) == 1


def test_channels(shown: Shown) -> None:
    shown.press("Add a channel at the mark")
    assert shown.store.plan.channels[1] == Channel(name="channel 1", hz=868e6)
    names = [w for w in shown.card.findChildren(QLineEdit) if w.accessibleName() == "Channel name" and w.isVisible()]
    names[1].setFocus()
    names[1].selectAll()
    shown.qtbot.keyClicks(names[1], "uplink")
    shown.qtbot.keyClick(names[1], Qt.Key.Key_Return)
    assert shown.store.plan.channels[1].name == "channel 1"
    assert shown.faults() == ['✗ Two channels are called "uplink".']
    names[1].selectAll()
    shown.qtbot.keyClicks(names[1], "downlink")
    shown.qtbot.keyClick(names[1], Qt.Key.Key_Return)
    shown.write("Frequency of downlink", "869,5")
    assert shown.store.plan.channels == (Channel(name="uplink", hz=864e6), Channel(name="downlink", hz=869.5e6))
    assert not shown.faults()
    shown.press("Take away uplink")
    assert [c.name for c in shown.store.plan.channels] == ["downlink"]
    shown.store.stack.undo()
    assert shown.control("Frequency of uplink").text() == "864 MHz"


def test_tab_reaches_what_was_added_in_its_place(shown: Shown) -> None:
    shown.press("Add a channel at the mark")
    QApplication.processEvents()
    order = [w for w in controls(shown.card) if w.isVisible()]
    order[0].setFocus()
    for control in order[1:]:
        shown.qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
        assert QApplication.focusWidget() is control
    tops = [w.mapTo(shown.card, QPoint(0, 0)).y() for w in order]
    assert tops == sorted(tops)


# Cables: 3 dB per 100 m and root MHz is 3 * sqrt(868)/100 = 0.884 dB/m at 868 MHz


def test_figures_of_a_cable(shown: Shown) -> None:
    assert "50 Ω · vf 0.7 · 0.88 dB/m at 868 MHz" in shown.texts()
    shown.press("50 thin, show figures")
    shown.write("50 thin, Velocity factor", "0.695")
    shown.write("50 thin, Skin loss at 1 MHz", "2.5")
    shown.write("50 thin, Impedance", "-50")
    cable = shown.store.plan.cables["50 thin"]
    assert (cable.z0_ohm, cable.velocity_factor, cable.skin_db_per_100m) == (50, 0.695, 2.5)
    assert shown.faults() == ["✗ Impedance wants a number in ohm, more than 0, got -50."]
    assert "50 Ω · vf 0.695 · 0.74 dB/m at 868 MHz" in shown.texts()
    shown.press("50 thin, hide figures")
    assert not [w for w in shown.card.findChildren(QLineEdit) if w.isVisible() and "Skin" in w.accessibleName()]


def test_a_cable_of_the_catalogue(shown: Shown) -> None:
    menu = shown.card.cables.menu
    menu.popup(QPoint(0, 0))
    groups = {action.text(): action.menu() for action in menu.actions() if action.menu()}
    assert list(groups) == ["35 Ω", "50 Ω", "52 Ω", "75 Ω", "93 Ω", "95 Ω", "125 Ω"]
    fifty = groups["50 Ω"]
    fifty.popup(QPoint(0, 0))
    types = {action.text(): action for action in fifty.actions()}
    assert not types["RG-400/U (no loss data)"].isEnabled()
    assert "RG-174A/U (weak fit, from memory)" in types
    shown.qtbot.mouseClick(fifty, Qt.MouseButton.LeftButton, pos=fifty.actionGeometry(types["RG-58C/U"]).center())
    menu.close()
    cable = shown.store.plan.cables["RG-58C/U"]
    assert (cable.z0_ohm, cable.velocity_factor) == (50, 0.66)
    assert 100 * cable.loss_db_per_m(850e6) == pytest.approx(58.2, rel=0.005)
    assert any(text.startswith("Loss fitted to 5 points") for text in shown.texts())
    menu.popup(QPoint(0, 0))
    menu.close()
    assert not types["RG-58C/U"].isVisible(), "what the plan has is not offered again"
    shown.press("RG-58C/U, show figures")
    shown.write("RG-58C/U, Velocity factor", "0.65")
    assert "These are not the catalogue's figures." in shown.texts()


def test_an_own_cable(shown: Shown) -> None:
    menu = shown.card.cables.menu
    menu.popup(QPoint(0, 0))
    own = menu.actions()[-1]
    assert own.text() == "Own cable…"
    shown.qtbot.mouseClick(menu, Qt.MouseButton.LeftButton, pos=menu.actionGeometry(own).center())
    shown.write("Its name", "50 thin")
    assert shown.faults() == ["✗ A cable of this name is in the plan already."]
    shown.write("Its name", "brown drum")
    assert list(shown.store.plan.cables) == ["50 thin", "brown drum"]
    shown.write("brown drum, Impedance", "48")  # its figures stand open
    assert shown.store.plan.cables["brown drum"].z0_ohm == 48
    shown.store.stack.undo()
    shown.store.stack.undo()
    assert list(shown.store.plan.cables) == ["50 thin"]


# Problems and the sheet


def test_a_problem_leads_to_its_part(shown: Shown) -> None:
    (card,) = [c for c in shown.card.findChildren(ProblemCard) if c.isVisible()]
    assert "T1: Port 3 is tied to nothing." in shown.texts()
    shown.qtbot.mouseClick(card, Qt.MouseButton.LeftButton)
    assert shown.store.selected == ("T1",)
    shown.store.select(())
    card.setFocus()
    shown.qtbot.keyClick(card, Qt.Key.Key_Return)
    assert shown.store.selected == ("T1",)


def test_a_stopping_problem_has_the_cross(qtbot: QtBot) -> None:
    shown = Shown(qtbot, store(parts=[], joins=[]))
    assert "There is no radio." in shown.texts()
    assert "✗" in shown.texts()
    visible = [w.accessibleName() for w in shown.card.findChildren(QLineEdit) if w.isVisible()]
    assert "Power" not in visible


def test_looking_changes_nothing(shown: Shown) -> None:
    first = shown.store.plan
    for control in controls(shown.card):
        control.setFocus()
    shown.store.select(("A",))
    shown.store.select(())
    assert shown.store.plan is first
    assert shown.store.stack.count() == 0


def test_the_sheet_shows_one_card(qtbot: QtBot) -> None:
    sheet = SideSheet(store(), LIGHT)
    qtbot.addWidget(sheet)
    sheet.resize(SHEET_WIDTH, 500)
    sheet.show()
    qtbot.waitExposed(sheet)
    assert sheet.plan_card.isVisible()
    assert not sheet.part_card.isVisible()
    sheet.plan_card._store.select(("leg",))
    assert sheet.part_card.isVisible()
    assert not sheet.plan_card.isVisible()
    QApplication.processEvents()
    names = [w.text() for w in sheet.part_card.findChildren(QLineEdit) if w.accessibleName() == "Name"]
    assert names == ["leg"]
    assert sheet.width() == SHEET_WIDTH
    assert sheet.part_card.width() <= sheet.viewport().width(), "nothing is cut off beside the scroll bar"
    sheet.set_look(DARK)
    assert sheet.grab().toImage().pixelColor(2, 2).name() == DARK.card


def test_button_words_from_plans_keep_their_ampersand(qtbot: QtBot) -> None:
    cable = {"z0_ohm": 50, "velocity_factor": 0.7}
    shown = Shown(qtbot, store(cables={"50 thin": cable, "R&D": cable}))
    texts = [b.text() for b in shown.card.findChildren(QPushButton) if b.accessibleName().startswith("R&D")]
    assert texts == ["▸ R&&D"]
