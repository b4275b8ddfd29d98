"""Remarks that look at every plan and the whole course of its projection."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.document import Case
from rescue_planner.case.filled import step_of
from rescue_planner.case.remarks import Remark, remarks
from rescue_planner.projection.chain_path import LARGEST_COPIES
from rescue_planner.projection.compare import plan_courses
from rescue_planner.projection.donor_take import donor_remarks
from rescue_planner.projection.expected import Course
from rescue_planner.theory.chain import copies

FloatArray = NDArray[np.float64]
_SLACK = 1e-9


def every_remark(case: Case) -> tuple[Remark, ...]:
    """Return the remarks on the case as it stands and on the course of every plan."""
    found = list(remarks(case))
    said = {(remark.key, remark.path) for remark in found}
    for index, course in enumerate(plan_courses(case, [plan.name for plan in case.plans])):
        for remark in _on_course(case, f"plans[{index}]", course):
            if (remark.key, remark.path) not in said:
                said.add((remark.key, remark.path))
                found.append(remark)
    found.extend(donor_remarks(case))
    return tuple(found)


def _on_course(case: Case, path: str, course: Course) -> Iterator[Remark]:
    yield from _apart(course, path)
    yield from _possible(course, path)
    yield from _numbers(case, course, path)
    yield from _at_once(case, course, path)
    name = course.setup.plan
    most = max((step.ne[0] for step in course.steps), default=0.0)
    if case.loci and copies(float(most)) > LARGEST_COPIES:
        yield Remark(
            "chain-too-large",
            path,
            f"Under {name}, 2Ne passes {LARGEST_COPIES:,}: the one-locus odds are not computed. "
            "At that size drift hardly matters; read the average course.",
        )
    for entry in course.book.not_applied:
        yield Remark(
            "rule-not-applied",
            path,
            f"The rule “{entry.rule.name}” of {name} reads a measure without an expected "
            "value, so it is not applied at these depths.",
        )


def _at_once(case: Case, course: Course, path: str) -> Iterator[Remark]:
    """Find rules that add a release in the first step to those the calendar already has there."""
    given = course.setup
    plan = case.plan(given.plan)
    years = [year for release in plan.releases for year in release.years()]
    if not any(step_of(year, given.start_year, given.generation_years) == 0 for year in years):
        return
    acted = {event.rule for event in course.book.events if event.t == 0}
    for place, rule in enumerate(plan.rules):
        delay = float(rule.delay_years.best)
        soon = step_of(given.start_year + delay, given.start_year, given.generation_years) == 0
        if rule.then == "release" and rule.name in acted and soon:
            yield Remark(
                "rule-at-once",
                f"{path}.rules[{place}]",
                f"The rule “{rule.name}” of {plan.name} acts at the start already, so its animals "
                "come in the same generation as the first release of the calendar. If it is meant "
                "for later, give it a delay or another bound.",
            )


def _year(course: Course, t: int) -> str:
    return f"{course.setup.start_year + t * course.setup.generation_years:g}"


def _apart(course: Course, path: str) -> Iterator[Remark]:
    """Diversity between below a population's own, and kinship to a donor below 0, after t = 0."""
    given = course.setup
    own = course.values["gene_diversity"][0]
    for i, donor in enumerate(given.donors):
        between = np.array([at[0, i] for at in course.between])
        donors = np.array([at[0, i, i] for at in course.donors])
        least = np.maximum(own, donors)
        below = np.flatnonzero(between < least - _SLACK)
        if below.size and below[0] > 0:
            t = int(below[0])
            yield Remark(
                "between-below-own",
                f"{path}:{donor}",
                f"Under {given.plan}, from {_year(course, t)} on, gene diversity between the "
                f"recipient and {donor} ({between[t]:.3f}) is below a population’s own "
                f"({least[t]:.3f}). That can happen for a while after heavy gene flow; if it "
                "starts early, check which form of FST was entered.",
            )
        kinship = 1.0 - between / given.h_reference[0]
        negative = np.flatnonzero(kinship < -_SLACK)
        if negative.size and negative[0] > 0:
            t = int(negative[0])
            yield Remark(
                "kinship-below-0",
                f"{path}:{donor}",
                f"Under {given.plan}, from {_year(course, t)} on, kinship between the recipient "
                f"and {donor} is {kinship[t]:.3f}, below 0 on the reference given. It is kept as "
                "it is; inbreeding costs use 0.",
            )


def _possible(course: Course, path: str) -> Iterator[Remark]:
    """Find kinships that no set of populations could have, after t = 0."""
    given = course.setup
    if not given.donors:
        return
    count = len(given.donors)
    between = np.stack([at[0] for at in course.between])
    whole = np.empty((between.shape[0], count + 1, count + 1))
    whole[:, 0, 0] = course.values["gene_diversity"][0]
    whole[:, 0, 1:] = whole[:, 1:, 0] = between
    whole[:, 1:, 1:] = np.stack([at[0] for at in course.donors])
    least = np.linalg.eigvalsh(1.0 - whole / given.h_reference[0])[:, 0]
    wrong = np.flatnonzero(least < -1e-9)
    if wrong.size and wrong[0] > 0:
        yield Remark(
            "kinships-not-possible",
            path,
            f"Under {given.plan}, from {_year(course, int(wrong[0]))} on, the kinships between "
            "recipient and donors could not all hold at once. Check the diversities, the FST "
            "values and the reference: they may come from different markers.",
        )


def _numbers(case: Case, course: Course, path: str) -> Iterator[Remark]:
    """Survival that met 1, decline while Ne is held, and a population that is gone."""
    given = course.setup
    capped = np.flatnonzero([at[0] for at in course.capped])
    if capped.size:
        yield Remark(
            "survival-capped",
            path,
            f"Under {given.plan}, first-year survival would pass 1 in "
            f"{_year(course, int(capped[0]))} and is held at 1, so gains are understated. Check "
            "first-year survival, the inbreeding cost and other actions.",
        )
    if "yearly_growth" not in course.values:
        return
    growth = course.values["yearly_growth"][0]
    falling = np.flatnonzero(growth < 1.0 - _SLACK)
    if falling.size and falling[0] > 0 and not given.size_follows_adults:
        yield Remark(
            "decline-with-size-held",
            path,
            f"Under {given.plan}, growth is below 1 from {_year(course, int(falling[0]))} on "
            f"({growth[falling[0]]:.3f} a year) while Ne is held. Let Ne follow the adults, or "
            "read diversity after that year as too high.",
        )
    gone = np.flatnonzero(course.values["adults"][0] < 1.0)
    if gone.size:
        yield Remark(
            "gone",
            path,
            f"Under {given.plan}, fewer than one adult is left by {_year(course, int(gone[0]))}: "
            "the population is gone, and no genetics is drawn after that.",
        )
