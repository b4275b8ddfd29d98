"""Exact Markov chains of small populations under a ceiling: oracles for an engine.

Everything is enumerated, so keep K small. Derived; the order of events is the one stated and other
orders give other numbers.
"""

from typing import NamedTuple

import numpy as np
from scipy.special import betaln, gammaln, xlog1py, xlogy

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.weather import beta_parameters


class TwoSexCourse(NamedTuple):
    """At years 0..t, each (t + 1,): none left; a sex missing (or none left); mean animals.

    The mean counts zeros: it isn't the size to expect of those that persist.
    """

    gone: FloatArray
    sex_missing: FloatArray
    mean: FloatArray


def binomial_terms(n: int, chance: float) -> FloatArray:
    """Return P(0..n successes of n); (n + 1,)."""
    k = np.arange(n + 1.0)
    log_choose = gammaln(n + 1.0) - gammaln(k + 1.0) - gammaln(n - k + 1.0)
    terms: FloatArray = np.exp(log_choose + xlogy(k, chance) + xlog1py(n - k, -chance))
    return terms


def _beta_binomial_terms(n: int, mean: float, sd: float) -> FloatArray:
    alpha, beta = beta_parameters(mean, sd)
    k = np.arange(n + 1.0)
    log_choose = gammaln(n + 1.0) - gammaln(k + 1.0) - gammaln(n - k + 1.0)
    terms: FloatArray = np.exp(log_choose + betaln(alpha + k, beta + n - k) - betaln(alpha, beta))
    return terms


def poisson_terms_up_to(mean: float, places: int) -> FloatArray:
    """Return P(0..places) of a Poisson number cut at `places`: the rest sits there."""
    k = np.arange(places + 1.0)
    terms: FloatArray = np.exp(xlogy(k, mean) - mean - gammaln(k + 1.0))
    terms[-1] = max(0.0, 1.0 - float(np.sum(terms[:-1])))
    return terms


def one_sex_matrix(
    survival: float, daughters: float, capacity: int, survival_sd: float = 0.0
) -> FloatArray:
    """Return the matrix of N' = min(K, Bin(N, s) + Poisson(b N)).

    Parameters
    ----------
    survival, daughters : float
        s; b per female alive at the start of the year.
    capacity : int
        K.
    survival_sd : float
        SD of s among years, a beta shared by all in a year; 0 for none.

    Returns
    -------
    (K + 1, K + 1) array
        Row = number now; rows sum to 1, row 0 stays.

    Raises
    ------
    ValueError
        If the SD is not feasible.
    """
    matrix = np.zeros((capacity + 1, capacity + 1))
    matrix[0, 0] = 1.0
    for n in range(1, capacity + 1):
        lived = (
            _beta_binomial_terms(n, survival, survival_sd)
            if survival_sd
            else binomial_terms(n, survival)
        )
        born = poisson_terms_up_to(daughters * n, capacity)
        number = np.convolve(lived, born)
        matrix[n, :capacity] = number[:capacity]
        matrix[n, capacity] = np.sum(number[capacity:])
    return matrix


def gone_by(matrix: Numbers, start: int, years: int) -> FloatArray:
    """Return the chance that none is left at years 0..t from `start` animals; (t + 1,)."""
    step = floats(matrix)
    mass = np.zeros(step.shape[0])
    mass[start] = 1.0
    out = np.empty(years + 1)
    for t in range(years + 1):
        out[t] = mass[0]
        mass = floats(mass @ step)
    return out


def mean_time_to_extinction(matrix: Numbers) -> FloatArray:
    """Return the mean years until none is left, from 1..K animals; (K + 1, K + 1) -> (K,)."""
    inside = floats(matrix)[1:, 1:]
    return floats(np.linalg.solve(np.eye(inside.shape[0]) - inside, np.ones(inside.shape[0])))


def _young_by_sex(mean: float, places: int) -> FloatArray:
    """Return P(females, males) among young born, cut at the free places, each sex with 1/2."""
    out = np.zeros((places + 1, places + 1))
    for young, chance in enumerate(poisson_terms_up_to(mean, places)):
        females = binomial_terms(young, 0.5)
        for f in range(young + 1):
            out[f, young - f] += chance * females[f]
    return out


def _two_sex_year(
    females: int, males: int, survival: float, young: float, capacity: int
) -> FloatArray:
    """Return P(females, males) a year on."""
    out = np.zeros((capacity + 1, capacity + 1))
    births = young * females if males else 0.0
    for left_f, chance_f in enumerate(binomial_terms(females, survival)):
        for left_m, chance_m in enumerate(binomial_terms(males, survival)):
            free = capacity - left_f - left_m
            both = chance_f * chance_m * _young_by_sex(births, free)
            out[left_f : left_f + free + 1, left_m : left_m + free + 1] += both
    return out


def two_sex_course(
    females: int, males: int, survival: float, young: float, capacity: int, years: int
) -> TwoSexCourse:
    """Return how two sexes under a ceiling fare, exactly.

    Each year: survivors Bin(F, s) and Bin(M, s); if a male was alive at the start of the year,
    Poisson(young * F at the start) young are born, cut to the free places, female with chance 1/2.

    Parameters
    ----------
    females, males : int
        At the start, together at most `capacity`.
    survival, young : float
        s; young of both sexes per female.
    capacity, years : int
        K of both sexes together (keep it near 12); t.

    Returns
    -------
    TwoSexCourse
        One value a year.

    Raises
    ------
    ValueError
        If there are more animals than places.
    """
    if females + males > capacity:
        raise ValueError("more animals at the start than the ceiling allows")
    size = capacity + 1
    step = _two_sex_matrix(survival, young, capacity)
    mass = np.zeros((size, size))
    mass[females, males] = 1.0
    number = np.add.outer(np.arange(size), np.arange(size))
    out = np.empty((3, years + 1))
    for t in range(years + 1):
        missing = np.sum(mass[0]) + np.sum(mass[:, 0]) - mass[0, 0]
        out[:, t] = mass[0, 0], missing, np.sum(mass * number)
        mass = (mass.ravel() @ step).reshape(size, size)
    return TwoSexCourse(*out)


def _two_sex_matrix(survival: float, young: float, capacity: int) -> FloatArray:
    size = capacity + 1
    matrix = np.zeros((size * size, size * size))
    for f in range(size):
        for m in range(size - f):
            matrix[f * size + m] = _two_sex_year(f, m, survival, young, capacity).ravel()
    return matrix
