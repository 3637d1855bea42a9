"""What the command line shows: the window, and a picture of it."""

from __future__ import annotations

import os
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest
from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QImage

from app.cli import main
from feedlib import write_plan
from tests.plans import Sketch

ROOT = Path(__file__).parent.parent.parent
SCREEN = ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM")


@pytest.fixture
def plan(tmp_path: Path) -> Path:
    """A small plan as a file."""
    sketch = Sketch(1e8, 2e8, 3, title="Bare T joint", limits={"return_loss_db": 9})
    sketch.add("radio", "radio")
    sketch.add("tee", "T1")
    for name in ("A", "B"):
        sketch.antenna(50, name)
    sketch.join("radio:1", "T1:1", "T1:2", "A:1", "T1:3", "B:1")
    path = tmp_path / "harness.feedplan"
    write_plan(sketch.plan(), path)
    return path


def run(words: list[str], *, without: tuple[str, ...] = (), **changed: str) -> subprocess.CompletedProcess[str]:
    """Python in a process of its own, with some of the environment changed."""
    environment = {k: v for k, v in os.environ.items() if k not in without} | changed
    return subprocess.run(
        [sys.executable, *words], cwd=ROOT, env=environment, capture_output=True, text=True, timeout=120
    )


def picture(plan: Path, *words: str) -> QImage:
    """The picture that a command draws."""
    out = plan.with_name("window.png")
    out.unlink(missing_ok=True)
    assert main(["picture", str(plan), "--out", str(out), *words]) == 0
    image = QImage(str(out), "PNG")
    assert not image.isNull()
    return image


def lightness(image: QImage) -> int:
    """Of all pixels together, 0 to 255."""
    mean = image.scaled(1, 1, Qt.AspectRatioMode.IgnoreAspectRatio, Qt.TransformationMode.SmoothTransformation)
    return mean.pixelColor(0, 0).lightness()


# picture


def test_a_picture_has_the_usual_size(plan: Path) -> None:
    """1600x1000 when nothing else is asked for."""
    assert picture(plan).size() == QSize(1600, 1000)


@pytest.mark.parametrize("size", [(1100, 700), (2000, 901)])
def test_a_picture_has_the_size_that_was_asked_for(plan: Path, size: tuple[int, int]) -> None:
    """In pixels."""
    assert picture(plan, "--size", f"{size[0]}x{size[1]}").size() == QSize(*size)


@pytest.mark.parametrize("size", ["400x300", "899x1000", "1600x599", "900x600"])
def test_a_small_size_is_drawn_as_it_is_or_refused(plan: Path, capsys: pytest.CaptureFixture[str], size: str) -> None:
    """Never quietly another one: the window has a least size."""
    out = plan.with_name("small.png")
    code = main(["picture", str(plan), "--out", str(out), "--size", size])
    told = capsys.readouterr()
    if code == 0:
        drawn = QImage(str(out)).size()
        assert f"{drawn.width()}x{drawn.height()}" == size
    else:
        assert code == 2
        assert size in told.err
        assert not out.exists()


@pytest.mark.parametrize(
    "size",
    [
        *("", "x", "1600", "1600x", "x1000", "0x0", "-1600x1000", "1600x1000x2", "1e3x1000", "1600,1000"),
        *("1600x99999999", "8001x1000", "٣٠٠٠x٣٠٠٠", "1600x1000\n"),
    ],
)
def test_a_size_that_is_none_is_refused(plan: Path, capsys: pytest.CaptureFixture[str], size: str) -> None:
    """One line, and no picture."""
    out = plan.with_name("window.png")
    assert main(["picture", str(plan), "--out", str(out), f"--size={size}"]) == 2
    told = capsys.readouterr()
    assert told.out == ""
    assert told.err.startswith("feedwright: argument --size: wants ")
    assert len(told.err.splitlines()) == 1
    assert not out.exists()


def test_light_and_dark_are_two_pictures(plan: Path) -> None:
    """Paper is light, and dark at night."""
    assert lightness(picture(plan)) > 192
    assert lightness(picture(plan, "--dark")) < 64


def test_a_picture_says_something_of_the_plan(plan: Path) -> None:
    """Another plan, another picture."""
    first = picture(plan)
    plan.write_text(plan.read_text(encoding="utf-8").replace('"fixed_ohm": [50, 0]', '"fixed_ohm": [90, 0]'))
    assert picture(plan) != first


def test_a_plan_that_cannot_be_solved_has_a_picture_too(plan: Path) -> None:
    """Half-built plans are normal; the window shows what is missing."""
    plan.write_text(plan.read_text(encoding="utf-8").replace('"kind": "radio"', '"kind": "load"'))
    assert picture(plan).size() == QSize(1600, 1000)


@pytest.mark.parametrize("target", ["no such folder/window.png", "a folder"])
def test_a_picture_that_cannot_be_written(plan: Path, capsys: pytest.CaptureFixture[str], target: str) -> None:
    """One line that names the file."""
    (plan.parent / "a folder").mkdir()
    assert main(["picture", str(plan), "--out", str(plan.parent / target)]) == 2
    told = capsys.readouterr()
    assert told.out == ""
    assert told.err.startswith("feedwright: ")
    assert str(plan.parent / target) in told.err
    assert len(told.err.splitlines()) == 1
    assert sorted(p.name for p in plan.parent.rglob("*")) == ["a folder", "harness.feedplan"]


def test_a_picture_needs_no_screen(plan: Path) -> None:
    """And says nothing when all is well."""
    out = plan.with_name("window.png")
    done = run(["-m", "app", "picture", str(plan), "--out", str(out)], without=SCREEN)
    assert (done.returncode, done.stdout) == (0, "")
    assert out.read_bytes().startswith(b"\x89PNG\r\n\x1a\n")


# the window


def test_without_a_screen_one_sentence_says_what_works(plan: Path) -> None:
    """Qt itself would abort."""
    for words in ([], [str(plan)]):
        done = run(["-m", "app", *words], without=SCREEN)
        assert (done.returncode, done.stdout) == (2, "")
        assert len(done.stderr.splitlines()) == 1
        assert "feedwright solve PLAN" in done.stderr


OPENED = """
import sys
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication
from app.cli import main
from app.run import make_application

def look():
    print([w.windowTitle() for w in QApplication.topLevelWidgets() if w.isVisible()])
    QApplication.quit()

application = make_application()
QTimer.singleShot(0, look)
sys.exit(main(sys.argv[1:]))
"""


def test_a_plan_alone_opens_the_window(plan: Path, tmp_path: Path) -> None:
    """On the plan that was named, or on a new one."""
    done = run(["-c", OPENED, str(plan)], XDG_CONFIG_HOME=str(tmp_path))
    assert (done.returncode, done.stderr) == (0, "")
    assert "Bare T joint" in done.stdout
    assert "harness.feedplan" in done.stdout
    new = run(["-c", OPENED], XDG_CONFIG_HOME=str(tmp_path))
    assert (new.returncode, new.stderr) == (0, "")
    assert "Feedwright" in new.stdout
    assert "Bare T joint" not in new.stdout


@pytest.mark.parametrize("words", [["solve", "PLAN"], ["solve", "nothing.feedplan"], ["solve", "--help"]])
def test_the_module_is_the_command(plan: Path, words: list[str]) -> None:
    """`python -m app` does what the installed command does."""
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    module, function = project["scripts"]["feedwright"].split(":")
    words = [str(plan) if word == "PLAN" else word for word in words]
    command = run(["-c", f"import sys; from {module} import {function}; sys.exit({function}())", *words])
    as_module = run(["-m", "app", *words])
    told = (as_module.returncode, as_module.stdout, as_module.stderr)
    assert told == (command.returncode, command.stdout, command.stderr)
    assert as_module.returncode == (2 if "nothing.feedplan" in words else 0)
