"""The small text at the pointer, kept inside the plot; must not know what it says."""

from __future__ import annotations

from collections.abc import Sequence

from matplotlib.artist import Artist
from matplotlib.figure import Figure

from app.look import Look
from app.plots.canvas import Pixel
from app.plots.letters import Letters

AWAY_PX = 12.0


class Readout:
    """Lines of text on a card beside a point; on its other side where there is no room."""

    def __init__(self, figure: Figure, look: Look) -> None:
        self._figure = figure
        self.text = Letters(figure)
        self.recolour(look)

    def recolour(self, look: Look) -> None:
        """Wear another look."""
        self.text.set_color(look.ink)
        self.text.set_card(look.card, look.hairline)

    def beside(self, at: Pixel, lines: Sequence[str], scale: float) -> Artist:
        """The text, placed beside a point; at : device pixels, scale : device pixels in a pixel at 100 %."""
        self.text.set_text("\n".join(lines))
        size = self.text.get_window_extent()
        room, away = self._figure.bbox, AWAY_PX * scale
        right = at[0] + away + size.width < room.width - away / 2
        x = at[0] + away if right else max(away / 2, at[0] - away - size.width)
        y = min(max(at[1] + away, away / 2), room.height - size.height - away / 2)
        self.text.set_position((x, y))
        return self.text
