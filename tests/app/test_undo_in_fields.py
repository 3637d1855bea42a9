"""Ctrl+Z with the cursor in a field: the field's while something is typed, the plan's once it is taken."""

from __future__ import annotations

from collections.abc import Iterator

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit
from pytestqt.qtbot import QtBot

from app.look import LIGHT
from app.window import Window
from feedlib import read_plan
from feedlib.assets_place import ASSETS
from feedlib.parts import Coax

CONTROL = Qt.KeyboardModifier.ControlModifier


@pytest.fixture
def window(qtbot: QtBot) -> Iterator[Window]:
    plan = read_plan(ASSETS / "examples" / "two-dipole-gateway.feedplan")
    window = Window(plan, None, look=LIGHT, remember=False)
    window.show()
    window.activateWindow()
    qtbot.waitUntil(lambda: QApplication.activeWindow() is window)
    yield window
    window.close_without_asking()
    window.deleteLater()


def length_m(window: Window) -> float:
    part = window.store.plan.placed("match north").part
    assert isinstance(part, Coax)
    return part.length_m


def test_undo_after_enter_is_the_plans(window: Window) -> None:
    before = length_m(window)
    window.store.select(("match north",))
    window.sheet.focus_first_field()
    field = QApplication.focusWidget()
    assert isinstance(field, QLineEdit)
    field.selectAll()
    QTest.keyClicks(field, "70 mm")
    QTest.keyClick(field, Qt.Key.Key_Z, CONTROL)  # still typing: takes letters back
    assert length_m(window) == before
    field.selectAll()
    QTest.keyClicks(field, "70 mm")
    QTest.keyClick(field, Qt.Key.Key_Return)
    assert length_m(window) == 0.07
    QTest.keyClick(field, Qt.Key.Key_Z, CONTROL)
    assert length_m(window) == before
