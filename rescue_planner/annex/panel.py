"""Drawing one measure's bands, lines and targets into a frame."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from rescue_planner.annex.curves import Curve, Goal
from rescue_planner.annex.frame import Frame
from rescue_planner.annex.sheet import INK, QUIET, THINNEST_PT
from rescue_planner.projection.marks import PlanMark

MARKERS = {
    "circle": "o",
    "square": "s",
    "triangle": "^",
    "diamond": "D",
    "cross": "x",
    "triangle-down": "v",
}
# Shapes of one size look unlike in size; these make up for it.
_SIZES = {"triangle": 1.35, "triangle-down": 1.35, "diamond": 0.95, "square": 0.95, "cross": 1.1}
MOST_FILLED_BANDS = 3


def dash(mark: PlanMark) -> Any:  # noqa: ANN401 - matplotlib's line style
    """Return a plan's dash in matplotlib's words."""
    return (0, mark.dash) if mark.dash else "-"


def marker_style(mark: PlanMark, size: float) -> dict[str, Any]:
    """Return how a plan's marker is drawn."""
    stroke = mark.marker == "cross"
    return {
        "marker": MARKERS[mark.marker],
        "markersize": size * _SIZES.get(mark.marker, 1.0),
        "markerfacecolor": mark.light,
        "markeredgecolor": mark.light if stroke else "white",
        "markeredgewidth": 1.0 if stroke else THINNEST_PT,
    }


def draw_lines(frame: Frame, lines: Sequence[Curve]) -> None:
    """Draw bands, then lines with their markers, the first plan lowest."""
    banded = sum(line.band.wide is not None for line in lines)
    for line in lines:
        _draw_band(frame, line, filled=banded <= MOST_FILLED_BANDS)
    for index, line in enumerate(lines):
        frame.line(
            frame.across(line.years),
            frame.up(line.values),
            color=line.mark.light,
            linestyle=dash(line.mark),
            linewidth=frame.paper.line,
            markevery=marked(line.values.size, index, len(lines)),
            zorder=3 + 0.01 * index,
            **marker_style(line.mark, frame.paper.marker),
        )
        if ended(line):
            _draw_end(frame, line)


def ended(line: Curve) -> bool:
    """Return whether a line stops because no animal is left."""
    return line.gone is not None and float(line.years[-1]) < line.gone


def marked(count: int, index: int, plans: int) -> list[int]:
    """Return which points of a line carry its marker: about six, staggered from plan to plan."""
    every = max(1, -(-count // 6))
    return list(range(min(index * every // max(plans, 1), count - 1), count, every))


def _draw_band(frame: Frame, line: Curve, filled: bool) -> None:
    colour, wide, narrow = line.mark.light, line.band.wide, line.band.narrow
    x = frame.across(line.years)
    if filled:
        for pair, alpha in ((wide, 0.12), (narrow, 0.14)):
            if pair is not None:
                low, high = (frame.up(edge) for edge in pair)
                frame.fill(x, low, high, facecolor=colour, alpha=alpha, zorder=2)
    elif wide is not None:
        for edge in wide:
            frame.line(
                x,
                frame.up(edge),
                color=colour,
                linestyle=dash(line.mark),
                linewidth=THINNEST_PT,
                alpha=0.7,
                zorder=2,
            )


def _draw_end(frame: Frame, line: Curve) -> None:
    """Mark where a population's line ends because no animal is left."""
    frame.line(
        frame.across(line.years[-1:]),
        frame.up(line.values[-1:]),
        marker="X",
        markersize=frame.paper.marker * 1.9,
        markerfacecolor="white",
        markeredgecolor=line.mark.light,
        markeredgewidth=0.9,
        linestyle="none",
        zorder=5,
    )


def draw_goals(frame: Frame, goals: Sequence[Goal]) -> None:
    """Draw each target's bound as a thin line that ends at its year in a caret."""
    years = frame.scales.years
    for goal in goals:
        end = float(frame.across(min(max(goal.year, years.low), years.high)))
        y = float(frame.up(goal.bound))
        frame.line([0, end], [y, y], color=QUIET, linewidth=0.6, zorder=2.5)
        frame.line(
            [end],
            [y],
            marker=6 if goal.at_least else 7,  # carets whose tip lies on the bound
            markersize=frame.paper.marker * 1.5,
            markerfacecolor="white",
            markeredgecolor=INK,
            markeredgewidth=0.7,
            linestyle="none",
            zorder=6,
        )
