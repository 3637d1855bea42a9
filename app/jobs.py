"""The only place that knows threads: one worker, newest request wins, results come back in the window's thread."""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from typing import Any

from PySide6.QtCore import QObject, Signal


class Jobs(QObject):
    """Runs one request at a time away from the window; of several waiting ones only the newest is run."""

    _finished = Signal(int, object, object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._worker = ThreadPoolExecutor(1, thread_name_prefix="solve")
        self._generation = 0
        self._done: Callable[[Any, BaseException | None], None] = lambda result, error: None
        self._finished.connect(self._hand_over)  # a bound method of a QObject, so it runs in this object's thread

    def submit(self, work: Callable[[], Any], done: Callable[[Any, BaseException | None], None]) -> None:
        """Run `work`; then call `done(result, error)` here, unless a newer request came meanwhile."""
        self._generation += 1
        generation, self._done = self._generation, done
        self._worker.submit(self._run, generation, work)

    def drop(self) -> None:
        """Forget what is running or waiting."""
        self._generation += 1

    def close(self) -> None:
        """Wait for the worker to end; nothing is handed over any more."""
        self.drop()
        self._worker.shutdown(wait=True, cancel_futures=True)

    def _run(self, generation: int, work: Callable[[], Any]) -> None:
        if generation != self._generation:
            return
        try:
            result, error = work(), None
        except BaseException as caught:  # handed to the window's thread, which raises it where it is reported
            result, error = None, caught
        self._finished.emit(generation, result, error)

    def _hand_over(self, generation: int, result: Any, error: BaseException | None) -> None:
        if generation == self._generation:
            self._done(result, error)
