"""How allele frequencies spread in the long run between drift, steady flow, mutation, selection.

Diffusion (Wright 1931, 1937, from memory): density proportional to
mean-fitness^(2N) x^(A-1) (1-x)^(B-1), A = 4N (m p_d + v), B = 4N (m (1-p_d) + u). It has no atoms:
never read the chance that an allele is absent off it; the exact chain gives that. Fitness 1 + s,
1 + h s, 1; m share of gene copies from a donor of frequency p_d, v and u mutation to and from A.
"""

from typing import NamedTuple

import numpy as np
from scipy.special import betaln, expit, log_expit, xlog1py, xlogy

from rescue_planner.theory.arrays import FloatArray, Numbers, floats

_COARSE, _FINE = 4001, 20001
_FADED = 45.0  # exp(-45) of the peak is left out at either side


class Stationary(NamedTuple):
    """Mean and variance of the frequency over time or over like populations, each (...)."""

    mean: FloatArray
    variance: FloatArray


class Forces(NamedTuple):
    """What acts: effective size, flow, donor's frequency, mutation to and from A; each (...)."""

    ne: Numbers
    m: Numbers
    donor_p: Numbers
    mutation_to: Numbers = 0.0
    mutation_from: Numbers = 0.0


def exponents(forces: Forces) -> tuple[FloatArray, FloatArray]:
    """Return A = 4 Ne (m p_d + v) and B = 4 Ne (m (1-p_d) + u), each (...).

    Raises
    ------
    ValueError
        If either is 0: then one end is final and nothing is stationary between.
    """
    ne, m, p, to, away = (floats(x) for x in forces)
    a = 4.0 * ne * (m * p + to)
    b = 4.0 * ne * (m * (1.0 - p) + away)
    if np.any(a <= 0.0) or np.any(b <= 0.0):
        raise ValueError("flow or mutation has to bring in both alleles")
    return a, b


def neutral(forces: Forces) -> Stationary:
    """Return the mean A/(A+B) and variance of the neutral (beta) case, diffusion.

    Without mutation: mean p_d, variance p_d (1-p_d) / (1 + 4 Ne m).
    """
    a, b = exponents(forces)
    mean = a / (a + b)
    return Stationary(mean, mean * (1.0 - mean) / (1.0 + a + b))


def neutral_exact(forces: Forces) -> Stationary:
    """Return the neutral mean and variance of the discrete model, exact for any m and mutation.

    Mutation first, then flow, then drift. Variance = p (1-p) / [2 Ne - (2 Ne - 1) k^2] with
    k = (1-m)(1-u-v) and p the mean; counted among the breeding adults; derived.

    Parameters
    ----------
    forces : Forces
        Each (...).

    Returns
    -------
    Stationary
        Each (...).
    """
    ne, m, p, to, away = (floats(x) for x in forces)
    exponents(forces)
    keep = (1.0 - m) * (1.0 - to - away)
    mean = ((1.0 - m) * to + m * p) / (1.0 - keep)
    copies = 2.0 * ne
    return Stationary(mean, mean * (1.0 - mean) / (copies - (copies - 1.0) * keep**2))


def neutral_density(x: Numbers, forces: Forces) -> FloatArray:
    """Return the neutral (beta) density at frequency x, per unit of frequency; (...), 0 < x < 1."""
    a, b = exponents(forces)
    freq = floats(x)
    log: FloatArray = xlogy(a - 1.0, freq) + xlog1py(b - 1.0, -freq) - betaln(a, b)
    return np.exp(log)


def _log_density(odds: FloatArray, given: tuple[float, ...], powered: bool) -> FloatArray:
    """Return ln of the density over the log odds, up to a constant; given: a, b, 2N, s, h."""
    a, b, copies, s, h = given
    x = expit(odds)
    gain = s * (2.0 * h * x + (1.0 - 2.0 * h) * x**2)  # mean fitness - 1
    power = np.log1p(gain) if powered else gain
    log: FloatArray = a * log_expit(odds) + b * log_expit(-odds) + copies * power
    return log


def _moments(*given: float, powered: bool) -> tuple[float, float]:
    """Return mean and variance, summed over the log odds: there the density fades on both sides."""
    a, b, copies, s, h = given
    rise = _FADED + copies * abs(s) * (1.0 + abs(h))
    coarse = np.linspace(-rise / a - 10.0, rise / b + 10.0, _COARSE)
    value = _log_density(coarse, given, powered)
    live = coarse[value > np.max(value) - _FADED]
    step = coarse[1] - coarse[0]
    fine = np.linspace(live[0] - step, live[-1] + step, _FINE)
    value = _log_density(fine, given, powered)
    weight = np.exp(value - np.max(value))
    weight /= np.sum(weight)
    x = expit(fine)
    mean = float(np.sum(weight * x))
    return mean, float(np.sum(weight * (x - mean) ** 2))


def with_selection(
    forces: Forces, s: Numbers, h: Numbers, *, fitness_to_the_power: bool = True
) -> Stationary:
    """Return mean and variance of the frequency under selection too, diffusion.

    Parameters
    ----------
    forces : Forces
        Each (...).
    s, h : (...) array
        Fitness 1 + s, 1 + h s, 1, above 0.
    fitness_to_the_power : bool
        Mean fitness to the power 2 Ne (the default, closer to the exact chain), or its limit for
        weak selection exp(2 Ne (mean fitness - 1)).

    Returns
    -------
    Stationary
        Each (...).

    Raises
    ------
    ValueError
        If a fitness isn't above 0, or as in `exponents`.
    """
    a, b = exponents(forces)
    if np.any(floats(s) <= -1.0) or np.any(floats(h) * floats(s) <= -1.0):
        raise ValueError("fitness has to be above 0 for every genotype")

    def one(*given: float) -> tuple[float, float]:
        return _moments(*given, powered=fitness_to_the_power)

    solve = np.vectorize(one, otypes=[np.float64, np.float64])
    mean, variance = solve(a, b, 2.0 * floats(forces.ne), floats(s), floats(h))
    return Stationary(np.asarray(mean)[()], np.asarray(variance)[()])
