"""A section of the Case page: it is built again only when its parts change, not its values."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QAbstractButton,
    QApplication,
    QHBoxLayout,
    QLabel,
    QVBoxLayout,
    QWidget,
)

from rescue_planner.case.document import Case
from rescue_planner.desk import theme
from rescue_planner.desk.case_page.unknown import AtHand, Unknown
from rescue_planner.desk.context import Desk
from rescue_planner.desk.evidence import tally_in_words
from rescue_planner.desk.fields import (
    CheckField,
    ChoiceField,
    NumberField,
    TextField,
    sentence_of,
)
from rescue_planner.desk.locus_notes import LocusNotes
from rescue_planner.desk.widgets import button, rule, text

if TYPE_CHECKING:
    from rescue_planner.case.edits import Edit

Fields = NumberField | TextField | ChoiceField | CheckField


@dataclass(frozen=True, slots=True)
class SectionPlan:
    """What a section is: heading, lead, which parts it has, and what puts fields into it."""

    title: str
    lead: str
    parts: Callable[[Case], object]
    build: Callable[[Section, Case], None]


def _say(label: QLabel, words: str) -> None:
    label.setText(words)
    label.setVisible(bool(words))


class Section(QWidget):
    """Heading, fields and lines that follow the case."""

    def __init__(self, desk: Desk, plan: SectionPlan) -> None:
        super().__init__()
        self.desk, self._plan = desk, plan
        self._fields: list[Fields] = []
        self._lines: list[tuple[QLabel, Callable[[Case], str]]] = []
        self._notes: list[LocusNotes | Unknown | AtHand] = []
        self._parts: object = None
        self._body: QWidget | None = None
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, theme.UNIT * 3)
        self._column.setSpacing(theme.HALF)
        self.heading = text(plan.title, "section")
        self._column.addWidget(self.heading)
        self._column.addWidget(rule())
        if plan.lead:
            self._column.addWidget(text(plan.lead, "soft"))
        self.tally = text("", "small")
        self._column.addWidget(self.tally)
        self.problem = text("", "problem")
        self.problem.hide()
        self._column.addWidget(self.problem)
        desk.document.changed.connect(self.refresh)
        if desk.document.has_case:
            self.refresh(desk.document.case)

    def refresh(self, case: Case) -> None:
        """Follow the case."""
        parts = self._plan.parts(case)
        if self._body is None or parts != self._parts:
            self._parts = parts
            self._rebuild(case)
        _say(self.tally, tally_in_words(case, self._plan.title))
        for label, words in self._lines:
            _say(label, words(case))

    def _rebuild(self, case: Case) -> None:
        focused = QApplication.focusWidget()
        path = focused.property("path") if focused and self.isAncestorOf(focused) else None
        for field in self._fields:
            field.retire()
        for notes in self._notes:
            notes.retire()
        if self._body is not None:
            self._column.removeWidget(self._body)
            self._body.hide()
            self._body.deleteLater()
        self._fields, self._lines, self._notes = [], [], []
        self._body = QWidget()
        self._rows = QVBoxLayout(self._body)
        self._rows.setContentsMargins(0, theme.HALF, 0, 0)
        self._rows.setSpacing(theme.HALF)
        self._plan.build(self, case)
        self._column.addWidget(self._body)
        self._body.show()  # at once, not with the next event: the focus may go there
        again = next((f for f in self._fields if path and f.path == path), None)
        if again is not None:
            again.edit.setFocus(Qt.FocusReason.OtherFocusReason)

    # what a section is built from

    def number(self, path: str, label: str | None = None, unit: str | None = None) -> None:
        """Add a number."""
        self._add(NumberField(self.desk, path, label=label, unit=unit))

    def unknown(self, path: str, name: str, *, forms: bool = True) -> None:
        """Add the link that opens what helps where the number above is not known."""
        self._let_go_later(Unknown(self.desk, path, name, forms=forms))

    def ways(self, path: str) -> None:
        """Add the ways to the number above, open from the start."""
        self._let_go_later(AtHand(self.desk, path, published=False))

    def _let_go_later(self, made: LocusNotes | Unknown | AtHand) -> None:
        self._notes.append(made)
        self._rows.addWidget(made)

    def numbers(self, *paths: str) -> None:
        """Add several numbers."""
        for path in paths:
            self.number(path)

    def text(
        self,
        path: str,
        label: str,
        *,
        lines: int = 1,
        make: Callable[[Case, str], Edit] | None = None,
    ) -> None:
        """Add a text."""
        self._add(TextField(self.desk, path, label=label, lines=lines, make=make))

    def choice(self, path: str, label: str, choices: Sequence[tuple[str | None, str]]) -> None:
        """Add a choice; the first entry leaves the field out where its value is None."""
        self._add(ChoiceField(self.desk, path, choices, label=label))

    def check(self, path: str, words: str) -> None:
        """Add a yes or no."""
        self._add(CheckField(self.desk, path, words))

    def _add(self, field: Fields) -> None:
        self._fields.append(field)
        self._rows.addWidget(field)

    def line(self, words: Callable[[Case], str], kind: str = "soft") -> None:
        """Add a line that is written anew after each change."""
        label = text("", kind)
        self._lines.append((label, words))
        self._rows.addWidget(label)

    def notes(self, locus: str) -> None:
        """Add what theory says of a tracked locus."""
        self._let_go_later(LocusNotes(self.desk, lambda _case: (locus,), named=False))

    def caution(self, words: str) -> None:
        """Add a standing caution."""
        self._rows.addWidget(text(f"△ {words}", "caution"))

    def part(
        self, title: str, remove: Callable[[Case], Edit] | None = None, said: str = ""
    ) -> None:
        """Begin a part of the section, such as one donor, with its remove button."""
        self._rows.addSpacing(theme.UNIT)
        row = QHBoxLayout()
        row.addWidget(text(title, "part", wrap=True), 1)
        if remove is not None:
            row.addWidget(self._edit_button("Remove", remove, said or f"Remove {title}"))
        self._rows.addLayout(row)

    def buttons(self, *entries: tuple[str, Callable[[Case], Edit]]) -> None:
        """Add buttons that each make one edit."""
        row = QHBoxLayout()
        row.setContentsMargins(0, theme.HALF, 0, 0)
        row.setSpacing(theme.UNIT)
        for words, make in entries:
            row.addWidget(self._edit_button(words, make, words))
        row.addStretch(1)
        self._rows.addLayout(row)

    def _edit_button(self, words: str, make: Callable[[Case], Edit], said: str) -> QAbstractButton:
        made = button(words, said=said)
        made.clicked.connect(lambda: self._try(make))
        return made

    def _try(self, make: Callable[[Case], Edit]) -> None:
        problems = self.desk.document.try_edit(make)
        self.problem.setText(f"⚠ {sentence_of(problems)}" if problems else "")
        self.problem.setVisible(bool(problems))
