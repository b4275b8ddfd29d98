"""The grid of a plan's releases: typed, filled, sorted, copied and pasted by keys."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, Qt, Signal
from PySide6.QtGui import QGuiApplication, QKeyEvent, QKeySequence
from PySide6.QtWidgets import QAbstractButton, QComboBox, QScrollArea, QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.plan_table import COLUMNS, Cell, read_block, write_block
from rescue_planner.case.plans import Plan
from rescue_planner.case.problems import Problem
from rescue_planner.desk import theme
from rescue_planner.desk.compare.values import CopyingTable
from rescue_planner.desk.context import Desk
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.plan_editor import new_parts
from rescue_planner.desk.plan_editor.events import EventModel
from rescue_planner.desk.plan_editor.release_model import ReleaseModel
from rescue_planner.desk.widgets import Link, button, text

SHORT_HELP = (
    "Type over a cell, or paste a block from a spreadsheet (Ctrl+V). Ctrl+D fills down, Delete "
    "empties, Insert adds a row. A double click on a heading sorts."
)
EVENT_HELP = "A number changed here changes every event of its release."
ROWS = ("a row a release", "a row an event")
MOST_SAID = 6
NO_DONOR = "No donor is entered yet: add one on the Case page."


class ReleaseTable(CopyingTable):
    """Keys of a spreadsheet over a `ReleaseModel`."""

    add_asked = Signal()
    said = Signal(str)  # why nothing was done

    def __init__(self, model: ReleaseModel, parent: QWidget | None = None) -> None:
        super().__init__("Releases of the plan, a row each", parent)
        self.releases = model
        self.setModel(model)
        _editable(self)
        self.verticalHeader().show()
        self.verticalHeader().setDefaultAlignment(Qt.AlignmentFlag.AlignCenter)
        self.horizontalHeader().sectionDoubleClicked.connect(lambda at: model.sort(at))

    def updateGeometries(self) -> None:
        """Leave out the corner button: it could not be reached by key, and Ctrl+A does the same."""
        super().updateGeometries()
        corner = self.findChild(QAbstractButton, options=Qt.FindChildOption.FindDirectChildrenOnly)
        if corner is not None:
            corner.hide()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        control = event.modifiers() == Qt.KeyboardModifier.ControlModifier
        if event.matches(QKeySequence.StandardKey.Paste):
            self.paste()
        elif control and event.key() == Qt.Key.Key_D:
            self.fill()
        elif event.key() == Qt.Key.Key_Delete and self.chosen():
            self.releases.clear(self.chosen())
        elif event.key() == Qt.Key.Key_Insert and not event.modifiers():
            self.add_asked.emit()
        else:
            super().keyPressEvent(event)

    def chosen(self) -> list[Cell]:
        """Return the chosen cells in reading order."""
        return sorted((index.row(), index.column()) for index in self.selectedIndexes())

    def copy(self) -> None:
        """Put the chosen cells on the clipboard, or the whole table where none is."""
        cells = self.chosen()
        rows = self.releases.rows
        if not cells:
            cells = [(r, c) for r in range(len(rows)) for c in range(len(COLUMNS))]
        lines: dict[int, list[str]] = {}
        for r, c in cells:
            lines.setdefault(r, []).append(rows[r][c])
        QGuiApplication.clipboard().setText(write_block(lines.values()))

    def paste(self) -> None:
        """Put the clipboard's cells where the chosen ones begin; one cell fills all chosen ones."""
        block = read_block(QGuiApplication.clipboard().text())
        if not block:
            self.said.emit("There are no cells on the clipboard: copy some first.")
            return
        cells = self.chosen()
        top, left = cells[0] if cells else (self.releases.rowCount(), 0)
        wide = max(len(line) for line in block)
        if left + wide > len(COLUMNS):
            self.said.emit(
                f"The block is {wide} columns wide and {len(COLUMNS) - left} are left from "
                f"“{COLUMNS[left].title}” on: paste it further to the left."
            )
            return
        if len(block) == wide == 1 and len(cells) > 1:
            texts = dict.fromkeys(cells, block[0][0])
        else:
            texts = {
                (top + r, left + c): cell
                for r, line in enumerate(block)
                for c, cell in enumerate(line)
            }
        self.said.emit("")
        self.releases.put(texts, f"Paste {len(block)} × {wide} cells into the releases")
        self.go_to((top, left))

    def fill(self) -> None:
        """Fill the chosen rows from the first; where one is chosen, from the row above it."""
        cells = self.chosen()
        rows = sorted({r for r, _ in cells})
        columns = sorted({c for _, c in cells})
        if len(rows) == 1 and rows[0] > 0:
            rows = [rows[0] - 1, *rows]
        if len(rows) < 2:
            self.said.emit("Choose cells of two rows or more: the first row fills the others.")
            return
        self.said.emit("")
        self.releases.fill(rows, columns)

    def sort_chosen(self) -> None:
        """Sort by the column of the current cell."""
        self.releases.sort(max(0, self.currentIndex().column()))

    def remove_chosen(self) -> None:
        """Remove the chosen rows."""
        rows = sorted({r for r, _ in self.chosen()})
        if rows:
            self.releases.remove(rows)
        else:
            self.said.emit("Choose a cell of each row that is to go.")

    def go_to(self, cell: Cell) -> None:
        """Choose a cell and show it."""
        index = self.releases.index(min(cell[0], self.releases.rowCount() - 1), cell[1])
        if index.isValid():
            self.setCurrentIndex(index)
            self.see()

    def see(self) -> None:
        """Scroll the page to the current cell: the table is as high as its rows."""
        self.scrollTo(self.currentIndex())
        at = self.visualRect(self.currentIndex())
        above = self.parentWidget()
        while above is not None:
            inner = above.widget() if isinstance(above, QScrollArea) else None
            if inner is not None and isinstance(above, QScrollArea):
                centre = self.viewport().mapTo(inner, at.center())
                above.ensureVisible(centre.x(), centre.y(), 0, at.height() + theme.UNIT)
            above = above.parentWidget()


class ReleaseGrid(QWidget):
    """The grid, its buttons, and a sentence for every cell that is not in the case."""

    refused = Signal(object)  # problems
    row_chosen = Signal(int)
    built = Signal()  # with other links

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._fitted: tuple[object, ...] = ()
        self._told: list[tuple[Cell, str]] = []
        self._desk, self._plan = desk, ""
        self.model = ReleaseModel(desk, self)
        self.events = EventModel(desk, self)
        self.table = ReleaseTable(self.model, self)
        self.event_table = CopyingTable("Every event of the plan’s releases", self)
        self.event_table.setModel(self.events)
        _editable(self.event_table)
        self.kind = QComboBox(self)
        self.kind.addItems(ROWS)
        self.kind.setAccessibleName("What a row of the grid is")
        self.kind.setMinimumHeight(theme.TARGET)
        self.buttons: dict[str, QAbstractButton] = {}
        self.said = text("", "problem")
        self.held = QWidget(self)
        self.help = text(SHORT_HELP, "note")
        self._lay_out()
        self._connect()

    def _lay_out(self) -> None:
        top = FlowLayout()
        top.addWidget(self.kind)
        for words, said in (
            ("Add row", "Add a row to the grid"),
            ("Fill down", "Fill the chosen cells from the first of them"),
            ("Sort", "Sort the grid by the column of the current cell"),
            ("Copy", "Copy the chosen cells"),
            ("Paste", "Paste cells from a spreadsheet"),
            ("Remove rows", "Remove the chosen rows of the grid"),
        ):
            self.buttons[words] = button(words, kind="link", said=said)
            top.addWidget(self.buttons[words])
        column = QVBoxLayout(self)
        column.setContentsMargins(0, theme.HALF, 0, theme.HALF)
        column.setSpacing(theme.HALF)
        column.addLayout(top)
        column.addWidget(self.table)
        column.addWidget(self.event_table)
        column.addWidget(self.said)
        column.addWidget(self.held)
        column.addWidget(self.help)
        self._held_column = QVBoxLayout(self.held)
        self._held_column.setContentsMargins(0, 0, 0, 0)
        self._held_column.setSpacing(2)
        self.said.hide()
        self.held.hide()
        self.event_table.hide()

    def _connect(self) -> None:
        table = self.table
        self.buttons["Add row"].clicked.connect(self._add)
        self.buttons["Fill down"].clicked.connect(table.fill)
        self.buttons["Sort"].clicked.connect(table.sort_chosen)
        self.buttons["Copy"].clicked.connect(table.copy)
        self.buttons["Paste"].clicked.connect(table.paste)
        self.buttons["Remove rows"].clicked.connect(table.remove_chosen)
        table.add_asked.connect(self._add)
        table.said.connect(self.say)
        table.selectionModel().currentChanged.connect(self._explain)
        self.model.refused.connect(self.refused)
        self.model.held_changed.connect(self._say_held)
        self.model.held_changed.connect(self._fit)
        self.events.refused.connect(self.refused)
        self.kind.currentIndexChanged.connect(self._choose_kind)

    def show_plan(self, case: Case, index: int, plan: Plan) -> None:
        """Show the releases of a plan."""
        at = (self.table.currentIndex().row(), self.table.currentIndex().column())
        chosen = self.table.chosen()
        count, same = self.model.rowCount(), plan.name == self._plan
        self._plan = plan.name
        self.table.setProperty("path", f"plans[{index}].releases")
        self.model.show_plan(case, plan)
        self.events.show_plan(case, index, plan)
        if same and chosen and self.model.rowCount() != count:
            self.table.go_to((max(0, at[0]), max(0, at[1])))
        self.say("")
        self._fit()

    def show_cell(self, row: int, column: int) -> None:
        """Choose a cell of the grid and give it the focus."""
        self.kind.setCurrentIndex(0)
        self.table.setFocus(Qt.FocusReason.OtherFocusReason)
        self.table.go_to((row, column))

    def say(self, words: str) -> None:
        """Say why nothing was done."""
        self.said.setText(f"⚠ {words}" if words else "")
        self.said.setVisible(bool(words))

    def _fit(self) -> None:
        """Give the table that is shown the height of its rows, where these have changed."""
        shown = self.event_table if self.kind.currentIndex() else self.table
        wanted = (shown, shown.model().rowCount(), self._desk.view.text_scale)
        if wanted != self._fitted:
            self._fitted = wanted
            shown.fit_height()

    def _choose_kind(self, kind: int) -> None:
        self.table.setVisible(kind == 0)
        self.event_table.setVisible(kind == 1)
        for made in self.buttons.values():
            made.setEnabled(kind == 0)
        self.help.setText(EVENT_HELP if kind else SHORT_HELP)
        self._fit()

    def _add(self) -> None:
        """Add a release in the first year, and choose its row."""
        plan = self._plan
        if not self._desk.document.case.donors:
            self.say(NO_DONOR)
            return
        problems: tuple[Problem, ...] = self._desk.document.try_edit(
            lambda case: new_parts.new_release(case, plan)
        )
        self.refused.emit(problems)
        if not problems:
            self.show_cell(self.model.releases - 1, 0)

    def _explain(self, now: QModelIndex, _before: QModelIndex) -> None:
        if now.isValid() and self.table.hasFocus():
            self.table.see()
        if now.isValid() and now.row() < self.model.releases:
            self.row_chosen.emit(now.row())
        path = self.model.path_of((now.row(), now.column())) if now.isValid() else ""
        if path:
            self._desk.explain.show(path)

    def _say_held(self) -> None:
        """Put a sentence under the grid for every cell that is not in the case."""
        why = list(self.model.why.items())
        if why == self._told:
            return
        self._told = why
        while (item := self._held_column.takeAt(0)) is not None:
            gone = item.widget()
            if gone is not None:
                gone.hide()
                gone.deleteLater()
        for cell, words in why[:MOST_SAID]:
            link = Link(f"⚠ {words}")
            link.setAccessibleName(f"Not in the case: {words} Go to the cell")
            link.clicked.connect(lambda _=False, cell=cell: self.show_cell(*cell))
            self._held_column.addWidget(link)
        if len(why) > MOST_SAID:
            self._held_column.addWidget(text(f"and {len(why) - MOST_SAID} more cells.", "note"))
        self.held.setVisible(bool(why))
        self.built.emit()


def _editable(table: CopyingTable) -> None:
    table.setEditTriggers(
        CopyingTable.EditTrigger.DoubleClicked
        | CopyingTable.EditTrigger.EditKeyPressed
        | CopyingTable.EditTrigger.AnyKeyPressed
    )
