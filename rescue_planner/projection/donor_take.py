"""What plans take from a donor, against what the donor itself grows by.

The expected depth holds donors constant. This is a first look beside it, in whole years: the
donor grows by its own life cycle up to its ceiling, then gives, N' = min(K, growth × N) − taken
(science of harvest from a ceiling population; Caswell 2001, from memory).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from rescue_planner.case.document import Case
from rescue_planner.case.filled import donor_life_cycle
from rescue_planner.case.life import LifeCycle
from rescue_planner.case.plans import Plan
from rescue_planner.case.population import Donor
from rescue_planner.case.remarks import Remark
from rescue_planner.theory.elasticity import donor_numbers
from rescue_planner.theory.life_table import growth


@dataclass(frozen=True, slots=True)
class DonorTake:
    """Animals taken by year, and the donor's adults left after each of those years.

    `growth` is the donor's yearly growth by its own life cycle; nothing where it has none, and
    then `left` is empty.
    """

    plan: str
    donor: str
    adults: float
    taken: Mapping[int, float]
    growth: float | None
    left: Mapping[int, float]


def ceiling_course(
    adults: float, rate: float, ceiling: float, taken: Mapping[int, float]
) -> dict[int, float]:
    """Return adults left after each year from the first taking to the last.

    Each year the donor grows by `rate` up to `ceiling`, then loses what is taken.
    """
    years = range(min(taken), max(taken) + 1)
    removed = [taken.get(year, 0.0) for year in years]
    numbers = donor_numbers(adults, rate, ceiling, removed)[1:]
    return dict(zip(years, numbers.tolist(), strict=True))


def donor_takes(case: Case) -> Iterator[DonorTake]:
    """Yield what each plan takes from each donor whose adults are given."""
    for plan in case.plans:
        for donor in case.donors:
            taken = _taken(plan, donor.name)
            if not taken or donor.adults is None:
                continue
            adults = float(donor.adults.best)
            life = donor_life_cycle(case, donor)
            rate = None if life is None else _growth(life)
            ceiling = (
                adults if donor.carrying_capacity is None else float(donor.carrying_capacity.best)
            )
            left = {} if rate is None else ceiling_course(adults, rate, ceiling, taken)
            yield DonorTake(plan.name, donor.name, adults, taken, rate, left)


def donor_remarks(case: Case) -> Iterator[Remark]:
    """Yield a remark where a plan leaves a donor fewer than must stay, or ever fewer."""
    donors = {donor.name: donor for donor in case.donors}
    plans = [plan.name for plan in case.plans]
    for take in donor_takes(case):
        path = f"plans[{plans.index(take.plan)}]:{take.donor}"
        floor = _below_floor(take, donors[take.donor], path)
        if floor is not None:
            yield floor
        if take.growth is not None and _shrinks(take):
            last = max(take.left)
            yield Remark(
                "donor-not-made-up",
                path,
                f"{take.plan} keeps taking more from {take.donor} than it grows by: on its own "
                f"life cycle ({take.growth:.3f} a year) its {take.adults:g} adults would be "
                f"{take.left[last]:.0f} after {last}. Removal limits are set by those "
                "responsible for the donor population.",
            )


def _taken(plan: Plan, donor: str) -> dict[int, float]:
    taken: dict[int, float] = {}
    for release in plan.releases:
        if release.donor == donor:
            animals = float(release.who.females.best) + float(release.who.males.best)
            for year in release.years():
                taken[year] = taken.get(year, 0.0) + animals
    return {year: animals for year, animals in taken.items() if animals > 0}


def _growth(life: LifeCycle) -> float:
    survival = life.yearly_survival
    births = (
        float(life.share_of_females_breeding.best)
        * life.young_per_breeding_female.expected
        * float(life.females_among_young.best)
    )
    rate = growth(
        births,
        float(survival.first_year.best),
        float(survival.subadult.best),
        float(survival.adult.best),
        int(life.first_breeding_age.female.best),
        int(life.last_age.best),
    )
    return float(rate)


def _below_floor(take: DonorTake, donor: Donor, path: str) -> Remark | None:
    if donor.fewest_left is None:
        return None
    floor = float(donor.fewest_left.best)
    by_year = take.left or {year: take.adults - animals for year, animals in take.taken.items()}
    low = [year for year, left in by_year.items() if left < floor]
    if not low:
        return None
    return Remark(
        "donor-below-floor",
        path,
        f"{take.plan} would leave {by_year[low[0]]:.0f} adults in {take.donor} in {low[0]}, fewer "
        f"than the {floor:g} that must stay.",
    )


def _shrinks(take: DonorTake) -> bool:
    """Whether the donor ends below what the largest single taking alone would leave."""
    largest = max(take.taken.values())
    return min(take.left.values()) < take.adults - largest - 0.5
