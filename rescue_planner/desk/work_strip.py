"""The strip along the bottom: what runs, what is out of date, remarks, the standing caution."""

from __future__ import annotations

import time

from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtWidgets import QHBoxLayout, QProgressBar, QVBoxLayout, QWidget

from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.jobs import JobRunner
from rescue_planner.desk.widgets import button, rule, text

CAUTION = (
    "These results describe what would follow if the stated assumptions held. "
    "The decision rests with the responsible authorities."
)


def time_left(seconds: float) -> str:
    """Return the time left in words, no finer than it can be known."""
    if seconds < 10:
        return "a few seconds left"
    if seconds < 90:
        return f"about {round(seconds, -1):.0f} s left"
    return f"about {seconds / 60:.0f} min left"


class JobLine(QWidget):
    """Name, progress, time left and cancel of one runner's job; hidden while none runs."""

    def __init__(self, runner: JobRunner, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._runner, self._name, self._began = runner, "", 0.0
        self.words = text("", "small", wrap=False)
        self.bar = QProgressBar()
        self.bar.setTextVisible(False)
        self.bar.setFixedWidth(120)
        self.bar.setAccessibleName("Progress")
        self.cancel = button("Cancel", kind="link")
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(theme.UNIT)
        for one in (self.words, self.bar, self.cancel):
            row.addWidget(one)
        self._patience = QTimer(self)  # work that is done at once is not announced
        self._patience.setSingleShot(True)
        self._patience.setInterval(250)
        self._patience.timeout.connect(self._appear)
        self.cancel.clicked.connect(runner.cancel)
        runner.started.connect(self._started)
        runner.progressed.connect(self._progressed)
        runner.idle.connect(self._ended)
        self.hide()

    def _started(self, name: str) -> None:
        self._name, self._began = name, time.monotonic()
        self.words.setText(f"{name} …")
        self.bar.setRange(0, 0)
        self.cancel.setAccessibleName(f"Cancel: {name}")
        if name:
            self._patience.start()

    def _appear(self) -> None:
        self.setVisible(self._runner.is_running)

    def _progressed(self, done: int, total: int) -> None:
        self.bar.setRange(0, total)
        self.bar.setValue(done)
        spent = time.monotonic() - self._began
        if done and spent > 1.0:
            self.words.setText(f"{self._name}, {time_left(spent * (total - done) / done)}")

    def _ended(self) -> None:
        self._patience.stop()
        self.hide()


class WorkStrip(QWidget):
    """Status at the left, remarks and unsaved fields beside it, the caution below."""

    remarks_asked = Signal()
    problems_asked = Signal()

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self.setObjectName("work")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.status = text("", "small", wrap=False)
        self.live_line, self.job_line = JobLine(desk.live.runner), JobLine(desk.jobs)
        self.problems = button("", kind="link")
        self.remarks = button("", kind="link")
        self.caution = text(CAUTION, "soft")
        self._message = ""
        self._lay_out()
        self._connect()
        self.say_remarks(None, 0)
        self._say_problems()
        self._say_status()

    def _lay_out(self) -> None:
        row = QHBoxLayout()
        row.setSpacing(theme.UNIT * 2)
        for one in (self.status, self.live_line, self.job_line):
            row.addWidget(one)
        row.addStretch(1)
        row.addWidget(self.problems)
        row.addWidget(self.remarks)
        column = QVBoxLayout(self)
        column.setContentsMargins(theme.UNIT * 2, theme.HALF, theme.UNIT * 2, theme.HALF)
        column.setSpacing(2)
        column.addLayout(row)
        column.addWidget(rule())
        column.addWidget(self.caution)

    def _connect(self) -> None:
        self.remarks.clicked.connect(self.remarks_asked)
        self.problems.clicked.connect(self.problems_asked)
        self._desk.problems_shown.changed.connect(self._say_problems)
        self._desk.document.changed.connect(self._say_status)
        self._desk.document.replaced.connect(self._say_status)
        self._desk.live.updated.connect(self._say_status)
        self._desk.live.busy.connect(self._say_status)

    def say(self, message: str) -> None:
        """Say that something is done (saved, exported) until the next change."""
        self._message = message
        self._say_status()
        self._message = ""

    def _say_status(self, _what: object = None) -> None:
        if self._message:
            self._tell(self._message)
        elif not self._desk.document.has_case:
            self._tell("No case is open.")
        elif self._desk.live.comparison is None:
            self._tell("Out of date: the charts wait for the last change.")
        elif self._desk.live.runner.is_running:
            self._tell("Average course up to date; one-locus odds are being computed.")
        else:
            self._tell("Everything shown is up to date.")

    def _tell(self, words: str) -> None:
        self.status.setText(words)
        self.status.setAccessibleName(f"Status: {words}")

    def _say_problems(self) -> None:
        shown = self._desk.problems_shown.shown
        count = len(shown)
        self.problems.setVisible(count > 0)
        noun = "field holds" if count == 1 else "fields hold"
        self.problems.setText(f"⚠ {count} {noun} a value that is not in the case")
        self.problems.setAccessibleName(self.problems.text())

    def say_remarks(self, count: int | None, unanswered: int) -> None:
        """Show how many remarks there are, and how many of them have no answer."""
        self.remarks.setEnabled(bool(count))
        if count is None:
            words = "Remarks"
        elif count == unanswered:
            words = f"{count} remark{'' if count == 1 else 's'}"
        else:
            words = f"{count} remark{'' if count == 1 else 's'}, {count - unanswered} answered"
        self.remarks.setText(words)
        self.remarks.setAccessibleName(words)
