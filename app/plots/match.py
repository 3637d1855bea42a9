"""The match at the radio over frequency, as return loss or as VSWR."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
from matplotlib.artist import Artist

from app.editing import edits
from app.editing.wording import format_frequency
from app.look import Look
from app.plots.canvas import Pixel
from app.plots.figure import Plot
from app.plots.frequency import Curve, FrequencyAxes, ground_of
from app.plots.scale import Range, followed
from app.store import Store
from feedlib import Answer, Figures, Plan
from feedlib.conventions import Array

RETURN_LOSS, VSWR = "return loss", "VSWR"
HIGHEST = {RETURN_LOSS: 60.0, VSWR: 20.0}
"""What is beyond, up to a perfect or to no match at all, is drawn there."""


class MatchPlot(Plot):
    """Return loss (dB) or VSWR at the radio, with the plan's limit."""

    def __init__(self, store: Store, look: Look) -> None:
        super().__init__(store, look, title="Match", words=(RETURN_LOSS, VSWR))
        self.axes = FrequencyAxes(self.figure)
        self._shown: dict[str, Range] = {}
        self._wear()

    def fill(self, plan: Plan, answer: Answer | None, *, settled: bool) -> bool:
        self.note.setText("dB at the radio" if self.word == RETURN_LOSS else "at the radio")
        limit = self._of_return_loss(plan.limits.return_loss_db)
        curves: tuple[Curve, ...] = ()
        if answer is not None:
            at_mark = float(self._values(answer.mark)[0])
            curves = (
                Curve("", "", self.look.impedance[1], self._drawn(self._values(answer)), self._drawn(at_mark), self._text(at_mark)),
            )
            self.axes.set_curves(answer.frequency_hz, plan.band.marked_hz, curves)
        else:
            self.axes.set_curves(np.zeros(0), plan.band.marked_hz, ())
'''
