"""The trade-off chart of the Compare page: two measures, a third as the area of the marks."""

from __future__ import annotations

import math
from functools import cache
from itertools import pairwise

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.advice.consequences import Consequences
from rescue_planner.advice.trade_off import (
    TradePoint,
    axis_title,
    sizeable,
    trade_caption,
    trade_points,
    trade_range,
    trade_words,
)
from rescue_planner.case.measures import title
from rescue_planner.desk import theme
from rescue_planner.desk.compare.fold import Choice, Seen, copy_picture, framed
from rescue_planner.desk.compare.frame import Frame, value_axis
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.plan_mark import marker_path
from rescue_planner.desk.widgets import button, text
from rescue_planner.projection.marks import mark
from rescue_planner.projection.placing import Box, quietest

LEAST, USUAL, LARGEST = 3.0, 6.0, 15.0  # radii of marks, in pixels
HEIGHT = 300
NO_SIZE = "nothing: all marks alike"
FIRST_ACROSS = ("cost", "donor_ancestry")  # the first of these that any plan has
FIRST_UP = ("gene_diversity_kept", "adults")


def radius(point: TradePoint) -> float:
    """Return the radius of a mark: its area is in proportion, and 0 still leaves a dot."""
    return USUAL if point.area is None else max(LEAST, LARGEST * math.sqrt(point.area))


@cache
def even(marker: str) -> float:
    """Return by how much a marker's radius is multiplied so that all kinds have a circle's area."""
    outline = marker_path(marker, QPointF(0.0, 0.0), 100.0).toFillPolygon()
    corners = [(one.x(), one.y()) for one in outline.toList()]
    twice = sum(x * v - u * y for (x, y), (u, v) in pairwise(corners))  # the shoelace formula
    return math.sqrt(math.pi * 100.0**2 / (abs(twice) / 2.0))


class TradeChart(QWidget):
    """Paints the points; the same stands in words beside it, for those who cannot see it."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName("Trade-off chart")
        self._seen: Seen | None = None
        self._titles = ("", "")
        self.points: tuple[TradePoint, ...] = ()

    def show_points(
        self, seen: Seen, points: tuple[TradePoint, ...], titles: tuple[str, str]
    ) -> None:
        """Paint these points."""
        self._seen, self.points, self._titles = seen, points, titles
        self.setFixedHeight(round(HEIGHT * max(1.0, 0.7 * seen.look.text_scale)))
        self.update()

    def frame(self) -> Frame | None:
        """Return the axes, or nothing where no plan has a point."""
        if self._seen is None or not self.points:
            return None
        across = trade_range([point.x for point in self.points])
        up = trade_range([point.y for point in self.points])
        few = 3 if self._seen.look.text_scale > 1.5 else 5
        return Frame(
            self._seen.look,
            QRectF(self.rect()),
            value_axis(*across, self._titles[0], few),
            value_axis(*up, self._titles[1]),
        )

    def paintEvent(self, _event: QPaintEvent) -> None:
        frame = self.frame()
        if frame is None:
            return
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        frame.paint(painter)
        for point in sorted(self.points, key=radius, reverse=True):
            self._paint_mark(painter, frame.at(point.x, point.y), point)
        self._paint_names(painter, frame)
        painter.end()

    def _place(self, plan: str) -> int:
        assert self._seen is not None
        return self._seen.comparison.marks[self._seen.comparison.plans.index(plan)]

    def _paint_mark(self, painter: QPainter, at: QPointF, point: TradePoint) -> None:
        assert self._seen is not None
        look, place = self._seen.look, self._place(point.plan)
        ground = QColor(look.plan_colour(place))
        ground.setAlpha(110)  # a mark under another one still shows
        painter.setBrush(ground)
        painter.setPen(QPen(look.plan_colour(place), 1.4))
        marker = mark(place).marker
        painter.drawPath(marker_path(marker, at, radius(point) * even(marker)))

    def _paint_names(self, painter: QPainter, frame: Frame) -> None:
        assert self._seen is not None
        painter.setFont(self._seen.look.font())
        metrics = QFontMetricsF(painter.font())
        busy = [(at.x(), at.y()) for at in (frame.at(one.x, one.y) for one in self.points)]
        for point in self.points:
            words = self._seen.named(point.plan)
            wide, tall = metrics.horizontalAdvance(words) + 2, metrics.height()
            boxes = _boxes(frame.at(point.x, point.y), radius(point) + 4, wide, tall)
            within = [box for box in boxes if _inside(box, self.rect().width(), frame)] or boxes
            left, top, *_ = chosen = within[quietest(within, busy)]
            painter.setPen(self._seen.look.letter_colour(self._place(point.plan)))
            painter.drawText(QRectF(*chosen), int(Qt.AlignmentFlag.AlignCenter), words)
            busy += [(left + wide * k / 6, top + tall * j / 2) for k in range(7) for j in range(3)]


def _boxes(at: QPointF, off: float, wide: float, tall: float) -> list[Box]:
    x, y = at.x(), at.y()
    sides = [(x + off, y - tall / 2), (x - off - wide, y - tall / 2)]
    ends = [(x - wide / 2, y - off - tall), (x - wide / 2, y + off)]
    far = [(x + off, y - off - tall), (x + off, y + off), (x - off - wide, y - off - tall),
           (x - off - wide, y + off)]  # fmt: skip
    return [(left, top, wide, tall) for left, top in (*sides, *ends, *far)]


def _inside(box: Box, width: float, frame: Frame) -> bool:
    left, top, wide, tall = box
    return (
        left >= frame.plot.left()
        and left + wide <= width
        and frame.plot.top() - tall <= top
        and top + tall <= frame.plot.bottom()
    )


class TradeOff(QWidget):
    """Which two measures, which third one, the chart, and the chart in words."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._seen: Seen | None = None
        self._table: Consequences | None = None
        self.across = Choice("Across", "Measure of the trade-off chart, across", self)
        self.up = Choice("Up", "Measure of the trade-off chart, upwards", self)
        self.size_of = Choice("Area of a mark", "Measure shown by the area of the marks", self)
        self.chart = TradeChart(self)
        self.caption = text("", "small")
        self.picture = framed(self.caption, self.chart)
        self.words = text("", "note")
        top = FlowLayout()
        for choice in (self.across, self.up, self.size_of):
            top.addWidget(choice.pair)
            choice.currentIndexChanged.connect(self._rebuild)
        self.copy_button = button("Copy picture", said="Copy the trade-off chart as a picture")
        self.copy_button.clicked.connect(self.copy)
        top.addWidget(self.copy_button)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(theme.UNIT)
        layout.addLayout(top)
        layout.addWidget(self.picture)
        layout.addWidget(self.words)

    def stops(self) -> tuple[QWidget, ...]:
        """Return what Tab stops at, in order."""
        return (self.across, self.up, self.size_of, self.copy_button)

    def copy(self) -> None:
        """Put the chart on the clipboard."""
        if self._seen is not None:
            copy_picture(self.picture, self._seen.look.colours.paper)

    def show_table(self, seen: Seen | None, table: Consequences | None) -> None:
        """Show the plans of a consequence table."""
        self._seen, self._table = seen, table
        if table is not None:
            offered: list[tuple[object, str]] = [(key, title(key)) for key in table.keys]
            self.across.offer(offered, _first(table, FIRST_ACROSS, 0))
            self.up.offer(offered, _first(table, FIRST_UP, 1))
            self.size_of.offer([("", NO_SIZE), *offered])
        self._rebuild()

    def _rebuild(self) -> None:
        seen, table = self._seen, self._table
        x, y = self.across.currentData(), self.up.currentData()
        shown = seen is not None and table is not None and x is not None and y is not None
        self.picture.setVisible(shown)
        self.words.setVisible(shown)
        if seen is None or table is None or not shown:
            return
        size = self.size_of.currentData() or None
        titles = [axis_title(seen.comparison, table, key) for key in (x, y)]
        self.chart.show_points(seen, trade_points(table, x, y, size), (titles[0], titles[1]))
        words = trade_words(seen.comparison, table, x, y, size)
        self.words.setText("\n".join(words))
        self.chart.setAccessibleDescription(" ".join(words))
        self.caption.setText(trade_caption(seen.comparison, table, x, y, size))
        self.picture.setVisible(bool(self.chart.points))
        self.copy_button.setEnabled(bool(self.chart.points))


def _first(table: Consequences, wanted: tuple[str, ...], otherwise: int) -> int:
    there = [key for key in wanted if key in table.keys and sizeable(table, key)]
    return table.keys.index(there[0]) if there else otherwise
