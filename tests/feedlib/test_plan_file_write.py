"""Writing a plan: whatever happens, the old file or the new one is there, and nothing else is left lying about."""

from __future__ import annotations

import errno
import json
import os
import stat
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from feedlib import Plan, read_plan, write_plan
from feedlib.plan_file import format_plan, parse_plan
from tests.feedlib.plan_documents import EXAMPLE, plan_document

NEW = parse_plan(EXAMPLE.encode())
OLD = parse_plan(json.dumps(plan_document(title="old")).encode())


@pytest.fixture
def target(tmp_path: Path) -> Path:
    """A file with the old plan, alone in its folder."""
    path = tmp_path / "folder" / "harness.feedplan"
    path.parent.mkdir()
    write_plan(OLD, path)
    return path


def names(folder: Path) -> list[str]:
    return sorted(os.listdir(folder))


def test_new_file(tmp_path: Path) -> None:
    path = tmp_path / "天線 Ω.feedplan"
    write_plan(NEW, path)
    assert path.read_bytes() == format_plan(NEW).encode()
    assert names(tmp_path) == [path.name]
    assert read_plan(path) == NEW


def test_old_file_is_replaced_whole(target: Path) -> None:
    long = Plan(band=NEW.band, notes="x" * 100_000)
    write_plan(long, target)
    write_plan(NEW, str(target))
    assert target.read_bytes() == EXAMPLE.encode()
    assert names(target.parent) == [target.name]


def test_plan_in_the_working_folder(target: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(target.parent)
    write_plan(NEW, target.name)
    assert read_plan(target.name) == NEW
    assert names(target.parent) == [target.name]


# Each step of writing in turn goes wrong, as on a full disk or when the user presses Ctrl+C.
STEPS = ("fsync", "chmod", "replace")
TROUBLES = [OSError(errno.ENOSPC, "No space left on device"), KeyboardInterrupt(), MemoryError()]


@pytest.mark.parametrize("trouble", TROUBLES, ids=lambda t: type(t).__name__)
@pytest.mark.parametrize("step", STEPS)
def test_trouble_at_a_step_leaves_the_old_file_and_no_litter(
    target: Path, monkeypatch: pytest.MonkeyPatch, step: str, trouble: BaseException
) -> None:
    def fail(*_: Any, **__: Any) -> None:
        raise trouble

    monkeypatch.setattr(os, step, fail)
    with pytest.raises(type(trouble)):
        write_plan(NEW, target)
    monkeypatch.undo()
    assert read_plan(target) == OLD
    assert names(target.parent) == [target.name]


def test_folder_that_cannot_be_synced_is_no_trouble(target: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def only_files(handle: int, sync: Callable[[int], None] = os.fsync) -> None:
        if stat.S_ISDIR(os.fstat(handle).st_mode):
            raise OSError(errno.EINVAL, "Invalid argument")
        sync(handle)

    monkeypatch.setattr(os, "fsync", only_files)
    write_plan(NEW, target)
    assert read_plan(target) == NEW
    assert names(target.parent) == [target.name]


def test_no_handle_is_left_open(target: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(*_: Any) -> None:
        raise OSError(errno.ENOSPC, "No space left on device")

    before = lowest_free_handle()
    write_plan(NEW, target)
    monkeypatch.setattr(os, "replace", fail)
    with pytest.raises(OSError, match="No space"):
        write_plan(NEW, target)
    assert lowest_free_handle() == before


def lowest_free_handle() -> int:
    """The number that the next file to be opened gets."""
    handle = os.open(os.curdir, os.O_RDONLY)
    os.close(handle)
    return handle


# In a process of its own, whose files may grow to 300 bytes only: the write itself fails half-way, for real.
FULL_DISK = """
import resource, signal, sys
from feedlib import read_plan, write_plan

plan, target = read_plan(sys.argv[1]), sys.argv[2]
signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
resource.setrlimit(resource.RLIMIT_FSIZE, (300, 300))
try:
    write_plan(plan, target)
except OSError as error:
    sys.exit(error.errno)
"""

# A fresh process for every function that writing calls, killed as it is about to call it, then as it has called it.
KILLED = """
import os, signal, sys
from feedlib import read_plan, write_plan

new, target = read_plan(sys.argv[1]), sys.argv[2]
old_bytes, new_bytes = open(target, "rb").read(), open(sys.argv[1], "rb").read()
seen = []
for step in range(100_000):
    child = os.fork()
    if child == 0:
        left = step

        def count(frame, event, function):
            global left
            if event.startswith("c_") and getattr(function, "__module__", "") not in ("builtins", "_json"):
                left -= 1
                if left < 0:
                    os.kill(os.getpid(), signal.SIGKILL)

        sys.setprofile(count)
        write_plan(new, target)
        sys.setprofile(None)
        os._exit(0)
    status = os.waitpid(child, 0)[1]
    found = open(target, "rb").read()
    assert found in (old_bytes, new_bytes), (step, found)
    seen.append("new" if found == new_bytes else "old")
    if os.WIFEXITED(status):
        assert os.WEXITSTATUS(status) == 0 and seen[-1] == "new"
        break
    if found == new_bytes:
        open(target, "wb").write(old_bytes)
print(seen.count("old"), seen.count("new"))
"""


def run(script: str, *arguments: Path) -> subprocess.CompletedProcess[str]:
    """A script in a process of its own."""
    return subprocess.run(
        [sys.executable, "-c", script, *map(str, arguments)],
        capture_output=True,
        text=True,
        timeout=120,
        env={**os.environ, "PYTHONPATH": os.pathsep.join(sys.path), "OPENBLAS_NUM_THREADS": "1"},
    )


def test_disk_that_is_full_half_way(target: Path, tmp_path: Path) -> None:
    new = tmp_path / "new.feedplan"
    write_plan(NEW, new)
    before = target.read_bytes()
    done = run(FULL_DISK, new, target)
    assert done.returncode == errno.EFBIG, done.stderr
    assert target.read_bytes() == before
    assert names(target.parent) == [target.name]


def test_power_cut_at_any_step_leaves_the_old_file_or_the_new_one(target: Path, tmp_path: Path) -> None:
    new = tmp_path / "new.feedplan"
    write_plan(NEW, new)
    done = run(KILLED, new, target)
    assert done.returncode == 0, done.stderr
    old_count, new_count = map(int, done.stdout.split())
    assert old_count > 10  # before the new file took the place ...
    assert new_count > 1  # ... and after it


@pytest.mark.parametrize("mode", [0o600, 0o640, 0o664, 0o444, 0o755])
def test_permissions_are_kept(target: Path, mode: int) -> None:
    target.chmod(mode)
    write_plan(NEW, target)
    assert target.stat().st_mode & 0o777 == mode
    assert read_plan(target) == NEW


@pytest.mark.parametrize("mask", [0o022, 0o077, 0o002])
def test_permissions_of_a_new_file_are_the_usual_ones(tmp_path: Path, mask: int) -> None:
    before = os.umask(mask)
    try:
        write_plan(NEW, tmp_path / "new.feedplan")
        assert os.umask(mask) == mask
    finally:
        os.umask(before)
    assert (tmp_path / "new.feedplan").stat().st_mode & 0o777 == 0o666 & ~mask


def test_link_is_followed_and_stays_a_link(target: Path, tmp_path: Path) -> None:
    link = tmp_path / "link.feedplan"
    link.symlink_to(target)
    second = tmp_path / "second.feedplan"
    second.symlink_to(link.name)
    write_plan(NEW, second)
    assert link.is_symlink()
    assert second.is_symlink()
    assert not target.is_symlink()
    assert read_plan(target) == NEW
    assert names(target.parent) == [target.name]
    assert names(tmp_path) == ["folder", "link.feedplan", "second.feedplan"]


def test_link_to_nothing_makes_the_file(tmp_path: Path) -> None:
    (tmp_path / "link.feedplan").symlink_to(tmp_path / "real.feedplan")
    write_plan(NEW, tmp_path / "link.feedplan")
    assert (tmp_path / "link.feedplan").is_symlink()
    assert read_plan(tmp_path / "real.feedplan") == NEW


def test_missing_folder(tmp_path: Path) -> None:
    with pytest.raises(OSError, match="missing"):
        write_plan(NEW, tmp_path / "missing" / "harness.feedplan")
    assert names(tmp_path) == []


def test_folder_in_the_place_of_the_file(tmp_path: Path) -> None:
    (tmp_path / "harness.feedplan").mkdir()
    with pytest.raises(OSError, match=r"harness\.feedplan"):
        write_plan(NEW, tmp_path / "harness.feedplan")
    assert names(tmp_path) == ["harness.feedplan"]
    assert names(tmp_path / "harness.feedplan") == []


@pytest.mark.parametrize("name", ["天" * 82 + ".feed", "x" * 246 + ".feedplan", ".hidden", "a.b.c", "plan", "x y\n'\""])
def test_any_name_that_the_file_system_takes(tmp_path: Path, name: str) -> None:
    """Also one of 251 or 255 bytes, beside which no longer one could stand."""
    path = tmp_path / name
    write_plan(NEW, path)
    assert read_plan(path) == NEW
    assert names(tmp_path) == [name]


def test_plan_that_no_file_can_hold_is_refused_before_anything_is_touched(target: Path) -> None:
    with pytest.raises(ValueError, match="surrogates"):
        write_plan(Plan(band=NEW.band, title="\ud800"), target)
    assert read_plan(target) == OLD
    assert names(target.parent) == [target.name]
