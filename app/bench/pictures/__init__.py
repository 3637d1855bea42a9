"""The pictures of the kinds of part: one line here for each kind in `feedlib.parts.KINDS`."""

from __future__ import annotations

from app.bench.pictures.antenna import AntennaPicture
from app.bench.pictures.base import Picture, Shown
from app.bench.pictures.coax import CoaxPicture
from app.bench.pictures.radio import RadioPicture
from app.bench.pictures.small import LoadPicture, LumpedPicture, MeasuredPicture, PadPicture, TransformerPicture
from app.bench.pictures.splitter import SplitterPicture
from app.bench.pictures.tee import TeePicture

PICTURES: dict[str, Picture] = {
    "radio": RadioPicture(),
    "antenna": AntennaPicture(),
    "coax": CoaxPicture(),
    "tee": TeePicture(),
    "splitter": SplitterPicture(),
    "lumped": LumpedPicture(),
    "pad": PadPicture(),
    "transformer": TransformerPicture(),
    "load": LoadPicture(),
    "measured": MeasuredPicture(),
}

__all__ = ["PICTURES", "Picture", "Shown"]
