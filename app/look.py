"""Ink, paper and letters: the palettes, the impedance scale and the fonts that every view draws with.

Colours are plain "#rrggbb" text, so that the bench and the plots share them. Knows no plan and no window.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import Literal

from PySide6.QtGui import QColor, QFont, QPalette

Verdict = Literal["holds", "near", "fails", "unknown"]

SIGNS: dict[Verdict, str] = {"holds": "✓", "near": "~", "fails": "✗", "unknown": "–"}
"""Colour never says anything alone: each state has a sign too."""


@dataclass(frozen=True, slots=True)
class Look:
    """One theme. impedance : colours at 25, 50, 75 and 100 ohm; curves : for antennas in plots, colour-blind safe."""

    name: Literal["light", "dark"]
    paper: str
    card: str
    ink: str
    soft: str
    hairline: str
    field: str
    holds: str
    near: str
    fails: str
    fails_wash: str
    band_wash: str
    impedance: tuple[str, str, str, str]
    curves: tuple[str, ...]

    def verdict(self, state: Verdict) -> str:
        """Colour of a state."""
        return {"holds": self.holds, "near": self.near, "fails": self.fails, "unknown": self.soft}[state]

    def impedance_colour(self, z0_ohm: float) -> str:
        """Colour of a characteristic impedance on the continuous scale."""
        stops = (
            (25.0, self.impedance[0]),
            (50.0, self.impedance[1]),
            (75.0, self.impedance[2]),
            (100.0, self.impedance[3]),
        )
        if z0_ohm <= stops[0][0]:
            return stops[0][1]
        for (low, first), (high, second) in pairwise(stops):
            if z0_ohm <= high:
                return blend(first, second, (z0_ohm - low) / (high - low))
        return stops[-1][1]

    def curve(self, number: int) -> str:
        """Colour of the curve of antenna `number` (from 0)."""
        return self.curves[number % len(self.curves)]


LIGHT = Look(
    name="light",
    paper="#f6f4ee",
    card="#ffffff",
    ink="#1d2730",
    soft="#5f6972",
    hairline="#d9d4c7",
    field="#f6f4ee",
    holds="#1b8a6b",
    near="#c46a12",
    fails="#b3362d",
    fails_wash="#f7e6e4",
    band_wash="#e9e8e4",
    impedance=("#3b6ea8", "#5b7f95", "#c9822b", "#8a5aa8"),
    curves=("#1b8a6b", "#c46a12", "#3b6ea8", "#8a5aa8", "#6b7a1f", "#a8487a", "#2b8ca3", "#7a5a3c"),
)
DARK = Look(
    name="dark",
    paper="#171c21",
    card="#20272e",
    ink="#e8e6df",
    soft="#98a3ad",
    hairline="#39434c",
    field="#171c21",
    holds="#4cc3a0",
    near="#e0a050",
    fails="#f0766c",
    fails_wash="#3a2f32",
    band_wash="#20282f",
    impedance=("#6f9fd8", "#8db0c6", "#e0a050", "#b98ad6"),
    curves=("#4cc3a0", "#e0a050", "#6f9fd8", "#b98ad6", "#b5c455", "#e07fb0", "#5fc0d6", "#c39a70"),
)


def blend(first: str, second: str, share: float) -> str:
    """The colour `share` of the way from first to second."""
    a, b = QColor(first), QColor(second)
    parts = ((a.red(), b.red()), (a.green(), b.green()), (a.blue(), b.blue()))
    return "#" + "".join(f"{round(x + (y - x) * share):02x}" for x, y in parts)


def system_look(palette: QPalette) -> Look:
    """The look that goes with the system's palette."""
    return DARK if palette.color(QPalette.ColorRole.Window).lightness() < 128 else LIGHT


SIZES: dict[Literal["small", "text", "head", "title"], int] = {"small": 12, "text": 13, "head": 15, "title": 19}
"""The four sizes of text, in pixels at 100 %."""


def font(size: Literal["small", "text", "head", "title"] = "text", *, bold: bool = False) -> QFont:
    """A font of the one family in one of the four sizes."""
    made = QFont()
    made.setPixelSize(SIZES[size])
    made.setBold(bold)
    return made


def palette_of(look: Look) -> QPalette:
    """The Qt palette of a look."""
    palette = QPalette()
    role = QPalette.ColorRole
    for which, colour in (
        (role.Window, look.paper),
        (role.Base, look.field),
        (role.AlternateBase, look.card),
        (role.Button, look.card),
        (role.ToolTipBase, look.card),
        (role.Text, look.ink),
        (role.WindowText, look.ink),
        (role.ButtonText, look.ink),
        (role.ToolTipText, look.ink),
        (role.BrightText, look.card),
        (role.PlaceholderText, look.soft),
        (role.Mid, look.hairline),
        (role.Midlight, look.hairline),
        (role.Light, look.card),
        (role.Dark, look.soft),
        (role.Shadow, look.hairline),
        (role.Highlight, look.impedance[1]),
        (role.HighlightedText, look.card),
        (role.Link, look.impedance[0]),
    ):
        palette.setColor(which, QColor(colour))
    for which in (role.Text, role.WindowText, role.ButtonText):
        palette.setColor(QPalette.ColorGroup.Disabled, which, QColor(look.soft))
    return palette
