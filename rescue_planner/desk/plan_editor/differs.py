"""What the plan being edited has otherwise than another, as a list."""

from __future__ import annotations

from PySide6.QtCore import QSignalBlocker, Qt
from PySide6.QtWidgets import QComboBox, QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.plan_differences import differences, differences_words
from rescue_planner.desk import theme
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.widgets import rule, text


class Differs(QWidget):
    """A plan to compare with, and a line for each difference."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._case: Case | None = None
        self._plan, self._asked = "", ""
        self.other = QComboBox(self)
        self.other.setAccessibleName("Plan to list the differences to")
        self.other.setMinimumHeight(theme.TARGET)
        self.other.setMinimumWidth(theme.UNIT * 12)
        self.count = text("", "small")
        self.lines = text("", "small")
        self.lines.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, theme.HALF)
        column.setSpacing(theme.HALF)
        column.addWidget(rule())
        top = FlowLayout()
        top.addWidget(text("Differences. Compare with", "section", wrap=False))
        top.addWidget(self.other)
        column.addLayout(top)
        column.addWidget(self.count)
        column.addWidget(self.lines)
        self.other.activated.connect(self._chosen)

    def show_plan(self, case: Case, plan: str) -> None:
        """List the differences of a plan; to the plan before it until another is chosen."""
        names = [one.name for one in case.plans]
        others = [name for name in names if name != plan]
        if plan != self._plan or self._asked not in others:
            before = names.index(plan) - 1
            self._asked = names[before] if before >= 0 else (others[0] if others else "")
        self._case, self._plan = case, plan
        blocker = QSignalBlocker(self.other)
        if [self.other.itemText(i) for i in range(self.other.count())] != others:
            self.other.clear()
            self.other.addItems(others)
        self.other.setCurrentIndex(others.index(self._asked) if self._asked else -1)
        del blocker
        self._list()

    def _chosen(self, index: int) -> None:
        self._asked = self.other.itemText(index)
        self._list()

    def _list(self) -> None:
        if self._case is None or not self._asked:
            self.count.setText("")
            self.lines.setText("")
            return
        found = differences(self._case, self._plan, self._asked)
        self.count.setText(differences_words(found, self._asked))
        self.lines.setText("\n".join(one.sentence for one in found))
        self.lines.setVisible(bool(found))
