"""Fonts, pens and symbols of the charts."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPen

from rescue_planner.desk import theme
from rescue_planner.desk.view import Axis, Scheme
from rescue_planner.projection.marks import PlanMark, mark

SYMBOLS = {
    "circle": "o",
    "square": "s",
    "triangle": "t1",
    "diamond": "d",
    "cross": "x",
    "triangle-down": "t",
}
FAINT, PLAIN, STRONG = 1.0, 1.6, 2.8  # widths of lines, in pixels


@dataclass(frozen=True, slots=True)
class Look:
    """How charts look now: the scheme, the text size, the axis that stands first."""

    scheme: Scheme = "light"
    text_scale: float = 1.0
    axis: Axis = "years"

    @property
    def colours(self) -> theme.Palette:
        """Colours of the scheme."""
        return theme.palette(self.scheme)

    def font(self, size: int = theme.NOTE, bold: bool = False) -> QFont:
        """Return the font of chart text."""
        return theme.font(size, self.text_scale, bold=bold)

    @property
    def line_height(self) -> float:
        """Height of a line of chart text, in pixels."""
        return QFontMetricsF(self.font()).height()

    def hair(self, colour: str, dashed: bool = False) -> QPen:
        """Return a hairline."""
        pen = QPen(QColor(colour), 1.0)
        pen.setCosmetic(True)
        if dashed:
            pen.setStyle(Qt.PenStyle.DashLine)
        return pen

    def plan_pen(self, place: int, width: float) -> QPen:
        """Return the pen of the plan at `place` in the case."""
        return theme.plan_pen(mark(place), self.scheme, width)

    def plan_colour(self, place: int) -> QColor:
        """Return the colour of the plan at `place` in the case."""
        return theme.plan_colour(mark(place), self.scheme)


def symbol(place: PlanMark) -> str:
    """Return pyqtgraph's name of a plan's marker."""
    return SYMBOLS[place.marker]
