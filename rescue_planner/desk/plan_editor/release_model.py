"""The releases of a plan as a Qt table: a row a release, cells edited in place."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, Qt, Signal
from PySide6.QtGui import QColor, QFont
from PySide6.QtWidgets import QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.edits import Edit
from rescue_planner.case.edits.releases import order_releases, remove_releases
from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.paths import format_path
from rescue_planner.case.plan_entry import fill_down, followed, order_by, put_texts
from rescue_planner.case.plan_table import (
    COLUMNS,
    NOTHING_HELD,
    PLACES,
    Cell,
    Sheet,
    headings,
    held_sentences,
    meaning,
    place_words,
    table_rows,
)
from rescue_planner.case.plans import Plan
from rescue_planner.case.problems import Problem
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.numbers import read_number

Index = QModelIndex | QPersistentModelIndex
DONOR = PLACES["donor"]


class ReleaseModel(QAbstractTableModel):
    """Texts go into the case in one undoable step; what is wrong stays in its cell."""

    refused = Signal(object)  # problems of an edit that is not of single cells
    held_changed = Signal()  # what is held beside the case

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self._plan: Plan | None = None
        self._sheets: dict[str, Sheet] = {}
        self._seen: dict[str, Plan] = {}
        self._names: set[str] = set()
        self._on_board: set[str] = set()
        self._heads: tuple[str, ...] = ("",) * len(COLUMNS)
        self.rows: tuple[tuple[str, ...], ...] = ()
        self.why: dict[Cell, str] = {}
        desk.document.replaced.connect(self._forget)

    # what is shown

    def show_plan(self, case: Case, plan: Plan) -> None:
        """Show the releases of a plan with what is held beside them."""
        for name, sheet in list(self._sheets.items()):
            before = self._seen.get(name)
            now = before and self._now(case, before)
            if before is not None and now is not None:
                del self._sheets[name]
                self._sheets[now.name] = followed(sheet, before, now)
        self._seen = {one.name: one for one in case.plans if one.name in self._sheets}
        self._names = {one.name for one in case.plans}
        self._plan = plan
        self._show(case)

    def _now(self, case: Case, before: Plan) -> Plan | None:
        """Return a plan as it is now, under its new name where it was renamed."""
        same = next((one for one in case.plans if one.name == before.name), None)
        new = (one for one in case.plans if one.name not in self._names)
        return same or next((one for one in new if one.releases == before.releases), None)

    def _show(self, case: Case) -> None:
        assert self._plan is not None
        rows = table_rows(case, self._plan.name, self.sheet)
        said = held_sentences(self.sheet, len(self._plan.releases))
        heads = headings(case)
        if len(rows) != len(self.rows) or heads != self._heads:
            self.beginResetModel()
            self.rows, self.why, self._heads = rows, dict(said), heads
            self.endResetModel()
        elif rows != self.rows or dict(said) != self.why:
            self.rows, self.why = rows, dict(said)
            if rows:
                self.dataChanged.emit(self.index(0, 0), self.index(len(rows) - 1, len(COLUMNS) - 1))
        self._tell_board(case)
        self.held_changed.emit()

    def _tell_board(self, case: Case) -> None:
        """Say on the desk's board what is typed and not in the case."""
        told: dict[str, tuple[Problem, ...]] = {}
        for index, plan in enumerate(case.plans):
            sheet = self._sheets.get(plan.name, NOTHING_HELD)
            path = format_path(("plans", index, "releases"))
            said = held_sentences(sheet, len(plan.releases))
            if said:
                told[path] = tuple(Problem(path, words) for _, words in said)
        for path in self._on_board - told.keys():
            self._desk.problems_shown.put(path, ())
        for path, problems in told.items():
            self._desk.problems_shown.put(path, problems)
        self._on_board = set(told)

    def _forget(self) -> None:
        self._sheets, self._seen, self._on_board = {}, {}, set()

    @property
    def sheet(self) -> Sheet:
        """What the table holds beside the case."""
        name = "" if self._plan is None else self._plan.name
        return self._sheets.get(name, NOTHING_HELD)

    @property
    def releases(self) -> int:
        """How many rows are releases of the case; rows below them are not whole yet."""
        return 0 if self._plan is None else len(self._plan.releases)

    def path_of(self, cell: Cell) -> str:
        """Return the path of a cell of a release, empty for a row that is none."""
        if self._plan is None or not self._desk.document.has_case or cell[0] >= self.releases:
            return ""
        names = [plan.name for plan in self._desk.document.case.plans]
        if self._plan.name not in names:
            return ""
        at = names.index(self._plan.name)
        return format_path(("plans", at, "releases", cell[0], *COLUMNS[cell[1]].path))

    # Qt's model

    def rowCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's signature
        return 0 if parent.isValid() else len(self.rows)

    def columnCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's signature
        return 0 if parent.isValid() else len(COLUMNS)

    def flags(self, index: Index) -> Qt.ItemFlag:
        kept = super().flags(index)
        return kept | Qt.ItemFlag.ItemIsEditable if index.isValid() else kept

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:  # noqa: ANN401
        if not index.isValid():
            return None
        cell = (index.row(), index.column())
        shown, why = self.rows[cell[0]][cell[1]], self.why.get(cell, "")
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.EditRole):
            return shown
        if role == Qt.ItemDataRole.AccessibleTextRole:
            wrong = f". Not in the case. {why}" if why else ""
            return f"{place_words(cell)}: {shown or 'not stated'}{wrong}"
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _side(index.column(), Qt.AlignmentFlag.AlignVCenter)
        if role == Qt.ItemDataRole.ToolTipRole:
            return why or None
        return self._drawn(cell, why, role)

    def _drawn(self, cell: Cell, why: str, role: int) -> Any:  # noqa: ANN401 - a colour or a font
        colours = theme.palette(self._desk.view.scheme)
        draft = cell[0] >= self.releases
        if role == Qt.ItemDataRole.ForegroundRole and (why or draft):
            return QColor(colours.problem if why else colours.soft)
        if role == Qt.ItemDataRole.BackgroundRole and why:
            return QColor(colours.accent_ground)
        if role == Qt.ItemDataRole.FontRole and (why or draft):
            font = QFont()
            font.setUnderline(bool(why))
            font.setItalic(draft)
            return font
        return None

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:  # noqa: ANN401
        if orientation == Qt.Orientation.Vertical:
            return str(section + 1) if role == Qt.ItemDataRole.DisplayRole else None
        if role == Qt.ItemDataRole.DisplayRole:
            return self._heads[section]
        if role == Qt.ItemDataRole.ToolTipRole:
            return meaning(section)
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _side(section, Qt.AlignmentFlag.AlignBottom)
        return None

    # edits

    def setData(self, index: Index, value: Any, role: int = Qt.ItemDataRole.EditRole) -> bool:  # noqa: ANN401
        if role != Qt.ItemDataRole.EditRole or not index.isValid():
            return False
        cell = (index.row(), index.column())
        if str(value) == self.rows[cell[0]][cell[1]] and cell not in self.sheet.held:
            return True
        self.put({cell: str(value).strip()})
        return cell not in self.sheet.held

    def put(self, texts: Mapping[Cell, str], sentence: str = "") -> None:
        """Put texts into cells: the good ones in one step, the others held in place."""
        if self._plan is None:
            return
        document, name = self._desk.document, self._plan.name
        entry = put_texts(document.case, name, texts, read_number, self.sheet, sentence)
        after = document.case if entry.edit is None else entry.edit.case
        self._sheets[name] = entry.sheet
        self._seen[name] = after.plan(name)
        if entry.sheet.is_clean:
            del self._sheets[name], self._seen[name]
        self.refused.emit(())
        if entry.edit is not None:
            document.apply(entry.edit)
        if entry.edit is None or not self.rows:
            self._show(document.case)

    def clear(self, cells: Sequence[Cell]) -> None:
        """Leave out what stands in cells."""
        self.put(dict.fromkeys(cells, ""), _counted("Leave out {} of the releases", len(cells)))

    def fill(self, rows: Sequence[int], columns: Sequence[int]) -> None:
        """Give rows what the first of them holds, ranges and sources included."""
        if self._plan is None or len(rows) < 2:
            return
        name = self._plan.name
        try:
            edit = fill_down(self._desk.document.case, name, rows, columns)
        except (InvalidCase, KeyError):  # some of it cannot go in: the texts say which
            first, *below = sorted(rows)
            texts = {(r, c): self.rows[first][c] for r in below for c in columns}
            self.put(texts, f"Fill down {len(texts)} values in the releases of plan “{name}”")
            return
        self._desk.document.apply(edit)

    def sort(self, column: int, order: Qt.SortOrder = Qt.SortOrder.AscendingOrder) -> None:
        """Put the releases in the order of a column; where they are in it, the other way round."""
        if self._plan is None or not self.releases:
            return
        name, title = self._plan.name, COLUMNS[column].title.lower()
        case = self._desk.document.case
        falling = order == Qt.SortOrder.DescendingOrder
        places = order_by(case, name, column, falling=falling)
        if places == list(range(self.releases)):
            falling, places = True, order_by(case, name, column, falling=True)
        way = ", largest first" if falling else ""
        sentence = f"Sort the releases of plan “{name}” by {title}{way}"
        self._try(lambda held: order_releases(held, name, sentence, places))

    def remove(self, rows: Sequence[int]) -> None:
        """Remove rows: releases of the case, and rows that are not whole."""
        if self._plan is None:
            return
        name, mine = self._plan.name, [r for r in rows if r < self.releases]
        gone = {r - self.releases for r in rows} - {r - self.releases for r in mine}
        if gone:
            drafts = tuple(d for k, d in enumerate(self.sheet.drafts) if k not in gone)
            self._sheets[name] = Sheet(self.sheet.held, drafts)
            self._show(self._desk.document.case)
        if mine:
            sentence = f"Remove {len(mine)} release{'s' * (len(mine) > 1)} of plan “{name}”"
            self._try(lambda held: remove_releases(held, name, sentence, mine))

    def _try(self, make: Callable[[Case], Edit]) -> None:
        self.refused.emit(self._desk.document.try_edit(make))


def _counted(words: str, count: int) -> str:
    return words.format("1 value" if count == 1 else f"{count} values")


def _side(column: int, upright: Qt.AlignmentFlag) -> int:
    left = column == DONOR
    return int((Qt.AlignmentFlag.AlignLeft if left else Qt.AlignmentFlag.AlignRight) | upright)
