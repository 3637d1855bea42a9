"""The parts drawer under real clicks, keys and drags, and what its entries make."""

from __future__ import annotations

import pytest
from PySide6.QtCore import QEvent, QPoint, QPointF, Qt
from PySide6.QtGui import QDrag, QMouseEvent
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.editing.drags import PART_MIME
from app.look import DARK, LIGHT
from app.panels.drawer import PartsDrawer
from app.panels.drawer_entries import MEASURED, entries
from app.panels.part_pictures import PICTURES
from feedlib import solve
from feedlib.parts import KINDS, Coax, Splitter
from tests.app.two_legs import C, store


@pytest.fixture
def drawer(qtbot: QtBot) -> PartsDrawer:
    shown = PartsDrawer(LIGHT)
    qtbot.addWidget(shown)
    shown.resize(shown.width(), 800)
    shown.show()
    with qtbot.waitActive(shown):
        shown.activateWindow()
    return shown


def test_every_kind_of_part_is_offered_and_has_a_picture(drawer: PartsDrawer) -> None:
    plan = store().plan
    made = {entry.make(plan)[1].KIND for entry in entries().values()}
    assert made | {MEASURED} == set(KINDS)
    assert set(drawer.things) == {*entries(), MEASURED} == set(PICTURES)
    forms = {p.form for p in (e.make(plan)[1] for e in entries().values()) if isinstance(p, Splitter)}
    assert forms == {"wilkinson", "resistive", "branch_line", "rat_race"}


@pytest.mark.parametrize("key", list(entries()))
@pytest.mark.parametrize("bare", [False, True])
def test_what_is_made_can_be_solved(key: str, bare: bool) -> None:
    plan = store().plan if not bare else edits.new_plan()
    plan, part = entries()[key].make(plan)
    plan, part_id = edits.added(plan, part, (0.0, 0.0))
    if key == "radio":
        plan = edits.removed(plan, ["radio"])
    assert solve(plan).mark.return_loss_db.size == 1
    assert plan.placed(part_id).part == part


def test_a_new_coax_is_a_quarter_wave_at_the_mark() -> None:
    plan, coax = entries()["coax"].make(store().plan)
    assert isinstance(coax, Coax)
    assert coax.cable == "50"
    assert coax.length_m == pytest.approx(C / 868e6 / 4, abs=0.05e-3)
    plan, coax = entries()["coax"].make(edits.new_plan())
    assert isinstance(coax, Coax)
    cable = plan.cables[coax.cable]
    assert (cable.z0_ohm, cable.velocity_factor) == (50, 0.66)
    assert coax.length_m == pytest.approx(0.66 * C / 868e6 / 4, abs=0.05e-3)
    assert cable.loss_db_per_m(868e6) > 0.3, "no cable without loss by accident"


def test_a_new_splitter_stands_in_the_middle_of_the_band() -> None:
    _, part = entries()["branch_line"].make(store().plan)
    assert part == Splitter(form="branch_line", centre_hz=870e6)


def test_double_click_and_enter_ask_for_a_part(qtbot: QtBot, drawer: PartsDrawer) -> None:
    with qtbot.waitSignal(drawer.asked) as asked:
        qtbot.mouseDClick(drawer.things["pad"], Qt.MouseButton.LeftButton)
    assert asked.args == ["pad"]
    drawer.things["coax"].setFocus()
    qtbot.keyClick(drawer.things["coax"], Qt.Key.Key_Down)
    assert QApplication.focusWidget() is drawer.things["tee"]
    with qtbot.waitSignal(drawer.asked) as asked:
        qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_Return)
    assert asked.args == ["tee"]


def test_the_measured_part_asks_for_a_file(qtbot: QtBot, drawer: PartsDrawer) -> None:
    with qtbot.waitSignal(drawer.file_asked), qtbot.assertNotEmitted(drawer.asked):
        qtbot.keyClick(drawer.things[MEASURED], Qt.Key.Key_Return)


def test_a_drag_carries_the_part(qtbot: QtBot, drawer: PartsDrawer) -> None:
    thing = drawer.things["antenna"]
    qtbot.mousePress(thing, Qt.MouseButton.LeftButton, pos=QPoint(20, 20))
    for x in (22, 60):
        place = QPoint(x, 20)
        moved = QMouseEvent(
            QEvent.Type.MouseMove,
            QPointF(place),
            QPointF(thing.mapToGlobal(place)),
            Qt.MouseButton.NoButton,
            Qt.MouseButton.LeftButton,
            Qt.KeyboardModifier.NoModifier,
        )
        QApplication.sendEvent(thing, moved)
        drags = thing.findChildren(QDrag)
        assert len(drags) == (1 if x == 60 else 0), "two pixels are no drag"
    assert drags[0].mimeData().data(PART_MIME).data() == b"antenna"


def test_the_drawer_folds_away(qtbot: QtBot, drawer: PartsDrawer) -> None:
    wide = drawer.width()
    qtbot.mouseClick(drawer.fold, Qt.MouseButton.LeftButton)
    assert drawer.folded
    assert drawer.width() < wide / 2
    assert drawer.fold.accessibleName() == "Show the parts drawer"
    qtbot.keyClick(drawer.fold, Qt.Key.Key_Space)
    assert not drawer.folded
    assert drawer.width() == wide


def test_names_in_the_drawer_fit(drawer: PartsDrawer) -> None:
    for look in (LIGHT, DARK):
        drawer.set_look(look)
        for thing in drawer.things.values():
            image = thing.grab().toImage()
            edge = [image.pixelColor(x, y).name() for x in (0, image.width() - 1) for y in range(30, image.height())]
            assert len(set(edge)) == 1, f"{thing.label} is cut off"
