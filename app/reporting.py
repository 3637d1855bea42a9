"""The only code that shows an error: a sentence for what the input caused, a report for a bug in the program."""

from __future__ import annotations

import platform
import sys
import threading
import traceback
from types import TracebackType

import PySide6
from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtWidgets import QApplication, QMessageBox, QWidget


def say(parent: QWidget | None, title: str, sentence: str) -> None:
    """Tell what went wrong and wait until it is read."""
    box = QMessageBox(QMessageBox.Icon.Warning, title, sentence, QMessageBox.StandardButton.Ok, parent)
    box.setTextFormat(Qt.TextFormat.PlainText)
    box.exec()


class _Bugs(QObject):
    """Brings bugs of any thread into the window's thread."""

    found = Signal(str)

    def __init__(self) -> None:
        super().__init__()
        self.found.connect(self._show)
        self._showing = False

    def _show(self, report: str) -> None:
        if self._showing:
            return
        self._showing = True
        box = QMessageBox(
            QMessageBox.Icon.Critical,
            "A fault in the program",
            "Something in the program went wrong. Your plan is still here; save it under a new name to be safe.",
            QMessageBox.StandardButton.Ok,
            QApplication.activeWindow(),
        )
        box.setTextFormat(Qt.TextFormat.PlainText)
        box.setDetailedText(report)
        copy = box.addButton("Copy the report", QMessageBox.ButtonRole.ActionRole)
        box.exec()
        if box.clickedButton() is copy:
            QApplication.clipboard().setText(report)
        self._showing = False


def catch_bugs() -> None:
    """From now on a bug ends in one message with a report that can be copied, and the program goes on."""
    bugs = _Bugs()
    bugs.setParent(QApplication.instance())

    def hook(kind: type[BaseException], value: BaseException, trace: TracebackType | None) -> None:
        if issubclass(kind, KeyboardInterrupt):
            QApplication.quit()
            return
        lines = "".join(traceback.format_exception(kind, value, trace))
        sys.stderr.write(lines)
        versions = f"Python {platform.python_version()}, Qt {PySide6.__version__}, {platform.platform()}"
        bugs.found.emit(f"{versions}\n\n{lines}")

    sys.excepthook = hook
    threading.excepthook = lambda a: hook(a.exc_type, a.exc_value or a.exc_type(), a.exc_traceback)
