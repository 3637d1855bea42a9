"""Plots on a screen for tests: small plans, real widgets that show them, and what is drawn there."""

from __future__ import annotations

import os

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

import numpy as np
from matplotlib.colors import to_hex
from matplotlib.lines import Line2D
from PySide6.QtCore import QPoint, Qt
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from app.look import LIGHT, Look
from app.plots.bundle import Bundle
from app.plots.figure import Plot
from app.plots.smith import SmithPlot
from app.store import Store
from feedlib.plan import Plan
from tests.plans import Sketch

BAND = {"start_hz": 860e6, "stop_hz": 870e6, "points": 101}


def on_a_tee(*impedances: complex, limits: dict[str, float] | None = None) -> Plan:
    """Antennas A, B, C ... side by side on one T joint, each at the end of a leg; currents are V/Z without a length."""
    sketch = Sketch(**BAND, mark_hz=868e6, limits=limits or {})
    sketch.add("radio", "radio")
    sketch.add("tee", "T1", ports=max(3, len(impedances) + 1))
    sketch.join("radio:1", "T1:1")
    for number, z_ohm in enumerate(impedances):
        letter = chr(ord("A") + number)
        antenna, leg = sketch.antenna(z_ohm, letter), sketch.coax(0.0, part_id=f"leg {letter}")
        sketch.join(f"T1:{number + 2}", f"{leg}:1", f"{leg}:2", f"{antenna}:1")
    return sketch.plan()


def alone(z_ohm: complex, limits: dict[str, float] | None = None, sweep: bool = False) -> Plan:
    """One antenna on the radio."""
    wide = {"sweep": {"start_hz": 800e6, "stop_hz": 900e6, "points": 201}} if sweep else {}
    sketch = Sketch(**BAND, mark_hz=868e6, limits=limits or {}, **wide)
    sketch.join(f"{sketch.add('radio', 'radio')}:1", f"{sketch.antenna(z_ohm, 'A')}:1")
    return sketch.plan()


def shown(qtbot: QtBot, kind: type[Plot], plan: Plan, look: Look = LIGHT, size: tuple[int, int] = (400, 300)) -> Plot:
    """A plot of a kind on the screen, for a plan."""
    plot = kind(Store(plan), look)
    qtbot.addWidget(plot)
    plot.resize(*size)
    plot.show()
    qtbot.waitExposed(plot)
    painted(plot)
    return plot


def painted(widget: QWidget) -> None:
    """Let waiting events and paint events happen."""
    QApplication.processEvents()
    widget.grab()


def changed(plot: Plot, plan: Plan) -> None:
    """Make that the plan, and let everything be painted."""
    plot.store.edit("Change", plan)
    plot.store.solve_now()
    painted(plot)


def on_surface(plot: Plot, x: float, y: float) -> QPoint:
    """Where a place in device pixels, y upwards, is on the surface."""
    return QPoint(round(x / plot.canvas.scale), round(plot.canvas.height() - y / plot.canvas.scale))


def at_value(plot: Plot, frequency_hz: float, value: float) -> QPoint:
    """Where a frequency and a value are on the surface."""
    return on_surface(plot, *plot.axes.axes.transData.transform((frequency_hz, value)))


def at_reflection(plot: SmithPlot, gamma: complex) -> QPoint:
    """Where a reflection coefficient is on the surface."""
    return on_surface(plot, *plot.axes.transData.transform((gamma.real, gamma.imag)))


def click(qtbot: QtBot, plot: Plot, at: QPoint) -> None:
    """Click there."""
    qtbot.mouseClick(plot.canvas, Qt.MouseButton.LeftButton, pos=at)
    painted(plot)


def line_of(bundle: Bundle, colour: str) -> Line2D:
    """The one line that is drawn in a colour."""
    (line,) = (line for line in bundle.lines if line.get_visible() and to_hex(line.get_color()) == colour)
    return line


def rows(line: Line2D, points: int) -> np.ndarray:
    """(N, points) complex x + jy of the curves that share a line; gaps are between them."""
    places = (line.get_xdata() + 1j * line.get_ydata()).reshape(-1, points + 1)
    assert np.isnan(places[:, -1]).all()
    return places[:, :-1]


def drawn(plot: Plot, number: int = 0) -> np.ndarray:
    """The values of a curve as drawn; no other one has its colour."""
    (row,) = rows(line_of(plot.axes.bundle, plot.axes.curves[number].colour), plot.axes.grid_hz.size)
    return row.imag


def widths(plot: Plot) -> list[float]:
    """How wide each curve is drawn; none has the colour of another one."""
    return [line_of(plot.axes.bundle, curve.colour).get_linewidth() for curve in plot.axes.curves]
