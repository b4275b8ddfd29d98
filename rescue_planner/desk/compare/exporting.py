"""Export: the files that `run` writes, for the plans and measures shown, in the background."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Signal
from PySide6.QtWidgets import QFileDialog, QMessageBox, QWidget

from rescue_planner import places
from rescue_planner.case.document import Case
from rescue_planner.desk.context import Desk
from rescue_planner.projection.jobs import JobControl

if TYPE_CHECKING:
    from rescue_planner.annex.export import Written

NAME = "Export"


@dataclass(frozen=True, slots=True)
class Wanted:
    """What to write and where."""

    case: Case
    plans: tuple[str, ...]
    measures: tuple[str, ...]
    folder: Path


def write(wanted: Wanted, control: JobControl) -> Written:
    """Project the plans shown at the live depths, and write the files of a run."""
    from rescue_planner.annex.export import write_run
    from rescue_planner.projection.compare import compare
    from rescue_planner.projection.remarks import every_remark

    started = datetime.now(UTC)
    comparison = compare(wanted.case, plans=wanted.plans, checkpoint=control.part(0, 4))
    remarks = every_remark(wanted.case)
    return write_run(
        wanted.case,
        comparison,
        wanted.folder,
        measures=wanted.measures,
        remarks=remarks,
        started=started,
        checkpoint=lambda done, total: control.step(total + 3 * done, 4 * total),
    )


class Exporter(QObject):
    """Asks for a folder, writes in the background, says when it is done."""

    done = Signal(object)  # Written
    failed = Signal(str)  # one sentence

    def __init__(self, desk: Desk, window: QWidget) -> None:
        super().__init__(window)
        self._desk, self._window = desk, window

    def ask(self, plans: tuple[str, ...], measures: tuple[str, ...]) -> None:
        """Ask for a folder and write there, unless the dialog is left."""
        start = self._desk.document.path
        where = str(start.parent if start is not None else places.user_documents())
        chosen = QFileDialog.getExistingDirectory(
            self._window, "Folder for the files of this run", where
        )
        if chosen:
            self.start(Wanted(self._desk.document.case, plans, measures, Path(chosen)))

    def start(self, wanted: Wanted) -> None:
        """Write in the background; the work strip shows progress and cancels."""
        self._desk.jobs.start(
            lambda control: write(wanted, control), NAME, done=self._tell, failed=self._tell_failed
        )

    def _tell(self, result: object) -> None:
        self.done.emit(result)
        written: Written = result  # type: ignore[assignment]
        QMessageBox.information(
            self._window,
            "Export done",
            f"{len(written.files)} files were written to {written.folder}.\n\n"
            "These results describe what would follow if the stated assumptions held. The "
            "decision rests with the responsible authorities.",
        )

    def _tell_failed(self, error: Exception) -> None:
        from rescue_planner.annex.export import ExportError

        if not isinstance(error, ExportError):
            raise error
        self.failed.emit(str(error))
        QMessageBox.warning(self._window, "Export stopped", str(error))
