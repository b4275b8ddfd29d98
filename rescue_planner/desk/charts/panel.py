"""One panel of small multiples: a measure over time, all plans."""

from __future__ import annotations

from typing import Any

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import Qt
from PySide6.QtGui import QColor
from PySide6.QtWidgets import QGraphicsItem

from rescue_planner.desk.charts.gutters import (
    EndLetters,
    Heading,
    TimeTicks,
    ValueTicks,
    plotted_range,
)
from rescue_planner.desk.charts.look import FAINT, PLAIN, STRONG, Look, symbol
from rescue_planner.desk.charts.overlay import Ground, Overlay
from rescue_planner.projection.marks import mark
from rescue_planner.projection.picture import Line, Picture
from rescue_planner.projection.reading import Fan

MARGIN = 4.0  # room for the ring of the chosen panel
MARKER_PIXELS = 6
OUTER, INNER = 46, 80  # opacity of the bands, of 255


_BANDS = ("years", "q05", "q25", "q75", "q95")


def keep_painted(item: QGraphicsItem) -> None:
    """Let Qt keep the painted pixels of an item until it changes: most plans do not."""
    item.setCacheMode(QGraphicsItem.CacheMode.DeviceCoordinateCache)


class PlanItems:
    """What is drawn for one plan; touched only where its line or look changed."""

    def __init__(self, view: pg.ViewBox) -> None:
        self.curve = pg.PlotCurveItem(antialias=True)
        self.markers = pg.ScatterPlotItem(pxMode=True, antialias=True)
        self._view = view
        self._drawn: tuple[Line, Look, float] | None = None
        self.times_drawn = 0
        for item in (self.curve, self.markers):
            keep_painted(item)
            view.addItem(item, ignoreBounds=True)

    def show_line(self, line: Line, look: Look, weight: float) -> None:
        """Draw `line` with a pen of `weight` pixels, unless it stands there already."""
        if self._drawn is not None and _same(self._drawn, (line, look, weight)):
            return
        self._drawn = (line, look, weight)
        self.times_drawn += 1
        years, values = line.curve.years, line.curve.values
        self.curve.setData(years, values, pen=look.plan_pen(line.mark, weight))
        at = [] if weight == FAINT else list(line.markers)
        colour = look.plan_colour(line.mark)
        self.markers.setData(
            x=years[at],
            y=values[at],
            symbol=symbol(mark(line.mark)),
            size=MARKER_PIXELS + weight,
            pen=pg.mkPen(colour, width=1.3),
            brush=pg.mkBrush(colour if weight == STRONG else QColor(look.colours.paper)),
        )
        for item, lift in ((self.curve, 0), (self.markers, 1)):
            item.setZValue(10 + lift + 10 * weight)

    def remove(self) -> None:
        """Take the plan off the panel."""
        for item in (self.curve, self.markers):
            self._view.removeItem(item)


def _same(one: tuple[Line, Look, float], other: tuple[Line, Look, float]) -> bool:
    (a, *rest), (b, *others) = one, other
    return (
        rest == others
        and (a.plan, a.mark, a.markers) == (b.plan, b.mark, b.markers)
        and np.array_equal(a.curve.years, b.curve.years)
        and np.array_equal(a.curve.values, b.curve.values)
    )


def _same_fan(one: tuple[Fan, QColor], other: tuple[Fan, QColor]) -> bool:
    (a, colour), (b, another) = one, other
    return colour == another and all(
        np.array_equal(getattr(a, name), getattr(b, name)) for name in _BANDS
    )


class FanItems:
    """The two bands of one plan."""

    def __init__(self, view: pg.ViewBox) -> None:
        self.outer = pg.PlotCurveItem(antialias=True, fillLevel="enclosed", pen=None)
        self.inner = pg.PlotCurveItem(antialias=True, fillLevel="enclosed", pen=None)
        self._drawn: tuple[Fan, QColor] | None = None
        for z, item in enumerate((self.outer, self.inner)):
            item.setZValue(z)
            keep_painted(item)
            view.addItem(item, ignoreBounds=True)

    def show_fan(self, fan: Fan | None, colour: QColor) -> None:
        """Draw the bands, or none, unless they stand there already."""
        if fan is not None and self._drawn is not None and _same_fan(self._drawn, (fan, colour)):
            return
        self._drawn = None if fan is None else (fan, colour)
        for item, alpha in ((self.outer, OUTER), (self.inner, INNER)):
            item.setVisible(fan is not None)
            if fan is None:
                item.setData([], [])
                continue
            low, high = (fan.q05, fan.q95) if item is self.outer else (fan.q25, fan.q75)
            ground = QColor(colour)
            ground.setAlpha(alpha)
            item.setData(
                np.concatenate([fan.years, fan.years[::-1]]),
                np.concatenate([low, high[::-1]]),
                brush=ground,
            )


class Panel(pg.GraphicsLayout):
    """Heading, value ticks, plot, letters and time ticks of one measure."""

    def __init__(self, parent: Any = None) -> None:  # noqa: ANN401 - pyqtgraph's own
        super().__init__(parent)
        self.heading, self.values = Heading(), ValueTicks()
        self.letters, self.time = EndLetters(), TimeTicks()
        self.view = pg.ViewBox(enableMenu=False, enableMouse=False, border=None)
        self.view.setDefaultPadding(0)
        self.ground, self.overlay = Ground(self.view), Overlay()
        self.ground.setZValue(-50)
        self.overlay.setParentItem(self.view)
        self.overlay.setZValue(100)
        self.overlay.setAcceptedMouseButtons(Qt.MouseButton.NoButton)
        self.plans: dict[str, PlanItems] = {}
        self.fan = FanItems(self.view)
        self.picture: Picture | None = None
        self._lay_out()
        self.view.sigResized.connect(self._view_resized)

    def _lay_out(self) -> None:
        self.setContentsMargins(MARGIN, MARGIN, MARGIN, MARGIN)
        self.layout.setSpacing(0)
        self.addItem(self.heading, row=0, col=0, colspan=3)
        self.addItem(self.values, row=1, col=0)
        self.addItem(self.view, row=1, col=1)
        self.addItem(self.letters, row=1, col=2)
        self.addItem(self.time, row=2, col=1)

    def _view_resized(self) -> None:
        for item in (self.ground, self.overlay):
            item.setGeometry(0, 0, self.view.width(), self.view.height())
        self.letters.update()

    def show_picture(self, picture: Picture, look: Look, strong: str | None, full: int) -> None:
        """Draw a picture; of the plans, only those that changed.

        `full` is the number of values of a line that reaches the horizon.
        """
        self.picture = picture
        self.letters.full = full
        for part in (self.ground, self.overlay, self.heading, self.values, self.letters, self.time):
            part.show_picture(picture, look)
        names = [line.plan for line in picture.lines]
        for gone in [name for name in self.plans if name not in names]:
            self.plans.pop(gone).remove()
        for line in picture.lines:
            if line.plan not in self.plans:
                self.plans[line.plan] = PlanItems(self.view)
            weight = STRONG if line.plan == strong else FAINT if picture.fan else PLAIN
            self.plans[line.plan].show_line(line, look, weight)
        self.fan.show_fan(picture.fan, look.plan_colour(picture.fan_mark))

    def show_time(
        self, span: tuple[float, float], ticks: dict[str, tuple[tuple[float, str], ...]], rows: int
    ) -> None:
        """Set the years shown and their ticks."""
        self.overlay.span = span
        self.time.show_time(span, ticks, rows)
        assert self.picture is not None
        values = plotted_range(self.picture)
        self.view.setRange(xRange=span, yRange=values, padding=0, disableAutoRange=True)

    def show_read_out(self, t: int, when: str, year: float | None) -> None:
        """Show the values at t, and a hairline where `year` is given."""
        self.heading.show_read_out(t, when)
        self.overlay.show_read_out(year, t)

    def fit(self, room: float) -> None:
        """Give the letters the columns they need in a plot of the height `room`."""
        assert self.picture is not None
        self.letters.fit(len(self.picture.lines), room)
