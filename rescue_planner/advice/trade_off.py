"""What is paid for what: plans as points on two measures, a third as the area of the point.

The points are the cells of a consequence table, so chart and table cannot differ.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from rescue_planner.advice.consequences import DIRECTION_WORDS, Consequence, Consequences
from rescue_planner.case.measures import title
from rescue_planner.projection import reading
from rescue_planner.projection.placing import round_range
from rescue_planner.projection.results import Comparison


@dataclass(frozen=True, slots=True)
class TradePoint:
    """One plan on two measures, as shown; `area` is its share of the largest area, 0 to 1.

    `area` is nothing where no third measure was asked for, or where it cannot be an area.
    """

    plan: str
    x: float
    y: float
    area: float | None = None


def trade_points(
    table: Consequences, x: str, y: str, size: str | None = None
) -> tuple[TradePoint, ...]:
    """Return the plans that have a value on both measures, in their order.

    Raises
    ------
    ValueError
        For a measure that is not in the table.
    """
    areas = _areas(table, size)
    found = []
    for plan, area in zip(table.plans, areas, strict=True):
        across, up = table.cell(plan, x), table.cell(plan, y)
        if _has_value(across) and _has_value(up):
            found.append(TradePoint(plan, across.value, up.value, area))
    return tuple(found)


def _has_value(cell: Consequence) -> bool:
    return not cell.gone and math.isfinite(cell.value)


def _areas(table: Consequences, size: str | None) -> list[float | None]:
    none: list[float | None] = [None] * len(table.plans)
    if size is None or not sizeable(table, size):
        return none
    values = [table.cell(plan, size) for plan in table.plans]
    largest = max(cell.value for cell in values if _has_value(cell))
    return [cell.value / largest if _has_value(cell) else None for cell in values]


def sizeable(table: Consequences, key: str) -> bool:
    """Return whether a measure can be an area: no plan below 0, at least one above."""
    values = [cell.value for plan in table.plans if _has_value(cell := table.cell(plan, key))]
    return bool(values) and min(values) >= 0.0 and max(values) > 0.0


def trade_range(values: Sequence[float]) -> tuple[float, float]:
    """Return the round range of an axis that holds these values, with room at both ends."""
    low, high = min(values), max(values)
    room = 0.08 * (high - low)
    below = low if low == 0.0 else low - room  # counts and shares begin at 0, not below
    return round_range(0.0 if low > 0.0 > below else below, high + room)


def axis_title(comparison: Comparison, table: Consequences, key: str) -> str:
    """Return a measure's name, unit, and which way is better."""
    way = DIRECTION_WORDS[table.directions[table.keys.index(key)]]
    return f"{title(key)}, {comparison.unit(key)} ({way})"


def trade_caption(
    comparison: Comparison, table: Consequences, x: str, y: str, size: str | None = None
) -> str:
    """Return what the chart shows, in one line: case, measures, year, area."""
    words = f"{title(y)} against {title(x)} in {reading.year_text(table.year)}"
    if size is not None and sizeable(table, size):
        words += f"; area of a mark: {title(size)}, {comparison.unit(size)}"
    return f"{comparison.title}: {words}"


def trade_words(
    comparison: Comparison, table: Consequences, x: str, y: str, size: str | None = None
) -> tuple[str, ...]:
    """Return the chart in sentences: its axes, each point, and plans that have none."""
    points = trade_points(table, x, y, size)
    said = [
        f"In {reading.year_text(table.year)}. Across: {axis_title(comparison, table, x)}. "
        f"Up: {axis_title(comparison, table, y)}."
    ]
    if size is not None:
        name = f"{title(size)}, {comparison.unit(size)}"
        said.append(
            f"Area of a mark: {name}; 0 is a dot."
            if sizeable(table, size)
            else f"All marks are alike: {name} has values below 0, or none above."
        )
    keys = [x, y] if size is None else [x, y, size]
    said += [
        f"{_named(comparison, point.plan)}: {_values(comparison, table, point, keys)}."
        for point in points
    ]
    left = [plan for plan in table.plans if plan not in {point.plan for point in points}]
    said += [
        f"{_named(comparison, plan)} has no point: a value is missing, or the population is gone."
        for plan in left
    ]
    return tuple(said)


def _named(comparison: Comparison, plan: str) -> str:
    return f"{reading.letter(comparison, plan)} {plan}"


def _values(
    comparison: Comparison, table: Consequences, point: TradePoint, keys: Sequence[str]
) -> str:
    parts = []
    for key in keys:
        places = table.places[table.keys.index(key)]
        value = reading.shown(key, table.cell(point.plan, key).value, places)
        parts.append(f"{title(key)} {value} {comparison.unit(key)}")
    return "; ".join(parts)
