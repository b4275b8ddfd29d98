"""Shares counted in replicates: their Monte Carlo intervals, and how many replicates it takes.

The intervals cover chance in the replicates only, not what isn't known about the inputs: say so
wherever they are shown. Sources: Wilson 1927; Clopper & Pearson 1934; Fleiss, Levin & Paik 2003,
from memory.
"""

import numpy as np
from scipy.special import betaincinv, ndtri

from rescue_planner.theory.arrays import FloatArray, Numbers, floats


def _z(level: Numbers) -> FloatArray:
    quantile: FloatArray = ndtri(0.5 * (1.0 + floats(level)))
    return quantile


def _counts(met: Numbers, runs: Numbers) -> tuple[FloatArray, FloatArray]:
    k, n = floats(met), floats(runs)
    if np.any((n <= 0.0) | (k < 0.0) | (k > n)):
        raise ValueError("a count must lie between 0 and the number of runs, which is above 0")
    return k, n


def wilson_interval(
    met: Numbers, runs: Numbers, level: Numbers = 0.95
) -> tuple[FloatArray, FloatArray]:
    """Return Wilson's interval of a share.

    Parameters
    ----------
    met, runs : (...) array
        k of n.
    level : (...) array
        Confidence, 0 to 1.

    Returns
    -------
    tuple of (...) arrays
        Low and high; at 0 of n the low end is 0 and the high end a bound well above it.

    Raises
    ------
    ValueError
        If k isn't between 0 and n, or n isn't above 0.
    """
    k, n = _counts(met, runs)
    z = _z(level)
    p, bottom = k / n, 1.0 + z**2 / n
    centre = (p + z**2 / (2.0 * n)) / bottom
    half = z * np.sqrt(p * (1.0 - p) / n + z**2 / (4.0 * n**2)) / bottom
    low = np.where(k == 0.0, 0.0, np.maximum(0.0, centre - half))
    high = np.where(k == n, 1.0, np.minimum(1.0, centre + half))
    return low[()], high[()]


def clopper_pearson_interval(
    met: Numbers, runs: Numbers, level: Numbers = 0.95
) -> tuple[FloatArray, FloatArray]:
    """Return the exact (conservative) interval of a share; arguments and errors as Wilson's."""
    k, n = _counts(met, runs)
    tail = 0.5 * (1.0 - floats(level))
    low = betaincinv(np.where(k == 0.0, 1.0, k), n - k + 1.0, tail)
    high = betaincinv(k + 1.0, np.where(k == n, 1.0, n - k), 1.0 - tail)
    return np.where(k == 0.0, 0.0, low)[()], np.where(k == n, 1.0, high)[()]


def bound_at_zero(runs: Numbers, level: Numbers = 0.95) -> FloatArray:
    """Return the one-sided upper bound of a share seen 0 times in n: 1 - (1 - level)^(1/n).

    (...); about 3 / n at 95 %. Print it as "fewer than ..", never as 0.
    """
    return -np.expm1(np.log1p(-floats(level)) / floats(runs))


def runs_for_half_width(share: Numbers, half_width: Numbers, level: Numbers = 0.95) -> FloatArray:
    """Return the runs that estimate a share to within a half width: z^2 p (1-p) / h^2.

    Parameters
    ----------
    share, half_width : (...) array
        p expected, 0 to 1; h, above 0.
    level : (...) array
        Confidence.

    Returns
    -------
    (...) array
        Whole runs, rounded up.
    """
    p = floats(share)
    return np.ceil(_z(level) ** 2 * p * (1.0 - p) / floats(half_width) ** 2)


def runs_to_tell_apart(
    share_one: Numbers, share_two: Numbers, power: Numbers = 0.8, level: Numbers = 0.95
) -> FloatArray:
    """Return the runs *per plan* that tell two shares apart, replicates unpaired.

    [z_a sqrt(2 pb (1-pb)) + z_b sqrt(p1 (1-p1) + p2 (1-p2))]^2 / (p1 - p2)^2, pb the mean share.

    Parameters
    ----------
    share_one, share_two : (...) array
        The two shares, different.
    power, level : (...) array
        Chance to find the difference; 1 - two-sided error.

    Returns
    -------
    (...) array
        Whole runs, rounded up; inf where the shares are equal.
    """
    one, two = floats(share_one), floats(share_two)
    mean = 0.5 * (one + two)
    null = _z(level) * np.sqrt(2.0 * mean * (1.0 - mean))
    apart: FloatArray = ndtri(floats(power)) * np.sqrt(one * (1.0 - one) + two * (1.0 - two))
    with np.errstate(divide="ignore"):
        return np.ceil((null + apart) ** 2 / (one - two) ** 2)


def error_of_difference(share_one: Numbers, share_two: Numbers, runs: Numbers) -> FloatArray:
    """Return the standard error of a difference of two shares from *independent* runs; (...)."""
    one, two = floats(share_one), floats(share_two)
    return np.sqrt((one * (1.0 - one) + two * (1.0 - two)) / floats(runs))


def error_of_paired_difference(only_one: Numbers, only_two: Numbers, runs: Numbers) -> FloatArray:
    """Return sqrt((b + c - (b - c)^2) / n), the same with common random numbers.

    Parameters
    ----------
    only_one, only_two : (...) array
        b and c, shares of replicates in which only the first (second) plan has the event.
    runs : (...) array
        n replicates, paired by seed.

    Returns
    -------
    (...) array
        Standard error, smaller than unpaired where the two plans go together.
    """
    b, c = floats(only_one), floats(only_two)
    return np.sqrt((b + c - (b - c) ** 2) / floats(runs))
