"""A sentence whose numbers and choices are edited where they stand."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QEvent, QObject, QSignalBlocker, QSize, Qt
from PySide6.QtWidgets import QAbstractButton, QComboBox, QHBoxLayout, QLabel, QVBoxLayout, QWidget

from rescue_planner.case.problems import Problem
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.fields import NumberField, sentence_of
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.numbers import value_at
from rescue_planner.desk.widgets import button, text

ARROW = 34  # pixels beside the words of a choice


class Choice(QComboBox):
    """One of a few values inside a sentence."""

    def __init__(
        self, desk: Desk, path: str, choices: Sequence[tuple[str, str]], name: str
    ) -> None:
        super().__init__()
        self._desk, self.path = desk, path
        self.choices = tuple(choices)
        self.addItems([words for _, words in self.choices])
        self.setAccessibleName(name)
        self.setMinimumHeight(theme.TARGET)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.installEventFilter(self)
        self.activated.connect(self._chosen)
        desk.document.changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Show what the case holds."""
        document = self._desk.document
        held = value_at(document.case, self.path) if document.has_case else None
        values = [value for value, _ in self.choices]
        blocker = QSignalBlocker(self)
        self.setCurrentIndex(values.index(held) if held in values else -1)
        del blocker
        self.updateGeometry()

    def sizeHint(self) -> QSize:
        """Be as wide as the words that are chosen, so that the sentence stays a sentence."""
        wide = self.fontMetrics().horizontalAdvance(self.currentText() or "–")
        return QSize(wide + ARROW, super().sizeHint().height())

    def minimumSizeHint(self) -> QSize:
        """Be narrower where the sentence is."""
        return QSize(min(self.sizeHint().width(), 120), super().sizeHint().height())

    def showPopup(self) -> None:
        """Give the list the width of its longest words."""
        words = [self.fontMetrics().horizontalAdvance(text) for _, text in self.choices]
        self.view().setMinimumWidth(max(words, default=0) + 2 * ARROW)
        super().showPopup()

    def _chosen(self, index: int) -> None:
        from rescue_planner.case.edits import set_value

        value = self.choices[index][0]
        problems = self._desk.document.try_edit(lambda case: set_value(case, self.path, value))
        self._desk.problems_shown.put(self.path, ())
        if problems:
            self.refresh()
            parent = self.parentWidget()
            if isinstance(parent, Sentence):
                parent.say_problems(problems)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if event.type() == QEvent.Type.FocusIn:
            self._desk.explain.show(self.path)
        elif event.type() == QEvent.Type.Wheel:
            event.ignore()
            return True
        return super().eventFilter(watched, event)


class Sentence(QWidget):
    """Words, numbers and choices that break lines like text; problems stand below them."""

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self.fields: dict[str, NumberField] = {}
        self.choices: dict[str, Choice] = {}
        self._counted: list[tuple[QLabel, str, str, str]] = []
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.setSpacing(2)
        self._flow = FlowLayout(gap=round(theme.HALF * desk.view.text_scale))
        outer.addLayout(self._flow)
        self.refused = text("", "problem")
        self.refused.hide()
        outer.addWidget(self.refused)
        desk.document.changed.connect(self._case_changed)

    def say(self, *phrases: str) -> Sentence:
        """Add words; lines may break between any two."""
        for word in " ".join(phrases).split():
            label = QLabel(word)
            label.setTextFormat(Qt.TextFormat.PlainText)
            label.setObjectName("word")
            self._flow.addWidget(label)
        return self

    def counted(self, path: str, one: str, many: str) -> Sentence:
        """Add a noun that follows the number at `path`: `1 female`, `2 females`."""
        self.say(many)
        item = self._flow.itemAt(self._flow.count() - 1)
        label = item.widget() if item is not None else None
        assert isinstance(label, QLabel)
        self._counted.append((label, path, one, many))
        self._agree()
        return self

    def _agree(self) -> None:
        document = self._desk.document
        for label, path, one, many in self._counted:
            held = value_at(document.case, path) if document.has_case else None
            label.setText(one if held is not None and held.best == 1 else many)

    def number(self, path: str, name: str) -> Sentence:
        """Add a number; `name` says what it is to a screen reader."""
        field = NumberField(self._desk, path, compact=True, label=name)
        self.fields[path] = field
        self._flow.addWidget(field)
        layout = self.layout()
        assert layout is not None
        for below in (field.problem, field.widen):  # below the sentence, where there is room
            layout.addWidget(below)
        return self

    def choice(self, path: str, choices: Sequence[tuple[str, str]], name: str) -> Sentence:
        """Add a choice."""
        made = Choice(self._desk, path, choices, name)
        self.choices[path] = made
        self._flow.addWidget(made)
        return self

    def widget(self, added: QWidget) -> Sentence:
        """Add any widget."""
        self._flow.addWidget(added)
        return self

    def say_problems(self, problems: tuple[Problem, ...]) -> None:
        """Say why an edit was refused, until the case changes."""
        self.refused.setText("⚠ " + sentence_of(problems) if problems else "")
        self.refused.setVisible(bool(problems))

    def _case_changed(self, _case: object) -> None:
        self.say_problems(())
        self._agree()


class Block(QWidget):
    """A sentence with what it comes to below it, and its own buttons."""

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.sentence = Sentence(desk, self)
        self.comes_to = text("", "note")
        self._buttons = QHBoxLayout()
        self._buttons.setSpacing(theme.UNIT)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, theme.HALF, 0, theme.HALF)
        column.setSpacing(2)
        column.addWidget(self.sentence)
        column.addWidget(self.comes_to)
        column.addLayout(self._buttons)
        self._buttons.addStretch(1)

    def act(self, words: str, said: str) -> QAbstractButton:
        """Add a button, and return it."""
        made = button(words, kind="link", said=said)
        self._buttons.insertWidget(self._buttons.count() - 1, made)
        return made

    def first(self) -> QWidget:
        """Return what is edited first."""
        return next(iter(self.sentence.fields.values())).edit

    def show_words(self, words: str) -> None:
        """Show what the sentence comes to."""
        self.comes_to.setText(words)
        self.comes_to.setVisible(bool(words))
