"""The currents in the antennas over frequency against what is wanted of them: phase, or amplitude."""

from __future__ import annotations

import math
from collections.abc import Mapping

import numpy as np

from app.look import Look
from app.plots.axes import Curve
from app.plots.frequency import FrequencyPlot
from app.plots.ink import short_name
from app.plots.scale import Range
from app.store import Store
from feedlib import Answer, Figures, Plan
from feedlib.conventions import Array
from feedlib.parts import Antenna, Radio
from feedlib.phasors import amplitude_from_middle_db, phase_from_middle_deg

PHASE, AMPLITUDE = "phase", "amplitude"
MOST_NAMES = 8
"""With more antennas only the curves that stand out carry names."""


class CurrentsPlot(FrequencyPlot):
    """One curve an antenna, from the middle of all, so that a limit stands half to either side."""

    EMPTY = "no antenna in the plan"

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__(store, look, title="Currents", words=(PHASE, AMPLITUDE))

    def unit(self) -> str:
        return "° from the middle" if self.word == PHASE else "dB from the middle"

    def colours(self, plan: Plan) -> Mapping[str | None, str]:
        antennas = (placed.id for placed in plan.parts if isinstance(placed.part, Antenna))
        return {part_id: self.look.curve(number) for number, part_id in enumerate(antennas)}

    def drawn(self, figures: Figures) -> Mapping[str | None, Array]:
        return dict(zip(figures.antenna_ids, self._figure(figures).T, strict=True))

    def curves(self, answer: Answer) -> tuple[Curve, ...]:
        self._values, at_mark = self._figure(answer), self._figure(answer.mark)[0]
        colours = self.colours(answer.plan)
        stands_out = self._standing_out(answer)
        names = self.names()
        labelled = frozenset(
            answer.antenna_ids if len(answer.antenna_ids) <= MOST_NAMES else sorted(stands_out)[:MOST_NAMES]
        )
        return tuple(
            Curve(
                part_id,
                short_name(names.get(part_id, part_id)),
                colours[part_id],
                self._values[:, number],
                float(at_mark[number]),
                labelled=part_id in labelled,
                stands_out=part_id in stands_out,
            )
            for number, part_id in enumerate(answer.antenna_ids)
        )

    def allowed(self, plan: Plan) -> Range:
        limits = plan.limits
        limit = limits.phase_balance_deg if self.word == PHASE else limits.amplitude_balance_db
        half = math.inf if limit is None else limit / 2
        return Range(-half, half)

    def reach(self, values: Array, allowed: Range) -> tuple[Range, float]:
        least = 1.0 if self.word == PHASE else 0.1
        limit = 1.6 * allowed.high if math.isfinite(allowed.high) else 0.0
        half = max(least, limit, 1.08 * float(np.abs(values).max(initial=0.0)))
        return Range(-half, half), 0.0

    def value_texts(self, at: int) -> list[str]:
        unit = "°" if self.word == PHASE else " dB"
        decimals = 1 if self.word == PHASE else 2
        return [
            f"{curve.name}  {value:+.{decimals}f}{unit}".replace("-", "−")
            for curve, value in zip(self.axes.curves, self._values[at], strict=True)
            if curve.labelled
        ]

    def _figure(self, figures: Figures) -> Array:
        return phase_from_middle_deg(figures) if self.word == PHASE else amplitude_from_middle_db(figures)

    def _standing_out(self, answer: Answer) -> frozenset[str]:
        """The antennas that are selected or hovered over, or that a part feeds which is, unless it feeds all."""
        antennas = frozenset(answer.antenna_ids)
        found: frozenset[str] = frozenset()
        for part_id in (*self.store.selected, self.store.hovered):
            if part_id in antennas:
                found |= {part_id}
            elif part_id is not None:
                fed = fed_through(answer.plan, part_id) & antennas
                found |= fed if fed < antennas else frozenset()
        return found


def fed_through(plan: Plan, part_id: str) -> frozenset[str]:
    """The parts that the radio reaches through one part only."""
    beside: dict[str, list[str]] = {placed.id: [] for placed in plan.parts}
    for a, b in plan.joins:
        beside[a.part].append(b.part)
        beside[b.part].append(a.part)
    radio = next(placed.id for placed in plan.parts if isinstance(placed.part, Radio))
    return frozenset(_reached(beside, radio, None) - _reached(beside, radio, part_id))


def _reached(beside: dict[str, list[str]], start: str, without: str | None) -> set[str]:
    """Everything that hangs together with `start` when one part is taken out."""
    met, waiting = {without}, [start]
    while waiting:
        part_id = waiting.pop()
        if part_id not in met:
            met.add(part_id)
            waiting += beside[part_id]
    return {part_id for part_id in met if part_id is not None and part_id != without}
