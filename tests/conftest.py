"""What every test stands on: no screen, no settings of this machine, no widget left behind."""

from __future__ import annotations

import gc
import os
from collections.abc import Iterator
from pathlib import Path

os.environ["QT_QPA_PLATFORM"] = "offscreen"
os.environ["MPLBACKEND"] = "Agg"

import pytest
from hypothesis import HealthCheck, settings
from PySide6.QtCore import QCoreApplication, QEvent, QSettings
from PySide6.QtWidgets import QApplication, QWidget

# New examples at every run, everywhere; a failure prints what brings it back. Slow machines are not a failure.
settings.register_profile(
    "feedwright",
    parent=settings.get_profile("default"),
    deadline=None,
    derandomize=False,
    print_blob=True,
    suppress_health_check=[HealthCheck.too_slow],
)
settings.load_profile("feedwright")

APP_TESTS = Path(__file__).parent / "app"


@pytest.fixture(autouse=True)
def own_settings(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> None:
    """Settings that begin empty and end with the test."""
    if request.path.is_relative_to(APP_TESTS):
        folder = str(tmp_path_factory.mktemp("settings"))
        QSettings.setDefaultFormat(QSettings.Format.IniFormat)
        for kind in (QSettings.Format.IniFormat, QSettings.Format.NativeFormat):
            for scope in (QSettings.Scope.UserScope, QSettings.Scope.SystemScope):
                QSettings.setPath(kind, scope, folder)


@pytest.fixture(autouse=True)
def no_leaked_windows(request: pytest.FixtureRequest) -> Iterator[None]:
    """Fails a test of the program that leaves a top-level widget behind."""
    if not request.path.is_relative_to(APP_TESTS):
        yield
        return
    before = set(QApplication.topLevelWidgets())
    yield
    leaked = _new_windows(before)
    if leaked:
        gc.collect()  # widgets that only a cycle of Python objects still holds
        leaked = _new_windows(before)
    names = [f"{type(w).__name__} {w.windowTitle() or w.objectName()!r}" for w in leaked]
    for widget in leaked:
        widget.hide()  # closing would ask about unsaved changes, and wait for ever
        widget.deleteLater()
    _delete_now()
    if names:
        pytest.fail(f"left behind: {', '.join(names)}; hand windows to qtbot.addWidget")


def _new_windows(before: set[QWidget]) -> list[QWidget]:
    """The top-level widgets that were not there before; the tool tip that Qt keeps for itself does not count."""
    _delete_now()
    return [w for w in QApplication.topLevelWidgets() if w not in before and w.objectName() != "qtooltip_label"]


def _delete_now() -> None:
    """Do all deletions that wait for the event loop."""
    if QApplication.instance() is not None:
        QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
        QCoreApplication.processEvents()
