"""A plan as rows on a time line: what happens in which years. No Qt here."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from rescue_planner.case.document import Case
from rescue_planner.case.filled import best, steps
from rescue_planner.case.plans import Plan, Release
from rescue_planner.projection.reading import year_text
from rescue_planner.projection.results import Comparison

Kind = Literal["release", "steady", "action", "rule"]


@dataclass(frozen=True, slots=True)
class CalendarRow:
    """One row: events at `years`, or a `span` of years; `index` counts within its kind."""

    kind: Kind
    index: int
    name: str
    words: str
    years: tuple[float, ...] = ()
    span: tuple[float, float] | None = None


@dataclass(frozen=True, slots=True)
class Calendar:
    """The rows of one plan between two years; `generations` are the years at which each begins."""

    first: float
    last: float
    generations: tuple[float, ...]
    rows: tuple[CalendarRow, ...]


def calendar(case: Case, plan: Plan, comparison: Comparison | None = None) -> Calendar:
    """Return the calendar of a plan, with the rules that acted where they are known."""
    start, each = float(case.time.start_year.best), float(case.time.generation_years.best)
    end = start + float(case.time.horizon_years.best)
    count = steps(float(case.time.horizon_years.best), each)
    rows = [_release(i, release) for i, release in enumerate(plan.releases)]
    for i, steady in enumerate(plan.steady):
        first, last = best(steady.from_year, start), best(steady.to_year, end)
        rate = f"{float(steady.migrants_per_generation.best):g} newcomers per generation"
        words = f"{rate} from {steady.donor}, {year_text(first)} to {year_text(last)}"
        rows.append(CalendarRow("steady", i, steady.donor, words, span=(first, last)))
    for i, action in enumerate(plan.other_actions):
        first, last = float(action.year.best), best(action.until_year, end)
        words = f"{action.what}, {year_text(first)} to {year_text(last)}"
        rows.append(CalendarRow("action", i, action.what, words, span=(first, last)))
    rows.extend(_rules(plan, comparison))
    return Calendar(start, end, tuple(start + each * t for t in range(count + 1)), tuple(rows))


def _release(index: int, release: Release) -> CalendarRow:
    years = tuple(float(year) for year in release.years())
    females, males = float(release.who.females.best), float(release.who.males.best)
    when = year_text(years[0])
    if len(years) > 1:
        when += f" to {year_text(years[-1])}, {len(years)} times"
    words = f"Release {index + 1}: {females:g} + {males:g} from {release.donor}, {when}"
    name = f"{females:g}♀ {males:g}♂ {release.donor}"
    return CalendarRow("release", index, name, words, years=years)


def _rules(plan: Plan, comparison: Comparison | None) -> list[CalendarRow]:
    if comparison is None:
        return []
    rows = []
    for i, rule in enumerate(plan.rules):
        acted = [e for e in comparison.events if e.plan == plan.name and e.rule == rule.name]
        if acted:
            words = " ".join(event.sentence for event in acted)
            years = tuple(event.year for event in acted)
            rows.append(CalendarRow("rule", i, rule.name, words, years=years))
    return rows
