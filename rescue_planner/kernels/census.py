"""What a census reads: every measure of a year, from the animals alive before breeding."""

from __future__ import annotations

import math

import numpy as np

from rescue_planner.kernels.donors import donor_adults
from rescue_planner.kernels.genomes import (
    copies_from,
    find_rare,
    gene_diversity,
    observed_heterozygosity,
    present,
    rare_left,
)
from rescue_planner.kernels.herd import (
    ADULTS,
    ADULTS_NOW,
    AGE,
    ALIVE,
    ANCESTRY,
    ANCESTRY_SD,
    ARRIVED,
    ARRIVED_SO_FAR,
    BORN,
    BORN_SO_FAR,
    CAPPED,
    CAPPED_SO_FAR,
    COLUMNS,
    COST,
    COST_SO_FAR,
    DIED,
    DIED_SO_FAR,
    DIVERSITY_GIVEN,
    DIVERSITY_KEPT,
    DIVERSITY_SCALE,
    EFFECTIVE,
    EFFECTIVE_SO_FAR,
    FEMALE,
    FEMALES,
    FEWEST,
    FIRST_DIED,
    FIRST_DIED_SO_FAR,
    FIRST_FEMALE,
    GENE_DIVERSITY,
    INBREEDING,
    KINSHIP,
    LEFT,
    LEFT_SO_FAR,
    LIVING,
    LOST,
    LOST_SO_FAR,
    MALES,
    OBSERVED,
    PERSISTING,
    PERSISTS,
    RARE_KEPT,
    RELEASED,
    RELEASED_SO_FAR,
    REMOVED,
    REMOVED_SO_FAR,
    SEX,
    SHORT,
    SHORT_SO_FAR,
    YOUNG_SEEN,
    Herd,
    Plan,
)
from rescue_planner.kernels.inner import inner
from rescue_planner.kernels.relatives import mean_inbreeding, mean_kinship

RARE_BELOW = 0.05
"""An allele is rare where its frequency among adults at the start is above 0 and below this."""

_ONE = np.uint64(1)


@inner
def list_adults(plan: Plan, herd: Herd) -> int:
    """List the adults in `list_a`, fill the numbers of a census row, return how many adults."""
    row = herd.census
    adults, females, young = 0, 0, 0
    for at in range(herd.number[LIVING]):
        slot = herd.order[at]
        sex, age = herd.who[SEX, slot], herd.who[AGE, slot]
        if age == 1:
            young += 1
        if age >= int(plan.rates[0, FIRST_FEMALE + sex]):
            herd.list_a[adults] = slot
            adults += 1
            if sex == FEMALE:
                females += 1
    row[ADULTS], row[YOUNG_SEEN] = adults, young
    row[FEMALES], row[MALES] = females, adults - females
    herd.number[ADULTS_NOW] = adults
    fewest = plan.rates[0, FEWEST]
    if adults < fewest or females == 0 or females == adults:
        herd.number[PERSISTS] = 0
    return adults


@inner
def read_ancestry(plan: Plan, herd: Herd, adults: int) -> None:
    """Fill realised ancestry: mean of each donor, mean and spread of all donors together."""
    row, donors = herd.census, plan.ancestry.size
    copies = 2.0 * plan.place.size
    total, squares = 0.0, 0.0
    for i in range(adults):
        share = 0.0
        for d in range(donors):
            part = copies_from(herd.genome, herd.list_a[i], d + 1) / copies
            row[COLUMNS + d] += part / adults
            share += part
        total += share
        squares += share * share
    mean = total / adults
    row[ANCESTRY] = mean
    row[ANCESTRY_SD] = math.sqrt(max(0.0, squares / adults - mean * mean))


@inner
def read_genes(plan: Plan, herd: Herd, year: int, adults: int) -> None:
    """Fill the genetic measures of a census with adults."""
    row, markers = herd.census, plan.place.size
    diversity = gene_diversity(herd.genome, herd.list_a, adults, markers, herd.counter)
    diversity /= plan.rates[0, DIVERSITY_SCALE]
    present(herd.genome, herd.list_a, adults, plan.valid, herd.seen)
    if year == 0:
        find_rare(herd.genome, herd.list_a, adults, plan.place, RARE_BELOW, herd.rare)
    given = plan.rates[0, DIVERSITY_GIVEN]
    observed = observed_heterozygosity(herd.genome, herd.list_a, adults, markers)
    row[GENE_DIVERSITY] = diversity
    row[DIVERSITY_KEPT] = diversity / given if given > 0.0 else np.nan
    row[OBSERVED] = observed / plan.rates[0, DIVERSITY_SCALE]
    row[RARE_KEPT] = rare_left(herd.rare, herd.seen)
    row[INBREEDING] = mean_inbreeding(herd.kin, herd.list_a, adults)
    row[KINSHIP] = mean_kinship(herd.kin, herd.list_a, adults)
    donors = plan.ancestry.size
    if donors > 0:
        read_ancestry(plan, herd, adults)
    for i in range(plan.fitness.shape[0]):
        bit, named = np.uint64(i), 0
        for j in range(adults):
            for side in range(2):
                named += int(np.int64((herd.loci[herd.list_a[j], side] >> bit) & _ONE))
        row[COLUMNS + 2 * donors + i] = named / (2.0 * adults)


@inner
def take_census(plan: Plan, herd: Herd, year: int) -> None:
    """Fill `Herd.census` for one year; genetic measures are NaN where there is no adult."""
    row, donors = herd.census, plan.ancestry.size
    for i in range(row.size):
        row[i] = 0.0
    adults = list_adults(plan, herd)
    if adults > 0:
        read_genes(plan, herd, year, adults)
    else:
        for i in range(GENE_DIVERSITY, RARE_KEPT + 1):
            row[i] = np.nan
        for i in range(COLUMNS, row.size):
            row[i] = np.nan
    for d in range(donors):
        row[COLUMNS + donors + d] = donor_adults(plan, herd, d)
    row[PERSISTING] = herd.number[PERSISTS]
    row[RELEASED_SO_FAR] = herd.number[RELEASED]
    row[EFFECTIVE_SO_FAR] = herd.number[EFFECTIVE]
    row[COST] = herd.weather[COST_SO_FAR]
    row[ALIVE] = herd.number[LIVING]
    row[BORN_SO_FAR] = herd.number[BORN]
    row[FIRST_DIED_SO_FAR] = herd.number[FIRST_DIED]
    row[DIED_SO_FAR] = herd.number[DIED]
    row[REMOVED_SO_FAR] = herd.number[REMOVED]
    row[LEFT_SO_FAR] = herd.number[LEFT]
    row[ARRIVED_SO_FAR] = herd.number[ARRIVED]
    row[LOST_SO_FAR] = herd.number[LOST]
    row[SHORT_SO_FAR] = herd.number[SHORT]
    row[CAPPED_SO_FAR] = herd.number[CAPPED]
