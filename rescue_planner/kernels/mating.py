"""Breeding: who breeds, who mates with whom, how many young, and which live their first year.

A young's fate is drawn before its genome: F is one look-up, its tracked loci are two words. Only
young that live are written down (`Herd.young`), and only those that stay after crowding get their
markers and their row of kinship.
"""

from __future__ import annotations

import math

import numpy as np

from rescue_planner.kernels.animals import cost_factor, fitness
from rescue_planner.kernels.draws import pick, poisson, shuffle
from rescue_planner.kernels.genomes import pass_on_loci
from rescue_planner.kernels.herd import (
    ADULTS_NOW,
    AGE,
    BORN,
    BRED,
    CAPPED,
    DAM,
    DONE,
    EFFECTIVE,
    FACTOR,
    FEMALE,
    FEMALE_SHARE,
    FIRST_DIED,
    FIRST_FEMALE,
    FORM,
    FULL,
    GRADUAL,
    GROWTH,
    HAREMS,
    IDENTITY,
    KEPT,
    LETHAL_FIRST,
    LETHAL_YOUNG,
    LIVING,
    MALE,
    MATE,
    MATE_IDENTITY,
    MEAN_YOUNG,
    OPEN,
    ORIGIN,
    PAIRS,
    SCALE_FIRST,
    SCALE_LOCI,
    SCALE_MOTHER,
    SEX,
    SHARE_BREEDING,
    SHARE_OF_MALES,
    SIRE,
    STAY,
    WEATHER_SURVIVAL,
    WEATHER_YOUNG,
    WEIGHT,
    YEAR_CAPACITY,
    YEAR_FIRST_TIMES,
    YOUNG_LIVED,
    YOUNG_SEX,
    Herd,
    Plan,
)
from rescue_planner.kernels.inner import inner
from rescue_planner.kernels.streams import BREEDING, FIRST_YEAR, GAMETES, YOUNG, uniform

_ONE = np.uint64(1)


@inner
def mother_factor(plan: Plan, herd: Herd, slot: int) -> float:
    """Return by how much a female's own inbreeding lowers the number of her young."""
    f = 2.0 * herd.kin[slot, slot] - 1.0
    factor: float = cost_factor(plan.rates[0, LETHAL_YOUNG], f) * herd.weather[SCALE_MOTHER]
    return factor


@inner
def find_breeders(plan: Plan, herd: Herd) -> tuple[int, int]:
    """List the females that breed in `list_a`, the adult males in `list_b`; return how many.

    A male whose weight is 0 takes no part.
    """
    mothers, males = 0, 0
    for at in range(herd.number[LIVING]):
        slot = herd.order[at]
        sex = herd.who[SEX, slot]
        if herd.who[AGE, slot] < int(plan.rates[0, FIRST_FEMALE + sex]):
            continue
        if sex == MALE:
            if herd.traits[WEIGHT, slot] > 0.0:
                herd.list_b[males] = slot
                males += 1
            continue
        chance = plan.rates[0, SHARE_BREEDING] * herd.traits[FACTOR, slot]
        if plan.rates[0, MEAN_YOUNG] < 0.0:
            chance *= herd.weather[WEATHER_YOUNG] * mother_factor(plan, herd, slot)
        if uniform(herd.streams, BREEDING) < chance:
            herd.list_a[mothers] = slot
            mothers += 1
    return mothers, males


@inner
def draw_out(herd: Herd, count: int) -> int:
    """Take one of the first `count` of `list_b` by factor and move it behind them; return it."""
    total = 0.0
    for i in range(count):
        total += herd.traits[FACTOR, herd.list_b[i]]
        herd.sums[i] = total
    i = pick(herd.streams, BREEDING, herd.sums, count)
    chosen: int = herd.list_b[i]
    herd.list_b[i] = herd.list_b[count - 1]
    herd.list_b[count - 1] = chosen
    return chosen


@inner
def living_mate(herd: Herd, slot: int) -> int:
    """Return the slot of an animal's mate of former years while it lives, else -1."""
    mate: int = herd.who[MATE, slot]
    if mate >= 0 and herd.who[IDENTITY, mate] == herd.who[MATE_IDENTITY, slot]:
        return mate
    return -1


@inner
def bond(herd: Herd, one: int, other: int) -> None:
    """Remember a pair."""
    herd.who[MATE, one], herd.who[MATE_IDENTITY, one] = other, herd.who[IDENTITY, other]
    herd.who[MATE, other], herd.who[MATE_IDENTITY, other] = one, herd.who[IDENTITY, one]


@inner
def make_pairs(plan: Plan, herd: Herd, mothers: int, males: int) -> int:
    """Give each breeding female, in random order, a male of her own; return how many have one.

    Afterwards `list_a` holds the females with a male, and their MATE is he. Pairs of former years
    stay together where the plan says so, and keep their males from others.
    """
    shuffle(herd.streams, BREEDING, herd.list_a, mothers)
    stay = plan.rates[0, STAY] == 1.0
    if stay:
        free = 0
        for i in range(males):
            if living_mate(herd, herd.list_b[i]) < 0:
                herd.list_b[free] = herd.list_b[i]
                free += 1
        males = free
    paired = 0
    for i in range(mothers):
        female = herd.list_a[i]
        if not (stay and living_mate(herd, female) >= 0):
            if males == 0:
                continue
            bond(herd, female, draw_out(herd, males))
            males -= 1
        herd.list_a[paired] = female
        paired += 1
    return paired


@inner
def hold_harems(plan: Plan, herd: Herd, males: int) -> int:
    """Put the males that hold a harem, drawn at random, first in `list_b`; return how many."""
    holders: int = min(males, max(1, math.floor(plan.rates[0, SHARE_OF_MALES] * males + 0.5)))
    if holders == males:
        return males
    shuffle(herd.streams, BREEDING, herd.list_b, males)
    return holders


@inner
def litter(plan: Plan, herd: Herd, mother: int) -> int:
    """Draw how many young a breeding female has."""
    mean = plan.rates[0, MEAN_YOUNG]
    if mean < 0.0:
        return pick(herd.streams, YOUNG, plan.litters[0], plan.litters.shape[1])
    factor = herd.weather[WEATHER_YOUNG] * mother_factor(plan, herd, mother)
    return poisson(herd.streams, YOUNG, mean * factor)


@inner
def note_bred(herd: Herd, slot: int) -> None:
    """Count a newcomer the first time that it has young."""
    if herd.who[ORIGIN, slot] > 0 and herd.who[BRED, slot] == 0:
        herd.who[BRED, slot] = 1
        herd.number[EFFECTIVE] += 1


@inner
def mutated(plan: Plan, herd: Herd, copies: np.uint64) -> np.uint64:
    """Return a gamete of the tracked loci after mutation; nothing is drawn where none is given."""
    for i in range(plan.mutation.shape[0]):
        if plan.mutation[i, 0] > 0.0 or plan.mutation[i, 1] > 0.0:
            bit = _ONE << np.uint64(i)
            chance = plan.mutation[i, 1] if copies & bit else plan.mutation[i, 0]
            if uniform(herd.streams, GAMETES) < chance:
                copies ^= bit
    return copies


@inner
def one_young(plan: Plan, herd: Herd, dam: int, sire: int, survival: float) -> int:
    """Bear one young and let it live or die through its first year."""
    herd.number[BORN] += 1
    sex = FEMALE if uniform(herd.streams, YOUNG) < plan.rates[0, FEMALE_SHARE] else MALE
    at = herd.number[YOUNG_LIVED]
    if at == herd.young.shape[1]:
        return FULL
    cost = cost_factor(plan.rates[0, LETHAL_FIRST], herd.kin[dam, sire])
    survival *= cost * herd.weather[SCALE_FIRST]
    if plan.fitness.shape[0] > 0:
        one = mutated(plan, herd, pass_on_loci(herd.streams, GAMETES, herd.loci, dam))
        two = mutated(plan, herd, pass_on_loci(herd.streams, GAMETES, herd.loci, sire))
        herd.young_loci[at, 0], herd.young_loci[at, 1] = one, two
        survival *= fitness(plan, one, two) * herd.weather[SCALE_LOCI]
    if survival > 1.0:
        herd.number[CAPPED] += 1
    if uniform(herd.streams, FIRST_YEAR) >= survival:
        herd.number[FIRST_DIED] += 1
        return DONE
    herd.young[DAM, at], herd.young[SIRE, at] = dam, sire
    herd.young[YOUNG_SEX, at], herd.young[KEPT, at] = sex, 1
    herd.number[YOUNG_LIVED] += 1
    return DONE


@inner
def first_year_survival(plan: Plan, herd: Herd, year: int) -> float:
    """Return the year's survival of young before what is each one's own."""
    survival: float = herd.weather[WEATHER_SURVIVAL] * plan.yearly[YEAR_FIRST_TIMES, year]
    capacity = plan.yearly[YEAR_CAPACITY, year]
    if plan.rates[0, GRADUAL] == 1.0 and not math.isinf(capacity):
        growth = max(1.0, plan.rates[0, GROWTH])
        survival /= 1.0 + (growth - 1.0) * herd.number[ADULTS_NOW] / capacity
    return survival


@inner
def breed(plan: Plan, herd: Herd, year: int) -> int:
    """Do the year's breeding; young that live through it are in `Herd.young`."""
    herd.number[YOUNG_LIVED] = 0
    mothers, males = find_breeders(plan, herd)
    if males == 0 or mothers == 0:
        return DONE
    form = int(plan.rates[0, FORM])
    if form == PAIRS:
        mothers = make_pairs(plan, herd, mothers, males)
    elif form == HAREMS:
        males = hold_harems(plan, herd, males)
    total = 0.0
    for i in range(males):
        total += herd.traits[WEIGHT, herd.list_b[i]]
        herd.sums[i] = total
    survival = first_year_survival(plan, herd, year)
    for i in range(mothers):
        dam, sire = herd.list_a[i], -1
        if form == PAIRS:
            sire = herd.who[MATE, dam]
        elif form == HAREMS:
            sire = herd.list_b[pick(herd.streams, BREEDING, herd.sums, males)]
        young = litter(plan, herd, dam)
        for _ in range(young):
            if form == OPEN:
                sire = herd.list_b[pick(herd.streams, YOUNG, herd.sums, males)]
            note_bred(herd, sire)
            note_bred(herd, dam)
            if one_young(plan, herd, dam, sire, survival) == FULL:
                return FULL
    return DONE
