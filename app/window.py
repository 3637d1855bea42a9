"""The window: builds the views around one store and connects them. Holds no logic of the plan."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QByteArray, QPoint, QPointF, QSettings, Qt
from PySide6.QtGui import QCloseEvent, QColor, QCursor, QGuiApplication, QPalette
from PySide6.QtWidgets import (
    QFileDialog,
    QHBoxLayout,
    QInputDialog,
    QLabel,
    QMainWindow,
    QMenu,
    QSizePolicy,
    QSplitter,
    QVBoxLayout,
    QWidget,
)

from app.actions import build_menus
from app.bench.hand import Hand, drawn
from app.bench.placing import Placing
from app.bench.view import BenchView
from app.editing import edits
from app.editing.cutting import moved_to_frequency
from app.editing.edits import new_plan
from app.editing.entry import EntryError, read_quantity
from app.editing.wording import format_frequency
from app.files import Files
from app.look import DARK, LIGHT, Look, font, palette_of, system_look
from app.panels.drawer import PartsDrawer
from app.panels.drawer_entries import MEASURED, entries
from app.panels.rail import FrequencyRail
from app.panels.side_sheet import SideSheet
from app.panels.starter_dialog import StarterDialog
from app.panels.style import button_text
from app.panels.verdicts import VerdictStrip
from app.reporting import say
from app.store import Store
from feedlib import Plan, PlanError
from feedlib.assets_place import ASSETS
from feedlib.plan import Join, Port

if TYPE_CHECKING:
    from app.plots.row import PlotRow

MOST_LETTERS = 80


class Window(QMainWindow):
    """One window on one plan. The plots come last (`build_plots`), so that the window is there at once."""

    def __init__(
        self, plan: Plan | None, path: Path | None, *, look: Look | None = None, remember: bool = True
    ) -> None:
        super().__init__()
        self._settings = QSettings() if remember else None
        self.look = look or self._chosen_look()
        self.store: Store = Store(plan or new_plan(), path if plan is not None and not _is_example(path) else None)
        self.files: Files = Files(self.store, self)
        self.bench: BenchView = BenchView(self.store, self.look)
        self.placing = Placing(self.store, entries(), self)
        self.hand: Hand = Hand(self.store, self)
        self.drawer = PartsDrawer(self.look)
        self.rail = FrequencyRail(self.store, self.look)
        self.strip = VerdictStrip(self.store, self.look)
        self.sheet = SideSheet(self.store, self.look)
        self.plots: PlotRow | None = None
        self.title, self.band, self.hint = QLabel(), QLabel(), QLabel(self.bench)
        self._split = QSplitter(Qt.Orientation.Vertical)
        self._lay_out()
        self.actions_by_id, self.menus = build_menus(self, self, self.menuBar())
        self._build_examples()
        self._connect()
        self.set_look(self.look)
        self._tell_file()
        self._tell_plan()
        self._restore_places()
        self.bench.setFocus()

    # --- building ---

    def _lay_out(self) -> None:
        header = QHBoxLayout()
        header.setContentsMargins(22, 8, 22, 0)
        self.title.setFont(font("head", bold=True))
        for label in (self.title, self.band, self.hint):
            label.setTextFormat(Qt.TextFormat.PlainText)
        self.title.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
        header.addWidget(self.title, 1)
        header.addWidget(self.band)
        above = QWidget()
        middle = QHBoxLayout(above)
        middle.setContentsMargins(0, 0, 0, 0)
        middle.setSpacing(0)
        middle.addWidget(self.drawer)
        column = QVBoxLayout()
        column.setSpacing(0)
        column.addWidget(self.bench, 1)
        column.addWidget(self.rail)
        middle.addLayout(column, 1)
        self._split.addWidget(above)
        self._split.setChildrenCollapsible(False)
        self._split.setHandleWidth(2)
        body = QHBoxLayout()
        body.setContentsMargins(0, 0, 0, 0)
        body.setSpacing(0)
        body.addWidget(self._split, 1)
        body.addWidget(self.sheet)
        whole = QWidget()
        layout = QVBoxLayout(whole)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addLayout(header)
        layout.addWidget(self.strip)
        layout.addLayout(body, 1)
        self.setCentralWidget(whole)
        self.setMinimumSize(900, 600)
        self.resize(1600, 1000)
        self.hint.setFont(font("text"))
        self.hint.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)
        self.hint.move(24, 16)

    def build_plots(self) -> None:
        """Add the row of plots; importing them takes longer than all else."""
        from app.plots.row import PlotRow

        self.plots = PlotRow(self.store, self.look)
        self._split.addWidget(self.plots)
        self.set_look(self.look)  # dresses the splitter's new handle
        height = max(240, round(self._split.height() * 0.37))
        self._split.setSizes([self._split.height() - height, height])
        self._split.setStretchFactor(0, 1)
        if self._settings is not None:
            state = self._settings.value("window/split")
            if isinstance(state, QByteArray):
                self._split.restoreState(state)
        self.bench.fit()

    def settle(self) -> None:
        """Finish what views put off until things are quiet (for a picture)."""
        self.bench.fit()
        if self.plots is not None:
            self.plots.settle()

    def _build_examples(self) -> None:
        menu = self.menus["File"].addMenu("&Examples")
        self.menus["File"].insertMenu(self.actions_by_id["save"], menu)
        for path in sorted((ASSETS / "examples").glob("*.feedplan")):
            action = menu.addAction(path.stem.replace("-", " ").capitalize())
            action.triggered.connect(lambda _=False, p=path: self.files.open(p))

    def _connect(self) -> None:
        store = self.store
        store.file_changed.connect(self._tell_file)
        store.plan_changed.connect(self._tell_plan)
        store.stack.cleanChanged.connect(self._tell_file)
        undo, redo = self.actions_by_id["undo"], self.actions_by_id["redo"]
        for action, can in ((undo, store.stack.canUndoChanged), (redo, store.stack.canRedoChanged)):
            can.connect(action.setEnabled)
            action.setEnabled(False)
        # Bound methods end with the window; the stack speaks once more when it goes, after the actions.
        store.stack.undoTextChanged.connect(self._tell_undo)
        store.stack.redoTextChanged.connect(self._tell_redo)
        self.drawer.asked.connect(lambda key: self.placing.put_behind(key, self._middle()))
        self.drawer.file_asked.connect(lambda: self._measured(self._middle()))
        self.bench.part_dropped.connect(self._dropped)
        self.bench.files_dropped.connect(self._files_dropped)
        self.bench.offer_asked.connect(self._offer)
        self.bench.walked.connect(self.hand.walk)
        self.bench.field_asked.connect(self.sheet.focus_first_field)

    # --- what people ask for ---

    def delete(self) -> None:
        """Take the selected parts, or the selected join, away."""
        self.placing.delete(self.bench.bench.selected_join)

    def select_all(self) -> None:
        """Select every part."""
        self.store.select(tuple(p.id for p in self.store.plan.parts))

    def begin(self) -> None:
        """Begin with a starter."""
        if not self.files.may_go():
            return
        dialog = StarterDialog(self, self.look, drawn, self.store.plan.band.marked_hz)
        if dialog.exec() and dialog.plan is not None:
            self.store.open(dialog.plan, None)
        dialog.deleteLater()

    def paste(self) -> None:
        """Put copied parts in the middle of what is seen, or under the pointer."""
        here = self.bench.mapFromGlobal(QCursor.pos())
        inside = self.bench.viewport().rect().contains(here)
        self.hand.paste(self.bench.mapToScene(here) if inside else self._middle())

    def ask_frequency(self) -> None:
        """Move the whole plan to another frequency, with all electrical lengths kept."""
        old = format_frequency(self.store.plan.band.marked_hz)
        words, given = QInputDialog.getText(
            self,
            "Move to another frequency",
            "The mark's new frequency. All electrical lengths are kept, so every cut changes:",
            text=old,
        )
        if not given:
            return
        try:
            plan, left = moved_to_frequency(self.store.plan, read_quantity(words, unit="Hz", bare_unit="MHz"))
        except (EntryError, PlanError) as error:
            say(self, "The plan is not moved", f"{error}")
            return
        self.store.edit(f"Move to {format_frequency(plan.band.marked_hz)}", plan)
        if left:
            say(self, "Measured data stays", f"Measured data cannot move: {', '.join(left)} are as they were.")

    def choose_theme(self, theme: str) -> None:
        """Light, dark, or as the system has it; remembered."""
        if self._settings is not None:
            self._settings.setValue("window/theme", theme)
        self.set_look(self._chosen_look())

    def set_look(self, look: Look) -> None:
        """Draw everything in a theme."""
        self.look = look
        self.setPalette(palette_of(look))
        self.menuBar().setPalette(palette_of(look))
        if (whole := self.centralWidget()) is not None:
            whole.setAutoFillBackground(True)
        for label, colour in ((self.title, look.ink), (self.band, look.soft), (self.hint, look.soft)):
            label.setStyleSheet(f"color: {colour}; background: transparent")
        handle, line = self._split.handle(1), palette_of(look)
        line.setColor(QPalette.ColorRole.Window, QColor(look.hairline))
        if handle is not None:
            handle.setPalette(line)
            handle.setAutoFillBackground(True)
        for view in (self.bench, self.drawer, self.rail, self.strip, self.sheet, self.plots):
            if view is not None:
                view.set_look(look)

    def close_without_asking(self) -> None:
        """Close the window and lose what is not saved."""
        self.store.stack.setClean()
        self.close()

    def _dropped(self, key: str, at: QPointF, join: Join | None) -> None:
        if key in entries():
            self.placing.put(key, at, join)
        elif key == MEASURED:
            self._measured(at, join)

    def _measured(self, at: QPointF, join: Join | None = None) -> None:
        name, _ = QFileDialog.getOpenFileName(
            self, "A Touchstone file", str(Path.home()), "Touchstone (*.s*p *.ts);;All files (*)"
        )
        if name:
            self.placing.put_file(Path(name), at, join)

    def _files_dropped(self, names: list[str], at: QPointF) -> None:
        for name in names:
            if name.lower().endswith(".feedplan"):
                self.files.open(Path(name))
                return
            under = self.bench.bench.part_under(at)
            onto = None if under is None else under.shown.placed.id
            self.placing.put_file(Path(name), at, self.bench.bench.join_under(at), onto)

    def offer_behind(self) -> None:
        """Offer the parts that may stand behind the selected one; all by keys."""
        part_id = self.store.selected[0] if self.store.selected else None
        at = self.bench.bench.parts[part_id].pos() if part_id is not None else self._middle()
        key = self._chosen_part(self.bench.mapToGlobal(self.bench.mapFromScene(at)))
        if key is not None:
            self.placing.put_behind(key, self._middle())
        self.bench.setFocus()

    def _offer(self, port: Port, at: QPointF, screen: QPoint) -> None:
        """The parts that may stand where a join was pulled to."""
        key = self._chosen_part(screen)
        if key is not None:
            self.placing.put_at_port(key, at, port)

    def _chosen_part(self, screen: QPoint) -> str | None:
        menu = QMenu(self)
        menu.setPalette(palette_of(self.look))
        for key, entry in entries().items():
            menu.addAction(entry.label).setData(key)
        menu.setActiveAction(menu.actions()[0])
        chosen = menu.exec(screen)
        menu.deleteLater()
        return None if chosen is None else str(chosen.data())

    def _middle(self) -> QPointF:
        return self.bench.mapToScene(self.bench.viewport().rect().center())

    # --- what the window itself tells ---

    def _tell_file(self) -> None:
        self.setWindowModified(self.files.unsaved)
        name = edits.plain_text(self.store.plan.title) or "Untitled"
        file = f" ({self.store.path.name})" if self.store.path is not None else ""
        shown = f"{shortened(name)}{file}".replace("[*]", "[*][*]")  # only the last one is Qt's mark of change
        self.setWindowTitle(f"{shown}[*] – Feedwright")
        self.title.setText(f"{name}   ·   edited" if self.files.unsaved else name)

    def _tell_undo(self, text: str) -> None:
        self.actions_by_id["undo"].setText(button_text(f"Undo {shortened(text)}".rstrip()))

    def _tell_redo(self, text: str) -> None:
        self.actions_by_id["redo"].setText(button_text(f"Redo {shortened(text)}".rstrip()))

    def _tell_plan(self) -> None:
        plan = self.store.plan
        count = len(plan.channels)
        channels = f" · {count} channel{'s' if count > 1 else ''}" if count else ""
        self.band.setText(f"{plan.band.start_hz / 1e6:.9g} to {plan.band.stop_hz / 1e6:.9g} MHz{channels}")
        empty = len(plan.parts) <= 1
        self.hint.setText(
            "Drag parts from the left on to the bench, or double-click one; File has starters to begin with.\n"
            "Pull from port to port to join; pull into the empty bench to be offered what fits."
        )
        self.hint.adjustSize()
        self.hint.setVisible(empty)
        self._tell_file()

    def _chosen_look(self) -> Look:
        theme = self._settings.value("window/theme", "system") if self._settings is not None else "light"
        if theme in ("light", "dark"):
            return LIGHT if theme == "light" else DARK
        if QGuiApplication.styleHints().colorScheme() == Qt.ColorScheme.Dark:
            return DARK
        return system_look(QGuiApplication.palette())

    def _restore_places(self) -> None:
        if self._settings is not None:
            geometry = self._settings.value("window/geometry")
            if isinstance(geometry, QByteArray):
                self.restoreGeometry(geometry)

    def closeEvent(self, event: QCloseEvent) -> None:
        if not self.files.may_go():
            event.ignore()
            return
        if self._settings is not None:
            self._settings.setValue("window/geometry", self.saveGeometry())
            self._settings.setValue("window/split", self._split.saveState())
        self.store.close()
        event.accept()


def shortened(text: str) -> str:
    """A text as it may stand in a title or a menu."""
    return text if len(text) <= MOST_LETTERS else text[: MOST_LETTERS - 1] + "…"


def _is_example(path: Path | None) -> bool:
    """Examples open as plans without a file, so that saving does not change them."""
    return path is not None and path.resolve().is_relative_to(ASSETS.resolve())
