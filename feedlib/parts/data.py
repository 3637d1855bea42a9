"""Touchstone text inside a plan, read once when the record is made."""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass

import numpy as np

from feedlib.conventions import Array, ComplexArray
from feedlib.errors import FeedError, FieldError
from feedlib.schema import Record, field
from feedlib.touchstone import NetworkData, interpolate, read_touchstone


@dataclass(frozen=True, slots=True, kw_only=True)
class TouchstoneText(Record):
    """A Touchstone file's name and whole text, kept in the plan; `data` is what it says."""

    name: str = field("File name")
    text: str = field("Text")
    data: NetworkData = dataclasses.field(init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        Record.__post_init__(self)
        try:
            object.__setattr__(self, "data", read_touchstone(self.text, self.name))
        except FeedError as error:
            raise FieldError("text", str(error)) from None

    def s_at(self, frequency_hz: Array) -> ComplexArray:
        """S (P, P, F) at the file's own references, linear in Re and Im; nan outside the data."""
        return np.asarray(interpolate(self.data, frequency_hz))

    def covers_hz(self) -> tuple[float, float]:
        """Lowest and highest frequency of the data."""
        return float(self.data.frequency_hz[0]), float(self.data.frequency_hz[-1])
