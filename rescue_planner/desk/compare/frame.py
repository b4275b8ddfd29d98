"""Axes of the small charts that the Compare page paints itself: titles, ticks, hairlines."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter

from rescue_planner.desk.charts.look import Look
from rescue_planner.projection.placing import tick_texts, ticks

GAP = 6.0  # pixels between ticks and the plot


@dataclass(frozen=True, slots=True)
class AxisPicture:
    """One axis: its range, what it is called, and its ticks as (value, text)."""

    low: float
    high: float
    title: str
    ticks: tuple[tuple[float, str], ...]


def value_axis(low: float, high: float, title: str, most: int = 4) -> AxisPicture:
    """Return an axis with round ticks."""
    at = ticks(low, high, most)
    return AxisPicture(low, high, title, tuple(zip(at, tick_texts(at), strict=True)))


class Frame:
    """Puts values of two axes into a rectangle, and paints the axes."""

    def __init__(
        self, look: Look, room: QRectF, across: AxisPicture, up: AxisPicture, right: float = 16.0
    ) -> None:
        self.look, self.across, self.up = look, across, up
        self._metrics = QFontMetricsF(look.font())
        line = look.line_height
        widest = max((self._metrics.horizontalAdvance(words) for _, words in up.ticks), default=0.0)
        self.plot = room.adjusted(
            widest + 2 * GAP,
            2 * line if up.title else 0.6 * line,
            -right,
            -(2.5 * line if across.title else 1.5 * line),
        )
        self._room = room

    def at(self, x: float, y: float) -> QPointF:
        """Return where a pair of values stands."""
        across = (x - self.across.low) / (self.across.high - self.across.low)
        up = (y - self.up.low) / (self.up.high - self.up.low)
        return QPointF(
            self.plot.left() + across * self.plot.width(),
            self.plot.bottom() - up * self.plot.height(),
        )

    def paint(self, painter: QPainter) -> None:
        """Paint titles, ticks and hairlines."""
        colours, line = self.look.colours, self.look.line_height
        painter.setFont(self.look.font())
        painter.setPen(QColor(colours.ink))
        width = self._room.width()
        self._words(
            painter, QRectF(self._room.left(), self._room.top(), width, line), self.up.title
        )
        if self.across.title:
            below = QRectF(self._room.left(), self._room.bottom() - line, width, line)
            self._words(painter, below, self.across.title, Qt.AlignmentFlag.AlignRight)
        for value, words in self.up.ticks:
            y = self.at(self.across.low, value).y()
            painter.setPen(self.look.hair(colours.hairline))
            painter.drawLine(QPointF(self.plot.left(), y), QPointF(self.plot.right(), y))
            painter.setPen(QColor(colours.soft))
            box = QRectF(self._room.left(), y - line / 2, self.plot.left() - GAP, line)
            box.setRight(self.plot.left() - GAP)
            self._words(painter, box, words, Qt.AlignmentFlag.AlignRight)
        self._paint_across(painter)

    def _paint_across(self, painter: QPainter) -> None:
        colours, line, base = self.look.colours, self.look.line_height, self.plot.bottom()
        last = self._room.left() - 1.0
        for value, words in self.across.ticks:
            x = self.at(value, self.up.low).x()
            painter.setPen(self.look.hair(colours.line))
            painter.drawLine(QPointF(x, base), QPointF(x, base + 4))
            wide = self._metrics.horizontalAdvance(words) + 2
            left = min(x - wide / 2, self._room.right() - wide)
            if left <= last:
                continue  # no room between its neighbours
            painter.setPen(QColor(colours.soft))
            box = QRectF(left, base + GAP, wide, line)
            self._words(painter, box, words, Qt.AlignmentFlag.AlignHCenter)
            last = left + wide + GAP

    def _words(
        self,
        painter: QPainter,
        box: QRectF,
        words: str,
        side: Qt.AlignmentFlag = Qt.AlignmentFlag.AlignLeft,
    ) -> None:
        shown = self._metrics.elidedText(words, Qt.TextElideMode.ElideRight, box.width() + 1)
        painter.drawText(box, int(side | Qt.AlignmentFlag.AlignVCenter), shown)
