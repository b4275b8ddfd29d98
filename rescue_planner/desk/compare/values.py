"""The table of values at chosen years."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, Qt
from PySide6.QtGui import QGuiApplication, QKeyEvent, QKeySequence
from PySide6.QtWidgets import (
    QAbstractItemView,
    QComboBox,
    QHeaderView,
    QLabel,
    QLineEdit,
    QTableView,
    QVBoxLayout,
    QWidget,
)

from rescue_planner.desk import theme
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.widgets import button, text
from rescue_planner.projection.results import Comparison
from rescue_planner.projection.table_words import read_years, usual_years, years_outside
from rescue_planner.projection.value_table import RowsAre, ValueTable, value_table

Index = QModelIndex | QPersistentModelIndex
EMPTY = ValueTable((), 0, ())
ROWS: tuple[tuple[RowsAre, str], ...] = (("plans", "a row a plan"), ("measures", "a row a measure"))


class ValueModel(QAbstractTableModel):
    """Shows a table of texts; numbers to the right, so that their decimals stand in line."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.table = EMPTY

    def show_table(self, table: ValueTable) -> None:
        """Show another table."""
        if table == self.table:
            return
        self.beginResetModel()
        self.table = table
        self.endResetModel()

    def rowCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's signature
        return 0 if parent.isValid() else len(self.table.rows)

    def columnCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's signature
        return 0 if parent.isValid() else len(self.table.header)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:  # noqa: ANN401
        if not index.isValid():
            return None
        text_here = self.table.rows[index.row()][index.column()]
        if role == Qt.ItemDataRole.DisplayRole:
            return text_here
        if role == Qt.ItemDataRole.AccessibleTextRole:
            head = self.table.header[index.column()].replace("\n", ", ")
            return f"{head}: {text_here}"
        if role == Qt.ItemDataRole.TextAlignmentRole:
            side = Qt.AlignmentFlag.AlignLeft
            if index.column() >= self.table.lead:
                side = Qt.AlignmentFlag.AlignRight
            return int(side | Qt.AlignmentFlag.AlignVCenter)
        return None

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:  # noqa: ANN401
        if orientation != Qt.Orientation.Horizontal or not 0 <= section < len(self.table.header):
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            return self.table.header[section]
        if role == Qt.ItemDataRole.TextAlignmentRole:
            side = Qt.AlignmentFlag.AlignLeft
            if section >= self.table.lead:
                side = Qt.AlignmentFlag.AlignRight
            return int(side | Qt.AlignmentFlag.AlignBottom)
        return None


class CopyingTable(QTableView):
    """A table that copies what is chosen, or all, as tab-separated text; as high as its rows."""

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName(name)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ContiguousSelection)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setShowGrid(False)
        self.setStyleSheet("QTableView::item { padding: 0px 6px; }")
        self.setAlternatingRowColors(True)
        self.setTabKeyNavigation(False)
        self.verticalHeader().hide()
        self.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        self.horizontalHeader().setHighlightSections(False)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.matches(QKeySequence.StandardKey.Copy):
            self.copy()
        else:
            super().keyPressEvent(event)

    def copy(self) -> None:
        """Put the chosen cells on the clipboard, or the whole table where fewer than two are."""
        from rescue_planner.projection.reading import plain

        chosen = sorted(self.selectedIndexes(), key=lambda i: (i.row(), i.column()))
        model = self.model()
        if len(chosen) < 2 and isinstance(model, ValueModel):
            QGuiApplication.clipboard().setText(model.table.tab_separated())
            return
        lines: dict[int, list[str]] = {}
        for index in chosen:
            lines.setdefault(index.row(), []).append(plain(str(index.data())))
        QGuiApplication.clipboard().setText(
            "\n".join("\t".join(cells) for cells in lines.values()) + "\n"
        )

    def fit_height(self) -> None:
        """Take the height of all rows, so that only the page scrolls."""
        self.resizeRowsToContents()
        rows = sum(self.rowHeight(i) for i in range(self.model().rowCount()))
        head = self.horizontalHeader().sizeHint().height()
        self.setFixedHeight(rows + head + self.horizontalScrollBar().sizeHint().height() + 4)


class ValuesAtYears(QWidget):
    """Which years, which way round, the table, and a button that copies it."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._comparison: Comparison | None = None
        self._plans: tuple[str, ...] = ()
        self._keys: tuple[str, ...] = ()
        self.years: tuple[float, ...] | None = None  # nothing typed: the usual ones
        self.model = ValueModel(self)
        self.edit, self.rows = QLineEdit(self), QComboBox(self)
        self.table = CopyingTable("Values at chosen years", self)
        self.table.setModel(self.model)
        self.problem = text("", "problem")
        self.notes = text("", "note")
        self.copy_button = button("Copy table", said="Copy the table as tab-separated text")
        self._lay_out()
        self.edit.editingFinished.connect(self._years_typed)
        self.rows.currentIndexChanged.connect(self._rebuild)
        self.copy_button.clicked.connect(self.table.copy)

    def _lay_out(self) -> None:
        label = QLabel("Years")
        label.setBuddy(self.edit)
        self.edit.setAccessibleName("Years of the table, with commas between")
        self.edit.setMinimumHeight(theme.TARGET)
        self.edit.setMinimumWidth(260)
        self.rows.addItems([words for _, words in ROWS])
        self.rows.setAccessibleName("What a row of the table is")
        self.rows.setMinimumHeight(theme.TARGET)
        top = FlowLayout()  # at large text the parts stand under one another
        beside: tuple[QWidget, ...] = (label, self.edit, self.rows, self.copy_button)
        for widget in beside:
            top.addWidget(widget)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(theme.HALF)
        layout.addLayout(top)
        below: tuple[QWidget, ...] = (self.problem, self.table, self.notes)
        for part in below:
            layout.addWidget(part)
        self.problem.hide()

    def show_values(
        self, comparison: Comparison | None, plans: tuple[str, ...], keys: tuple[str, ...]
    ) -> None:
        """Show these measures of these plans, or an empty table."""
        self._comparison, self._plans, self._keys = comparison, plans, keys
        self._rebuild()

    def _rebuild(self) -> None:
        comparison = self._comparison
        if comparison is None:
            self.model.show_table(EMPTY)
        else:
            years = usual_years(comparison) if self.years is None else self.years
            way = ROWS[max(0, self.rows.currentIndex())][0]
            self.model.show_table(value_table(comparison, self._plans, self._keys, years, way))
            if not self.edit.hasFocus():
                self.edit.setText(", ".join(f"{year:g}" for year in years))
            notes = [*self.model.table.notes, years_outside(comparison, years)]
            self.notes.setText(" ".join(note for note in notes if note))
        self.notes.setVisible(bool(self.notes.text()) and comparison is not None)
        self.table.fit_height()

    def _years_typed(self) -> None:
        try:
            years = read_years(self.edit.text())
        except ValueError as wrong:
            self.problem.setText(f"⚠ {wrong}")
            self.problem.show()
            return
        self.problem.hide()
        if self._comparison is not None and years == usual_years(self._comparison):
            self.years = None
        else:
            self.years = years
        self._rebuild()
