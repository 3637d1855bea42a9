"""What the plots over frequency share: axes that follow the answer, and a mark that moves where someone points."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

import numpy as np
from matplotlib.artist import Artist

from app.editing import edits
from app.editing.wording import format_frequency
from app.plots.axes import Curve, FrequencyAxes, ground_of, names_px, swept_hz
from app.plots.canvas import Pixel
from app.plots.figure import Plot
from app.plots.scale import Range, followed
from feedlib import Answer, Figures, Plan
from feedlib.conventions import Array


class FrequencyPlot(Plot):
    """Curves over frequency. A kind of plot says which curves, what the limits allow, and how far the axis reaches.

    EMPTY : why there is no curve although there is an answer.
    """

    EMPTY = ""

    def unit(self) -> str:
        """What the figures are, for the header."""
        raise NotImplementedError

    def colours(self, plan: Plan) -> Mapping[str | None, str]:
        """The colours of the curves by the part that each belongs to."""
        raise NotImplementedError

    def drawn(self, figures: Figures) -> Mapping[str | None, Array]:
        """(F,) what is drawn, by the part that it belongs to."""
        raise NotImplementedError

    def curves(self, answer: Answer) -> tuple[Curve, ...]:
        """What is drawn."""
        raise NotImplementedError

    def allowed(self, plan: Plan) -> Range:
        """The values that the limits allow; infinite ends where nothing is asked."""
        raise NotImplementedError

    def reach(self, values: Array, allowed: Range) -> tuple[Range, float]:
        """What the axis wants to show, and where its steps are counted from; values : finite, of any number."""
        raise NotImplementedError

    def value_texts(self, at: int) -> list[str]:
        """What the readout says of the curves at a solved frequency, a line each."""
        raise NotImplementedError

    def build(self) -> None:
        self.axes = FrequencyAxes(self.figure, self.look)
        self._shown: dict[str, Range] = {}
        self._names: tuple[tuple[str, ...], int] = (), 0
        self._held: tuple[object, ...] | None = None
        self._held_ends: Array = np.zeros(0)

    def fill(self, plan: Plan, answer: Answer | None, *, settled: bool) -> bool:
        self.note.setText(self.unit())
        curves = () if answer is None else self.curves(answer)
        if answer is not None and not curves:
            self.nothing_to_show(self.EMPTY)
        self.axes.set_curves(np.zeros(0) if answer is None else answer.frequency_hz, plan.band.marked_hz, curves)
        others_held = self._hold(plan)
        allowed = self.allowed(plan)
        values = np.concatenate([self._held_ends, *(curve.values for curve in curves)])
        wanted, base = self.reach(values[np.isfinite(values)], allowed)
        shown = followed(self._shown.get(self.word), wanted, base=base, settled=settled)
        self._shown[self.word] = shown
        names = tuple(curve.name for curve in curves)
        if names != self._names[0]:
            self._names = names, names_px(names)
        return self.axes.set_ground(ground_of(plan, allowed, shown, names_px=self._names[1])) or others_held

    def _hold(self, plan: Plan) -> bool:
        """Show the held answer's curves in the colours of the live ones; whether they are others than before."""
        held, colours, swept = self.store.held, self.colours(plan), swept_hz(plan)
        shown = None if held is None else (held, colours, swept, self.word, self.look)
        if shown == self._held:
            return False
        self._held = shown
        frequency_hz, drawn = (np.zeros(0), {}) if held is None else (held.frequency_hz, self.drawn(held))
        kept = [part_id for part_id in drawn if part_id in colours]
        values = np.array([drawn[part_id] for part_id in kept]).reshape(len(kept), frequency_hz.size)
        self.axes.held.show(frequency_hz, values, [colours[part_id] for part_id in kept], self.look)
        in_sight = values[:, (frequency_hz >= swept.low) & (frequency_hz <= swept.high)]
        in_sight = in_sight[np.isfinite(in_sight)]
        self._held_ends = np.array([in_sight.min(), in_sight.max()]) if in_sight.size else np.zeros(0)
        return True

    def artists(self) -> Iterable[Artist]:
        return self.axes.artists(self.pointer)

    def arrange(self, width_px: float, height_px: float) -> None:
        self.axes.arrange(width_px, height_px)

    def recolour(self) -> None:
        self.axes.set_look(self.look)

    def part_at(self, at: Pixel) -> str | None:
        return self.axes.part_at(at)

    def read_at(self, at: Pixel) -> list[str]:
        index = self.axes.index_at(at)
        if index is None:
            return []
        return [format_frequency(float(self.axes.grid_hz[index])), *self.value_texts(index)]

    def may_drag(self, at: Pixel) -> bool:
        return self.axes.index_at(at) is not None

    def drag_to(self, at: Pixel) -> None:
        moved = edits.marked(self.store.plan, self.axes.frequency_at(at[0]))
        self.store.edit("Move the mark", moved, merge="mark")
