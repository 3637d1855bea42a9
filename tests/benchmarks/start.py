"""Start-up: until the window can be used, against a bare script that shows three empty canvases."""

from __future__ import annotations

import os
import subprocess
import sys

import numpy as np

from tests.benchmarks.timing import interleaved, line

BARE = """
import numpy
from PySide6.QtWidgets import QApplication, QWidget, QHBoxLayout
from matplotlib.backends.backend_qtagg import FigureCanvasQTAgg
from matplotlib.figure import Figure
application = QApplication([])
window = QWidget()
layout = QHBoxLayout(window)
for _ in range(3):
    layout.addWidget(FigureCanvasQTAgg(Figure()))
window.resize(1600, 1000)
window.show()
for _ in range(5):
    application.processEvents()
"""
OURS = """
from app.run import make_application
application = make_application()
from app.window import Window
from tests.benchmarks.trees import tree
window = Window(tree(4), None, remember=False)
window.show()
application.processEvents()
{plots}
for _ in range(5):
    application.processEvents()
"""


def run() -> None:
    """Print the ratios."""
    environment = {**os.environ, "QT_QPA_PLATFORM": "offscreen"}

    def script(text: str) -> None:
        subprocess.run([sys.executable, "-c", text], check=True, env=environment, stderr=subprocess.DEVNULL)

    times = interleaved(
        {
            "bare": lambda: script(BARE),
            "usable": lambda: script(OURS.format(plots="")),
            "complete": lambda: script(OURS.format(plots="window.build_plots()")),
        },
        7,
    )
    bare = float(np.median(times["bare"]))
    print(f"Start (a bare script with three empty canvases takes {bare:.2f} s)")
    line("window usable / bare script", float(np.median(times["usable"])) / bare, "wanted: at most 1.5")
    line("window with its plots / bare script", float(np.median(times["complete"])) / bare, "for information")
