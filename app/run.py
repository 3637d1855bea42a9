"""Starts Qt: the window on a screen, or a picture of it without one."""

from __future__ import annotations

import os
import sys
from pathlib import Path

from PySide6.QtCore import QBuffer, QTimer
from PySide6.QtGui import QFont, QFontDatabase, QIcon, QImageWriter
from PySide6.QtWidgets import QApplication

from app.look import DARK, LIGHT
from app.reporting import catch_bugs
from feedlib import Plan
from feedlib.assets_place import ASSETS


def make_application() -> QApplication:
    """The one application object, with fonts even where the system has none."""
    application = QApplication.instance() or QApplication(sys.argv[:1])
    assert isinstance(application, QApplication)
    application.setApplicationName("Feedwright")
    application.setOrganizationName("Feedwright")
    application.setDesktopFileName("feedwright")
    application.setStyle("Fusion")
    application.setWindowIcon(QIcon(str(ASSETS / "feedwright.svg")))
    if not QFontDatabase.families():
        _load_fonts()
    return application


def _load_fonts() -> None:
    """The letters that matplotlib brings along."""
    import matplotlib

    folder = Path(matplotlib.get_data_path()) / "fonts" / "ttf"
    for name in ("DejaVuSans.ttf", "DejaVuSans-Bold.ttf"):
        QFontDatabase.addApplicationFont(str(folder / name))
    QApplication.setFont(QFont("DejaVu Sans"))


def run_window(plan: Plan | None, path: Path | None) -> int:
    """Open the window and stay until it is closed; returns the exit code."""
    application = make_application()
    catch_bugs()
    from app.window import Window

    window = Window(plan, path)
    window.show()
    QTimer.singleShot(0, window.build_plots)
    return application.exec()


def draw_picture(plan: Plan, path: Path, size: tuple[int, int], *, dark: bool) -> bytes:
    """A picture of the window, as the bytes of a PNG file."""
    os.environ["QT_QPA_PLATFORM"] = "offscreen"
    application = make_application()
    from app.window import Window

    window = Window(plan, path, look=DARK if dark else LIGHT, remember=False)
    window.resize(*size)
    window.show()
    window.build_plots()
    for _ in range(5):
        application.processEvents()
    window.settle()
    application.processEvents()
    buffer = QBuffer()
    QImageWriter(buffer, b"PNG").write(window.grab().toImage())
    window.close_without_asking()
    window.deleteLater()
    return bytes(buffer.data().data())
