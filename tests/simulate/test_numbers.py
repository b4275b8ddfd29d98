"""Numbers of animals against exact answers: branching processes, chains, the age matrix."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from lives import females_only, life, world
from scipy.stats import hypergeom

from rescue_planner.simulate.run import run
from rescue_planner.simulate.world import DieOff, Donor
from rescue_planner.theory import branching, ceiling_chain, weather
from rescue_planner.theory.life_table import female_matrix


def agrees(seen, chance, runs):
    """Within five binomial standard errors, plus one run for chances near 0."""
    return abs(seen - chance) < 5 * np.sqrt(chance * (1 - chance) / runs) + 1.0 / runs


# Values of the generating functions: Harris 1963; by the recursion in `theory.branching`.
@pytest.mark.parametrize("females", [1, 5])
def test_that_lines_of_females_die_out_as_a_branching_process(females):
    runs = 4000
    results = run(females_only(20, females, 0.25), runs, 11)
    gone = results.of("adult_females") == 0
    exact = branching.gone_by(0.8, 0.25, 20) ** females
    for year in (1, 5, 10, 20):
        assert agrees(gone[:, year].mean(), exact[year], runs)


def test_that_juveniles_and_adults_die_out_as_a_process_of_two_types():
    runs = 4000
    two = {"first_breeding_age": (2, 1), "survival": (1.0, 0.5, 0.8)}
    results = run(females_only(20, 1, 0.5, life=two, subadults=(0, 0)), runs, 12)
    females = results.of("animals") - results.of("adult_males")
    exact = branching.two_ages_gone_by(0.5, 0.8, 0.5, 20)[:, 1]
    for year in (1, 5, 20):
        assert agrees((females[:, year] == 0).mean(), exact[year], runs)


def test_that_changing_rates_act_in_the_years_they_belong_to():
    # Births fall year by year as in a schedule of inbreeding: Ne 10, B 6.
    years, runs = 50, 1500
    f = 1.0 - (1.0 - 1.0 / 20.0) ** (np.arange(years) / 5.0)
    falling = np.exp(-6.0 * f)
    start = females_only(years, 20, 0.3, first_year_times=falling)
    gone = (run(start, runs, 13).of("adult_females") == 0).mean(axis=0)
    for year in (20, 35, 50):
        exact = branching.gone_on_schedule(np.full(year, 0.8), 0.3 * falling[:year]) ** 20
        assert agrees(gone[year], float(exact), runs)


def two_sex_chain(start, survival, young, capacity, years):
    """Both sexes under a ceiling that removes old and new adults alike: exact, (F, M) by year."""
    size, most = capacity + 1, 3 * capacity
    number = np.arange(most + 1)
    crowd = np.zeros((most + 1, most + 1, size, size))
    for f in number:
        for m in number:
            if f + m <= capacity:
                crowd[f, m, f, m] = 1.0
            else:
                kept = np.arange(max(0, capacity - m), min(f, capacity) + 1)
                crowd[f, m, kept, capacity - kept] = hypergeom.pmf(kept, f + m, f, capacity)
    mass = np.zeros((size, size))
    mass[start] = 1.0
    out = [mass]
    lived = [ceiling_chain.binomial_terms(n, survival) for n in range(size)]
    steps = {}
    for f in range(size):
        for m in range(size - f):
            mean = 0.5 * young * f if m else 0.0
            births = np.exp(
                -mean + number * math.log(max(mean, 1e-300)) - [math.lgamma(n + 1) for n in number]
            )
            births = births if mean else (number == 0).astype(float)
            one = np.convolve(lived[f], births)[: most + 1]
            two = np.convolve(lived[m], births)[: most + 1]
            steps[f, m] = np.einsum("f,m,fmab->ab", one, two, crowd)
    for _ in range(years):
        mass = sum(mass[state] * step for state, step in steps.items())
        out.append(mass)
    return np.array(out)


def test_that_two_sexes_under_a_ceiling_follow_their_exact_chain():
    runs, years = 3000, 20
    start = world(
        years=years,
        life=life(survival=(0.5, 0.8, 0.8)),
        adults=6,
        adult_females=3,
        capacity=np.full(years, 7.9),
        markers=1,
    )
    results = run(start, runs, 14)
    exact = two_sex_chain((3, 3), 0.8, 0.5, 7, years)
    females, males = results.of("adult_females"), results.of("adult_males")
    for year in (1, 5, 20):
        none, missing = exact[year, 0, 0], exact[year, 0].sum() + exact[year, 1:, 0].sum()
        assert agrees(((females + males)[:, year] == 0).mean(), none, runs)
        assert agrees(((females == 0) | (males == 0))[:, year].mean(), missing, runs)
        mean = (exact[year] * np.add.outer(np.arange(8), np.arange(8))).sum()
        total = (females + males)[:, year]
        assert abs(total.mean() - mean) < 5 * total.std() / np.sqrt(runs)


def test_that_a_bad_year_is_shared_by_all_animals():
    runs = 6000
    one = life(survival=(0.5, 0.5, 0.5), survival_sd=(0.0, 0.0, 0.25), mean_young=0.0)
    results = run(world(years=1, life=one, adults=10, adult_females=5, markers=1), runs, 15)
    dead = (results.of("adults")[:, 1] == 0).mean()
    assert agrees(dead, float(weather.chance_all_die(10, 0.5, 0.25)), runs)  # 0.056, not 0.001
    left = results.of("adults")[:, 1]
    variance = float(weather.survivors_variance(10, 0.5, 0.25))
    assert abs(left.var() - variance) < 5 * variance * np.sqrt(2.0 / runs)


def test_that_first_year_survival_and_young_vary_together_as_asked():
    both = life(survival=(0.5, 0.5, 0.5), survival_sd=(0.1, 0, 0), mean_young=40.0, young_sd=0.3)
    for rho in (1.0, 0.0, -1.0):
        start = world(
            years=1, life=replace(both, survival_young_correlation=rho), adults=40, markers=1
        )
        start = replace(start, adult_females=20)
        results = run(start, 800, 16)
        born = results.of("born")[:, 1]
        share = 1 - results.of("died_in_first_year")[:, 1] / born
        assert abs(born.mean() - 800) < 5 * born.std() / np.sqrt(800)
        assert abs(share.mean() - 0.5) < 5 * share.std() / np.sqrt(800)
        assert abs(born.std() / 800 - 0.3) < 0.06  # shared lognormal, and a little Poisson
        ranks = np.corrcoef(np.argsort(np.argsort(born)), np.argsort(np.argsort(share)))[0, 1]
        assert abs(ranks - rho) < 0.15  # SE of a rank correlation 0.035, noise of counts beside


def test_that_die_offs_come_at_the_yearly_rate_of_their_chance_a_generation():
    runs = 8000
    off = DieOff(0.6, (1.0, 1.0, 1.0), 1.0)
    one = life(survival=(1.0, 1.0, 1.0), die_offs=(off,), mean_young=0.0)
    results = run(
        world(years=1, generation_years=5.0, life=one, adults=2, adult_females=1, markers=1),
        runs,
        17,
    )
    gone = (results.of("adults")[:, 1] == 0).mean()
    assert agrees(gone, 1 - 0.4**0.2, runs)  # 0.167; divided by T it would be 0.12


@pytest.mark.parametrize("counts", [(), (0.1, 0.2, 0.4, 0.3)])
def test_that_mean_numbers_follow_the_age_matrix(counts):
    runs, years = 60, 8
    aged = life(
        first_breeding_age=(2, 3),
        last_age=7,
        survival=(0.5, 0.7, 0.85),
        mean_young=1.9,
        young_counts=counts,
        share_of_females_breeding=0.8,
        females_among_young=0.4,
    )
    start = world(years=years, life=aged, adults=240, adult_females=140, markers=1)
    results = run(start, runs, 18)
    matrix = female_matrix(0.8 * 1.9 * 0.4, 0.5, 0.7, 0.85, 2, 7)
    rate = np.abs(np.linalg.eigvals(matrix)).max()
    seen = results.of("adult_females")
    for year in range(1, years + 1):
        se = seen[:, year].std() / np.sqrt(runs)
        # Rounding of the subadults at the start is at most half an animal of a hundred.
        assert abs(seen[:, year].mean() - 140 * rate**year) < 5 * se + 0.005 * 140 * rate**year


def test_that_gradual_crowding_holds_numbers_at_the_carrying_capacity():
    aged = life(first_breeding_age=(2, 2), survival=(0.6, 0.8, 0.8), mean_young=2.0, gradual=True)
    start = world(
        years=60, life=aged, adults=30, adult_females=15, capacity=np.full(60, 80.0), markers=1
    )
    late = run(start, 100, 19).of("adults")[:, 40:].mean()
    # At A = K recruitment falls by 1/g, which holds A only where growth is all recruitment; with
    # survivors the balance is where s0 / (1 + (g-1) A/K) gives growth 1.
    per_adult = 2.0 * 0.5 * 0.6 * 0.8
    growth = np.roots([1, -0.8, -per_adult]).max()
    balance = 80.0 * (per_adult / 0.2 - 1.0) / (growth - 1.0)
    assert abs(late - balance) < 0.06 * balance  # noise lowers the mean a little (Jensen)


def test_that_a_donor_of_numbers_by_age_has_the_mean_and_spread_of_single_animals():
    aged = life(
        first_breeding_age=(2, 2),
        last_age=8,
        survival=(0.5, 0.7, 0.85),
        survival_sd=(0.1, 0.05, 0.05),
        mean_young=2.0,
        young_sd=0.2,
        share_of_females_breeding=0.7,
        form="pairs",
    )
    start = world(
        years=10,
        life=aged,
        adults=40,
        adult_females=20,
        capacity=np.full(10, 50.0),
        diversity=np.full((2, 2), 0.4),
        donors=(Donor(40, 20, aged, 50.0),),
        markers=1,
    )
    results = run(start, 1500, 20)
    one, two = results.of("adults"), results.of("donor_adults:0")
    for year in (1, 3, 10):
        se = np.sqrt((one[:, year].var() + two[:, year].var()) / 1500)
        assert abs(one[:, year].mean() - two[:, year].mean()) < 5 * se
        ratio = one[:, year].var() / two[:, year].var()
        assert abs(np.log(ratio)) < 5 * np.sqrt(4.0 / 1500) * 1.5
