"""Limits set on the verdict strip, and what it says while its figures are older than the plan.

25 ohm at a 50 ohm radio: return loss 20 log10(3) = 9.54 dB. Both legs are alike, so both balances are 0.
"""

from __future__ import annotations

from collections.abc import Iterator

import pytest
from PySide6.QtCore import QEvent, QPoint, QRect, Qt
from PySide6.QtGui import QContextMenuEvent
from PySide6.QtWidgets import QApplication, QLabel, QWidget
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.look import DARK, LIGHT
from app.panels.controls import LineField
from app.panels.limit_field import LimitField
from app.panels.verdict_item import VerdictItem
from app.panels.verdicts import VerdictStrip
from app.store import Store
from tests.app.bench_screen import window
from tests.hands import legs, settled


@pytest.fixture
def strip(qtbot: QtBot) -> Iterator[VerdictStrip]:
    """A strip over two legs; the return loss is wanted at 6 dB, the rest has no limit."""
    store = Store(legs())
    made = VerdictStrip(store, LIGHT)
    qtbot.addWidget(made)
    made.resize(1100, made.height())
    made.show()
    with qtbot.waitActive(made):
        made.activateWindow()
    yield made
    store.close()


def item(strip: VerdictStrip, name: str) -> VerdictItem:
    return next(i for i in strip.items if i.shown.name == name)


def fields(strip: VerdictStrip) -> list[LineField]:
    """The fields that are open, at most one."""
    return [line for line in strip.window().findChildren(LineField) if line.accessibleName().startswith("Limit, ")]


def field(strip: VerdictStrip) -> LineField:
    (only,) = (line for line in fields(strip) if line.isVisible())
    return only


def none_open(strip: VerdictStrip) -> bool:
    return not [line for line in fields(strip) if line.isVisible()]


def fault(strip: VerdictStrip) -> str:
    (sentence,) = (x.text() for x in strip.window().findChildren(QLabel) if x.isVisible() and x.text().startswith("✗ "))
    return sentence


def double_click(qtbot: QtBot, verdict: VerdictItem) -> None:
    """A press and a release, and both again in short time."""
    qtbot.mouseClick(verdict, Qt.MouseButton.LeftButton)
    qtbot.mouseDClick(verdict, Qt.MouseButton.LeftButton)
    qtbot.mouseRelease(verdict, Qt.MouseButton.LeftButton)


def write(qtbot: QtBot, line: LineField, text: str) -> None:
    line.selectAll()
    qtbot.keyClicks(line, text) if text else qtbot.keyClick(line, Qt.Key.Key_Delete)
    qtbot.keyClick(line, Qt.Key.Key_Return)


def test_a_double_click_sets_the_limit_that_is_there(qtbot: QtBot, strip: VerdictStrip) -> None:
    store, verdict = strip._store, item(strip, "Return loss")
    clicks: list[bool] = []
    verdict.clicked.connect(lambda: clicks.append(True))
    double_click(qtbot, verdict)
    line = field(strip)
    assert len(clicks) == 1, "the second click leads nowhere"
    assert line.hasFocus()
    assert (line.text(), line.selectedText()) == ("6 dB", "6 dB")
    assert line.accessibleName() == "Limit, Return loss at least"
    write(qtbot, line, "12")
    assert store.plan.limits.return_loss_db == 12
    assert (verdict.shown.wants, verdict.shown.state) == ("≥ 12 dB", "fails")
    assert store.stack.undoText() == "Change limit on return loss"
    assert none_open(strip)
    assert verdict.hasFocus()
    store.stack.undo()
    assert verdict.shown.wants == "≥ 6 dB"


def test_an_empty_field_takes_the_limit_away(qtbot: QtBot, strip: VerdictStrip) -> None:
    double_click(qtbot, item(strip, "Return loss"))
    write(qtbot, field(strip), "")
    assert strip._store.plan.limits.return_loss_db is None
    assert item(strip, "Return loss").shown.state == "unknown"
    assert none_open(strip)


def test_a_figure_without_a_limit_gets_one(qtbot: QtBot, strip: VerdictStrip) -> None:
    verdict = item(strip, "Phase balance")
    verdict.setFocus()
    qtbot.keyClick(verdict, Qt.Key.Key_F2)
    line = field(strip)
    assert (line.text(), line.placeholderText()) == ("", "no limit")
    assert line.accessibleName() == "Limit, Phase balance at most"
    write(qtbot, line, "2 * 2.5°")
    assert strip._store.plan.limits.phase_balance_deg == 5
    assert (verdict.shown.wants, verdict.shown.state) == ("≤ 5°", "holds")


def test_enter_goes_there_and_enter_with_ctrl_sets_the_limit(qtbot: QtBot, strip: VerdictStrip) -> None:
    verdict = item(strip, "Return loss")
    verdict.setFocus()
    qtbot.keyClick(verdict, Qt.Key.Key_Return)
    assert strip._store.selected == ("radio",)
    assert none_open(strip)
    strip._store.select(())
    qtbot.keyClick(verdict, Qt.Key.Key_Return, Qt.KeyboardModifier.ControlModifier)
    assert field(strip).text() == "6 dB"
    assert strip._store.selected == ()


def test_the_menu_of_a_verdict_sets_the_limit(qtbot: QtBot, strip: VerdictStrip) -> None:
    verdict = item(strip, "Return loss")
    middle = verdict.rect().center()
    event = QContextMenuEvent(QContextMenuEvent.Reason.Mouse, middle, verdict.mapToGlobal(middle))
    QApplication.sendEvent(verdict, event)
    (action,) = verdict.menu.actions()
    assert action.text() == "Set the limit…"
    at = verdict.menu.actionGeometry(action).center()
    qtbot.mouseClick(verdict.menu, Qt.MouseButton.LeftButton, pos=at)
    assert field(strip).text() == "6 dB"


def test_escape_leaves_all_as_it_was(qtbot: QtBot, strip: VerdictStrip) -> None:
    verdict, first = item(strip, "Return loss"), strip._store.plan
    for text in ("", "12"):
        verdict.setFocus()
        qtbot.keyClick(verdict, Qt.Key.Key_F2)
        qtbot.keyClicks(field(strip), text)
        qtbot.keyClick(field(strip), Qt.Key.Key_Escape)
        assert none_open(strip)
        assert verdict.hasFocus()
        assert strip._store.plan is first


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("a lot", "'a lot' cannot be read as a level"),
        ("-3", "Return loss wants a number in dB, at least 0, got -3."),
    ],
)
def test_what_is_no_limit_says_why_and_waits(qtbot: QtBot, strip: VerdictStrip, text: str, sentence: str) -> None:
    double_click(qtbot, item(strip, "Return loss"))
    first = strip._store.plan
    write(qtbot, field(strip), text)
    assert sentence in fault(strip)
    assert field(strip).text() == text
    item(strip, "Phase balance").setFocus()
    assert field(strip).text() == text, "it waits to be mended"
    assert strip._store.plan is first
    write(qtbot, field(strip), "10")
    assert strip._store.plan.limits.return_loss_db == 10
    assert none_open(strip)


def test_a_limit_is_taken_when_the_focus_leaves(qtbot: QtBot, strip: VerdictStrip) -> None:
    double_click(qtbot, item(strip, "Return loss"))
    qtbot.keyClicks(field(strip), "8")
    qtbot.keyClick(field(strip), Qt.Key.Key_Tab)
    assert strip._store.plan.limits.return_loss_db == 8
    assert item(strip, "Amplitude balance").hasFocus()
    assert none_open(strip)
    double_click(qtbot, item(strip, "Return loss"))
    write(qtbot, field(strip), "a lot")
    double_click(qtbot, item(strip, "Phase balance"))
    assert field(strip).accessibleName() == "Limit, Phase balance at most"


def test_the_field_goes_with_its_verdict(qtbot: QtBot, strip: VerdictStrip) -> None:
    store = strip._store
    store.edit("isolation", edits.with_limit(store.plan, "isolation_db", 20.0))
    double_click(qtbot, item(strip, "Isolation"))
    write(qtbot, field(strip), "")  # what nobody wants is not shown
    assert "Isolation" not in [i.shown.name for i in strip.items]
    assert none_open(strip)
    double_click(qtbot, item(strip, "Return loss"))
    store.edit("no radio", edits.removed(store.plan, ["radio"]))
    assert none_open(strip)
    (only,) = strip.items
    only.setFocus()
    qtbot.keyClick(only, Qt.Key.Key_F2)
    assert none_open(strip), "what is not solved has no limit"


def test_the_field_and_its_sentence_stay_inside_the_window(qtbot: QtBot) -> None:
    plan = edits.with_limit(legs(), "isolation_db", 20.0)
    for limit in ("amplitude_balance_db", "phase_balance_deg", "harness_loss_db"):
        plan = edits.with_limit(plan, limit, 1.0)
    made, _ = window(qtbot, plan, DARK)
    made.resize(900, 700)
    QApplication.processEvents()
    verdict = made.strip.items[-1]
    double_click(qtbot, verdict)
    write(qtbot, field(made.strip), "as little as can be had for the money")
    QApplication.processEvents()
    whole = QRect(QPoint(0, 0), made.size())
    (sentence,) = (x for x in made.findChildren(QLabel) if x.isVisible() and x.text().startswith("✗ '"))
    (frame,) = (f for f in made.findChildren(LimitField) if f.isVisible())
    for widget in (field(made.strip), sentence, frame):
        assert whole.contains(QRect(widget.mapTo(made, QPoint(0, 0)), widget.size()))
        centre = widget.mapTo(made, widget.rect().center())
        top: QWidget | None = made.childAt(centre)
        assert top is widget or widget.isAncestorOf(top), "nothing covers it"
    assert sentence.heightForWidth(sentence.width()) <= sentence.height(), "the whole sentence"
    made.store.close()


def test_figures_of_an_older_plan_are_told_apart(qtbot: QtBot, strip: VerdictStrip) -> None:
    store, verdict = strip._store, item(strip, "Return loss")

    def bar() -> str:
        picture = verdict.grab().toImage()
        return picture.pixelColor(10, verdict.height() // 2).name()

    assert (bar(), verdict.accessibleDescription()) == (LIGHT.holds, "")
    store._solve_s = 1.0  # as after a large harness: solved in the worker
    store.edit("longer", edits.turned_length(store.plan, ["leg A"], 0.01))
    assert store.stale
    assert (bar(), verdict.accessibleDescription()) == (
        LIGHT.soft,
        "of the plan before the last change; being solved",
    )
    settled(store)
    assert bar() == LIGHT.holds
    assert verdict.accessibleDescription() == ""
    assert item(strip, "Phase balance").shown.figure != "0.0°"


def test_the_field_is_dressed_like_the_strip(qtbot: QtBot, strip: VerdictStrip) -> None:
    double_click(qtbot, item(strip, "Return loss"))
    for look in (DARK, LIGHT):
        strip.set_look(look)
        QApplication.sendPostedEvents(None, QEvent.Type.Polish)
        (frame,) = (f for f in strip.findChildren(LimitField) if f.isVisible())
        assert frame.grab().toImage().pixelColor(frame.width() // 2, 3).name() == look.card
