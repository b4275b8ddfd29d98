"""Falling below a threshold: log numbers as a random walk with drift (diffusion).

ln N wanders with mean mu and variance s2 per year; d = ln(N_0 / N_q) is the distance to the
threshold. Holds for small independent yearly noise, no crowding, no chance in single fates: the
threshold well above 1 animal. Sources: Dennis, Munholland & Scott 1991 (Ecol. Monogr. 61:115);
Lande & Orzack 1988 (PNAS 85:7418); Foley 1994 (Conserv. Biol. 8:124); Lande 1993, from memory.
"""

from typing import NamedTuple

import numpy as np
from scipy.special import chdtri, log_ndtr, ndtr, stdtrit

from rescue_planner.theory.arrays import FloatArray, Numbers, floats


class CountTrend(NamedTuple):
    """Mean and variance of log growth per year, with 95 % (or other) limits of both.

    `mu`, `variance` (unbiased), `mu_error` standard error; `mu_low`, `mu_high` by Student's t,
    `variance_low`, `variance_high` by chi-squared. All variance of the counts is in it, sampling
    error too: then risk comes out too high.
    """

    mu: float
    variance: float
    mu_error: float
    mu_low: float
    mu_high: float
    variance_low: float
    variance_high: float


def chance_by(distance: Numbers, mu: Numbers, variance: Numbers, years: Numbers) -> FloatArray:
    """Return the chance of reaching the threshold within so many years.

    Phi((-d - mu t)/(s sqrt t)) + exp(-2 mu d / s2) Phi((-d + mu t)/(s sqrt t)).

    Parameters
    ----------
    distance : (...) array
        d = ln(N_0 / N_q), not negative.
    mu, variance : (...) array
        Mean and variance of log growth per year.
    years : (...) array
        t, not negative.

    Returns
    -------
    (...) array
        Probability; where nothing has varied yet (s2 t = 0), 1 or 0 as the trend alone is there or
        isn't. The second term is computed in logarithms, so that it doesn't overflow.
    """
    d, mu_, v, t = floats(distance), floats(mu), floats(variance), floats(years)
    sure = v * t == 0.0
    spread, noise = np.sqrt(np.where(sure, 1.0, v * t)), np.where(sure, 1.0, v)
    reflected = np.exp(-2.0 * mu_ * d / noise + log_ndtr((mu_ * t - d) / spread))
    chance = np.minimum(1.0, ndtr((-d - mu_ * t) / spread) + reflected)
    return np.where(sure, d + np.minimum(0.0, mu_ * t) <= 0.0, chance)[()]


def chance_ever(distance: Numbers, mu: Numbers, variance: Numbers) -> FloatArray:
    """Return the chance of ever reaching the threshold: 1 if mu <= 0, else exp(-2 mu d / s2)."""
    return np.exp(np.minimum(0.0, -2.0 * floats(mu) * floats(distance) / floats(variance)))


def mean_time_if_reached(distance: Numbers, mu: Numbers) -> FloatArray:
    """Return d / |mu|, the mean years to the threshold among courses that reach it; (...).

    0 where d is 0, else inf at mu = 0. Inverse Gaussian; never the mean over all courses when mu is
    above 0.
    """
    d = floats(distance)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(d == 0.0, 0.0, d / np.abs(floats(mu)))[()]


def fit_counts(years: Numbers, counts: Numbers, level: float = 0.95) -> CountTrend:
    """Return mu and s2 from counts, at even or uneven intervals.

    Regression through the origin of ln(N_j / N_i) / sqrt(tau) on sqrt(tau).

    Parameters
    ----------
    years, counts : (T,) array
        Years in order, counts above 0, at least three.
    level : float
        Of the limits, 0 to 1.

    Returns
    -------
    CountTrend
        Per year.

    Raises
    ------
    ValueError
        If there are fewer than three counts, one isn't above 0, or years are out of order.
    """
    year, n = floats(years), floats(counts)
    if n.size < 3 or np.any(n <= 0.0) or np.any(np.diff(year) <= 0.0):
        raise ValueError("needs three or more counts above 0 in the order of their years")
    tau, steps = np.diff(year), np.diff(np.log(n))
    span, q = float(np.sum(tau)), steps.size
    mu = float(np.sum(steps)) / span
    variance = float(np.sum((steps - mu * tau) ** 2 / tau)) / (q - 1)
    error, tail = float(np.sqrt(variance / span)), 0.5 * (1.0 - level)
    reach = float(stdtrit(q - 1, 1.0 - tail)) * error
    bounds = [(q - 1) * variance / float(chdtri(q - 1, p)) for p in (tail, 1.0 - tail)]
    return CountTrend(mu, variance, error, mu - reach, mu + reach, bounds[0], bounds[1])


def chance_range(
    distance: Numbers, trend: CountTrend, years: Numbers
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return low, best and high chance of reaching the threshold as the data leave it open.

    The least and the greatest of `chance_by` over the four corners of the limits of mu and s2; a
    range of ignorance, wide for short series: never show the best value alone.

    Parameters
    ----------
    distance, years : (...) array
        d and t.
    trend : CountTrend
        From `fit_counts`.

    Returns
    -------
    tuple of (...) arrays
        Probabilities.
    """
    corners = [
        chance_by(distance, mu, variance, years)
        for mu in (trend.mu_low, trend.mu_high)
        for variance in (trend.variance_low, trend.variance_high)
    ]
    best = chance_by(distance, trend.mu, trend.variance, years)
    stacked = np.stack([*corners, best])
    return np.min(stacked, axis=0), best, np.max(stacked, axis=0)


def mean_time_with_ceiling(
    start: Numbers, capacity: Numbers, log_growth: Numbers, variance: Numbers
) -> FloatArray:
    """Return mean years until 1 animal is left, with a ceiling K and environmental noise only.

    [e^{2 s k} (1 - e^{-2 s n0}) - 2 s n0] / (2 r s), n0 = ln N_0, k = ln K, s = r / v; at r = 0
    (2 n0 / v) (k - n0 / 2).

    Parameters
    ----------
    start, capacity : (...) array
        N_0 and K, animals, 1 <= N_0 <= K.
    log_growth, variance : (...) array
        r, mean *log* growth per year, and its variance v, above 0.

    Returns
    -------
    (...) array
        Years. Foley 1994, from memory; checked against the diffusion equation.
    """
    n0, k, r = np.log(floats(start)), np.log(floats(capacity)), floats(log_growth)
    v = floats(variance)
    s = r / v
    still = np.abs(s) * np.maximum(k, 1.0) < 1e-5  # below it the exact form has lost its digits
    safe, growth = np.where(still, 1.0, s), np.where(still, 1.0, r)
    moving = (-np.exp(2.0 * safe * k) * np.expm1(-2.0 * safe * n0) - 2.0 * safe * n0) / (
        2.0 * growth * safe
    )
    level = (2.0 * n0 / v) * (k - 0.5 * n0) + (2.0 * s / v) * n0 * (k * k - k * n0 + n0 * n0 / 3.0)
    return np.where(still, level, moving)[()]
