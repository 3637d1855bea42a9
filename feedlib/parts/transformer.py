"""The ideal transformer."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

from feedlib.conventions import Array
from feedlib.errors import FieldError
from feedlib.parts.base import Chain, TwoPort
from feedlib.schema import Record, field


@dataclass(frozen=True, slots=True, kw_only=True)
class Transformer(TwoPort):
    """V1 = n V2, I1 = -I2/n with both currents into the part (Pozar, 4th ed., Table 4.1)."""

    KIND: ClassVar[str] = "transformer"
    LABEL: ClassVar[str] = "transformer"

    ratio: float = field("Ratio V1/V2", hint="turns ratio; 2 turns 50 ohm at port 2 into 200 ohm at port 1")

    def __post_init__(self) -> None:
        Record.__post_init__(self)
        if self.ratio == 0:
            raise FieldError("ratio", "wants a number other than 0")

    def chain(self, frequency_hz: Array) -> Chain:
        return Chain(self.ratio + 0j, 0j, 0j, 1 / self.ratio + 0j, 1 + 0j)
