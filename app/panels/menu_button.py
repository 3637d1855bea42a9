"""A button that offers a few things by name. Knows no plan."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from functools import partial
from typing import NamedTuple

from PySide6.QtCore import QPoint, Signal
from PySide6.QtWidgets import QMenu, QPushButton

from app.panels.style import button_text, tooltip


class Offer(NamedTuple):
    """One thing that is offered; key : what `chosen` says, hint : what will come of it."""

    key: str
    text: str
    hint: str


class MenuButton(QPushButton):
    """A button whose menu is made anew each time it opens. `chosen`(key)."""

    chosen = Signal(str)

    def __init__(self, text: str, offers: Callable[[], Sequence[Offer]]) -> None:
        super().__init__(text)
        self._offers = offers
        self.menu_shown = QMenu(self)
        self.menu_shown.setToolTipsVisible(True)
        self.clicked.connect(self._open)

    def _open(self) -> None:
        menu = self.menu_shown
        menu.clear()
        for offer in self._offers():
            action = menu.addAction(button_text(offer.text))
            action.setToolTip(tooltip(offer.hint))
            action.triggered.connect(partial(self.chosen.emit, offer.key))
        menu.popup(self.mapToGlobal(QPoint(0, self.height())))
