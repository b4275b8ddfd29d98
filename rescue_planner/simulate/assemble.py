"""From a world to the arrays of the kernels, and the room a worker needs."""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray
from scipy.special import betaincinv, ndtr

from rescue_planner.kernels import genomes, herd, relatives, streams
from rescue_planner.kernels.herd import Herd, Plan
from rescue_planner.kernels.weather import WIDTH
from rescue_planner.simulate.founders import (
    founder_kinship,
    marker_model,
    stable_ages,
    start_times,
    subadults,
    yearly_growth,
)
from rescue_planner.simulate.measures import column_of
from rescue_planner.simulate.world import Donor, Life, NotPossible, Release, World
from rescue_planner.theory.weather import beta_parameters, yearly_chance

FloatArray = NDArray[np.float64]

POINTS = 8193
"""Of a table of survival quantiles: between them it is off by less than 1e-6."""
_FORMS = {"pairs": herd.PAIRS, "harems": herd.HAREMS, "open": herd.OPEN}


class Assembled(NamedTuple):
    """A plan for the kernels, and what of the given founders could not be held exactly.

    `kinship_moved` and `diversity_moved` are the largest changes, 0 for none.
    """

    plan: Plan
    kinship_moved: float
    diversity_moved: float


def survival_table(mean: float, sd: float) -> FloatArray:
    """Return the quantiles of a yearly survival at even steps of a normal number, (POINTS,).

    Raises
    ------
    NotPossible
        If no share between 0 and 1 has that mean and SD.
    """
    if sd == 0.0:
        return np.full(POINTS, mean)
    try:
        alpha, beta = beta_parameters(mean, sd)
    except ValueError as error:
        raise NotPossible(
            f"A yearly survival of {mean:g} cannot vary with an SD of {sd:g}: its square has to "
            f"be below {mean * (1.0 - mean):g}. Give a smaller SD."
        ) from error
    at = np.linspace(-WIDTH, WIDTH, POINTS)
    return np.asarray(betaincinv(alpha, beta, ndtr(at)), dtype=np.float64)


def _rates(life: Life, capacity: float, generation_years: float) -> FloatArray:
    row = np.zeros(herd.RATES)
    row[herd.FIRST_FEMALE], row[herd.FIRST_MALE] = life.first_breeding_age
    row[herd.LAST_AGE] = life.last_age
    row[herd.SURVIVAL : herd.SURVIVAL + 3] = life.survival
    row[herd.SURVIVAL_SD : herd.SURVIVAL_SD + 3] = life.survival_sd
    row[herd.YOUNG_SIGMA] = math.sqrt(math.log1p(life.young_sd**2))
    row[herd.COPULA] = 2.0 * math.sin(math.pi * life.survival_young_correlation / 6.0)
    row[herd.SHARE_BREEDING] = life.share_of_females_breeding
    row[herd.MEAN_YOUNG] = -1.0 if life.young_counts else life.mean_young
    row[herd.FEMALE_SHARE] = life.females_among_young
    row[herd.FORM] = _FORMS[life.form]
    row[herd.SHARE_OF_MALES] = life.share_of_males_breeding
    row[herd.SKEW] = life.unequal_success
    row[herd.STAY] = float(life.stay_together)
    row[herd.GRADUAL] = float(life.gradual)
    row[herd.GROWTH] = yearly_growth(life)
    row[herd.HERE_NOW] = float(life.here_now)
    row[herd.FEWEST] = life.fewest_adults
    row[herd.CAPACITY] = capacity
    row[herd.HAS_LIFE] = 1.0
    return row


def _donor_rates(donor: Donor, generation_years: float) -> FloatArray:
    if donor.life is not None:
        return _rates(donor.life, donor.capacity, generation_years)
    row = np.zeros(herd.RATES)
    row[herd.NUMBER] = donor.adults
    return row


def _lives(world: World) -> list[Life | None]:
    return [world.life, *(donor.life for donor in world.donors)]


def _die_offs(world: World) -> FloatArray:
    rows = [
        [
            population,
            float(yearly_chance(off.chance_per_generation, world.generation_years)),
            *off.lost_share,
            off.young_lost_share,
        ]
        for population, life in enumerate(_lives(world))
        if life is not None
        for off in life.die_offs
    ]
    return np.array(rows, dtype=np.float64).reshape(-1, 6)


def _litters(world: World) -> FloatArray:
    """Return running sums of the chances of 0, 1, .. young by population, as wide as the widest."""
    given = [() if life is None else life.young_counts for life in _lives(world)]
    out = np.zeros((len(given), max(len(counts) for counts in given)))
    for population, counts in enumerate(given):
        padded = np.zeros(out.shape[1])
        padded[: len(counts)] = counts
        out[population] = np.cumsum(padded)
    return out


def _release_row(release: Release) -> list[float]:
    return [
        -1.0 if release.year is None else release.year,
        release.donor,
        release.females,
        release.males,
        release.age,
        release.survive_to_breed,
        release.breeding_relative_to_residents,
        release.loan_years or 0,
        release.cost_each_animal,
        release.cost_each_event,
    ]


def _rule_rows(world: World) -> tuple[list[list[float]], list[list[float]]]:
    """Return the rules, and the releases they set, which come after the plan's own."""
    rules: list[list[float]] = []
    releases: list[list[float]] = []
    for rule in world.rules:
        row = -1
        if rule.then == "release" and rule.release is not None:
            row = len(world.releases) + len(releases)
            releases.append([-1.0, *_release_row(rule.release)[1:]])
        rules.append(
            [
                column_of(rule.when, len(world.donors), len(world.loci)),
                math.nan if rule.above is None else rule.above,
                math.nan if rule.below is None else rule.below,
                rule.surveys,
                rule.survey_every_years,
                rule.survey_sd,
                rule.delay_years,
                herd.STOP if rule.then == "stop" else herd.RELEASE_THEN,
                rule.at_most,
                row,
            ]
        )
    return rules, releases


def _map(world: World) -> tuple[NDArray[np.int64], FloatArray]:
    """Return the first marker and the markers of each chromosome (C, 2), and where each ends."""
    if world.morgans is None:
        return np.zeros((0, 2), dtype=np.int64), np.zeros(0)
    count = min(world.chromosomes, world.markers)
    firsts = np.arange(count + 1) * world.markers // count
    chromosomes = np.stack([firsts[:-1], np.diff(firsts)], axis=1).astype(np.int64)
    return chromosomes, world.morgans * np.arange(1.0, count + 1.0)


def _valid(markers: int) -> NDArray[np.uint64]:
    """Return the bits that stand for markers, (words,)."""
    valid = np.full((markers + 63) // 64, ~np.uint64(0))
    if markers % 64:
        valid[-1] = (np.uint64(1) << np.uint64(markers % 64)) - np.uint64(1)
    return valid


def _numbers(world: World, ages: list[FloatArray]) -> NDArray[np.int64]:
    out = np.zeros((len(world.donors) + 1, 2, 2), dtype=np.int64)
    groups: list[tuple[Life | None, int, int]] = [
        (world.life, world.adults, world.adult_females),
        *((donor.life, donor.adults, donor.adult_females) for donor in world.donors),
    ]
    for population, (life, adults, females) in enumerate(groups):
        if life is None:
            continue
        for sex, count in enumerate((females, adults - females)):
            out[population, sex] = subadults(life, count, sex, ages[population]), count
    if world.subadults is not None:
        out[0, :, 0] = world.subadults
    return out


def _yearly(world: World) -> FloatArray:
    out = np.empty((3, world.years))
    out[herd.YEAR_CAPACITY] = math.inf if world.capacity is None else world.capacity
    out[herd.YEAR_FIRST_TIMES] = 1.0 if world.first_year_times is None else world.first_year_times
    out[herd.YEAR_COST] = 0.0 if world.cost is None else world.cost
    return out


def _table(rows: list[list[float]], columns: int) -> FloatArray:
    return np.array(rows, dtype=np.float64).reshape(-1, columns)


def assemble(world: World) -> Assembled:
    """Return a world as the arrays of the kernels.

    Raises
    ------
    NotPossible
        If a yearly SD is not feasible, or a rule reads what no census holds.
    """
    lives, donors = _lives(world), len(world.donors)
    last = max(life.last_age for life in lives if life is not None)
    times = start_times(
        world.life,
        1.0 - float(world.diversity[0, 0]) / world.reference,
        world.lethal_first_year,
        world.lethal_young,
    )
    each = [
        np.zeros((2, last)) if life is None else stable_ages(life, 1.0 if population else times)
        for population, life in enumerate(lives)
    ]
    ages = np.zeros((donors + 1, 2, last))
    for population, weights in enumerate(each):
        ages[population, :, : weights.shape[1]] = weights
    rates = [
        _rates(world.life, math.inf, world.generation_years),
        *(_donor_rates(donor, world.generation_years) for donor in world.donors),
    ]
    kinship, own = founder_kinship(world.diversity, world.reference, world.kinship_among_released)
    markers = marker_model(world.diversity)
    rates[0][herd.GROWTH] = yearly_growth(world.life, times)
    rates[0][herd.LETHAL_FIRST] = world.lethal_first_year
    rates[0][herd.LETHAL_YOUNG] = world.lethal_young
    rates[0][herd.DIVERSITY_SCALE] = markers.scale
    rates[0][herd.DIVERSITY_GIVEN] = world.diversity[0, 0]
    chromosomes, ends = _map(world)
    rules, more = _rule_rows(world)
    generation = world.generation_years
    plan = Plan(
        rates=np.array(rates),
        yearly=_yearly(world),
        quantiles=np.array([_tables(life) for life in lives]),
        die_offs=_die_offs(world),
        litters=_litters(world),
        releases=_table([*(_release_row(r) for r in world.releases), *more], 10),
        steady=_table(
            [
                [f.donor, f.migrants_per_generation / generation, f.from_year, f.to_year + 1]
                for f in world.steady
            ],
            4,
        ),
        rules=_table(rules, 10),
        numbers=_numbers(world, each),
        ages=ages,
        mixing=markers.mixing,
        kinship=kinship.matrix,
        own=own,
        ancestry=np.zeros(donors) if world.ancestry is None else world.ancestry,
        fitness=_table([list(locus.fitness) for locus in world.loci], 3),
        frequency=_table([list(locus.frequency) for locus in world.loci], donors + 1),
        mutation=_table([[x.mutation_to, x.mutation_from] for x in world.loci], 2),
        place=np.arange(world.markers),
        valid=_valid(world.markers),
        chromosomes=chromosomes,
        ends=ends,
    )
    return Assembled(plan, kinship.moved, markers.moved)


def _tables(life: Life | None) -> FloatArray:
    if life is None:
        return np.zeros((3, POINTS))
    return np.array(
        [survival_table(m, sd) for m, sd in zip(life.survival, life.survival_sd, strict=True)]
    )


def first_slots(plan: Plan) -> int:
    """Return a first guess of how many slots a replicate needs; more are made where wanted."""
    animals, adults = int(plan.numbers[0].sum()), int(plan.numbers[0, :, 1].sum())
    most = float(np.max(plan.yearly[herd.YEAR_CAPACITY]))
    if math.isfinite(most):
        animals = max(animals, int(most * max(1.0, animals / max(1, adults))))
    return int(plan.kinship.shape[0] + plan.ages.shape[2] + 2 * animals + 32)


def bytes_needed(plan: Plan, slots: int) -> int:
    """Return about how many bytes the room of one worker takes, mostly kinship."""
    each = 8 * (2 * _planes(plan) * int(plan.valid.size) + herd.WHO + 15)
    populations, markers = int(plan.mixing.shape[0]), int(plan.place.size)
    # Thresholds take 33 bits a marker and population, frequencies 64.
    return relatives.bytes_needed(slots) + each * slots + populations * markers * 13


def _planes(plan: Plan) -> int:
    return 1 + int(plan.ancestry.size).bit_length()


def room(plan: Plan, slots: int) -> Herd:
    """Return the room of one worker, for so many animals at a time."""
    populations, donors = plan.mixing.shape[0], plan.ancestry.size
    words, rules, years = plan.valid.size, plan.rules.shape[0], plan.yearly.shape[1]

    def whole(*shape: int) -> NDArray[np.int64]:
        return np.zeros(shape, dtype=np.int64)

    def bits(*shape: int) -> NDArray[np.uint64]:
        return np.zeros(shape, dtype=np.uint64)

    return Herd(
        who=whole(herd.WHO, slots),
        traits=np.zeros((2, slots)),
        genome=bits(slots, 2, _planes(plan), words),
        loci=bits(slots, 2),
        kin=np.zeros((slots, slots), dtype=np.float32),
        order=whole(slots),
        free=whole(slots),
        number=whole(herd.NUMBERS),
        weather=np.zeros(herd.WEATHERS),
        young=whole(4, slots),
        young_loci=bits(slots, 2),
        list_a=whole(slots),
        list_b=whole(slots),
        sums=np.zeros(slots),
        mask=bits(words),
        counter=bits(64),
        rare=bits(2, words),
        seen=bits(2, words),
        thresholds=bits(populations, genomes.THRESHOLD_BITS + 1, words),
        marker=np.zeros((populations, plan.place.size)),
        donors=whole(donors, 2, plan.ages.shape[2]),
        acted=whole(rules, 2),
        due=whole(rules, years),
        streams=bits(streams.PURPOSES, 4),
        donor_streams=bits(streams.PURPOSES, 4),
        donor_weather=np.zeros(4),
        census=np.zeros(herd.COLUMNS + 2 * donors + plan.fitness.shape[0]),
    )
