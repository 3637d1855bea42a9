"""A Touchstone file from a disk, as the plan keeps it. Knows no Qt."""

from __future__ import annotations

from pathlib import Path

from feedlib import FeedError, PlanError
from feedlib.parts import TouchstoneText

LARGEST_BYTES = 64 * 1024 * 1024


def read_touchstone_file(path: Path) -> TouchstoneText:
    """The text of a Touchstone file, read and checked (FeedError: one sentence)."""
    try:
        if path.stat().st_size > LARGEST_BYTES:
            raise FeedError(f"{path.name} is larger than {LARGEST_BYTES // 1024**2} MB.")
        data = path.read_bytes()
    except OSError as error:
        raise FeedError(f"{path.name} cannot be read: {error.strerror or error}.") from None
    # Comments of old instruments are in their own alphabets; the figures are ASCII in all of them.
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError:
        text = data.decode("latin-1")
    try:
        return TouchstoneText(name=path.name, text=text)
    except PlanError as error:
        raise FeedError(error.reason.rstrip(".") + ".") from None
