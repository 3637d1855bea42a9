"""The errors that feedlib raises: each carries data and says in one sentence what, where, and what would be right."""

from __future__ import annotations


def quoted(text: str, longest: int = 40) -> str:
    """A text from outside as it may stand in a sentence: short, on one line, control characters spelled out."""
    short = text if len(text) <= longest else text[: longest - 3] + "..."
    plain = (c if c.isprintable() else c.encode("unicode_escape").decode() for c in short)
    return '"' + "".join(plain) + '"'


class FeedError(ValueError):
    """Base of every error that the input, not the program, has caused."""


class PlanError(FeedError):
    """A plan that cannot be read or made.

    part : id of the part (or None), field : name of the field (or None), reason : one sentence.
    """

    def __init__(self, reason: str, *, part: str | None = None, field: str | None = None) -> None:
        super().__init__(reason, part, field)
        self.reason, self.part, self.field = reason, part, field

    def __str__(self) -> str:
        where = [f"part {quoted(self.part, 64)}" if self.part is not None else "", self.field or ""]
        place = ", ".join(w for w in where if w)
        return f"{place}: {self.reason}" if place else self.reason


class FieldError(PlanError):
    """One field of a record with a wrong type or value; the reader adds the part."""

    def __init__(self, field: str, reason: str) -> None:
        super().__init__(reason, field=field)


class SolveError(FeedError):
    """A plan that opens but cannot be solved; part names the part that stops it (or None)."""

    def __init__(self, reason: str, *, part: str | None = None) -> None:
        super().__init__(reason, part)
        self.reason, self.part = reason, part

    def __str__(self) -> str:
        return f"part {quoted(self.part, 64)}: {self.reason}" if self.part is not None else self.reason
