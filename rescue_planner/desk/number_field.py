"""A number of the case: typed, stepped, widened, taken back."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QSignalBlocker, Qt, Signal
from PySide6.QtGui import QFocusEvent, QKeyEvent, QWheelEvent
from PySide6.QtWidgets import (
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.field_base import Bound, FieldRow, asks_to_undo
from rescue_planner.desk.numbers import is_quantity, range_in_words, read_number, stepped, written
from rescue_planner.desk.widgets import Link

if TYPE_CHECKING:
    from rescue_planner.case.quantity import Quantity

CHOSEN_BY_KEY = (
    Qt.FocusReason.TabFocusReason,
    Qt.FocusReason.BacktabFocusReason,
    Qt.FocusReason.ShortcutFocusReason,
    Qt.FocusReason.OtherFocusReason,  # the program put the focus there
)


class NumberEdit(QLineEdit):
    """The line a number is typed in; Up, Down, Page Up and Page Down step it."""

    stepped = Signal(int)
    entered = Signal()
    focused = Signal()
    reverted = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setMinimumHeight(theme.TARGET)

    def event(self, event: QEvent) -> bool:
        """Leave undo and redo to the window unless a number is half typed here."""
        if not self.isModified() and asks_to_undo(event):
            event.ignore()
            return True
        return super().event(event)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        steps = {
            Qt.Key.Key_Up: 1,
            Qt.Key.Key_Down: -1,
            Qt.Key.Key_PageUp: 10,
            Qt.Key.Key_PageDown: -10,
        }
        key = Qt.Key(event.key())
        if key in steps:
            self.stepped.emit(steps[key])
        elif key in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.entered.emit()
        elif key == Qt.Key.Key_Escape and self.isModified():
            self.reverted.emit()
        else:
            super().keyPressEvent(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        if event.reason() in CHOSEN_BY_KEY:
            self.selectAll()
        self.focused.emit()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        if event.reason() != Qt.FocusReason.PopupFocusReason:
            self.entered.emit()

    def wheelEvent(self, event: QWheelEvent) -> None:
        event.ignore()  # nothing moves unless the user moves it


class NumberField(Bound):
    """A number of the case with its label, unit, range and origin.

    Typed text stays where it is wrong, with one sentence beside it. Enter or leaving the field
    puts it into the case; Escape takes it back. `compact` is a number inside a sentence.
    """

    def __init__(
        self,
        desk: Desk,
        path: str,
        *,
        compact: bool = False,
        label: str | None = None,
        unit: str | None = None,
        parent: QWidget | None = None,
    ) -> None:
        super().__init__(desk, path, label, parent)
        self.compact = compact
        self._unit = unit
        self.edit = NumberEdit(self)
        self.edit.setObjectName("compact-number" if compact else "number")
        self.edit.setAlignment(
            Qt.AlignmentFlag.AlignCenter if compact else Qt.AlignmentFlag.AlignRight
        )
        self.label = QLabel(self.name)
        self.unit = QLabel(self.unit_words())
        self.unit.setObjectName("unit")
        self.note = QLabel()
        self.note.setObjectName("note")
        self.widen = Link("Widen the range to it")
        self.widen.hide()
        self._wanted: float | int | None = None
        self._describe(self.edit, self.label)
        self._lay_out()
        self._connect()
        self.refresh()

    def _lay_out(self) -> None:
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.setSpacing(2)
        if self.compact:
            outer.addWidget(self.edit)
            outer.addWidget(self.problem)
            outer.addWidget(self.widen)
            self.setSizePolicy(QSizePolicy.Policy.Maximum, QSizePolicy.Policy.Maximum)
            for unused in (self.label, self.unit, self.note):
                unused.setParent(None)
            return
        self.edit.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        self.unit.setWordWrap(True)
        self.note.setWordWrap(True)
        self.note.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        content = QWidget()
        row = QHBoxLayout(content)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(theme.UNIT)
        row.addWidget(self.edit)
        row.addWidget(self.unit, 3)
        row.addWidget(self.note, 2)
        outer.addWidget(FieldRow(self.label, content))
        outer.addWidget(self.problem)
        outer.addWidget(self.widen)

    def _connect(self) -> None:
        self.edit.entered.connect(self.commit)
        self.edit.stepped.connect(self.step)
        self.edit.reverted.connect(self.revert)
        self.edit.focused.connect(self._focused)
        self.edit.textChanged.connect(self._fit)
        self.widen.clicked.connect(self._widen)

    def _focused(self) -> None:
        self.desk.explain.show(self.path)

    def value(self) -> float | None:
        """Return the number the case holds, or nothing."""
        held = self.held()
        return held.best if is_quantity(held) else None

    def refresh(self) -> None:
        """Show what the case holds, unless half-typed text or a wrong one stands here."""
        held = self.held()
        if not (self.edit.isModified() or self.has_problem):
            self._put("" if held is None else written(held.best))
        elif held is not None and self.edit.text() == written(held.best):
            self.revert()
        if not self.compact:
            self._show_note(held)

    def _show_note(self, held: Quantity | None) -> None:
        if held is None:
            self.note.setText("left out")
            return
        parts = [range_in_words(held), held.origin or ""]
        self.note.setText(" · ".join(part for part in parts if part))

    def _put(self, text: str) -> None:
        blocker = QSignalBlocker(self.edit)
        if self.edit.text() != text:
            self.edit.setText(text)
        self.edit.setModified(False)
        del blocker
        self._fit()

    def _fit(self) -> None:
        metrics = self.edit.fontMetrics()
        text = self.edit.text() if self.compact else "0" * 9
        wanted = max(metrics.horizontalAdvance(text or "–"), metrics.horizontalAdvance("00"))
        self.edit.setFixedWidth(wanted + (12 if self.compact else 20))

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.StyleChange):
            self._fit()

    def commit(self) -> None:
        """Put the typed number into the case, or say what is wrong with it."""
        if self.retired or not (self.edit.isModified() or self.has_problem):
            return
        text = self.edit.text()
        if not text.strip():
            self._accept(None)
            return
        try:
            typed = read_number(text)
        except ValueError as wrong:
            self._say_wrong(str(wrong))
            return
        held = self.held()
        if is_quantity(held) and held.best == typed:
            self.revert()
            return
        self._accept(typed)

    def _outside(self, typed: float | int | None) -> bool:
        """Say so where a number lies outside the range that is held with it, and offer a way."""
        held = self.held()
        spread = held.spread if is_quantity(held) else None
        if typed is None or spread is None or spread[0] <= typed <= spread[1]:
            return False
        self._wanted = typed
        self._say_wrong(
            f"{written(typed)} is outside the range {range_in_words(held)} held with this value. "
            "Change the range at the right, or widen it."
        )
        self.widen.setAccessibleName(f"Widen the range of {self.name} to {written(typed)}")
        self.widen.show()
        return True

    def _forget_offer(self) -> None:
        self.widen.hide()

    def _widen(self) -> None:
        held = self.held()
        if not is_quantity(held) or self._wanted is None or held.spread is None:
            return
        ends = (*held.spread, self._wanted)
        changed = {"best": self._wanted, "low": min(ends), "high": max(ends)}
        from rescue_planner.case.quantity import Quantity

        whole = Quantity(**{**held.model_dump(exclude_none=True), **changed})
        self._accept(whole)

    def _accept(self, typed: float | int | Quantity | None) -> None:
        if not is_quantity(typed) and self._outside(typed):
            self.edit.setModified(True)
            return
        self.edit.setModified(False)  # so that the case's own form of the number is shown
        self.problem.setVisible(False)
        text = self.edit.text()
        if not self._commit(typed):
            blocker = QSignalBlocker(self.edit)
            self.edit.setText(text)
            self.edit.setModified(True)
            del blocker

    def revert(self) -> None:
        """Take typed text back to what the case holds."""
        held = self.held()
        self._put("" if held is None else written(held.best))
        self._show_problems(())

    def step(self, by: int) -> None:
        """Move the number by sensible steps and put it into the case."""
        self.commit()
        held = self.held()
        if is_quantity(held) and not self.has_problem:
            moved = stepped(held.best, by, self.definition)
            self._put(written(moved))
            self._accept(moved)
            self.edit.selectAll()
