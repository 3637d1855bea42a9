"""How letters and curves get on the surface: every script, no markup, few lines, and no place that is missed."""

from functools import partial

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from PySide6.QtGui import QFontInfo

from app.editing import edits
from app.look import LIGHT, font
from app.plots.bundle import FINE, Bundle, needed
from app.plots.currents import CurrentsPlot
from app.plots.ink import short_name
from app.plots.letters import Letters
from app.plots.match import MatchPlot
from app.plots.smith import SmithPlot
from tests.app.plot_screen import changed, line_of, on_a_tee, painted, rows, shown

SCRIPTS = ["天线 上", "アンテナ", "안테나", "антенна", "هوائي", "אנטנה", "ऐन्टेना", "เสาอากาศ", "😀 mast", "\u0378 none"]


@pytest.fixture
def show(qtbot):
    """Show a plot of a kind for a plan."""
    return partial(shown, qtbot)


@pytest.mark.parametrize("text", SCRIPTS)
@pytest.mark.parametrize("kind", [CurrentsPlot, SmithPlot])
def test_names_in_any_script_are_drawn_without_a_warning(show, kind, text, capfd):
    plot = show(kind, edits.labelled(on_a_tee(50, 100), "A", label=text))
    plot.store.select(("A",))
    plot.moved((plot.canvas.width() / 2, plot.canvas.height() / 2))
    painted(plot)
    tags = plot.tags if kind is SmithPlot else plot.axes.tags
    assert any(text in tag.name.get_text() for tag in tags)
    assert "glyph" not in capfd.readouterr().err.lower()


def test_markup_is_drawn_as_it_is_written(show):
    plot = show(CurrentsPlot, edits.labelled(on_a_tee(50, 100), "A", label="$x_1$"))
    name = plot.axes.tags[0].name
    as_written = name.get_window_extent().width
    changed(plot, edits.labelled(plot.store.plan, "A", label="x1"))
    assert as_written > 1.5 * name.get_window_extent().width
    changed(plot, edits.labelled(plot.store.plan, "A", label="<b>x1</b>"))
    assert name.get_window_extent().width > as_written


def test_figures_along_the_axes_have_the_letters_of_the_window(show):
    plot = show(MatchPlot, on_a_tee(50, 50))
    families = plot.axes.axes.get_yticklabels()[0].get_fontfamily()
    assert families[-1] == "DejaVu Sans"
    assert set(families) <= {QFontInfo(font("small")).family(), "DejaVu Sans"}


def ink_on_paper(letters: Letters, figure: Figure) -> tuple[float, float, float, float]:
    """Left, lower, right and upper end of what is drawn (device pixels, y upwards)."""
    canvas = FigureCanvasAgg(figure)
    canvas.draw()
    shades = np.asarray(canvas.buffer_rgba())[::-1, :, 0] < 128
    up, across = np.flatnonzero(shades.any(axis=1)), np.flatnonzero(shades.any(axis=0))
    return across[0], up[0], across[-1] + 1, up[-1] + 1


@pytest.mark.usefixtures("qapp")
@pytest.mark.parametrize("dpi", [100.0, 150.0, 200.0])
@pytest.mark.parametrize("anchor", [(0.0, 0.0), (1.0, 1.0), (0.5, 0.5), (0.0, 1.0)])
def test_letters_stand_where_their_anchor_is_put(dpi, anchor):
    figure = Figure((3, 2), dpi=dpi)
    letters = Letters(figure, "MHM", moves=False)
    letters.set_anchor(*anchor)
    letters.set_position((150.0, 100.0))
    left, low, right, high = ink_on_paper(letters, figure)
    box = letters.get_window_extent()
    across, up = anchor
    assert (box.x0 + across * box.width, box.y0 + up * box.height) == pytest.approx((150, 100))
    assert box.x0 - 1 <= left < right <= box.x1 + 1
    assert box.y0 - 1 <= low < high <= box.y1 + 1
    assert right - left > 0.8 * box.width
    cap = 0.73 * 12 * dpi / 100  # of most letters
    assert high - low == pytest.approx(cap, abs=0.15 * cap + 1)


@pytest.mark.usefixtures("qapp")
def test_a_name_from_right_to_left_leaves_the_figures_beside_it_as_they_are():
    def ink_across(text: str) -> np.ndarray:
        """(W,) ink in each column, softened against parts of a pixel; the text ends at the right."""
        figure = Figure((3, 1), dpi=100)
        letters = Letters(figure, text, moves=False)
        letters.set_anchor(1.0, 0.0)
        letters.set_position((250.0, 40.0))
        canvas = FigureCanvasAgg(figure)
        canvas.draw()
        return np.convolve((255.0 - np.asarray(canvas.buffer_rgba())[:, :, 0]).sum(axis=0), np.ones(3), "same")

    figures = ink_across("  −4.7°")
    beside = slice(np.flatnonzero(figures)[0], None)
    like = [
        np.corrcoef(ink_across(f"{name}  −4.7°")[beside], figures[beside])[0, 1]
        for name in ("A", short_name("קו"), "קו")
    ]
    assert min(like[:2]) > 0.8 > like[2]


@pytest.mark.usefixtures("qapp")
def test_letters_have_their_colour_their_lines_and_their_card():
    figure = Figure((3, 2), dpi=100)
    figure.set_facecolor("white")
    one, two = (Letters(figure, text, moves=False) for text in ("Mark", "Mark\nMark"))
    assert two.get_window_extent().height >= 2 * one.get_window_extent().height
    two.set_visible(False)
    one.set_color("#c00000")
    one.set_card("#00c000", "#0000c0")
    one.set_position((100.0, 50.0))
    canvas = FigureCanvasAgg(figure)
    canvas.draw()
    pixels = np.asarray(canvas.buffer_rgba())[::-1, :, :3].astype(int)
    found = {tuple(colour) for colour in pixels.reshape(-1, 3)}
    assert {(192, 0, 0), (0, 192, 0), (255, 255, 255)} <= found
    box = one.get_window_extent()
    assert tuple(pixels[round(box.y1) + 2, round(box.x0) + 8]) == (0, 192, 0)
    assert tuple(pixels[round(box.y1) + 8, round(box.x0) + 8]) == (255, 255, 255)


def test_curves_of_one_colour_share_a_line_and_keep_their_values(show):
    impedances = [50 + 5j * n for n in range(-6, 7)]
    plot = show(CurrentsPlot, on_a_tee(*impedances))
    angles_deg = -np.degrees(np.angle(impedances))
    expected_deg = angles_deg - (angles_deg.max() + angles_deg.min()) / 2
    lines = [line for line in plot.axes.bundle.lines if line.get_visible()]
    assert len(lines) == len(LIGHT.curves) == 8
    for number, colour in enumerate(LIGHT.curves):
        found = rows(line_of(plot.axes.bundle, colour), 101)
        np.testing.assert_allclose(found.imag, np.repeat(expected_deg[number::8, None], 101, axis=1), atol=1e-9)
    plot.store.select(("I",))  # the second one of its colour
    painted(plot)
    wide = [line for line in plot.axes.bundle.lines if line.get_visible()][-1]
    (found,) = rows(wide, 101)
    assert wide.get_linewidth() > lines[0].get_linewidth()
    np.testing.assert_allclose(found.imag, np.full(101, expected_deg[8]), atol=1e-9)
    assert rows(line_of_width(plot.axes.bundle, LIGHT.curves[0], lines[0].get_linewidth()), 101).shape == (1, 101)


def line_of_width(bundle: Bundle, colour: str, points: float):
    """The line of a colour and a width."""
    (line,) = (
        line
        for line in bundle.lines
        if line.get_visible() and line.get_color() == colour and line.get_linewidth() == points
    )
    return line


def test_places_on_straight_lines_are_not_needed_and_bends_and_ends_are():
    x = np.linspace(860e6, 870e6, 2001)
    straight = np.array([np.linspace(-3, 5, 2001), np.linspace(2, 2, 2001)])
    assert needed(x, straight, (1.0, 1e-4)).size < 8
    bent = np.abs(np.arange(2001) - 1001.0)[None]
    kept = needed(x, bent, (1.0, 1e-4))
    assert {0, 1001, 2000} <= set(kept)
    gap = straight.copy()
    gap[0, 700] = np.nan
    assert needed(x, gap, (1.0, 1e-4)).size == 2001


@given(st.integers(1, 3000), st.integers(0, 2**32 - 1))
def test_curves_without_the_places_that_are_not_needed_are_the_same(points, seed):
    random = np.random.default_rng(seed)
    x = np.linspace(0.0, 1.0, points)
    y = np.array([np.sin(random.uniform(1, 40) * x + random.uniform(0, 6)) for _ in range(3)])
    kept = needed(x, y, (FINE, FINE))
    assert kept[0] == 0
    assert kept[-1] == points - 1
    assert (np.diff(kept) > 0).all()
    for row in y:
        np.testing.assert_allclose(np.interp(x, x[kept], row[kept]), row, atol=1.5 * FINE)


def test_many_places_are_thinned_and_few_are_not():
    figure = Figure()
    axes = figure.add_axes((0, 0, 1, 1))
    axes.set(xlim=(0, 1), ylim=(-1, 1))
    bundle = Bundle(axes)
    for points, fewer in ((401, False), (2001, True)):
        x = np.linspace(0, 1, points)
        y = np.array([np.sin(6 * x + n) for n in range(20)])
        bundle.show(x, y, [("#000000", 1.0)] * 20)
        places = np.asarray(bundle.lines[0].get_xydata()).reshape(20, -1, 2)[:, :-1]
        assert (places.shape[1] < points) is fewer
        for row, curve in zip(places, y, strict=True):
            np.testing.assert_allclose(np.interp(x, row[:, 0], row[:, 1]), curve, atol=3 * FINE)
