"""Where the words of a target stand: beside its mark, where the fewest lines run."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from rescue_planner.annex.curves import Curve, Goal
from rescue_planner.annex.labels import wrapped
from rescue_planner.annex.panel import crossings
from rescue_planner.annex.sheet import INK, Sheet, text_width

if TYPE_CHECKING:
    from matplotlib.axes import Axes

Box = tuple[float, float, float, float]


@dataclass(frozen=True, slots=True)
class _Place:
    """A place for words: box in data coordinates, and how the text is anchored there."""

    box: Box
    x: float
    y: float
    across: str
    up: str


def write_goals(axes: Axes, goals: Sequence[Goal], lines: Sequence[Curve], sheet: Sheet) -> None:
    """Write the words of every target where they cover the fewest lines and no other words."""
    taken: list[Box] = []
    for goal in goals:
        room = 0.8 * (sheet.width - sheet.left - sheet.right)
        rows = wrapped(goal.words, room, lambda text: text_width(text, sheet.text), 3)
        wide = max(text_width(row, sheet.text) for row in rows)
        places = _places(axes, goal, (wide, len(rows) * sheet.line_height), sheet)
        place = min(places, key=lambda one: _cost(one.box, lines, taken, axes))
        taken.append(place.box)
        axes.text(
            place.x,
            place.y,
            "\n".join(rows),
            fontsize=sheet.text,
            color=INK,
            ha=place.across,
            va=place.up,
            linespacing=1.2,
            zorder=7,
            bbox={"facecolor": "white", "alpha": 0.8, "edgecolor": "none", "pad": 0.8},
        )


def _places(axes: Axes, goal: Goal, size: tuple[float, float], sheet: Sheet) -> list[_Place]:
    first, last = axes.get_xlim()
    low, high = axes.get_ylim()
    per_mm_x = (last - first) / (sheet.width - sheet.left - sheet.right)
    per_mm_y = (high - low) / (sheet.height - sheet.bottom - sheet.top)
    wide, tall = size[0] * per_mm_x, size[1] * per_mm_y
    gap_x, gap_y = 2.0 * per_mm_x, 1.2 * per_mm_y
    year = min(max(goal.year, first), last)
    found = []
    for up, y in (("bottom", goal.bound + gap_y), ("top", goal.bound - gap_y)):
        bottom = y if up == "bottom" else y - tall
        for across, x in (("right", year - gap_x), ("left", first + gap_x)):
            left = x - wide if across == "right" else x
            found.append(_Place((left, left + wide, bottom, bottom + tall), x, y, across, up))
    return found


def _cost(box: Box, lines: Sequence[Curve], taken: Sequence[Box], axes: Axes) -> float:
    left, right, low, high = box
    first, last = axes.get_xlim()
    bottom, top = axes.get_ylim()
    outside = left < first or right > last or low < bottom or high > top
    over = sum(
        left < other[1] and other[0] < right and low < other[3] and other[2] < high
        for other in taken
    )
    return crossings(lines, box) + 500.0 * over + 1000.0 * outside
