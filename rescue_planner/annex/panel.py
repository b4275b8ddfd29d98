"""Drawing one measure into one pair of axes."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from rescue_planner.annex.curves import Curve, Goal
from rescue_planner.annex.scales import Scale
from rescue_planner.annex.sheet import HAIR, INK, QUIET, THINNEST_PT, Sheet
from rescue_planner.projection.marks import PlanMark

if TYPE_CHECKING:
    from matplotlib.axes import Axes

MARKERS = {
    "circle": "o",
    "square": "s",
    "triangle": "^",
    "diamond": "D",
    "cross": "x",
    "triangle-down": "v",
}
MOST_FILLED_BANDS = 3


@dataclass(frozen=True, slots=True)
class Scales:
    """The scales of a panel: years below, generations above, values at left."""

    years: Scale
    generations: Scale
    values: Scale


def dash(mark: PlanMark) -> Any:  # noqa: ANN401 - matplotlib's line style
    """Return a plan's dash in matplotlib's words."""
    return (0, mark.dash) if mark.dash else "-"


def marker_style(mark: PlanMark, size: float) -> dict[str, Any]:
    """Return how a plan's marker is drawn."""
    stroke = mark.marker == "cross"
    return {
        "marker": MARKERS[mark.marker],
        "markersize": size,
        "markerfacecolor": mark.light,
        "markeredgecolor": mark.light if stroke else "white",
        "markeredgewidth": 1.0 if stroke else THINNEST_PT,
    }


def bare(axes: Axes, scales: Scales, text: float) -> None:
    """Set limits, ticks and hairlines; no frame but the two time axes."""
    axes.set_xlim(scales.years.low, scales.years.high)
    axes.set_ylim(scales.values.low, scales.values.high)
    axes.set_xticks(scales.years.ticks, scales.years.texts)
    axes.set_yticks(scales.values.ticks, scales.values.texts)
    axes.tick_params(labelsize=text)
    axes.tick_params(axis="y", length=0)
    axes.grid(visible=True, axis="y", color=HAIR, linewidth=THINNEST_PT)
    axes.set_axisbelow(True)
    for side in ("left", "right", "top"):
        axes.spines[side].set_visible(False)
    if scales.values.low < 0 < scales.values.high:
        axes.axhline(0.0, color=QUIET, linewidth=THINNEST_PT, zorder=1)


def generations_on_top(axes: Axes, scales: Scales, text: float, outward: float = 0.0) -> Axes:
    """Put the axis of generations above the plot, `outward` points away from it."""
    top = axes.twiny()
    top.set_xlim(scales.generations.low, scales.generations.high)
    top.set_xticks(scales.generations.ticks, scales.generations.texts)
    top.tick_params(labelsize=text)
    for side in ("left", "right", "bottom"):
        top.spines[side].set_visible(False)
    if outward:
        top.spines["top"].set_position(("outward", outward))
    top.patch.set_visible(False)
    return top


def draw_lines(axes: Axes, lines: Sequence[Curve], sheet: Sheet) -> None:
    """Draw bands, then lines with their markers, the first plan lowest."""
    banded = sum(line.band.wide is not None for line in lines)
    for line in lines:
        _draw_band(axes, line, filled=banded <= MOST_FILLED_BANDS)
    for index, line in enumerate(lines):
        axes.plot(
            line.years,
            line.values,
            color=line.mark.light,
            linestyle=dash(line.mark),
            linewidth=sheet.line,
            markevery=marked(line.values.size, index, len(lines)),
            clip_on=False,
            zorder=3 + 0.01 * index,
            **marker_style(line.mark, sheet.marker),
        )
        if line.gone is not None and line.values.size and line.years[-1] < line.gone:
            _draw_end(axes, line, sheet)


def marked(count: int, index: int, plans: int) -> list[int]:
    """Return which points of a line carry its marker: about six, staggered from plan to plan."""
    every = max(1, -(-count // 6))
    return list(range(index * every // max(plans, 1), count, every))


def _draw_band(axes: Axes, line: Curve, filled: bool) -> None:
    colour, (wide, narrow) = line.mark.light, (line.band.wide, line.band.narrow)
    if filled:
        for pair, alpha in ((wide, 0.12), (narrow, 0.14)):
            if pair is not None:
                axes.fill_between(line.years, *pair, color=colour, alpha=alpha, linewidth=0)
    elif wide is not None:
        for edge in wide:
            axes.plot(
                line.years,
                edge,
                color=colour,
                linestyle=dash(line.mark),
                linewidth=THINNEST_PT,
                alpha=0.7,
                zorder=2,
            )


def _draw_end(axes: Axes, line: Curve, sheet: Sheet) -> None:
    """Mark where a population's line ends because no animal is left."""
    axes.plot(
        line.years[-1:],
        line.values[-1:],
        marker="X",
        markersize=sheet.marker * 1.9,
        markerfacecolor="white",
        markeredgecolor=line.mark.light,
        markeredgewidth=0.9,
        linestyle="none",
        clip_on=False,
        zorder=5,
    )


def draw_goals(axes: Axes, goals: Sequence[Goal], sheet: Sheet) -> None:
    """Draw each target's bound as a hairline that ends at its year in an open arrow head."""
    first, last = axes.get_xlim()
    for goal in goals:
        year = min(max(goal.year, first), last)
        axes.plot(
            [first, year],
            [goal.bound, goal.bound],
            color=QUIET,
            linewidth=0.6,
            zorder=2.5,
        )
        axes.plot(
            [year],
            [goal.bound],
            marker=6 if goal.at_least else 7,  # carets whose tip lies on the bound
            markersize=sheet.marker * 1.6,
            markerfacecolor="white",
            markeredgecolor=INK,
            markeredgewidth=0.7,
            linestyle="none",
            clip_on=False,
            zorder=6,
        )


def crossings(lines: Sequence[Curve], box: tuple[float, float, float, float]) -> int:
    """Return how many points of the lines, drawn densely, lie in a box of data coordinates.

    Parameters
    ----------
    box : (left, right, low, high)
    """
    left, right, low, high = box
    at = np.linspace(left, right, 60)
    total = 0
    for line in lines:
        inside = at[(at >= line.years[0]) & (at <= line.years[-1])]
        values = np.interp(inside, line.years, line.values)
        total += int(((values >= low) & (values <= high)).sum())
    return total
