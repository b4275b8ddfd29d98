"""What a plan's releases and flow come to, as numbers for a screen. No Qt here."""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import numpy as np

from rescue_planner.case.document import Case
from rescue_planner.case.filled import (
    best,
    breeding_females,
    breeding_males,
    donor_frequency,
    step_of,
    steps,
)
from rescue_planner.case.plans import Plan, Release, RuleRelease
from rescue_planner.case.quantity import Quantity
from rescue_planner.projection.reading import number, year_text
from rescue_planner.projection.results import FloatArray, read_only
from rescue_planner.theory import flow


@dataclass(frozen=True, slots=True)
class Chain:
    """What becomes of the animals of one event of a release."""

    released: float
    survive: float
    breed: float

    @property
    def newcomers(self) -> float:
        """Newcomers that breed, in animals that breed like residents."""
        return float(flow.effective_newcomers(self.released, self.survive, self.breed))

    def sentence(self) -> str:
        """Return the chain as a line of numbers, such as `10 released × 0.6 × 0.4 = 2.4`."""
        return (
            f"{self.released:g} released × {self.survive:g} survive to breed × {self.breed:g} "
            f"breeding = {tidy(self.newcomers)} newcomers that breed"
        )


def tidy(value: float) -> str:
    """Return a small number with at most three digits after the point and no idle zeros."""
    text = number(value, 3)
    return text.rstrip("0").rstrip(".") if "." in text else text


def chain(release: RuleRelease) -> Chain:
    """Return the chain of one event of `release`."""
    return Chain(
        float(release.who.females.best) + float(release.who.males.best),
        float(release.afterwards.survive_to_breed.best),
        float(release.afterwards.breeding_relative_to_residents.best),
    )


@dataclass(frozen=True, slots=True)
class Fate:
    """What becomes of all animals of a release, or of a plan, over all events: animals."""

    name: str
    events: int
    released: float
    survive: float
    breed: float

    def sentence(self) -> str:
        """Return the fate as a chain, such as `10 released → 6 survive to breed → 2.4 …`."""
        return (
            f"{self.name}: {tidy(self.released)} released → {tidy(self.survive)} survive to breed "
            f"→ {tidy(self.breed)} newcomers that breed"
        )


def fate(release: Release, index: int) -> Fate:
    """Return what becomes of the animals of every event of a release."""
    each, events = chain(release), sum(1 for _ in release.years())
    name = f"Release {index + 1}" + (f", {events} times" if events > 1 else "")
    survive = events * each.released * each.survive
    return Fate(name, events, events * each.released, survive, events * each.newcomers)


def plan_fate(plan: Plan) -> Fate:
    """Return what becomes of the animals of all releases of a plan, before any rule acts."""
    fates = [fate(release, index) for index, release in enumerate(plan.releases)]
    return Fate(
        "Whole plan",
        sum(one.events for one in fates),
        sum(one.released for one in fates),
        sum(one.survive for one in fates),
        sum(one.breed for one in fates),
    )


def fate_words(plan: Plan) -> str:
    """Return the whole plan's chain as a sentence; empty without releases."""
    whole = plan_fate(plan)
    return f"{whole.sentence()}, before any rule acts." if plan.releases else ""


@dataclass(frozen=True, slots=True)
class EventRow:
    """One event of a release; `release` is its index in the plan, `t` the step it falls in."""

    year: int
    release: int
    donor: str
    females: float
    males: float
    age: float | None
    newcomers: float
    t: int


def event_rows(case: Case, plan: Plan) -> tuple[EventRow, ...]:
    """Return every event of every release of a plan, in the order of years."""
    start, generation = float(case.time.start_year.best), float(case.time.generation_years.best)
    rows = [
        EventRow(
            year,
            index,
            release.donor,
            float(release.who.females.best),
            float(release.who.males.best),
            None if release.who.age is None else float(release.who.age.best),
            chain(release).newcomers,
            step_of(year, start, generation),
        )
        for index, release in enumerate(plan.releases)
        for year in release.years()
    ]
    return tuple(sorted(rows, key=lambda row: (row.year, row.release)))


@dataclass(frozen=True, slots=True)
class Flow:
    """Gene flow of one generation: m, the share of gene copies, and Ne·m."""

    m: float
    ne: float

    @property
    def ne_m(self) -> float:
        """Effective size times m."""
        return self.ne * self.m


def effective_size(case: Case, plan: Plan) -> float:
    """Return the Ne at which a plan starts: its own, else the recipient's."""
    return best(plan.effective_size, float(case.recipient.effective_size.best))


def flow_of(case: Case, plan: Plan, females: float, males: float) -> Flow:
    """Return the flow of newcomers that breed among the breeders the recipient starts with.

    m = (u_f + u_m) / 2, u the newcomers' share of mothers and of fathers.
    """
    mothers = flow.parent_shares(np.array([females]), breeding_females(case.recipient))
    fathers = flow.parent_shares(np.array([males]), breeding_males(case.recipient))
    return Flow(float(flow.gene_copy_shares(mothers, fathers)[0]), effective_size(case, plan))


def steady_flow(case: Case, plan: Plan, index: int) -> Flow:
    """Return the flow of one steady flow alone, in a generation that it covers whole."""
    rate = float(plan.steady[index].migrants_per_generation.best)
    return flow_of(case, plan, rate / 2, rate / 2)


def newcomers_per_generation(case: Case, plan: Plan) -> FloatArray:
    """Return the newcomers that breed in each step, (G,), as planned: before any rule acts."""
    start, generation = float(case.time.start_year.best), float(case.time.generation_years.best)
    count = steps(float(case.time.horizon_years.best), generation)
    sums = np.zeros(count)
    for row in event_rows(case, plan):
        if 0 <= row.t < count:
            sums[row.t] += row.newcomers
    begin = start + generation * np.arange(count)
    for steady in plan.steady:
        last = np.inf if steady.to_year is None else float(steady.to_year.best) + 1.0
        first = best(steady.from_year, start)
        overlap = np.minimum(begin + generation, last) - np.maximum(begin, first)
        covered = np.clip(overlap / generation, 0.0, 1.0)
        sums += covered * float(steady.migrants_per_generation.best)
    return read_only(sums)


def generation_sentence(case: Case, year: float) -> str:
    """Return which generation a year falls in, and what moving a release within it changes."""
    start, generation = float(case.time.start_year.best), float(case.time.generation_years.best)
    t = step_of(year, start, generation)
    begin, end = start + t * generation, start + (t + 1) * generation
    return (
        f"{year_text(year)} falls in generation {t + 1}, {year_text(begin)} to {year_text(end)}. "
        "Moving a release within it changes nothing in the average course and the one-locus odds."
    )


def donor_frequencies(case: Case) -> tuple[tuple[str, str, float], ...]:
    """Return (locus, donor, frequency of the named allele) for every pair."""
    return tuple(
        (locus.name, donor.name, donor_frequency(locus, donor.name))
        for locus, donor in itertools.product(case.loci, case.donors)
    )


def limit_sentences(case: Case, plan: Plan) -> tuple[str, ...]:
    """Return, for each donor that a plan uses, the most it gives in a year and what is allowed."""
    taken: dict[str, dict[int, float]] = {}
    for row in event_rows(case, plan):
        years = taken.setdefault(row.donor, {})
        years[row.year] = years.get(row.year, 0.0) + row.females + row.males
    return tuple(
        _limit(donor.most_removed_per_year, donor.name, taken[donor.name])
        for donor in case.donors
        if donor.name in taken
    )


def _limit(most: Quantity | None, donor: str, years: dict[int, float]) -> str:
    year = max(years, key=lambda one: (years[one], -one))
    takes = f"at most {tidy(years[year])} in one year (first in {year})"
    if most is None:
        return f"This plan takes {takes} from {donor}, whose yearly limit is not stated."
    return f"This plan takes {takes} from {donor}, which gives up to {float(most.best):g} a year."


def flow_words(flow_: Flow) -> str:
    """Return m and Ne·m as a line."""
    return (
        f"m = {number(100 * flow_.m, 1)} % of gene copies a generation, "
        f"Ne·m = {number(flow_.ne_m, 2)} (Ne {flow_.ne:g})"
    )


def newcomers_words(case: Case, plan: Plan) -> str:
    """Return the newcomers that breed in the generations of a plan as one sentence."""
    per_step = newcomers_per_generation(case, plan)
    at = np.flatnonzero(per_step > 0)
    if not at.size:
        return "Newcomers that breed: none planned."
    low, high = float(per_step[at].min()), float(per_step[at].max())
    each = tidy(round(low, 2)) if high - low < 0.005 else f"{low:.2f} to {high:.2f}"
    total = number(float(per_step.sum()), 1)
    generations = "1 generation" if at.size == 1 else f"{at.size} of {per_step.size} generations"
    return f"Newcomers that breed: {each} in {generations}, {total} in all, before any rule acts."
