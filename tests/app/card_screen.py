"""A part card on a screen for tests: a plan with every kind of part, and what a person can find and do there."""

from __future__ import annotations

import json
import os
from pathlib import Path
from typing import Any

from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QWheelEvent
from PySide6.QtWidgets import (
    QApplication,
    QComboBox,
    QFileDialog,
    QLabel,
    QLineEdit,
    QWidget,
)
from pytestqt.qtbot import QtBot

from app.look import LIGHT, Look
from app.panels.card import PartCard
from app.panels.controls import LineField
from app.panels.style import SHEET_WIDTH
from app.store import Store
from feedlib import Plan
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
