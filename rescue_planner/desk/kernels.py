"""Compiled kernels for the desk, without a stall: a child compiles, a thread loads."""

from __future__ import annotations

import subprocess
import sys
import threading
from collections.abc import Sequence

from PySide6.QtCore import QObject, Signal

CHILD = (sys.executable, "-m", "rescue_planner.kernels.warm", "chain")


class KernelLoader(QObject):
    """Brings the compiled path in behind the window; until then the plain path answers.

    Compiling in this process would hold up the window for a quarter of a second at a time, so a
    child of low priority compiles into the user's cache and a thread then only loads. Where no
    cache can be written the desk stays on the plain path, which gives the same numbers.
    """

    ready = Signal()
    given_up = Signal()

    def __init__(self, parent: QObject | None = None, child: Sequence[str] = CHILD) -> None:
        super().__init__(parent)
        self._child = tuple(child)
        self._process: subprocess.Popen[bytes] | None = None
        self._thread: threading.Thread | None = None
        self._closing = threading.Event()

    def start(self) -> None:
        """Begin, once; the window calls this after its first paint."""
        if self._thread is None:
            self._thread = threading.Thread(target=self._work, name="kernels", daemon=True)
            self._thread.start()

    def close(self) -> None:
        """End the child and wait for the thread."""
        self._closing.set()
        process = self._process
        if process is not None and process.poll() is None:
            process.terminate()
        if self._thread is not None:
            self._thread.join(timeout=30)

    def _work(self) -> None:
        loaded = self._compiled_by_child() and self._load()
        if self._closing.is_set():
            return
        if loaded:
            self.ready.emit()
        else:
            self.given_up.emit()

    def _compiled_by_child(self) -> bool:
        from rescue_planner import places

        if places.prepare_kernel_cache() is None:
            return False
        flags = getattr(subprocess, "BELOW_NORMAL_PRIORITY_CLASS", 0)
        try:
            self._process = subprocess.Popen(
                self._child,
                stdin=subprocess.DEVNULL,
                stdout=subprocess.DEVNULL,
                stderr=subprocess.DEVNULL,
                creationflags=flags,
            )
        except OSError:  # a locked-down machine may allow no child
            return False
        return self._process.wait() == 0

    def _load(self) -> bool:
        if self._closing.is_set():
            return False
        from rescue_planner.projection.chain_path import use_compiled

        return use_compiled()
