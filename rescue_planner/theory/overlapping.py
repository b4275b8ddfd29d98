"""Effective size with overlapping generations: two sexes, and an exact recursion over age classes.

Ne is per *generation*: a time unit (a year) loses 1/(2 Ne L) of gene diversity, L the generation
length in that unit. Sources: Hill 1972 (Theor. Popul. Biol. 3:278), Hill 1979 (Genetics 92:317),
Felsenstein 1971 (Genetics 68:581), from memory; the exact recursion derived.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total
from rescue_planner.theory.families import SexFamilies

_ROUNDS = 1000
_SETTLED = 1e-15


class AgeClasses(NamedTuple):
    """What age classes make of drift: generation length L, yearly share kept, exact Ne; floats."""

    generation_length: float
    kept_per_unit: float
    ne: float


def two_sexes_short(
    newborn: Numbers, generation_length: Numbers, male_variance: Numbers, female_variance: Numbers
) -> FloatArray:
    """Return Hill's Ne = 8 N_1 L / (V_m + V_f + 4), sexes born in equal numbers.

    Parameters
    ----------
    newborn : (...) array
        N_1, animals of *both* sexes that enter the cohort per unit of time.
    generation_length : (...) array
        L, in that unit.
    male_variance, female_variance : (...) array
        Variance of the lifetime number of recruits of a male (female) of the cohort.

    Returns
    -------
    (...) array
        Animals. Source: Hill 1972.
    """
    spread = floats(male_variance) + floats(female_variance) + 4.0
    return 8.0 * floats(newborn) * floats(generation_length) / spread


def two_sexes_full(
    males: SexFamilies, females: SexFamilies, generation_length: Numbers
) -> FloatArray:
    """Return Hill's Ne for any numbers of males and females entering the cohort.

    1/Ne = [2 + V_mm + 2 (M/F) C_m + (M/F)^2 V_mf] / (16 M L)
    + [2 + (F/M)^2 V_fm + 2 (F/M) C_f + V_ff] / (16 F L), V_mf the variance of daughters of a male.

    Parameters
    ----------
    males, females : SexFamilies
        `adults`: M and F entering per unit of time; variances and covariance of *lifetime* sons and
        daughters. The means are not read: numbers are constant.
    generation_length : (...) array
        L, in the same unit.

    Returns
    -------
    (...) array
        Animals. Source: Hill 1979 equation 9 (form confirmed in Waples, Do & Chopelet 2011,
        typography from memory).
    """
    m, f, length = floats(males.adults), floats(females.adults), floats(generation_length)
    ratio = m / f
    of_males = 2.0 + floats(males.var_sons) + 2.0 * ratio * floats(males.covariance)
    of_males = of_males + ratio**2 * floats(males.var_daughters)
    of_females = 2.0 + floats(females.var_daughters) + 2.0 / ratio * floats(females.covariance)
    of_females = of_females + floats(females.var_sons) / ratio**2
    return 16.0 * length / (of_males / m + of_females / f)


def generation_length(shares: Numbers) -> FloatArray:
    """Return L, mean age of parents weighted by gene copies; a newborn counts as age 1.

    (..., A) shares of newborn gene copies from each age class, sum 1 -> (...), units of time.
    """
    share = floats(shares)
    return total(share * np.arange(1, share.shape[-1] + 1))


def _identity_step(numbers: FloatArray, shares: FloatArray) -> FloatArray:
    """Return the matrix that carries diversities of all pairs of classes one unit on.

    A pair of distinct copies (class i, class j), i <= j, each class one entry. Newborn copies are
    drawn from all classes by `shares`; an older class is the class before it, thinned at random.
    """
    ages = numbers.size
    at = {pair: k for k, pair in enumerate((i, j) for i in range(ages) for j in range(i, ages))}
    step = np.zeros((len(at), len(at)))
    for (i, j), row in at.items():
        first = np.eye(ages)[i - 1] if i else shares
        second = np.eye(ages)[j - 1] if j else shares
        for a in map(int, np.flatnonzero(first)):
            for b in map(int, np.flatnonzero(second)):
                weight = first[a] * second[b]
                if a == b and i == 0:  # drawn with replacement: the same copy can come twice
                    weight *= 1.0 - 0.5 / numbers[a]
                step[row, at[min(a, b), max(a, b)]] += weight
    return step


def _loss(step: FloatArray) -> float:
    """Return 1 minus the leading eigenvalue, by inverse iteration at 1: keeps the small digits."""
    inverse = np.linalg.inv(np.eye(step.shape[0]) - step)
    pairs, growth = np.ones(step.shape[0]), 0.0
    for _ in range(_ROUNDS):
        grown = inverse @ pairs
        before, growth = growth, float(np.max(grown))
        pairs = grown / growth
        if abs(growth - before) <= _SETTLED * growth:
            break
    return 1.0 / growth


def exact_age_classes(numbers: Numbers, shares: Numbers) -> AgeClasses:
    """Return the exact rate of drift of an age-structured population, one sex or both pooled.

    Leading eigenvalue of the recursion of pair diversities among age classes; young drawn at random
    from the gene copies of each class.

    Parameters
    ----------
    numbers : (A,) array
        Animals in each age class, constant, not increasing with age.
    shares : (A,) array
        Share of newborn gene copies that come from each class (as counted before they breed), sum
        1.

    Returns
    -------
    AgeClasses
        Ne = 1 / (2 L (1 - kept)), about Hill's.

    Raises
    ------
    ValueError
        If the two differ in length or the shares don't sum to 1.
    """
    n, share = floats(numbers), floats(shares)
    if n.ndim != 1 or n.shape != share.shape or abs(float(np.sum(share)) - 1.0) > 1e-9:
        raise ValueError("age classes need one number and one share each, the shares summing to 1")
    lost = _loss(_identity_step(n, share))
    length = float(generation_length(share))
    return AgeClasses(length, 1.0 - lost, 0.5 / (length * lost))
