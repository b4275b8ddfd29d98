"""Crowding and scarcity. Ricker 1954, Beverton & Holt 1957, Dennis 1989, from memory."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import crowding

SIX = 1e-5
N = [10, 50, 150]


def test_that_the_forms_of_crowding_give_the_stated_numbers():
    """K = 100."""
    assert_allclose(crowding.theta_logistic(N, 0.3, 100), [13.0996, 58.0917, 129.106], rtol=SIX)
    assert_allclose(crowding.theta_logistic(N, 0.3, 100, 4), [13.4982, 66.2392, 44.3399], rtol=SIX)
    assert_allclose(crowding.beverton_holt(N, 1.35, 100), [13.0435, 57.4468, 132.787], rtol=SIX)
    assert_allclose(crowding.ceiling(N, 1.35, 100), [13.5, 67.5, 100], rtol=1e-14)


FORMS = [
    lambda n: crowding.theta_logistic(n, np.log(1.35), 100),
    lambda n: crowding.theta_logistic(n, np.log(1.35), 100, 4),
    lambda n: crowding.beverton_holt(n, 1.35, 100),
    lambda n: crowding.ceiling(n, 1.35, 100),
]


@pytest.mark.parametrize("form", FORMS)
def test_that_each_form_grows_freely_when_rare_and_rests_at_capacity(form):
    assert_allclose(form(1e-6) / 1e-6, 1.35, rtol=1e-6)
    assert_allclose(form(100.0), 100.0, rtol=1e-12)


def test_that_a_large_theta_falls_below_capacity_from_above():
    assert crowding.theta_logistic(150, 0.3, 100, 4) < 100
    assert crowding.beverton_holt(150, 1.35, 100) > 100


def test_that_beverton_holt_has_its_closed_course():
    """K / N is linear in lambda^-t: (K/N_t - 1) = (K/N_0 - 1) lambda^-t."""
    n = 10.0
    for _ in range(12):
        n = crowding.beverton_holt(n, 1.2, 100)
    assert_allclose(100 / n - 1, 9 * 1.2**-12.0, rtol=1e-12)


def test_that_few_animals_find_mates_as_stated():
    n = [2, 5, 10, 20]
    found = crowding.mating_chance_exponential(n, 5)
    assert_allclose(found, [0.32968, 0.632121, 0.864665, 0.981684], rtol=SIX)
    found = crowding.mating_chance_hyperbolic(n, 5)
    assert_allclose(found, [0.285714, 0.5, 0.666667, 0.8], rtol=2e-6)


@pytest.mark.parametrize(
    ("threshold", "chance", "stated"),
    [
        (crowding.threshold_hyperbolic, crowding.mating_chance_hyperbolic, 6.66667),
        (crowding.threshold_exponential, crowding.mating_chance_exponential, 4.23649),
    ],
)
def test_that_growth_is_one_at_the_threshold(threshold, chance, stated):
    n = threshold(0.8, 0.35, 5)
    assert_allclose(n, stated, rtol=SIX)
    assert_allclose(0.8 + 0.35 * chance(n, 5), 1.0, rtol=1e-13)


def test_that_births_too_few_have_no_threshold():
    assert crowding.threshold_hyperbolic(0.8, 0.1, 5) == np.inf
    assert crowding.threshold_exponential(0.8, 0.19, 5) == np.inf
