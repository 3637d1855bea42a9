"""The held answer behind the live one: real widgets, values against hand arithmetic, pixels where pixels matter."""

from dataclasses import replace
from functools import partial

import numpy as np
import pytest
from matplotlib.colors import to_hex
from matplotlib.transforms import Bbox
from PySide6.QtCore import QPoint, QRect, Qt
from PySide6.QtGui import QColor, QImage

from app.editing import edits
from app.look import DARK, LIGHT, blend
from app.plots.bundle import Bundle
from app.plots.currents import CurrentsPlot
from app.plots.figure import Plot
from app.plots.held import PALE
from app.plots.match import MatchPlot
from app.plots.smith import SmithPlot
from feedlib.plan import Plan
from tests.app.plot_screen import BAND, alone, at_value, changed, drawn, line_of, on_a_tee, painted, rows, shown
from tests.plans import Sketch

QUARTER_M = 299_792_458 / 865e6 / 4
HALF_DEG = np.degrees(np.arctan2(4, 3)) / 2
"""Half of what 60 + 80j lags behind 50 ohm at one voltage."""


def through_75_ohm(z_ohm: complex = 100) -> Plan:
    """An antenna behind 75 ohm coax without a length; a quarter of a wave of it shows 5625/Z in the middle."""
    sketch = Sketch(**BAND, mark_hz=868e6)
    sketch.add("radio", "radio")
    sketch.join("radio:1", f"{sketch.coax(0.0, 75, 'leg')}:1", "leg:2", f"{sketch.antenna(z_ohm, 'A')}:1")
    return sketch.plan()


@pytest.fixture
def show(qtbot):
    """Show a plot of a kind for a plan."""
    return partial(shown, qtbot)


def hold(plot: Plot) -> None:
    plot.store.hold()
    painted(plot)


def let_go(plot: Plot) -> None:
    plot.store.let_go()
    painted(plot)


def turn(plot: Plot, part_id: str, by_m: float) -> None:
    changed(plot, edits.turned_length(plot.store.plan, [part_id], by_m))


def pale(plot: Plot, colour: str) -> str:
    return blend(plot.look.paper, colour, PALE)


def held(plot: Plot, colour: str, points: int = 101) -> np.ndarray:
    """x + jy of the one held curve in the pale form of a colour."""
    bundle = plot.held.bundle if isinstance(plot, SmithPlot) else plot.axes.held.bundle
    (row,) = rows(line_of(bundle, pale(plot, colour)), points)
    return row


def held_colours(bundle: Bundle) -> list[str]:
    return [to_hex(line.get_color()) for line in bundle.lines if line.get_visible()]


def picture(plot: Plot) -> QImage:
    return plot.canvas.grab().toImage()


def nearest_to(image: QImage, at: QPoint, colour: str) -> int:
    """How far the pixel most like a colour is from it, of those around a place; 0 to 255."""
    wanted = QColor(colour).getRgb()[:3]
    around = (image.pixelColor(at.x() + x, at.y() + y).getRgb()[:3] for x in (-1, 0, 1) for y in (-2, -1, 0, 1, 2))
    return min(max(abs(a - b) for a, b in zip(found, wanted, strict=True)) for found in around)


# What the held curves show


def test_a_held_match_stands_while_a_length_is_turned_and_goes_when_let_go(show, qtbot):
    plot = show(MatchPlot, through_75_ohm())
    before, colour = picture(plot), plot.look.impedance[1]
    hold(plot)
    turn(plot, "leg", QUARTER_M)
    # 100 ohm: a reflection of 1/3; 5625/100 ohm: of 1/17.
    assert drawn(plot)[50] == pytest.approx(20 * np.log10(17))
    np.testing.assert_allclose(held(plot, colour).imag, np.full(101, 20 * np.log10(3)))
    np.testing.assert_allclose(held(plot, colour).real, np.linspace(860e6, 870e6, 101))
    for frequency_hz in (861.3e6, 864.7e6):
        at = at_value(plot, frequency_hz, 20 * np.log10(3))
        assert nearest_to(picture(plot), at, pale(plot, colour)) < 30 < nearest_to(before, at, pale(plot, colour))
    qtbot.mouseClick(plot.words.buttons["VSWR"], Qt.MouseButton.LeftButton)
    painted(plot)
    assert drawn(plot)[50] == pytest.approx(9 / 8)
    np.testing.assert_allclose(held(plot, colour).imag, np.full(101, 2.0))
    qtbot.mouseClick(plot.words.buttons["return loss"], Qt.MouseButton.LeftButton)
    let_go(plot)
    assert held_colours(plot.axes.held.bundle) == []
    assert not plot.axes.held.word.get_visible()
    turn(plot, "leg", -QUARTER_M)
    plot.settle()
    painted(plot)
    assert picture(plot) == before


def test_held_currents_are_those_of_the_same_antennas(show, qtbot):
    plot = show(CurrentsPlot, on_a_tee(50, 60 + 80j))
    hold(plot)
    changed(plot, edits.changed_part(plot.store.plan, "B", impedance=alone(200).placed("A").part.impedance))
    for number, half_deg in enumerate((HALF_DEG, -HALF_DEG)):
        np.testing.assert_allclose(drawn(plot, number), np.zeros(101), atol=1e-9)
        np.testing.assert_allclose(held(plot, plot.look.curve(number)).imag, np.full(101, half_deg))
    qtbot.mouseClick(plot.words.buttons["amplitude"], Qt.MouseButton.LeftButton)
    painted(plot)
    for number, share in enumerate((1, -1)):
        np.testing.assert_allclose(drawn(plot, number), np.full(101, share * 10 * np.log10(4)))
        np.testing.assert_allclose(held(plot, plot.look.curve(number)).imag, np.full(101, share * 10 * np.log10(2)))


def test_a_held_antenna_that_is_gone_is_left_out_and_the_others_keep_their_colour(show):
    plot = show(CurrentsPlot, on_a_tee(50, 60 + 80j, 50))
    hold(plot)
    changed(plot, edits.removed(plot.store.plan, ["A", "leg A"]))
    assert [curve.part_id for curve in plot.axes.curves] == ["B", "C"]
    assert held_colours(plot.axes.held.bundle) == [pale(plot, plot.axes.curves[n].colour) for n in (0, 1)]
    np.testing.assert_allclose(held(plot, plot.axes.curves[0].colour).imag, np.full(101, -HALF_DEG))
    np.testing.assert_allclose(held(plot, plot.axes.curves[1].colour).imag, np.full(101, HALF_DEG))
    plot.store.stack.undo()
    plot.store.solve_now()
    painted(plot)
    assert len(held_colours(plot.axes.held.bundle)) == 3


def test_an_antenna_that_is_new_has_no_held_curve(show):
    plot = show(CurrentsPlot, on_a_tee(50, 50))
    hold(plot)
    plan, _ = edits.added(plot.store.plan, plot.store.plan.placed("A").part, (0, 0), "new")
    changed(plot, plan)
    assert len(plot.axes.curves) == 3
    assert held_colours(plot.axes.held.bundle) == [pale(plot, plot.look.curve(n)) for n in (0, 1)]


def test_the_smith_chart_holds_the_radio_and_the_selected_part_if_it_was_there(show):
    plot = show(SmithPlot, through_75_ohm())
    hold(plot)
    turn(plot, "leg", QUARTER_M)
    radio, other = plot.look.impedance[1], plot.look.ink
    (live,) = rows(line_of(plot.bundle, radio), 101)
    assert live[50] == pytest.approx(1 / 17)
    np.testing.assert_allclose(held(plot, radio), np.full(101, 1 / 3), atol=1e-12)
    plot.store.hover("leg")
    painted(plot)
    assert held_colours(plot.held.bundle) == [pale(plot, radio)]
    plot.store.select(("leg",))
    painted(plot)
    assert set(held_colours(plot.held.bundle)) == {pale(plot, radio), pale(plot, other)}
    np.testing.assert_allclose(held(plot, other), np.full(101, 1 / 3), atol=1e-12)
    plan, new = edits.added(plot.store.plan, plot.store.plan.placed("A").part, (0, 0), "new")
    changed(plot, plan)
    plot.store.select((new,))
    painted(plot)
    assert held_colours(plot.held.bundle) == [pale(plot, radio)]


def test_what_is_held_is_shown_over_the_reference_of_the_chart(show):
    plot = show(SmithPlot, through_75_ohm())
    hold(plot)
    changed(plot, replace(plot.store.plan, reference_ohm=100.0))
    np.testing.assert_allclose(held(plot, plot.look.impedance[1]), np.zeros(101), atol=1e-12)


def test_held_curves_keep_their_own_frequencies_and_end_with_the_axes(show):
    plot = show(MatchPlot, through_75_ohm())
    hold(plot)
    changed(plot, edits.with_band(plot.store.plan, start_hz=865e6, stop_hz=885e6, points=41, mark_hz=868e6))
    assert plot.axes.axes.get_xlim() == (865e6, 885e6)
    colour = plot.look.impedance[1]
    np.testing.assert_allclose(held(plot, colour).real, np.linspace(860e6, 870e6, 101))
    assert drawn(plot).size == 41
    end, box = plot.axes.axes.transData.transform((870e6, 9.54))[0], plot.axes.axes.bbox
    assert min(abs(edge - end) for edge in plot.axes.held.word.get_window_extent().intervalx) < 8
    with_it = picture(plot)
    let_go(plot)
    without = picture(plot)
    left = QRect(0, 0, int(box.x0) - 1, with_it.height())
    assert with_it.copy(left) == without.copy(left)
    assert with_it != without


def test_what_cannot_be_solved_does_not_let_go(show):
    plot = show(MatchPlot, through_75_ohm())
    hold(plot)
    changed(plot, edits.removed(plot.store.plan, ["radio"]))
    assert plot.message.get_text().startswith("Nothing to show")
    np.testing.assert_allclose(held(plot, plot.look.impedance[1]).imag, np.full(101, 20 * np.log10(3)))


def test_another_plan_is_opened_with_nothing_held(show):
    plot = show(MatchPlot, through_75_ohm())
    hold(plot)
    plot.store.open(alone(200), None)
    painted(plot)
    assert held_colours(plot.axes.held.bundle) == []


def test_the_readout_of_the_match_says_what_is_held_there(show, qtbot):
    plot = show(MatchPlot, through_75_ohm())
    hold(plot)
    turn(plot, "leg", QUARTER_M)
    qtbot.mouseMove(plot.canvas, at_value(plot, 865e6, 5.0))
    painted(plot)
    assert plot.readout.text.get_text().splitlines()[1:] == ["24.6 dB", "held 9.54 dB"]
    changed(plot, edits.with_band(plot.store.plan, start_hz=871e6, stop_hz=881e6, mark_hz=872e6))
    assert "held" not in plot.readout.text.get_text()
    changed(plot, edits.with_band(plot.store.plan, start_hz=860e6, stop_hz=870e6, mark_hz=868e6))
    let_go(plot)
    assert plot.readout.text.get_text().splitlines()[1:] == ["24.6 dB"]


# How they are drawn


@pytest.mark.parametrize("kind", [MatchPlot, CurrentsPlot, SmithPlot])
def test_held_curves_are_part_of_what_stands_still(show, kind):
    plot = show(kind, on_a_tee(50, 60 + 80j, limits={"return_loss_db": 20}))
    empty = plot.canvas.background
    hold(plot)
    background = plot.canvas.background
    assert background is not empty
    turn(plot, "leg A", 1e-5)
    turn(plot, "leg A", 1e-5)
    assert plot.canvas.background is background
    lines = plot.held.bundle.lines if kind is SmithPlot else plot.axes.held.bundle.lines
    assert lines
    assert not set(lines) & set(plot.moving())
    let_go(plot)
    assert plot.canvas.background is not background


def test_the_axis_keeps_what_is_held_in_sight_until_it_is_let_go(show):
    plot = show(MatchPlot, alone(51))  # 40.1 dB
    hold(plot)
    changed(plot, alone(100))
    plot.settle()
    painted(plot)
    assert plot.axes.axes.get_ylim()[1] > 40
    let_go(plot)
    plot.settle()
    painted(plot)
    assert plot.axes.axes.get_ylim()[1] < 20


@pytest.mark.parametrize("kind", [MatchPlot, CurrentsPlot, SmithPlot])
def test_another_look_recolours_what_is_held(show, kind):
    plot = show(kind, on_a_tee(50, 60 + 80j))
    hold(plot)
    own = plot.held if kind is SmithPlot else plot.axes.held
    for look in (DARK, LIGHT):
        plot.set_look(look)
        painted(plot)
        live = [look.curve(0), look.curve(1)] if kind is CurrentsPlot else [look.impedance[1]]
        assert held_colours(own.bundle) == [blend(look.paper, colour, PALE) for colour in live]
        assert own.word.get_color() == look.soft


@pytest.mark.parametrize("look", [LIGHT, DARK])
@pytest.mark.parametrize("kind", [MatchPlot, CurrentsPlot, SmithPlot])
def test_one_word_stands_at_the_end_of_a_pale_curve_and_can_be_read(show, kind, look):
    plot = show(kind, through_75_ohm(60 + 20j), look)
    turn(plot, "leg", 2.6 * QUARTER_M)
    hold(plot)
    own, axes = (plot.held, plot.axes) if kind is SmithPlot else (plot.axes.held, plot.axes.axes)
    assert own.word.get_text() == "held"
    box = own.word.get_window_extent()
    assert (box.min >= 0).all()
    assert (box.max <= plot.figure.bbox.max).all()
    (line,) = (line for line in own.bundle.lines if line.get_visible())
    places = axes.transData.transform(line.get_xydata()[:-1])
    assert not ((places > box.min) & (places < box.max)).all(axis=1).any()
    assert np.hypot(*(places[-1] - np.clip(places[-1], box.min, box.max))) < 8
    if kind is SmithPlot:
        names = [tag.name.get_window_extent() for tag in plot.tags]
        assert not any(box.overlaps(name) for name in names)
    image = picture(plot)
    corners = QPoint(int(box.x0), int(image.height() - box.y1)), QPoint(int(box.x1), int(image.height() - box.y0))
    inked = [
        image.pixelColor(x, y)
        for x in range(corners[0].x(), corners[1].x())
        for y in range(corners[0].y(), corners[1].y())
    ]
    far = abs(QColor(look.soft).lightness() - QColor(look.paper).lightness())
    assert max(abs(colour.lightness() - QColor(look.paper).lightness()) for colour in inked) > 0.85 * far


def test_there_is_no_word_where_there_is_no_room(show):
    plot = show(MatchPlot, through_75_ohm())
    hold(plot)
    assert plot.axes.held.word.get_visible()
    plot.axes.held.place_word(Bbox.from_bounds(0, 0, 20, 8))
    assert not plot.axes.held.word.get_visible()


def test_the_word_leaves_the_names_on_a_smith_chart_alone(show):
    plot = show(SmithPlot, alone(0), size=(240, 300))  # at the left rim, where only its right side is free
    hold(plot)
    box, name = plot.held.word.get_window_extent(), plot.tags[0].name.get_window_extent()
    assert name.x0 < 30
    assert not plot.held.word.get_visible() or not box.overlaps(name)


def test_one_held_frequency_is_a_dot(show):
    sketch = Sketch(868e6)
    sketch.join(f"{sketch.add('radio', 'radio')}:1", f"{sketch.antenna(100, 'A')}:1")
    plot = show(MatchPlot, sketch.plan())
    hold(plot)
    assert line_of(plot.axes.held.bundle, pale(plot, plot.look.impedance[1])).get_marker() == "o"


def test_a_hidden_plot_shows_what_was_held_meanwhile(show):
    plot = show(MatchPlot, through_75_ohm())
    plot.hide()
    plot.store.hold()
    plot.store.edit("Turn", edits.turned_length(plot.store.plan, ["leg"], QUARTER_M))
    plot.store.solve_now()
    plot.show()
    painted(plot)
    np.testing.assert_allclose(held(plot, plot.look.impedance[1]).imag, np.full(101, 20 * np.log10(3)))
