"""New, open, save, close: the dialogs and sentences around the document's files."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtWidgets import QFileDialog, QMessageBox, QWidget

from rescue_planner import places
from rescue_planner.case.faults import InvalidCase
from rescue_planner.desk.context import Desk
from rescue_planner.desk.recovery import Leftover
from rescue_planner.desk.settings import Settings

FILTER = "Cases (*.rescue *.json);;All files (*)"
MOST_LISTED = 12


class FileActions(QObject):
    """Everything the File menu does; each method says whether it was done."""

    opened = Signal()
    said = Signal(str)  # one sentence for the work strip

    def __init__(self, desk: Desk, settings: Settings, window: QWidget) -> None:
        super().__init__(window)
        self._desk, self._settings, self._window = desk, settings, window

    def open_dialog(self) -> bool:
        """Ask for a file and open it."""
        start = self._desk.document.path or places.user_documents()
        name, _ = QFileDialog.getOpenFileName(self._window, "Open a case", str(start), FILTER)
        return bool(name) and self.open(Path(name))

    def open(self, path: Path) -> bool:
        """Open a case, asking first about unsaved changes."""
        if not self.may_close() or not self._load(path):
            return False
        self._settings.opened(path)
        self._after_open(" ".join(self._desk.document.said) or f"Opened {path.name}.")
        return True

    def open_shipped(self, path: Path) -> bool:
        """Open a copy of a shipped case; saving asks for a place of its own."""
        if not self.may_close() or not self._load(path):
            return False
        self._desk.document.new(self._desk.document.case, unsaved=False)
        self._after_open("Opened a copy of a shipped case; the original stays as it is.")
        return True

    def recover(self, left: Leftover) -> bool:
        """Open what an earlier session could not save; it stays unsaved until it is saved."""
        if not self.may_close() or not self._load(left.copy):
            return False
        self._desk.document.new(self._desk.document.case, path=left.original)
        left.discard()
        self._after_open("Recovered. Save the case to keep it.")
        return True

    def _after_open(self, sentence: str) -> None:
        self._desk.problems_shown.clear()
        self.opened.emit()
        self.said.emit(sentence)

    def _load(self, path: Path) -> bool:
        from rescue_planner.case.file import CaseFileError

        try:
            self._desk.document.open(path)
        except CaseFileError as error:
            self.complain("The case was not opened", str(error))
            return False
        except InvalidCase as wrong:
            lines = [str(problem) for problem in wrong.problems]
            count = f"{len(lines)} problem{'' if len(lines) == 1 else 's'}"
            self.complain(
                "The case was not opened",
                f"{path.name} holds {count}, so that it cannot be opened. Correct the file at "
                "the places named below and open it again.",
                "\n".join([*lines[:MOST_LISTED], *(["…"] if len(lines) > MOST_LISTED else [])]),
            )
            return False
        return True

    def save(self) -> bool:
        """Save to the case's file, or ask for one."""
        path = self._desk.document.path
        return self.save_as() if path is None else self._save(path)

    def save_as(self) -> bool:
        """Ask for a file and save there."""
        document = self._desk.document
        start = document.path or places.user_documents() / f"{_file_name(document.case.title)}"
        name, _ = QFileDialog.getSaveFileName(self._window, "Save the case", str(start), FILTER)
        if not name:
            return False
        path = Path(name)
        return self._save(path if path.suffix else path.with_suffix(".rescue"))

    def _save(self, path: Path) -> bool:
        from rescue_planner.case.file import CaseFileError

        self.put_in_typed()
        try:
            self._desk.document.save(path)
        except CaseFileError as error:
            self.complain("The case was not saved", str(error))
            return False
        self._settings.opened(path)
        self.said.emit(f"Saved {path.name}.")
        return True

    def put_in_typed(self) -> None:
        """Let the field that has the focus put its text into the case first."""
        focused = self._window.focusWidget()
        if focused is not None:
            focused.clearFocus()
            focused.setFocus()

    def may_close(self) -> bool:
        """Ask what to do with unsaved changes; say whether the case may go."""
        self.put_in_typed()
        document = self._desk.document
        if not document.is_modified:
            return True
        box = QMessageBox(self._window)
        box.setIcon(QMessageBox.Icon.Question)
        box.setWindowTitle("Unsaved changes")
        box.setText(f"“{document.case.title}” has changes that are not saved.")
        box.setInformativeText("Save them first?")
        buttons = QMessageBox.StandardButton
        box.setStandardButtons(buttons.Save | buttons.Discard | buttons.Cancel)
        box.setDefaultButton(buttons.Save)
        answer = box.exec()
        if answer == buttons.Save:
            return self.save()
        return answer == buttons.Discard

    def complain(self, what: str, sentence: str, details: str = "") -> None:
        """Show one sentence, with details folded below it."""
        box = QMessageBox(self._window)
        box.setIcon(QMessageBox.Icon.Warning)
        box.setWindowTitle(what)
        box.setText(sentence)
        if details:
            box.setInformativeText(details)
        box.exec()


def _file_name(title: str) -> str:
    kept = "".join(c if c.isalnum() or c in " -_" else " " for c in title)
    return " ".join(kept.split())[:60].strip() or "case"
