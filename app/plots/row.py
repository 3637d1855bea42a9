"""The row of plots under the bench: side by side while there is room, the others one word away."""

from __future__ import annotations

from PySide6.QtCore import QSize
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from app.look import Look, palette_of
from app.plots.currents import CurrentsPlot
from app.plots.figure import Plot
from app.plots.match import MatchPlot
from app.plots.smith import SmithPlot
from app.plots.words import Words
from app.store import Store

PLOT_PX = 300
"""Each plot gets at least so much, or fewer are shown."""


class PlotRow(QWidget):
    """Match, currents and Smith chart. A plot can take the whole row; words lead to those that are not in sight."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__()
        self.plots: dict[str, Plot] = {
            plot.title: plot for plot in (MatchPlot(store, look), CurrentsPlot(store, look), SmithPlot(store, look))
        }
        self.whole: str | None = None
        self._asked = list(self.plots)  # the last asked for first
        self.tabs = Words(list(self.plots), spacing=10)
        self.tabs.chosen.connect(self._show)
        side_by_side = QHBoxLayout()
        side_by_side.setSpacing(0)
        for plot in self.plots.values():
            side_by_side.addWidget(plot, 1)
            plot.whole_asked.connect(self._whole_asked)
        tabs = QHBoxLayout()
        tabs.setContentsMargins(10, 4, 10, 0)
        tabs.addWidget(self.tabs)
        tabs.addStretch(1)
        column = QVBoxLayout(self)
        column.setSizeConstraint(QVBoxLayout.SizeConstraint.SetNoConstraint)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addLayout(tabs)
        column.addLayout(side_by_side, 1)
        self.setAutoFillBackground(True)
        self.setPalette(palette_of(look))
        self._arrange()

    def set_look(self, look: Look) -> None:
        """Wear another look."""
        self.setPalette(palette_of(look))
        for plot in self.plots.values():
            plot.set_look(look)

    def settle(self) -> None:
        """Do at once what plots put off until nothing has changed for a while."""
        for plot in self.plots.values():
            plot.settle()

    def minimumSizeHint(self) -> QSize:
        """Room for one plot and the words; with less than all in sight the row asks for no more."""
        return self.plots["Match"].minimumSize() + QSize(0, self.tabs.sizeHint().height())

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._arrange()

    def _show(self, title: str) -> None:
        self._asked.remove(title)
        self._asked.insert(0, title)
        if self.whole is not None:
            self.whole = title
        self._arrange()

    def _whole_asked(self) -> None:
        plot = self.sender()
        assert isinstance(plot, Plot)
        self.whole = None if self.whole else plot.title
        self._asked.remove(plot.title)
        self._asked.insert(0, plot.title)
        self._arrange()

    def _arrange(self) -> None:
        count = min(max(self.width() // PLOT_PX, 1), len(self.plots))
        shown = {self.whole} if self.whole else set(self._asked[:count])
        for title, plot in self.plots.items():
            plot.setVisible(title in shown)
            plot.show_whole(title == self.whole)
        self.tabs.show_chosen(shown)
        self.tabs.setVisible(len(shown) < len(self.plots))
