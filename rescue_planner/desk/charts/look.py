"""Fonts, pens and symbols of the charts."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

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
TEXT_CONTRAST = 4.5
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

    def letter_colour(self, place: int) -> QColor:
        """Return a plan's colour, as much nearer to ink as text must be to be read (4.5:1)."""
        return QColor(_readable(mark(place), self.scheme))

    def plan_colour(self, place: int) -> QColor:
        """Return the colour of the plan at `place` in the case."""
        return theme.plan_colour(mark(place), self.scheme)


def luminance(colour: QColor) -> float:
    """Return the relative luminance of WCAG 2.2."""

    def linear(part: float) -> float:
        return part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4

    red, green, blue = linear(colour.redF()), linear(colour.greenF()), linear(colour.blueF())
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


def contrast(one: QColor, other: QColor) -> float:
    """Return the contrast ratio of WCAG 2.2, 1 to 21."""
    low, high = sorted((luminance(one), luminance(other)))
    return (high + 0.05) / (low + 0.05)


@lru_cache(maxsize=64)
def _readable(place: PlanMark, scheme: Scheme) -> str:
    paper, ink = (QColor(getattr(theme.palette(scheme), name)) for name in ("paper", "ink"))
    colour = theme.plan_colour(place, scheme)
    parts = [(a.red(), a.green(), a.blue()) for a in (colour, ink)]
    for share in range(0, 101, 5):
        mixed = QColor(
            *(round(((100 - share) * a + share * b) / 100) for a, b in zip(*parts, strict=True))
        )
        if contrast(mixed, paper) >= TEXT_CONTRAST:
            return mixed.name()
    return ink.name()


def symbol(place: PlanMark) -> str:
    """Return pyqtgraph's name of a plan's marker."""
    return SYMBOLS[place.marker]
