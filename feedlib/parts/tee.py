"""The tee: an ideal parallel junction."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

from feedlib.parts.base import Junction
from feedlib.schema import field


@dataclass(frozen=True, slots=True, kw_only=True)
class Tee(Junction):
    """Equal voltage at all ports, currents sum to zero (S_ij = 2/n - delta_ij for equal lines)."""

    KIND: ClassVar[str] = "tee"
    LABEL: ClassVar[str] = "T joint"

    ports: int = field("Ports", default=3, low=3, high=1026)
