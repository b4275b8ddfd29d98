"""Each plan in the words of a permit: who is released, from where, when; rules; other actions."""

from __future__ import annotations

from collections.abc import Iterator

from rescue_planner.annex.blocks import Table
from rescue_planner.annex.numerals import decimal, given, scale_of, year_text
from rescue_planner.annex.wording import listed, one_line
from rescue_planner.case.document import Case
from rescue_planner.case.measures import title, unit
from rescue_planner.case.plans import OtherAction, Plan, Release, Rule, RuleRelease, Steady
from rescue_planner.case.quantity import Quantity

_HEAD = (
    "Year",
    "Donor",
    "Females (animals)",
    "Males (animals)",
    "Age (years)",
    "Survive to breed (%)",
    "Breeding (times residents’)",
)


def schedule_table(case: Case, plan: Plan, label: str) -> Table | None:
    """Return a plan's releases and steady flow by year, or nothing where it has none."""
    dated = [row for release in plan.releases for row in _release_rows(case, release)]
    dated += [_steady_row(case, steady) for steady in plan.steady]
    if not dated:
        return None
    dated.sort(key=lambda row: row[0])
    currency = case.currency or "currency not named"
    return Table(
        caption=f"Schedule of plan {label}",
        head=(*_HEAD, f"Cost ({currency})"),
        rows=tuple(row for _, row in dated),
        numbers=frozenset({2, 3, 4, 5, 6, 7}),
    )


Dated = tuple[float, tuple[str, ...]]


def _release_rows(case: Case, release: Release) -> Iterator[Dated]:
    animals = float(release.who.females.best) + float(release.who.males.best)
    money = animals * float(release.cost.each_animal.best) + float(release.cost.each_event.best)
    loan = "" if release.loan_years is None else f" (loan, {given(release.loan_years.best)} years)"
    for year in release.years():
        yield (
            year,
            (
                str(year),
                one_line(release.donor) + loan,
                given(release.who.females.best),
                given(release.who.males.best),
                "not stated" if release.who.age is None else given(release.who.age.best),
                decimal(100 * float(release.afterwards.survive_to_breed.best), 0),
                given(release.afterwards.breeding_relative_to_residents.best),
                decimal(money, 0),
            ),
        )


def _steady_row(case: Case, steady: Steady) -> Dated:
    start = case.time.start_year.best if steady.from_year is None else steady.from_year.best
    end = "on" if steady.to_year is None else year_text(float(steady.to_year.best))
    rate = float(steady.migrants_per_generation.best) / 2
    half = f"{given(rate)} that breed, per generation"
    joined = "–" if steady.to_year is not None else " "
    years = f"{year_text(float(start))}{joined}{end}"
    name = f"{one_line(steady.donor)} (steady flow)"
    return float(start), (years, name, half, half, "–", "–", "–", "–")


def rule_sentences(case: Case, plan: Plan) -> tuple[str, ...]:
    """Return each rule of a plan as a sentence."""
    return tuple(_rule(case, rule) for rule in plan.rules)


def _rule(case: Case, rule: Rule) -> str:
    bounds = [
        f"{word} {bound_text(case, rule.when, bound)}"
        for word, bound in (("above", rule.above), ("below", rule.below))
        if bound is not None
    ]
    name = _title(rule.when)
    surveys = _surveys(case, rule)
    delay = float(rule.delay_years.best)
    late = f" {given(delay)} year{_plural(rule.delay_years)} later" if delay else ""
    if rule.then == "stop" or rule.release is None:
        done = f"releases and steady flow stop for good{late}"
    else:
        done = (
            f"{_animals(rule.release)} from {one_line(rule.release.donor)} are released{late}, "
            f"at most {given(rule.at_most.best)} time{_plural(rule.at_most)}"
        )
    return (
        f"{one_line(rule.name)}: where {name} is {' and '.join(bounds) or 'anything'}"
        f"{surveys}, {done}."
    )


def _surveys(case: Case, rule: Rule) -> str:
    years = rule.survey_every_years.best
    every = "yearly" if years == 1 else f"one every {given(years)} years"
    row = rule.surveys.best
    found = f" in {given(row)} surveys in a row ({every}" if row != 1 else f" in a survey ({every}"
    if not rule.survey_sd.best:
        return f"{found})"
    return f"{found}, survey error SD {bound_text(case, rule.when, rule.survey_sd)})"


def _title(measure: str) -> str:
    try:
        return f"“{one_line(title(measure))}”"
    except KeyError:
        return f"“{one_line(measure)}”"


def bound_text(case: Case, measure: str, bound: Quantity) -> str:
    """Return a bound on a measure with its unit, in printed units."""
    try:
        factor, words = scale_of(measure), unit(measure, case.currency)
    except KeyError:
        return given(bound.best)
    return f"{given(round(float(bound.best) * factor, 10))} {words}"


def _animals(release: RuleRelease) -> str:
    counts = [
        f"{given(count.best)} {one if count.best == 1 else many}"
        for count, one, many in (
            (release.who.females, "female", "females"),
            (release.who.males, "male", "males"),
        )
        if count.best
    ]
    age = "" if release.who.age is None else f" of age {given(release.who.age.best)}"
    return (" and ".join(counts) or "no animals") + age


def _plural(count: Quantity) -> str:
    return "" if count.best == 1 else "s"


def action_sentences(case: Case, plan: Plan) -> tuple[str, ...]:
    """Return each other action of a plan as a sentence."""
    return tuple(_action(case, action) for action in plan.other_actions)


def _action(case: Case, action: OtherAction) -> str:
    until = "on" if action.until_year is None else f"to {year_text(float(action.until_year.best))}"
    effects = [
        f"{name} × {given(factor.best)}"
        for name, factor in (
            ("carrying capacity", action.carrying_capacity_times),
            ("first-year survival", action.first_year_survival_times),
        )
        if factor.best != 1
    ]
    if action.cost.best:
        effects.append(f"cost {given(action.cost.best)} {case.currency or 'currency not named'}")
    what = f" ({listed(effects)})" if effects else ""
    return f"From {year_text(float(action.year.best))} {until}: {one_line(action.what)}{what}."
