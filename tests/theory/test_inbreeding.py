"""Inbreeding and its cost. Derived, six figures; Morton, Crow & Muller 1956, from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import inbreeding

SIX = 1e-5  # the check values are printed to six figures
exact = settings(derandomize=True, deadline=None)


@pytest.mark.parametrize(
    ("haploid", "values"),
    [
        (1.57, (0.906536, 0.821807, 0.675366, 0.45612)),
        (3.5, (0.803523, 0.645649, 0.416862, 0.173774)),
        (6.0, (0.687289, 0.472367, 0.22313, 0.0497871)),
    ],
)
def test_that_survival_falls_with_half_the_diploid_lethal_equivalents(haploid, values):
    factors = inbreeding.survival_factor([0.0625, 0.125, 0.25, 0.5], 2 * haploid)
    assert_allclose(factors, values, rtol=SIX)


def test_that_the_median_of_captive_mammals_costs_a_third_of_inbred_young():
    """Ralls, Ballou & Templeton 1988, confirmed: median 3.1 to 3.14 diploid, mean cost 0.33."""
    cost = 1 - inbreeding.survival_factor(0.25, 3.14)
    assert_allclose(cost, 0.324634, rtol=SIX)
    assert abs(cost - 0.33) < 0.01  # the paper rounds; 0.54 would mean 2B in the exponent


def test_that_survival_at_no_inbreeding_multiplies():
    assert_allclose(0.8 * inbreeding.survival_factor(0.25, 3.14), 0.540293, rtol=SIX)


@pytest.mark.parametrize(("haploid", "f"), [(1.57, 0.441495), (3.5, 0.198042), (6.0, 0.115525)])
def test_that_half_of_survival_is_lost_where_theory_says(haploid, f):
    assert_allclose(inbreeding.survival_factor(f, 2 * haploid), 0.5, rtol=SIX)


def test_that_a_stage_split_into_years_keeps_its_whole_cost():
    """Derived: a stage with B = 3 per gamete over three years at F = 0.25."""
    yearly = inbreeding.stage_split(0.25, 6.0, 3)
    assert_allclose(yearly, 0.778801, rtol=SIX)
    assert_allclose(0.8 * yearly, 0.623041, rtol=SIX)
    assert_allclose(yearly**3, inbreeding.survival_factor(0.25, 6.0), rtol=1e-14)
    assert_allclose(yearly**3, 0.472367, rtol=SIX)


def test_that_unequal_inbreeding_costs_less_than_its_mean():
    """Derived (Jensen): half at F = 0.125, half at 0.375, B = 6 per gamete."""
    true = np.mean(inbreeding.survival_factor([0.125, 0.375], 12.0))
    assert_allclose(true, 0.288883, rtol=SIX)
    assert_allclose(inbreeding.survival_factor(0.25, 12.0), 0.22313, rtol=SIX)


@pytest.mark.parametrize(
    ("a", "f", "factor", "ratio"),
    [
        (0.0, 0.4, 0.301194, 1.0),
        (0.05, 0.361, 0.338578, 1.12412),
        (0.1, 0.324, 0.378326, 1.25609),
        (0.2, 0.256, 0.46394, 1.54034),
        (0.3, 0.196, 0.555437, 1.84412),
        (0.5, 0.1, 0.740818, 2.4596),
    ],
)
def test_that_donor_ancestry_lowers_inbreeding_and_rescues(a, f, factor, ratio):
    """Derived: F = 0.4 in the recipient, donors unrelated, B = 3 per gamete, mixing settled."""
    after = inbreeding.inbreeding(1 - (1 - a) ** 2 * 0.4, 1.0)
    assert_allclose(after, f, rtol=1e-14)
    assert_allclose(inbreeding.survival_factor(after, 6.0), factor, rtol=SIX)
    assert_allclose(inbreeding.rescue_ratio(0.4, after, 6.0), ratio, rtol=SIX)


def test_that_the_first_generation_after_a_release_is_better_than_its_mean():
    """Derived: 0.64 residents' young at F = 0.4, the rest unrelated: 0.552764, not 0.46394."""
    shares, h = [0.8, 0.2], [[0.6, 1.0], [1.0, 1.0]]
    assert_allclose(inbreeding.young_survival(shares, shares, h, 1.0, 6.0), 0.552764, rtol=SIX)


def test_that_young_of_unlike_parents_are_summed_over_pairs():
    """Slow twin: a loop over mothers and fathers."""
    rng = np.random.default_rng(3)
    mothers, fathers = rng.dirichlet(np.ones(3), size=2)
    h = rng.uniform(0.3, 0.8, size=(3, 3))
    h = 0.5 * (h + h.T)
    slow = sum(
        mothers[i] * fathers[j] * np.exp(-3.0 * max(0.0, 1 - h[i, j] / 0.7))
        for i in range(3)
        for j in range(3)
    )
    assert_allclose(inbreeding.young_survival(mothers, fathers, h, 0.7, 6.0), slow, rtol=1e-14)


def test_that_mothers_and_fathers_are_kept_apart():
    """Newcomers of one sex only: no young of two newcomers."""
    h = [[0.5, 1.0], [1.0, 0.2]]
    only_fathers = inbreeding.young_survival([1.0, 0.0], [0.7, 0.3], h, 1.0, 6.0)
    assert_allclose(only_fathers, 0.7 * np.exp(-1.5) + 0.3, rtol=1e-14)


def test_that_draws_broadcast_in_every_input_of_young_survival():
    rng = np.random.default_rng(4)
    mothers, fathers = rng.dirichlet(np.ones(3), size=(2, 5))
    h = rng.uniform(0.3, 0.8, size=(5, 3, 3))
    lethals = rng.uniform(0, 12, size=5)
    together = inbreeding.young_survival(mothers, fathers, h, 0.7, lethals)
    alone = [
        inbreeding.young_survival(mothers[i], fathers[i], h[i], 0.7, lethals[i]) for i in range(5)
    ]
    assert_allclose(together, alone, rtol=1e-14)
    one_case_many_costs = inbreeding.young_survival(mothers[0], fathers[0], h[0], 0.7, lethals)
    assert one_case_many_costs.shape == (5,)


@pytest.mark.parametrize(
    ("ne", "values"),
    [
        (15, (6.3452, 3.3429, 11.9601)),
        (30, (12.7988, 6.7429, 24.1246)),
        (50, (21.4034, 11.2761, 40.3434)),
        (100, (42.9146, 22.6090, 80.8901)),
    ],
)
def test_that_a_rescue_lasts_the_stated_generations(ne, values):
    """Derived; printed to four decimals."""
    t = inbreeding.generations_until_back([0.4, 0.25, 0.4], [0.256, 0.16, 0.1], ne)
    assert_allclose(t, values, atol=5.1e-5)
    back = inbreeding.inbreeding_after(ne, t, [0.256, 0.16, 0.1])
    assert_allclose(back, [0.4, 0.25, 0.4], rtol=1e-12)


def test_that_no_rescue_lasts_no_time():
    assert inbreeding.generations_until_back(0.3, 0.3, 20.0) == 0.0
    assert inbreeding.generations_until_back(0.3, 0.4, 20.0) == 0.0


def test_that_five_generations_at_fifty_cost_the_stated_fitness():
    """Derived; Franklin 1980 and Frankham et al. 2014 argue from these; 12 printed digits."""
    f = inbreeding.inbreeding_after([50.0, 100.0], 5)
    assert_allclose(f, [0.0490099501, 0.0247512468781], rtol=1e-9)
    loss = 1 - inbreeding.survival_factor(f[:, np.newaxis], [12.0, 6.0])
    stated = [[0.254768000682, 0.136731791783], [0.138006441659, 0.07156391801]]
    assert_allclose(loss, stated, rtol=1e-11)


@exact
@given(f=st.floats(-2.0, 1.0), lethals=st.floats(0.0, 60.0))
def test_that_a_factor_is_a_share_and_never_a_bonus(f, lethals):
    factor = inbreeding.survival_factor(f, lethals)
    assert 0.0 < factor <= 1.0
    if f <= 0.0:
        assert factor == 1.0


@exact
@given(
    h=st.lists(st.floats(0.1, 0.9), min_size=3, max_size=3),
    share=st.floats(0.0, 1.0),
    lethals=st.floats(0.0, 20.0),
)
def test_that_the_mean_over_pairs_is_at_least_the_factor_of_the_mean(h, share, lethals):
    """Jensen's inequality, for a convex cost."""
    own, between, donor = h
    u = np.array([1 - share, share])
    pairs = np.array([[own, between], [between, donor]])
    f = 1 - u @ pairs @ u / 0.9
    mean = inbreeding.young_survival(u, u, pairs, 0.9, lethals)
    assert mean >= inbreeding.survival_factor(f, lethals) - 1e-14
    assert mean <= 1.0 + 1e-15


def test_that_inbreeding_below_zero_is_shown_as_it_is():
    assert_allclose(inbreeding.inbreeding(0.72, 0.6), -0.2, rtol=1e-14)
    assert inbreeding.rescue_ratio(0.3, -0.2, 6.0) == inbreeding.rescue_ratio(0.3, 0.0, 6.0)
