"""Progress and cancel for long computations, without Qt."""

from __future__ import annotations

import threading
from collections.abc import Callable

Checkpoint = Callable[[int, int], None]


class Cancelled(Exception):
    """Raised inside a job, at a safe point, after `JobControl.cancel`."""


class JobControl:
    """The one object a long computation may talk to."""

    def __init__(self, on_progress: Checkpoint = lambda done, total: None) -> None:
        self._on_progress = on_progress
        self._stop = threading.Event()

    def cancel(self) -> None:
        """Ask the job to stop; may be called from any thread."""
        self._stop.set()

    def step(self, done: int, total: int) -> None:
        """Report progress and honour a pending cancel.

        Raises
        ------
        Cancelled
            After `cancel`.
        """
        if self._stop.is_set():
            raise Cancelled
        self._on_progress(done, total)

    def part(self, index: int, count: int) -> Checkpoint:
        """Return the checkpoint of part `index` of `count` equal parts."""
        return lambda done, total: self.step(index * total + done, count * total)
