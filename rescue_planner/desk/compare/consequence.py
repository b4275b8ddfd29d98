"""The consequence table of the Compare page: a year, a direction for each measure, the verdict."""

from __future__ import annotations

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.advice.consequence_words import consequence_table, dominance_sentences
from rescue_planner.advice.consequences import (
    DIRECTION_WORDS,
    Consequences,
    Direction,
    consequences,
    usual_direction,
)
from rescue_planner.case.measures import title
from rescue_planner.desk import theme
from rescue_planner.desk.compare.fold import Choice, Seen
from rescue_planner.desk.compare.values import EMPTY, CopyingTable, ValueModel
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.widgets import button, text
from rescue_planner.projection.reading import year_text
from rescue_planner.projection.results import Comparison

MORE = "Other measures, such as cost, are put in with Measures… at the top."


class ConsequenceTable(QWidget):
    """All plans on all measures shown at one year; dominated plans are marked in words."""

    changed = Signal()  # another year or direction was chosen

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._seen: Seen | None = None
        self._chosen: dict[str, Direction] = {}  # what a person said is better
        self.shown: Consequences | None = None
        self.model = ValueModel(self)
        self.table = CopyingTable("Consequences of the plans at one year", self)
        self.table.setModel(self.model)
        self.year = Choice("Year", "Year of the consequence table", self)
        self.measure = Choice("For", "Measure whose direction is set", self)
        self.direction = Choice("say", "Which way is better for this measure", self)
        self.direction.offer(list(DIRECTION_WORDS.items()))
        self.copy_button = button("Copy table", said="Copy the consequence table as text")
        self.verdict, self.notes = text("", "small"), text("", "note")
        self._lay_out()
        self.year.currentIndexChanged.connect(self._rebuild)
        self.measure.currentIndexChanged.connect(self._show_direction)
        self.direction.currentIndexChanged.connect(self._direction_chosen)
        self.copy_button.clicked.connect(self.table.copy)

    def _lay_out(self) -> None:
        top = FlowLayout()
        for choice in (self.year, self.measure, self.direction):
            top.addWidget(choice.pair)
        top.addWidget(self.copy_button)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(theme.HALF)
        layout.addLayout(top)
        layout.addWidget(self.table)
        layout.addWidget(self.verdict)
        layout.addWidget(self.notes)

    def stops(self) -> tuple[QWidget, ...]:
        """Return what Tab stops at, in order."""
        return (self.year, self.measure, self.direction, self.copy_button, self.table)

    def forget(self) -> None:
        """Go back to the usual directions and the last year."""
        self._chosen.clear()
        self.year.offer(())

    def show_seen(self, seen: Seen | None) -> None:
        """Show these plans and measures, or an empty table."""
        self._seen = seen
        if seen is not None:
            years = years_offered(seen.comparison)
            self.year.offer(years, usual=len(years) - 1)
            self.measure.offer([(key, title(key)) for key in seen.keys])
            self._show_direction()
        self._rebuild()

    def _show_direction(self) -> None:
        key = self.measure.currentData()
        self.direction.setEnabled(key is not None)
        if self._seen is not None and key is not None:
            way = self._chosen.get(key) or usual_direction(self._seen.case, key)
            blocked = self.direction.blockSignals(True)
            self.direction.choose(way)
            self.direction.blockSignals(blocked)

    def _direction_chosen(self) -> None:
        key = self.measure.currentData()
        if key is not None:
            self._chosen[key] = self.direction.currentData()
            self._rebuild()

    def _rebuild(self) -> None:
        seen = self._seen
        if seen is None or self.year.currentData() is None:
            self.shown = None
            self.model.show_table(EMPTY)
            self.verdict.setText("")
            self.notes.setText("")
        else:
            self.shown = self._of(seen, seen.keys)
            self.model.show_table(consequence_table(seen.comparison, self.shown))
            self.verdict.setText("\n".join(dominance_sentences(seen.comparison, self.shown)))
            self.notes.setText(" ".join((*self.model.table.notes, MORE)))
        for label in (self.verdict, self.notes):
            label.setVisible(bool(label.text()))
        self.table.fit_height()
        self.changed.emit()

    def _of(self, seen: Seen, keys: tuple[str, ...]) -> Consequences:
        year = float(self.year.currentData())
        return consequences(seen.case, seen.comparison, seen.plans, keys, year, self._chosen)

    def of_every_measure(self) -> Consequences | None:
        """Return the same table for all measures that were computed."""
        return None if self._seen is None else self._of(self._seen, self._seen.every)


def years_offered(comparison: Comparison) -> list[tuple[object, str]]:
    """Return every year with a value, as a number and in words."""
    return [(float(year), year_text(float(year))) for year in comparison.years]
