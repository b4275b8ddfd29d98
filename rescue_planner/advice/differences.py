"""Differences plan against plan: one less the other, over time and at the horizon."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.advice.reasons import signed
from rescue_planner.case.measures import title
from rescue_planner.projection import reading
from rescue_planner.projection.results import Comparison
from rescue_planner.projection.value_table import ValueTable, wrapped

FloatArray = NDArray[np.float64]
NAME, NARROW = 24, 13  # letters in a line of a cell
COLUMNS = 5  # years that a table shows


@dataclass(frozen=True, slots=True, eq=False)
class Difference:
    """`one` less `other` on a measure, as shown; `years` and `values` are (n,), n at most G + 1.

    The values end where either population is gone, unless the measure goes on without animals.
    """

    one: str
    other: str
    key: str
    years: FloatArray
    values: FloatArray


def difference(comparison: Comparison, one: str, other: str, key: str) -> Difference | None:
    """Return `one` less `other` over time, or nothing where either was not computed."""
    mine, theirs = (reading.curve(comparison, plan, key) for plan in (one, other))
    if mine is None or theirs is None:
        return None
    n = min(mine.values.size, theirs.values.size)
    return Difference(one, other, key, mine.years[:n], mine.values[:n] - theirs.values[:n])


def difference_unit(comparison: Comparison, key: str) -> str:
    """Return the unit of a difference: percentage points where the measure is a percentage."""
    unit = comparison.unit(key)
    return f"percentage points ({unit})" if unit.startswith("%") else unit


def steps_shown(comparison: Comparison) -> tuple[int, ...]:
    """Return the t that a table shows: about evenly spread after the start, the horizon last."""
    last = int(comparison.years.size) - 1
    return tuple(sorted({round(last * k / COLUMNS) for k in range(1, COLUMNS + 1)} - {0})) or (0,)


def difference_table(
    comparison: Comparison, one: str, other: str, keys: Sequence[str]
) -> ValueTable:
    """Return both plans at the horizon and their differences over time; a row a measure.

    With `one` and `other` swapped, every difference has the other sign.
    """
    at = steps_shown(comparison)
    letters = [reading.letter(comparison, plan) for plan in (one, other)]
    end = reading.year_text(float(comparison.years[at[-1]]))
    heads = [
        *(f"{mark} {plan}\n{end}" for mark, plan in zip(letters, (one, other), strict=True)),
        *(
            f"{letters[0]} − {letters[1]}\n{reading.year_text(float(comparison.years[t]))}"
            for t in at
        ),
    ]
    rows = tuple(_row(comparison, (one, other), key, at) for key in keys)
    words: tuple[str, ...] = (
        f"{letters[0]} − {letters[1]}: the value of {letters[0]} {one} less that of {letters[1]} "
        f"{other}, in the unit of the measure; percentages differ by percentage points.",
    )
    if any(cell == "gone" for row in rows for cell in row):
        words += ("Gone: under one of the two plans fewer than one adult is left by then.",)
    header = ("Measure, unit", *(wrapped(head, NARROW) for head in heads))
    return ValueTable(header, 1, rows, words)


def _row(
    comparison: Comparison, pair: tuple[str, str], key: str, at: Sequence[int]
) -> tuple[str, ...]:
    places = reading.column_places(comparison, key, pair)
    found = difference(comparison, *pair, key)
    cells = ["–"] * len(at)
    if found is not None:
        cells = [
            signed(float(found.values[t]), places) if t < found.values.size else "gone" for t in at
        ]
    ends = (_end(comparison, plan, key, at[-1], places) for plan in pair)
    return (wrapped(f"{title(key)},\n{comparison.unit(key)}", NAME), *ends, *cells)


def _end(comparison: Comparison, plan: str, key: str, t: int, places: int) -> str:
    line = reading.curve(comparison, plan, key)
    if line is None:
        return "–"
    return reading.shown(key, float(line.values[t]), places) if t < line.values.size else "gone"
