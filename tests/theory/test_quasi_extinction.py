"""Quasi-extinction. Formulas from memory; values derived, checked by quadrature and simulation."""

import mpmath
import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.integrate import quad

from rescue_planner.theory import quasi_extinction as quasi

SIX = 1e-5
TEN = np.log(10.0)


@pytest.mark.parametrize(
    ("mu", "variance", "t", "by", "ever"),
    [
        (0.0, 0.04, 50, 0.103488, 1.0),
        (-0.02, 0.04, 50, 0.276152, 1.0),
        (0.02, 0.04, 50, 0.0276152, 0.1),
        (0.01, 0.09, 100, 0.334551, 0.599484),
    ],
)
def test_that_a_tenfold_fall_is_as_likely_as_stated(mu, variance, t, by, ever):
    assert_allclose(quasi.chance_by(TEN, mu, variance, t), by, rtol=SIX)
    assert_allclose(quasi.chance_ever(TEN, mu, variance), ever, rtol=SIX)
    assert_allclose(quasi.chance_by(TEN, mu, variance, 1e7), ever, rtol=3e-3)  # slow at mu = 0


@pytest.mark.parametrize(("mu", "variance"), [(-0.03, 0.05), (0.02, 0.04)])
def test_that_the_chance_is_the_integral_of_the_inverse_gaussian(mu, variance):
    def density(t):
        return (
            TEN
            / np.sqrt(2 * np.pi * variance * t**3)
            * np.exp(-((TEN + mu * t) ** 2) / (2 * variance * t))
        )

    slow = quad(density, 0.0, 60.0, epsabs=1e-13)[0]
    assert_allclose(quasi.chance_by(TEN, mu, variance, 60), slow, rtol=1e-9)
    ever = quasi.chance_ever(TEN, mu, variance)
    mean = quad(lambda t: t * density(t), 0.0, np.inf, limit=400)[0] / ever
    assert_allclose(quasi.mean_time_if_reached(TEN, mu), mean, rtol=1e-6)


def test_that_a_steep_decline_does_not_overflow():
    """Pitfall: exp(-2 mu d / s2) alone is infinite here."""
    assert quasi.chance_by(50.0, -5.0, 0.01, 20.0) == 1.0
    assert quasi.chance_ever(50.0, -5.0, 0.01) == 1.0


def test_that_without_chance_the_trend_alone_decides():
    found = quasi.chance_by(
        [0.0, 1.0, 1.0, 1.0, 0.0], [0.1, -0.1, -0.1, 0.0, 0.1], 0.0, [5, 9, 11, 9, 0]
    )
    assert list(found) == [1.0, 0.0, 1.0, 0.0, 1.0]
    assert list(quasi.chance_by([0.0, 1.0], -0.1, 0.04, 0.0)) == [1.0, 0.0]
    nearly = quasi.chance_by(1.0, -0.1, 1e-7, [9, 11])
    assert_allclose(nearly, [0.0, 1.0], atol=1e-12)


def test_that_no_distance_is_there_already():
    assert_allclose(quasi.chance_by(0.0, [-0.1, 0.0, 0.1], 0.04, 10), 1.0, rtol=1e-14)
    assert_allclose(quasi.mean_time_if_reached([0.0, 0.0, 1.0], [0.1, 0.0, 0.0]), [0, 0, np.inf])


@pytest.mark.parametrize(
    ("start", "capacity", "r", "years"),
    [
        (50, 50, 0.02, 277.119),
        (50, 50, 0.0, 153.039),
        (50, 50, -0.02, 96.7421),
        (10, 200, 0.05, 3553.95),
    ],
)
def test_that_a_ceiling_sets_the_mean_time(start, capacity, r, years):
    """Foley 1994, from memory; v = 0.1."""
    assert_allclose(quasi.mean_time_with_ceiling(start, capacity, r, 0.1), years, rtol=SIX)


def test_that_the_mean_time_solves_the_diffusion_equation():
    """(v/2) T'' + r T' = -1, T(0) = 0, T'(k) = 0, by differences of 2000 steps."""
    r, v, k, steps = 0.05, 0.1, np.log(200.0), 2000
    h = k / steps
    system, right = np.zeros((steps, steps)), -np.ones(steps)
    for i in range(steps):  # unknowns at h, 2h, ..., k
        system[i, i] = -v / h**2
        below, above = v / (2 * h**2) - r / (2 * h), v / (2 * h**2) + r / (2 * h)
        if i > 0:
            system[i, i - 1] = below
        if i + 1 < steps:
            system[i, i + 1] = above
        else:
            system[i, i - 1] = below + above  # reflecting
    time = np.linalg.solve(system, right)
    at = np.arange(1, steps + 1) * h
    found = quasi.mean_time_with_ceiling(np.exp(at), 200.0, r, v)
    assert_allclose(found[99::100], time[99::100], rtol=1e-4)  # differences: order h^2


@pytest.mark.parametrize("r", [0.0, 1e-9, -1e-8, 2.4e-7, -2.6e-7, 1e-5])
def test_that_the_mean_time_is_smooth_through_no_growth(r):
    with mpmath.workdps(50):
        n0, k, v = mpmath.log(30), mpmath.log(80), mpmath.mpf("0.1")
        s = mpmath.mpf(r) / v
        exact = 2 * n0 / v * (k - n0 / 2)
        if r:
            grown = mpmath.exp(2 * s * k) * (1 - mpmath.exp(-2 * s * n0)) - 2 * s * n0
            exact = grown / (2 * mpmath.mpf(r) * s)
    assert_allclose(quasi.mean_time_with_ceiling(30, 80, r, 0.1), float(exact), rtol=1e-5)


def test_that_a_trend_is_found_back_from_uneven_years():
    """Exact growth by 3 % a year: no variance; then noise of a known kind."""
    years = np.array([2000, 2001, 2004, 2006, 2011])
    found = quasi.fit_counts(years, 50 * 1.03 ** (years - 2000.0))
    assert_allclose((found.mu, found.variance), (np.log(1.03), 0.0), atol=1e-15)
    rng = np.random.default_rng(7)
    years = np.cumsum(rng.integers(1, 4, size=4000))
    steps = rng.normal(0.01 * np.diff(years), 0.1 * np.sqrt(np.diff(years)))
    found = quasi.fit_counts(years, np.exp(np.concatenate([[3.0], 3.0 + np.cumsum(steps)])))
    assert abs(found.mu - 0.01) < 4 * found.mu_error
    assert_allclose(found.variance, 0.01, rtol=4 * np.sqrt(2 / 4000))
    assert found.variance_low < found.variance < found.variance_high


def test_that_yearly_counts_have_the_ordinary_mean_and_variance():
    """Even years: mean and unbiased variance of the log steps."""
    counts = np.array([40, 44, 37, 41, 30, 35.0])
    steps = np.diff(np.log(counts))
    found = quasi.fit_counts(np.arange(6), counts)
    assert_allclose((found.mu, found.variance), (steps.mean(), steps.var(ddof=1)), rtol=1e-12)


def test_that_the_range_holds_the_best_value_and_widens_with_ignorance():
    counts = [40, 44, 37, 41, 30, 35, 33, 38, 29, 31]
    trend = quasi.fit_counts(np.arange(10), counts)
    low, best, high = quasi.chance_range(TEN, trend, [10, 20, 50])
    assert np.all((low <= best) & (best <= high))
    narrow = quasi.chance_range(TEN, quasi.fit_counts(np.arange(10), counts, 0.5), [10, 20, 50])
    assert np.all(high - low > narrow[2] - narrow[0])


@pytest.mark.parametrize(
    ("years", "counts"),
    [([1, 2], [3, 4]), ([1, 2, 3], [3, 0, 4]), ([1, 3, 2], [3, 4, 5]), ([1, 1, 2], [3, 4, 5])],
)
def test_that_counts_which_cannot_be_fitted_are_refused(years, counts):
    with pytest.raises(ValueError, match="three or more counts"):
        quasi.fit_counts(years, counts)
