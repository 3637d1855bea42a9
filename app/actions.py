"""Every action of the program as one record; menus and keys are made from this table."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QMenu, QMenuBar, QWidget

from app.bench.hand import Hand
from app.bench.view import BenchView
from app.files import Files
from app.store import Store

Key = QKeySequence.StandardKey | str | None


class Acting(Protocol):
    """What an action may act on: the window."""

    @property
    def store(self) -> Store: ...
    @property
    def files(self) -> Files: ...
    @property
    def bench(self) -> BenchView: ...
    @property
    def hand(self) -> Hand: ...
    def begin(self) -> None: ...
    def offer_behind(self) -> None: ...
    def delete(self) -> None: ...
    def paste(self) -> None: ...
    def ask_frequency(self) -> None: ...
    def select_all(self) -> None: ...
    def choose_theme(self, theme: str) -> None: ...
    def close(self) -> bool: ...


@dataclass(frozen=True, slots=True)
class ActionRecord:
    """One action: its id, its menu (with "/" for a submenu), its words, its keys, and what it does to the window."""

    id: str
    menu: str
    text: str
    keys: Key
    run: Callable[[Acting], object]
    tip: str = ""


STANDARD = QKeySequence.StandardKey
RULE = "-"
"""In the table's id: a line between groups."""

ACTIONS: tuple[ActionRecord, ...] = (
    ActionRecord("new", "File", "&New", STANDARD.New, lambda w: w.files.new(), "Begin with a radio alone"),
    ActionRecord("starter", "File", "&Begin with a starter…", "Ctrl+Shift+N", lambda w: w.begin(), "A ready harness"),
    ActionRecord("open", "File", "&Open…", STANDARD.Open, lambda w: w.files.open(), "Open a plan"),
    ActionRecord("save", "File", "&Save", STANDARD.Save, lambda w: w.files.save(), "Save the plan"),
    ActionRecord("save_as", "File", "Save &as…", STANDARD.SaveAs, lambda w: w.files.save_as(), "Save under a new name"),
    ActionRecord(RULE, "File", "", None, lambda w: None),
    ActionRecord("quit", "File", "&Quit", "Ctrl+Q", lambda w: w.close(), "Close the window"),
    ActionRecord("undo", "Edit", "&Undo", STANDARD.Undo, lambda w: w.store.stack.undo(), "Take the last act back"),
    ActionRecord("redo", "Edit", "&Redo", STANDARD.Redo, lambda w: w.store.stack.redo(), "Do it again"),
    ActionRecord(RULE, "Edit", "", None, lambda w: None),
    ActionRecord("delete", "Edit", "&Delete", STANDARD.Delete, lambda w: w.delete(), "Take parts or a join away"),
    ActionRecord(RULE, "Edit", "", None, lambda w: None),
    ActionRecord("cut", "Edit", "Cu&t", STANDARD.Cut, lambda w: w.hand.cut(), "Copy the parts and take them away"),
    ActionRecord("copy", "Edit", "&Copy", STANDARD.Copy, lambda w: w.hand.copy(), "Copy the parts"),
    ActionRecord("paste", "Edit", "&Paste", STANDARD.Paste, lambda w: w.paste(), "Put copied parts on the bench"),
    ActionRecord(RULE, "Edit", "", None, lambda w: None),
    ActionRecord("put", "Edit", "Put a part &behind…", "Ins", lambda w: w.offer_behind(), "Behind the selected part"),
    ActionRecord(
        "again", "Edit", "The same &leg again", "Ctrl+D", lambda w: w.hand.again(), "One leg more of the same"
    ),
    ActionRecord(
        "select_all", "Edit", "Select &all", STANDARD.SelectAll, lambda w: w.select_all(), "Select every part"
    ),
    ActionRecord("tidy", "Edit", "T&idy the bench", "Ctrl+T", lambda w: w.hand.tidy(), "Radio left, antennas right"),
    ActionRecord("frequency", "Edit", "Move to another &frequency…", None, lambda w: w.ask_frequency(), ""),
    ActionRecord("fit", "View", "&Fit the harness", "Ctrl+0", lambda w: w.bench.fit(), "Show the whole harness"),
    ActionRecord("fit_selection", "View", "Fit the &selection", "Ctrl+9", lambda w: w.bench.fit_selection(), ""),
    ActionRecord("zoom_in", "View", "Zoom &in", STANDARD.ZoomIn, lambda w: w.bench.zoom(1.25), ""),
    ActionRecord("zoom_out", "View", "Zoom &out", STANDARD.ZoomOut, lambda w: w.bench.zoom(0.8), ""),
    ActionRecord(RULE, "View", "", None, lambda w: None),
    ActionRecord(
        "hold", "View", "&Hold this", "Ctrl+H", lambda w: w.store.hold(), "Keep the present curves to compare"
    ),
    ActionRecord("let_go", "View", "&Let go", "Ctrl+Shift+H", lambda w: w.store.let_go(), "Forget the held curves"),
    ActionRecord(RULE, "View", "", None, lambda w: None),
    ActionRecord("theme_system", "View/Theme", "As the &system", None, lambda w: w.choose_theme("system"), ""),
    ActionRecord("theme_light", "View/Theme", "&Light", None, lambda w: w.choose_theme("light"), ""),
    ActionRecord("theme_dark", "View/Theme", "&Dark", None, lambda w: w.choose_theme("dark"), ""),
)


def build_menus(window: QWidget, acting: Acting, bar: QMenuBar) -> tuple[dict[str, QAction], dict[str, QMenu]]:
    """Fill the menu bar from the table; returns the actions by id and the menus by name."""
    menus: dict[str, QMenu] = {}
    actions: dict[str, QAction] = {}
    for record in ACTIONS:
        menu = _menu(bar, menus, record.menu)
        if record.id == RULE:
            menu.addSeparator()
            continue
        action = QAction(record.text, window)
        if record.keys is not None:
            action.setShortcuts(QKeySequence.keyBindings(record.keys)) if isinstance(
                record.keys, QKeySequence.StandardKey
            ) else action.setShortcut(QKeySequence(record.keys))
        action.setStatusTip(record.tip)
        action.triggered.connect(_runner(record, acting))
        menu.addAction(action)
        actions[record.id] = action
    return actions, menus


def _runner(record: ActionRecord, acting: Acting) -> Callable[[], object]:
    return lambda: record.run(acting)


def _menu(bar: QMenuBar, menus: dict[str, QMenu], name: str) -> QMenu:
    if name not in menus:
        parent, _, own = name.rpartition("/")
        above: QMenuBar | QMenu = _menu(bar, menus, parent) if parent else bar
        menus[name] = above.addMenu(f"&{own}")
    return menus[name]
