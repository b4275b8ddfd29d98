"""Viability selection and mutation at one locus in a very large population.

p is the frequency of the named allele A among newborn, w_AA, w_Aa, w_aa the fitness of the three
genotypes (only their ratios change p). Random mating, discrete generations, constant fitness.

Sources: Haldane 1924 (Trans. Camb. Phil. Soc. 23:19), Wright 1937 (PNAS 23:307), Crow & Kimura 1970
chapter 5, all from memory; the algebra was checked by enumeration.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats


def _genotypes(p: Numbers, fitness: Numbers) -> tuple[FloatArray, ...]:
    w = floats(fitness)
    if w.ndim == 0 or w.shape[-1] != 3:
        raise ValueError("fitness needs three values on its last axis: w_AA, w_Aa, w_aa")
    freq = floats(p)
    return freq, 1.0 - freq, w[..., 0], w[..., 1], w[..., 2]


def mean_fitness(p: Numbers, fitness: Numbers) -> FloatArray:
    """Return p^2 w_AA + 2 p (1 - p) w_Aa + (1 - p)^2 w_aa.

    Parameters
    ----------
    p : (...) array
        Frequency of A, 0 to 1.
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa, relative, not negative.

    Returns
    -------
    (...) array
        In the unit of `fitness`.

    Raises
    ------
    ValueError
        If the last axis of `fitness` isn't 3 long.
    """
    p_, q, w11, w12, w22 = _genotypes(p, fitness)
    return p_ * (p_ * w11 + q * w12) + q * (p_ * w12 + q * w22)


def after_selection(p: Numbers, fitness: Numbers) -> FloatArray:
    """Return the frequency of A after one round of viability selection.

    p' = p (p w_AA + (1 - p) w_Aa) / mean fitness. Where the mean fitness is 0 because A is absent
    or alone and that homozygote cannot live, p is returned unchanged: there is no survivor whose
    frequency could be told.

    Parameters
    ----------
    p : (...) array
        Frequency of A among newborn, 0 to 1.
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa, relative, not negative.

    Returns
    -------
    (...) array
        Frequency of A among survivors, 0 to 1.

    Raises
    ------
    ValueError
        If no genotype present can live although both alleles are there, or the last axis of
        `fitness` isn't 3 long.
    """
    p_, q, w11, w12, w22 = _genotypes(p, fitness)
    of_a = p_ * (p_ * w11 + q * w12)
    mean = of_a + q * (p_ * w12 + q * w22)
    if np.all(mean):
        return of_a / mean
    dead = mean == 0.0
    if np.any(dead & (p_ > 0.0) & (p_ < 1.0)):
        raise ValueError("mean fitness is 0: no genotype that is present can live")
    return np.where(dead, p_, of_a / np.where(dead, 1.0, mean))[()]


def average_effect(p: Numbers, fitness: Numbers) -> FloatArray:
    """Return alpha, the average effect on fitness of putting A in place of the other allele.

    alpha = p (w_AA - w_Aa) + (1 - p) (w_Aa - w_aa) (Fisher 1930, from memory); in the unit of
    `fitness`. Shapes and errors as in `mean_fitness`.
    """
    p_, q, w11, w12, w22 = _genotypes(p, fitness)
    return p_ * (w11 - w12) + q * (w12 - w22)


def additive_variance(p: Numbers, fitness: Numbers) -> FloatArray:
    """Return 2 p (1 - p) alpha^2, the additive variance of fitness (unit of fitness, squared).

    Shapes and errors as in `mean_fitness`. Source: Fisher 1930; Ewens 2004, from memory.
    """
    p_ = floats(p)
    return 2.0 * p_ * (1.0 - p_) * average_effect(p, fitness) ** 2


def dominance_variance(p: Numbers, fitness: Numbers) -> FloatArray:
    """Return (2 p (1 - p) d)^2 with d = w_Aa - (w_AA + w_aa) / 2 (unit of fitness, squared).

    Shapes and errors as in `mean_fitness`. Source: Fisher 1930; Ewens 2004, from memory.
    """
    p_, q, w11, w12, w22 = _genotypes(p, fitness)
    return (2.0 * p_ * q * (w12 - 0.5 * (w11 + w22))) ** 2


def change_of_mean_fitness(p: Numbers, fitness: Numbers) -> FloatArray:
    """Return the whole change of mean fitness in one generation, exact for any dominance.

    mean(p') - mean(p) = (VA / mean) [1 + p (1 - p) (w_AA - 2 w_Aa + w_aa) / (2 mean)]. Fisher's
    VA / mean is its part at fixed average effects (Price 1972; Ewens 1989, from memory). Never
    negative; 0 where the mean fitness is 0 with one allele alone.

    Parameters
    ----------
    p : (...) array
        Frequency of A among newborn, 0 to 1.
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa, relative, not negative.

    Returns
    -------
    (...) array
        In the unit of `fitness`.
    """
    p_, q, w11, w12, w22 = _genotypes(p, fitness)
    mean = mean_fitness(p, fitness)
    divisor = np.where(mean == 0.0, 1.0, mean)
    curve = p_ * q * (w11 - 2.0 * w12 + w22) / (2.0 * divisor)
    return additive_variance(p, fitness) / divisor * (1.0 + curve)


def after_mutation(p: Numbers, mutation_to: Numbers, mutation_from: Numbers) -> FloatArray:
    """Return (1 - mutation_from) p + mutation_to (1 - p).

    Parameters
    ----------
    p : (...) array
        Frequency of A, 0 to 1.
    mutation_to : (...) array
        Chance per gene copy and generation that another allele turns into A.
    mutation_from : (...) array
        Chance per gene copy and generation that A turns into another allele.

    Returns
    -------
    (...) array
        Frequency of A in gametes, 0 to 1. Source: Crow & Kimura 1970, from memory.
    """
    p_ = floats(p)
    return (1.0 - floats(mutation_from)) * p_ + floats(mutation_to) * (1.0 - p_)
