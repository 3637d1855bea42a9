"""The part card under real clicks, keys and wheel turns. Expected figures: hand arithmetic of quarter-wave matches."""

from __future__ import annotations

import json
import math
import os
from pathlib import Path
from typing import Any

import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QWheelEvent
from PySide6.QtWidgets import (
    QApplication,
    QComboBox,
    QFileDialog,
    QLabel,
    QLineEdit,
    QPushButton,
    QWidget,
)
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.look import DARK, LIGHT, Look
from app.panels.card import PartCard, kind_and_place
from app.panels.controls import LineField, NoteField
from app.panels.style import SHEET_WIDTH, readable
from app.panels.tab_order import controls
from app.store import Store
from feedlib import Plan
from feedlib.parts import KINDS, Antenna, Coax, Lumped, Splitter
from feedlib.plan import Cable, Port
from feedlib.plan_file import parse_plan

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

F_HZ, C = 868e6, 299_792_458.0
QUARTER_M = 0.695 * C / F_HZ / 4
ONE_PORT = "# MHz S RI R 50\n800 0.1 0.1\n900 0.2 0\n"


def plan_data() -> dict[str, Any]:
    """A radio, a T joint, two lossless 75 ohm quarter waves, two 50 ohm antennas: 112.5 ohm each at the T."""
    ohm_75 = {"z0_ohm": 75, "velocity_factor": 0.695, "skin_db_per_100m": 0, "dielectric_db_per_100m": 0}
    antenna = {"kind": "antenna", "impedance": {"fixed_ohm": [50, 0]}}
    return {
        "format": "feedwright-plan",
        "version": 1,
        "title": "Two dipoles",
        "band": {"start_hz": 863e6, "stop_hz": 870e6, "points": 21, "mark_hz": F_HZ},
        "limits": {"return_loss_db": 20},
        "cables": {"75 thin": ohm_75, "50 thin": {**ohm_75, "z0_ohm": 50}},
        "parts": [
            {"id": "radio", "kind": "radio"},
            {"id": "T1", "kind": "tee"},
            {"id": "match A", "kind": "coax", "cable": "75 thin", "length_m": QUARTER_M},
            {"id": "match B", "kind": "coax", "cable": "75 thin", "length_m": QUARTER_M},
            {"id": "A", **antenna},
            {"id": "B", **antenna},
        ],
        "joins": [
            ["radio:1", "T1:1"],
            ["T1:2", "match A:1"],
            ["T1:3", "match B:1"],
            ["match A:2", "A:1"],
            ["match B:2", "B:1"],
        ],
    }


LONE_PARTS: dict[str, dict[str, Any]] = {
    "splitter": {"form": "resistive"},
    "lumped": {"place": "series", "r_ohm": 10},
    "pad": {"loss_db": 3},
    "transformer": {"ratio": 2},
    "load": {"impedance_ohm": [50, 12.5]},
    "measured": {"touchstone": {"name": "filter.s1p", "text": ONE_PORT}},
}


def plan(**changes: Any) -> Plan:
    """The two dipoles, with a part of every other kind beside them, joined to nothing."""
    data = {**plan_data(), **changes}
    data["parts"] = [*data["parts"], *({"id": kind, "kind": kind, **fields} for kind, fields in LONE_PARTS.items())]
    return parse_plan(json.dumps(data).encode())


class Shown:
    """A card on a screen with its store, and what a person can find on it."""

    def __init__(self, qtbot: QtBot, store: Store, look: Look = LIGHT) -> None:
        self.store, self.qtbot = store, qtbot
        self.card = PartCard(store, look)
        self.card.setFixedWidth(SHEET_WIDTH)
        qtbot.addWidget(self.card)
        self.card.show()
        with qtbot.waitActive(self.card):
            self.card.activateWindow()

    def select(self, *part_ids: str) -> None:
        self.store.select(part_ids)
        QApplication.processEvents()

    def control(self, name: str) -> Any:
        """The one visible control of that accessible name."""
        found = [w for w in self.card.findChildren(QWidget) if w.accessibleName() == name and w.isVisible()]
        assert len(found) == 1, f"{len(found)} controls are called {name!r}"
        return found[0]

    def line(self, name: str) -> LineField:
        found = self.control(name)
        assert isinstance(found, LineField)
        return found

    def write(self, name: str, text: str, *, enter: bool = True) -> None:
        """Put a text in place of what stands in a line."""
        line = self.line(name)
        line.setFocus()
        line.selectAll()
        if text:
            self.qtbot.keyClicks(line, text)
        else:
            self.qtbot.keyClick(line, Qt.Key.Key_Delete)
        if enter:
            self.qtbot.keyClick(line, Qt.Key.Key_Return)

    def choose(self, name: str, text: str) -> None:
        """Open a choice and click on the row that begins with a text."""
        box = self.control(name)
        assert isinstance(box, QComboBox)
        box.showPopup()
        row = next(n for n in range(box.count()) if box.itemText(n).startswith(text))
        view = box.view()
        view.scrollTo(box.model().index(row, 0))
        at = view.visualRect(box.model().index(row, 0)).center()
        self.qtbot.mouseMove(view.viewport(), at)
        # A popup takes no click within the double-click time of its opening unless the mouse has moved.
        self.qtbot.mousePress(view.viewport(), Qt.MouseButton.LeftButton, pos=at)
        self.qtbot.mouseRelease(view.viewport(), Qt.MouseButton.LeftButton, pos=at)
        box.hidePopup()

    def texts(self) -> list[str]:
        """Every text that can be seen on labels."""
        return [label.text() for label in self.card.findChildren(QLabel) if label.isVisible() and label.text()]

    def figures(self) -> dict[str, str]:
        """The figures at the mark, by name."""
        texts = self.texts()
        start = next(n for n, text in enumerate(texts) if text.startswith("At "))
        rows = texts[start + 1 :]
        return dict(zip(rows[::2], rows[1::2], strict=False))

    def part(self, part_id: str) -> Any:
        return self.store.plan.placed(part_id).part


@pytest.fixture
def shown(qtbot: QtBot) -> Shown:
    return Shown(qtbot, Store(plan()))


def wheel(over: QWidget, notches: int, modifier: Qt.KeyboardModifier = Qt.KeyboardModifier.NoModifier) -> None:
    """Turn the wheel over the middle of a widget; with Alt some systems turn it sideways."""
    centre = QPointF(over.rect().center())
    turn = QPoint(0, 120 * notches)
    if modifier == Qt.KeyboardModifier.AltModifier:
        turn = turn.transposed()
    event = QWheelEvent(
        centre,
        QPointF(over.mapToGlobal(centre.toPoint())),
        QPoint(),
        turn,
        Qt.MouseButton.NoButton,
        modifier,
        Qt.ScrollPhase.NoScrollPhase,
        False,
    )
    QApplication.sendEvent(over, event)


# What stands on the card


@pytest.mark.parametrize("look", [LIGHT, DARK], ids=lambda look: look.name)
@pytest.mark.parametrize("kind", list(KINDS))
def test_every_kind_has_a_card_that_fits_its_width(qtbot: QtBot, kind: str, look: Look) -> None:
    store = Store(plan())
    shown = Shown(qtbot, store, look)
    part_id = next(p.id for p in store.plan.parts if kind == p.part.KIND)
    shown.select(part_id)
    assert shown.line("Name").text() == part_id
    for widget in shown.card.findChildren(QWidget):
        if widget.isVisible() and not isinstance(widget.parentWidget(), QLineEdit | QComboBox | NoteField):
            right = widget.mapTo(shown.card, widget.rect().topRight()).x()
            assert right < SHEET_WIDTH, f"{widget} reaches {right}"
        if isinstance(widget, QLabel) and widget.isVisible() and not widget.wordWrap():
            assert widget.sizeHint().width() <= widget.width() + 1, widget.text()
    for control in controls(shown.card):
        assert control.accessibleName(), control


def test_every_field_of_a_record_has_a_control(shown: Shown) -> None:
    shown.select("lumped")
    for name in ("Place", "Resistance", "Inductance", "Capacitance", "R, L, C wired in"):
        assert shown.control(name).isEnabled()
    shown.select("A")
    for name in ("Impedance", "Wanted current, Wanted amplitude", "Wanted current, Wanted phase"):
        assert [w for w in shown.card.findChildren(QWidget) if w.accessibleName() == name and w.isVisible()]


def test_kind_in_trade_words_and_what_is_beside() -> None:
    two = plan()
    assert kind_and_place(two, two.placed("match A")) == "coax between T1 and A"
    assert kind_and_place(two, two.placed("A")) == "antenna at match A"
    assert kind_and_place(two, two.placed("T1")) == "T joint between radio, match A and match B"
    assert kind_and_place(two, two.placed("pad")) == "pad, joined to nothing"
    loose = plan(joins=plan_data()["joins"][:3])
    assert kind_and_place(loose, loose.placed("match A")) == "coax at T1, 1 port open"


def test_text_of_a_plan_is_never_markup(qtbot: QtBot) -> None:
    data = plan_data()
    data["parts"][0]["label"] = "<b>rig</b>"
    shown = Shown(qtbot, Store(parse_plan(json.dumps(data).encode())))
    shown.select("T1")
    assert "T joint between <b>rig</b>, match A and match B" in shown.texts()
    assert all(label.textFormat() == Qt.TextFormat.PlainText for label in shown.card.findChildren(QLabel))


def test_looking_at_parts_changes_nothing(shown: Shown) -> None:
    first = shown.store.plan
    for placed in first.parts:
        shown.select(placed.id)
        for control in controls(shown.card):
            control.setFocus()
    assert shown.store.plan is first
    assert shown.store.stack.count() == 0


def test_tab_goes_from_top_to_bottom(shown: Shown) -> None:
    shown.select("match A")
    shown.choose("End at T1", "a section")
    order = [w for w in controls(shown.card) if w.isVisible()]
    order[0].setFocus()
    for control in order[1:]:
        shown.qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
        assert QApplication.focusWidget() is control
    tops = [w.mapTo(shown.card, QPoint(0, 0)).y() for w in order]
    assert tops == sorted(tops)
    assert len(order) == 10  # name, id, cable, length, end, its three fields, other end, note


def test_words_are_readable_on_their_ground() -> None:
    def luminance(colour: str) -> float:
        channels = [int(colour[n : n + 2], 16) / 255 for n in (1, 3, 5)]
        r, g, b = [c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in channels]
        return 0.2126 * r + 0.7152 * g + 0.0722 * b

    for look in (LIGHT, DARK):
        for ground in (look.card, look.paper, look.fails_wash, look.field):
            for colour in (look.holds, look.near, look.fails, look.soft):
                low, high = sorted([luminance(readable(look, colour, ground)), luminance(ground)])
                assert (high + 0.05) / (low + 0.05) >= 4.5
        for ground in (look.card, look.paper, look.field):  # soft text is drawn there as it is
            low, high = sorted([luminance(look.soft), luminance(ground)])
            assert (high + 0.05) / (low + 0.05) >= 4.5


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
    assert "✗ Loss wants a number dB, at least 0, got -3." in shown.texts()
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


def load_file(shown: Shown, button: str, path: Path, text: str) -> None:
    """Press a button and choose a file of that text."""
    path.write_text(text)
    shown.qtbot.mouseClick(shown.control(button), Qt.MouseButton.LeftButton)
    (dialog,) = [d for d in shown.card.findChildren(QFileDialog) if d.isVisible()]
    dialog.selectFile(str(path))
    name = dialog.findChild(QLineEdit, "fileNameEdit")
    assert isinstance(name, QLineEdit)
    name.setText(str(path))
    shown.qtbot.keyClick(name, Qt.Key.Key_Return)
    QApplication.processEvents()


# Names, ids, notes, many parts


def test_a_name_and_a_note(shown: Shown) -> None:
    shown.select("match B")
    shown.write("Name", "Northern match")
    assert shown.store.plan.placed("match B").label == "Northern match"
    note = shown.control("Note")
    note.setFocus()
    shown.qtbot.keyClicks(note, "brown drum")
    shown.qtbot.keyClick(note, Qt.Key.Key_Tab)
    assert shown.store.plan.placed("match B").note == "brown drum"
    shown.write("Name", "match B")
    assert shown.store.plan.placed("match B").label == "", "a name like the id is no name"
    note.setFocus()
    shown.qtbot.keyClicks(note, " and more")
    shown.qtbot.keyClick(note, Qt.Key.Key_Escape)
    assert note.toPlainText() == "brown drum"


def test_a_new_id_keeps_joins_and_selection(shown: Shown) -> None:
    shown.select("match B")
    shown.write("Id", "leg 2")
    assert shown.store.selected == ("leg 2",)
    assert shown.store.plan.mate(Port("leg 2", 1)) == Port("T1", 3)
    assert shown.line("Id").text() == "leg 2"


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("leg:2", "✗ An id has no ':' and no control characters."),
        ("match A", "✗ Two parts have this id."),
        ("", "✗ An id has 1 to 64 characters, got 0."),
    ],
)
def test_an_id_that_cannot_be(shown: Shown, text: str, sentence: str) -> None:
    shown.select("match B")
    shown.write("Id", text)
    assert sentence in shown.texts()
    assert shown.line("Id").text() == text
    assert [p.id for p in shown.store.plan.parts][:4] == ["radio", "T1", "match A", "match B"]


def test_several_parts_in_short(shown: Shown) -> None:
    shown.select("match A", "match B", "pad")
    assert "3 parts selected" in shown.texts()
    assert "match A, match B, pad" in shown.texts()
    (delete,) = [b for b in shown.card.findChildren(QPushButton) if b.isVisible()]
    shown.qtbot.mouseClick(delete, Qt.MouseButton.LeftButton)
    assert not {"match A", "match B", "pad"} & {p.id for p in shown.store.plan.parts}
    assert shown.store.plan.mate(Port("A", 1)) == Port("T1", 2), "the chain heals"
    assert shown.store.selected == ()


# Figures at the mark: 112.5 ohm at each match, 56.25 at the T, |reflection| = 6.25/106.25


def test_figures_of_a_coax(shown: Shown) -> None:
    shown.select("match A")
    share = (1 - (6.25 / 106.25) ** 2) / 2
    figures = shown.figures()
    assert figures["sees"] == "50 + j0 Ω"
    assert float(figures["shows"].removesuffix(" + j0 Ω")) == pytest.approx(112.5, abs=0.5)
    assert figures["highest voltage"] == f"{math.sqrt(share * 112.5):.2f} V"
    assert "loses" not in figures


def test_figures_of_a_lossy_coax(shown: Shown) -> None:
    # A 50 ohm line of 0.3 dB into 50 ohm loses 0.3 dB and 1 - 10^-0.03 = 6.67 % of what enters it.
    store = shown.store
    lossy = Cable(z0_ohm=50, velocity_factor=0.695, dielectric_db_per_100m=0.1)
    p = edits.with_cable(store.plan, "50 thin", lossy)
    p = edits.changed_part(p, "match A", cable="50 thin", length_m=30 / 86.8)
    store.edit("lossy", edits.changed_part(p, "match B", cable="50 thin", length_m=30 / 86.8))
    store.solve_now()
    shown.select("match A")
    assert shown.figures()["loses"] == "0.30 dB"
    # Both see 50 ohm: 25 at the T, |reflection| = 1/3, each takes (1 - 1/9)/2 of the power.
    assert f"{100 * (1 - 10**-0.03) * 4 / 9:.1f} % of the power" in shown.texts()


def test_figures_of_an_antenna(shown: Shown) -> None:
    shown.select("B")
    share = (1 - (6.25 / 106.25) ** 2) / 2
    figures = shown.figures()
    assert figures["impedance"] == "50 + j0 Ω"
    assert figures["current"] == f"{1e3 * math.sqrt(share / 50):.1f} mA"
    assert figures["phase"] == "−90.0°"
    assert figures["takes"] == f"{100 * share:.1f} % of the power"


def test_figures_of_the_radio_and_the_joint(shown: Shown) -> None:
    shown.select("radio")
    figures = shown.figures()
    assert figures["return loss"] == f"{-20 * math.log10(6.25 / 106.25):.1f} dB"
    assert float(figures["VSWR"]) == pytest.approx(56.25 / 50, abs=0.005)
    shown.select("T1")
    figures = shown.figures()
    assert figures["sees"].startswith("56.")
    assert set(figures) == {"sees", "at port 2", "at port 3"}


def test_figures_follow_the_wheel(shown: Shown) -> None:
    shown.select("match A")
    before = shown.figures()["shows"]
    wheel(shown.line("Length"), 10, Qt.KeyboardModifier.ShiftModifier)
    QApplication.processEvents()
    assert shown.figures()["shows"] != before


def test_a_part_that_the_radio_does_not_reach(shown: Shown) -> None:
    shown.select("pad")
    assert shown.figures()["from the radio"] == "not reached"
    assert "sees" not in shown.figures()
    assert "Port 1 is tied to nothing." in shown.texts()
    assert "Join it, or leave it open." in shown.texts()


def test_a_plan_that_is_not_solved_says_why(shown: Shown) -> None:
    shown.select("match A")
    shown.store.edit("away", edits.removed(shown.store.plan, ["radio"]))
    QApplication.processEvents()
    (sentence,) = [t for t in shown.texts() if t.startswith("Not solved: ")]
    assert "radio" in sentence
