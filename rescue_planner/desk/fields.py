"""Fields bound to a path of the case: name, unit and bounds come from the input's definition."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QEvent, QObject, QSignalBlocker, Qt, Signal
from PySide6.QtGui import QFocusEvent, QKeyEvent, QMouseEvent, QResizeEvent, QWheelEvent
from PySide6.QtWidgets import (
    QBoxLayout,
    QCheckBox,
    QComboBox,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QPlainTextEdit,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from rescue_planner.case.faults import Problem
from rescue_planner.case.fields import definition_at
from rescue_planner.case.inputs import Input
from rescue_planner.case.paths import parse_path
from rescue_planner.case.quantity import Quantity
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.numbers import range_in_words, read_number, stepped, value_at, written
from rescue_planner.desk.widgets import Link

if TYPE_CHECKING:
    from rescue_planner.case.document import Case
    from rescue_planner.case.edits import Edit

LABEL, NARROW = 27, 70  # widths in letters: of a label, and below which it stands above
WIDEST = 16_777_215


def sentence_of(problems: Sequence[Problem]) -> str:
    """Return problems as one line; each begins with a capital."""
    return " ".join(p.text[:1].upper() + p.text[1:] for p in problems)


def definition_of(path: str) -> Input | None:
    """Return the definition of the input at a written path, if it is one."""
    return definition_at(parse_path(path))


class FieldRow(QWidget):
    """A label and what it names, side by side, or one below the other where room is short."""

    def __init__(self, label: QLabel, content: QWidget) -> None:
        super().__init__()
        self._label = label
        label.setObjectName("field-label")
        label.setWordWrap(True)
        self._box = QBoxLayout(QBoxLayout.Direction.LeftToRight, self)
        self._box.setContentsMargins(0, 0, 0, 0)
        self._box.setSpacing(theme.UNIT)
        self._box.addWidget(label)
        self._box.addWidget(content, 1)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._arrange()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.StyleChange):
            self._arrange()

    def _arrange(self) -> None:
        letter = self._label.fontMetrics().averageCharWidth()
        narrow = self.width() < letter * NARROW
        direction = QBoxLayout.Direction
        wanted = direction.TopToBottom if narrow else direction.LeftToRight
        if self._box.direction() != wanted:
            self._box.setDirection(wanted)
            self._box.setSpacing(0 if narrow else theme.UNIT)
        width = WIDEST if narrow else letter * LABEL
        if self._label.maximumWidth() != width:
            self._label.setMinimumWidth(0 if narrow else width)
            self._label.setMaximumWidth(width)


class NumberEdit(QLineEdit):
    """The line a number is typed in; Up, Down, Page Up and Page Down step it."""

    stepped = Signal(int)
    entered = Signal()
    focused = Signal()
    reverted = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setMinimumHeight(theme.TARGET)

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
        if event.reason() in (Qt.FocusReason.TabFocusReason, Qt.FocusReason.BacktabFocusReason):
            self.selectAll()
        self.focused.emit()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        if event.reason() != Qt.FocusReason.PopupFocusReason:
            self.entered.emit()

    def wheelEvent(self, event: QWheelEvent) -> None:
        event.ignore()  # nothing moves unless the user moves it


class _Bound(QWidget):
    """What all fields share: their path, their place on the problem board, the sentence beside."""

    def __init__(self, desk: Desk, path: str, label: str | None, parent: QWidget | None) -> None:
        super().__init__(parent)
        self.desk, self.path, self.retired = desk, path, False
        self.definition = definition_of(path)
        name = self.definition.name if self.definition is not None else ""
        self.name = label or name or path.rpartition(".")[2].replace("_", " ").capitalize()
        self.problem = QLabel()
        self.problem.setObjectName("problem")
        self.problem.setWordWrap(True)
        self.problem.setVisible(False)
        desk.document.changed.connect(self.refresh)

    @property
    def has_problem(self) -> bool:
        """Whether the typed text is not in the case."""
        return not self.problem.isHidden()

    def retire(self) -> None:
        """Let go of the case before the field is taken away."""
        self.desk.document.changed.disconnect(self.refresh)
        self.desk.problems_shown.put(self.path, ())
        self.retired = True

    def held(self) -> Any:  # noqa: ANN401 - whatever stands at the path
        """Return what the case holds at the field's path."""
        document = self.desk.document
        return value_at(document.case, self.path) if document.has_case else None

    def refresh(self) -> None:
        """Show what the case holds; each kind of field says how."""
        raise NotImplementedError

    def _describe(self, target: QWidget, label: QLabel | None = None) -> None:
        target.setAccessibleName(self._spoken_name())
        target.setAccessibleDescription(self._spoken_description())
        target.setProperty("path", self.path)
        if label is not None:
            label.setBuddy(target)

    def unit_words(self) -> str:
        """Return the unit shown beside the field."""
        own: str | None = getattr(self, "_unit", None)
        if own is not None:
            return own
        return self.definition.unit if self.definition is not None else ""

    def _spoken_name(self) -> str:
        unit = self.unit_words()
        return f"{self.name}, {unit}" if unit not in ("", "–") else self.name

    def _spoken_description(self) -> str:
        if self.definition is None:
            return self.name
        bounds = f" Bounds: {self.definition.bounds}." if self.definition.bounds else ""
        return f"{self.definition.meaning}{bounds}"

    def _commit(self, value: float | str | bool | Quantity | None) -> bool:
        from rescue_planner.case.edits import set_value

        problems = self.desk.document.try_edit(lambda case: set_value(case, self.path, value))
        self._show_problems(problems)
        return not problems

    def _show_problems(self, problems: tuple[Problem, ...]) -> None:
        self._forget_offer()
        self.problem.setText("⚠ " + sentence_of(problems) if problems else "")
        self.problem.setVisible(bool(problems))
        self.desk.problems_shown.put(self.path, problems)

    def _forget_offer(self) -> None:
        """Take away what was offered with an earlier sentence."""

    def _say_wrong(self, text: str) -> None:
        self._show_problems((Problem(self.path, text),))


class NumberField(_Bound):
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
        return held.best if isinstance(held, Quantity) else None

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
        if isinstance(held, Quantity) and held.best == typed:
            self.revert()
            return
        self._accept(typed)

    def _outside(self, typed: float | int | None) -> bool:
        """Say so where a number lies outside the range that is held with it, and offer a way."""
        held = self.held()
        spread = held.spread if isinstance(held, Quantity) else None
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
        if not isinstance(held, Quantity) or self._wanted is None or held.spread is None:
            return
        ends = (*held.spread, self._wanted)
        changed = {"best": self._wanted, "low": min(ends), "high": max(ends)}
        whole = Quantity(**{**held.model_dump(exclude_none=True), **changed})
        self._accept(whole)

    def _accept(self, typed: float | int | Quantity | None) -> None:
        if not isinstance(typed, Quantity) and self._outside(typed):
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
        if isinstance(held, Quantity) and not self.has_problem:
            moved = stepped(held.best, by, self.definition)
            self._put(written(moved))
            self._accept(moved)
            self.edit.selectAll()


class TextField(_Bound):
    """A text of the case; `make` is its edit where setting the text is not enough (a new name)."""

    def __init__(
        self,
        desk: Desk,
        path: str,
        *,
        label: str | None = None,
        lines: int = 1,
        make: Callable[[Case, str], Edit] | None = None,
    ) -> None:
        super().__init__(desk, path, label, None)
        self._make = make
        self.label = QLabel(self.name)
        self.edit: QLineEdit | QPlainTextEdit = (
            QLineEdit(self) if lines == 1 else QPlainTextEdit(self)
        )
        self.edit.setObjectName("text")
        self.edit.setMinimumHeight(theme.TARGET)
        if isinstance(self.edit, QPlainTextEdit):
            self.edit.setTabChangesFocus(True)
            self.edit.document().setDocumentMargin(2)
            self.label.setAlignment(Qt.AlignmentFlag.AlignTop | Qt.AlignmentFlag.AlignLeft)
            self.label.setContentsMargins(0, theme.HALF, 0, 0)
            self.edit.setFixedHeight(self.edit.fontMetrics().lineSpacing() * lines + 12)
        self._describe(self.edit, self.label)
        self._lay_out()
        self.edit.installEventFilter(self)
        self.refresh()

    def _lay_out(self) -> None:
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.setSpacing(2)
        outer.addWidget(FieldRow(self.label, self.edit))
        outer.addWidget(self.problem)

    def text(self) -> str:
        """Return the typed text."""
        return self.edit.text() if isinstance(self.edit, QLineEdit) else self.edit.toPlainText()

    def _put(self, text: str) -> None:
        blocker = QSignalBlocker(self.edit)
        if self.text() != text:
            if isinstance(self.edit, QLineEdit):
                self.edit.setText(text)
            else:
                self.edit.setPlainText(text)
        del blocker

    def refresh(self) -> None:
        """Show what the case holds, unless it is being typed over."""
        if not self.has_problem and not self.edit.hasFocus():
            self._put(str(self.held() or ""))

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if watched is self.edit:
            if event.type() == QEvent.Type.FocusIn:
                self.desk.explain.show(self.path)
            elif event.type() == QEvent.Type.FocusOut:
                self.commit()
            elif isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress:
                return self._key(Qt.Key(event.key()))
        return super().eventFilter(watched, event)

    def _key(self, key: Qt.Key) -> bool:
        if key == Qt.Key.Key_Escape:
            self._put(str(self.held() or ""))
            self._show_problems(())
            return True
        if key in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and isinstance(self.edit, QLineEdit):
            self.commit()
            return True
        return False

    def commit(self) -> None:
        """Put the typed text into the case."""
        typed = self.text().strip()
        if self.retired:
            return
        if typed == str(self.held() or ""):
            self._show_problems(())
            return
        if self._make is None:
            self._commit(typed or None)
            return
        make = self._make
        self._show_problems(self.desk.document.try_edit(lambda case: make(case, typed)))


class ChoiceField(_Bound):
    """One of a few values; `choices` are (value in the file, words on the screen)."""

    def __init__(
        self,
        desk: Desk,
        path: str,
        choices: Sequence[tuple[str | None, str]],
        *,
        label: str | None = None,
        parent: QWidget | None = None,
    ) -> None:
        super().__init__(desk, path, label, parent)
        self.choices = tuple(choices)
        self.label = QLabel(self.name)
        self.edit = QComboBox(self)
        self.edit.setMinimumHeight(theme.TARGET)
        self.edit.addItems([words for _, words in self.choices])
        self.edit.setMinimumWidth(theme.UNIT * 12)  # longer words may be cut short, with a list
        self.edit.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self._describe(self.edit, self.label)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.setSpacing(2)
        content = QWidget()
        row = QHBoxLayout(content)
        row.setContentsMargins(0, 0, 0, 0)
        row.addWidget(self.edit)
        row.addStretch(1)
        outer.addWidget(FieldRow(self.label, content))
        outer.addWidget(self.problem)
        self.edit.activated.connect(self._chosen)
        self.edit.installEventFilter(self)
        self.refresh()

    def refresh(self) -> None:
        """Show what the case holds."""
        held = self.held()
        blocker = QSignalBlocker(self.edit)
        values = [value for value, _ in self.choices]
        self.edit.setCurrentIndex(values.index(held) if held in values else -1)
        del blocker

    def _chosen(self, index: int) -> None:
        if not self._commit(self.choices[index][0]):
            self.refresh()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if watched is self.edit:
            if event.type() == QEvent.Type.FocusIn:
                self.desk.explain.show(self.path)
            elif event.type() == QEvent.Type.Wheel:
                event.ignore()
                return True
        return super().eventFilter(watched, event)


class _Words(QLabel):
    """The words of a check box, which break over lines and can be clicked too."""

    clicked = Signal()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        super().mouseReleaseEvent(event)
        self.clicked.emit()


class CheckField(_Bound):
    """A yes or no of the case."""

    def __init__(self, desk: Desk, path: str, words: str, *, parent: QWidget | None = None) -> None:
        super().__init__(desk, path, words, parent)
        self.edit = QCheckBox(self)
        self.edit.setMinimumSize(theme.TARGET, theme.TARGET)
        self.label = _Words(words)
        self.label.setWordWrap(True)
        self._describe(self.edit, self.label)
        row = QHBoxLayout()
        row.setSpacing(theme.HALF)
        row.addWidget(self.edit)
        row.addWidget(self.label, 1)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.setSpacing(2)
        outer.addLayout(row)
        outer.addWidget(self.problem)
        self.label.clicked.connect(self.edit.click)
        self.edit.clicked.connect(self._clicked)
        self.edit.installEventFilter(self)
        self.refresh()

    def refresh(self) -> None:
        """Show what the case holds."""
        blocker = QSignalBlocker(self.edit)
        self.edit.setChecked(self.held() is True)
        del blocker

    def _clicked(self, checked: bool) -> None:
        if not self._commit(checked):
            self.refresh()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if watched is self.edit and event.type() == QEvent.Type.FocusIn:
            self.desk.explain.show(self.path)
        return super().eventFilter(watched, event)
