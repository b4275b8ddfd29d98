"""Theorems and evolvability. Derived values; Houle 1992 from memory."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import evolvability, selection

SIX = 1e-5


def test_that_fishers_theorem_holds_for_haploids():
    """w = 1.1 and 1.0 at 0.3: mean 1.03, change 0.00203883 = variance / mean."""
    x, w = np.array([0.3, 0.7]), np.array([1.1, 1.0])
    gain = evolvability.selection_covariance(x, w, w)
    assert_allclose(gain, 0.00203883, rtol=SIX)
    after = x * w / (x @ w)
    assert_allclose(after @ w - x @ w, gain, rtol=1e-12)


def test_that_robertsons_theorem_holds_for_diploids():
    """Additive: w = 1, 1.05, 1.1, breeding values 0, 1, 2."""
    p = 0.3
    x = np.array([(1 - p) ** 2, 2 * p * (1 - p), p**2])
    gain = evolvability.selection_covariance(x, [0, 1, 2], [1, 1.05, 1.1])
    assert_allclose(gain, 0.0203883, rtol=SIX)
    assert_allclose(2 * (selection.after_selection(p, [1.1, 1.05, 1.0]) - p), gain, rtol=1e-12)


def test_that_fishers_part_is_additive_variance_over_mean_fitness():
    p, w = 0.3, [0.7, 1.0, 0.9]
    x = np.array([p**2, 2 * p * (1 - p), (1 - p) ** 2])
    alpha = selection.average_effect(p, w)
    breeding = np.array([2, 1, 0]) * alpha
    gain = evolvability.selection_covariance(x, breeding, w)
    stated = selection.additive_variance(p, w) / selection.mean_fitness(p, w)
    assert_allclose(gain, stated, rtol=1e-12)


def test_that_evolvability_is_relative_to_the_mean():
    assert_allclose(evolvability.evolvability(4.0, 10.0), 0.04, rtol=1e-14)
    assert_allclose(evolvability.coefficient_of_additive_variation(4.0, 10.0), 0.20, rtol=1e-14)
    assert_allclose(evolvability.proportional_response(4.0, 10.0, 0.54), 0.0216, rtol=1e-14)


@pytest.mark.parametrize("unit", [10.0, 0.001])
def test_that_evolvability_has_no_unit(unit):
    assert_allclose(evolvability.evolvability(4.0 * unit**2, 10.0 * unit), 0.04, rtol=1e-12)
