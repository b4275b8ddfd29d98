"""Every event of every release of a plan as a grid; numbers are edited in place."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, Qt, Signal
from PySide6.QtWidgets import QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.edits import Edit, set_value
from rescue_planner.case.plans import Plan
from rescue_planner.case.problems import Problem
from rescue_planner.desk.context import Desk
from rescue_planner.desk.numbers import read_number, written
from rescue_planner.projection.plan_reading import EventRow, event_rows, tidy

Index = QModelIndex | QPersistentModelIndex
HEADER = (
    "Year", "Donor", "Females\nanimals", "Males\nanimals", "Age\nyears", "Newcomers\nthat breed",
    "Release\nnumber",
)  # fmt: skip
YEAR, DONOR, FEMALES, MALES, AGE, NEWCOMERS, RELEASE = range(7)
_PATHS = {FEMALES: "who.females", MALES: "who.males", AGE: "who.age"}


class EventModel(QAbstractTableModel):
    """A row an event; editing one changes its whole release, in one undoable step."""

    refused = Signal(object)  # problems

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self._plan = 0
        self.rows: tuple[EventRow, ...] = ()

    def show_plan(self, case: Case, index: int, plan: Plan) -> None:
        """Show the events of a plan."""
        rows = event_rows(case, plan)
        self._plan = index
        if len(rows) != len(self.rows):
            self.beginResetModel()
            self.rows = rows
            self.endResetModel()
        elif rows != self.rows:
            self.rows = rows
            self.dataChanged.emit(self.index(0, 0), self.index(len(rows) - 1, RELEASE))

    def rowCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's signature
        return 0 if parent.isValid() else len(self.rows)

    def columnCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's signature
        return 0 if parent.isValid() else len(HEADER)

    def flags(self, index: Index) -> Qt.ItemFlag:
        kept = super().flags(index)
        if index.isValid() and index.column() in (YEAR, FEMALES, MALES, AGE):
            return kept | Qt.ItemFlag.ItemIsEditable
        return kept

    def _text(self, row: EventRow, column: int) -> str:
        age = "" if row.age is None else written(row.age)
        texts = (
            str(row.year), row.donor, written(row.females), written(row.males), age,
            tidy(row.newcomers), str(row.release + 1),
        )  # fmt: skip
        return texts[column]

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:  # noqa: ANN401
        if not index.isValid():
            return None
        shown = self._text(self.rows[index.row()], index.column())
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.EditRole):
            return shown
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return f"{HEADER[index.column()]}: {shown or 'not stated'}".replace("\n", ", ")
        if role == Qt.ItemDataRole.TextAlignmentRole:
            left = index.column() == DONOR
            side = Qt.AlignmentFlag.AlignLeft if left else Qt.AlignmentFlag.AlignRight
            return int(side | Qt.AlignmentFlag.AlignVCenter)
        return None

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:  # noqa: ANN401
        if orientation != Qt.Orientation.Horizontal:
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            return HEADER[section]
        if role == Qt.ItemDataRole.TextAlignmentRole:
            left = section == DONOR
            side = Qt.AlignmentFlag.AlignLeft if left else Qt.AlignmentFlag.AlignRight
            return int(side | Qt.AlignmentFlag.AlignBottom)
        return None

    def setData(self, index: Index, value: Any, role: int = Qt.ItemDataRole.EditRole) -> bool:  # noqa: ANN401
        if role != Qt.ItemDataRole.EditRole or not index.isValid():
            return False
        row, column = self.rows[index.row()], index.column()
        if str(value) == self._text(row, column):
            return True
        at = f"plans[{self._plan}].releases[{row.release}]"
        try:
            typed = read_number(str(value)) if str(value).strip() else None
        except ValueError as wrong:
            self.refused.emit((Problem(at, str(wrong)),))
            return False
        problems = self._desk.document.try_edit(lambda case: self._edit(case, row, column, typed))
        self.refused.emit(problems)
        return not problems

    def _edit(self, case: Case, row: EventRow, column: int, typed: float | None) -> Edit:
        at = f"plans[{self._plan}].releases[{row.release}]"
        if column != YEAR or typed is None:
            return set_value(case, f"{at}.{_PATHS.get(column, 'when.first_year')}", typed)
        first = float(case.plans[self._plan].releases[row.release].when.first_year.best)
        return set_value(case, f"{at}.when.first_year", first + typed - row.year)
