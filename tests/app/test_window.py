"""The window as one thing: a length is turned and everything follows; a half-built plan is mended by hand."""

from __future__ import annotations

import threading
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QComboBox, QFileDialog, QLabel, QLineEdit, QWidget
from pytestqt.qtbot import QtBot

from app.bench.pictures import PICTURES
from app.bench.pictures.coax import UNIT_HEIGHT, CoaxPicture
from app.editing import edits
from app.look import DARK, LIGHT
from app.window import Window
from feedlib import Plan, read_plan, solve
from feedlib.phasors import phase_from_middle_deg
from feedlib.plan import Port
from tests.app.bench_screen import plan, undone_by, window
from tests.hands import CONTROL, LEFT, PLAIN, SHIFT, Hands, settled
from tests.hands import legs as many_legs
from tests.plans import Sketch


@pytest.fixture
def whole(qtbot: QtBot) -> tuple[Window, Hands]:
    return window(qtbot, limited())


def limited() -> Plan:
    """Two legs of 0.1 m in air, and limits."""
    limits = replace(plan().limits, return_loss_db=9.0, phase_balance_deg=5.0)
    return replace(plan(), title="Two legs", limits=limits)


def control(window: Window, name: str) -> QWidget:
    """The one control of that name that can be seen at the right."""
    found = [w for w in window.sheet.findChildren(QWidget) if w.accessibleName() == name and w.isVisible()]
    assert len(found) == 1, f"{len(found)} controls are called {name!r}"
    return found[0]


def write(window: Window, name: str, text: str) -> None:
    """Put a text into a field and press Enter."""
    field = control(window, name)
    assert isinstance(field, QLineEdit)
    field.setFocus()
    field.selectAll()
    QTest.keyClicks(field, text)
    QTest.keyClick(field, Qt.Key.Key_Return)
    settled(window.store)


def choose(window: Window, name: str, text: str) -> None:
    """Choose the row of a list that begins with a text, by keys."""
    box = control(window, name)
    assert isinstance(box, QComboBox)
    box.setFocus()
    row = next(n for n in range(box.count()) if box.itemText(n).startswith(text))
    box.showPopup()
    view = box.view()
    view.setCurrentIndex(box.model().index(row, 0))
    QTest.keyClick(view, Qt.Key.Key_Return)
    settled(window.store)


def texts(widget: QWidget) -> str:
    """All that labels say, in one text."""
    return "\n".join(label.text().replace("\u200b", "") for label in widget.findChildren(QLabel) if label.isVisible())


def verdicts(window: Window) -> dict[str, str]:
    """What the strip says, by name."""
    return {item.shown.name: item.shown.figure or item.shown.wants for item in window.strip.items}


# What it shows


def test_a_plan_is_shown_everywhere(whole: tuple[Window, Hands]) -> None:
    window, hands = whole
    assert window.title.text() == "Two legs"
    assert window.windowTitle() == "Two legs[*] – Feedwright"
    assert not window.isWindowModified()
    assert window.band.text() == "860 to 870 MHz"
    assert not window.hint.isVisible()
    assert verdicts(window) == {
        "Return loss": "9.54 dB",  # 25 ohm on 50 ohm
        "Amplitude balance": "0.00 dB",
        "Phase balance": "0.0°",
        "Harness loss": "0.00 dB",
    }
    assert window.sheet.plan_card.isVisible()
    hands.click("leg A")
    assert window.sheet.part_card.isVisible()
    assert "coax between T1 and A" in texts(window.sheet)


def test_without_a_plan_there_is_a_radio_and_a_hint(qtbot: QtBot) -> None:
    made, hands = window(qtbot, None)
    assert list(hands.scene.parts) == ["radio"]
    assert made.hint.isVisible()
    hands.click("radio")
    _double_click(made, "antenna")
    assert not made.hint.isVisible()
    assert hands.store.plan.joins == ((Port("radio", 1), Port("A", 1)),)


def _double_click(window: Window, key: str) -> None:
    """Double-click on an entry of the parts drawer."""
    thing = window.drawer.things[key]
    QTest.mouseDClick(thing, LEFT, PLAIN, thing.rect().center())
    QTest.mouseRelease(thing, LEFT, PLAIN, thing.rect().center())
    settled(window.store)


def test_an_edit_is_told_and_can_be_taken_back_by_name(whole: tuple[Window, Hands]) -> None:
    window, hands = whole
    undo, redo = (window.actions_by_id[which] for which in ("undo", "redo"))
    assert not undo.isEnabled()
    hands.drag("leg A", (408, -228))
    assert (undo.text(), undo.isEnabled(), redo.isEnabled()) == ("Undo Move leg A", True, False)
    assert window.title.text().endswith("edited")
    assert window.isWindowModified()
    hands.key(Qt.Key.Key_Z, CONTROL)
    assert hands.store.plan == limited()
    assert (undo.text(), undo.isEnabled(), redo.text()) == ("Undo", False, "Redo Move leg A")
    assert window.title.text() == "Two legs"
    assert not window.isWindowModified()
    hands.key(Qt.Key.Key_Z, CONTROL | SHIFT)
    assert hands.store.plan.placed("leg A").at == (408, -228)


def test_names_in_menus_and_titles_are_plain_and_short(whole: tuple[Window, Hands]) -> None:
    window, hands = whole
    hands.store.edit("Name", edits.labelled(hands.store.plan, "A", label="R&D <b>mast</b>"))
    hands.drag("A", (600, -228))
    assert window.actions_by_id["undo"].text() == "Undo Move R&&D <b>mast</b>"
    hands.store.edit("Name", edits.labelled(hands.store.plan, "A", label="long " * 400))
    hands.drag("A", (504, -108))
    assert len(window.actions_by_id["undo"].text()) < 100
    hands.store.edit("Title", edits.retitled(hands.store.plan, title="<i>a</i>\n[*] " + "wide " * 1000))
    assert window.title.textFormat() == Qt.TextFormat.PlainText
    assert "\n" not in window.windowTitle()
    assert window.windowTitle().replace("[*][*]", "").count("[*]") == 1
    assert len(window.windowTitle()) < 150
    QApplication.processEvents()
    assert window.minimumSizeHint().width() <= 1100
    hands.store.edit("Title", edits.retitled(hands.store.plan, title=""))
    assert window.title.text().startswith("Untitled")


def test_delete_in_a_field_deletes_letters(whole: tuple[Window, Hands]) -> None:
    window, hands = whole
    hands.click("leg A")
    field = control(window, "Length")
    assert isinstance(field, QLineEdit)
    field.setFocus()
    field.setCursorPosition(0)
    hands.key(Qt.Key.Key_Delete)
    assert "leg A" in hands.scene.parts
    assert field.text() == "00 mm"
    hands.view.setFocus()


def test_all_is_selected_by_key(whole: tuple[Window, Hands]) -> None:
    _, hands = whole
    hands.key(Qt.Key.Key_A, CONTROL)
    assert set(hands.store.selected) == {p.id for p in hands.store.plan.parts}


def test_the_theme_is_chosen_in_the_menu_and_remembered(qtbot: QtBot) -> None:
    first = Window(limited(), None)
    qtbot.addWidget(first)
    first.show()
    first.build_plots()
    first.actions_by_id["theme_dark"].trigger()
    views = (first.bench.bench, *first.plots.plots.values())
    assert {view.look.name for view in views} == {"dark"}
    assert first.grab().toImage().pixelColor(5, first.height() // 2).lightness() < 80
    first.close()
    second = Window(limited(), None)
    qtbot.addWidget(second)
    assert second.look is DARK
    second.actions_by_id["theme_light"].trigger()
    assert second.look is LIGHT


# Everything follows a length


def test_one_length_is_turned_and_everything_follows(qtbot: QtBot, tmp_path: Path) -> None:
    """20 mm in air at 868 MHz are 20.85 degrees, 20.89 at 870 MHz, the worst of the band. The longer leg lags."""
    made, hands = window(qtbot, limited())
    made.build_plots()
    QApplication.processEvents()
    hands.click("leg B")
    hands.wheel("leg B", 10, keys=SHIFT)
    settled(hands.store)
    assert verdicts(made)["Phase balance"] == "20.9°"
    assert next(i for i in made.strip.items if i.shown.name == "Phase balance").shown.state == "fails"
    details = {i: PICTURES["antenna"].detail(hands.scene.parts[i].shown) for i in ("A", "B")}
    assert details == {"A": "44.4 %  +10.4°", "B": "44.4 %  −10.4°"}
    assert control(made, "Length").text() == "120 mm"
    made.grab()
    curves = made.plots.plots["Currents"]
    expected = phase_from_middle_deg(solve(hands.store.plan)).T
    assert np.array([curve.values for curve in curves.axes.curves]) == pytest.approx(expected)
    assert list(curves.axes.mark.get_xdata()) == [868e6, 868e6]
    at_mark = expected[:, np.argmin(np.abs(hands.store.plan.grid_hz() - 868e6))]
    assert at_mark == pytest.approx([10.425, -10.425], abs=0.01)

    path = tmp_path / "turned.feedplan"
    hands.store.path = path
    hands.key(Qt.Key.Key_S, CONTROL)
    assert not made.isWindowModified()
    again, others = window(qtbot, read_plan(path))
    assert others.store.plan == hands.store.plan
    assert verdicts(again) == verdicts(made)


def test_the_mark_is_dragged_along_the_rail_and_swells_follow(qtbot: QtBot) -> None:
    """An open stub of a quarter wave at 868 MHz: a node at its entry there, none at the edges of the sweep."""
    sketch = Sketch(860e6, 876e6, 17, mark_hz=868e6, sweep={"start_hz": 600e6, "stop_hz": 1200e6, "points": 7})
    sketch.add("radio", "radio")
    sketch.coax(299_792_458 / 868e6 / 4, part_id="stub", at=[300, 0])
    sketch.join("radio:1", "stub:1")
    made, hands = window(qtbot, sketch.plan())
    stub = hands.scene.parts["stub"]
    assert CoaxPicture._heights(stub.shown)[0] < UNIT_HEIGHT / 20
    rail = made.rail
    start, end = (QPoint(round(rail.x_at(f)), 20) for f in (868e6, 1200e6))
    QTest.mousePress(rail, LEFT, PLAIN, start)
    QTest.mouseMove(rail, (start + end) / 2)
    QTest.mouseMove(rail, end)
    QTest.mouseRelease(rail, LEFT, PLAIN, end)
    settled(hands.store)
    assert hands.store.plan.band.marked_hz == pytest.approx(1200e6, rel=2e-3)
    # 2 |cos(90 degrees * 1200/868)|
    expected = 2 * abs(np.cos(np.pi / 2 * hands.store.plan.band.marked_hz / 868e6)) * UNIT_HEIGHT
    assert CoaxPicture._heights(stub.shown)[0] == pytest.approx(expected, abs=1)
    assert undone_by(hands)[0] == 1


# A half-built plan


def half_built() -> Plan:
    """No radio, a cable that is not there, ends that are open."""
    sketch = Sketch(860e6, 870e6, 11, mark_hz=868e6, title="Half", limits={"return_loss_db": 20})
    sketch.top["cables"]["own"] = {"z0_ohm": 50, "velocity_factor": 0.7}
    sketch.add("coax", "feeder", cable="lost", length_m=0.3, at=[200, 0])
    sketch.antenna(100, "A", at=[500, 0])
    sketch.join("feeder:2", "A:1")
    return sketch.plan()


def test_a_half_built_plan_opens_says_what_is_wrong_and_is_mended_by_hand(
    qtbot: QtBot, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    made, hands = window(qtbot, half_built())
    made.build_plots()
    QApplication.processEvents()
    made.grab()
    assert "Not solved" in verdicts(made)
    assert "There is no radio." in texts(made.sheet)
    assert hands.scene.parts["feeder"].trouble
    assert hands.scene.parts["feeder"].open_ports == {1}
    assert PICTURES["coax"].detail(hands.scene.parts["feeder"].shown).startswith("no cable lost")

    # The radio comes from the drawer by a double click, and is joined by hand.
    hands.click((300, 250))
    _double_click(made, "radio")
    assert hands.store.selected == ("radio",)
    hands.drag("radio", (0, 0))
    hands.drag("radio:1", "feeder:1")
    assert hands.store.plan.mate(Port("feeder", 1)) == Port("radio", 1)
    settled(hands.store)
    assert hands.store.answer is None

    # The cable is chosen in the card.
    hands.click("feeder")
    assert "lost" in texts(made.sheet)
    choose(made, "Cable", "own")
    assert hands.store.plan.placed("feeder").part.cable == "own"
    assert hands.store.answer is not None
    assert verdicts(made)["Return loss"] == "9.54 dB"  # 100 ohm through 50 ohm: a third is reflected
    assert not any(item.trouble for item in hands.scene.parts.values())
    made.grab()
    assert hands.store.answer.mark.antenna_share[0, 0] == pytest.approx(8 / 9)

    # And saved, for the first time.
    path = tmp_path / "mended.feedplan"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (str(path), ""))
    hands.view.setFocus()
    hands.key(Qt.Key.Key_S, CONTROL)
    assert read_plan(path) == hands.store.plan
    while hands.store.stack.canUndo():
        hands.store.stack.undo()
    assert hands.store.plan == half_built()
    settled(hands.store)
    assert "Not solved" in verdicts(made)


def test_a_click_on_what_is_not_solved_goes_to_the_part(qtbot: QtBot) -> None:
    spoilt = edits.changed_part(limited(), "leg B", cable="lost")
    made, hands = window(qtbot, spoilt)
    item = made.strip.items[0]
    QTest.mouseClick(item, LEFT, PLAIN, item.rect().center())
    assert hands.store.selected == ("leg B",)
    assert made.sheet.part_card.isVisible()


# The end


def test_closing_ends_the_worker(qtbot: QtBot) -> None:
    before = set(threading.enumerate())
    made, hands = window(qtbot, many_legs(300))
    hands.store._solve_s = 1.0
    hands.store.edit("Turn", edits.turned_length(hands.store.plan, ["leg antenna 7"], 0.01))
    assert set(threading.enumerate()) - before
    hands.store.stack.setClean()
    made.close()
    assert not set(threading.enumerate()) - before
    QApplication.processEvents()


@pytest.mark.parametrize("act", [lambda hands: hands.click("T1"), lambda hands: hands.wheel("leg antenna 2", 3)])
def test_a_large_harness_can_be_worked_on_while_it_is_solved(qtbot: QtBot, act: Callable[[Hands], None]) -> None:
    """Parts that went and came are not in the answer yet."""
    made, hands = window(qtbot, many_legs(300))
    hands.store._solve_s = 1.0
    gone = edits.removed(hands.store.plan, ["antenna 5", "leg antenna 6"])
    hands.store.edit("Delete", edits.renamed(gone, "leg antenna 5", "antenna 5"))  # a section by an antenna's name
    assert hands.store.stale
    hands.store.select(("antenna 5",))
    act(hands)
    made.grab()
    settled(hands.store)
    made.grab()
    assert hands.store.answer.plan is hands.store.plan
