"""What a figure draws, as numbers: no drawing library here, so that tests can check it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.annex.numerals import given, scale_of
from rescue_planner.annex.wording import one_line
from rescue_planner.case.document import Case
from rescue_planner.case.measures import measure_of
from rescue_planner.projection.marks import PlanMark, mark
from rescue_planner.projection.reading import GO_ON_WHEN_GONE, length, target_marks
from rescue_planner.projection.results import Comparison

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Band:
    """Quantiles around a line, in printed units; `wide` is 5 to 95 %, `narrow` 25 to 75 %."""

    wide: tuple[FloatArray, FloatArray] | None
    narrow: tuple[FloatArray, FloatArray] | None


@dataclass(frozen=True, slots=True, eq=False)
class Curve:
    """One plan's line: years (n,), values (n,) in printed units, cut where the line ends."""

    plan: str
    mark: PlanMark
    depth: str
    statistic: str
    years: FloatArray
    values: FloatArray
    band: Band
    gone: float | None


@dataclass(frozen=True, slots=True)
class Goal:
    """A target's mark: bound in printed units at a year, and who set it."""

    number: int
    at_least: bool
    bound: float
    year: float
    words: str


def curves(comparison: Comparison, measure: str) -> tuple[Curve, ...]:
    """Return the lines of one measure in the order of the plans."""
    found = (_curve(comparison, index, measure) for index in range(len(comparison.plans)))
    return tuple(one for one in found if one is not None)


def ends_with_the_last_animal(measure: str) -> bool:
    """Return whether a measure has no meaning once the population is gone."""
    return measure_of(measure).key not in GO_ON_WHEN_GONE


def _curve(comparison: Comparison, index: int, measure: str) -> Curve | None:
    plan = comparison.plans[index]
    series = comparison.best(plan, measure)
    if series is None:
        return None
    end = comparison.gone_after(plan)
    stop = max(length(comparison, plan, measure), 1)  # one point is left to mark the end at
    factor = scale_of(measure)
    pairs = []
    for low, high in (("q05", "q95"), ("q25", "q75")):
        below = comparison.get(plan, series.depth, measure, low)
        above = comparison.get(plan, series.depth, measure, high)
        pairs.append(
            None
            if below is None or above is None
            else (below.values[:stop] * factor, above.values[:stop] * factor)
        )
    return Curve(
        plan=plan,
        mark=mark(comparison.marks[index]),
        depth=series.depth,
        statistic=series.statistic,
        years=comparison.years[:stop],
        values=series.values[:stop] * factor,
        band=Band(*pairs),
        gone=None if end is None else float(comparison.years[end]),
    )


def goals(case: Case, measure: str) -> tuple[Goal, ...]:
    """Return the targets on one measure, one mark for each bound."""
    sign = " %" if scale_of(measure) != 1.0 else ""
    found = []
    for mark_of in target_marks(case, measure):
        owner = case.targets[mark_of.number - 1].owner
        word = "at least" if mark_of.at_least else "at most"
        words = f"Target {mark_of.number}: {word} {given(mark_of.value)}{sign}"
        words += f", {one_line(owner)}" if owner else ""
        found.append(Goal(mark_of.number, mark_of.at_least, mark_of.value, mark_of.year, words))
    return tuple(found)
