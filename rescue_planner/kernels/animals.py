"""Animals come into a herd and leave it; the founders of a replicate."""

from __future__ import annotations

import math

import numpy as np

from rescue_planner.kernels.draws import normal, pick, unequal
from rescue_planner.kernels.genomes import make_founder, mix_origin, set_thresholds
from rescue_planner.kernels.herd import (
    AGE,
    BRED,
    DONE,
    FACTOR,
    FEMALE,
    FIRST_FEMALE,
    FREE,
    FULL,
    HERE_NOW,
    IDENTITY,
    LEAVES,
    LETHAL_FIRST,
    LETHAL_YOUNG,
    LIVING,
    MALE,
    MATE,
    NEXT,
    ORIGIN,
    PERSISTS,
    SCALE_FIRST,
    SCALE_LOCI,
    SCALE_MOTHER,
    SEX,
    SKEW,
    STOP_YEAR,
    TOP,
    WAITS,
    WEIGHT,
    Herd,
    Plan,
)
from rescue_planner.kernels.inner import inner
from rescue_planner.kernels.relatives import add_founder, seed_populations
from rescue_planner.kernels.streams import FOUNDERS, uniform

_ZERO, _ONE, _TWO = np.uint64(0), np.uint64(1), np.uint64(2)


@inner
def take_slot(herd: Herd, sex: int, age: int) -> int:
    """Put a new animal into a free slot at the end of the order; -1 where none is free."""
    if herd.number[FREE] == 0:
        return -1
    herd.number[FREE] -= 1
    slot: int = herd.free[herd.number[FREE]]
    herd.number[TOP] = max(herd.number[TOP], slot + 1)
    herd.order[herd.number[LIVING]] = slot
    herd.number[LIVING] += 1
    herd.who[SEX, slot], herd.who[AGE, slot] = sex, age
    herd.who[ORIGIN, slot], herd.who[IDENTITY, slot] = 0, herd.number[NEXT]
    herd.who[MATE, slot], herd.who[LEAVES, slot] = -1, -1
    herd.who[WAITS, slot], herd.who[BRED, slot] = 0, 0
    herd.number[NEXT] += 1
    herd.traits[FACTOR, slot], herd.traits[WEIGHT, slot] = 1.0, 1.0
    return slot


@inner
def release_slot(herd: Herd, slot: int) -> None:
    """Free the slot of an animal that is gone; the caller takes it out of the order."""
    herd.who[IDENTITY, slot] = -1
    herd.free[herd.number[FREE]] = slot
    herd.number[FREE] += 1


@inner
def give_weight(plan: Plan, herd: Herd, k: int, slot: int) -> None:
    """Draw how a male compares with others in mating, for life; times his factor."""
    if herd.who[SEX, slot] == MALE:
        weight = unequal(herd.streams, k, plan.rates[0, SKEW])
        herd.traits[WEIGHT, slot] = weight * herd.traits[FACTOR, slot]


@inner
def draw_loci(plan: Plan, herd: Herd, k: int, population: int, slot: int) -> None:
    """Draw both copies of each tracked locus by the population's frequencies."""
    for side in range(2):
        copies = _ZERO
        for i in range(plan.fitness.shape[0]):
            if uniform(herd.streams, k) < plan.frequency[i, population]:
                copies |= _ONE << np.uint64(i)
        herd.loci[slot, side] = copies


@inner
def place_loci(plan: Plan, herd: Herd, first: int, last: int) -> None:
    """Give the animals at `first`..`last`-1 of the order the nearest whole count of each allele."""
    copies = 2 * (last - first)
    for i in range(plan.fitness.shape[0]):
        wanted = math.floor(plan.frequency[i, 0] * copies + 0.5)
        left = copies
        for at in range(first, last):
            slot = herd.order[at]
            for side in range(2):
                if uniform(herd.streams, FOUNDERS) * left < wanted:
                    herd.loci[slot, side] |= _ONE << np.uint64(i)
                    wanted -= 1
                left -= 1


@inner
def draw_frequencies(plan: Plan, herd: Herd) -> None:
    """Draw each marker's frequency in every population: Phi of correlated normal numbers."""
    populations = plan.mixing.shape[0]
    for i in range(plan.place.size):
        for p in range(populations):
            herd.sums[p] = normal(herd.streams, FOUNDERS)
        for p in range(populations):
            x = 0.0
            for q in range(populations):
                x += plan.mixing[p, q] * herd.sums[q]
            herd.marker[p, i] = 0.5 * math.erfc(-x / math.sqrt(2.0))
    for p in range(populations):
        set_thresholds(herd.marker, p, plan.place, herd.thresholds)


@inner
def draw_age(plan: Plan, herd: Herd, k: int, population: int, sex: int, adult: int) -> int:
    """Draw the age of a founder of a class (0 subadult, 1 adult) from the given weights."""
    first = int(plan.rates[population, FIRST_FEMALE + sex])
    low, high = (first, plan.ages.shape[2]) if adult == 1 else (1, first - 1)
    if high <= low:
        return low
    total = 0.0
    for age in range(low, high + 1):
        total += plan.ages[population, sex, age - 1]
        herd.sums[age - low] = total
    return low + pick(herd.streams, k, herd.sums, high - low + 1)


@inner
def empty(plan: Plan, herd: Herd) -> None:
    """Clear the herd; the first slots stand for populations, the rest are free, lowest first."""
    populations, slots = plan.kinship.shape[0], herd.order.size
    herd.number[:] = 0
    herd.weather[:] = 0.0
    herd.acted[:] = 0
    herd.due[:] = 0
    herd.loci[:] = _ZERO
    herd.who[IDENTITY] = -1
    for i in range(slots - populations):
        herd.free[i] = slots - 1 - i
    herd.number[FREE] = slots - populations
    herd.number[TOP] = populations
    herd.number[PERSISTS] = 1
    herd.number[STOP_YEAR] = 1 << 40
    seed_populations(herd.kin, plan.kinship)


@inner
def found(plan: Plan, herd: Herd) -> int:
    """Make the animals alive at the start: adults by sex, then subadults by sex."""
    empty(plan, herd)
    draw_frequencies(plan, herd)
    earlier = 0.0
    for d in range(plan.ancestry.size):
        earlier += plan.ancestry[d]
    for stage in (1, 0):
        first = herd.number[LIVING]
        for sex in (FEMALE, MALE):
            for _ in range(plan.numbers[0, sex, stage]):
                age = draw_age(plan, herd, FOUNDERS, 0, sex, stage)
                slot = take_slot(herd, sex, age)
                if slot < 0:
                    return FULL
                give_weight(plan, herd, FOUNDERS, slot)
                make_founder(
                    herd.streams, FOUNDERS, herd.thresholds, 0, plan.valid, herd.genome, slot
                )
                if earlier > 0.0:
                    mix_origin(herd.streams, FOUNDERS, plan.ancestry, plan.place, herd.genome, slot)
                herd.loci[slot, 0] = herd.loci[slot, 1] = _ZERO
                add_founder(herd.kin, 0, slot, herd.number[TOP], plan.own[0])
        place_loci(plan, herd, first, herd.number[LIVING])
    set_scales(plan, herd)
    return DONE


@inner
def cost_factor(lethal: float, f: float) -> float:
    """Return exp(-(B/2) max(0, F)), B in diploid lethal equivalents."""
    return math.exp(-0.5 * lethal * max(0.0, f))


@inner
def genotype(one: np.uint64, two: np.uint64, locus: int) -> int:
    """Return the column of a genotype in a table of fitness: 0 AA, 1 Aa, 2 aa."""
    bit = np.uint64(locus)
    return int(np.int64(_TWO - ((one >> bit) & _ONE) - ((two >> bit) & _ONE)))


@inner
def fitness(plan: Plan, one: np.uint64, two: np.uint64) -> float:
    """Return the product of fitness over the tracked loci of two gametes."""
    product = 1.0
    for i in range(plan.fitness.shape[0]):
        product *= plan.fitness[i, genotype(one, two, i)]
    return product


@inner
def set_scales(plan: Plan, herd: Herd) -> None:
    """Set what costs and fitness are multiplied by, so that the start (or the best) counts 1."""
    herd.weather[SCALE_FIRST] = herd.weather[SCALE_MOTHER] = 1.0
    best = 1.0
    for i in range(plan.fitness.shape[0]):
        best *= max(plan.fitness[i, 0], plan.fitness[i, 1], plan.fitness[i, 2])
    herd.weather[SCALE_LOCI] = 1.0 / best if best > 0.0 else 0.0
    adults = plan.numbers[0, FEMALE, 1] + plan.numbers[0, MALE, 1]
    if plan.rates[0, HERE_NOW] == 0.0 or adults == 0:
        return
    first, mother, loci = 0.0, 0.0, 0.0
    for at in range(adults):
        slot = herd.order[at]
        f = 2.0 * herd.kin[slot, slot] - 1.0
        first += cost_factor(plan.rates[0, LETHAL_FIRST], f)
        mother += cost_factor(plan.rates[0, LETHAL_YOUNG], f)
        loci += fitness(plan, herd.loci[slot, 0], herd.loci[slot, 1])
    herd.weather[SCALE_FIRST] = adults / first
    herd.weather[SCALE_MOTHER] = adults / mother
    herd.weather[SCALE_LOCI] = adults / loci if loci > 0.0 else 0.0
