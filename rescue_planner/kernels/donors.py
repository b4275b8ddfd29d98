"""Donor populations as numbers by sex and age: the same year as the recipient's.

Donors carry no genomes here, so animals of one age and sex are alike and a binomial number stands
for one draw an animal: the same distribution, at a cost that does not grow with the donor.
"""

from __future__ import annotations

import math

from rescue_planner.kernels.draws import binomial, pick, poisson
from rescue_planner.kernels.herd import (
    CAPACITY,
    FEMALE,
    FEMALE_SHARE,
    FIRST_FEMALE,
    FORM,
    GRADUAL,
    GROWTH,
    HAS_LIFE,
    LAST_AGE,
    MALE,
    MEAN_YOUNG,
    NUMBER,
    PAIRS,
    SHARE_BREEDING,
    WEATHER_SURVIVAL,
    WEATHER_YOUNG,
    Herd,
    Plan,
)
from rescue_planner.kernels.inner import inner
from rescue_planner.kernels.streams import (
    BREEDING,
    CROWDING,
    DEATH,
    FIRST_YEAR,
    FOUNDERS,
    YOUNG,
    below,
)
from rescue_planner.kernels.weather import draw_weather


@inner
def found_donor(plan: Plan, herd: Herd, donor: int) -> None:
    """Draw the ages of a donor's animals at the start."""
    herd.donors[donor] = 0
    if plan.rates[donor + 1, HAS_LIFE] == 0.0:
        herd.donors[donor, 0, 0] = int(plan.rates[donor + 1, NUMBER])
        return
    for sex in (FEMALE, MALE):
        first = int(plan.rates[donor + 1, FIRST_FEMALE + sex])
        last = int(plan.rates[donor + 1, LAST_AGE])
        for stage in (0, 1):
            low, high = (first, last) if stage == 1 else (1, first - 1)
            count = plan.numbers[donor + 1, sex, stage]
            if high < low or count == 0:
                continue
            total = 0.0
            for age in range(low, high + 1):
                total += plan.ages[donor + 1, sex, age - 1]
                herd.sums[age - low] = total
            for _ in range(count):
                age = low + pick(herd.donor_streams, FOUNDERS, herd.sums, high - low + 1)
                herd.donors[donor, sex, age - 1] += 1


@inner
def of_a_sex(plan: Plan, herd: Herd, donor: int, sex: int) -> int:
    """Return the adults of one sex of a donor."""
    total = 0
    for age in range(int(plan.rates[donor + 1, FIRST_FEMALE + sex]) - 1, herd.donors.shape[2]):
        total += herd.donors[donor, sex, age]
    return total


@inner
def donor_adults(plan: Plan, herd: Herd, donor: int) -> int:
    """Return the adults of a donor; all its animals where it is a number only."""
    if plan.rates[donor + 1, HAS_LIFE] == 0.0:
        number: int = herd.donors[donor, 0, 0]
        return number
    return of_a_sex(plan, herd, donor, FEMALE) + of_a_sex(plan, herd, donor, MALE)


@inner
def take_from(plan: Plan, herd: Herd, donor: int, sex: int, age: int) -> bool:
    """Take one animal from a donor: of the age asked for, else the next older, else younger.

    Returns whether there was one of that sex.
    """
    if plan.rates[donor + 1, HAS_LIFE] == 0.0:
        if herd.donors[donor, 0, 0] == 0:
            return False
        herd.donors[donor, 0, 0] -= 1
        return True
    ages = herd.donors.shape[2]
    wanted = min(age, ages) - 1
    for at in range(wanted, ages):
        if herd.donors[donor, sex, at] > 0:
            herd.donors[donor, sex, at] -= 1
            return True
    for at in range(wanted - 1, -1, -1):
        if herd.donors[donor, sex, at] > 0:
            herd.donors[donor, sex, at] -= 1
            return True
    return False


@inner
def donor_young(plan: Plan, herd: Herd, donor: int, females: int, males: int, factor: float) -> int:
    """Return how many young a donor's females have."""
    if males == 0:
        return 0
    share = plan.rates[donor + 1, SHARE_BREEDING]
    mean = plan.rates[donor + 1, MEAN_YOUNG]
    if mean < 0.0:
        share = min(1.0, share * factor)
    breed = binomial(herd.donor_streams, BREEDING, females, share)
    if plan.rates[donor + 1, FORM] == PAIRS:
        breed = min(breed, males)
    if mean >= 0.0:
        return poisson(herd.donor_streams, YOUNG, mean * factor * breed)
    young = 0
    for _ in range(breed):
        young += pick(herd.donor_streams, YOUNG, plan.litters[donor + 1], plan.litters.shape[1])
    return young


@inner
def crowd_donor(plan: Plan, herd: Herd, donor: int, most: float) -> None:
    """Remove adults above the carrying capacity at random."""
    adults = donor_adults(plan, herd, donor)
    while adults > most:
        at = below(herd.donor_streams, CROWDING, adults)
        for sex in (FEMALE, MALE):
            first = int(plan.rates[donor + 1, FIRST_FEMALE + sex])
            for age in range(first - 1, herd.donors.shape[2]):
                if at >= 0:
                    at -= herd.donors[donor, sex, age]
                    if at < 0:
                        herd.donors[donor, sex, age] -= 1
        adults -= 1


@inner
def donor_year(plan: Plan, herd: Herd, donor: int) -> None:
    """Take a donor through one year, after what was taken from it."""
    p, weather = donor + 1, herd.donor_weather
    if plan.rates[p, HAS_LIFE] == 0.0:
        return
    s = herd.donor_streams
    draw_weather(s, plan.rates, plan.quantiles, plan.die_offs, p, weather)
    females = of_a_sex(plan, herd, donor, FEMALE)
    males = of_a_sex(plan, herd, donor, MALE)
    capacity = plan.rates[p, CAPACITY]
    young = donor_young(plan, herd, donor, females, males, weather[WEATHER_YOUNG])
    survival = weather[WEATHER_SURVIVAL]
    if plan.rates[p, GRADUAL] == 1.0 and capacity > 0.0 and not math.isinf(capacity):
        survival /= 1.0 + max(0.0, plan.rates[p, GROWTH] - 1.0) * (females + males) / capacity
    daughters = binomial(s, YOUNG, young, plan.rates[p, FEMALE_SHARE])
    last = int(plan.rates[p, LAST_AGE])
    for sex in (FEMALE, MALE):
        first = int(plan.rates[p, FIRST_FEMALE + sex])
        born = daughters if sex == FEMALE else young - daughters
        for age in range(last, 1, -1):
            rate = weather[WEATHER_SURVIVAL + (2 if age - 1 >= first else 1)]
            before = herd.donors[donor, sex, age - 2]
            herd.donors[donor, sex, age - 1] = binomial(s, DEATH, before, rate)
        herd.donors[donor, sex, 0] = binomial(s, FIRST_YEAR, born, min(1.0, survival))
    if plan.rates[p, GRADUAL] == 0.0 and not math.isinf(capacity):
        crowd_donor(plan, herd, donor, math.floor(capacity))
