"""What the window's actions do with parts that are there: tidy, splice, repeat a leg, begin, move, hold."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import replace

import numpy as np
import pytest
from PySide6.QtCore import QPointF, Qt, QTimer
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QInputDialog, QMessageBox
from pytestqt.qtbot import QtBot

from app.bench.hand import drawn
from app.editing.starters import STARTERS
from app.look import LIGHT
from app.panels.starter_dialog import StarterDialog
from app.window import Window
from feedlib import Plan, read_plan
from feedlib.assets_place import ASSETS
from feedlib.parts import Coax, Pad
from feedlib.plan import Placed


@pytest.fixture
def opened(qtbot: QtBot) -> Iterator[Callable[[Plan], Window]]:
    windows: list[Window] = []

    def open_window(plan: Plan) -> Window:
        window = Window(plan, None, look=LIGHT, remember=False)
        window.resize(1400, 900)
        window.show()
        qtbot.waitExposed(window)
        window.bench.fit()
        windows.append(window)
        return window

    yield open_window
    for window in windows:
        window.close_without_asking()
        window.deleteLater()


def example(name: str) -> Plan:
    return read_plan(ASSETS / "examples" / f"{name}.feedplan")


def drag(window: Window, start: QPointF, stop: QPointF) -> None:
    """A left drag on the bench, in bench units."""
    view, port = window.bench, window.bench.viewport()
    points = [view.mapFromScene(start + (stop - start) * part) for part in (0, 0.3, 0.7, 1)]
    QTest.mousePress(port, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier, points[0])
    for point in points[1:]:
        QTest.mouseMove(port, point)
        QApplication.processEvents()
    QTest.mouseRelease(port, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier, points[-1])


def test_tidy_lays_parts_out_and_changes_no_figure(opened: Callable[[Plan], Window]) -> None:
    plan = example("four-dipole-mast")
    heap = replace(plan, parts=tuple(replace(p, at=(12.0 * n, 0.0)) for n, p in enumerate(plan.parts)))
    window = opened(heap)
    before = window.store.answer
    assert before is not None
    window.actions_by_id["tidy"].trigger()
    sizes, _ = drawn(window.store.plan)
    boxes = [(p.id, *p.at, *sizes[p.id]) for p in window.store.plan.parts]
    for n, (one, x1, y1, w1, h1) in enumerate(boxes):
        for other, x2, y2, w2, h2 in boxes[n + 1 :]:
            apart = abs(x1 - x2) >= (w1 + w2) / 2 or abs(y1 - y2) >= (h1 + h2) / 2
            assert apart, (one, other)
    after = window.store.answer
    assert after is not None
    np.testing.assert_allclose(after.return_loss_db, before.return_loss_db, rtol=1e-9)
    window.store.stack.undo()
    assert window.store.plan == heap


def test_a_loose_part_held_over_a_join_is_put_into_it(opened: Callable[[Plan], Window]) -> None:
    plan = example("two-dipole-gateway")
    loose = replace(plan, parts=(*plan.parts, Placed("loose pad", Pad(loss_db=3.0), (-300.0, 400.0))))
    window = opened(loose)
    scene = window.bench.bench
    join = next(j for j in plan.joins if "radio" in (j[0].part, j[1].part))
    path = scene.joins[join].shape_line()
    drag(window, scene.parts["loose pad"].pos(), path.pointAtPercent(0.5))
    names = [{a.part, b.part} for a, b in window.store.plan.joins]
    assert {"radio", "loose pad"} in names
    assert {"loose pad", "feeder"} in names
    assert {"radio", "feeder"} not in names
    # 3 dB on the way there and 3 dB back: the return loss grows by 6 dB, whatever is behind
    assert window.store.answer is not None
    bare = opened(plan).store.answer
    assert bare is not None
    np.testing.assert_allclose(window.store.answer.return_loss_db - bare.return_loss_db, 6, atol=1e-9)


def test_the_same_leg_again_is_matched_and_joined(opened: Callable[[Plan], Window]) -> None:
    window = opened(example("two-dipole-gateway"))
    window.store.select(("north",))
    window.actions_by_id["again"].trigger()
    answer = window.store.answer
    assert answer is not None
    assert len(answer.antenna_ids) == 3
    share = answer.mark.antenna_share[0]
    assert share[answer.antenna_ids.index(window.store.selected[-1])] == pytest.approx(
        share[answer.antenna_ids.index("north")], rel=1e-9
    )
    sets = {p.part.matched_set for p in window.store.plan.parts if isinstance(p.part, Coax) and p.part.matched_set}
    assert sets
    window.store.stack.undo()
    assert len(window.store.plan.parts) == len(example("two-dipole-gateway").parts)


def test_every_starter_begins_a_plan_that_holds(opened: Callable[[Plan], Window], qtbot: QtBot) -> None:
    window = opened(example("two-dipole-gateway"))
    for row, starter in enumerate(STARTERS):
        dialog = StarterDialog(window, LIGHT, drawn, 145e6)
        qtbot.addWidget(dialog)
        dialog.starters.setCurrentRow(row)
        for name, field in dialog.rows.items():
            assert field.isEnabled() == (name in starter.asks)
        QTest.mouseClick(dialog.begin, Qt.MouseButton.LeftButton)
        assert dialog.plan is not None, (starter.key, dialog.refusal.text())
        window.store.open(dialog.plan, None)
        assert window.store.answer is not None
        assert window.store.answer.holds, starter.key


def test_a_starter_for_nonsense_is_refused_in_place(opened: Callable[[Plan], Window], qtbot: QtBot) -> None:
    dialog = StarterDialog(opened(example("two-dipole-gateway")), LIGHT, drawn, 145e6)
    qtbot.addWidget(dialog)
    dialog.frequency.setText("12 parsnips")
    QTest.mouseClick(dialog.begin, Qt.MouseButton.LeftButton)
    assert dialog.plan is None
    assert "12 parsnips" in dialog.refusal.text()


def test_a_plan_moves_to_another_frequency(opened: Callable[[Plan], Window]) -> None:
    plan = example("two-dipole-gateway")
    window = opened(plan)

    def answer() -> None:
        dialog = QApplication.activeModalWidget()
        assert isinstance(dialog, QInputDialog)
        dialog.setTextValue("434 MHz")
        dialog.accept()

    QTimer.singleShot(0, answer)
    window.actions_by_id["frequency"].trigger()
    moved = window.store.plan
    assert moved.band.marked_hz == 434e6
    for old, new in zip(plan.parts, moved.parts, strict=True):
        if isinstance(old.part, Coax) and isinstance(new.part, Coax):  # half the frequency, twice the length
            assert new.part.length_m == pytest.approx(2 * old.part.length_m, rel=1e-12)
    assert window.store.stack.undoText() == "Move to 434 MHz"


def test_a_frequency_that_is_none_is_refused(opened: Callable[[Plan], Window]) -> None:
    plan = example("two-dipole-gateway")
    window = opened(plan)
    said: list[str] = []

    def read_the_message() -> None:
        box = QApplication.activeModalWidget()
        assert isinstance(box, QMessageBox)
        said.append(box.text())
        box.accept()

    def answer() -> None:
        dialog = QApplication.activeModalWidget()
        assert isinstance(dialog, QInputDialog)
        dialog.setTextValue("soon")
        QTimer.singleShot(0, read_the_message)
        dialog.accept()

    QTimer.singleShot(0, answer)
    window.actions_by_id["frequency"].trigger()
    assert "soon" in said[0]
    assert window.store.plan is plan


def test_hold_keeps_the_answer_until_it_is_let_go(opened: Callable[[Plan], Window]) -> None:
    window = opened(example("two-dipole-gateway"))
    first = window.store.answer
    window.actions_by_id["hold"].trigger()
    window.store.select(("match north",))
    window.bench.turn_length(5)
    assert window.store.held is first
    assert window.store.answer is not first
    window.actions_by_id["let_go"].trigger()
    assert window.store.held is None


def test_every_action_has_words_and_no_two_share_a_key(opened: Callable[[Plan], Window]) -> None:
    window = opened(example("two-dipole-gateway"))
    keys: dict[str, str] = {}
    for name, action in window.actions_by_id.items():
        assert action.text().strip("&")
        for key in action.shortcuts():
            assert key.toString() not in keys, (name, keys[key.toString()])
            keys[key.toString()] = name
