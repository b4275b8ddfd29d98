"""The open case: one observable document with one undo stack."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from datetime import UTC, datetime
from pathlib import Path
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QUndoCommand, QUndoStack

from rescue_planner.case.faults import InvalidCase, Problem

if TYPE_CHECKING:
    from rescue_planner.case.document import Case
    from rescue_planner.case.edits import Edit


class NoCase(LookupError):
    """Nothing is open."""


class _Replace(QUndoCommand):
    """The only command class: swap one frozen case for another."""

    def __init__(self, text: str, show: Callable[[Case], None], before: Case, after: Case) -> None:
        super().__init__(text)
        self._show, self._before, self._after = show, before, after

    def redo(self) -> None:
        self._show(self._after)

    def undo(self) -> None:
        self._show(self._before)


class CaseDocument(QObject):
    """Widgets read `case`, listen to `changed` and call `apply` or `try_edit`. Nothing else."""

    changed = Signal(object)  # Case: an edit, undo or redo
    replaced = Signal()  # another case was opened, or it was closed; `changed` follows
    state_changed = Signal()  # path or unsaved mark

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._case: Case | None = None
        self._tables: dict[str, bytes] = {}
        self._log: tuple[dict[str, Any], ...] = ()
        self._trail: list[dict[str, Any]] = []
        self._never_saved = False
        self.path: Path | None = None
        self.said: tuple[str, ...] = ()
        self.undo_stack = QUndoStack(self)
        self.undo_stack.cleanChanged.connect(self._clean_changed)

    def _clean_changed(self, _clean: bool) -> None:
        self.state_changed.emit()

    @property
    def has_case(self) -> bool:
        """Whether a case is open."""
        return self._case is not None

    @property
    def case(self) -> Case:
        """The open case; frozen, so safe to hand to a thread.

        Raises
        ------
        NoCase
            When nothing is open.
        """
        if self._case is None:
            raise NoCase("No case is open.")
        return self._case

    @property
    def is_modified(self) -> bool:
        """Whether the open case differs from its file."""
        return self.has_case and (self._never_saved or not self.undo_stack.isClean())

    @property
    def tables(self) -> Mapping[str, bytes]:
        """Data brought in, by file name; kept as it was opened."""
        return self._tables

    @property
    def trail(self) -> tuple[dict[str, Any], ...]:
        """The edits that led to the open case, with those its file brought."""
        return (*self._log, *self._trail[: self.undo_stack.index()])

    # edits

    def apply(self, edit: Edit) -> None:
        """Apply `edit` as one undoable step; nothing happens where it changes nothing."""
        if edit.case == self.case:
            return
        del self._trail[self.undo_stack.index() :]
        self._trail.append(
            {"at": datetime.now(UTC).isoformat(timespec="seconds"), "edit": edit.sentence}
        )
        self.undo_stack.push(_Replace(edit.sentence, self._show, self.case, edit.case))

    def try_edit(self, make: Callable[[Case], Edit]) -> tuple[Problem, ...]:
        """Apply what `make` returns; give back the problems of a case that would be wrong."""
        try:
            edit = make(self.case)
        except InvalidCase as wrong:
            return wrong.problems
        self.apply(edit)
        return ()

    def _show(self, case: Case) -> None:
        self._case = case
        self.changed.emit(case)

    # files

    def new(self, case: Case, *, path: Path | None = None, unsaved: bool = True) -> None:
        """Show a case that no file holds yet, or that differs from what `path` holds."""
        self._replace(case, path, (), {}, ())
        self._never_saved = unsaved
        self.state_changed.emit()

    def open(self, path: Path) -> None:
        """Open a case file.

        Raises
        ------
        CaseFileError, InvalidCase
            When the file cannot be read; what was open stays open.
        """
        from rescue_planner.case.file import load

        opened = load(path)
        self._replace(opened.case, path, tuple(opened.said), opened.tables, opened.log)

    def save(self, path: Path) -> None:
        """Write the case beside `path` and put it in its place.

        Raises
        ------
        CaseFileError
            When it cannot be written; the old file is whole and the case still open.
        """
        from rescue_planner.case.file import save

        save(path, self.case, tables=self._tables, log=self.trail)
        self.path = path
        self._never_saved = False
        self.undo_stack.setClean()
        self.state_changed.emit()

    def close(self) -> None:
        """Leave nothing open."""
        self._case = None
        self.path, self.said, self._never_saved = None, (), False
        self.undo_stack.clear()
        self._trail.clear()
        self.replaced.emit()
        self.state_changed.emit()

    def _replace(
        self,
        case: Case,
        path: Path | None,
        said: tuple[str, ...],
        tables: Mapping[str, bytes],
        log: tuple[dict[str, Any], ...],
    ) -> None:
        self._case, self.path, self.said = case, path, said
        self._tables, self._log, self._never_saved = dict(tables), log, False
        self.undo_stack.clear()
        self._trail.clear()
        self.replaced.emit()
        self.changed.emit(case)
        self.state_changed.emit()
