"""What the plots over frequency share: axes that follow the answer, and a mark that moves where someone points."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
from matplotlib.artist import Artist

from app.editing import edits
from app.editing.wording import format_frequency
from app.plots.axes import Curve, FrequencyAxes, ground_of, names_px
from app.plots.canvas import Pixel
from app.plots.figure import Plot
from app.plots.scale import Range, followed
from feedlib import Answer, Plan
from feedlib.conventions import Array


class FrequencyPlot(Plot):
    """Curves over frequency. A kind of plot says which curves, what the limits allow, and how far the axis reaches.

    EMPTY : why there is no curve although there is an answer.
    """

    EMPTY = ""

    def unit(self) -> str:
        """What the figures are, for the header."""
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

    def fill(self, plan: Plan, answer: Answer | None, *, settled: bool) -> bool:
        self.note.setText(self.unit())
        curves = () if answer is None else self.curves(answer)
        if answer is not None and not curves:
            self.nothing_to_show(self.EMPTY)
        self.axes.set_curves(np.zeros(0) if answer is None else answer.frequency_hz, plan.band.marked_hz, curves)
        allowed = self.allowed(plan)
        values = np.array([curve.values for curve in curves])
        wanted, base = self.reach(values[np.isfinite(values)], allowed)
        shown = followed(self._shown.get(self.word), wanted, base=base, settled=settled)
        self._shown[self.word] = shown
        return self.axes.set_ground(ground_of(plan, allowed, shown, names_px=names_px(curves)))

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
