"""The part card: what stands on it, names and figures. Expected figures: hand arithmetic of quarter-wave matches."""

from __future__ import annotations

import json
import math

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtWidgets import (
    QApplication,
    QComboBox,
    QLabel,
    QLineEdit,
    QWidget,
)
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.look import DARK, LIGHT, Look
from app.panels.card import kind_and_place
from app.panels.controls import NoteField
from app.panels.style import SHEET_WIDTH, readable
from app.panels.tab_order import controls
from app.store import Store
from feedlib.parts import KINDS
from feedlib.plan import Cable, Port
from feedlib.plan_file import parse_plan
from tests.app.card_screen import Shown, plan, plan_data, wheel


@pytest.fixture
def shown(qtbot: QtBot) -> Shown:
    return Shown(qtbot, Store(plan()))


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
    # name, id, cable, length, four cuts, degrees, same phase, match, end, its three fields, other end, note
    assert len(order) == 17


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
    shown.qtbot.mouseClick(shown.control("Delete the selected parts"), Qt.MouseButton.LeftButton)
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
