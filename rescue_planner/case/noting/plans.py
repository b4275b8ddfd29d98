"""Remarks on plans and targets: what takes no effect, what is not limited, what is not assessed."""

from __future__ import annotations

from collections.abc import Iterator

from rescue_planner.case import fields
from rescue_planner.case.document import Case
from rescue_planner.case.filled import step_of, steps
from rescue_planner.case.noting.base import Remark
from rescue_planner.case.paths import format_path, steps_of
from rescue_planner.case.plans import Plan, RuleRelease
from rescue_planner.case.raw import to_raw

DISEASE = (
    "Disease risk is not assessed by this projection. A disease risk analysis led by qualified "
    "veterinarians is needed and may rule out a plan."
)
_SLACK = 1e-9


def on_plans(case: Case) -> Iterator[Remark]:
    """Yield remarks on releases, donors' limits, targets and disease."""
    givers = {donor for plan in case.plans for donor in _givers(plan)}
    if givers:
        yield Remark("disease-not-assessed", "", DISEASE)
    for place, donor in enumerate(case.donors):
        if donor.name in givers and donor.most_removed_per_year is None:
            yield Remark(
                "no-removal-limit",
                f"donors[{place}].most_removed_per_year",
                f"How many animals may be taken from {donor.name} in a year is not stated, so no "
                "plan is held to it. Removal limits are set by those responsible for the donor "
                "population.",
            )
    yield from _lethal(case, givers)
    for place, plan in enumerate(case.plans):
        yield from _releases(case, plan, f"plans[{place}]")
    yield from _targets(case)
    yield from _what_ifs(case)
    yield from _jump(case)


def _jump(case: Case) -> Iterator[Remark]:
    """Yield a jump of the optimum that lies outside the years looked at."""
    jump = None if case.trait is None else case.trait.optimum_jump
    if jump is None:
        return
    year, start = float(jump.year.best), float(case.time.start_year.best)
    if year < start:
        when = "before the start, so it counts from the start on"
    elif year > start + float(case.time.horizon_years.best):
        when = "after the horizon, so it takes no effect"
    else:
        return
    yield Remark(
        "jump-outside",
        "trait.optimum_jump.year",
        f"The jump of the optimum is in {year:g}, {when}. Correct the year if it is not meant.",
    )


def _lethal(case: Case, givers: set[str]) -> Iterator[Remark]:
    """Yield donors all of whose animals have a genotype that leaves no young in the recipient."""
    for place, locus in enumerate(case.loci):
        for donor in sorted(givers):
            share = locus.donor_frequency.get(donor)
            if share is None or float(share.best) not in (0.0, 1.0):
                continue
            only, fitness = ("AA", 0) if float(share.best) == 1.0 else ("aa", 2)
            if float(locus.fitness[fitness].best) == 0.0:
                path = format_path(("loci", place, "donor_frequency", donor))
                yield Remark(
                    "donor-all-unfit",
                    path,
                    f"Every animal from {donor} is {only} at {locus.name}, and the fitness of "
                    f"{only} is 0 in the recipient: young of two such newcomers would not live, "
                    "and only crosses count. Check the frequency and the order of the genotypes.",
                )


def _what_ifs(case: Case) -> Iterator[Remark]:
    """Yield changes that find nothing: plans may have gone since the question was asked."""
    raw = to_raw(case)
    for place, what_if in enumerate(case.what_ifs):
        for which, change in enumerate(what_if.changes):
            if not any(True for _ in fields.matches(raw, steps_of(change.path))):
                yield Remark(
                    "what-if-changes-nothing",
                    f"what_ifs[{place}].changes[{which}].path",
                    f"The what-if “{what_if.name}” changes “{change.path}”, which finds nothing "
                    "in this case: correct it, or read its results as unchanged in that point.",
                )


def _givers(plan: Plan) -> Iterator[str]:
    yield from (release.donor for release in plan.releases)
    yield from (steady.donor for steady in plan.steady)
    yield from (rule.release.donor for rule in plan.rules if rule.release is not None)


def _releases(case: Case, plan: Plan, path: str) -> Iterator[Remark]:
    time = case.time
    start, generation = float(time.start_year.best), float(time.generation_years.best)
    last = steps(float(time.horizon_years.best), generation)
    for which, release in enumerate(plan.releases):
        where = f"{path}.releases[{which}]"
        if not _animals(release):
            text = f"This release of {plan.name} has neither females nor males."
            yield Remark("release-of-none", f"{where}.who", text)
        late = [year for year in release.years() if step_of(year, start, generation) >= last]
        if late:
            yield Remark(
                "release-too-late",
                f"{where}.when",
                f"The release of {plan.name} in {late[0]} falls at the end of the horizon and "
                "takes no effect: release earlier or look further ahead.",
            )
    for which, rule in enumerate(plan.rules):
        if rule.release is not None and not _animals(rule.release):
            text = f"The release of this rule of {plan.name} has neither females nor males."
            yield Remark("release-of-none", f"{path}.rules[{which}].release.who", text)


def _animals(release: RuleRelease) -> float:
    return float(release.who.females.best) + float(release.who.males.best)


def _targets(case: Case) -> Iterator[Remark]:
    end = float(case.time.start_year.best) + float(case.time.horizon_years.best)
    for place, target in enumerate(case.targets):
        year = float(target.by_year.best)
        if year > end + _SLACK:
            yield Remark(
                "target-after-horizon",
                f"targets[{place}].by_year",
                f"This target is for {year:g}, after the horizon ({end:g}): it is read at the last "
                "step.",
            )
