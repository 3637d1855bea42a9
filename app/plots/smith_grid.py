"""The geometry of the Smith chart in the plane of the reflection coefficient; numbers only, no matplotlib.

P. H. Smith, Electronics 12 (1939) 29: circles of constant resistance and arcs of constant reactance, both over the
reference, all of them inside the unit circle.
"""

from __future__ import annotations

import cmath
import math

import numpy as np

from feedlib.conventions import ComplexArray

RESISTANCES = {0.2: 2.0, 0.5: 5.0, 1.0: math.inf, 2.0: 5.0, 5.0: math.inf}
"""Each circle of constant resistance with the reactance up to which it is drawn: no crowd at the open end."""
REACTANCES = {0.2: 1.0, 0.5: 2.0, 1.0: 5.0, 2.0: 5.0, 5.0: math.inf}
"""Each arc of constant reactance with the resistance up to which it is drawn."""
POINTS = 121


def reflection(impedance_ohm: ComplexArray, reference_ohm: float) -> ComplexArray:
    """(F,) (Z - R)/(Z + R); 1 where Z is infinite, nan where it is nan."""
    open_circuit = np.isinf(impedance_ohm)
    z = np.where(open_circuit, 0.0, impedance_ohm)
    with np.errstate(divide="ignore", invalid="ignore"):
        found: ComplexArray = np.where(open_circuit, 1.0, (z - reference_ohm) / (z + reference_ohm))
    return found


def resistance_circle(resistance: float, reactance: float = math.inf) -> ComplexArray:
    """The circle of one resistance from the reactance -x through 0 to x, all over the reference."""
    centre, radius = resistance / (1 + resistance), 1 / (1 + resistance)
    end = cmath.phase(_normalised(complex(resistance, reactance)) - centre)
    return _circle(centre, radius, end, 2 * math.pi - end)


def reactance_arc(reactance: float, resistance: float = math.inf) -> ComplexArray:
    """The arc of one reactance (not 0) from no resistance to r, all over the reference."""
    centre, radius = complex(1, 1 / reactance), 1 / abs(reactance)
    start, stop = (cmath.phase(_normalised(complex(r, reactance)) - centre) for r in (0.0, resistance))
    turn = math.remainder(stop - start, 2 * math.pi)  # the part inside the unit circle is less than half a turn
    return _circle(centre, radius, start, start + turn)


def limit_circle(return_loss_db: float, source_ohm: complex, reference_ohm: float) -> ComplexArray:
    """The impedances whose return loss at the source is the limit: |(Z - Zs*)/(Z + Zs)| = 10^(-limit/20)."""
    w = _circle(0, 10 ** (-return_loss_db / 20), 0, 2 * math.pi)
    # Z = (Zs* + w Zs)/(1 - w), put into (Z - R)/(Z + R) without the division, which a limit of 0 dB would not allow.
    above, below = source_ohm.conjugate() + w * source_ohm, reference_ohm * (1 - w)
    circle: ComplexArray = (above - below) / (above + below)
    return circle


def _circle(centre: complex, radius: float, start: float, stop: float) -> ComplexArray:
    around: ComplexArray = centre + radius * np.exp(1j * np.linspace(start, stop, POINTS))
    return around


def _normalised(z: complex) -> complex:
    return 1.0 if math.isinf(z.real) or math.isinf(z.imag) else (z - 1) / (z + 1)
