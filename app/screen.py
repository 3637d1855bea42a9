"""Whether a window can be shown here; Qt itself would abort the process. Knows no Qt module that needs a screen."""

from __future__ import annotations

import ctypes
import importlib.util
import os
import sys
from pathlib import Path

PACKAGES = (
    "libegl1 libgl1 libxkbcommon0 libdbus-1-3 libfontconfig1 libglib2.0-0 libxcb-cursor0 libxcb-icccm4 "
    "libxcb-image0 libxcb-keysyms1 libxcb-render-util0 libxcb-shape0 libxcb-xkb1 libxkbcommon-x11-0"
)
WITHOUT = "`feedwright solve PLAN` works without a screen"


def why_no_window() -> str | None:
    """The sentence that says why no window can be opened, and what to do; None when all is well."""
    if not sys.platform.startswith("linux"):
        return why_no_qt()
    named = os.environ.get("QT_QPA_PLATFORM", "")
    if named and not named.startswith("xcb"):
        return why_no_qt()
    if not os.environ.get("DISPLAY") and not os.environ.get("WAYLAND_DISPLAY"):
        return f"there is no screen (neither DISPLAY nor WAYLAND_DISPLAY is set); {WITHOUT}"
    reason = why_no_qt()
    if reason or not os.environ.get("DISPLAY"):
        return reason
    return _why_no_xcb()


def why_no_qt() -> str | None:
    """The sentence that says which library Qt misses, or None."""
    try:
        importlib.import_module("PySide6.QtWidgets")
    except ImportError as error:
        return f"Qt cannot start ({error}); install the system packages it needs, on Debian: apt install {PACKAGES}"
    return None


def _why_no_xcb() -> str | None:
    spec = importlib.util.find_spec("PySide6")
    if spec is None or spec.origin is None:
        return None
    plugin = Path(spec.origin).parent / "Qt" / "plugins" / "platforms" / "libqxcb.so"
    try:
        if plugin.exists():
            ctypes.CDLL(str(plugin))
        xcb = ctypes.CDLL("libxcb.so.1")
    except OSError as error:
        return f"Qt cannot use this screen ({error}); install, on Debian: apt install {PACKAGES}; {WITHOUT}"
    xcb.xcb_connect.restype = ctypes.c_void_p
    connection = ctypes.c_void_p(xcb.xcb_connect(None, None))
    failed = xcb.xcb_connection_has_error(connection)
    xcb.xcb_disconnect(connection)
    if failed:
        return f"the screen {os.environ['DISPLAY']!r} cannot be reached; {WITHOUT}"
    return None
