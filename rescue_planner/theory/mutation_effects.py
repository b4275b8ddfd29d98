"""Distributions of harmful effects, and how dominance falls with the effect.

s is the selection against the *homozygote*, its distribution a gamma with a mean and a shape. Some
papers scale by the heterozygote: their mean is half of it. Sources: Eyre-Walker, Woolfit & Phelps
2006 (Genetics 173:891); Deng & Lynch 1996 (Genetics 144:349) and Caballero & Keightley 1994
(Genetics 138:883), from memory.
"""

import numpy as np
from scipy.special import gammainc

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total

DOMINANCE_DECAY = 13.0
"""k of h(s) = exp(-k s) / 2, Deng & Lynch 1996, from memory."""

_HALVINGS = 200


def share_of_effects(low: Numbers, high: Numbers, mean: Numbers, shape: Numbers) -> FloatArray:
    """Return the share of new mutations with `low` < s <= `high` under a gamma distribution.

    Parameters
    ----------
    low, high : (...) array
        Bounds on s, 0 to infinity.
    mean, shape : (...) array
        Mean of s and shape of the gamma, above 0. Human estimates of the shape: 0.15 to 0.35.

    Returns
    -------
    (...) array
        0 to 1. What lies above s = 1 has no meaning as a homozygote's loss: cut draws off there.
    """
    rate = floats(shape) / floats(mean)
    upper: FloatArray = gammainc(floats(shape), rate * floats(high))
    return upper - gammainc(floats(shape), rate * floats(low))


def dominance(s: Numbers, decay: Numbers = DOMINANCE_DECAY) -> FloatArray:
    """Return h(s) = exp(-k s) / 2: mild alleles nearly additive, strong ones recessive; (...)."""
    return 0.5 * np.exp(-floats(decay) * floats(s))


def mean_dominance(mean: Numbers, shape: Numbers, decay: Numbers = DOMINANCE_DECAY) -> FloatArray:
    """Return the mean of h(s) over a gamma: (1 + k mean/shape)^(-shape) / 2; (...), derived."""
    shape_ = floats(shape)
    return 0.5 * (1.0 + floats(decay) * floats(mean) / shape_) ** (-shape_)


def load_from_mutation_over_effects(
    genomic_rate: Numbers, mean: Numbers, shape: Numbers, decay: Numbers = DOMINANCE_DECAY
) -> FloatArray:
    """Return haploid B = U (E[1/(2h)] - 1) with h(s) over the whole gamma: infinite where it fails.

    E[1/(2h)] = (1 - k mean/shape)^(-shape) only for k mean/shape below 1. At or above it the
    shortcut diverges: the strong, nearly recessive tail has no balance u/(h s). Then cut s off at 1
    and use `load_balance.load_at_balance`.

    Parameters
    ----------
    genomic_rate : (...) array
        U per *diploid* genome and generation.
    mean, shape, decay : (...) array
        Mean of s, shape of the gamma, k.

    Returns
    -------
    (...) array
        Per *haploid* genome; inf where the shortcut diverges. Derived.
    """
    shape_ = floats(shape)
    left = 1.0 - floats(decay) * floats(mean) / shape_
    fails = left <= 0.0
    inverse = np.where(fails, np.inf, np.where(fails, 1.0, left) ** (-shape_))
    return (floats(genomic_rate) * (inverse - 1.0))[()]


def scaled_frequencies(q: Numbers, s: Numbers, h: Numbers, load_haploid: Numbers) -> FloatArray:
    """Return the frequencies, all scaled by one factor, whose masked load is the one wanted.

    Finds c with sum c q (1 - c q) s (1 - 2h) = B, c between 0 and 1 / (2 max q), where it grows.

    Parameters
    ----------
    q, s, h : (L,) array
        Frequencies to be scaled (above 0 somewhere), selection, dominance (at most 1/2).
    load_haploid : float
        B wanted, per *haploid* genome, not negative.

    Returns
    -------
    (L,) array
        Frequencies; `load.population_load` of them gives B back (1e-12 relative).

    Raises
    ------
    ValueError
        If so few loci cannot hold so much load.
    """
    q_, weight = floats(q), floats(s) * (1.0 - 2.0 * floats(h))
    wanted, high = float(floats(load_haploid)), 0.5 / float(np.max(q_))
    if wanted > float(total(high * q_ * (1.0 - high * q_) * weight)):
        raise ValueError("these loci cannot hold so much load: more loci or stronger effects")
    low = 0.0
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        if float(total(middle * q_ * (1.0 - middle * q_) * weight)) < wanted:
            low = middle
        else:
            high = middle
    return high * q_
