"""What all fields share: their path, their row, the sentence of a problem."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QEvent
from PySide6.QtGui import QKeyEvent, QKeySequence, QResizeEvent
from PySide6.QtWidgets import (
    QBoxLayout,
    QLabel,
    QWidget,
)

from rescue_planner.case.faults import Problem
from rescue_planner.case.paths import parse_path
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.numbers import value_at

if TYPE_CHECKING:
    from rescue_planner.case.inputs import Input
    from rescue_planner.case.quantity import Quantity

LABEL, NARROW = 27, 70  # widths in letters: of a label, and below which it stands above
WIDEST = 16_777_215


def sentence_of(problems: Sequence[Problem]) -> str:
    """Return problems as one line; each begins with a capital."""
    return " ".join(p.text[:1].upper() + p.text[1:] for p in problems)


def definition_of(path: str) -> Input | None:
    """Return the definition of the input at a written path, if it is one."""
    from rescue_planner.case.fields import definition_at

    return definition_at(parse_path(path))


def asks_to_undo(event: QEvent) -> bool:
    """Return whether a line that has the focus is asked if it wants undo or redo for itself."""
    return (
        event.type() == QEvent.Type.ShortcutOverride
        and isinstance(event, QKeyEvent)
        and (
            event.matches(QKeySequence.StandardKey.Undo)
            or event.matches(QKeySequence.StandardKey.Redo)
        )
    )


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


class Bound(QWidget):
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
        desk.document.replaced.connect(self.revert)

    @property
    def has_problem(self) -> bool:
        """Whether the typed text is not in the case."""
        return not self.problem.isHidden()

    def retire(self) -> None:
        """Let go of the case before the field is taken away."""
        self.desk.document.changed.disconnect(self.refresh)
        self.desk.document.replaced.disconnect(self.revert)
        self.desk.problems_shown.put(self.path, ())
        self.retired = True

    def held(self) -> Any:  # noqa: ANN401 - whatever stands at the path
        """Return what the case holds at the field's path."""
        document = self.desk.document
        return value_at(document.case, self.path) if document.has_case else None

    def refresh(self) -> None:
        """Show what the case holds; each kind of field says how."""
        raise NotImplementedError

    def revert(self) -> None:
        """Take what was typed or refused back to what the case holds."""
        self._show_problems(())
        self.refresh()

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
