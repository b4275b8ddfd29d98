"""The list of plans: add, duplicate, rename, remove."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QRect, QRectF, QSignalBlocker, QSize, Qt, Signal
from PySide6.QtGui import QIcon, QKeyEvent, QPainter, QPixmap, QResizeEvent
from PySide6.QtWidgets import QGridLayout, QListWidget, QListWidgetItem, QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.edits import (
    Edit,
    add_plan,
    duplicate_plan,
    move_plan,
    remove_plan,
    rename_plan,
)
from rescue_planner.case.plans import MOST_PLANS, NO_RELEASES
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.fields import sentence_of
from rescue_planner.desk.icons import Icons
from rescue_planner.desk.plan_mark import paint_sample
from rescue_planner.desk.view import Scheme
from rescue_planner.desk.widgets import button, text
from rescue_planner.projection.marks import PlanMark, mark

STAYS = f"“{NO_RELEASES}” is always there: every other plan is compared with it."
FULL = f"A case holds at most {MOST_PLANS} plans: remove one first."
SAMPLE = QSize(34, 14)
RING = 3  # the frame of the focused list and a pixel of air


class _List(QListWidget):
    """Delete removes, F2 renames, Alt with Up or Down moves."""

    remove_asked = Signal()
    move_asked = Signal(int)

    def fit(self) -> None:
        """Be as high as the rows are, and no higher."""
        self.doItemsLayout()  # names break anew
        last = self.visualItemRect(self.item(self.count() - 1)) if self.count() else QRect()
        self.setFixedHeight(max(last.bottom() + 1, theme.TARGET) + 2 * RING)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        if event.size().width() != event.oldSize().width():
            self.fit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        moves = {Qt.Key.Key_Up: -1, Qt.Key.Key_Down: 1}
        alt = event.modifiers() & Qt.KeyboardModifier.AltModifier
        if event.key() == Qt.Key.Key_Delete:
            self.remove_asked.emit()
        elif alt and Qt.Key(event.key()) in moves:
            self.move_asked.emit(moves[Qt.Key(event.key())])
        else:
            super().keyPressEvent(event)


class PlanList(QWidget):
    """The plans of the case with their marks; one of them is being edited."""

    chosen = Signal(str)  # plan

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self._current = self._first()
        self._drawn: tuple[object, ...] = ()
        self.list = _List(self)
        self.list.setAccessibleName("Plans")
        self.list.setObjectName("plans")
        self.list.setIconSize(SAMPLE)
        self.list.setWordWrap(True)
        self.list.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.list.setEditTriggers(QListWidget.EditTrigger.EditKeyPressed)
        self.reason = text("", "note")
        self.problem = text("", "problem")
        self.add_button = button("Add plan")
        self.duplicate_button = button("Duplicate", said="Duplicate plan")
        self.rename_button = button("Rename", said="Rename plan")
        self.remove_button = button("Remove", said="Remove plan")
        self._icons = Icons(
            desk.view,
            {
                self.add_button: "add",
                self.duplicate_button: "duplicate",
                self.rename_button: "rename",
                self.remove_button: "remove",
            },
        )
        for made in (self.add_button, self.duplicate_button, self.rename_button,
                     self.remove_button):  # fmt: skip
            made.setObjectName("dense")
        self._lay_out()
        self._connect()
        self.refresh()

    def _lay_out(self) -> None:
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(theme.HALF)
        column.addWidget(text("Plans", "section"))
        column.addWidget(self.list)
        grid = QGridLayout()
        grid.setSpacing(theme.HALF)
        grid.addWidget(self.add_button, 0, 0)
        grid.addWidget(self.duplicate_button, 0, 1)
        grid.addWidget(self.rename_button, 1, 0)
        grid.addWidget(self.remove_button, 1, 1)
        column.addLayout(grid)
        column.addWidget(self.problem)
        column.addWidget(self.reason)
        column.addStretch(1)
        self.problem.hide()

    def _connect(self) -> None:
        self.list.currentRowChanged.connect(self._row_changed)
        self.list.itemChanged.connect(self._renamed)
        self.list.remove_asked.connect(self._remove)
        self.list.move_asked.connect(self._move)
        self.add_button.clicked.connect(self._add)
        self.duplicate_button.clicked.connect(self._duplicate)
        self.rename_button.clicked.connect(self._start_renaming)
        self.remove_button.clicked.connect(self._remove)
        self._desk.document.changed.connect(self._case_changed)
        self._desk.document.replaced.connect(self._replaced)
        self._desk.view.changed.connect(self.refresh)

    @property
    def current(self) -> str:
        """The plan that is being edited."""
        return self._current

    def _first(self) -> str:
        """Return the plan that is edited first: one in which there is something to edit."""
        names = self.names()
        return names[1] if len(names) > 1 else NO_RELEASES

    def names(self) -> list[str]:
        """Return the names of the plans, in their order."""
        document = self._desk.document
        return [plan.name for plan in document.case.plans] if document.has_case else []

    def choose(self, plan: str) -> None:
        """Edit another plan."""
        if plan in self.names():
            self._current = plan
            self.refresh()
            self.chosen.emit(plan)

    def _replaced(self) -> None:
        self._current = self._first()
        self.refresh()
        self.chosen.emit(self._current)

    def _case_changed(self, _case: object) -> None:
        names = self.names()
        if self._current not in names:
            row = min(max(self.list.currentRow(), 0), len(names) - 1)
            self._current = names[row]
            self.refresh()
            self.chosen.emit(self._current)
        else:
            self.refresh()

    def refresh(self) -> None:
        """Show the plans of the case as it stands."""
        names, view = self.names(), self._desk.view
        hidden = [name in view.hidden for name in names]
        wanted = (names, hidden, view.scheme, view.text_scale, self._current)
        if wanted != self._drawn:
            self._drawn = wanted
            self._fill(names, hidden, view.scheme)
        self._enable(names)

    def _fill(self, names: list[str], hidden: list[bool], scheme: Scheme) -> None:
        blocker = QSignalBlocker(self.list)
        self.list.clear()
        self.list.setIconSize(SAMPLE * self._desk.view.text_scale)
        for i, name in enumerate(names):
            item = QListWidgetItem(_icon(mark(i), scheme, self._desk.view.text_scale), name)
            note = ", hidden on charts" if hidden[i] else ""
            item.setData(Qt.ItemDataRole.AccessibleTextRole, f"Plan {mark(i).letter}, {name}{note}")
            item.setToolTip(f"Plan {mark(i).letter}: {name}{note}")
            if name != NO_RELEASES:
                item.setFlags(item.flags() | Qt.ItemFlag.ItemIsEditable)
            self.list.addItem(item)
        if self._current in names:
            self.list.setCurrentRow(names.index(self._current))
        self.list.fit()
        del blocker

    def _enable(self, names: list[str]) -> None:
        open_, stays, full = bool(names), self._current == NO_RELEASES, len(names) >= MOST_PLANS
        self.add_button.setEnabled(open_ and not full)
        self.duplicate_button.setEnabled(open_ and not full)
        self.rename_button.setEnabled(open_ and not stays)
        self.remove_button.setEnabled(open_ and not stays)
        reasons = [STAYS if stays and open_ else "", FULL if full else ""]
        self.reason.setText(" ".join(reason for reason in reasons if reason))
        self.reason.setVisible(bool(self.reason.text()))
        for made in (self.rename_button, self.remove_button):
            made.setToolTip(STAYS if stays else "")
            made.setAccessibleDescription(STAYS if stays else "")

    def _row_changed(self, row: int) -> None:
        names = self.names()
        if 0 <= row < len(names):
            self._current = names[row]
            self._drawn = ()
            self._say("")
            self._enable(names)
            self.chosen.emit(self._current)

    # edits

    def _try(self, make: Callable[[Case], Edit]) -> bool:
        problems = self._desk.document.try_edit(make)
        self._say("⚠ " + sentence_of(problems) if problems else "")
        return not problems

    def _say(self, words: str) -> None:
        self.problem.setText(words)
        self.problem.setVisible(bool(words))

    def _add(self) -> None:
        taken = {name.casefold() for name in self.names()}
        number = len(taken)
        while f"plan {number}" in taken:
            number += 1
        name = f"Plan {number}"
        if self._try(lambda case: add_plan(case, name)):
            self.choose(name)
            self._start_renaming()

    def _duplicate(self) -> None:
        before, name = set(self.names()), self._current
        copied = name if name != NO_RELEASES else None
        if copied is None:
            self._add()
            return
        if self._try(lambda case: duplicate_plan(case, name)):
            self.choose(next(n for n in self.names() if n not in before))

    def _start_renaming(self) -> None:
        item = self.list.currentItem()
        if self.list.count() and self._current != NO_RELEASES:
            self.list.setFocus()
            self.list.editItem(item)

    def _renamed(self, item: QListWidgetItem) -> None:
        old, new = self._current, item.text().strip()
        if new == old:
            return
        self._current = new  # the case changes under this name
        if not self._try(lambda case: rename_plan(case, old, new)):
            self._current = old
        self._drawn = ()
        self.refresh()
        self.chosen.emit(self._current)

    def _remove(self) -> None:
        name = self._current
        if name == NO_RELEASES:
            self._say(f"⚠ {STAYS}")
            return
        self._try(lambda case: remove_plan(case, name))

    def _move(self, by: int) -> None:
        name, names = self._current, self.names()
        to = names.index(name) + by
        if name != NO_RELEASES and 1 <= to < len(names):
            self._try(lambda case: move_plan(case, name, to))


def _icon(made: PlanMark, scheme: Scheme, scale: float) -> QIcon:
    """Return the letter, line and marker of a plan."""
    ratio = 2.0 * scale
    pixmap = QPixmap(SAMPLE * ratio)
    pixmap.setDevicePixelRatio(2.0)
    pixmap.fill(Qt.GlobalColor.transparent)
    painter = QPainter(pixmap)
    painter.scale(scale, scale)
    painter.setFont(theme.font(theme.NOTE, 1.0, bold=True))
    painter.setPen(theme.plan_colour(made, scheme))
    painter.drawText(QRectF(0, 0, 12, SAMPLE.height()), Qt.AlignmentFlag.AlignCenter, made.letter)
    paint_sample(painter, QRectF(14, 0, SAMPLE.width() - 14, SAMPLE.height()), made, scheme)
    painter.end()
    return QIcon(pixmap)
