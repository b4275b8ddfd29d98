"""“I don’t know”: ways to a value, what each asks, its arithmetic, the button that enters it."""

from __future__ import annotations

from PySide6.QtCore import QEvent, Qt
from PySide6.QtGui import QWheelEvent
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QLabel, QLineEdit, QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.paths import steps_of
from rescue_planner.case.unknown import Ask, Way, Worked, entered, known_already, ways, worked
from rescue_planner.desk import theme
from rescue_planner.desk.case_page.published import PublishedList
from rescue_planner.desk.context import Desk
from rescue_planner.desk.field_base import FieldRow
from rescue_planner.desk.fields import sentence_of
from rescue_planner.desk.numbers import read_number, value_at, written
from rescue_planner.desk.widgets import Link, text

CHOOSE = "choose"


class _Number(QLineEdit):
    """A line for a number, as wide as numbers are at the size of text in force."""

    def __init__(self, words: str) -> None:
        super().__init__(words)
        self.setAlignment(Qt.AlignmentFlag.AlignRight)
        self._fit()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.StyleChange):
            self._fit()

    def _fit(self) -> None:
        self.setFixedWidth(self.fontMetrics().horizontalAdvance("0" * 9) + 20)


class _Choice(QComboBox):
    def wheelEvent(self, event: QWheelEvent) -> None:
        event.ignore()  # nothing moves unless the user moves it


def _beside(one: QWidget, other: QWidget | None = None) -> QWidget:
    """Return `one` at the left of its room, with `other` after it."""
    made = QWidget()
    row = QHBoxLayout(made)
    row.setContentsMargins(0, 0, 0, 0)
    row.setSpacing(theme.UNIT)
    row.addWidget(one)
    if other is None:
        row.addStretch(1)
    else:
        row.addWidget(other, 1)
    return made


class WayForm(QWidget):
    """One way to a value; the arithmetic follows what is typed."""

    def __init__(self, desk: Desk, path: str, way: Way) -> None:
        super().__init__()
        self._desk, self._path, self.way = desk, path, way
        self.found: Worked | None = None
        self.answers: dict[str, QLineEdit | QComboBox] = {}
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, theme.UNIT)
        column.setSpacing(theme.HALF)
        column.addWidget(text(way.title, "small"))
        held = known_already(desk.document.case, way)
        for ask in way.asks:
            column.addWidget(self._asked(ask, held.get(ask.key)))
        self.said = text("", "soft")
        self.problem = text("", "problem")
        self.problem.hide()
        self.use = Link("Use")
        self.use.clicked.connect(self._use)
        for one in (self.said, self.problem, self.use):
            column.addWidget(one)
        self.refresh(desk.document.case)

    def _asked(self, ask: Ask, held: float | None) -> QWidget:
        made: QLineEdit | QComboBox
        if ask.choices:
            made = _Choice()
            made.addItems([CHOOSE, *(words for _, words in ask.choices)])
            made.setMinimumWidth(theme.UNIT * 12)
            made.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
            made.currentIndexChanged.connect(self._changed)
        elif ask.text:
            made = QLineEdit()
            made.textChanged.connect(self._changed)
        else:
            made = _Number(written(held) if held is not None else "")
            made.textChanged.connect(self._changed)
        made.setMinimumHeight(theme.TARGET)
        made.setAccessibleName(f"{ask.words}, {ask.unit}" if ask.unit else ask.words)
        self.answers[ask.key] = made
        label = QLabel(ask.words)
        label.setBuddy(made)
        return FieldRow(label, made if ask.text else _beside(made, text(ask.unit, "unit")))

    def _changed(self, _what: object = None) -> None:
        self.refresh(self._desk.document.case)

    def _given(self) -> dict[str, float | str]:
        """Return what was answered so far.

        Raises
        ------
        ValueError
            When a number cannot be read.
        """
        given: dict[str, float | str] = {}
        for ask in self.way.asks:
            widget = self.answers[ask.key]
            if isinstance(widget, QComboBox):
                if widget.currentIndex() > 0:
                    given[ask.key] = ask.choices[widget.currentIndex() - 1][0]
            elif typed := widget.text().strip():
                given[ask.key] = typed if ask.text else float(read_number(typed))
        return given

    def refresh(self, case: Case) -> None:
        """Work the value out again."""
        self.found, sentence, wrong = None, "", ""
        try:
            given = self._given()
            missing = [ask for ask in self.way.asks if ask.needed and ask.key not in given]
            if missing:
                sentence = f"Still to be answered: {missing[0].words}"
            else:
                self.found = worked(case, self._path, self.way, given)
                sentence = self.found.said
        except InvalidCase as refused:
            wrong = sentence_of(refused.problems)
        except ValueError as refused:
            wrong = str(refused)
        self._say(wrong)
        self.said.setText(sentence.replace(" %", "\u00a0%"))  # a number keeps its per cent sign
        self.said.setVisible(bool(sentence))
        self.use.setEnabled(self.found is not None)
        value = None if self.found is None else self.found.value
        words = "Use" if value is None else f"Use {value.best:.12g}"
        if self.found is not None and value is None:
            words = "Leave it as not stated"
        self.use.setText(words)
        self.use.setAccessibleName(f"{words}: {self.way.title}")

    def _use(self) -> None:
        found = self.found
        if found is not None:
            path = self._path
            problems = self._desk.document.try_edit(lambda case: entered(case, path, found))
            self._say(sentence_of(problems))

    def _say(self, sentence: str) -> None:
        self.problem.setText(f"⚠ {sentence}" if sentence else "")
        self.problem.setVisible(bool(sentence))


class AtHand(QWidget):
    """All that is at hand for one input: ways to work it out, and published values."""

    def __init__(
        self, desk: Desk, path: str, *, forms: bool = True, published: bool = True
    ) -> None:
        super().__init__()
        self._desk, self.path = desk, path
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, theme.HALF)
        column.setSpacing(theme.HALF)
        self.ways = [WayForm(desk, path, way) for way in ways(path)] if forms else []
        if self.ways and published:
            column.addWidget(text("Ways to a value", "section"))
        for form in self.ways:
            column.addWidget(form)
        if published:
            self.published = PublishedList(desk, path)
            column.addWidget(self.published)
        desk.document.changed.connect(self.refresh)

    def refresh(self, case: Case) -> None:
        """Follow the case; where it lost the donor or plan this is about, nothing can be used."""
        steps = steps_of(self.path)
        cut = max((at + 1 for at, step in enumerate(steps) if isinstance(step, int)), default=0)
        present = value_at(case, steps[:cut]) is not None
        self.setEnabled(present)
        for form in self.ways if present else ():
            form.refresh(case)

    def retire(self) -> None:
        """Let go of the case before this is taken away."""
        self._desk.document.changed.disconnect(self.refresh)


class Unknown(QWidget):
    """The link below a field; it opens what is at hand for it."""

    def __init__(self, desk: Desk, path: str, name: str, *, forms: bool = True) -> None:
        super().__init__()
        self._desk, self.path, self._name, self._forms = desk, path, name, forms
        self.at_hand: AtHand | None = None
        self.link = Link()
        self.link.clicked.connect(self._toggle)
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(theme.HALF)
        self._column.addWidget(FieldRow(QLabel(), _beside(self.link)))
        self._label()

    def _toggle(self) -> None:
        if self.at_hand is None:
            self.at_hand = AtHand(self._desk, self.path, forms=self._forms)
            self._column.addWidget(self.at_hand)
            self.at_hand.show()
            last: QWidget = self.link
            for one in self.at_hand.findChildren(QWidget):
                if one.focusPolicy() & Qt.FocusPolicy.TabFocus:
                    QWidget.setTabOrder(last, one)
                    last = one
        else:
            self.at_hand.setVisible(self.at_hand.isHidden())
        self._label()

    def _label(self) -> None:
        shown = self.at_hand is not None and not self.at_hand.isHidden()
        self.link.setText("Close" if shown else "I don’t know")
        self.link.setAccessibleName(f"{self.link.text()}: {self._name}")

    def retire(self) -> None:
        """Let go of the case before this is taken away."""
        if self.at_hand is not None:
            self.at_hand.retire()
