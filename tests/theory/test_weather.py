"""Good and bad years. Derived; formulas from memory; Reed et al. 2003 confirmed."""

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import weather

SIX = 1e-5
exact = settings(derandomize=True, deadline=None)


@pytest.mark.parametrize(
    ("mean", "sd", "stated"), [(0.8, 0.1, (12, 3)), (0.95, 0.04, (27.2531, 1.43438))]
)
def test_that_a_beta_has_the_stated_parameters(mean, sd, stated):
    assert_allclose(weather.beta_parameters(mean, sd), stated, rtol=SIX)


@exact
@given(mean=st.floats(0.01, 0.99), part=st.floats(0.05, 0.99))
def test_that_a_beta_has_the_moments_asked_for(mean, part):
    sd = part * float(weather.largest_sd(mean))
    alpha, beta = weather.beta_parameters(mean, sd)
    whole = alpha + beta
    assert_allclose(alpha / whole, mean, rtol=1e-12)
    assert_allclose(np.sqrt(alpha * beta / (whole**2 * (whole + 1))), sd, rtol=1e-9)


@pytest.mark.parametrize(("mean", "sd"), [(0.8, 0.4), (0.8, 0.5), (0.0, 0.1), (0.5, 0.0)])
def test_that_an_impossible_spread_is_refused_not_clipped(mean, sd):
    """Pitfall: sd^2 at or above mean (1 - mean)."""
    with pytest.raises(ValueError, match="must be below"):
        weather.beta_parameters(mean, sd)


@pytest.mark.parametrize(
    ("mean", "sd", "stated"), [(0.8, 0.1, (1.50461, 0.647477)), (0.5, 0.15, (0.0, 0.657797))]
)
def test_that_a_logit_normal_has_the_stated_parameters(mean, sd, stated):
    found = weather.logit_normal_parameters(mean, sd)
    assert_allclose(found, stated, rtol=SIX, atol=1e-12)
    assert_allclose(weather.logit_normal_moments(*found), (mean, sd), rtol=1e-9)


def test_that_logit_normal_moments_are_the_integrals():
    """mpmath; the delta method's start (0.625) is not the answer."""
    centre, scale = 1.50461, 0.647477

    def rate(x):
        return 1 / (1 + mpmath.exp(-(centre + scale * x)))

    span = mpmath.linspace(-10, 10, 11)
    mean = mpmath.quad(lambda x: rate(x) * mpmath.npdf(x), span)
    square = mpmath.quad(lambda x: rate(x) ** 2 * mpmath.npdf(x), span)
    stated = (float(mean), float(mpmath.sqrt(square - mean**2)))
    assert_allclose(weather.logit_normal_moments(centre, scale), stated, rtol=1e-10)


@pytest.mark.parametrize(("mean", "sd"), [(0.8, 0.4), (1.0, 0.1), (0.5, 0.499)])
def test_that_an_impossible_logit_normal_is_refused(mean, sd):
    with pytest.raises(ValueError, match="mean and SD"):
        weather.logit_normal_parameters(mean, sd)


def test_that_a_lognormal_has_the_stated_parameters_and_moments():
    mu, sigma = weather.lognormal_parameters(1.2, 0.4)
    assert_allclose((mu, sigma), (0.108112, 0.385253), rtol=SIX)
    assert_allclose(np.exp(mu + sigma**2 / 2), 1.2, rtol=1e-13)
    assert_allclose(np.sqrt(np.expm1(sigma**2)), 0.4, rtol=1e-13)


def test_that_a_shared_rate_makes_survivors_vary_more():
    """Pitfall: drawn for each animal by itself, the year's variation vanishes (3.2, not 7)."""
    assert_allclose(weather.survivors_variance(20, 0.8, 0.1), 7.0, rtol=1e-13)
    assert_allclose(weather.survivors_variance(20, 0.8, 0.0), 3.2, rtol=1e-13)


def test_that_survivors_variance_is_that_of_a_beta_binomial():
    """Independent: total variance by Gauss-Jacobi over the beta of 4.5."""
    alpha, beta = weather.beta_parameters(0.8, 0.1)
    n, k = 20, np.arange(21)
    with mpmath.workdps(30):
        terms = [
            mpmath.binomial(n, int(j)) * mpmath.beta(alpha + j, beta + n - j) for j in k.tolist()
        ]
        share = np.array([float(t / mpmath.beta(alpha, beta)) for t in terms])
    mean = share @ k
    assert_allclose(share @ (k - mean) ** 2, weather.survivors_variance(n, 0.8, 0.1), rtol=1e-11)


def test_that_chance_of_single_fates_can_be_taken_off_again():
    """Pitfall: sampling variance left in the yearly variation."""
    observed = np.sqrt(weather.survivors_variance(20, 0.8, 0.1)) / 20
    assert_allclose(weather.process_variance(observed, 0.8, 20), 0.01, rtol=1e-12)
    only_chance = np.sqrt(0.8 * 0.2 / 20)
    assert_allclose(weather.process_variance(only_chance, 0.8, 20), 0.0, atol=1e-15)
    assert weather.process_variance(0.5 * only_chance, 0.8, 20) < 0.0


def test_that_all_die_together_far_more_often_in_shared_years():
    assert_allclose(weather.chance_all_die(10, 0.5, 0.25), 0.0560627, rtol=SIX)
    assert_allclose(weather.chance_all_die(10, 0.5, 1e-4), 0.5**10, rtol=1e-5)
    assert_allclose(weather.chance_all_die(1, 0.7, 0.2), 0.3, rtol=1e-12)


def test_that_variation_costs_growth():
    """Tuljapurkar 1982, from memory."""
    assert_allclose(weather.long_run_log_growth(1.05, 0.2), 0.0306496, rtol=SIX)
    draws = np.array([0.9, 1.1])  # two equal years: exact mean log growth, to fourth order
    assert_allclose(weather.long_run_log_growth(1.0, 0.1), np.mean(np.log(draws)), atol=3e-5)


def test_that_a_die_off_per_generation_is_turned_into_years():
    """Reed et al. 2003: 14 % per generation, confirmed. Pitfall: dividing by T."""
    stated = [0.14, 0.0726382, 0.0297142, 0.0149691]
    assert_allclose(weather.yearly_chance(0.14, [1, 2, 5, 10]), stated, rtol=SIX)
    assert np.all(weather.yearly_chance(0.14, [2, 5, 10]) > 0.14 / np.array([2, 5, 10]))
    assert_allclose(weather.chance_within(0.14, 10), 0.778698, rtol=SIX)


@exact
@given(chance=st.floats(0.0, 1.0), t=st.floats(0.5, 30.0))
def test_that_a_generation_of_years_has_its_chance_again(chance, t):
    yearly = weather.yearly_chance(chance, t)
    assert_allclose(weather.chance_within(yearly, t), chance, rtol=1e-9, atol=1e-12)
