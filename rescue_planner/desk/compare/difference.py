"""Two plans against each other: a table of all measures, and a chart of one over time."""

from __future__ import annotations

from PySide6.QtCore import QRectF
from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen, QPolygonF
from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.advice.differences import (
    Difference,
    difference,
    difference_table,
    difference_unit,
)
from rescue_planner.advice.trade_off import trade_range
from rescue_planner.case.measures import title
from rescue_planner.desk import theme
from rescue_planner.desk.compare.fold import Choice, Seen, copy_picture, framed
from rescue_planner.desk.compare.frame import AxisPicture, Frame, value_axis
from rescue_planner.desk.compare.values import EMPTY, CopyingTable, ValueModel
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.widgets import button, text
from rescue_planner.projection.reading import time_ticks

HEIGHT = 180


class DifferenceChart(QWidget):
    """Paints one difference over time, with the line of no difference."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName("Difference of two plans over time; the table has its numbers")
        self._seen: Seen | None = None
        self.shown: Difference | None = None

    def show_difference(self, seen: Seen, found: Difference, words: str) -> None:
        """Paint this difference; `words` say what it is."""
        self._seen, self.shown = seen, found
        self.setFixedHeight(round(HEIGHT * max(1.0, 0.8 * seen.look.text_scale)))
        self.setAccessibleDescription(words)
        self.update()

    def frame(self) -> Frame | None:
        """Return the axes, or nothing where there is nothing to paint."""
        seen, found = self._seen, self.shown
        if seen is None or found is None or not found.values.size:
            return None
        comparison, look = seen.comparison, seen.look
        low, high = trade_range([0.0, *found.values.tolist()])
        years = comparison.years
        marks = time_ticks(comparison, look.axis, 4)
        unit = "" if look.axis == "years" else "generation"
        across = AxisPicture(float(years[0]), float(years[-1]), unit, marks)
        return Frame(look, QRectF(self.rect()), across, value_axis(low, high, ""), 24.0)

    def paintEvent(self, _event: QPaintEvent) -> None:
        frame, found, seen = self.frame(), self.shown, self._seen
        if frame is None or found is None or seen is None:
            return
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        frame.paint(painter)
        colours = seen.look.colours
        painter.setPen(seen.look.hair(colours.line))
        ends = (frame.across.low, frame.across.high)
        painter.drawLine(*(frame.at(x, 0.0) for x in ends))
        painter.setPen(QPen(QColor(colours.ink), 1.8))
        pairs = zip(found.years.tolist(), found.values.tolist(), strict=True)
        painter.drawPolyline(QPolygonF([frame.at(x, y) for x, y in pairs]))
        painter.end()


class PlanAgainstPlan(QWidget):
    """Which two plans, the swap, the table, which measure is drawn, and its chart."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._seen: Seen | None = None
        self.one = Choice("Plan", "First plan", self)
        self.other = Choice("less", "Second plan, taken off the first", self)
        self.swap_button = button("Swap", said="Swap the two plans")
        self.measure = Choice("Drawn", "Measure whose difference is drawn", self)
        self.copy_button = button("Copy table", said="Copy the table of differences as text")
        self.model = ValueModel(self)
        self.table = CopyingTable("Differences of two plans", self)
        self.table.setModel(self.model)
        self.notes = text("", "note")
        self.picture_button = button("Copy picture", said="Copy the chart of the difference")
        self.drawn = text("", "small")
        self.chart = DifferenceChart(self)
        self.picture = framed(self.drawn, self.chart)
        self._lay_out()
        for choice in (self.one, self.other, self.measure):
            choice.currentIndexChanged.connect(self._rebuild)
        self.swap_button.clicked.connect(self.swap)
        self.copy_button.clicked.connect(self.table.copy)
        self.picture_button.clicked.connect(self.copy_picture)

    def _lay_out(self) -> None:
        top, below = FlowLayout(), FlowLayout()
        for choice in (self.one, self.other):
            top.addWidget(choice.pair)
        top.addWidget(self.swap_button)
        top.addWidget(self.copy_button)
        below.addWidget(self.measure.pair)
        below.addWidget(self.picture_button)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(theme.HALF)
        layout.addLayout(top)
        layout.addWidget(self.table)
        layout.addWidget(self.notes)
        layout.addLayout(below)
        layout.addWidget(self.picture)

    def stops(self) -> tuple[QWidget, ...]:
        """Return what Tab stops at, in order."""
        return (
            self.one, self.other, self.swap_button, self.copy_button, self.table, self.measure,
            self.picture_button,
        )  # fmt: skip

    def copy_picture(self) -> None:
        """Put the chart on the clipboard."""
        if self._seen is not None:
            copy_picture(self.picture, self._seen.look.colours.paper)

    def swap(self) -> None:
        """Let the two plans change places."""
        one, other = self.one.currentData(), self.other.currentData()
        if one is not None and other is not None:
            self.one.choose(other)
            self.other.choose(one)

    def show_seen(self, seen: Seen | None) -> None:
        """Show these plans and measures, or an empty table."""
        self._seen = seen
        if seen is not None:
            self.one.offer(seen.offered_plans(), usual=1)
            self.other.offer(seen.offered_plans())
            self.measure.offer([(key, title(key)) for key in seen.keys], usual=1)
        self._rebuild()

    def _rebuild(self) -> None:
        seen = self._seen
        one, other = self.one.currentData(), self.other.currentData()
        there = seen is not None and one is not None and other is not None
        for part in (self.table, self.notes, self.picture):
            part.setVisible(there)
        if seen is None or not there:
            self.model.show_table(EMPTY)
            return
        self.model.show_table(difference_table(seen.comparison, one, other, seen.keys))
        self.table.fit_height()
        self.notes.setText(" ".join(self.model.table.notes))
        self._draw(seen, one, other)

    def _draw(self, seen: Seen, one: str, other: str) -> None:
        key = self.measure.currentData()
        found = None if key is None else difference(seen.comparison, one, other, key)
        drawn = found is not None and found.values.size > 1
        self.picture.setVisible(drawn)
        self.picture_button.setEnabled(drawn)
        if found is not None:
            words = (
                f"{title(key)}: {seen.named(one)} less {seen.named(other)}, "
                f"{difference_unit(seen.comparison, key)}"
            )
            self.drawn.setText(words)
            self.chart.show_difference(seen, found, words)
