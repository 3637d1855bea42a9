"""Verdict strip and frequency rail under real clicks, keys and drags."""

from __future__ import annotations

import math

import pytest
from PySide6.QtCore import QEvent, QPoint, Qt
from PySide6.QtGui import QHelpEvent
from PySide6.QtWidgets import QApplication, QToolTip
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.look import DARK, LIGHT
from app.panels.rail import FrequencyRail
from app.panels.verdicts import VerdictItem, VerdictStrip, judged
from app.store import Store
from feedlib.plan import Port
from tests.app.two_legs import store

# The strip. 25 ohm at a 50 ohm radio: return loss 20 log10(3) = 9.54 dB. Phase: 36 degrees at 868 MHz, so 36.5 at 880.


def strip_on(qtbot: QtBot, shown: Store, width: int = 1100) -> VerdictStrip:
    strip = VerdictStrip(shown, LIGHT)
    qtbot.addWidget(strip)
    strip.resize(width, strip.height())
    strip.show()
    with qtbot.waitActive(strip):
        strip.activateWindow()
    return strip


def item(strip: VerdictStrip, name: str) -> VerdictItem:
    return next(i for i in strip.items if i.shown.name == name)


def test_every_limit_with_its_worst_figure(qtbot: QtBot) -> None:
    strip = strip_on(qtbot, store())
    told = [(i.shown.name, i.shown.figure, i.shown.wants, i.shown.state) for i in strip.items]
    assert told == [
        ("Return loss", "9.54 dB", "≥ 9 dB", "near"),
        ("Amplitude balance", "0.00 dB", "≤ 0.5 dB", "holds"),
        ("Phase balance", f"{36 * 880 / 868:.1f}°", "≤ 40°", "near"),
        ("Harness loss", "0.00 dB", "", "unknown"),
    ]
    assert item(strip, "Phase balance").accessibleName() == (
        "Phase balance 36.5° at 880 MHz, wants at most 40°, holds, near its limit"
    )
    assert item(strip, "Harness loss").accessibleName().endswith("no limit")


@pytest.mark.parametrize(
    ("limit", "worst", "wanted", "state"),
    [
        ("return_loss_db", 19.99, 20.0, "fails"),
        ("return_loss_db", 20.0, 20.0, "near"),
        ("return_loss_db", 21.9, 20.0, "near"),
        ("return_loss_db", 22.1, 20.0, "holds"),
        ("phase_balance_deg", 5.01, 5.0, "fails"),
        ("phase_balance_deg", 4.6, 5.0, "near"),
        ("phase_balance_deg", 4.4, 5.0, "holds"),
        ("isolation_db", math.inf, 20.0, "holds"),
        ("amplitude_balance_db", math.inf, 0.5, "fails"),
        ("harness_loss_db", math.nan, 1.0, "fails"),
        ("harness_loss_db", 0.0, 0.0, "holds"),
    ],
)
def test_near_is_within_a_tenth_of_the_limit(limit: str, worst: float, wanted: float, state: str) -> None:
    assert judged(limit, worst, wanted) == state


def test_a_click_goes_to_the_frequency_and_the_part_that_decide(qtbot: QtBot) -> None:
    shown = store()
    strip = strip_on(qtbot, shown)
    qtbot.mouseClick(item(strip, "Phase balance"), Qt.MouseButton.LeftButton)
    assert shown.plan.band.mark_hz == 880e6
    assert shown.selected == ("B",)
    assert shown.stack.undoText() == "Move the mark"
    qtbot.mouseClick(item(strip, "Return loss"), Qt.MouseButton.LeftButton)
    assert shown.selected == ("radio",)


def test_the_antenna_that_stands_out_decides(qtbot: QtBot) -> None:
    shown = store()
    plan = edits.changed_part(shown.plan, "T1", ports=4)
    antenna = plan.placed("A").part
    plan, third = edits.added(plan, antenna, (0.0, 0.0))
    leg = plan.placed("leg B").part
    plan, long = edits.added(plan, leg, (0.0, 0.0))
    for a, b in (("T1:4", f"{long}:1"), (f"{long}:2", f"{third}:1")):
        (part_a, n_a), (part_b, n_b) = a.split(":"), b.split(":")
        plan = edits.joined(plan, Port(part_a, int(n_a)), Port(part_b, int(n_b)))
    shown.edit("a third", plan)  # B and the third lag by 36 degrees: A is the odd one
    strip = strip_on(qtbot, shown)
    qtbot.mouseClick(item(strip, "Phase balance"), Qt.MouseButton.LeftButton)
    assert shown.selected == ("A",)


def test_loss_and_isolation_lead_to_what_makes_them(qtbot: QtBot) -> None:
    lossy = {"z0_ohm": 50, "velocity_factor": 1, "dielectric_db_per_100m": 0.1}
    shown = store(cables={"50": lossy}, limits={"harness_loss_db": 1, "isolation_db": 20})
    strip = strip_on(qtbot, shown)
    qtbot.mouseClick(item(strip, "Harness loss"), Qt.MouseButton.LeftButton)
    assert shown.selected == ("leg B",), "both legs see the same, the longer one loses more"
    qtbot.mouseClick(item(strip, "Isolation"), Qt.MouseButton.LeftButton)
    assert shown.selected == ("A", "B")


def test_keys_reach_the_verdicts(qtbot: QtBot) -> None:
    shown = store()
    strip = strip_on(qtbot, shown)
    strip.items[0].setFocus()
    qtbot.keyClick(strip.items[0], Qt.Key.Key_Tab)
    qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
    assert QApplication.focusWidget() is item(strip, "Phase balance")
    qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_Return)
    assert shown.selected == ("B",)


def test_a_plan_that_cannot_be_solved_says_why(qtbot: QtBot) -> None:
    shown = store()
    strip = strip_on(qtbot, shown)
    shown.edit("unknown cable", edits.changed_part(shown.plan, "leg B", cable="lost"))
    (only,) = strip.items
    assert only.shown.state == "fails"
    assert "lost" in only.shown.wants
    qtbot.mouseClick(only, Qt.MouseButton.LeftButton)
    assert shown.selected == ("leg B",)
    shown.stack.undo()
    assert len(strip.items) == 4


def test_the_strip_follows_the_limits(qtbot: QtBot) -> None:
    shown = store()
    strip = strip_on(qtbot, shown)
    shown.edit("limits", edits.with_limit(shown.plan, "phase_balance_deg", 30.0))
    assert item(strip, "Phase balance").shown.state == "fails"
    shown.edit("limits", edits.with_limit(shown.plan, "phase_balance_deg", None))
    assert item(strip, "Phase balance").shown.state == "unknown"
    assert item(strip, "Phase balance").shown.figure == "36.5°"


def test_all_verdicts_fit_a_small_window(qtbot: QtBot) -> None:
    limits = dict.fromkeys(("return_loss_db", "amplitude_balance_db", "phase_balance_deg"), 1)
    shown = store(limits={**limits, "harness_loss_db": 1, "isolation_db": 20})
    strip = strip_on(qtbot, shown, width=900)
    assert len(strip.items) == 5
    assert strip.width() == 900
    for verdict in strip.items:
        assert verdict.geometry().right() < 900
        assert verdict.width() >= verdict.minimumSizeHint().width()


# The rail


def rail_on(qtbot: QtBot, shown: Store) -> FrequencyRail:
    rail = FrequencyRail(shown, LIGHT)
    qtbot.addWidget(rail)
    rail.resize(900, rail.height())
    rail.show()
    with qtbot.waitActive(rail):
        rail.activateWindow()
    return rail


def at(rail: FrequencyRail, frequency_hz: float, off_px: int = 0) -> QPoint:
    return QPoint(round(rail.x_at(frequency_hz)) + off_px, 20)


def test_a_click_moves_the_mark(qtbot: QtBot) -> None:
    shown = store()
    rail = rail_on(qtbot, shown)
    qtbot.mouseClick(rail, Qt.MouseButton.LeftButton, pos=at(rail, 875e6))
    mark_hz = shown.plan.band.marked_hz
    pixel_hz = 20e6 / (rail.x_at(880e6) - rail.x_at(860e6))
    assert mark_hz == pytest.approx(875e6, abs=1.5 * pixel_hz)
    assert mark_hz % 10e3 == 0, "a round frequency"


def test_a_drag_is_one_step_and_ends_at_the_edges(qtbot: QtBot) -> None:
    shown = store()
    rail = rail_on(qtbot, shown)
    qtbot.mousePress(rail, Qt.MouseButton.LeftButton, pos=at(rail, 868e6))
    for frequency_hz in (866e6, 864e6, 861e6):
        qtbot.mouseMove(rail, at(rail, frequency_hz))
    qtbot.mouseMove(rail, QPoint(2, 20))
    assert shown.plan.band.mark_hz == 860e6
    qtbot.mouseMove(rail, QPoint(rail.width() - 2, 20))
    qtbot.mouseRelease(rail, Qt.MouseButton.LeftButton, pos=QPoint(rail.width() - 2, 20))
    assert shown.plan.band.mark_hz == 880e6
    assert shown.stack.count() == 1
    shown.stack.undo()
    assert shown.plan.band.mark_hz == 868e6


def test_channels_hold_the_knob_within_five_pixels(qtbot: QtBot) -> None:
    shown = store(channels=[{"name": "<i>up</i>", "hz": 866.123456e6}])
    rail = rail_on(qtbot, shown)
    qtbot.mouseClick(rail, Qt.MouseButton.LeftButton, pos=at(rail, 866.123456e6, 4))
    assert shown.plan.band.mark_hz == 866.123456e6
    assert rail.accessibleDescription() == "<i>up</i>: 866.123456 MHz"
    qtbot.mouseClick(rail, Qt.MouseButton.LeftButton, pos=at(rail, 866.123456e6, 8))
    assert shown.plan.band.mark_hz != 866.123456e6
    place = at(rail, 866.123456e6, -3)
    QApplication.sendEvent(rail, QHelpEvent(QEvent.Type.ToolTip, place, rail.mapToGlobal(place)))
    assert "&lt;i&gt;up&lt;/i&gt;: 866.123456 MHz" in QToolTip.text()
    QToolTip.hideText()


@pytest.mark.parametrize(
    ("key", "mark_hz"),
    [
        (Qt.Key.Key_Right, 869e6),
        (Qt.Key.Key_Left, 867e6),
        (Qt.Key.Key_Up, 869e6),
        (Qt.Key.Key_Down, 867e6),
        (Qt.Key.Key_PageUp, 878e6),
        (Qt.Key.Key_PageDown, 860e6),  # ten steps down would leave the band
        (Qt.Key.Key_Home, 860e6),
        (Qt.Key.Key_End, 880e6),
    ],
)
def test_keys_step_along_the_grid(qtbot: QtBot, key: Qt.Key, mark_hz: float) -> None:
    shown = store()  # 21 points over 20 MHz: 1 MHz a step
    rail = rail_on(qtbot, shown)
    rail.setFocus()
    qtbot.keyClick(rail, key)
    assert shown.plan.band.mark_hz == mark_hz


@pytest.mark.parametrize(
    ("key", "mark_hz"),
    [
        (Qt.Key.Key_Right, 869e6),
        (Qt.Key.Key_PageUp, 878e6),
        (Qt.Key.Key_PageDown, 858e6),
        (Qt.Key.Key_Home, 840e6),
        (Qt.Key.Key_End, 905e6),
    ],
)
def test_keys_step_along_a_sweep_and_to_a_channel_beyond_it(qtbot: QtBot, key: Qt.Key, mark_hz: float) -> None:
    sweep = {"start_hz": 840e6, "stop_hz": 900e6, "points": 61}  # 1 MHz a step
    shown = store(sweep=sweep, channels=[{"name": "far", "hz": 905e6}])
    qtbot.keyClick(rail_on(qtbot, shown), key)
    assert shown.plan.band.mark_hz == mark_hz


def test_keys_stop_at_a_channel_between_two_points(qtbot: QtBot) -> None:
    shown = store(channels=[{"name": "up", "hz": 868.3e6}])
    rail = rail_on(qtbot, shown)
    for mark_hz in (868.3e6, 869e6):
        qtbot.keyClick(rail, Qt.Key.Key_Right)
        assert shown.plan.band.mark_hz == mark_hz


@pytest.mark.parametrize(("key", "mark_hz"), [(Qt.Key.Key_Right, 869e6), (Qt.Key.Key_Left, 868e6)])
def test_the_first_step_goes_to_the_next_point(qtbot: QtBot, key: Qt.Key, mark_hz: float) -> None:
    shown = store()
    shown.edit("between two points", edits.marked(shown.plan, 868.4e6))
    rail = rail_on(qtbot, shown)
    qtbot.keyClick(rail, key)
    assert shown.plan.band.mark_hz == mark_hz


def test_the_line_runs_over_the_sweep(qtbot: QtBot) -> None:
    shown = store(sweep={"start_hz": 840e6, "stop_hz": 900e6, "points": 61})
    rail = rail_on(qtbot, shown)
    assert rail.x_at(840e6) < rail.x_at(860e6) < rail.x_at(880e6) < rail.x_at(900e6)
    qtbot.keyClick(rail, Qt.Key.Key_Home)
    assert shown.plan.band.mark_hz == 840e6
    band = rail.grab().toImage()
    inside, outside = (band.pixelColor(round(rail.x_at(f)), 18).name() for f in (870e6, 890e6))
    assert inside == LIGHT.impedance[1], "the band is the thick part"
    assert outside != inside


def test_assistive_tools_read_and_set_the_value(qtbot: QtBot) -> None:
    shown = store()
    rail = rail_on(qtbot, shown)
    assert (rail.minimum(), rail.value(), rail.maximum()) == (860_000, 868_000, 880_000)
    assert rail.accessibleDescription() == "868 MHz"
    rail.setValue(871_000)
    assert shown.plan.band.mark_hz == 871e6


def test_one_frequency_is_a_rail_too(qtbot: QtBot) -> None:
    shown = store(band={"start_hz": 868e6, "stop_hz": 868e6, "points": 1})
    rail = rail_on(qtbot, shown)
    qtbot.mouseClick(rail, Qt.MouseButton.LeftButton, pos=QPoint(400, 20))
    qtbot.keyClick(rail, Qt.Key.Key_Right)
    assert shown.plan.band.mark_hz == 868e6
    rail.set_look(DARK)
    assert not rail.grab().isNull()
