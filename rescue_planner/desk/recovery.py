"""Recovery copies: written two seconds after the last change, never over the user's file."""

from __future__ import annotations

import contextlib
import json
import os
import sys
import traceback
import uuid
from collections.abc import Callable
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from types import TracebackType

from PySide6.QtCore import QLockFile, QObject, QTimer, Signal

from rescue_planner import places
from rescue_planner.desk.document import CaseDocument

AUTOSAVE_MS = 2000


def folder() -> Path:
    """Return the folder of recovery copies."""
    return places.user_state() / "recovery"


@dataclass(frozen=True, slots=True)
class Leftover:
    """A copy that an earlier session left behind."""

    copy: Path
    title: str
    original: Path | None
    changed: datetime

    def discard(self) -> None:
        """Delete the copy."""
        for path in (self.copy, self.copy.with_suffix(".json")):
            path.unlink(missing_ok=True)


def leftovers() -> tuple[Leftover, ...]:
    """Return the copies whose session has ended, the newest first."""
    found = []
    for copy in folder().glob("*.rescue"):
        lock = QLockFile(str(copy.with_suffix(".lock")))
        lock.setStaleLockTime(0)
        if not lock.tryLock(0):
            continue  # its session still runs
        lock.unlock()
        with contextlib.suppress(OSError, ValueError, KeyError, TypeError):
            about = json.loads(copy.with_suffix(".json").read_text(encoding="utf-8"))
            original = Path(about["original"]) if about["original"] else None
            changed = datetime.fromtimestamp(copy.stat().st_mtime).astimezone()
            found.append(Leftover(copy, str(about["title"]), original, changed))
    return tuple(sorted(found, key=lambda one: one.changed, reverse=True))


class Recovery(QObject):
    """Keeps one recovery copy of the open case while it has unsaved changes."""

    failed = Signal(str)  # one sentence

    def __init__(self, document: CaseDocument, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._name = uuid.uuid4().hex
        self._lock: QLockFile | None = None
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(AUTOSAVE_MS)
        self._timer.timeout.connect(self.write)
        document.changed.connect(self._changed)
        document.state_changed.connect(self._state_changed)

    @property
    def copy(self) -> Path:
        """The recovery copy of this session."""
        return folder() / f"{self._name}.rescue"

    def _changed(self, _case: object) -> None:
        self._timer.start()

    def _state_changed(self) -> None:
        if not self._document.is_modified:
            self.discard()

    def write(self) -> bool:
        """Write the copy now, if the case has unsaved changes; say whether it stands."""
        from rescue_planner.case.file import CaseFileError, save

        document = self._document
        if not document.is_modified:
            return False
        try:
            folder().mkdir(parents=True, exist_ok=True)
            if self._lock is None:
                self._lock = QLockFile(str(self.copy.with_suffix(".lock")))
                self._lock.setStaleLockTime(0)
                self._lock.tryLock(0)
            save(self.copy, document.case, tables=document.tables, log=document.trail)
            about = {"title": document.case.title, "original": str(document.path or "")}
            self.copy.with_suffix(".json").write_text(json.dumps(about), encoding="utf-8")
        except (OSError, CaseFileError) as error:
            self.failed.emit(
                f"No recovery copy could be written ({error}). Save the case soon yourself."
            )
            return False
        return True

    def discard(self) -> None:
        """Delete the copy: the case is saved, or was given up on purpose."""
        self._timer.stop()
        with contextlib.suppress(OSError):
            for suffix in (".rescue", ".json"):
                self.copy.with_suffix(suffix).unlink(missing_ok=True)
        if self._lock is not None:
            self._lock.unlock()
            self._lock = None


def crash_hook(
    recovery: Recovery, tell: Callable[[str], None]
) -> Callable[[type[BaseException], BaseException, TracebackType | None], None]:
    """Return an exception hook that writes the copy and a report, tells, and keeps running."""

    def hook(kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
        if issubclass(kind, KeyboardInterrupt):
            sys.__excepthook__(kind, error, trace)
            return
        report = "".join(traceback.format_exception(kind, error, trace))
        recovery.write()
        with contextlib.suppress(OSError):
            path = places.user_state() / "reports" / f"{datetime.now():%Y%m%d-%H%M%S}.txt"
            path.parent.mkdir(parents=True, exist_ok=True)
            path.write_text(report, encoding="utf-8")
        if os.environ.get("PYTHONDEVMODE"):
            sys.__excepthook__(kind, error, trace)
        tell(report)

    return hook
