"""The field for a Touchstone file: what it holds, and a button to load one. Changes no plan."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from PySide6.QtWidgets import QFileDialog, QPushButton

from app.editing.measured_file import read_touchstone_file
from app.editing.wording import format_frequency
from app.panels.around import Around
from app.panels.editors import FieldEditor
from app.panels.style import set_text
from feedlib.errors import FeedError

FILES = "Touchstone files (*.s*p *.S*P *.ts *.TS);;All files (*)"


class FileEditor(FieldEditor):
    """A Touchstone file."""

    def __init__(self, label: str) -> None:
        self.button = QPushButton()
        super().__init__(label, self.button, wide=True)
        self.button.clicked.connect(self._ask)

    def show_value(self, value: Any, around: Around) -> None:
        self.button.setText("Load a Touchstone file…" if value is None else "Replace by another file…")
        self.button.setAccessibleName(self.button.text() if value is None else f"Replace {value.name}")
        if value is None:
            set_text(self.label, self._name)
            self.say("No file yet.")
            return
        low_hz, high_hz = value.covers_hz()
        ports = f"{value.data.ports} port{'s' if value.data.ports > 1 else ''}"
        points = f"{len(value.data.frequency_hz)} points"
        set_text(self.label, f"{self._name}: {value.name}")
        self.say(f"{ports}, {format_frequency(low_hz)} to {format_frequency(high_hz)}, {points}")

    def load(self, path: str) -> None:
        """Offer the file at a path."""
        try:
            file = read_touchstone_file(Path(path))
        except FeedError as error:
            self.refuse(str(error))
        else:
            self._enter(file)

    def _ask(self) -> None:
        dialog = QFileDialog(self, "Load a Touchstone file", "", FILES)
        dialog.setFileMode(QFileDialog.FileMode.ExistingFile)
        dialog.fileSelected.connect(self.load)
        dialog.finished.connect(dialog.deleteLater)
        dialog.open()
