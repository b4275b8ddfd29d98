"""Where the words of a target stand: beside its mark, where the fewest lines run."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from rescue_planner.annex.curves import Curve, Goal
from rescue_planner.annex.frame import Frame
from rescue_planner.annex.labels import wrapped
from rescue_planner.annex.sheet import text_width

# Left, right, low, high in millimetres from the plot's lower left corner.
Box = tuple[float, float, float, float]
_GAP_X, _GAP_Y = 2.2, 0.9


@dataclass(frozen=True, slots=True)
class _Place:
    """A place for words: its box, and on which side of the bound it lies."""

    box: Box
    above: bool


def write_goals(frame: Frame, goals: Sequence[Goal], lines: Sequence[Curve]) -> None:
    """Write the words of every target where they cover the fewest lines and no other words."""
    taken: list[Box] = []
    size = frame.paper.text
    for goal in goals:
        rows = wrapped(goal.words, 0.85 * frame.wide, lambda text: text_width(text, size), 3)
        wide = max(text_width(row, size) for row in rows)
        places = _places(frame, goal, wide, len(rows) * frame.paper.line_height)
        place = min(places, key=lambda one: _cost(frame, one.box, lines, taken))
        taken.append(place.box)
        left, _, low, high = place.box
        frame.text(
            left,
            low if place.above else high,
            "\n".join(rows),
            ha="left",
            va="bottom" if place.above else "top",
            linespacing=1.2,
            zorder=7,
            bbox={"facecolor": "white", "alpha": 0.8, "edgecolor": "none", "pad": 0.6},
        )


def _places(frame: Frame, goal: Goal, wide: float, tall: float) -> Iterator[_Place]:
    years = frame.scales.years
    end = float(frame.across(min(max(goal.year, years.low), years.high)))
    bound = float(frame.up(goal.bound))
    last = max(min(end - _GAP_X, frame.wide) - wide, _GAP_X)
    for above in (True, False):
        low = bound + _GAP_Y if above else bound - _GAP_Y - tall
        for share in (1.0, 0.75, 0.5, 0.25, 0.0):
            left = _GAP_X + share * (last - _GAP_X)
            yield _Place((left, left + wide, low, low + tall), above)


def _cost(frame: Frame, box: Box, lines: Sequence[Curve], taken: Sequence[Box]) -> float:
    left, right, low, high = box
    outside = left < 0 or right > frame.wide or low < 0 or high > frame.tall
    over = sum(
        left < other[1] and other[0] < right and low < other[3] and other[2] < high
        for other in taken
    )
    return crossings(frame, lines, box) + 500.0 * over + 1000.0 * outside


def crossings(frame: Frame, lines: Sequence[Curve], box: Box) -> int:
    """Return how many points of the lines, drawn densely, lie in a box."""
    left, right, low, high = box
    at = np.linspace(left, right, 60)
    total = 0
    for line in lines:
        x = frame.across(line.years)
        inside = at[(at >= x[0]) & (at <= x[-1])]
        y = np.interp(inside, x, frame.up(line.values))
        total += int(((y >= low) & (y <= high)).sum())
    return total
