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
from rescue_planner.projection.results import Comparison

FloatArray = NDArray[np.float64]

# What still has a meaning once no animal is left; every other line ends there.
_AFTER_THE_END = frozenset(
    {"adults", "young", "persists", "released", "effective_migrants", "cost", "donor_adults"}
)


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
    return measure_of(measure).key not in _AFTER_THE_END


def _curve(comparison: Comparison, index: int, measure: str) -> Curve | None:
    plan = comparison.plans[index]
    series = comparison.best(plan, measure)
    if series is None:
        return None
    end = comparison.gone_after(plan)
    stop = comparison.years.size
    if end is not None and ends_with_the_last_animal(measure):
        stop = max(end, 1)
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
    found = []
    factor = scale_of(measure)
    sign = " %" if factor != 1.0 else ""
    for number, target in enumerate(case.targets, start=1):
        if target.measure != measure:
            continue
        year = float(target.by_year.best)
        owner = f", {one_line(target.owner)}" if target.owner else ""
        for word, bound in (("at least", target.at_least), ("at most", target.at_most)):
            if bound is not None:
                value = round(float(bound.best) * factor, 10)
                words = f"Target {number}: {word} {given(value)}{sign}{owner}"
                found.append(Goal(number, word == "at least", value, year, words))
    return tuple(found)
