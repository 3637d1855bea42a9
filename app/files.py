"""New, open, save and save as: the plan and its file, with a question before unsaved changes are lost."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, Qt
from PySide6.QtWidgets import QFileDialog, QMessageBox, QWidget

from app.editing.edits import new_plan
from app.reporting import say
from app.store import Store
from feedlib import PlanError, read_plan, write_plan
from feedlib.assets_place import ASSETS

SUFFIX = ".feedplan"
FILTER = f"Feedwright plans (*{SUFFIX});;All files (*)"


class Files(QObject):
    """Moves the store's plan between memory and disk; `parent` is the window that asks."""

    def __init__(self, store: Store, parent: QWidget) -> None:
        super().__init__(parent)
        self.store, self.window = store, parent

    @property
    def unsaved(self) -> bool:
        """Whether there is something to lose."""
        return not self.store.stack.isClean()

    def new(self) -> None:
        """Begin with a radio alone."""
        if self.may_go():
            self.store.open(new_plan(), None)

    def open(self, path: Path | None = None) -> None:
        """Open a plan, asking for the file when none is given."""
        if not self.may_go():
            return
        if path is None:
            name, _ = QFileDialog.getOpenFileName(self.window, "Open a plan", str(self._folder()), FILTER)
            if not name:
                return
            path = Path(name)
        try:
            plan = read_plan(path)
        except PlanError as error:
            say(self.window, "The plan cannot be opened", f"{path.name}: {error}.")
            return
        # An example is opened as a plan without a file, so that saving does not change it.
        self.store.open(plan, None if path.resolve().is_relative_to(ASSETS.resolve()) else path)

    def save(self) -> bool:
        """Save; True when the plan is on disk."""
        return self._write(self.store.path) if self.store.path is not None else self.save_as()

    def save_as(self) -> bool:
        """Save under a name that is asked for."""
        title = "".join(c for c in self.store.plan.title if c.isalnum() or c in " -_,").strip()[:60] or "harness"
        start = self.store.path or self._folder() / f"{title}{SUFFIX}"
        name, _ = QFileDialog.getSaveFileName(self.window, "Save the plan", str(start), FILTER)
        if not name:
            return False
        path = Path(name)
        if not path.suffix[1:].isalpha():  # "2.4 GHz pair" has none
            path = path.with_name(path.name + SUFFIX)
            if path.exists() and not self._may_replace(path):  # the dialog has asked about another name
                return False
        return self._write(path)

    def _may_replace(self, path: Path) -> bool:
        box = QMessageBox(self.window)
        box.setIcon(QMessageBox.Icon.Question)
        box.setWindowTitle("Replace the file?")
        box.setTextFormat(Qt.TextFormat.PlainText)
        box.setText(f"{path.name} is there already. Replace it?")
        box.setStandardButtons(QMessageBox.StandardButton.Yes | QMessageBox.StandardButton.No)
        box.setDefaultButton(QMessageBox.StandardButton.No)
        return box.exec() == QMessageBox.StandardButton.Yes

    def _write(self, path: Path) -> bool:
        try:
            write_plan(self.store.plan, path)
        except OSError as error:
            sentence = f"{path} could not be written: {error.strerror or error}. The plan is still here, unsaved."
            say(self.window, "The plan is not saved", sentence)
            return False
        self.store.saved(path)
        return True

    def may_go(self) -> bool:
        """Whether the present plan may be left; asks when it has unsaved changes."""
        if not self.unsaved:
            return True
        buttons = QMessageBox.StandardButton
        box = QMessageBox(self.window)
        box.setIcon(QMessageBox.Icon.Question)
        box.setWindowTitle("Unsaved changes")
        box.setText("Save the changes to this plan first?")
        box.setStandardButtons(buttons.Save | buttons.Discard | buttons.Cancel)
        box.setDefaultButton(buttons.Save)
        choice = box.exec()
        if choice == buttons.Save:
            return self.save()
        return choice == buttons.Discard

    def _folder(self) -> Path:
        return self.store.path.parent if self.store.path is not None else Path.home()
