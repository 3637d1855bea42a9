"""The kinds of part. A new kind is one module here and one line in KINDS (and one picture in app.bench.pictures)."""

from __future__ import annotations

from feedlib.parts.antenna import Antenna, AntennaImpedance, Resonant, Target
from feedlib.parts.base import Part
from feedlib.parts.coax import Coax, CoaxEnd
from feedlib.parts.data import TouchstoneText
from feedlib.parts.load import Load
from feedlib.parts.lumped import Lumped
from feedlib.parts.measured import Measured
from feedlib.parts.pad import Pad
from feedlib.parts.radio import Radio
from feedlib.parts.splitter import Splitter
from feedlib.parts.tee import Tee
from feedlib.parts.transformer import Transformer

KINDS: dict[str, type[Part]] = {
    kind.KIND: kind for kind in (Radio, Antenna, Coax, Tee, Splitter, Lumped, Pad, Transformer, Load, Measured)
}
"""Every kind of part by the file's word."""

__all__ = [
    "KINDS",
    "Antenna",
    "AntennaImpedance",
    "Coax",
    "CoaxEnd",
    "Load",
    "Lumped",
    "Measured",
    "Pad",
    "Part",
    "Radio",
    "Resonant",
    "Splitter",
    "Target",
    "Tee",
    "TouchstoneText",
    "Transformer",
]
