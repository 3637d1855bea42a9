"""The Smith chart: what the wave sees at the radio and at the parts that are selected, over the band."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from matplotlib.artist import Artist
from matplotlib.lines import Line2D
from matplotlib.patches import Polygon

from app.editing.wording import format_frequency, format_impedance
from app.look import Look, blend
from app.plots import ink
from app.plots.bundle import Bundle
from app.plots.canvas import Pixel
from app.plots.figure import Plot
from app.plots.held import Held
from app.plots.placing import distances, pushed_apart
from app.plots.smith_grid import REACTANCES, RESISTANCES, limit_circle, reactance_arc, reflection, resistance_circle
from app.plots.tag import Tag
from app.store import Store
from feedlib import Answer, Plan
from feedlib.conventions import Array, ComplexArray
from feedlib.parts import Antenna, Radio

REACH = 1.03
MARGIN_PX, NEAR_PX, READ_PX, NAME_AWAY_PX, NAME_GAP_PX = 6.0, 6.0, 16.0, 9.0, 15.0
MOST_SELECTED = 4


@dataclass(frozen=True, slots=True)
class Trace:
    """What one curve shows: the impedance over the grid (F,), and as reflection over the grid and at the mark."""

    part_id: str
    name: str
    colour: str
    impedance_ohm: ComplexArray
    gamma: ComplexArray
    at_mark: complex


class SmithPlot(Plot):
    """The impedance at the radio, at each selected part and at the one hovered over, over the plan's reference."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__(store, look, title="Smith chart")

    def build(self) -> None:
        self.axes = self.figure.add_axes((0, 0, 1, 1))
        self.axes.set_axis_off()
        self.axes.set(xlim=(-REACH, REACH), ylim=(-REACH, REACH))
        rim = np.exp(1j * np.linspace(0, 2 * math.pi, 361))
        web = [resistance_circle(r, x) for r, x in RESISTANCES.items()]
        web += [reactance_arc(sign * x, r) for x, r in REACTANCES.items() for sign in (-1, 1)]
        gap = np.array([complex(np.nan, np.nan)])
        threads = np.concatenate([part for line in [*web, np.array([-1, 1 + 0j])] for part in (line, gap)])
        self.limit = Polygon(np.zeros((1, 2)), closed=True, linewidth=0, zorder=0.1)
        self.axes.add_patch(self.limit)
        self._web = self.axes.add_line(Line2D(threads.real, threads.imag, linewidth=ink.THIN_POINTS, zorder=0.5))
        self._rim = self.axes.add_line(Line2D(rim.real, rim.imag, linewidth=ink.MARK_POINTS, zorder=0.6))
        self.held, self.bundle = Held(self.figure, self.axes), Bundle(self.axes)
        self.tags: list[Tag] = []
        self.traces: tuple[Trace, ...] = ()
        self._held: tuple[object, ...] | None = None
        self._grid_hz: Array = np.zeros(0)
        self._ground: tuple[float | complex | None, ...] = ()

    def recolour(self) -> None:
        look = self.look
        self.limit.set_facecolor(blend(look.paper, look.holds, 0.2))
        self._web.set_color(look.hairline)
        self._rim.set_color(look.soft)

    def arrange(self, width_px: float, height_px: float) -> None:
        side_px = max(min(width_px, height_px) - 2 * MARGIN_PX, 10.0)
        across, up = side_px / width_px, side_px / height_px
        self.axes.set_position(((1 - across) / 2, (1 - up) / 2, across, up))
        off = NAME_GAP_PX / 2 * self.canvas.scale
        names = [tag.name.get_window_extent().padded(off) for tag in self._placed_tags()]
        self.held.place_word(self.figure.bbox, names)

    def fill(self, plan: Plan, answer: Answer | None, *, settled: bool) -> bool:
        self.note.setText(f"{plan.reference_ohm:g} Ω in the middle")
        looked_at = (*self.store.selected[:MOST_SELECTED], self.store.hovered)
        self.traces = () if answer is None else tuple(self._traces(answer, looked_at, plan))
        self._grid_hz = np.zeros(0) if answer is None else answer.frequency_hz
        gamma = np.array([trace.gamma for trace in self.traces])
        self.bundle.show(gamma.real, gamma.imag, [(trace.colour, self._width(trace)) for trace in self.traces])
        while len(self.tags) < len(self.traces):
            self.tags.append(Tag(self.figure, self.axes))
        for tag, trace in zip(self.tags, self.traces, strict=False):
            tag.show((trace.at_mark.real, trace.at_mark.imag), trace.name)
            tag.wear(trace.colour, self.look)
        others_held = self._hold(plan)
        return self._set_ground(plan) or others_held

    def artists(self) -> Iterable[Artist]:
        yield from self.bundle.lines
        tags = self._placed_tags()
        for tag in tags:
            yield tag.dot
        for tag in tags:
            yield tag.name

    def part_at(self, at: Pixel) -> str | None:
        near = [distances(*self._px(trace.gamma[None]), at)[0] for trace in self.traces]
        nearest = int(np.argmin(near)) if near else 0
        return self.traces[nearest].part_id if near and near[nearest] <= NEAR_PX * self.canvas.scale else None

    def read_at(self, at: Pixel) -> list[str]:
        apart = np.array([np.hypot(x - at[0], y - at[1]) for x, y in (self._px(trace.gamma) for trace in self.traces)])
        apart = np.where(np.isnan(apart), np.inf, apart)
        if not apart.size or apart.min() > READ_PX * self.canvas.scale:
            return []
        which, index = np.unravel_index(np.argmin(apart), apart.shape)
        trace = self.traces[which]
        frequency = format_frequency(float(self._grid_hz[index]))
        return [f"{trace.name}  {frequency}", format_impedance(complex(trace.impedance_ohm[index]))]

    def _placed_tags(self) -> list[Tag]:
        """The tags of what is seen at the mark, their names beside the dots and pushed apart."""
        scale = self.canvas.scale
        dots = [self._px(np.array([trace.at_mark])) for trace in self.traces]
        seen = [(tag, float(x[0]), float(y[0])) for tag, (x, y) in zip(self.tags, dots, strict=False) if np.isfinite(x)]
        places = pushed_apart([y for *_, y in seen], NAME_GAP_PX * scale, 0.0, self.figure.bbox.height)
        for (tag, x, _), y in zip(seen, places, strict=True):
            tag.name.set_position((x + NAME_AWAY_PX * scale, y))
        return [tag for tag, *_ in seen]

    def _traces(self, answer: Answer, looked_at: Iterable[str | None], plan: Plan) -> Iterable[Trace]:
        """The radio's and those of the parts that are looked at and that the answer knows, as `plan` has them drawn."""
        radio, names = answer.harness_ports[0], self.names()
        ports = {radio.rpartition(":")[0]: radio}
        parts = {placed.id: placed.part.ports for placed in answer.plan.parts}
        for part_id in looked_at:
            if part_id in parts:
                ports.setdefault(part_id, entry_port(answer, part_id, parts[part_id]))
        for part_id, port in ports.items():
            impedance, at_mark = answer.impedance_ohm(port), answer.mark.impedance_ohm(port)
            gamma, dot = (reflection(z, plan.reference_ohm) for z in (impedance, at_mark))
            name = ink.short_name(names.get(part_id, part_id))
            colour = self.look.impedance[1] if port == radio else self._colour(plan, part_id)
            yield Trace(part_id, name, colour, impedance, gamma, complex(dot[0]))

    def _width(self, trace: Trace) -> float:
        looked_at = trace.part_id in self.store.selected or trace.part_id == self.store.hovered
        return ink.STANDS_OUT_POINTS if looked_at else ink.LINE_POINTS

    def _colour(self, plan: Plan, part_id: str) -> str:
        """An antenna's as everywhere, ink for what else is looked at."""
        antennas = [placed.id for placed in plan.parts if isinstance(placed.part, Antenna)]
        return self.look.curve(antennas.index(part_id)) if part_id in antennas else self.look.ink

    def _hold(self, plan: Plan) -> bool:
        """Show the held answer at the radio and at the selected parts; whether that is other than before."""
        held, selected = self.store.held, self.store.selected[:MOST_SELECTED]
        colours = tuple(self._colour(plan, part_id) for part_id in selected)
        shown = None if held is None else (held, selected, colours, plan.reference_ohm, self.look)
        if shown == self._held:
            return False
        self._held = shown
        traces = () if held is None else tuple(self._traces(held, selected, plan))
        gamma = np.array([trace.gamma for trace in traces]).reshape(len(traces), -1 if traces else 0)
        self.held.show(gamma.real, gamma.imag, [trace.colour for trace in traces], self.look)
        return True

    def _set_ground(self, plan: Plan) -> bool:
        limit_db, reference_ohm = plan.limits.return_loss_db, plan.reference_ohm
        source_ohm = next((p.part.impedance_ohm for p in plan.parts if isinstance(p.part, Radio)), None)
        ground = (limit_db, source_ohm, reference_ohm)
        if ground == self._ground:
            return False
        self._ground = ground
        self.limit.set_visible(limit_db is not None and source_ohm is not None)
        if limit_db is not None and source_ohm is not None:
            circle = limit_circle(limit_db, source_ohm, reference_ohm)
            self.limit.set_xy(np.column_stack([circle.real, circle.imag]))
        return True

    def _px(self, gamma: ComplexArray) -> tuple[Array, Array]:
        box = self.axes.bbox
        half = float(box.width) / (2 * REACH)
        return float(box.x0) + half * (gamma.real + REACH), float(box.y0) + half * (gamma.imag + REACH)


def entry_port(answer: Answer, part_id: str, ports: int) -> str:
    """The port through which the wave enters a part: where the current from near to far flows into it; else port 1."""
    mark = answer.mark
    for port in (f"{part_id}:{number}" for number in range(1, ports + 1)):
        z_ohm = mark.impedance_ohm(port)[0]
        if np.isfinite(z_ohm) and (mark.voltage_v(port)[0] * (z_ohm * mark.current_a(port)[0]).conjugate()).real > 0:
            return port
    return f"{part_id}:1"
