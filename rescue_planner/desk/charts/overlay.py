"""Words and marks over a plot: targets, reference names, ends of lines, the read-out hairline."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QBrush, QColor, QFontMetricsF, QPainter, QPolygonF
from PySide6.QtWidgets import QStyleOptionGraphicsItem, QWidget

from rescue_planner.desk.charts.gutters import GAP, Gutter, plotted_range
from rescue_planner.projection.picture import Picture
from rescue_planner.projection.placing import Box, quietest
from rescue_planner.projection.reading import TargetMark, year_text


def bound_words(mark: TargetMark) -> str:
    """Return a target's bound; whose it is stands in the explainer and the table of targets."""
    return f"{'≥' if mark.at_least else '≤'} {mark.value:g}"


class Ground(Gutter):
    """Hairlines behind the lines: ticks and reference values."""

    def paint(
        self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None
    ) -> None:
        if self.picture is None or self.picture.empty:
            return
        width = float(self.size().width())
        painter.setPen(self.look.hair(self.look.colours.hairline))
        for value in self.picture.ticks:
            y = round(self.y_of(value)) + 0.5
            painter.drawLine(QPointF(0, y), QPointF(width, y))
        painter.setPen(self.look.hair(self.look.colours.line))
        for _, value in self.picture.references:
            y = round(self.y_of(value)) + 0.5
            painter.drawLine(QPointF(0, y), QPointF(width, y))


class Overlay(Gutter):
    """Everything that is written in the plot itself."""

    def __init__(self) -> None:
        super().__init__()
        self.span = (0.0, 1.0)
        self.read_out: float | None = None
        self.t = 0
        self._busy: list[tuple[float, float]] = []
        self._points: list[tuple[float, float]] = []
        self._points_for: tuple[Picture, float, float, tuple[float, float]] | None = None

    def show_read_out(self, year: float | None, t: int) -> None:
        """Draw the hairline at `year`, or none."""
        if (year, t) != (self.read_out, self.t):
            self.read_out, self.t = year, t
            self.update()

    def x_of(self, year: float) -> float:
        """Return where a year stands."""
        return float(self.size().width()) * (year - self.span[0]) / (self.span[1] - self.span[0])

    def paint(
        self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None
    ) -> None:
        if self.picture is None:
            return
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setFont(self.look.font())
        if self.picture.empty:
            self._paint_empty(painter, self.picture.empty)
            return
        self._busy = self._line_points()
        self._paint_references(painter)
        for mark in self.picture.targets:
            self._paint_target(painter, mark)
        self._paint_gone(painter)
        if self.read_out is not None:
            self._paint_read_out(painter, self.x_of(self.read_out))

    def _paint_empty(self, painter: QPainter, words: str) -> None:
        painter.setPen(QColor(self.look.colours.soft))
        flags = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignTop
        box = QRectF(0, GAP, self.size().width(), self.size().height() - GAP)
        painter.drawText(box, int(flags) | int(Qt.TextFlag.TextWordWrap), words)

    def _paint_references(self, painter: QPainter) -> None:
        assert self.picture is not None
        for words, value in self.picture.references:
            wide, tall = self._size_of(words)
            y, right = self.y_of(value), float(self.size().width()) - wide - GAP
            self._write(
                painter,
                words,
                [(x, top) for x in (right, right / 2, GAP) for top in (y - tall, y + 1)],
            )

    def _size_of(self, words: str) -> tuple[float, float]:
        metrics = QFontMetricsF(self.look.font())
        return metrics.horizontalAdvance(words), metrics.height()

    def _write(
        self, painter: QPainter, words: str, at: Sequence[tuple[float, float]], colour: str = ""
    ) -> None:
        """Write words at the one of several places that hides least, clear of other words."""
        wide, tall = self._size_of(words)
        room_x, room_y = float(self.size().width()) - wide - 2, float(self.size().height()) - tall
        boxes: list[Box] = [
            (min(max(x, 2.0), max(room_x, 2.0)), min(max(y, 0.0), room_y), wide, tall)
            for x, y in at
        ]
        left, top, *_ = boxes[quietest(boxes, self._busy)]
        step = max(6.0, wide / 12)
        self._busy += [
            (left + k * step, top + tall * part)
            for k in range(int(wide / step) + 1)
            for part in (0.1, 0.5, 0.9)
            for _ in range(20)  # words on words are worse than words on lines
        ]
        self._words(painter, QPointF(left, top), words, colour)

    def _line_points(self) -> list[tuple[float, float]]:
        """Return points along the lines, about as dense as letters are wide.

        They are needed at every paint and change only with the picture, the room and the years.
        """
        assert self.picture is not None
        width, height = float(self.size().width()), float(self.size().height())
        made_for = (self.picture, width, height, self.span)
        if self._points_for == made_for:
            return list(self._points)
        low, high = plotted_range(self.picture)
        points: list[tuple[float, float]] = []
        for line in self.picture.lines:
            if not line.curve.years.size:
                continue
            xs = width * (line.curve.years - self.span[0]) / (self.span[1] - self.span[0])
            ys = height * (1.0 - (line.curve.values - low) / (high - low))
            at = np.arange(xs[0], xs[-1] + 1, 5.0)
            points += zip(at.tolist(), np.interp(at, xs, ys).tolist(), strict=True)
        self._points_for, self._points = made_for, points
        return list(points)

    def _words(self, painter: QPainter, at: QPointF, words: str, colour: str = "") -> None:
        """Write words on a ground that dims the lines below them."""
        metrics = QFontMetricsF(self.look.font())
        ground = QColor(self.look.colours.paper)
        ground.setAlpha(205)
        box = QRectF(at.x() - 2, at.y(), metrics.horizontalAdvance(words) + 4, metrics.height())
        painter.fillRect(box, ground)
        painter.setPen(QColor(colour or self.look.colours.soft))
        painter.drawText(QPointF(at.x(), at.y() + metrics.ascent()), words)

    def _paint_target(self, painter: QPainter, mark: TargetMark) -> None:
        """Draw a bar at the bound, a wedge on the side that meets it, and the words."""
        x, y = self.x_of(min(mark.year, self.span[1])), self.y_of(mark.value)
        ink = QColor(self.look.colours.ink)
        reach, way = 2.0 * GAP, -1.0 if mark.at_least else 1.0
        painter.setPen(self.look.hair(self.look.colours.ink))
        painter.drawLine(QPointF(x - reach, y), QPointF(x + reach, y))
        painter.setBrush(QBrush(ink))
        wedge = [
            QPointF(x - GAP, y + way),
            QPointF(x + GAP, y + way),
            QPointF(x, y + way * (1.5 * GAP + 1)),
        ]
        painter.drawPolygon(QPolygonF(wedge))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        words = bound_words(mark)
        wide, tall = self._size_of(words)
        under, over = y + 3, y - tall - 3
        tops = (under, over) if mark.at_least else (over, under)
        beside = (x - wide - 3 * GAP, x + 3 * GAP)
        places = [(x - wide / 2, tops[0]), *((left, y - tall / 2) for left in beside)]
        places += [(x - wide / 2, tops[1])]
        places += [(left, top) for left in beside for top in tops]
        self._write(painter, words, places, self.look.colours.ink)

    def _paint_gone(self, painter: QPainter) -> None:
        """Put a cross where nobody is left or the line ends for that, and say by when."""
        assert self.picture is not None
        for line in self.picture.lines:
            if line.curve.gone_by is None or not line.curve.values.size:
                continue
            end = int(np.searchsorted(line.curve.years, line.curve.gone_by))
            end = min(end, line.curve.years.size - 1)
            x = self.x_of(float(line.curve.years[end]))
            y = self.y_of(float(line.curve.values[end]))
            colour = self.look.plan_colour(line.mark)
            painter.setPen(colour)
            painter.drawLine(QPointF(x - GAP, y - GAP), QPointF(x + GAP, y + GAP))
            painter.drawLine(QPointF(x - GAP, y + GAP), QPointF(x + GAP, y - GAP))
            words = f"{line.letter} gone by {year_text(line.curve.gone_by)}"
            wide, tall = self._size_of(words)
            reach = tall * 0.4
            places = [
                (left, top)
                for top in (y + reach, y - tall - reach, y + 1.5 * tall, y - 2.5 * tall)
                for left in (x - wide, x - wide / 2, x)
            ]
            places.insert(0, (x + 2 * GAP, y - tall / 2))
            self._write(painter, words, places, self.look.letter_colour(line.mark).name())

    def _paint_read_out(self, painter: QPainter, x: float) -> None:
        assert self.picture is not None
        painter.setPen(self.look.hair(self.look.colours.soft))
        painter.drawLine(QPointF(x, 0), QPointF(x, float(self.size().height())))
        for line in self.picture.lines:
            if self.t < line.curve.values.size:
                colour = self.look.plan_colour(line.mark)
                painter.setPen(colour)
                painter.setBrush(QBrush(QColor(self.look.colours.paper)))
                y = self.y_of(float(line.curve.values[self.t]))
                painter.drawEllipse(QPointF(x, y), 2.8, 2.8)
        painter.setBrush(Qt.BrushStyle.NoBrush)
