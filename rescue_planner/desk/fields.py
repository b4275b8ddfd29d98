"""Fields bound to a path of the case: name, unit and bounds come from the input's definition."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QObject, QSignalBlocker, Qt, Signal
from PySide6.QtGui import QKeyEvent, QMouseEvent
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QPlainTextEdit,
    QVBoxLayout,
    QWidget,
)

from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.field_base import Bound, FieldRow, asks_to_undo, sentence_of
from rescue_planner.desk.number_field import NumberEdit, NumberField

if TYPE_CHECKING:
    from rescue_planner.case.document import Case
    from rescue_planner.case.edits import Edit

__all__ = ["CheckField", "ChoiceField", "NumberEdit", "NumberField", "TextField", "sentence_of"]


class TextField(Bound):
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
        self._make, self._shown = make, ""
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
                self.edit.setCursorPosition(0)
            else:
                self.edit.setPlainText(text)
        self._shown = text.strip()
        del blocker

    @property
    def is_clean(self) -> bool:
        """Whether the text is what the case held when it was last shown or committed."""
        return self.text().strip() == self._shown

    def refresh(self) -> None:
        """Show what the case holds, unless it is being typed over."""
        if not self.has_problem and (self.is_clean or not self.edit.hasFocus()):
            self._put(str(self.held() or ""))

    def revert(self) -> None:
        """Take typed text back to what the case holds."""
        self._put(str(self.held() or ""))
        self._show_problems(())

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if watched is self.edit:
            if asks_to_undo(event) and self.is_clean:
                event.ignore()  # the window undoes the last edit of the case
                return True
            if event.type() == QEvent.Type.FocusIn:
                self.desk.explain.show(self.path)
            elif event.type() == QEvent.Type.FocusOut:
                self.commit()
            elif isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress:
                return self._key(Qt.Key(event.key()))
        return super().eventFilter(watched, event)

    def _key(self, key: Qt.Key) -> bool:
        if key == Qt.Key.Key_Escape:
            self.revert()
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
        else:
            make = self._make
            self._show_problems(self.desk.document.try_edit(lambda case: make(case, typed)))
        if not self.has_problem:
            self._shown = typed


class ChoiceField(Bound):
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


class CheckField(Bound):
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
