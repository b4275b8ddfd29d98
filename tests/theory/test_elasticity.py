"""Elasticities and the cost of removal. Caswell 2001, Fisher 1930, from memory; values derived."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import elasticity, life_table

SIX = 1e-5
BIRD = life_table.female_matrix(0.7, 0.5, 0.8, 0.8, 2, 10)


def test_that_sensitivities_are_the_derivatives_of_growth():
    """Independent: central differences of the eigenvalue."""
    found, h = elasticity.sensitivities(BIRD), 1e-6
    for i, j in [(0, 1), (0, 9), (1, 0), (5, 4), (9, 8), (0, 0)]:
        up, down = BIRD.copy(), BIRD.copy()
        up[i, j] += h
        down[i, j] -= h
        slope = life_table.dominant_eigenvalue(up) - life_table.dominant_eigenvalue(down)
        assert_allclose(found[i, j], slope / (2 * h), rtol=1e-6)


def test_that_elasticities_sum_to_one_for_every_draw():
    draws = life_table.female_matrix([0.7, 1.4, 0.4], 0.5, [0.6, 0.7, 0.8], [0.8, 0.7, 0.95], 3, 8)
    found = elasticity.elasticities(draws)
    assert_allclose(found.sum(axis=(-2, -1)), 1.0, rtol=1e-12)
    assert np.all(found >= -1e-15)


def test_that_a_rate_in_several_entries_sums_them():
    """Adult survival stands in eight entries; checked against growth itself."""
    derivative = np.zeros((10, 10))
    for age in range(2, 10):
        derivative[age, age - 1] = 1.0
    found = elasticity.rate_elasticity(BIRD, derivative, 0.8)
    h = 1e-6
    up, down = (life_table.growth(0.7, 0.5, 0.8, 0.8 + x, 2, 10) for x in (h, -h))
    middle = life_table.growth(0.7, 0.5, 0.8, 0.8, 2, 10)
    assert_allclose(found, (up - down) / (2 * h) * 0.8 / middle, rtol=1e-6)


def test_that_removal_costs_reproductive_value():
    found = elasticity.removal_cost(BIRD)
    assert_allclose(found[[0, 1, 4, 8]], [0.909647, 1.18683, 1.04127, 0.538811], rtol=SIX)
    assert_allclose(found @ life_table.stable_ages(BIRD), 1.0, rtol=1e-12)


def test_that_the_cost_is_what_long_run_numbers_lose():
    """Independent: take one animal of age 5 out of 1000 in the stable state, wait 300 years."""
    stable = life_table.stable_ages(BIRD)
    less = 1000 * stable - np.eye(10)[4]
    power = np.linalg.matrix_power(BIRD, 300)
    lost = 1 - (power @ less).sum() / (power @ (1000 * stable)).sum()
    assert_allclose(1000 * lost, elasticity.removal_cost(BIRD)[4], rtol=1e-8)


def test_that_animals_past_breeding_cost_nothing():
    past = np.zeros((4, 4))
    past[0, 1:3], past[1, 0], past[2, 1], past[3, 2] = 1.0, 0.6, 0.8, 0.8
    assert_allclose(elasticity.removal_cost(past)[3], 0.0, atol=1e-14)


def test_that_the_sustainable_fraction_holds_numbers_level():
    growth = life_table.dominant_eigenvalue(BIRD)
    fraction = elasticity.sustainable_fraction(growth)
    assert_allclose(fraction, 0.0419365, rtol=SIX)
    assert_allclose(growth * (1 - fraction), 1.0, rtol=1e-14)
    assert elasticity.sustainable_fraction(0.95) == 0.0


@pytest.mark.parametrize(("removed", "left"), [(6, 60.0), (8, 47.7898)])
def test_that_a_donor_under_a_ceiling_bears_its_removals_as_stated(removed, left):
    found = elasticity.donor_numbers(60, 1.1, 80, np.full(5, float(removed)))
    assert_allclose(found[-1], left, rtol=SIX)
    assert found[0] == 60


def test_that_a_donor_is_never_below_nothing():
    found = elasticity.donor_numbers([10, 100], 1.0, 200, np.full((2, 3), 6.0))
    assert_allclose(found, [[10, 4, 0, 0], [100, 94, 88, 82]])
