"""The list of remarks; each can be answered with a reason, which goes into the case."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Qt, QTimer, Signal
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QHBoxLayout,
    QLineEdit,
    QVBoxLayout,
    QWidget,
)

from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.fields import sentence_of
from rescue_planner.desk.jobs import JobRunner
from rescue_planner.desk.widgets import button, rule, scrolled, text

if TYPE_CHECKING:
    from rescue_planner.case.document import Case
    from rescue_planner.case.remarks import Remark

WAIT_MS = 400


class RemarkFinder(QObject):
    """Looks for remarks on every plan, off the GUI thread, a moment after the last change."""

    found = Signal(object)  # tuple of remarks

    def __init__(self, desk: Desk, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self.remarks: tuple[Remark, ...] | None = None
        self.runner = JobRunner(self)
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(WAIT_MS)
        self._timer.timeout.connect(self.look)
        desk.document.changed.connect(self._changed)
        desk.document.replaced.connect(self._replaced)

    def _changed(self, _case: object) -> None:
        self._timer.start()

    def _replaced(self) -> None:
        self.runner.drop()
        self.remarks = None
        self.found.emit(())

    def look(self) -> None:
        """Look now."""
        self._timer.stop()
        if not self._desk.document.has_case:
            return
        case = self._desk.document.case

        def take(result: object) -> None:
            if self._desk.document.has_case and case is self._desk.document.case:
                self.remarks = result  # type: ignore[assignment]
                self.found.emit(result)

        self.runner.start(lambda _control: _every_remark(case), done=take, failed=_raise)

    def close(self) -> None:
        """Stop and wait."""
        self._timer.stop()
        self.runner.close()


def _raise(error: Exception) -> None:
    raise error


def _every_remark(case: Case) -> tuple[Remark, ...]:
    from rescue_planner.projection.remarks import every_remark

    return every_remark(case)


def answered(case: Case, remarks: Sequence[Remark]) -> int:
    """Return how many of the remarks the case holds an answer to."""
    names = {answer.remark for answer in case.answers}
    return sum(remark.name in names for remark in remarks)


class RemarkDialog(QDialog):
    """Every remark with its answer."""

    def __init__(self, desk: Desk, remarks: Sequence[Remark], parent: QWidget) -> None:
        super().__init__(parent)
        self._desk = desk
        self.wanted = ""  # the path that the user wants to see
        self.setWindowTitle("Remarks on this case")
        self.resize(760, 560)
        inner = QWidget()
        self._column = QVBoxLayout(inner)
        self._column.setContentsMargins(0, 0, theme.UNIT, 0)
        self._column.setSpacing(theme.UNIT)
        self.rows = [_RemarkRow(desk, remark) for remark in remarks]
        for row in self.rows:
            row.wanted.connect(self._leave_for)
            self._column.addWidget(row)
            self._column.addWidget(rule())
        self._column.addStretch(1)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(*[theme.UNIT * 2] * 4)
        outer.setSpacing(theme.UNIT)
        outer.addWidget(text("Remarks on this case", "title"))
        outer.addWidget(
            text("A remark does not stop a computation. Where you keep a value that a remark "
                 "points at, say why: the reason is handed in with the plan.", "soft")
        )  # fmt: skip
        outer.addWidget(scrolled(inner), 1)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        buttons.rejected.connect(self.reject)
        outer.addWidget(buttons)

    def _leave_for(self, path: str) -> None:
        self.wanted = path
        self.accept()


def place_in_words(case: Case, path: str) -> str:
    """Return the place that a remark is about, as people call it."""
    from rescue_planner.case.paths import parse_path
    from rescue_planner.case.raw import to_raw
    from rescue_planner.case.spoken import spoken_place

    try:
        steps = parse_path(path)
        words = spoken_place(to_raw(case), steps)
        if isinstance(steps[-1], int) and words.endswith(")"):
            words = words.partition("(")[2][:-1]  # a whole plan or donor: its name says it
    except (ValueError, KeyError, IndexError):
        return path
    return words[:1].upper() + words[1:]


class _RemarkRow(QWidget):
    wanted = Signal(str)  # path

    def __init__(self, desk: Desk, remark: Remark) -> None:
        super().__init__()
        self._desk, self.remark = desk, remark
        self.words = text(remark.text)
        self.words.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.answer = QLineEdit()
        self.answer.setAccessibleName("Reason")
        self.answer.setAccessibleDescription(remark.text)
        self.answer.setPlaceholderText("Reason for keeping it")
        self.answer.setMinimumHeight(theme.TARGET)
        self.keep = button("Answer", said=f"Answer the remark: {remark.text}")
        self.state = text("", "note")
        self.go = button("Show", kind="link", said=f"Show where: {remark.text}")
        self.go.setVisible(bool(remark.path))
        self.go.clicked.connect(lambda: self.wanted.emit(remark.path))
        self.problem = text("", "problem")
        row = QHBoxLayout()
        row.setSpacing(theme.UNIT)
        row.addWidget(self.answer, 1)
        row.addWidget(self.keep)
        row.addWidget(self.go)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(theme.HALF)
        for one in (self.words, self.state):
            column.addWidget(one)
        column.addLayout(row)
        column.addWidget(self.problem)
        self.problem.hide()
        self.keep.clicked.connect(self.commit)
        self.answer.returnPressed.connect(self.commit)
        desk.document.changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Show the answer that the case holds."""
        held = next(
            (a for a in self._desk.document.case.answers if a.remark == self.remark.name), None
        )
        path = self.remark.path
        place = f"{place_in_words(self._desk.document.case, path)}  ·  " if path else ""
        said = "no answer yet" if held is None else f"answered {held.date or ''}".strip()
        self.state.setText(f"{place}{said}")
        if held is not None and not self.answer.hasFocus():
            self.answer.setText(held.reason)

    def commit(self) -> None:
        """Put the reason into the case; an empty one takes the answer back."""
        from rescue_planner.case.edits import answer_remark

        reason = self.answer.text().strip() or None
        today = f"{datetime.now():%Y-%m-%d}"
        problems = self._desk.document.try_edit(
            lambda case: answer_remark(case, self.remark.name, reason, date=today)
        )
        self.problem.setText(f"⚠ {sentence_of(problems)}" if problems else "")
        self.problem.setVisible(bool(problems))
