"""The row of plots: who is in sight at which width, who takes the whole row, and what is left when it is closed."""

import os

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

import pytest
from PySide6.QtCore import QEvent, Qt
from PySide6.QtWidgets import QApplication, QVBoxLayout, QWidget

from app.editing import edits
from app.look import DARK, LIGHT
from app.plots.row import PlotRow
from app.store import Store
from feedlib.parts.antenna import AntennaImpedance
from feedlib.plan import Plan
from tests.plans import Sketch


def plan() -> Plan:
    """One antenna on the radio."""
    sketch = Sketch(860e6, 870e6, 11, mark_hz=868e6)
    sketch.join(f"{sketch.add('radio', 'radio')}:1", f"{sketch.antenna(100, 'A')}:1")
    return sketch.plan()


@pytest.fixture
def row(qtbot) -> PlotRow:
    """A row with room for all."""
    made = PlotRow(Store(plan()), LIGHT)
    qtbot.addWidget(made)
    made.resize(1120, 300)
    made.show()
    qtbot.waitExposed(made)
    painted(made)
    return made


def painted(row: PlotRow) -> None:
    """Let waiting events and paint events happen."""
    QApplication.processEvents()
    row.grab()


def shown_titles(row: PlotRow) -> list[str]:
    return [title for title, plot in row.plots.items() if plot.isVisible()]


def test_a_plot_takes_the_whole_row_and_gives_it_back(row, qtbot):
    assert shown_titles(row) == ["Match", "Currents", "Smith chart"]
    assert len({plot.width() for plot in row.plots.values()} | {1120 // 3}) <= 2
    assert not row.tabs.isVisible()
    currents = row.plots["Currents"]
    qtbot.mouseClick(currents.corners, Qt.MouseButton.LeftButton)
    painted(row)
    assert shown_titles(row) == ["Currents"]
    assert currents.width() == 1120
    assert currents.corners.toolTip() == "Give the row back"
    qtbot.mouseClick(row.tabs.buttons["Smith chart"], Qt.MouseButton.LeftButton)
    assert shown_titles(row) == ["Smith chart"]
    qtbot.mouseClick(row.plots["Smith chart"].corners, Qt.MouseButton.LeftButton)
    assert shown_titles(row) == ["Match", "Currents", "Smith chart"]
    assert currents.corners.toolTip() == "Take the whole row"


def test_a_narrow_row_shows_fewer_plots_and_words_lead_to_the_others(row, qtbot):
    row.resize(810, 300)
    painted(row)
    assert shown_titles(row) == ["Match", "Currents"]
    row.resize(320, 300)
    painted(row)
    assert row.width() == 320
    assert shown_titles(row) == ["Match"]
    for title in ("Smith chart", "Currents"):
        qtbot.mouseClick(row.tabs.buttons[title], Qt.MouseButton.LeftButton)
        assert shown_titles(row) == [title]
        assert [word for word, button in row.tabs.buttons.items() if button.isChecked()] == [title]
    row.resize(1120, 300)
    painted(row)
    assert shown_titles(row) == ["Match", "Currents", "Smith chart"]


def test_a_row_in_a_window_lets_it_shrink_at_once(qtbot):
    window = QWidget()
    qtbot.addWidget(window)
    row = PlotRow(Store(plan()), LIGHT)
    QVBoxLayout(window).addWidget(row)
    window.resize(1150, 300)
    window.show()
    qtbot.waitExposed(window)
    assert len(shown_titles(row)) == 3
    window.resize(330, 300)
    painted(row)
    assert window.width() == 330
    assert len(shown_titles(row)) == 1


def test_a_closed_row_leaves_nothing_that_listens_or_lives_on(qtbot):
    before = set(QApplication.allWidgets())
    store = Store(plan())
    row = PlotRow(store, LIGHT)
    row.show()
    painted(row)
    row.close()
    row.deleteLater()
    QApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
    QApplication.processEvents()
    assert set(QApplication.allWidgets()) <= before
    store.select(("A",))
    store.edit("Mark", edits.marked(store.plan, 861e6))
    store.solve_now()


def test_a_look_reaches_every_plot(row):
    row.set_look(DARK)
    painted(row)
    image = row.grab().toImage()
    for plot in row.plots.values():
        corner = plot.geometry().bottomLeft()
        assert image.pixelColor(corner.x() + 2, corner.y() - 2).name() == DARK.paper


def test_a_row_that_is_settled_has_given_room_back(row):
    store, axes = row.plots["Match"].store, row.plots["Match"].axes.axes
    almost = edits.changed_part(plan(), "A", impedance=AntennaImpedance(fixed_ohm=51 + 0j))
    store.edit("Turn", almost)
    store.solve_now()
    painted(row)
    assert axes.get_ylim()[1] > 40
    store.stack.undo()
    store.solve_now()
    painted(row)
    assert axes.get_ylim()[1] > 40
    row.settle()
    assert axes.get_ylim()[1] < 20
