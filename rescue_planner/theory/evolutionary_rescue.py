"""Whether adaptation outruns decline after an abrupt shift of the optimum (evolutionary rescue).

Gaussian stabilising selection of squared width w2, phenotypic variance V_P, constant heritability;
density independent and deterministic. Source: Gomulkiewicz & Holt 1995 (Evolution 49:201), from
memory; the closed form was iterated to check it.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats


class Peak(NamedTuple):
    """The fitness peak: growth per *generation* of an animal at the optimum, V_P, w2; each (...).

    Variances in phenotypic SD squared at the start.
    """

    growth: Numbers
    phenotypic_variance: Numbers = 1.0
    width2: Numbers = 9.0


class AbruptShift(NamedTuple):
    """Course after an abrupt shift, generations 0..t on the last axis (..., t + 1)."""

    log_numbers: FloatArray
    lag: FloatArray


def lag_kept(heritability: Numbers, peak: Peak) -> FloatArray:
    """Return k = (w2 + (1 - h2) V_P) / (w2 + V_P), the share of the lag left after a generation."""
    variance, w2 = floats(peak.phenotypic_variance), floats(peak.width2)
    return (w2 + (1.0 - floats(heritability)) * variance) / (w2 + variance)


def _log_best(peak: Peak) -> FloatArray:
    """Return ln W, log growth of a population whose mean is at the optimum."""
    load = 0.5 * np.log1p(floats(peak.phenotypic_variance) / floats(peak.width2))
    return np.asarray(np.log(floats(peak.growth)) - load)


def _spread(peak: Peak) -> FloatArray:
    return floats(peak.width2) + floats(peak.phenotypic_variance)


def course_after_shift(
    start: Numbers, lag: Numbers, heritability: Numbers, peak: Peak, generations: int
) -> AbruptShift:
    """Return log numbers and the lag after an abrupt shift of the optimum.

    ln N_t = ln N_0 + t ln W - d_0^2 / (2 (w2 + V_P)) (1 - k^{2t}) / (1 - k^2), d_t = k^t d_0.

    Parameters
    ----------
    start, lag : (...) array
        N_0, animals; d_0, phenotypic SD.
    heritability : (...) array
        h2, above 0.
    peak : Peak
        W_max, V_P and w2.
    generations : int
        t.

    Returns
    -------
    AbruptShift
        On t = 0..`generations`.
    """
    t = np.arange(generations + 1.0)
    k = lag_kept(heritability, peak)[..., np.newaxis]
    best = _log_best(peak)[..., np.newaxis]
    d0 = floats(lag)[..., np.newaxis]
    spread = _spread(peak)[..., np.newaxis]
    lost = d0**2 / (2.0 * spread) * (1.0 - k ** (2.0 * t)) / (1.0 - k**2)
    return AbruptShift(np.log(floats(start))[..., np.newaxis] + t * best - lost, k**t * d0)


def generations_to_growth(lag: Numbers, heritability: Numbers, peak: Peak) -> FloatArray:
    """Return when numbers begin to rise again: ln[2 (w2+V_P) ln W / d_0^2] / (2 ln k).

    Parameters
    ----------
    lag, heritability : (...) array
        As in `course_after_shift`.
    peak : Peak
        W_max, V_P and w2.

    Returns
    -------
    (...) array
        Generations; 0 where numbers never fall, inf where even the best type declines or nothing
        is inherited.
    """
    enough = 2.0 * _spread(peak) * _log_best(peak)
    d2 = floats(lag) ** 2
    k = lag_kept(heritability, peak)
    with np.errstate(divide="ignore", invalid="ignore"):
        time = np.log(enough / d2) / (2.0 * np.log(k))
    never = (enough <= 0.0) | ((k >= 1.0) & (d2 >= enough))
    return np.where(never, np.inf, np.where(d2 < enough, 0.0, time))[()]


def generations_below(log_numbers: Numbers, critical: Numbers) -> FloatArray:
    """Return how many generations of a course have fewer than `critical` animals.

    Parameters
    ----------
    log_numbers : (..., T) array
        ln N at whole generations.
    critical : (...) array
        N_c, animals, above 0: where single fates begin to matter.

    Returns
    -------
    (...) array
        Whole generations.
    """
    below = floats(log_numbers) < np.log(floats(critical))[..., np.newaxis]
    count: FloatArray = np.sum(below, axis=-1).astype(np.float64)
    return count[()]
