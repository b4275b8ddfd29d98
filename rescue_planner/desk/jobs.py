"""Long work off the GUI thread, with progress, cancel, and silence once superseded."""

from __future__ import annotations

import time
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from functools import partial

from PySide6.QtCore import QObject, Signal, Slot

from rescue_planner.projection.jobs import Cancelled, JobControl

LEAST_SECONDS_BETWEEN = 0.1


class JobRunner(QObject):
    """One job at a time. Signals arrive on the GUI thread; superseded jobs are silent."""

    started = Signal(str)  # name
    progressed = Signal(int, int)  # done, total
    finished = Signal(object)  # result
    failed = Signal(object)  # exception
    cancelled = Signal()
    idle = Signal()  # after any of the last three
    _said = Signal(int, object)  # job number, what to do

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._pool: ThreadPoolExecutor | None = None
        self._number = 0
        self._running = False
        self._closed = False
        self._control = JobControl()
        self._done: Callable[[object], None] | None = None
        self._failed: Callable[[Exception], None] | None = None
        self._said.connect(self._relay)

    @property
    def is_running(self) -> bool:
        """Whether a job runs whose end has not been told yet."""
        return self._running

    def start(
        self,
        work: Callable[[JobControl], object],
        name: str = "",
        *,
        done: Callable[[object], None] | None = None,
        failed: Callable[[Exception], None] | None = None,
    ) -> None:
        """Cancel whatever runs, then run `work`; `done` or `failed` is told on the GUI thread."""
        if self._closed:
            return
        self._control.cancel()
        if self._pool is None:
            self._pool = ThreadPoolExecutor(max_workers=1, thread_name_prefix="job")
        self._number += 1
        number = self._number
        self._done, self._failed = done, failed
        self._control = JobControl(_Thinned(partial(self._say_progress, number)))
        self._running = True
        self.started.emit(name)
        self._pool.submit(self._run, number, work, self._control)

    def cancel(self) -> None:
        """Ask the running job to stop at its next step."""
        self._control.cancel()

    def drop(self) -> None:
        """Cancel, and hear no more of the running job."""
        self._control.cancel()
        if self._running:
            self._number += 1
            self._running = False
            self.idle.emit()

    def close(self) -> None:
        """Stop and wait; the owner calls this before it goes away."""
        self._closed = True
        self._number += 1
        self._running = False
        self._control.cancel()
        if self._pool is not None:
            self._pool.shutdown(wait=True, cancel_futures=True)

    def _say_progress(self, number: int, done: int, total: int) -> None:
        self._said.emit(number, partial(self.progressed.emit, done, total))

    def _run(self, number: int, work: Callable[[JobControl], object], control: JobControl) -> None:
        try:
            control.step(0, 1)
            say: Callable[[], None] = partial(self._tell_done, work(control))
        except Cancelled:
            say = self._tell_cancelled
        except Exception as error:  # noqa: BLE001 - the thread's last line of defence
            say = partial(self._tell_failed, error)
        self._said.emit(number, say)

    def _tell_done(self, result: object) -> None:
        self._running = False
        self.idle.emit()  # before what follows: it may ask the user something, or start a job
        if self._done is not None:
            self._done(result)
        self.finished.emit(result)

    def _tell_failed(self, error: Exception) -> None:
        self._running = False
        self.idle.emit()
        if self._failed is not None:
            self._failed(error)
        self.failed.emit(error)

    def _tell_cancelled(self) -> None:
        self._running = False
        self.cancelled.emit()
        self.idle.emit()

    @Slot(int, object)
    def _relay(self, number: int, say: Callable[[], None]) -> None:
        if number == self._number:
            say()


class _Thinned:
    """Passes on progress at most ten times a second, and the last step."""

    def __init__(self, tell: Callable[[int, int], None]) -> None:
        self._tell = tell
        self._last = 0.0

    def __call__(self, done: int, total: int) -> None:
        now = time.monotonic()
        if now - self._last >= LEAST_SECONDS_BETWEEN or done >= total > 1:
            self._last = now
            self._tell(done, total)
