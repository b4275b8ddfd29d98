"""Effective size from the numbers of young that parents leave.

k is the number of *recruited* young (successful gametes) of an adult, adults without any included;
V_k its variance with divisor N. Inbreeding size: the chance that two gametes share a parent;
variance size: the drift of allele frequencies. They agree only at constant numbers.
Sources: Wright 1938, Kimura & Crow 1963 (Evolution 17:279), Crow & Denniston 1988 (Evolution
42:482), from memory; the first two checked by enumeration.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total


class Families(NamedTuple):
    """Number of adults, mean and variance (divisor N) of their recruited young, each (...)."""

    adults: FloatArray
    mean: FloatArray
    variance: FloatArray


class SexFamilies(NamedTuple):
    """Recruited sons and daughters of the adults of one sex, each (...).

    `adults`: their number; `sons`, `daughters`: means; `var_sons`, `var_daughters`: variances;
    `covariance`: of sons and daughters of one parent.
    """

    adults: Numbers
    sons: Numbers
    daughters: Numbers
    var_sons: Numbers
    var_daughters: Numbers
    covariance: Numbers


def families(young: Numbers) -> Families:
    """Return number, mean and variance (divisor N) of the young of each adult; (..., N) -> (...).

    Adults that left none stand there as 0: the variance among breeders alone, put beside the number
    of all adults, gives a size that is too high. Only `inbreeding_size` is the same without them.
    """
    k = floats(young)
    count = np.full(k.shape[:-1], float(k.shape[-1]))[()]
    return Families(count, np.mean(k, axis=-1), np.var(k, axis=-1))


def inbreeding_size(given: Families) -> FloatArray:
    """Return (N k - 1) / (k - 1 + V_k / k): exact for any mean k, one sex or both pooled.

    Parameters
    ----------
    given : Families
        N parents, mean k above 0, variance V_k.

    Returns
    -------
    (...) array
        Animals of the *parents'* generation; (4N - 2) / (V_k + 2) where k is 2.
    """
    n, k, spread = (floats(x) for x in given)
    return (n * k - 1.0) / (k - 1.0 + spread / k)


def variance_size(given: Families, departure: Numbers | None = None) -> FloatArray:
    """Return N k / [(s2/k) (1 + a) + 1 - a], s2 = V_k N / (N - 1): exact for any mean k.

    Parameters
    ----------
    given : Families
        N parents (at least 2), mean k above 0, variance V_k (divisor N).
    departure : (...) array, optional
        a, departure of the parents from Hardy-Weinberg proportions; for a random arrangement
        -1/(2N - 1).

    Returns
    -------
    (...) array
        Animals. Above the inbreeding size in a growing population, below it in a shrinking one.
    """
    n, k, spread = (floats(x) for x in given)
    a = -1.0 / (2.0 * n - 1.0) if departure is None else floats(departure)
    sample = spread * n / (n - 1.0)
    return n * k / (sample / k * (1.0 + a) + 1.0 - a)


def two_sexes_inbreeding_size(fathers: SexFamilies, mothers: SexFamilies) -> FloatArray:
    """Return the inbreeding size with separate sexes, growing or shrinking.

    1/Ne = sum over sexes of (C + mu_sons mu_daughters) / (4 N mu_sons mu_daughters), C the
    covariance: two copies meet in a grandparent through a son and a daughter.

    Parameters
    ----------
    fathers, mothers : SexFamilies
        Of the *grandparents'* generation; mean sons and daughters above 0.

    Returns
    -------
    (...) array
        Animals. Source: Crow & Denniston 1988.
    """
    share: FloatArray = np.zeros(())
    for sex in (fathers, mothers):
        n, sons, daughters, _, _, together = (floats(x) for x in sex)
        share = share + (together + sons * daughters) / (4.0 * n * sons * daughters)
    return 1.0 / share


def two_sexes_variance_size(fathers: SexFamilies, mothers: SexFamilies) -> FloatArray:
    """Return the variance size with separate sexes, growing or shrinking: approximate.

    1/Ne = 1/(4 N_m) + 1/(4 N_f), each 1/N_s = [1/mu_sons + 1/mu_daughters + V_sons/mu_sons^2
    + 2 C/(mu_sons mu_daughters) + V_daughters/mu_daughters^2] / (2 (2N - 1)).

    Parameters
    ----------
    fathers, mothers : SexFamilies
        Of the *parents'* generation; variances and covariance with divisor N; means above 0.

    Returns
    -------
    (...) array
        Animals. Source: Crow & Denniston 1988 (form from its abstract). Each sex's part is exact
        for copies arranged at random among its parents; derived.
    """
    share: FloatArray = np.zeros(())
    for sex in (fathers, mothers):
        n, sons, daughters, vs, vd, together = (floats(x) for x in sex)
        parts = 1.0 / sons + 1.0 / daughters + vs / sons**2 + vd / daughters**2
        parts = parts + 2.0 * together / (sons * daughters)
        share = share + 0.25 * parts / (2.0 * (2.0 * n - 1.0))
    return 1.0 / share


def lifetime_variance(survivors: Numbers, young_at_age: Numbers) -> FloatArray:
    """Return V_k of a cohort whose animals leave Poisson numbers of young at each age.

    Variance by chance at each age plus variance among animals that die at different ages.

    Parameters
    ----------
    survivors : (..., A) array
        Share of the cohort alive in each age class; the first is 1, later ones never larger.
    young_at_age : (..., A) array
        Mean successful gametes of an animal in each class.

    Returns
    -------
    (...) array
        Variance of the lifetime number. For `size.from_overlapping_generations` the mean, the sum
        of survivors * young, must be 2.
    """
    alive, mean = np.broadcast_arrays(floats(survivors), floats(young_at_age))
    dying = alive - np.concatenate([alive[..., 1:], np.zeros_like(alive[..., :1])], axis=-1)
    lifetime = np.cumsum(mean, axis=-1)
    whole = total(alive * mean)
    return whole + total(dying * (lifetime - whole[..., np.newaxis]) ** 2)
