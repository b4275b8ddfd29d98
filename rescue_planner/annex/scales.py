"""Limits and ticks of the axes, as numbers and texts."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from rescue_planner.annex.curves import Curve, Goal
from rescue_planner.case.measures import measure_of
from rescue_planner.projection.placing import tick_texts, ticks


@dataclass(frozen=True, slots=True)
class Scale:
    """Limits of one axis, with its ticks and their texts."""

    low: float
    high: float
    ticks: tuple[float, ...]
    texts: tuple[str, ...]


def values_scale(
    measure: str, lines: Sequence[Curve], goals: Sequence[Goal], most: int = 5
) -> Scale:
    """Return the scale of the values: all lines, bands and targets in it, with a little room.

    It begins at 0 where the lowest value is not far from it; a flat line gets a span of 2 per
    cent points, or of a twentieth of its value, so that rounding is not blown up into a trend.
    """
    held = [line.values for line in lines]
    held += [q for line in lines for pair in (line.band.wide,) if pair for q in pair]
    values = np.concatenate([*held, [goal.bound for goal in goals]])
    values = values[np.isfinite(values)]
    low, high = (float(values.min()), float(values.max())) if values.size else (0.0, 1.0)
    if low == high == 0.0:  # nothing ever: an axis from 0 up, whatever the unit
        return Scale(0.0, 1.05, (0.0, 1.0), ("0", "1"))
    share = measure_of(measure).kind == "share"
    if low >= 0 and low < 0.4 * high:
        low = 0.0
    least = 2.0 if share else max(0.05 * abs(high), 0.02)
    if high - low < least:
        low, high = high - least, high + 0.1 * least
        if share and high <= 101.0:
            high = min(high, 100.0 + 0.1 * least)
    room = 0.05 * (high - low)
    below = 0.0 if low == 0.0 else low - room
    at = ticks(below, high + room, most)
    return Scale(below, high + room, at, tick_texts(at))


def years_scale(first: float, last: float, most: int) -> Scale:
    """Return the scale of the years."""
    at = ticks(first, last, most, whole=True)
    return Scale(first, last, at, tuple(f"{year:.0f}" for year in at))


def generations_scale(first: float, last: float, length: float, most: int) -> Scale:
    """Return the scale of the generations, its ticks at their years."""
    count = ticks(0.0, (last - first) / length, most, whole=True)
    return Scale(
        first, last, tuple(first + length * g for g in count), tuple(f"{g:.0f}" for g in count)
    )
