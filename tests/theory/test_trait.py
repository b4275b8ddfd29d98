"""Trait under stabilising selection, with mixing and drift.

Check values derived (mixing: exact enumeration of loci; lag: iteration), six figures; Lande 1976,
Buerger & Lynch 1995, from memory.
"""

import itertools

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import diversity, flow, trait

SIX = 1e-5  # the check values are printed to six figures
exact = settings(derandomize=True, deadline=None)
value = st.floats(-5.0, 5.0)
share = st.floats(0.0, 0.45)


def mix_then_mate(generations, *, v1, v2, m, dz, loci):
    """Additive variance after 1, 2, ... random matings that follow one pulse; no selection."""
    shares = np.array([m])
    between = trait.variance_between(0.0, [dz], shares)
    gain = trait.genic_from_mixing(between, loci, 0.0, 0.0)
    genic = trait.mixed_genic(v1, [v2], shares, gain)
    held = trait.mixed_association(0.0, between, gain, m)
    course = [genic + held]
    for _ in range(generations - 1):
        held = trait.mixed_association(held, 0.0, 0.0, 0.0)
        course.append(genic + held)
    return course, genic


def test_that_mixing_gives_a_boost_that_halves_with_each_mating():
    """Derived: V = 0.3 and 0.6, m = 0.2, means 2 apart, 20 loci."""
    course, genic = mix_then_mate(10, v1=0.3, v2=0.6, m=0.2, dz=2.0, loci=20)
    stated = [0.68, 0.528, 0.452, 0.395, 0.376594]
    assert_allclose([course[t - 1] for t in (1, 2, 3, 5, 10)], stated, rtol=SIX)
    assert_allclose(genic, 0.376, rtol=1e-14)


def test_that_mixing_agrees_with_four_loci_enumerated():
    """Derived: four unlinked fixed loci, a = 1 (means 8 apart), m = 0.2: 5.12, 3.2, 2.24, 1.4."""
    course, genic = mix_then_mate(6, v1=0.0, v2=0.0, m=0.2, dz=8.0, loci=4)
    assert_allclose([course[t - 1] for t in (1, 2, 3, 6)], [5.12, 3.2, 2.24, 1.4], rtol=1e-13)
    assert_allclose(genic, 4 * 2 * 0.2 * 0.8, rtol=1e-13)


def test_that_the_first_mated_generation_is_what_gametes_make_of_it():
    """Slow twin: every pair of gametes of two loci fixed for unlike alleles, one pulse of m."""
    m, effect = 0.3, 0.7
    gametes = [((0, 0), 1 - m), ((1, 1), m)]
    values, chances = [], []
    for (one, p), (two, q) in itertools.product(gametes, repeat=2):
        values.append(effect * (sum(one) + sum(two)))
        chances.append(p * q)
    mean = np.dot(values, chances)
    variance = np.dot((np.array(values) - mean) ** 2, chances)
    course, _ = mix_then_mate(1, v1=0.0, v2=0.0, m=m, dz=4 * effect, loci=2)
    assert_allclose(course[0], variance, rtol=1e-14)
    assert_allclose(trait.mixed_trait(0.0, [4 * effect], [m]), mean, rtol=1e-14)


def test_that_neutral_loci_can_promise_more_than_means_prove():
    proven = trait.genic_from_mixing(0.4, 50, 0.5, 0.0)
    assert_allclose(proven, 0.004, rtol=1e-14)
    assert_allclose(trait.genic_from_mixing(0.4, 50, 0.5, 0.1), 0.05, rtol=1e-14)


@pytest.mark.parametrize(
    ("d", "fitness"), [(0, 0.948683), (1, 0.902415), (2, 0.776716), (3, 0.604907)]
)
def test_that_mean_fitness_falls_with_the_lag(d, fitness):
    """w2 = 9, V_P = 1."""
    assert_allclose(trait.mean_fitness_at(d, 1.0, 9.0), fitness, rtol=SIX)
    assert_allclose(trait.mean_fitness_at(-d, 1.0, 9.0), fitness, rtol=SIX)


def test_that_mean_fitness_is_the_integral_over_phenotypes():
    """Independent route: the average of the fitness function over a normal distribution."""
    z = np.linspace(-12.0, 14.0, 200_001)
    density = np.exp(-0.5 * (z - 1.3) ** 2 / 0.8) / np.sqrt(2 * np.pi * 0.8)
    integral = np.sum(density * np.exp(-((z - 3.0) ** 2) / (2 * 6.0))) * (z[1] - z[0])
    assert_allclose(trait.mean_fitness_at(1.7, 0.8, 6.0), integral, rtol=1e-10)


def test_that_the_response_is_the_gradient_times_variance():
    """w2 = 9, V_P = 1, h2 = 0.3 at distance 2 above the optimum: -0.06; k = 0.97."""
    change = trait.response(-2.0, 0.3, 0.7, 9.0)
    assert_allclose(change, -0.06, rtol=1e-14)
    assert_allclose((2.0 + change) / 2.0, 0.97, rtol=1e-14)


@pytest.mark.parametrize(("shift", "lag"), [(0.02, 0.666667), (0.05, 1.66667), (0.1, 3.33333)])
def test_that_the_lag_behind_a_moving_optimum_settles(shift, lag):
    """Derived: V_A = 0.3, V_s + V_A = 10; lag when selection acts, one shift less after it."""
    z = 0.0
    for t in range(1, 2000):
        theta = float(trait.optimum_at(t, 0.0, shift))
        before = theta - z
        z = z + float(trait.response(before, 0.3, 0.7, 9.0))
    assert_allclose(before, lag, rtol=SIX)
    assert_allclose(theta - z, before - shift, rtol=1e-9)


def test_that_the_sustainable_shift_is_as_stated():
    """V_A = 0.3, V_s + V_A = 10, growth 1.5 at the optimum's best."""
    r_max = np.log(1.5 * trait.mean_fitness_at(0.0, 1.0, 9.0))
    assert_allclose(r_max, 0.352785, rtol=SIX)
    assert_allclose(trait.sustainable_shift(0.3, 0.7, 9.0, r_max), 0.0796877, rtol=SIX)


def test_that_at_the_sustainable_shift_growth_is_used_up():
    """The settled lag then costs exactly r_max: two definitions meet."""
    kappa = trait.sustainable_shift(0.3, 0.7, 9.0, 0.35)
    lag = kappa / (0.3 / 10.0)
    cost = np.log(trait.mean_fitness_at(0.0, 1.0, 9.0) / trait.mean_fitness_at(lag, 1.0, 9.0))
    assert_allclose(cost, 0.35, rtol=1e-13)


def test_that_a_shrinking_population_sustains_no_shift():
    assert trait.sustainable_shift(0.3, 0.7, 9.0, -0.1) == 0.0


def test_that_the_optimum_shifts_and_jumps_in_its_year():
    years = np.array([0.0, 9.0, 10.0 - 1e-12, 10.0, 20.0])
    theta = trait.optimum_at(years, 0.5, 0.01, 10.0, -2.0)
    assert_allclose(theta, [0.5, 0.59, -1.4, -1.4, -1.3], rtol=1e-9)
    assert_allclose(trait.optimum_at(20.0, 0.5, 0.01), 0.7, rtol=1e-14)


def test_that_genic_variance_drifts_and_mutates():
    assert_allclose(trait.genic_after_drift(1.0, 25.0, 0.001), 0.981, rtol=1e-15)


@exact
@given(z=value, donors=st.lists(value, min_size=2, max_size=2), a=share, b=share)
def test_that_variance_between_is_the_textbook_form_and_never_negative(z, donors, a, b):
    between = trait.variance_between(z, donors, [a, b])
    pool = flow.mixed(z, donors, [a, b])
    squares = flow.mixed(z**2, np.square(donors), [a, b])
    assert between >= 0.0
    assert_allclose(between, squares - pool**2, rtol=1e-9, atol=1e-13)


@exact
@given(lag=value, va=st.floats(0.0, 1.0), w2=st.floats(1.0, 50.0))
def test_that_selection_never_overshoots_the_optimum(lag, va, w2):
    change = trait.response(lag, va, 1.0 - va, w2)
    assert abs(change) <= abs(lag)
    assert change * lag >= 0.0


@exact
@given(lag=value, vp=st.floats(0.01, 3.0), w2=st.floats(0.5, 50.0))
def test_that_mean_fitness_is_a_share_and_best_at_the_optimum(lag, vp, w2):
    assert 0.0 < trait.mean_fitness_at(lag, vp, w2) <= trait.mean_fitness_at(0.0, vp, w2) < 1.0


def test_that_no_flow_leaves_mean_variance_and_association_alone():
    none = np.zeros(2)
    assert trait.mixed_trait(0.3, [1.0, 2.0], none) == 0.3
    assert trait.variance_between(0.3, [1.0, 2.0], none) == 0.0
    assert trait.mixed_genic(0.3, [0.5, 0.6], none, 0.0) == 0.3
    assert trait.mixed_association(0.2, 0.0, 0.0, 0.0) == 0.1


def test_that_draws_broadcast():
    shares = np.array([[0.1, 0.2], [0.0, 0.3]])
    together = trait.variance_between([0.1, -0.2], [1.0, 2.0], shares)
    alone = [
        trait.variance_between(z, [1.0, 2.0], s) for z, s in zip([0.1, -0.2], shares, strict=True)
    ]
    assert_allclose(together, alone, rtol=1e-15)


def test_that_a_genic_gain_from_neutral_loci_matches_one_additive_locus():
    """One locus, effect a: genic variance a^2 H, so V_A / H = a^2 and the gain is a^2 times H's."""
    p, q, m, effect = 0.1, 0.7, 0.2, 1.5
    h = [2 * p * (1 - p), 2 * q * (1 - q)]
    between = p * (1 - q) + q * (1 - p)
    pool = diversity.pooled(h[0], [between], [[h[1]]], [m])
    gain = diversity.diversity_from_mixing(pool, h[0], [h[1]], [m])
    genic = trait.genic_from_mixing(0.0, 1, effect**2, gain)
    mean = (1 - m) * p + m * q
    direct = effect**2 * (2 * mean * (1 - mean) - (1 - m) * h[0] - m * h[1])
    assert_allclose(genic, direct, rtol=1e-13)
