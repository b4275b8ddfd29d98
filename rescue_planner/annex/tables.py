"""The tables of the annex: plans compared, and target checks."""

from __future__ import annotations

from collections.abc import Sequence

from rescue_planner.advice.targets import TargetCheck
from rescue_planner.annex.blocks import Table
from rescue_planner.annex.curves import ends_with_the_last_animal
from rescue_planner.annex.numerals import decimal, given, value_text, year_text
from rescue_planner.annex.schedule import bound_text
from rescue_planner.annex.wording import axis_title, listed, one_line, plan_label
from rescue_planner.case.document import Case, Target
from rescue_planner.case.measures import title
from rescue_planner.projection.reading import column_places
from rescue_planner.projection.results import DEPTH_NAMES, Comparison

# Generations from the start at which the plans are compared, besides the horizon.
GENERATIONS = (0, 1, 2, 3, 5, 10)
GONE = "gone"
NO_DEPTH = "–"


def horizon_table(comparison: Comparison, measures: Sequence[str]) -> Table:
    """Return every measure at the horizon, a column for each plan."""
    last = comparison.years.size - 1
    depths = {key: _depth_of(comparison, key) for key in measures}
    names = listed(sorted(set(depths.values()) - {NO_DEPTH}))
    several = len(set(depths.values())) > 1
    when = f"{year_text(float(comparison.years[last]))} (generation {last})"
    return Table(
        caption=f"Plans at the horizon, {when}; depth: {names}",
        head=("Measure (unit)", *(("Depth",) if several else ()), "Today", *_heads(comparison)),
        rows=tuple(
            (axis_title(comparison, key), *((depths[key],) if several else ()), *cells)
            for key, cells in ((key, _horizon_cells(comparison, key, last)) for key in measures)
        ),
        numbers=frozenset(range(1 + several, 2 + several + len(comparison.plans))),
    )


def _depth_of(comparison: Comparison, key: str) -> str:
    found = (comparison.best(plan, key) for plan in comparison.plans)
    return next((DEPTH_NAMES[one.depth] for one in found if one is not None), NO_DEPTH)


def _heads(comparison: Comparison) -> tuple[str, ...]:
    return tuple(plan_label(comparison, plan) for plan in comparison.plans)


def _horizon_cells(comparison: Comparison, key: str, last: int) -> tuple[str, ...]:
    series = [comparison.best(plan, key) for plan in comparison.plans]
    first = next((one for one in series if one is not None), None)
    digits = _digits(comparison, key, (0, last))
    start = "–" if first is None else value_text(key, float(first.values[0]), digits)
    return start, *(_cell(comparison, plan, key, last, digits) for plan in comparison.plans)


def _digits(comparison: Comparison, key: str, at: Sequence[int]) -> int:
    """Return the decimals that all values of a measure at these t share."""
    return column_places(comparison, key, comparison.plans, at)


def _cell(comparison: Comparison, plan: str, key: str, t: int, digits: int) -> str:
    """Return a value with its 5 to 95 % range where there is one; `gone` where none is left."""
    series = comparison.best(plan, key)
    if series is None:
        return "not computed"
    if _is_gone(comparison, plan, key, t):
        return GONE
    value = value_text(key, float(series.values[t]), digits)
    low, high = (comparison.get(plan, series.depth, key, q) for q in ("q05", "q95"))
    if low is None or high is None or t == 0:
        return value
    between = " to ".join(value_text(key, float(q.values[t]), digits) for q in (low, high))
    return f"{value} ({between})"


def _is_gone(comparison: Comparison, plan: str, key: str, t: int) -> bool:
    """Return whether a measure has no meaning any more because no animal is left."""
    end = comparison.gone_after(plan)
    return end is not None and t >= end and ends_with_the_last_animal(key)


def chosen_steps(comparison: Comparison) -> tuple[int, ...]:
    """Return the t at which plans are compared: the start, some generations, the horizon."""
    last = comparison.years.size - 1
    return (*(t for t in GENERATIONS if t < last), last)


def course_tables(comparison: Comparison, measures: Sequence[str]) -> tuple[Table, ...]:
    """Return a table for each measure: years down, plans across."""
    return tuple(_course_table(comparison, key) for key in measures)


def _course_table(comparison: Comparison, key: str) -> Table:
    rows, steps = [], chosen_steps(comparison)
    digits = _digits(comparison, key, steps)
    for t in steps:
        cells = (_cell(comparison, plan, key, t, digits) for plan in comparison.plans)
        rows.append((year_text(float(comparison.years[t])), str(t), *cells))
    return Table(
        caption=f"{axis_title(comparison, key)}",
        head=("Year", "Generation", *_heads(comparison)),
        rows=tuple(rows),
        numbers=frozenset(range(1, 2 + len(comparison.plans))),
    )


def target_table(case: Case, comparison: Comparison, checks: Sequence[TargetCheck]) -> Table | None:
    """Return every target check as a row, or nothing where there is none."""
    if not checks:
        return None
    return Table(
        caption="Target checks, plan by plan",
        head=("Target", "Owner", "Plan", "Depth", "Year read", "Value (target’s unit)", "Met"),
        rows=tuple(
            (
                target_words(case, check.target, case.targets[check.target - 1]),
                one_line(case.targets[check.target - 1].owner or "not stated"),
                plan_label(comparison, check.plan),
                DEPTH_NAMES[check.depth],
                year_text(check.year),
                *_value_and_met(comparison, check),
            )
            for check in checks
        ),
        numbers=frozenset({4, 5}),
    )


def _value_and_met(comparison: Comparison, check: TargetCheck) -> tuple[str, str]:
    """Return the value read and whether it meets the target; no verdict on a lost population."""
    t = comparison.index_at(check.year)
    if check.runs is None and _is_gone(comparison, check.plan, check.measure, t):
        return GONE, "no animals left"
    return value_text(check.measure, check.value), _met(check)


def _met(check: TargetCheck) -> str:
    if check.runs is None or check.share is None:
        return {True: "yes", False: "no", None: "–"}[check.met]
    interval = ""
    if check.low is not None and check.high is not None:
        interval = f" ({decimal(100 * check.low, 1)} to {decimal(100 * check.high, 1)} %)"
    met = round(check.share * check.runs)
    return f"{met} of {check.runs} runs, {decimal(100 * check.share, 1)} %{interval}"


def target_words(case: Case, number: int, target: Target) -> str:
    """Return a target as words, such as `1: Donor ancestry at most 30 % of gene copies by 2086`."""
    bounds = [
        f"{word} {bound_text(case, target.measure, bound)}"
        for word, bound in (("at least", target.at_least), ("at most", target.at_most))
        if bound is not None
    ]
    try:
        name = one_line(title(target.measure))
    except KeyError:
        name = one_line(target.measure)
    return f"{number}: {name} {' and '.join(bounds)} by {given(target.by_year.best)}"
