"""Whether a plan can be carried out: what cannot be, in the plan's own words, and how to mend it.

A case never holds a plan whose calendar alone takes more from a donor in a year than is allowed:
such an edit is refused. Here is what needs more than one place of the case to be seen.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from rescue_planner.case.document import Case
from rescue_planner.case.filled import donor_life_cycle
from rescue_planner.case.noting.plans import on_plans
from rescue_planner.case.plans import Plan, RuleRelease
from rescue_planner.case.spoken import counted
from rescue_planner.projection.donor_take import DonorTake, donor_takes
from rescue_planner.projection.plan_reading import tidy
from rescue_planner.projection.reading import year_text
from rescue_planner.projection.results import Comparison

_NO_EFFECT = ("release-of-none", "release-too-late")
_NEAR = 1e-9
CHECKED = (
    "Nothing was found that cannot be done: donors’ limits and floors, ages and stop rules were "
    "looked at, closed seasons and permits were not."
)


@dataclass(frozen=True, slots=True)
class Finding:
    """One thing that cannot be done as planned: what, how to mend it, the number to change."""

    sentence: str
    mend: str
    path: str
    link: str  # what the link to that number says


def findings(case: Case, plan: str, comparison: Comparison | None = None) -> tuple[Finding, ...]:
    """Return what cannot be done in a plan.

    Stop rules are looked at where `comparison` holds the plan's average course.

    Raises
    ------
    KeyError
        When there is no such plan.
    """
    held = case.plan(plan)
    at = f"plans[{[one.name for one in case.plans].index(plan)}]"
    found = [*_floors(case, held, at), *_rules_beside_calendar(case, held, at)]
    found += [*_ranges(case, held, at), *_ages(case, held, at)]
    found += [*_stopped(held, at, comparison), *_no_effect(case, at)]
    return tuple(found)


def _from_donor(plan: Plan, at: str, donor: str) -> str:
    """Return the path of the count of the largest release from a donor."""
    mine = [i for i, release in enumerate(plan.releases) if release.donor == donor]
    largest = max(mine, key=lambda i: _animals(plan.releases[i]))
    who = plan.releases[largest].who
    sex = "females" if float(who.females.best) >= float(who.males.best) else "males"
    return f"{at}.releases[{largest}].who.{sex}"


def _animals(release: RuleRelease) -> float:
    return float(release.who.females.best) + float(release.who.males.best)


def _release_of(path: str) -> str:
    return f"Go to the animals of release {int(path.split('releases[')[1].split(']')[0]) + 1}"


def _floors(case: Case, plan: Plan, at: str) -> Iterator[Finding]:
    donors = {donor.name: donor for donor in case.donors}
    for take in donor_takes(case):
        floor = donors[take.donor].fewest_left
        if take.plan != plan.name or floor is None:
            continue
        fewest = float(floor.best)
        low = [(year, left) for year, left in _left(take).items() if left < fewest - _NEAR]
        if low:
            year, left = low[0]
            path = _from_donor(plan, at, take.donor)
            fewer = counted(float(math.ceil(fewest - left)), "animal")
            yield Finding(
                f"After the releases of {year}, {take.donor} would have about {left:.0f} adults "
                f"left, fewer than the {fewest:g} that must stay.",
                f"Take at least {fewer} fewer up to {year}, wait longer between "
                "releases, or take some from another donor.",
                path,
                _release_of(path),
            )


def _left(take: DonorTake) -> dict[int, float]:
    """Return the adults left by year; without a life cycle, each taking from today's adults."""
    if take.left:
        return dict(take.left)
    return {year: take.adults - animals for year, animals in sorted(take.taken.items())}


def _rules_beside_calendar(case: Case, plan: Plan, at: str) -> Iterator[Finding]:
    """Find rules whose release would pass a donor's yearly limit beside one of the calendar."""
    limits = {
        donor.name: float(donor.most_removed_per_year.best)
        for donor in case.donors
        if donor.most_removed_per_year is not None
    }
    for i, rule in enumerate(plan.rules):
        release = rule.release
        if release is None or release.donor not in limits or not _animals(release):
            continue
        taken = _by_year(plan, release.donor)
        most = max(taken.values(), default=0.0)
        if most and most + _animals(release) > limits[release.donor] + _NEAR:
            year = min(year for year, animals in taken.items() if animals == most)
            path = f"{at}.rules[{i}].release.who.females"
            yield Finding(
                f"If the rule “{rule.name}” acts in a year with a planned release, such as {year}, "
                f"{tidy(most)} + {tidy(_animals(release))} = "
                f"{tidy(most + _animals(release))} animals would be taken from {release.donor}, "
                f"which gives up to {limits[release.donor]:g} a year.",
                "Let the rule release fewer, or give it a delay into a year without a release.",
                path,
                f"Go to the animals of the rule “{rule.name}”",
            )


def _by_year(plan: Plan, donor: str) -> dict[int, float]:
    taken: dict[int, float] = {}
    for release in plan.releases:
        if release.donor == donor:
            for year in release.years():
                taken[year] = taken.get(year, 0.0) + _animals(release)
    return taken


def _ranges(case: Case, plan: Plan, at: str) -> Iterator[Finding]:
    """Find releases whose largest number of animals would alone pass the donor's limit."""
    limits = {donor.name: donor.most_removed_per_year for donor in case.donors}
    for i, release in enumerate(plan.releases):
        limit, who = limits.get(release.donor), release.who
        most = sum(q.spread[1] if q.spread else float(q.best) for q in (who.females, who.males))
        if limit is not None and most > float(limit.best) + _NEAR:
            sex = "females" if who.females.spread else "males"
            yield Finding(
                f"Release {i + 1} may take up to {tidy(most)} animals from {release.donor} by the "
                f"range that is held with it, and {release.donor} gives up to "
                f"{float(limit.best):g} a year.",
                "Narrow the range of females or males.",
                f"{at}.releases[{i}].who.{sex}",
                f"Go to the animals of release {i + 1}",
            )


def _ages(case: Case, plan: Plan, at: str) -> Iterator[Finding]:
    """Find ages past the last age of the recipient's or the donor's life cycle."""
    donors = {donor.name: donor for donor in case.donors}
    listed: list[tuple[str, str, RuleRelease]] = [
        (f"{at}.releases[{i}]", f"Release {i + 1}", release)
        for i, release in enumerate(plan.releases)
    ]
    listed += [
        (f"{at}.rules[{i}].release", f"The rule “{rule.name}”", rule.release)
        for i, rule in enumerate(plan.rules)
        if rule.release is not None
    ]
    for path, name, release in listed:
        lives = {"the recipient": case.life_cycle}
        if release.donor in donors:
            lives[release.donor] = donor_life_cycle(case, donors[release.donor])
        last = {whose: float(life.last_age.best) for whose, life in lives.items() if life}
        if release.who.age is None or not last:
            continue
        age, whose = float(release.who.age.best), min(last, key=lambda one: last[one])
        if age > last[whose]:
            yield Finding(
                f"{name} holds animals of age {age:g}, and by the life cycle of {whose} none "
                f"lives past {last[whose]:g} years.",
                f"Release animals of 1 to {last[whose]:g} years, or correct the last age on the "
                "Case page.",
                f"{path}.who.age",
                f"Go to the age of {name[:1].lower() + name[1:]}",
            )


def _stopped(plan: Plan, at: str, comparison: Comparison | None) -> Iterator[Finding]:
    """Find releases planned for years after a stop rule has acted in the average course."""
    if comparison is None:
        return
    stops = {rule.name for rule in plan.rules if rule.then == "stop"}
    acted = [e for e in comparison.events if e.plan == plan.name and e.rule in stops]
    if not acted:
        return
    first = min(acted, key=lambda event: event.year)
    for i, release in enumerate(plan.releases):
        years = list(release.years())
        late = [year for year in years if year >= first.year - _NEAR]
        if not late:
            continue
        which = f"{len(late)} of the {len(years)} times of release {i + 1}"
        which = which if len(years) > 1 else f"release {i + 1}"
        fewer = f"Repeat it at most {len(years) - len(late)} times"
        mend = fewer if len(late) < len(years) else "Remove it, move it earlier"
        field = "times" if 0 < len(late) < len(years) else "first_year"
        yield Finding(
            f"In the average course the rule “{first.rule}” stops all releases in "
            f"{year_text(first.year)}: {which} (from {late[0]} on) would not take place.",
            f"{mend}, or change the rule’s bound if they are to take place.",
            f"{at}.releases[{i}].when.{field}",
            f"Go to the {'times' if field == 'times' else 'year'} of release {i + 1}",
        )


def _no_effect(case: Case, at: str) -> Iterator[Finding]:
    """Hand on the remarks on releases of this plan that do nothing."""
    for remark in on_plans(case):
        if remark.key in _NO_EFFECT and remark.path.startswith(f"{at}."):
            none = remark.key == "release-of-none"
            mend = "Give it animals, or remove it." if none else "Move it to an earlier year."
            path = f"{remark.path}.{'females' if none else 'first_year'}"
            yield Finding(remark.text, mend, path, "Go to it")
