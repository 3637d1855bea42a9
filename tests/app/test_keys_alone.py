"""The two-antenna harness drawn, cut, checked and changed with the keyboard alone."""

from __future__ import annotations

from collections.abc import Iterator

import pytest
from PySide6.QtCore import Qt, QTimer
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QMenu
from pytestqt.qtbot import QtBot

from app.look import LIGHT
from app.window import Window
from feedlib.parts import Coax

Key = Qt.Key


@pytest.fixture
def window(qtbot: QtBot) -> Iterator[Window]:
    window = Window(None, None, look=LIGHT, remember=False)
    window.show()
    window.activateWindow()
    qtbot.waitUntil(lambda: QApplication.activeWindow() is window)
    window.bench.setFocus()
    yield window
    window.close_without_asking()
    window.deleteLater()


def press(key: Qt.Key, modifier: Qt.KeyboardModifier = Qt.KeyboardModifier.NoModifier) -> None:
    """A key where the focus is."""
    QTest.keyClick(QApplication.focusWidget(), key, modifier)
    QApplication.processEvents()


def choose(label: str) -> None:
    """Once a menu has opened: down to an entry, and Enter."""
    menu = QApplication.activePopupWidget()
    assert isinstance(menu, QMenu)
    for _ in menu.actions():
        if menu.activeAction().text() == label:
            break
        QTest.keyClick(menu, Key.Key_Down)
    assert menu.activeAction().text() == label
    QTest.keyClick(menu, Key.Key_Return)


def put(window: Window, label: str) -> None:
    """A part behind the selected one."""
    QTimer.singleShot(0, lambda: choose(label))
    press(Key.Key_Insert)
    window.activateWindow()  # what a window system does when a menu closes
    QApplication.processEvents()


def write(window: Window, words: str) -> None:
    """Enter opens the selected part's field, where words are written; Enter takes them, Esc goes back."""
    press(Key.Key_Return)
    field = QApplication.focusWidget()
    assert isinstance(field, QLineEdit)
    field.selectAll()
    QTest.keyClicks(field, words)
    QTest.keyClick(field, Key.Key_Return)
    window.bench.setFocus()


def test_two_antennas_by_keys_alone(window: Window, qtbot: QtBot) -> None:
    store = window.store
    press(Key.Key_Right)
    assert store.selected == ("radio",)
    put(window, "T joint")
    put(window, "coax")
    leg = store.selected[0]
    write(window, "90deg")
    put(window, "antenna")
    assert [p.part.KIND for p in store.plan.parts] == ["radio", "tee", "coax", "antenna"]
    press(Key.Key_Left)
    assert store.selected == (leg,)
    press(Key.Key_D, Qt.KeyboardModifier.ControlModifier)  # the same leg again, on the T joint's free port
    assert [p.part.KIND for p in store.plan.parts].count("antenna") == 2
    assert store.answer is not None
    assert store.answer.mark.antenna_share[0] == pytest.approx([store.answer.mark.antenna_share[0, 0]] * 2)
    assert store.answer.mark.amplitude_balance_db[0] == pytest.approx(0, abs=1e-9)
    # two 50 ohm antennas through 50 ohm legs, side by side: 25 ohm less what the cable's loss hides
    assert abs(store.answer.mark.port_impedance_ohm["radio:1"][0]) == pytest.approx(25, rel=0.02)

    lengths = [p.part.length_m for p in store.plan.parts if isinstance(p.part, Coax)]
    window.bench.setFocus()
    press(Key.Key_Plus)  # the legs are a matched set: both get longer
    longer = [p.part.length_m for p in store.plan.parts if isinstance(p.part, Coax)]
    assert len(set(longer)) == 1
    assert longer[0] > lengths[0]
    press(Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert [p.part.length_m for p in store.plan.parts if isinstance(p.part, Coax)] == lengths
    press(Key.Key_Delete)
    assert len(store.plan.parts) < 6


def test_arrows_walk_the_signal_path(window: Window) -> None:
    store = window.store
    press(Key.Key_Right)
    put(window, "T joint")
    joint = store.selected[0]
    put(window, "antenna")
    first = store.selected[0]
    press(Key.Key_Left)
    assert store.selected == (joint,)
    put(window, "antenna")
    second = store.selected[0]
    press(Key.Key_Up)
    assert store.selected == (first,)
    press(Key.Key_Down)
    assert store.selected == (second,)
    press(Key.Key_Right)
    assert store.selected == (second,)
    for expected in (joint, "radio", "radio"):
        press(Key.Key_Left)
        assert store.selected == (expected,)


def test_copied_parts_come_back_as_text(window: Window, qtbot: QtBot) -> None:
    press(Key.Key_Right)
    put(window, "antenna")
    window.store.select(tuple(p.id for p in window.store.plan.parts))
    press(Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    assert '"kind": "antenna"' in QApplication.clipboard().text()
    press(Key.Key_V, Qt.KeyboardModifier.ControlModifier)
    kinds = [p.part.KIND for p in window.store.plan.parts]
    assert kinds.count("antenna") == 2
    assert len(window.store.selected) == 2
    press(Key.Key_X, Qt.KeyboardModifier.ControlModifier)
    assert [p.part.KIND for p in window.store.plan.parts] == ["radio", "antenna"]
