"""What a plan does in each step: newcomers, animals, costs, other actions.

Axes: G steps, n parameter draws, D donors. Step t takes the years [start + tT, start + (t+1)T).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.document import Case
from rescue_planner.case.filled import TOLERANCE_STEPS, step_of
from rescue_planner.case.plans import OtherAction, Plan, RuleRelease, Steady
from rescue_planner.case.quantity import Quantity

FloatArray = NDArray[np.float64]
Read = Callable[[str, Quantity | float], FloatArray]


@dataclass(frozen=True, slots=True, eq=False)
class ReleaseNumbers:
    """One release as numbers (n,): newcomers that breed by sex, animals, survivors, money."""

    donor: int
    newcomer_females: FloatArray
    newcomer_males: FloatArray
    animals: FloatArray
    survivors: FloatArray
    cost: FloatArray


@dataclass(frozen=True, slots=True, eq=False)
class Arrivals:
    """Who comes in one step: newcomers that breed (n, D) by sex, animals, survivors, money (n,)."""

    females: FloatArray
    males: FloatArray
    animals: FloatArray
    survivors: FloatArray
    cost: FloatArray


def nobody(n: int, donors: int) -> Arrivals:
    """Return the arrivals of a step in which nobody comes.

    A donor's draws lie side by side in memory: steps add whole columns.
    """
    nothing = np.zeros(n)
    by_donor = np.zeros((donors, n)).T
    return Arrivals(by_donor, by_donor, nothing, nothing, nothing)


@dataclass(slots=True, eq=False)
class Schedule:
    """A plan's flow and actions step by step.

    `arrivals` has one entry a step, nothing where nobody comes. Factors of other actions on size
    and their cost are (G, n), those on carrying capacity and first-year survival at each t
    (G + 1, n); without other actions they have one column.
    """

    draws: int
    donors: int
    arrivals: list[Arrivals | None]
    action_cost: FloatArray
    size_times: FloatArray
    capacity_times: FloatArray
    first_year_times: FloatArray

    def add(self, t: int, release: ReleaseNumbers, where: FloatArray) -> None:
        """Put a release into step `t`, weighted by `where` (n,); past the horizon, nothing."""
        if not 0 <= t < len(self.arrivals):
            return
        old = self.arrivals[t] or nobody(self.draws, self.donors)
        self.arrivals[t] = Arrivals(
            _with_column(old.females, release.donor, where * release.newcomer_females),
            _with_column(old.males, release.donor, where * release.newcomer_males),
            old.animals + where * release.animals,
            old.survivors + where * release.survivors,
            old.cost + where * release.cost,
        )


def _with_column(values: FloatArray, donor: int, more: FloatArray) -> FloatArray:
    """Return (n, D) values with `more` (n,) added to one donor's."""
    added = values.copy(order="K")
    added[:, donor] += more
    return added


def schedule(case: Case, plan: Plan, index: int, count: int, read: Read) -> Schedule:
    """Return what `plan`, at `index` among the plans, does in each of `count` steps."""
    start, generation = float(case.time.start_year.best), float(case.time.generation_years.best)
    one = read("", 1.0)
    n, donors = one.size, [donor.name for donor in case.donors]
    columns = n if plan.other_actions else 1
    result = Schedule(
        draws=n,
        donors=len(donors),
        arrivals=[None] * count,
        action_cost=np.zeros((count, columns)),
        size_times=np.ones((count, columns)),
        capacity_times=np.ones((count + 1, columns)),
        first_year_times=np.ones((count + 1, columns)),
    )
    at = f"plans[{index}]"
    for i, release in enumerate(plan.releases):
        numbers = release_numbers(release, donors, f"{at}.releases[{i}]", read)
        for year in release.years():
            result.add(step_of(year, start, generation), numbers, one)
    for i, steady in enumerate(plan.steady):
        rate = read(f"{at}.steady[{i}].migrants_per_generation", steady.migrants_per_generation)
        zero = np.zeros(n)
        half = ReleaseNumbers(donors.index(steady.donor), 0.5 * rate, 0.5 * rate, zero, zero, zero)
        for t, part in enumerate(_covered(steady, start, generation, count)):
            if part > 0.0:
                result.add(t, half, np.full(n, part))
    for i, action in enumerate(plan.other_actions):
        _act(result, action, f"{at}.other_actions[{i}]", (start, generation), read)
    return result


def release_numbers(release: RuleRelease, donors: list[str], at: str, read: Read) -> ReleaseNumbers:
    """Return one release, at path `at`, as numbers."""
    females = read(f"{at}.who.females", release.who.females)
    males = read(f"{at}.who.males", release.who.males)
    after = release.afterwards
    survive = read(f"{at}.afterwards.survive_to_breed", after.survive_to_breed)
    breed = read(
        f"{at}.afterwards.breeding_relative_to_residents", after.breeding_relative_to_residents
    )
    each = read(f"{at}.cost.each_animal", release.cost.each_animal)
    event = read(f"{at}.cost.each_event", release.cost.each_event)
    animals = females + males
    return ReleaseNumbers(
        donor=donors.index(release.donor),
        newcomer_females=females * survive * breed,
        newcomer_males=males * survive * breed,
        animals=animals,
        survivors=animals * survive,
        cost=animals * each + event,
    )


def _covered(steady: Steady, start: float, generation: float, count: int) -> FloatArray:
    """Return the part of each step that [from_year, to_year + 1) covers, (G,)."""
    begin = start + generation * np.arange(count)
    first = start if steady.from_year is None else float(steady.from_year.best)
    last = np.inf if steady.to_year is None else float(steady.to_year.best) + 1.0
    overlap = np.minimum(begin + generation, last) - np.maximum(begin, first)
    return np.asarray(np.clip(overlap / generation, 0.0, 1.0))


def _act(
    result: Schedule, action: OtherAction, at: str, clock: tuple[float, float], read: Read
) -> None:
    """Enter one other action: in force from its year until the end of `until_year`."""
    start, generation = clock
    count = len(result.arrivals)
    slack = TOLERANCE_STEPS * generation
    first = float(action.year.best)
    end = np.inf if action.until_year is None else float(action.until_year.best) + 1.0
    capacity = read(f"{at}.carrying_capacity_times", action.carrying_capacity_times)
    survival = read(f"{at}.first_year_survival_times", action.first_year_survival_times)
    years = start + generation * np.arange(count + 1)
    in_step = (first < years[1:] - slack) & (years[:-1] < end - slack)
    result.size_times *= np.where(in_step[:, None], capacity, 1.0)
    at_year = (first <= years + slack) & (years < end - slack)
    result.capacity_times *= np.where(at_year[:, None], capacity, 1.0)
    result.first_year_times *= np.where(at_year[:, None], survival, 1.0)
    t = step_of(first, start, generation)
    if 0 <= t < count:
        result.action_cost[t] += read(f"{at}.cost", action.cost)
