"""The match at the radio over frequency, as return loss or as VSWR."""

from __future__ import annotations

import math
from collections.abc import Mapping

import numpy as np

from app.editing.wording import format_db
from app.look import Look
from app.plots.axes import Curve
from app.plots.frequency import FrequencyPlot
from app.plots.scale import Range
from app.store import Store
from feedlib import Answer, Figures, Plan
from feedlib.conventions import Array

RETURN_LOSS, VSWR = "return loss", "VSWR"
HIGHEST_DB, HIGHEST_VSWR = 60.0, 20.0
"""What is beyond, up to a perfect match or none at all, is drawn there."""


class MatchPlot(FrequencyPlot):
    """Return loss (dB) or VSWR at the radio, with the plan's limit."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__(store, look, title="Match", words=(RETURN_LOSS, VSWR))

    def unit(self) -> str:
        return "dB at the radio" if self.word == RETURN_LOSS else "at the radio"

    def colours(self, plan: Plan) -> Mapping[str | None, str]:
        return {None: self.look.impedance[1]}

    def drawn(self, figures: Figures) -> Mapping[str | None, Array]:
        return {None: np.clip(self._figure(figures), -HIGHEST_DB, self._highest)}

    def curves(self, answer: Answer) -> tuple[Curve, ...]:
        self._values = self._figure(answer)
        note = self._text(float(self._figure(answer.mark)[0])).removesuffix(" dB")
        colour, dot = self.colours(answer.plan)[None], self.drawn(answer.mark)[None]
        return (Curve(None, "", colour, self.drawn(answer)[None], float(dot[0]), note),)

    def allowed(self, plan: Plan) -> Range:
        limit_db = plan.limits.return_loss_db
        if limit_db is None:
            return Range(-math.inf, math.inf)
        if self.word == RETURN_LOSS:
            return Range(limit_db, math.inf)
        return Range(-math.inf, float(vswr(10 ** (-limit_db / 10))))

    def reach(self, values: Array, allowed: Range) -> tuple[Range, float]:
        limits = [end for end in allowed if math.isfinite(end)]
        base, least = (0.0, 10.0) if self.word == RETURN_LOSS else (1.0, 1.2)
        highest = min(max([least, *limits, values.max(initial=base)]), self._highest)
        return Range(values.min(initial=base), base + 1.04 * (highest - base)), base

    def value_texts(self, at: int) -> list[str]:
        texts, held, frequency_hz = [self._text(float(self._values[at]))], self.store.held, self.axes.grid_hz[at]
        if held is not None and held.frequency_hz[0] <= frequency_hz <= held.frequency_hz[-1]:
            nearest = int(np.argmin(np.abs(held.frequency_hz - frequency_hz)))
            texts.append(f"held {self._text(float(self._figure(held)[nearest]))}")
        return texts

    @property
    def _highest(self) -> float:
        return HIGHEST_DB if self.word == RETURN_LOSS else HIGHEST_VSWR

    def _figure(self, figures: Figures) -> Array:
        return figures.return_loss_db if self.word == RETURN_LOSS else vswr(figures.reflected_share)

    def _text(self, value: float) -> str:
        if self.word == RETURN_LOSS:
            return format_db(value)
        return f"{value:.2f}" if value < HIGHEST_VSWR else f"over {HIGHEST_VSWR:.0f}"


def vswr(reflected_share: Array | float) -> Array:
    """(1 + r)/(1 - r) of the share r^2 that is reflected; inf from a share of 1 on."""
    r = np.sqrt(reflected_share)
    with np.errstate(divide="ignore"):
        found: Array = np.where(r < 1, (1 + r) / np.where(r < 1, 1 - r, 1), np.inf)
    return found
