"""Whether a window can be shown here; Qt itself would abort the process. Knows no Qt module that needs a screen."""

from __future__ import annotations

import contextlib
import ctypes
import importlib.util
import os
import socket
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
    named = os.environ.get("QT_QPA_PLATFORM", "").partition(";")[0].partition(":")[0]
    if named and not _plugin(named).exists():
        return why_no_qt() or f"QT_QPA_PLATFORM asks for {named!r}, which Qt does not have; {WITHOUT}"
    if named not in ("", "xcb", "wayland"):
        return why_no_qt()
    reasons = []
    if named != "xcb" and os.environ.get("WAYLAND_DISPLAY"):
        reasons.append(_why_no_wayland(os.environ["WAYLAND_DISPLAY"]))
    if named != "wayland" and os.environ.get("DISPLAY"):
        reasons.append(_why_no_xcb(os.environ["DISPLAY"]))
    if not reasons:
        return f"there is no screen (neither DISPLAY nor WAYLAND_DISPLAY is set); {WITHOUT}"
    return why_no_qt() if None in reasons else reasons[0]


def why_no_qt() -> str | None:
    """The sentence that says which library Qt misses, or None."""
    try:
        importlib.import_module("PySide6.QtWidgets")
    except ImportError as error:
        return f"Qt cannot start ({error}); install the system packages it needs, on Debian: apt install {PACKAGES}"
    return None


def _plugin(platform: str) -> Path:
    spec = importlib.util.find_spec("PySide6")
    folder = Path(spec.origin).parent if spec is not None and spec.origin is not None else Path()
    return folder / "Qt" / "plugins" / "platforms" / f"libq{platform}.so"


def _why_no_wayland(display: str) -> str | None:
    place = Path(os.environ.get("XDG_RUNTIME_DIR", ""), display)
    with contextlib.closing(socket.socket(socket.AF_UNIX)) as screen:
        try:
            screen.connect(str(place))
        except OSError as error:
            return f"the screen {display!r} cannot be reached ({error.strerror or error}); {WITHOUT}"
    return None


def _why_no_xcb(display: str) -> str | None:
    try:
        if _plugin("xcb").exists():
            ctypes.CDLL(str(_plugin("xcb")))
        xcb = ctypes.CDLL("libxcb.so.1")
    except OSError as error:
        return f"Qt cannot use this screen ({error}); install, on Debian: apt install {PACKAGES}; {WITHOUT}"
    xcb.xcb_connect.restype = ctypes.c_void_p
    connection = ctypes.c_void_p(xcb.xcb_connect(None, None))
    failed = xcb.xcb_connection_has_error(connection)
    xcb.xcb_disconnect(connection)
    return f"the screen {display!r} cannot be reached; {WITHOUT}" if failed else None
