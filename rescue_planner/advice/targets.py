"""Target checks: what each plan gives for each target, at each depth that has the measure."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from rescue_planner.case.document import Case, Target
from rescue_planner.case.measures import measure_of, title
from rescue_planner.projection.results import Comparison, Series
from rescue_planner.projection.table import shortest, written

COLUMNS = (
    "target",
    "measure",
    "at_least",
    "at_most",
    "by_year",
    "plan",
    "depth",
    "year",
    "value",
    "met",
    "runs",
    "share",
    "low",
    "high",
)


@dataclass(frozen=True, slots=True)
class TargetCheck:
    """One target checked for one plan at one depth.

    `target` counts from 1 in the order of the case; `year` is the year of the last step reached
    by `by_year`, where `value` was read. `runs`, `share`, `low` and `high` (how many runs, which
    share of them met it, and its 95 % interval) are there only where there are replicates;
    `met` only where there are none.
    """

    target: int
    measure: str
    at_least: float | None
    at_most: float | None
    by_year: float
    plan: str
    depth: str
    year: float
    value: float
    met: bool | None
    runs: int | None = None
    share: float | None = None
    low: float | None = None
    high: float | None = None


def target_checks(case: Case, comparison: Comparison) -> tuple[TargetCheck, ...]:
    """Check every target of `case` in the order of targets, plans and depths.

    Parameters
    ----------
    case : Case
        Holds the targets.
    comparison : Comparison
        The projected plans of that case.

    Returns
    -------
    tuple of TargetCheck
        None for a target whose measure no depth computed; `not_checked` names those.
    """
    return tuple(
        _check(number, target, comparison, series)
        for number, target in enumerate(case.targets, start=1)
        for plan in comparison.plans
        for series in _read(comparison, plan, target.measure)
    )


def _read(comparison: Comparison, plan: str, measure: str) -> Iterator[Series]:
    """Yield the series that a target is read from: a share where there is one, else the mean."""
    for depth in comparison.depths:
        found = comparison.get(plan, depth, measure, "share") or comparison.get(
            plan, depth, measure, "mean"
        )
        if found is not None:
            yield found


def _check(number: int, target: Target, comparison: Comparison, series: Series) -> TargetCheck:
    t = comparison.index_at(float(target.by_year.best))
    value = float(series.values[t])
    at_least = None if target.at_least is None else float(target.at_least.best)
    at_most = None if target.at_most is None else float(target.at_most.best)
    met = (at_least is None or value >= at_least) and (at_most is None or value <= at_most)
    return TargetCheck(
        target=number,
        measure=target.measure,
        at_least=at_least,
        at_most=at_most,
        by_year=float(target.by_year.best),
        plan=series.plan,
        depth=series.depth,
        year=float(comparison.years[t]),
        value=value,
        met=met and value == value,  # no number meets nothing
    )


def target_checks_csv(checks: tuple[TargetCheck, ...]) -> str:
    """Return the checks as the text of target_checks.csv."""
    return written(COLUMNS, (_row(check) for check in checks))


def _row(check: TargetCheck) -> tuple[str, ...]:
    met = {None: "", True: "yes", False: "no"}[check.met]
    numbers = (check.at_least, check.at_most, check.by_year)
    return (
        str(check.target),
        check.measure,
        *(_number(number) for number in numbers),
        check.plan,
        check.depth,
        shortest(check.year),
        shortest(check.value),
        met,
        "" if check.runs is None else str(check.runs),
        *(_number(number) for number in (check.share, check.low, check.high)),
    )


def _number(value: float | None) -> str:
    return "" if value is None else shortest(value)


def not_checked(case: Case, comparison: Comparison) -> tuple[str, ...]:
    """Return one sentence for each target whose measure no depth computed."""
    return tuple(
        _sentence(number, target, comparison)
        for number, target in enumerate(case.targets, start=1)
        if not any(any(_read(comparison, plan, target.measure)) for plan in comparison.plans)
    )


def _sentence(number: int, target: Target, comparison: Comparison) -> str:
    try:
        measure_of(target.measure)
    except KeyError:
        return f"Target {number} was not checked: “{target.measure}” is not a measure."
    name = title(target.measure)
    by = f"{target.by_year.best:g}"
    reason = "it needs simulated animals"
    if "simulated" in comparison.depths or _has_formula(target.measure):
        reason = "the case lacks the inputs it needs, or the depth was not asked for"
    return f"Target {number} ({name} by {by}) was not checked: no depth computed it; {reason}."


_ONLY_SIMULATED = frozenset(
    {
        "young",
        "observed_heterozygosity",
        "kinship",
        "rare_alleles_kept",
        "persists",
        "load",
        "realised_effective_size",
        "donor_adults",
    }
)


def _has_formula(key: str) -> bool:
    return measure_of(key).key not in _ONLY_SIMULATED
