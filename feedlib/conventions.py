"""The conventions, in one place; everything else links here.

Time factor e^(+jwt). V and I are rms. Phase reference: the source's open-circuit voltage, real and positive,
2*sqrt(power_w * Re Zs). gamma = alpha + j*beta with alpha in Np/m; a wave that travels along +x goes as e^(-gamma x).
Power waves after Kurokawa (IEEE Trans. MTT 13, 1965, p. 194): a = (V + Z I)/(2 sqrt(Re Z)),
b = (V - Z* I)/(2 sqrt(Re Z)), with I flowing into the port; at a real reference they are the ordinary travelling waves.

Arrays: frequency is the last axis; rows (parts, edges, ports) stand before it; any batch axes (many builds, many
lengths) stand before those. Only the contract's public arrays, (F, N) and (F, P, P), are turned, as views.

A *state* is a pair (v, i) up to scale: V = s v, I = s i for one complex s. Joins and cascades of states need no
division, so open, short and lossless half-wave sections are ordinary values.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
ComplexArray = NDArray[np.complex128]
Index = NDArray[np.intp]

SPEED_OF_LIGHT_M_PER_S = 299_792_458.0
NEPER_PER_DB = math.log(10) / 20
WAVE_OHM = 50.0
"""Reference of the waves inside the solver; any positive value gives the same answer."""


def guided_wavelength_m(frequency_hz: float, velocity_factor: float) -> float:
    """Wavelength in the line (m): velocity_factor * c / f."""
    return velocity_factor * SPEED_OF_LIGHT_M_PER_S / frequency_hz
