"""A new case from what is known: questions at the left, the arithmetic at the right."""

from __future__ import annotations

from collections.abc import Callable
from datetime import datetime

from PySide6.QtCore import QSignalBlocker, Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import (
    QBoxLayout,
    QCheckBox,
    QComboBox,
    QGridLayout,
    QHBoxLayout,
    QLineEdit,
    QVBoxLayout,
    QWidget,
)

from rescue_planner.case.document import Case
from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.known import Draft, Known, draft
from rescue_planner.desk import theme
from rescue_planner.desk.fields import sentence_of
from rescue_planner.desk.numbers import read_number
from rescue_planner.desk.widgets import button, rule, scrolled, text

# key of `Known`, question, unit, what it means
QUESTIONS = (
    ("adults", "How many adults are there?", "animals", "Alive at one time, before breeding."),
    ("breeding_females", "How many females breed?", "per generation",
     "Females that leave young in a generation."),
    ("breeding_males", "How many males breed?", "per generation",
     "Males that leave young in a generation."),
    ("generation_years", "How long is a generation?", "years",
     "Mean age of the parents of newborn young."),
    ("trend", "How do counts change from year to year?", "times a year",
     "1 is steady, 0.97 falls by 3 % a year."),
    ("years_isolated", "How long has it been isolated?", "years",
     "Since the last animal came in."),
    ("gene_diversity", "What is its gene diversity?", "probability, 0 to 1",
     "Expected heterozygosity, from any markers."),
    ("reference_gene_diversity", "What was it before the decline?", "probability, 0 to 1",
     "Or in a large population like it; by the same markers."),
)  # fmt: skip
DONOR_QUESTIONS = (
    ("donor_fst", "How far apart are they? (FST, Hudson’s form)", "FST, 0 to below 1",
     "From a report of the laboratory, if there is one."),
    ("donor_gene_diversity", "What is the donor’s gene diversity?", "probability, 0 to 1",
     "By the same markers as above."),
)  # fmt: skip
BODIES = (("small", "small, such as a mouse or a songbird"),
          ("medium", "medium, such as a fox or a goose"),
          ("large", "large, such as a deer or a crane"))  # fmt: skip


SIDE_BY_SIDE = 110  # letters of width below which the arithmetic stands below the questions


class Question(QWidget):
    """One number that may be unknown."""

    def __init__(self, key: str, words: str, unit: str, meaning: str) -> None:
        super().__init__()
        self.key = key
        self.edit = QLineEdit()
        self.edit.setAlignment(Qt.AlignmentFlag.AlignRight)
        self.edit.setMinimumHeight(theme.TARGET)
        self.edit.setAccessibleName(f"{words} {unit}")
        self.edit.setAccessibleDescription(meaning)
        self.unknown = QCheckBox("I don’t know")
        self.unknown.setAccessibleName(f"I don’t know: {words}")
        self.unknown.setMinimumHeight(theme.TARGET)
        self.unknown.setVisible(key != "adults")
        self.unknown.setChecked(key != "adults")
        self.problem = text("", "problem")
        self.problem.hide()
        label = text(words, "section")
        label.setBuddy(self.edit)
        row = QHBoxLayout()
        row.setSpacing(theme.UNIT)
        row.addWidget(self.edit)
        row.addWidget(text(unit, "unit"), 1)
        row.addWidget(self.unknown)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(label)
        column.addWidget(text(meaning, "soft"))
        column.addLayout(row)
        column.addWidget(self.problem)
        self.edit.setFixedWidth(self.edit.fontMetrics().averageCharWidth() * 12)
        self.edit.textChanged.connect(self._typed)
        self.unknown.toggled.connect(self._toggled)

    def _typed(self, typed: str) -> None:
        blocker = QSignalBlocker(self.unknown)
        self.unknown.setChecked(self.unknown.isVisibleTo(self) and not typed.strip())
        del blocker

    def _toggled(self, unknown: bool) -> None:
        if unknown:
            self.edit.clear()
        else:
            self.edit.setFocus()

    def value(self) -> float | None:
        """Return the number typed, or nothing where it is not known.

        Raises
        ------
        ValueError
            With one sentence, which is shown beside the question too.
        """
        typed = self.edit.text()
        try:
            return read_number(typed) if typed.strip() else None
        except ValueError as wrong:
            self.say(str(wrong))
            raise

    def say(self, sentence: str) -> None:
        """Show what is wrong, or nothing."""
        self.problem.setText(f"⚠ {sentence}" if sentence else "")
        self.problem.setVisible(bool(sentence))


class KnownPage(QWidget):
    """Asks, shows what follows from the answers, and begins the case."""

    def __init__(self, begin: Callable[[Case], bool]) -> None:
        super().__init__()
        self._begin = begin
        self.draft: Draft | None = None
        self.questions = {q[0]: Question(*q) for q in (*QUESTIONS, *DONOR_QUESTIONS)}
        self.title, self.recipient = self._words("Title of the case"), self._words("Population")
        self.species, self.donor = self._words("Species"), self._words("A possible donor")
        self.body = QComboBox()
        self.body.addItems([words for _, words in BODIES])
        self.body.setCurrentIndex(1)
        self.body.setAccessibleName("Size of the animal")
        self.body.setMinimumHeight(theme.TARGET)
        self.body.setMinimumWidth(theme.UNIT * 12)
        self.workings = text("")
        self.workings.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.problem = text("", "problem")
        self.start = button("Start the case", kind="primary")
        self.start.clicked.connect(self._start)
        self._lay_out()
        self._connect()
        self.refresh()

    @staticmethod
    def _words(name: str) -> QLineEdit:
        made = QLineEdit()
        made.setAccessibleName(name)
        made.setMinimumHeight(theme.TARGET)
        return made

    def _lay_out(self) -> None:
        left = QWidget()
        column = QVBoxLayout(left)
        column.setContentsMargins(*[theme.UNIT * 4] * 4)
        column.setSpacing(theme.UNIT * 2)
        column.addWidget(text("A new case from what you know", "title"))
        column.addLayout(self._names())
        column.addWidget(rule())
        for key, *_ in QUESTIONS:
            column.addWidget(self.questions[key])
            if key == "generation_years":
                column.addLayout(self._labelled("If not: how large is the animal?", self.body))
        column.addWidget(rule())
        column.addWidget(text("A population that could give animals", "section"))
        column.addWidget(text("None is needed for the first chart. Leave the name empty.", "soft"))
        column.addLayout(self._labelled("Name of the donor", self.donor))
        for key, *_ in DONOR_QUESTIONS:
            column.addWidget(self.questions[key])
        column.addStretch(1)
        self._box = QBoxLayout(QBoxLayout.Direction.LeftToRight, self)
        self._box.setContentsMargins(0, 0, 0, 0)
        self._box.setSpacing(0)
        self._box.addWidget(scrolled(left), 5)
        aside = scrolled(self._right())
        aside.setObjectName("aside")
        self._box.addWidget(aside, 4)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        narrow = self.width() < self.fontMetrics().averageCharWidth() * SIDE_BY_SIDE
        direction = QBoxLayout.Direction
        self._box.setDirection(direction.TopToBottom if narrow else direction.LeftToRight)
        self._box.setStretch(1, 2 if narrow else 4)  # the questions need the height

    def _right(self) -> QWidget:
        right = QWidget()
        column = QVBoxLayout(right)
        column.setContentsMargins(*[theme.UNIT * 4] * 4)
        column.setSpacing(theme.UNIT * 2)
        column.addWidget(text("What follows, and what is borrowed or guessed", "section"))
        column.addWidget(rule())
        column.addWidget(self.workings)
        column.addWidget(self.problem)
        line = QHBoxLayout()
        line.addWidget(self.start)
        line.addStretch(1)
        column.addLayout(line)
        column.addWidget(
            text("Every borrowed or guessed value is marked as such in the case, with its range "
                 "and source, and can be replaced there.", "soft")
        )  # fmt: skip
        column.addStretch(1)
        return right

    def _names(self) -> QGridLayout:
        grid = QGridLayout()
        grid.setHorizontalSpacing(theme.UNIT * 2)
        for row, (name, edit) in enumerate(
            (("Title", self.title), ("Species", self.species), ("Population", self.recipient))
        ):
            label = text(name, "", wrap=False)
            label.setBuddy(edit)
            grid.addWidget(label, row, 0)
            grid.addWidget(edit, row, 1)
        return grid

    @staticmethod
    def _labelled(words: str, edit: QWidget) -> QHBoxLayout:
        row = QHBoxLayout()
        row.setSpacing(theme.UNIT)
        label = text(words, "", wrap=False)
        label.setBuddy(edit)
        row.addWidget(label)
        row.addWidget(edit, 1)
        return row

    def _connect(self) -> None:
        for question in self.questions.values():
            question.edit.textChanged.connect(self.refresh)
        for edit in (self.title, self.recipient, self.species, self.donor):
            edit.textChanged.connect(self.refresh)
        self.body.activated.connect(self.refresh)

    def refresh(self, _what: object = None) -> None:
        """Work out what follows from the answers so far."""
        self.draft = None
        has_donor = bool(self.donor.text().strip())
        for key, *_ in DONOR_QUESTIONS:
            self.questions[key].setEnabled(has_donor)
        known = self._known()
        sentence = ""
        if known is not None:
            try:
                self.draft = draft(known)
            except InvalidCase as wrong:
                sentence = sentence_of(wrong.problems)
        self.problem.setText(f"⚠ {sentence}" if sentence else "")
        self.workings.setText(
            "\n\n".join(self.draft.workings) if self.draft is not None else self._waiting_for()
        )
        self.start.setEnabled(self.draft is not None)

    def _waiting_for(self) -> str:
        if any(not question.problem.isHidden() for question in self.questions.values()):
            return "One answer cannot be read; what is wrong stands below it."
        return "Begin with the number of adults."

    def _known(self) -> Known | None:
        """Return the answers, or nothing while one of them is wrong or the adults are missing."""
        values: dict[str, float | None] = {}
        wrong = False
        for key, question in self.questions.items():
            question.say("")
            try:
                values[key] = question.value()
            except ValueError:
                wrong = True
        adults = values.pop("adults", None)
        if wrong or adults is None:
            return None
        return Known(
            adults=adults,
            start_year=datetime.now().year,
            body=BODIES[self.body.currentIndex()][0],  # type: ignore[arg-type]
            donor=self.donor.text().strip() or None,
            title=self.title.text().strip() or "A new case",
            recipient=self.recipient.text().strip() or "The population",
            species=self.species.text().strip() or None,
            **values,
        )

    def _start(self) -> None:
        if self.draft is not None:
            self._begin(self.draft.case)
