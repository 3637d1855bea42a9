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
from app.plots.canvas import Pixel
from app.plots.figure import Plot
from app.plots.placing import distances, pushed_apart
from app.plots.smith_grid import REACTANCES, RESISTANCES, limit_circle, reactance_arc, reflection, resistance_circle
from app.plots.strand import Strand
from app.store import Store
from feedlib import Answer, Plan
from feedlib.conventions import Array, ComplexArray
from feedlib.parts import Radio

REACH = 1.03
MARGIN_PX, NEAR_PX, READ_PX, NAME_AWAY_PX, NAME_GAP_PX = 6.0, 6.0, 16.0, 9.0, 15.0
MOST_SELECTED = 4


@dataclass(frozen=True, slots=True)
class Trace:
    """What one curve shows: the impedance over the grid (F,) and at the mark, and both as reflection."""

    part_id: str
    name: str
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
        self.strands: list[Strand] = []
        self.traces: tuple[Trace, ...] = ()
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

    def fill(self, plan: Plan, answer: Answer | None, *, settled: bool) -> bool:
        self.note.setText(f"{plan.reference_ohm:g} Ω in the middle")
        self.traces = () if answer is None else tuple(self._traces(answer))
        self._grid_hz = np.zeros(0) if answer is None else answer.frequency_hz
        while len(self.strands) < len(self.traces):
            self.strands.append(Strand(self.figure, self.axes))
        for strand, trace in zip(self.strands, self.traces, strict=False):
            strand.show(trace.gamma.real, trace.gamma.imag, (trace.at_mark.real, trace.at_mark.imag))
            strand.say(trace.name, "")
            strand.wear(self._colour(plan, trace.part_id), self.look, stands_out=self._stands_out(trace.part_id))
        return self._set_ground(plan)

    def artists(self) -> Iterable[Artist]:
        strands = self.strands[: len(self.traces)]
        for strand in strands:
            yield strand.line
            yield strand.dot
        scale = self.canvas.scale
        dots = [self._px(np.array([trace.at_mark])) for trace in self.traces]
        seen = [n for n, (x, _) in enumerate(dots) if np.isfinite(x[0])]
        wanted = [float(dots[n][1][0]) for n in seen]
        for n, y in zip(seen, pushed_apart(wanted, NAME_GAP_PX * scale, 0.0, self.figure.bbox.height), strict=True):
            x, name = float(dots[n][0][0]), strands[n].name
            name.set_position((x + NAME_AWAY_PX * scale, y))
            yield name

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

    def _traces(self, answer: Answer) -> Iterable[Trace]:
        radio = answer.harness_ports[0]
        names = self.names()
        ports = {radio.rpartition(":")[0]: radio}
        parts = {placed.id: placed.part.ports for placed in answer.plan.parts}
        for part_id in (*self.store.selected[:MOST_SELECTED], self.store.hovered):
            if part_id in parts:
                ports.setdefault(part_id, entry_port(answer, part_id, parts[part_id]))
        for part_id, port in ports.items():
            impedance, at_mark = answer.port_impedance_ohm[port], answer.mark.port_impedance_ohm[port]
            gamma, dot = (reflection(z, answer.plan.reference_ohm) for z in (impedance, at_mark))
            yield Trace(part_id, ink.short_name(names.get(part_id, part_id)), impedance, gamma, complex(dot[0]))

    def _stands_out(self, part_id: str) -> bool:
        return part_id in self.store.selected or part_id == self.store.hovered

    def _colour(self, plan: Plan, part_id: str) -> str:
        """The radio's own, an antenna's as everywhere, ink for what else is looked at."""
        antennas = [placed.id for placed in plan.parts if placed.part.KIND == "antenna"]
        if part_id in antennas:
            return self.look.curve(antennas.index(part_id))
        return self.look.impedance[1] if isinstance(plan.placed(part_id).part, Radio) else self.look.ink

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
        z_ohm = mark.port_impedance_ohm[port][0]
        if np.isfinite(z_ohm) and (mark.voltage_v(port)[0] * (z_ohm * mark.current_a(port)[0]).conjugate()).real > 0:
            return port
    return f"{part_id}:1"
