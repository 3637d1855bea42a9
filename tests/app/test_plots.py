"""The plots as people meet them: real pointers and clicks on real widgets, values against hand arithmetic."""

import os
import subprocess
import sys
from functools import partial

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

import numpy as np
import pytest
from matplotlib.colors import to_hex
from PySide6.QtCore import QEvent, QPoint, Qt
from PySide6.QtWidgets import QApplication

from app.editing import edits
from app.look import DARK, LIGHT
from app.plots.currents import CurrentsPlot
from app.plots.match import MatchPlot
from app.plots.smith import SmithPlot
from feedlib.plan import Limits
from tests.app.plot_screen import (
    alone,
    at_reflection,
    at_value,
    click,
    drawn,
    line_of,
    on_a_tee,
    on_surface,
    painted,
    rows,
    shown,
    widths,
)
from tests.plans import Sketch, turned


@pytest.fixture
def show(qtbot):
    """Show a plot of a kind for a plan."""
    return partial(shown, qtbot)


# What the curves show


def test_return_loss_and_vswr_of_twice_the_impedance(show, qtbot):
    plot = show(MatchPlot, alone(100))  # a reflection of 1/3
    np.testing.assert_allclose(drawn(plot), np.full(101, 20 * np.log10(3)))
    assert plot.axes.tags[0].note.get_text() == "9.54"
    qtbot.mouseClick(plot.words.buttons["VSWR"], Qt.MouseButton.LeftButton)
    painted(plot)
    np.testing.assert_allclose(drawn(plot), np.full(101, 2.0))
    assert plot.axes.tags[0].note.get_text() == "2.00"
    assert plot.words.buttons["VSWR"].isChecked()
    assert not plot.words.buttons["return loss"].isChecked()


def test_a_perfect_match_and_none_at_all_are_drawn_at_the_end_of_the_scale(show, qtbot):
    plot = show(MatchPlot, alone(50))
    np.testing.assert_array_equal(drawn(plot), np.full(101, 60.0))
    assert plot.axes.tags[0].note.get_text() == "∞"
    shorted = show(MatchPlot, alone(0))
    qtbot.mouseClick(shorted.words.buttons["VSWR"], Qt.MouseButton.LeftButton)
    painted(shorted)
    np.testing.assert_array_equal(drawn(shorted), np.full(101, 20.0))


def test_phase_and_amplitude_from_the_middle(show, qtbot):
    # V/Z: 0 and -53.13 degrees, 1/50 and 1/100; so 26.57 to either side, and 3.01 dB.
    plot = show(CurrentsPlot, on_a_tee(50, 60 + 80j))
    half_deg = np.degrees(np.arctan2(4, 3)) / 2
    np.testing.assert_allclose(drawn(plot, 0), np.full(101, half_deg), atol=1e-9)
    np.testing.assert_allclose(drawn(plot, 1), np.full(101, -half_deg), atol=1e-9)
    qtbot.mouseClick(plot.words.buttons["amplitude"], Qt.MouseButton.LeftButton)
    painted(plot)
    np.testing.assert_allclose(drawn(plot, 0), np.full(101, 10 * np.log10(2)), atol=1e-9)
    np.testing.assert_allclose(drawn(plot, 1), np.full(101, -10 * np.log10(2)), atol=1e-9)
    assert [tag.name.get_text() for tag in plot.axes.tags] == ["A", "B"]


def test_smith_chart_shows_the_radio_and_the_port_through_which_the_wave_enters(show):
    plot = show(SmithPlot, on_a_tee(50, 100, 100))
    assert [trace.part_id for trace in plot.traces] == ["radio"]
    np.testing.assert_allclose(plot.traces[0].impedance_ohm, np.full(101, 25))
    plan = on_a_tee(100, 100)
    quarter_m = 299792458 / 865e6 / 4
    for now in (edits.changed_part(p, "leg A", length_m=quarter_m) for p in (plan, turned(plan, "leg A"))):
        plot.store.edit("another plan", now)
        plot.store.select(("leg A",))
        painted(plot)
        entered = plot.traces[1]
        assert entered.part_id == "leg A"
        # 100 ohm through a quarter wave of 50 ohm is 25 ohm; in the middle of the band: a reflection of -1/3.
        assert entered.gamma[50] == pytest.approx(-1 / 3, abs=1e-6)
        assert rows(line_of(plot.bundle, plot.look.ink), 101)[0, 50].real == pytest.approx(-1 / 3, abs=1e-6)


def test_the_limit_is_a_no_go_band_over_the_band_only(show, qtbot):
    plot = show(MatchPlot, alone(100, {"return_loss_db": 20}, sweep=True))
    below, above = plot.axes.no_go
    assert below.get_bbox().bounds == pytest.approx((860e6, 0, 10e6, 20))
    assert above.get_bbox().height == 0
    assert plot.axes.wash.get_bbox().bounds[:3:2] == pytest.approx((860e6, 10e6))
    qtbot.mouseClick(plot.words.buttons["VSWR"], Qt.MouseButton.LeftButton)
    painted(plot)
    assert below.get_bbox().height == 0
    assert above.get_bbox().y0 == pytest.approx(11 / 9)  # a reflection of 1/10
    currents = show(CurrentsPlot, on_a_tee(50, 50, limits={"phase_balance_deg": 5}))
    below, above = currents.axes.no_go
    assert (below.get_bbox().y1, above.get_bbox().y0) == (-2.5, 2.5)
    assert currents.axes.wash.get_bbox().width == 0


def test_antennas_without_current_have_no_curve_and_the_others_go_on(show):
    plan, _ = edits.added(on_a_tee(50, 50), on_a_tee(50).placed("A").part, (0, 0), "idle")
    plot = show(CurrentsPlot, plan)
    np.testing.assert_allclose(drawn(plot, 1), np.zeros(101), atol=1e-9)
    assert np.isnan(drawn(plot, 2)).all()
    smith = show(SmithPlot, plan)
    smith.store.select(("idle",))
    painted(smith)
    assert np.isnan(smith.traces[1].gamma).all()


def test_what_cannot_be_solved_leaves_one_sentence(show):
    for kind in (MatchPlot, CurrentsPlot, SmithPlot):
        plot = show(kind, on_a_tee(50, 50))
        assert plot.message.get_text() == ""
        plot.store.edit("Delete", edits.removed(plot.store.plan, ["radio"]))
        plot.store.solve_now()
        painted(plot)
        assert plot.message.get_text() == "Nothing to show: cannot be solved yet"
        assert list(plot.moving()) == [plot.message]
        plot.store.stack.undo()
        plot.store.solve_now()
        painted(plot)
        assert plot.message.get_text() == ""
    plan = edits.removed(on_a_tee(50, 50), ["A", "B"])
    assert show(CurrentsPlot, plan).message.get_text() == "Nothing to show: no antenna in the plan"


def test_one_frequency_is_drawn_as_dots(show):
    sketch = Sketch(868e6)
    sketch.join(f"{sketch.add('radio', 'radio')}:1", f"{sketch.antenna(100, 'A')}:1")
    plot = show(MatchPlot, sketch.plan())
    assert plot.axes.bundle.lines[0].get_marker() == "o"
    low_hz, high_hz = plot.axes.axes.get_xlim()
    assert low_hz < 868e6 < high_hz


def test_names_are_shown_as_written_and_followed_without_a_new_answer(show):
    plot = show(CurrentsPlot, on_a_tee(50, 100))
    answer = plot.store.answer
    plot.store.edit("Name", edits.labelled(plot.store.plan, "A", label="$x_1$ up\nhigh"))
    painted(plot)
    assert plot.store.answer is answer
    name = plot.axes.tags[0].name
    assert name.get_text() == "$x_1$ up hi…"


def test_names_of_equal_curves_are_pushed_apart(show):
    plot = show(CurrentsPlot, on_a_tee(50, 50, 50, 50))
    heights = sorted(tag.name.get_position()[1] for tag in plot.axes.tags)
    assert np.diff(heights).min() > 12
    assert plot.axes.tags[0].name.get_position()[0] > plot.axes.axes.bbox.x1


def test_many_antennas_carry_names_only_where_they_stand_out(show):
    plot = show(CurrentsPlot, on_a_tee(*range(50, 60)))
    assert not any(curve.labelled for curve in plot.axes.curves)
    plot.store.select(("C",))
    painted(plot)
    assert [curve.name for curve in plot.axes.curves if curve.labelled] == ["C"]


# Pointer and store


def test_a_click_in_a_plot_moves_the_mark_and_a_drag_is_one_act(show, qtbot):
    plot = show(MatchPlot, alone(100))
    before = plot.store.plan
    click(qtbot, plot, at_value(plot, 864e6, 2.0))
    assert plot.store.plan.band.marked_hz == pytest.approx(864e6, abs=5e4)
    assert plot.store.plan.band.marked_hz % 10e3 == 0
    painted(plot)
    assert plot.axes.mark.get_xdata()[0] == plot.store.plan.band.marked_hz
    qtbot.mousePress(plot.canvas, Qt.MouseButton.LeftButton, pos=at_value(plot, 865e6, 2.0))
    for frequency_hz in (866e6, 867e6, 990e6):
        qtbot.mouseMove(plot.canvas, at_value(plot, frequency_hz, 2.0))
    qtbot.mouseRelease(plot.canvas, Qt.MouseButton.LeftButton, pos=at_value(plot, 867e6, 2.0))
    assert plot.store.plan.band.marked_hz == 870e6  # not beyond what is swept
    qtbot.mouseMove(plot.canvas, at_value(plot, 862e6, 2.0))
    assert plot.store.plan.band.marked_hz == 870e6
    plot.store.stack.undo()
    assert plot.store.plan == before


def test_a_click_beside_the_axes_does_nothing(show, qtbot):
    plot = show(MatchPlot, alone(100))
    click(qtbot, plot, QPoint(5, 60))
    assert not plot.store.stack.canUndo()


def test_a_click_on_a_curve_or_its_name_selects_the_antenna(show, qtbot):
    plot = show(CurrentsPlot, on_a_tee(50, 60 + 80j))
    mark_hz = plot.store.plan.band.marked_hz
    click(qtbot, plot, at_value(plot, 863e6, drawn(plot, 1)[30]))
    assert plot.store.selected == ("B",)
    x, y = plot.axes.tags[0].name.get_position()
    click(qtbot, plot, on_surface(plot, x + 3, y))
    assert plot.store.selected == ("A",)
    assert plot.store.plan.band.marked_hz == mark_hz
    click(qtbot, plot, at_value(plot, 863e6, 0))
    assert plot.store.selected == ("A",)
    assert plot.store.plan.band.marked_hz == pytest.approx(863e6, abs=5e4)


def test_the_pointer_on_a_curve_hovers_its_antenna_and_reads_all(show, qtbot):
    plot = show(CurrentsPlot, on_a_tee(50, 60 + 80j))
    qtbot.mouseMove(plot.canvas, at_value(plot, 863e6, drawn(plot, 1)[30]))
    painted(plot)
    assert plot.store.hovered == "B"
    assert widths(plot)[1] > widths(plot)[0]
    assert plot.readout.text.get_text().splitlines()[1:] == ["A  +26.6°", "B  −26.6°"]
    assert plot.readout.text.get_text().startswith("863")
    qtbot.mouseMove(plot.canvas, at_value(plot, 863e6, 0))
    painted(plot)
    assert plot.store.hovered is None
    assert widths(plot)[1] == widths(plot)[0]
    assert plot.readout.text in list(plot.moving())
    QApplication.sendEvent(plot.canvas, QEvent(QEvent.Type.Leave))
    painted(plot)
    assert plot.readout.text not in list(plot.moving())


def test_a_leg_that_is_hovered_over_makes_its_antenna_stand_out(show):
    plot = show(CurrentsPlot, on_a_tee(50, 100, 200))
    for part_id, expected in (("leg B", [False, True, False]), ("T1", [False] * 3), ("A", [True, False, False])):
        plot.store.hover(part_id)
        painted(plot)
        assert [curve.stands_out for curve in plot.axes.curves] == expected
        assert [width > min(widths(plot)) for width in widths(plot)] == expected


def test_the_smith_chart_reads_at_the_pointer_and_selects(show, qtbot):
    plot = show(SmithPlot, alone(100))
    qtbot.mouseMove(plot.canvas, at_reflection(plot, 1 / 3))
    painted(plot)
    assert plot.store.hovered == "radio"
    assert plot.readout.text.get_text().splitlines()[1] == "100 + j0 Ω"
    click(qtbot, plot, at_reflection(plot, 1 / 3))
    assert plot.store.selected == ("radio",)
    click(qtbot, plot, at_reflection(plot, -0.5j))
    assert plot.store.selected == ("radio",)
    assert not plot.store.stack.canUndo()


# How they are drawn


def test_a_small_change_moves_the_curve_before_the_same_background(show):
    plot = show(MatchPlot, alone(100))
    background, limits = plot.canvas.background, plot.axes.axes.get_ylim()
    plot.store.edit("Turn", edits.changed_part(plot.store.plan, "A", impedance=alone(101).placed("A").part.impedance))
    plot.store.solve_now()
    painted(plot)
    np.testing.assert_allclose(drawn(plot), np.full(101, 20 * np.log10(151 / 51)))
    assert plot.canvas.background is background
    assert plot.axes.axes.get_ylim() == limits


def test_the_axis_grows_at_once_and_gives_room_back_when_settled(show, qtbot):
    plot = show(MatchPlot, alone(100))
    assert plot.axes.axes.get_ylim()[1] < 20
    background = plot.canvas.background
    plot.store.edit("Turn", edits.changed_part(plot.store.plan, "A", impedance=alone(51).placed("A").part.impedance))
    plot.store.solve_now()
    painted(plot)
    high = plot.axes.axes.get_ylim()[1]
    assert high > 20 * np.log10(101)
    assert plot.canvas.background is not background
    plot.store.stack.undo()
    plot.store.solve_now()
    painted(plot)
    assert plot.axes.axes.get_ylim()[1] == high
    qtbot.waitUntil(lambda: plot.axes.axes.get_ylim()[1] < 20)


def test_a_hidden_plot_is_left_behind_until_it_is_shown(show):
    plot = show(MatchPlot, alone(100))
    plot.hide()
    plot.store.edit("Turn", edits.changed_part(plot.store.plan, "A", impedance=alone(200).placed("A").part.impedance))
    plot.store.solve_now()
    QApplication.processEvents()
    np.testing.assert_allclose(drawn(plot), np.full(101, 20 * np.log10(3)))
    plot.show()
    painted(plot)
    np.testing.assert_allclose(drawn(plot), np.full(101, 20 * np.log10(250 / 150)))


@pytest.mark.parametrize("kind", [MatchPlot, CurrentsPlot, SmithPlot])
def test_another_look_recolours_paper_curves_and_letters(show, kind):
    plot = show(kind, on_a_tee(50, 100))
    corner = QPoint(2, plot.height() - 2)
    for look in (LIGHT, DARK, LIGHT):
        plot.set_look(look)
        painted(plot)
        assert plot.grab().toImage().pixelColor(corner).name() == look.paper
        bundle, tags = (plot.bundle, plot.tags) if kind is SmithPlot else (plot.axes.bundle, plot.axes.tags)
        expected = look.curve(0) if kind is CurrentsPlot else look.impedance[1]
        assert line_of(bundle, expected).get_linewidth() > 0
        assert to_hex(tags[0].dot.get_color()) == expected
        assert to_hex(plot.readout.text.get_color()) == look.ink


def test_limits_taken_away_are_no_longer_drawn(show):
    plot = show(SmithPlot, alone(100, {"return_loss_db": 20}))
    radius = np.abs(plot.limit.get_xy() @ [1, 1j])
    np.testing.assert_allclose(radius, 0.1)
    plot.store.edit("Limit", edits.with_limit(plot.store.plan, "return_loss_db", None))
    plot.store.solve_now()
    painted(plot)
    assert plot.store.plan.limits == Limits()
    assert not plot.limit.get_visible()


def test_importing_the_plots_brings_no_pyplot():
    code = "import sys, app.plots.row; sys.exit('matplotlib.pyplot' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
