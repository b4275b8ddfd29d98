"""What the engine's kernels share: the arrays of a plan, of a replicate at work, and their rows.

Numba takes named tuples of arrays as they are. `Plan` is read only and the same for all
replicates; `Herd` is the room one worker uses, written over by each replicate.

Axes: P populations (0 the recipient, d + 1 the donor d), D donors, L tracked loci, S slots (an
animal stays in its slot), W words of markers, Y years, sexes 0 female and 1 male. A kernel that
fills a whole year's part of the engine takes both tuples and the year counted from the start.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]
Words = NDArray[np.uint64]

FEMALE, MALE = 0, 1
PAIRS, HAREMS, OPEN = 0, 1, 2
STOP, RELEASE_THEN = 0, 1

# Rows of Plan.rates[population]: numbers of a life cycle.
(
    FIRST_FEMALE,  # first breeding ages
    FIRST_MALE,
    LAST_AGE,
    SURVIVAL,  # first year, subadult, adult, in this order
    SURVIVAL_1,
    SURVIVAL_2,
    SURVIVAL_SD,  # the same classes; 0 for none
    SURVIVAL_SD_1,
    SURVIVAL_SD_2,
    YOUNG_SIGMA,  # of the logarithm
    COPULA,  # correlation of the two normal numbers
    SHARE_BREEDING,
    MEAN_YOUNG,  # of Poisson litters; below 0 where Plan.litters holds their chances
    FEMALE_SHARE,
    FORM,
    SHARE_OF_MALES,
    SKEW,  # coefficient of variation of males' weights
    STAY,  # 1 where pairs stay together
    GRADUAL,  # 1 for gradual crowding
    GROWTH,  # yearly, without crowding
    LETHAL_FIRST,  # diploid lethal equivalents
    LETHAL_YOUNG,
    HERE_NOW,
    FEWEST,
    CAPACITY,  # of a donor; the recipient's is in Plan.yearly
    HAS_LIFE,  # 0 for a donor that is a number only
    NUMBER,  # its number then
    DIVERSITY_SCALE,  # c: marker diversity over that of the case
    DIVERSITY_GIVEN,  # the case's own gene diversity of today
) = range(29)
RATES = 29

# Rows of Plan.yearly.
YEAR_CAPACITY, YEAR_FIRST_TIMES, YEAR_COST = 0, 1, 2

# Columns of Plan.die_offs: population, yearly chance, share lost of the classes, of young.
DIE_POPULATION, DIE_CHANCE, DIE_LOST, DIE_YOUNG = 0, 1, 2, 5

# Columns of Plan.releases; a year of -1 is a rule's release.
(
    LET_YEAR,
    LET_DONOR,
    LET_FEMALES,
    LET_MALES,
    LET_AGE,
    LET_SURVIVE,
    LET_FACTOR,
    LET_LOAN,
    LET_COST_EACH,
    LET_COST_EVENT,
) = range(10)

# Columns of Plan.steady: donor, animals a year, first year, first year without.
FLOW_DONOR, FLOW_RATE, FLOW_FROM, FLOW_UNTIL = 0, 1, 2, 3

# Columns of Plan.rules.
(
    RULE_COLUMN,
    RULE_ABOVE,
    RULE_BELOW,
    RULE_SURVEYS,
    RULE_EVERY,
    RULE_SD,
    RULE_DELAY,
    RULE_THEN,
    RULE_AT_MOST,
    RULE_RELEASE,
) = range(10)

# Rows of Herd.who, one column a slot.
SEX, AGE, ORIGIN, IDENTITY, MATE, MATE_IDENTITY, LEAVES, WAITS, BRED = range(9)
WHO = 9
# Rows of Herd.traits, one column a slot.
FACTOR, WEIGHT = 0, 1
# Rows of Herd.young, one column a young that lived through its first year.
DAM, SIRE, YOUNG_SEX, KEPT = 0, 1, 2, 3

# Entries of Herd.number.
(
    LIVING,
    FREE,
    TOP,  # slots below this have been used
    NEXT,  # next identity
    YOUNG_LIVED,
    PERSISTS,
    RELEASED,
    EFFECTIVE,
    ARRIVED,
    LOST,
    SHORT,
    BORN,
    FIRST_DIED,
    DIED,
    REMOVED,
    LEFT,
    CAPPED,
    STOP_YEAR,
    ADULTS_NOW,
    CENTS,
) = range(20)
NUMBERS = 20

# Entries of Herd.weather: survival of the classes, factor on young, then constants of the
# replicate, by which costs in the first year, of mothers, and fitness at tracked loci (all loci
# one factor) are multiplied; and the money spent so far.
WEATHER_SURVIVAL, WEATHER_YOUNG = 0, 3
SCALE_FIRST, SCALE_MOTHER, SCALE_LOCI, COST_SO_FAR = 4, 5, 6, 7
WEATHERS = 8

# Columns of a census; then D of ancestry, D of donors' adults, L of allele frequencies.
(
    ADULTS,
    YOUNG_SEEN,
    FEMALES,
    MALES,
    GENE_DIVERSITY,
    DIVERSITY_KEPT,
    OBSERVED,
    INBREEDING,
    KINSHIP,
    ANCESTRY,
    ANCESTRY_SD,
    RARE_KEPT,
    PERSISTING,
    RELEASED_SO_FAR,
    EFFECTIVE_SO_FAR,
    COST,
    ALIVE,
    BORN_SO_FAR,
    FIRST_DIED_SO_FAR,
    DIED_SO_FAR,
    REMOVED_SO_FAR,
    LEFT_SO_FAR,
    ARRIVED_SO_FAR,
    LOST_SO_FAR,
    SHORT_SO_FAR,
    CAPPED_SO_FAR,
) = range(26)
COLUMNS = 26

DONE, STOPPED, FULL = 0, 1, 2
"""How a replicate ended: whole, cancelled, or in want of more slots."""


class Plan(NamedTuple):
    """One plan as arrays, read only; rows and columns are named above."""

    rates: FloatArray  # (P, RATES)
    yearly: FloatArray  # (3, Y)
    quantiles: FloatArray  # (P, 3, points): survival at evenly spaced normal numbers
    die_offs: FloatArray  # (n, 6)
    litters: FloatArray  # (P, n): running sums of the chance of 0, 1, .. young
    releases: FloatArray  # (n, 10)
    steady: FloatArray  # (n, 4)
    rules: FloatArray  # (n, 10)
    numbers: IntArray  # (P, 2, 2): sex; subadults, adults at the start
    ages: FloatArray  # (P, 2, ages): weights of ages 1, 2, ..
    mixing: FloatArray  # (P, P): normal numbers behind allele frequencies, from unrelated ones
    kinship: FloatArray  # (P, P)
    own: FloatArray  # (P,): inbreeding coefficient of an animal drawn from a population
    ancestry: FloatArray  # (D,): of the recipient at the start
    fitness: FloatArray  # (L, 3): of AA, Aa, aa
    frequency: FloatArray  # (L, P): of the named allele
    mutation: FloatArray  # (L, 2): to it, from it
    place: IntArray  # (markers,): word times 64 plus bit, so 0, 1, 2, ..
    valid: Words  # (W,)
    chromosomes: IntArray  # (C, 2): first marker, markers; C = 0: all unlinked
    ends: FloatArray  # (C,): running sums of lengths in Morgans


class Herd(NamedTuple):
    """The room of one replicate at work; rows and columns are named above."""

    who: IntArray  # (WHO, S)
    traits: FloatArray  # (2, S)
    genome: Words  # (S, 2, planes, W)
    loci: Words  # (S, 2): a bit for each tracked locus
    kin: NDArray[np.float32]  # (S, S)
    order: IntArray  # (S,): slots of the living, the longest here first
    free: IntArray  # (S,): a stack
    number: IntArray  # (NUMBERS,)
    weather: FloatArray  # (WEATHERS,)
    young: IntArray  # (4, S)
    young_loci: Words  # (S, 2)
    list_a: IntArray  # (S,) room for lists
    list_b: IntArray  # (S,)
    sums: FloatArray  # (S,)
    mask: Words  # (W,)
    counter: Words  # (64,)
    rare: Words  # (2, W)
    seen: Words  # (2, W)
    thresholds: Words  # (P, 33, W)
    marker: FloatArray  # (P, markers)
    donors: IntArray  # (D, 2, ages): animals of each age
    acted: IntArray  # (rules, 2): surveys met one after the other; times acted
    due: IntArray  # (rules, Y): releases that a rule has set for a year
    streams: Words  # (PURPOSES, 4)
    donor_streams: Words  # (PURPOSES, 4)
    donor_weather: FloatArray  # (4,)
    census: FloatArray  # (columns,): the last one
