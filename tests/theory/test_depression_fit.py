"""Lethal equivalents from counts. Derived, printed to five or six figures."""

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.optimize import minimize

from rescue_planner.theory import depression_fit, inbreeding

SIX = 1e-5
F, BORN, LIVED = [0.0, 0.125, 0.25], [100, 100, 100], [80, 66, 52]


def test_that_counts_give_the_stated_lethal_equivalents():
    found = depression_fit.fit_depression(F, BORN, LIVED)
    assert_allclose((found.baseline, found.load_haploid), (0.21970, 1.68624), atol=5.1e-6)
    assert_allclose(found.errors, (0.0474, 0.4009), atol=5.1e-5)
    assert_allclose(found.lethal_equivalents_diploid, 3.3725, atol=5.1e-5)
    assert not found.at_bound


def test_that_the_fit_is_where_a_general_optimiser_ends():
    """scipy.optimize from several starts, bounded by a large penalty."""
    found = depression_fit.fit_depression(F, BORN, LIVED)

    def loss(beta):
        height = depression_fit.log_likelihood(F, BORN, LIVED, beta[0], beta[1])
        return -float(height) if np.isfinite(height) else 1e6

    options = {"xatol": 1e-9, "fatol": 1e-12, "maxiter": 2000}
    for start in ([0.3, 0.5], [1.0, 3.0]):
        best = minimize(loss, start, method="Nelder-Mead", options=options).x
        assert_allclose((found.baseline, found.load_haploid), best, rtol=1e-6)


def test_that_the_errors_are_those_of_the_curvature():
    """Second differences of the log-likelihood at its top."""
    found = depression_fit.fit_depression(F, BORN, LIVED)
    at, h = np.array([found.baseline, found.load_haploid]), 1e-4
    curve = np.empty((2, 2))
    for i in range(2):
        for j in range(2):
            a, b = h * np.eye(2)[i], h * np.eye(2)[j]
            corners = [at + a + b, at + a - b, at - a + b, at - a - b]
            heights = [float(depression_fit.log_likelihood(F, BORN, LIVED, *c)) for c in corners]
            curve[i, j] = (heights[0] - heights[1] - heights[2] + heights[3]) / (4 * h * h)
    assert_allclose(np.linalg.inv(-curve), found.covariance, rtol=1e-4)


def test_that_expected_counts_give_the_rates_back():
    lived = 1e6 * 0.8 * inbreeding.survival_factor([0.0, 0.1, 0.3, 0.5], 7.0)
    found = depression_fit.fit_depression([0.0, 0.1, 0.3, 0.5], 1e6, lived)
    assert_allclose((found.baseline, found.load_haploid), (-np.log(0.8), 3.5), rtol=1e-8)


def test_that_single_young_and_their_classes_give_one_fit():
    f = np.repeat(F, BORN)
    single = np.concatenate([np.arange(100) < k for k in LIVED]).astype(float)
    one = depression_fit.fit_depression(f, 1, single)
    many = depression_fit.fit_depression(F, BORN, LIVED)
    assert_allclose(one[:2], many[:2], rtol=1e-9)


@pytest.mark.parametrize("up", [True, False])
def test_that_survival_of_all_at_one_end_holds_the_fit_at_its_bound(up):
    """Survival may not exceed 1; no standard error then."""
    lived = [100, 66, 52] if up else [52, 66, 100]
    found = depression_fit.fit_depression(F, BORN, lived)
    end = 0.0 if up else 0.25
    assert found.at_bound
    assert_allclose(found.baseline + found.load_haploid * end, 0.0, atol=1e-12)
    assert np.all(np.isnan(found.covariance))
    for slope in found.load_haploid * np.array([0.99, 1.01]):
        moved = depression_fit.log_likelihood(F, BORN, lived, -slope * end, slope)
        assert moved < found.log_likelihood
    inside = depression_fit.log_likelihood(F, BORN, lived, found.baseline + 0.01, found[1])
    assert inside < found.log_likelihood


def test_that_a_small_class_without_deaths_leaves_the_fit_inside():
    found = depression_fit.fit_depression(F, [2, 100, 100], [2, 66, 52])
    assert not found.at_bound
    assert found.baseline > 0.0


@pytest.mark.parametrize(
    ("f", "born", "lived", "words"),
    [
        ([0.0, 0.25], [10, 10], [11, 5], "between 0 and the young born"),
        ([0.1, 0.1], [10, 10], [9, 5], "two different"),
        ([0.0, 0.25], [10, 0], [9, 0], "two different"),
        ([0.0, 0.25], [10, 10], [10, 10], "every young lived"),
        ([0.0, 0.25], [10, 10], [5, 0], "no finite slope"),
        ([0.0, 0.25], [10, 10], [0, 0], "no finite slope"),
    ],
)
def test_that_counts_that_cannot_be_fitted_are_refused(f, born, lived, words):
    with pytest.raises(ValueError, match=words):
        depression_fit.fit_depression(f, born, lived)


@pytest.mark.parametrize(("baseline", "b"), [(0.8, 0.806535), (0.3, 2.31072)])
def test_that_a_logistic_slope_is_no_lethal_equivalent(baseline, b):
    """Pitfall: the same slope -3 implies a load three times as large from a lower baseline."""
    assert_allclose(depression_fit.load_implied_by_logit(-3.0, baseline, 0.25), b, rtol=SIX)


def test_that_two_classes_give_the_load_between_them():
    survival = 0.8 * inbreeding.survival_factor([0.1, 0.35], 5.0)
    assert_allclose(depression_fit.load_between(*survival, 0.25), 2.5, rtol=1e-13)


def test_that_published_gains_of_outcrossing_imply_the_stated_loads():
    """Frankham 2015 (+148 %, +45 %) and 2016 (+42, +84, +86 %), at a fall of F by 0.25."""
    gains = 1 + np.array([1.48, 0.45, 0.42, 0.84, 0.86])
    stated = [3.6330, 1.4863, 1.4026, 2.4391, 2.4823]
    assert_allclose(depression_fit.load_between(gains, 1.0, 0.25), stated, atol=5.1e-5)


def test_that_impossible_rates_have_no_likelihood():
    assert depression_fit.log_likelihood(F, BORN, LIVED, -0.1, 1.0) == -np.inf
    assert depression_fit.log_likelihood(F, BORN, LIVED, 0.0, 1.0) == -np.inf
