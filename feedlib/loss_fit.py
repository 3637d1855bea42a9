"""The plan's two loss coefficients fitted to a table of attenuation; knows no cable and no file."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

WEAK_ABOVE = 0.10  # worst relative error above which a fit is called weak


@dataclass(frozen=True, slots=True)
class LossFit:
    """Attenuation as skin*sqrt(f / 1 MHz) + dielectric*(f / 1 MHz), in dB per 100 m.

    ``worst_deviation`` is the fit/table - 1 of largest magnitude (negative: the fit reads low); it is met at
    ``worst_frequency_hz``. ``points`` is how many points were fitted.
    """

    skin_db_per_100m: float
    dielectric_db_per_100m: float
    points: int
    worst_deviation: float
    worst_frequency_hz: float

    @property
    def worst_error(self) -> float:
        """Largest |fit/table - 1| over the points."""
        return abs(self.worst_deviation)

    @property
    def weak(self) -> bool:
        """Whether a point is missed by more than 10 %, or a lone point leaves nothing to check the fit by."""
        return self.points < 2 or self.worst_error > WEAK_ABOVE


def fit_loss(points: Sequence[tuple[float, float]]) -> LossFit | None:
    """The fit of skin and dielectric loss to ``points`` of (f_hz, db_per_100m); None without points.

    Least squares of fit/table - 1, both coefficients non-negative. With two unknowns the optimum is found
    exactly: it is the best feasible one of the fits with both coefficients free, with skin loss only and with
    dielectric loss only. One point cannot tell the two apart and is taken as skin loss.
    """
    if not points:
        return None
    frequency_mhz = np.array([f_hz for f_hz, _ in points]) / 1e6
    table_db_per_100m = np.array([db_per_100m for _, db_per_100m in points])
    relative = np.column_stack([np.sqrt(frequency_mhz), frequency_mhz]) / table_db_per_100m[:, np.newaxis]
    feasible = []
    for free in [[0, 1], [0], [1]] if len(points) > 1 else [[0]]:
        coefficients = np.zeros(2)
        coefficients[free] = np.linalg.lstsq(relative[:, free], np.ones(len(points)), rcond=None)[0]
        if np.all(coefficients >= 0):
            feasible.append((coefficients, relative @ coefficients - 1))
    (skin, dielectric), deviation = min(feasible, key=lambda candidate: float(np.sum(candidate[1] ** 2)))
    worst = int(np.argmax(np.abs(deviation)))
    return LossFit(
        skin_db_per_100m=float(skin),
        dielectric_db_per_100m=float(dielectric),
        points=len(points),
        worst_deviation=float(deviation[worst]),
        worst_frequency_hz=points[worst][0],
    )
