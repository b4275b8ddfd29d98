"""A plot's frame on a sheet: years across, values up, everything else in millimetres.

Drawn with single lines and texts instead of the drawing library's own axes: a run has some forty
figures in three formats, and axes with their ticks took three quarters of the time.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import ArrayLike

from rescue_planner.annex.scales import Scale
from rescue_planner.annex.sheet import HAIR, INK, MM_PER_INCH, QUIET, THINNEST_PT, Sheet

if TYPE_CHECKING:
    from matplotlib.figure import Figure

_TICK_MM = 0.8
_GAP_MM = 0.8


@dataclass(frozen=True, slots=True)
class Scales:
    """The scales of a panel: years below, generations above, values at left."""

    years: Scale
    generations: Scale
    values: Scale


class Frame:
    """One plot of a figure; `left` and `low` are its corner on the sheet in millimetres."""

    def __init__(
        self, figure: Figure, corner: tuple[float, float], paper: Sheet, scales: Scales
    ) -> None:
        from matplotlib.transforms import Affine2D

        self.figure = figure
        self.paper = paper
        self.scales = scales
        self.wide = paper.width - paper.left - paper.right
        self.tall = paper.height - paper.bottom - paper.top
        left, low = corner
        self._mm = Affine2D().translate(left, low).scale(1 / MM_PER_INCH) + figure.dpi_scale_trans

    def across(self, year: ArrayLike) -> Any:  # noqa: ANN401 - a number, or an array of them
        """Return where years lie, in millimetres from the left of the plot."""
        scale = self.scales.years
        return (np.asarray(year, dtype=float) - scale.low) / (scale.high - scale.low) * self.wide

    def up(self, value: ArrayLike) -> Any:  # noqa: ANN401 - a number, or an array of them
        """Return where values lie, in millimetres above the foot of the plot."""
        scale = self.scales.values
        return (np.asarray(value, dtype=float) - scale.low) / (scale.high - scale.low) * self.tall

    def line(self, x: ArrayLike, y: ArrayLike, **style: Any) -> None:  # noqa: ANN401
        """Draw a line or markers at millimetres from the plot's lower left corner."""
        from matplotlib.lines import Line2D

        drawn = Line2D(np.asarray(x), np.asarray(y), transform=self._mm, **style)
        self.figure.add_artist(drawn)

    def fill(self, x: ArrayLike, low: ArrayLike, high: ArrayLike, **style: Any) -> None:  # noqa: ANN401
        """Fill between two lines given in millimetres."""
        from matplotlib.patches import Polygon

        x, low, high = np.asarray(x), np.asarray(low), np.asarray(high)
        outline = np.column_stack([np.r_[x, x[::-1]], np.r_[low, high[::-1]]])
        self.figure.add_artist(Polygon(outline, transform=self._mm, linewidth=0, **style))

    def text(self, x: float, y: float, words: str, **style: Any) -> None:  # noqa: ANN401
        """Write words at millimetres from the plot's lower left corner."""
        asked = {"fontsize": self.paper.text, "color": INK, "transform": self._mm, **style}
        self.figure.text(x, y, words, **asked)

    def values_axis(self) -> None:
        """Write the values at left, with a hairline across the plot at each."""
        scale = self.scales.values
        for value, words in zip(scale.ticks, scale.texts, strict=True):
            y = float(self.up(value))
            self.line([0, self.wide], [y, y], color=HAIR, linewidth=THINNEST_PT, zorder=1)
            self.text(-_GAP_MM, y, words, ha="right", va="center_baseline")
        if scale.low < 0 < scale.high:
            zero = float(self.up(0.0))
            self.line([0, self.wide], [zero, zero], color=QUIET, linewidth=0.6, zorder=1.5)

    def years_axis(self, *, named: bool = True) -> None:
        """Draw the axis of years below; its words only where `named`."""
        texts = self.scales.years.texts if named else ()
        self._time_axis(self.scales.years, 0.0, -1.0, texts)
        if named:
            y = -_TICK_MM - _GAP_MM - 1.25 * self.paper.line_height
            self.text(self.wide / 2, y, "Year", ha="center", va="top")

    def generations_axis(self, words: str, above: float = 0.0) -> None:
        """Draw the axis of generations, `above` millimetres above the plot."""
        scale = self.scales.generations
        self._time_axis(scale, self.tall + above, 1.0, scale.texts)
        y = self.tall + above + _TICK_MM + _GAP_MM + 1.2 * self.paper.line_height
        self.text(self.wide / 2, y, words, ha="center", va="bottom")

    def _time_axis(self, scale: Scale, y: float, way: float, texts: Sequence[str]) -> None:
        x = self.across(scale.ticks)
        tick = y + way * _TICK_MM
        held = np.full((x.size, 3), np.nan)
        ends = held.copy()
        held[:, 0], held[:, 1], ends[:, 0], ends[:, 1] = x, x, y, tick
        xs, ys = np.r_[0.0, self.wide, np.nan, held.ravel()], np.r_[y, y, np.nan, ends.ravel()]
        self.line(xs, ys, color=QUIET, linewidth=THINNEST_PT, zorder=2)
        side = "bottom" if way > 0 else "top"
        for at, words in zip(x, texts, strict=False):
            self.text(float(at), tick + way * _GAP_MM, words, ha="center", va=side)
