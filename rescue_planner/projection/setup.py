"""One plan of a case as arrays: what the expected and exact depths start from.

Axes: n parameter draws (1 for the best values), D donors in the order of the case, G steps.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.document import Case
from rescue_planner.case.filled import (
    breeding_females,
    breeding_males,
    donor_frequency,
    lethal_equivalents,
    steps,
)
from rescue_planner.case.genetics import Locus, Trait
from rescue_planner.case.life import LifeCycle
from rescue_planner.case.plans import Plan, Rule
from rescue_planner.case.quantity import Quantity
from rescue_planner.projection.distances import Distances, distances
from rescue_planner.projection.schedule import (
    ReleaseNumbers,
    Schedule,
    release_numbers,
    schedule,
)

FloatArray = NDArray[np.float64]
Draws = Mapping[str, FloatArray]


class Reader:
    """Gives each input as (n,) values: its draws where there are some, else its best value."""

    def __init__(self, draws: Draws | None = None) -> None:
        self._draws = dict(draws or {})
        self.n = next((a.shape[0] for a in self._draws.values()), 1)

    def __call__(self, path: str, given: Quantity | float) -> FloatArray:
        """Return the values at `path`; `given` holds its best value."""
        if path in self._draws:
            return np.asarray(self._draws[path], dtype=np.float64)
        best = given.best if isinstance(given, Quantity) else given
        return np.full(self.n, float(best))


@dataclass(frozen=True, slots=True, eq=False)
class LifeSetup:
    """The life cycle as numbers; arrays are (n,)."""

    first_year: FloatArray
    subadult: FloatArray
    adult: FloatArray
    births: FloatArray
    first_breeding_age: int
    last_age: int
    here_now: bool


@dataclass(frozen=True, slots=True, eq=False)
class TraitSetup:
    """The trait as numbers; arrays are (n,), per donor (n, D)."""

    heritability: FloatArray
    width2: FloatArray
    optimum_at_start: FloatArray
    shift_per_year: FloatArray
    jump_year: float | None
    jump_by: FloatArray
    mutational_variance: FloatArray
    loci: FloatArray
    donor_mean: FloatArray
    donor_variance: FloatArray


@dataclass(frozen=True, slots=True, eq=False)
class LocusSetup:
    """A tracked locus as numbers: fitness (n, 3), donor frequencies (n, D), others (n,)."""

    name: str
    fitness: FloatArray
    frequency: FloatArray
    donor_frequency: FloatArray
    mutation_to: FloatArray
    mutation_from: FloatArray
    mutates: bool


@dataclass(frozen=True, slots=True, eq=False)
class RuleSetup:
    """A rule, the plan it belongs to, the columns it reads (n,), and what it would release."""

    rule: Rule
    plan: str
    where: NDArray[np.bool_]
    release: ReleaseNumbers | None


@dataclass(frozen=True, slots=True, eq=False)
class Setup:
    """Everything the expected and exact depths of a plan read, or of several plans at once.

    `plans` names the plan of each of the first columns: one name where the columns are draws of
    one plan, a name for every column where each is a plan of its own.
    """

    plans: tuple[str, ...]
    donors: tuple[str, ...]
    steps: int
    start_year: float
    generation_years: float
    h_reference: FloatArray
    distances: Distances
    donor_size: FloatArray
    donor_drifts: NDArray[np.bool_]
    size: FloatArray
    size_follows_adults: bool
    females: FloatArray
    males: FloatArray
    adults: FloatArray
    carrying_capacity: FloatArray | None
    lethal_first_year: FloatArray
    lethal_young: FloatArray
    ancestry: FloatArray
    life: LifeSetup | None
    trait: TraitSetup | None
    loci: tuple[LocusSetup, ...]
    schedule: Schedule
    rules: tuple[RuleSetup, ...]

    @property
    def plan(self) -> str:
        """The plan of the first column."""
        return self.plans[0]

    @property
    def draws(self) -> int:
        """Number of parameter draws n."""
        return int(self.size.size)


def setup(case: Case, plan: Plan, draws: Draws | None = None) -> Setup:
    """Return `plan` of `case` as arrays.

    Parameters
    ----------
    draws : mapping from a path like `recipient.effective_size` to (n,) values
        Inputs not named keep their best value. The years and T are never drawn.
    """
    read = Reader(draws)
    start = float(case.time.start_year.best)
    generation = float(case.time.generation_years.best)
    count = steps(float(case.time.horizon_years.best), generation)
    who = case.recipient
    apart = distances(case, read)
    load = lethal_equivalents(case)
    index = next(i for i, p in enumerate(case.plans) if p.name == plan.name)
    size = plan.effective_size
    loads = "inbreeding_cost.lethal_equivalents_diploid"
    return Setup(
        plans=(plan.name,),
        donors=tuple(donor.name for donor in case.donors),
        steps=count,
        start_year=start,
        generation_years=generation,
        h_reference=read("recipient.reference_gene_diversity", who.reference_gene_diversity),
        distances=apart,
        donor_size=_per_donor(
            read,
            [
                (f"donors[{i}].effective_size", d.effective_size or 1e15)
                for i, d in enumerate(case.donors)
            ],
        ),
        donor_drifts=np.array([d.drifts for d in case.donors], dtype=bool),
        size=(
            read("recipient.effective_size", who.effective_size)
            if size is None
            else read(f"plans[{index}].effective_size", size)
        ),
        size_follows_adults=who.effective_size_follows_adults and case.life_cycle is not None,
        females=read("recipient.breeding_females", breeding_females(who)),
        males=read("recipient.breeding_males", breeding_males(who)),
        adults=read("recipient.adults", who.adults),
        carrying_capacity=(
            None
            if who.carrying_capacity is None
            else read("recipient.carrying_capacity", who.carrying_capacity)
        ),
        lethal_first_year=read(f"{loads}.first_year", load.first_year),
        lethal_young=read(f"{loads}.young_per_female", load.young_per_female),
        ancestry=_per_donor(
            read,
            [
                (
                    f"recipient.donor_ancestry_at_start.{d.name}",
                    who.donor_ancestry_at_start.get(d.name, 0.0),
                )
                for d in case.donors
            ],
        ),
        life=None if case.life_cycle is None else _life(case.life_cycle, read),
        trait=None if case.trait is None else _trait(case, case.trait, apart, read),
        loci=tuple(_locus(case, i, locus, read) for i, locus in enumerate(case.loci)),
        schedule=schedule(case, plan, index, count, read),
        rules=_rules(case, plan, index, read),
    )


def _rules(case: Case, plan: Plan, index: int, read: Reader) -> tuple[RuleSetup, ...]:
    donors = [donor.name for donor in case.donors]
    everywhere = np.ones(read.n, dtype=bool)
    return tuple(
        RuleSetup(
            rule,
            plan.name,
            everywhere,
            None
            if rule.release is None or rule.then == "stop"
            else release_numbers(rule.release, donors, f"plans[{index}].rules[{i}].release", read),
        )
        for i, rule in enumerate(plan.rules)
    )


def _per_donor(read: Reader, given: list[tuple[str, Quantity | float]]) -> FloatArray:
    """Return (n, D) values, each donor's draws side by side in memory."""
    if not given:
        return np.zeros((read.n, 0))
    return np.stack([read(path, value) for path, value in given]).T


def _life(life: LifeCycle, read: Reader) -> LifeSetup:
    young = life.young_per_breeding_female
    mean = young.mean if young.mean is not None else young.expected
    births = (
        read("life_cycle.share_of_females_breeding", life.share_of_females_breeding)
        * read("life_cycle.young_per_breeding_female.mean", mean)
        * read("life_cycle.females_among_young", life.females_among_young)
    )
    survival = life.yearly_survival
    return LifeSetup(
        first_year=read("life_cycle.yearly_survival.first_year", survival.first_year),
        subadult=read("life_cycle.yearly_survival.subadult", survival.subadult),
        adult=read("life_cycle.yearly_survival.adult", survival.adult),
        births=births,
        first_breeding_age=int(life.first_breeding_age.female.best),
        last_age=int(life.last_age.best),
        here_now=life.survival_measured == "here_now",
    )


def _trait(case: Case, trait: Trait, apart: Distances, read: Reader) -> TraitSetup:
    heritability = read("trait.heritability", trait.heritability)
    by_diversity = (
        heritability[:, None]
        * np.diagonal(apart.donors, axis1=-2, axis2=-1)
        / apart.recipient[:, None]
    )
    variance = by_diversity.copy()
    for i, donor in enumerate(case.donors):
        if donor.additive_variance is not None:
            variance[:, i] = read(f"donors[{i}].additive_variance", donor.additive_variance)
    jump = trait.optimum_jump
    return TraitSetup(
        heritability=heritability,
        width2=read("trait.selection_width_sd", trait.selection_width_sd) ** 2,
        optimum_at_start=read("trait.optimum_at_start", trait.optimum_at_start),
        shift_per_year=read("trait.optimum_shift_per_year", trait.optimum_shift_per_year),
        jump_year=None if jump is None else float(jump.year.best),
        jump_by=read("trait.optimum_jump.by", 0.0 if jump is None else jump.by),
        mutational_variance=read("trait.mutational_variance", trait.mutational_variance),
        loci=read("trait.loci", trait.loci),
        donor_mean=_per_donor(
            read,
            [
                (f"donors[{i}].trait_mean_difference", d.trait_mean_difference)
                for i, d in enumerate(case.donors)
            ],
        ),
        donor_variance=variance,
    )


def _locus(case: Case, index: int, locus: Locus, read: Reader) -> LocusSetup:
    at = f"loci[{index}]"
    to = read(f"{at}.mutation_to", locus.mutation_to)
    off = read(f"{at}.mutation_from", locus.mutation_from)
    return LocusSetup(
        name=locus.name,
        fitness=np.stack([read(f"{at}.fitness[{k}]", w) for k, w in enumerate(locus.fitness)]).T,
        frequency=read(f"{at}.frequency", locus.frequency),
        donor_frequency=_per_donor(
            read,
            [
                (f"{at}.donor_frequency.{d.name}", donor_frequency(locus, d.name))
                for d in case.donors
            ],
        ),
        mutation_to=to,
        mutation_from=off,
        mutates=bool(to.any() or off.any()),
    )
