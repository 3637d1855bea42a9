"""Whether a window can be shown: the sentences of `app.screen`, each in an environment made for it."""

from __future__ import annotations

import os
import socket
import struct
import subprocess
import sys
from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from contextlib import closing, contextmanager
from pathlib import Path

import pytest

from app.screen import PACKAGES

ROOT = Path(__file__).parent.parent.parent
SCREEN = ("DISPLAY", "WAYLAND_DISPLAY", "XDG_RUNTIME_DIR", "XDG_SESSION_TYPE", "QT_QPA_PLATFORM", "XAUTHORITY")


def why_not(question: str = "why_no_window", **screen: str) -> str | None:
    """What `app.screen` answers in a process with this screen and no other."""
    environment = {k: v for k, v in os.environ.items() if k not in SCREEN} | screen
    script = f"from app.screen import {question} as ask; print(repr(ask()))"
    done = subprocess.run(
        [sys.executable, "-c", script], cwd=ROOT, env=environment, capture_output=True, text=True, timeout=120
    )
    assert (done.returncode, done.stderr) == (0, "")
    answer = done.stdout.removesuffix("\n")
    return None if answer == "None" else answer[1:-1]


def assert_says_what_works(sentence: str | None, *named: str) -> None:
    """One line that names what is wrong and what works all the same."""
    assert sentence is not None
    assert "\n" not in sentence
    for word in (*named, "feedwright solve PLAN"):
        assert word in sentence


def test_no_screen() -> None:
    """Neither variable is set, or both are empty."""
    assert_says_what_works(why_not(), "DISPLAY", "WAYLAND_DISPLAY")
    assert_says_what_works(why_not(DISPLAY="", WAYLAND_DISPLAY=""), "DISPLAY", "WAYLAND_DISPLAY")
    assert_says_what_works(why_not(QT_QPA_PLATFORM="xcb"), "DISPLAY")


@pytest.mark.parametrize("display", [":987", "127.0.0.1:987", "nonsense"])
def test_a_screen_that_does_not_answer(display: str) -> None:
    """As after a broken remote login; Qt would abort."""
    assert_says_what_works(why_not(DISPLAY=display), display)
    assert_says_what_works(why_not(DISPLAY=display, QT_QPA_PLATFORM="xcb"), display)


@pytest.mark.parametrize("platform", ["", "wayland"])
def test_a_wayland_screen_that_does_not_answer(tmp_path: Path, platform: str) -> None:
    """The socket is not there, or nobody listens to it."""
    place = {"XDG_RUNTIME_DIR": str(tmp_path), "QT_QPA_PLATFORM": platform}
    assert_says_what_works(why_not(WAYLAND_DISPLAY="wayland-7", **place), "wayland-7")
    (tmp_path / "wayland-8").touch()
    assert_says_what_works(why_not(WAYLAND_DISPLAY="wayland-8", **place), "wayland-8")
    assert_says_what_works(why_not(WAYLAND_DISPLAY=str(tmp_path / "wayland-8"), **place), "wayland-8")


def test_a_wayland_screen_that_answers(tmp_path: Path) -> None:
    """Its socket takes connections."""
    path = tmp_path / "wayland-9"
    with closing(socket.socket(socket.AF_UNIX)) as server:
        server.bind(str(path))
        server.listen()
        assert why_not(WAYLAND_DISPLAY="wayland-9", XDG_RUNTIME_DIR=str(tmp_path)) is None
        assert why_not(WAYLAND_DISPLAY=str(path)) is None


def test_a_platform_that_qt_does_not_have() -> None:
    """QT_QPA_PLATFORM is a person's own word."""
    assert_says_what_works(why_not(QT_QPA_PLATFORM="papyrus"), "papyrus", "QT_QPA_PLATFORM")


def test_a_platform_without_a_screen() -> None:
    """Asked for by name, it is taken."""
    assert why_not(QT_QPA_PLATFORM="offscreen") is None
    assert why_not(QT_QPA_PLATFORM="offscreen:size=800x600") is None


SETUP_DONE = struct.pack("<BBHHH", 1, 0, 11, 0, 8) + struct.pack(
    "<IIIIHHBBBBBBBBI", 0, 0x400000, 0x1FFFFF, 0, 0, 65535, 0, 0, 0, 0, 32, 32, 8, 255, 0
)
"""An X server's "come in": X Window System Protocol, version 11, Connection Setup; no vendor, formats or screens."""


@contextmanager
def x_server() -> Iterator[int]:
    """The display number of a server that lets one client in."""
    with closing(socket.socket()) as server, ThreadPoolExecutor(1) as pool:
        server.bind(("127.0.0.1", 0))
        server.listen()
        server.settimeout(60)

        def serve() -> None:
            client, _ = server.accept()
            with client:
                client.settimeout(60)
                assert client.recv(12)[:1] == b"l"  # a client of little-endian bytes
                client.sendall(SETUP_DONE)
                client.recv(1)  # until it goes

        served = pool.submit(serve)
        yield server.getsockname()[1] - 6000
        served.result()


def test_a_screen_that_answers() -> None:
    """Over the network, so that nothing is made outside the test."""
    with x_server() as number:
        assert why_not(DISPLAY=f"127.0.0.1:{number}") is None


@pytest.mark.parametrize("question", ["why_no_window", "why_no_qt"])
def test_a_library_that_qt_misses(tmp_path: Path, question: str) -> None:
    """It is named, with what to install; a stand-in for Qt fails as the loader does."""
    (tmp_path / "PySide6").mkdir()
    (tmp_path / "PySide6" / "__init__.py").touch()
    missing = "libEGL.so.1: cannot open shared object file: No such file or directory"
    (tmp_path / "PySide6" / "QtWidgets.py").write_text(f"raise ImportError({missing!r})\n")
    sentence = why_not(question, QT_QPA_PLATFORM="offscreen", PYTHONPATH=str(tmp_path))
    assert sentence is not None
    assert "\n" not in sentence
    assert "libEGL.so.1" in sentence
    assert "apt install libegl1 " in sentence


def test_the_readme_asks_for_the_same_packages() -> None:
    """One list for those who read and those who are told."""
    assert PACKAGES in (ROOT / "README.md").read_text(encoding="utf-8")
