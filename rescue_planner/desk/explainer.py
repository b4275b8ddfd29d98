"""The explainer at the right: what the focused field means and where its value came from."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from PySide6.QtCore import QSignalBlocker, Qt
from PySide6.QtWidgets import QComboBox, QGridLayout, QLabel, QLineEdit, QVBoxLayout, QWidget

from rescue_planner.case import measures
from rescue_planner.case.paths import parse_path, steps_of
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.fields import sentence_of
from rescue_planner.desk.numbers import is_quantity, read_number, value_at, written
from rescue_planner.desk.widgets import rule, scrolled, text

ORIGINS = ((None, "not stated"), ("measured", "measured"), ("borrowed", "borrowed"),
           ("guessed", "guessed"))  # fmt: skip
WIDTH = 264
if TYPE_CHECKING:
    from rescue_planner.case.document import Case
    from rescue_planner.case.edits import Edit
    from rescue_planner.case.inputs import Input
    from rescue_planner.case.quantity import Quantity
    from rescue_planner.desk.case_page.unknown import AtHand

OPENING = "Put the cursor into a number, and its meaning, unit, bounds and source are told here."


class Explainer(QWidget):
    """Follows `ExplainerFeed`; also holds the range, origin and source of the value."""

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self._path = ""
        self.setObjectName("explainer")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self._heading = text("", "section")
        self._unit = text("", "soft")
        self._meaning = text(OPENING)
        self._bounds = text("", "soft")
        self._published = text("", "small")
        self._caution = text("", "caution")
        self._origin = _OriginForm(desk)
        self.at_hand: AtHand | None = None
        self._lay_out()
        desk.explain.asked.connect(self.show_path)
        desk.document.changed.connect(self._refresh)
        desk.live.updated.connect(self._refresh)
        desk.document.replaced.connect(self.clear)

    def _lay_out(self) -> None:
        inner = QWidget()
        inner.setObjectName("explainer")
        column = QVBoxLayout(inner)
        column.setContentsMargins(theme.UNIT * 2, theme.UNIT * 2, theme.UNIT * 2, theme.UNIT)
        column.setSpacing(theme.UNIT)
        for label in (self._heading, self._unit, self._meaning, self._bounds):
            column.addWidget(label)
        column.addWidget(self._caution)
        column.addWidget(self._published)
        column.addWidget(self._origin)
        self._below = QVBoxLayout()
        column.addLayout(self._below)
        column.addStretch(1)
        for label in inner.findChildren(QLabel):
            if label.parent() is inner:
                label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        area = scrolled(inner, reachable=True)
        area.setAccessibleName("Explainer")
        outer.addWidget(area)
        self.clear()

    def show_page(self, question: str, about: str) -> None:
        """Say what a page answers, until something on it is chosen."""
        self.clear()
        self._say(self._heading, question)
        self._say(self._meaning, about)
        self._say(self._bounds, OPENING)

    def clear(self) -> None:
        """Explain nothing."""
        self._path = ""
        self._show_at_hand("")
        for label in (self._heading, self._unit, self._bounds, self._published, self._caution):
            self._say(label, "")
        self._say(self._heading, "Explainer")
        self._say(self._meaning, OPENING)
        self._origin.show_value("", None)

    @staticmethod
    def _say(label: QLabel, words: str) -> None:
        label.setText(words)
        label.setVisible(bool(words))

    def _show_at_hand(self, path: str) -> None:
        """Show what has been published for a number, and ways to it; nothing for other paths."""
        if self.at_hand is not None and self.at_hand.path == path:
            return
        if self.at_hand is not None:
            self.at_hand.retire()
            self._below.removeWidget(self.at_hand)
            self.at_hand.hide()
            self.at_hand.deleteLater()
            self.at_hand = None
        if path and self._desk.document.has_case:
            from rescue_planner.desk.case_page.unknown import AtHand

            self.at_hand = AtHand(self._desk, path)
            self._below.addWidget(self.at_hand)

    def show_path(self, path: str) -> None:
        """Explain an input by its path, or a measure by its key."""
        from rescue_planner.case.fields import definition_at, is_number

        try:
            definition, number = definition_at(parse_path(path)), is_number(parse_path(path))
        except ValueError:
            definition, number = None, False
        self._path = path
        self._show_at_hand(path if number else "")
        if definition is not None:
            self._show_input(definition)
            self._refresh()
            return
        self._show_measure(path)

    def _show_input(self, definition: Input) -> None:
        self._say(self._heading, definition.name)
        document = self._desk.document
        money = (document.case.currency if document.has_case else None) or "currency"
        self._say(self._unit, definition.unit.replace("currency", money))
        self._say(self._meaning, definition.meaning)
        self._say(self._bounds, f"Bounds: {definition.bounds}." if definition.bounds else "")
        self._say(self._caution, f"△ {definition.caution}" if definition.caution else "")
        source = f"\nSource: {definition.source}" if definition.source else ""
        published = f"Published: {definition.published}" if definition.published else ""
        self._say(self._published, f"{published}{source}".strip())

    def _show_measure(self, key: str) -> None:
        for label in (self._unit, self._bounds, self._published, self._caution):
            self._say(label, "")
        try:
            measure = measures.measure_of(key)
        except KeyError:
            self._show_words(key)
            return
        self._say(self._heading, measures.title(key))
        self._say(self._unit, measures.unit(key))
        self._say(self._meaning, measure.meaning)
        from rescue_planner.desk.measure_words import measure_words

        document, comparison = self._desk.document, self._desk.live.comparison
        told = measure_words(document.case if document.has_case else None, comparison, key)
        self._say(self._bounds, told.targets)
        self._say(self._published, f"{told.depth}\n\n{told.source}".strip())
        self._origin.show_value("", None)

    def _show_words(self, path: str) -> None:
        """Explain a field that is no number by what the part of the case it stands in is."""
        from rescue_planner.case.fields import model_at

        steps = steps_of(path)
        model = model_at(steps[:-1])
        words = str(steps[-1]).replace("_", " ").capitalize()
        self._say(self._heading, words)
        self._say(self._meaning, ((model.__doc__ if model else "") or OPENING).splitlines()[0])
        self._origin.show_value("", None)

    def _is_measure(self) -> bool:
        return measures.split(self._path)[0] in {one.key for one in measures.MEASURES}

    def _refresh(self, _: object = None) -> None:
        held = None
        if self._is_measure():
            self._show_measure(self._path)
            return
        if self._path and self._desk.document.has_case:
            try:
                held = value_at(self._desk.document.case, self._path)
            except ValueError:
                held = None
        self._origin.show_value(self._path, held if is_quantity(held) else None)


class _OriginForm(QWidget):
    """Range, origin, source, date and person of one value."""

    def __init__(self, desk: Desk) -> None:
        super().__init__()
        self._desk, self._path = desk, ""
        self.low, self.high = self._line("Low"), self._line("High")
        self.origin = QComboBox()
        self.origin.addItems([words for _, words in ORIGINS])
        self.origin.setAccessibleName("Origin of the value")
        self.source, self.date = self._line("Source"), self._line("Date")
        self.by = self._line("Stated by")
        self.problem = text("", "problem")
        self._lay_out()
        self.origin.activated.connect(self._origin_chosen)
        for edit in (self.low, self.high):
            edit.editingFinished.connect(self._range_typed)
        for edit, name in ((self.source, "source"), (self.date, "date"), (self.by, "by")):
            edit.editingFinished.connect(lambda name=name, edit=edit: self._about(name, edit))

    @staticmethod
    def _line(name: str) -> QLineEdit:
        made = QLineEdit()
        made.setAccessibleName(f"{name} of the value")
        made.setMinimumHeight(theme.TARGET)
        return made

    def _lay_out(self) -> None:
        grid = QGridLayout(self)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setHorizontalSpacing(theme.UNIT)
        grid.setVerticalSpacing(theme.HALF)
        grid.addWidget(rule(), 0, 0, 1, 2)
        grid.addWidget(text("Where this value came from", "section"), 1, 0, 1, 2)
        rows = (("Low", self.low), ("High", self.high), ("Origin", self.origin),
                ("Source", self.source), ("Date", self.date), ("By", self.by))  # fmt: skip
        for row, (name, edit) in enumerate(rows, start=2):
            label = text(name, "soft", wrap=False)
            label.setBuddy(edit)
            grid.addWidget(label, row, 0)
            grid.addWidget(edit, row, 1)
        grid.addWidget(self.problem, len(rows) + 2, 0, 1, 2)
        grid.setColumnStretch(1, 1)

    def show_value(self, path: str, held: Quantity | None) -> None:
        """Show what is known about the value at `path`."""
        if path != self._path:
            self.problem.clear()
        self._path = path
        self.setVisible(held is not None)
        if held is None:
            return
        shown = {
            self.low: "" if held.low is None else written(held.low),
            self.high: "" if held.high is None else written(held.high),
            self.source: held.source or "",
            self.date: held.date or "",
            self.by: held.by or "",
        }
        for edit, words in shown.items():
            blocker = QSignalBlocker(edit)
            if edit.text() != words:
                edit.setText(words)
                edit.setCursorPosition(0)
            edit.setModified(False)
            del blocker
        blocker = QSignalBlocker(self.origin)
        self.origin.setCurrentIndex([value for value, _ in ORIGINS].index(held.origin))
        del blocker

    def _origin_chosen(self, index: int) -> None:
        from rescue_planner.case.edits import set_source

        path = self._path
        self._try(lambda case: set_source(case, path, origin=ORIGINS[index][0]))

    def _about(self, name: str, edit: QLineEdit) -> None:
        from rescue_planner.case.edits import set_source

        if not edit.isModified():
            return
        path, words = self._path, edit.text().strip() or None
        self._try(lambda case: set_source(case, path, **{name: words}))

    def _range_typed(self) -> None:
        from rescue_planner.case.edits import set_range

        if not (self.low.isModified() or self.high.isModified()):
            return
        path = self._path
        try:
            ends = [
                read_number(edit.text()) if edit.text().strip() else None
                for edit in (self.low, self.high)
            ]
        except ValueError as wrong:
            self.problem.setText(f"⚠ {wrong}")
            return
        self._try(lambda case: set_range(case, path, ends[0], ends[1]))

    def _try(self, make: Callable[[Case], Edit]) -> None:
        problems = self._desk.document.try_edit(make)
        self.problem.setText(f"⚠ {sentence_of(problems)}" if problems else "")
