"""Axes over frequency: curves with their names at the ends, the band, no-go bands, the mark; must not know the store.

What stands still (axes, grid, bands) is a `Ground` and is drawn with the whole figure; curves, names, dots and the
mark move.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.artist import Artist
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Rectangle
from matplotlib.transforms import IdentityTransform
from PySide6.QtGui import QFontMetrics

from app.look import Look, blend, font
from app.plots import ink
from app.plots.bundle import Bundle
from app.plots.canvas import DPI, Pixel
from app.plots.held import Held
from app.plots.placing import distances, pushed_apart
from app.plots.scale import Range, frequency_ticks, pointed_hz, ticks
from app.plots.tag import Tag
from feedlib import Plan
from feedlib.conventions import Array

LEFT_PX, TOP_PX, RIGHT_PX, BOTTOM_PX = 46.0, 10.0, 30.0, 28.0
NAME_AWAY_PX, NAME_GAP_PX, NOTE_AWAY_PX, NEAR_PX = 9.0, 15.0, 6.0, 6.0
SLIVER = 0.01
"""Share of the axis that a band of one frequency is drawn with."""


@dataclass(frozen=True, slots=True)
class Curve:
    """What one curve shows. values : (F,); at_mark : solved at the mark; note : written beside its dot there.

    part_id : what a click on it selects. labelled : whether it has its dot and its name; all names count for the room
    that is kept.
    """

    part_id: str | None
    name: str
    colour: str
    values: Array
    at_mark: float
    note: str = ""
    labelled: bool = True
    stands_out: bool = False


@dataclass(frozen=True, slots=True)
class Ground:
    """What stands still. allowed : the limits, infinite where there is none; shown : the ends of the other axis.

    names_px : room that the names at the ends of the curves need.
    """

    swept_hz: Range
    band_hz: Range
    allowed: Range
    shown: Range
    names_px: int

    @property
    def frequencies_hz(self) -> Range:
        """The ends of the frequency axis; one frequency alone gets some room."""
        low, high = self.swept_hz
        return self.swept_hz if high > low else Range(low * 0.999, high * 1.001)


def names_px(names: Iterable[str]) -> int:
    """The width (pixels at 100 %) of the longest name."""
    metrics = QFontMetrics(font("small"))
    return max((metrics.horizontalAdvance(name) for name in names), default=0)


def swept_hz(plan: Plan) -> Range:
    """The ends of what is solved."""
    wide = plan.sweep or plan.band
    return Range(wide.start_hz, wide.stop_hz)


def ground_of(plan: Plan, allowed: Range, shown: Range, *, names_px: int) -> Ground:
    """The ground for a plan."""
    band = Range(plan.band.start_hz, plan.band.stop_hz)
    return Ground(swept_hz(plan), band, allowed, shown, names_px)


class FrequencyAxes:
    """One pair of axes over frequency."""

    def __init__(self, figure: Figure, look: Look) -> None:
        self._look = look
        self.axes = figure.add_axes((0.1, 0.1, 0.8, 0.8))
        self.axes.set_axisbelow(True)
        self.axes.spines[:].set_visible(False)
        self.axes.tick_params(length=0, labelsize=ink.TEXT_POINTS, labelfontfamily=ink.families(), pad=6)
        self._figure = figure
        self.wash = Rectangle((0, 0), 0, 0, linewidth=0, zorder=0.1)
        self.no_go = [Rectangle((0, 0), 0, 0, linewidth=0, zorder=0.2, hatch="////") for _ in range(2)]
        for patch in (self.wash, *self.no_go):
            self.axes.add_patch(patch)
        across = self.axes.get_xaxis_transform()
        self.mark, self._hair = (
            self.axes.add_line(Line2D([], [], animated=True, linewidth=points, transform=across))
            for points in (ink.MARK_POINTS, ink.THIN_POINTS)
        )
        self._leaders = Line2D([], [], animated=True, linewidth=ink.THIN_POINTS, transform=IdentityTransform())
        figure.add_artist(self._leaders)
        self.held, self.bundle = Held(figure, self.axes), Bundle(self.axes)
        self.tags: list[Tag] = []
        self.curves: tuple[Curve, ...] = ()
        self.grid_hz: Array = np.zeros(0)
        self._tagged: list[Curve] = []
        self._ground: Ground | None = None
        self._names_at: dict[str | None, float] = {}

    @property
    def _scale(self) -> float:
        return self._figure.dpi / DPI

    def set_look(self, look: Look) -> None:
        """Wear a look; curves bring their own colours."""
        self._look = look
        self.axes.set_facecolor(look.paper)
        self.axes.tick_params(colors=look.soft)
        self.axes.grid(True, color=look.hairline, linewidth=ink.THIN_POINTS)
        self.wash.set_facecolor(look.band_wash)
        for patch in self.no_go:
            patch.set(facecolor=look.fails_wash, edgecolor=blend(look.fails_wash, look.fails, 0.35))
        self.mark.set_color(look.ink)
        self._hair.set_color(look.soft)
        self._leaders.set_color(look.soft)

    def set_ground(self, ground: Ground) -> bool:
        """Whether it is another one than before."""
        if ground == self._ground:
            return False
        self._ground = ground
        across, shown = ground.frequencies_hz, ground.shown
        self.axes.set_xlim(*across)
        self.axes.set_ylim(*shown)
        if ground.swept_hz.span:
            width = max(ground.band_hz.span, SLIVER * across.span)
            left = min(ground.band_hz.low, across.high - width)
        else:
            left, width = across.low, across.span
        below, above = (min(max(end, shown.low), shown.high) for end in ground.allowed)
        self.wash.set_bounds(left, shown.low, width if ground.band_hz != ground.swept_hz else 0.0, shown.span)
        self.no_go[0].set_bounds(left, shown.low, width, below - shown.low)
        self.no_go[1].set_bounds(left, above, width, shown.high - above)
        return True

    def set_curves(self, grid_hz: Array, mark_hz: float, curves: Sequence[Curve]) -> None:
        """Show these curves; grid_hz : (F,) the frequencies of their values."""
        self.curves, self.grid_hz = tuple(curves), grid_hz
        self.mark.set_data([mark_hz, mark_hz], [0, 1])
        self.bundle.show(
            grid_hz,
            np.array([curve.values for curve in curves]),
            [(curve.colour, ink.STANDS_OUT_POINTS if curve.stands_out else ink.LINE_POINTS) for curve in curves],
        )
        self._tagged = [curve for curve in curves if curve.labelled]
        while len(self.tags) < len(self._tagged):
            self.tags.append(Tag(self._figure, self.axes))
        for tag, curve in zip(self.tags, self._tagged, strict=False):
            tag.show((mark_hz, curve.at_mark), curve.name, curve.note)
            tag.wear(curve.colour, self._look)

    def arrange(self, width_px: float, height_px: float) -> None:
        """Place the axes in a figure of that size and choose ticks that have room."""
        assert self._ground is not None
        names = self._ground.names_px
        right_px = max(RIGHT_PX, names + NAME_AWAY_PX + 4) if names else RIGHT_PX
        across_px, up_px = max(width_px - LEFT_PX - right_px, 10.0), max(height_px - TOP_PX - BOTTOM_PX, 10.0)
        self.axes.set_position((LEFT_PX / width_px, BOTTOM_PX / height_px, across_px / width_px, up_px / height_px))
        self.axes.set_xticks(*frequency_ticks(self._ground.frequencies_hz, across_px))
        self.axes.set_yticks(*ticks(self._ground.shown, max(1, int(up_px / 34))))
        self.held.place_word(self.axes.bbox)

    def artists(self, pointer: Pixel | None) -> Iterable[Artist]:
        """What moves, in the order in which it is drawn."""
        at = None if pointer is None else self.index_at(pointer)
        if at is not None:
            self._hair.set_data([self.grid_hz[at]] * 2, [0, 1])
            yield self._hair
        yield self.mark
        yield from self.bundle.lines
        tagged = list(zip(self.tags, self._tagged, strict=False))
        for tag, _ in sorted(tagged, key=lambda pair: pair[1].stands_out):
            yield tag.dot
        yield from self._placed_names()
        for tag, curve in tagged:
            if curve.note:
                yield from self._placed_note(tag, curve)

    def index_at(self, at: Pixel) -> int | None:
        """The solved frequency nearest to a point; None outside the axes."""
        if not self.grid_hz.size or not self.axes.bbox.contains(*at):
            return None
        return int(np.argmin(np.abs(self._x_px(self.grid_hz) - at[0])))

    def part_at(self, at: Pixel) -> str | None:
        """The part whose curve, or name, is at a point."""
        near = NEAR_PX * self._scale
        if at[0] > self.axes.bbox.x1:
            found = min(self._names_at.items(), key=lambda item: abs(item[1] - at[1]), default=None)
            return found[0] if found and abs(found[1] - at[1]) <= NAME_GAP_PX * self._scale / 2 else None
        if not self.curves or not self.axes.bbox.padded(near).contains(*at):
            return None
        x_px = self._x_px(self.grid_hz)
        first, last = np.searchsorted(x_px, [at[0] - near, at[0] + near])
        around = slice(max(0, first - 1), last + 1)
        y_px = self._y_px(np.array([curve.values[around] for curve in self.curves]))
        apart = distances(x_px[around], y_px, at)
        nearest = int(np.argmin(apart))
        return self.curves[nearest].part_id if apart[nearest] <= near else None

    def frequency_at(self, x: float) -> float:
        """The round frequency that someone means who points there; the nearest one that is swept outside the axes."""
        assert self._ground is not None
        across, box = self._ground.frequencies_hz, self.axes.bbox
        pixel_hz = across.span / box.width * self._scale
        return pointed_hz(across.low + (x - box.x0) / box.width * across.span, pixel_hz, self._ground.swept_hz)

    def _x_px(self, frequency_hz: Array) -> Array:
        low, high = self.axes.get_xlim()
        return float(self.axes.bbox.x0) + (frequency_hz - low) / (high - low) * float(self.axes.bbox.width)

    def _y_px(self, value: Array) -> Array:
        low, high = self.axes.get_ylim()
        return float(self.axes.bbox.y0) + (value - low) / (high - low) * float(self.axes.bbox.height)

    def _placed_names(self) -> Iterable[Artist]:
        """The names at the ends of their curves, pushed apart, with leaders where they had to move."""
        box, scale = self.axes.bbox, self._scale
        named = [
            (tag.name, curve, np.flatnonzero(np.isfinite(curve.values))[-1:])
            for tag, curve in zip(self.tags, self._tagged, strict=False)
            if curve.name
        ]
        named = [entry for entry in named if entry[2].size]
        ends = [float(np.clip(self._y_px(curve.values[last]), box.y0, box.y1)[0]) for _, curve, last in named]
        places = pushed_apart(ends, NAME_GAP_PX * scale, box.y0, box.y1)
        self._names_at = {curve.part_id: place for (_, curve, _), place in zip(named, places, strict=True)}
        leaders = [(end, place) for end, place in zip(ends, places, strict=True) if abs(end - place) > scale]
        self._leaders.set_data(
            [x for _ in leaders for x in (box.x1 + scale, box.x1 + (NAME_AWAY_PX - 2) * scale, np.nan)],
            [y for leader in leaders for y in (*leader, np.nan)],
        )
        yield self._leaders
        for (text, _, _), place in zip(named, places, strict=True):
            text.set_position((box.x1 + NAME_AWAY_PX * scale, place))
            yield text

    def _placed_note(self, tag: Tag, curve: Curve) -> Iterable[Artist]:
        """The note at the corner of the dot where it stays inside the axes and off the curve, if there is one."""
        box, away = self.axes.bbox, NOTE_AWAY_PX * self._scale
        x = float(self._x_px(np.asarray(tag.dot.get_xdata()))[0])
        y = float(self._y_px(np.array([curve.at_mark]))[0])
        if not box.contains(x, y):
            return
        along = np.column_stack([self._x_px(self.grid_hz), self._y_px(curve.values)])
        tag.note.stand_beside((x, y), away, ((1, 1), (-1, 1), (1, -1), (-1, -1)), within=box, off=along)
        yield tag.note
