"""A harmful allele between new mutations and selection against it.

q is the frequency of the harmful allele among newborn, fitness 1, 1 - h s, 1 - s (h = 0: hidden in
heterozygotes), u the chance per gene copy and generation that a sound copy turns harmful, after
selection; no way back. F is inbreeding among newborn: genotypes p^2 + F p q, 2 p q (1 - F),
q^2 + F p q. Sources: Haldane 1927 (Proc. Camb. Phil. Soc. 23:838), Haldane 1937 (Am. Nat. 71:337),
Crow & Kimura 1970, from memory; the quadratic with F derived.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.fitness_forms import parts


def after_selection_inbred(
    p: Numbers, fitness: Numbers, inbreeding: Numbers
) -> tuple[FloatArray, FloatArray]:
    """Return the frequency of A after selection among inbred newborn, and their mean fitness.

    Parameters
    ----------
    p : (...) array
        Frequency of A, 0 to 1.
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa, not negative.
    inbreeding : (...) array
        F, -1 to 1 as far as no genotype frequency falls below 0.

    Returns
    -------
    tuple of (...) arrays
        Frequency after selection, and mean fitness in the unit of `fitness`.

    Raises
    ------
    ValueError
        If no genotype that is present can live.
    """
    w11, w12, w22 = parts(fitness)
    p_, f = floats(p), floats(inbreeding)
    q, half = 1.0 - p_, p_ * (1.0 - p_) * (1.0 - f)
    of_a = (p_ - half) * w11 + half * w12
    mean = of_a + half * w12 + (q - half) * w22
    if np.any(mean == 0.0):
        raise ValueError("mean fitness is 0: no genotype that is present can live")
    return of_a / mean, mean


def harmful_frequency(u: Numbers, s: Numbers, h: Numbers, inbreeding: Numbers = 0.0) -> FloatArray:
    """Return the frequency at which mutation and selection balance: exact.

    Smallest root in 0..1 of s (1-F) (1-2h) q^2 + s [F + h (1-F) (1+u)] q - u = 0, which is
    (1-u) S(p) = p written out.

    Parameters
    ----------
    u : (...) array
        Mutation rate, 0 to below 1.
    s, h : (...) array
        Selection against and dominance of the harmful allele, 0 to 1.
    inbreeding : (...) array
        F among newborn, 0 to 1.

    Returns
    -------
    (...) array
        q; 1 where selection cannot hold the allele back (u above what it can bear), 0 where u is 0.
    """
    u_, s_, h_, f = (floats(x) for x in (u, s, h, inbreeding))
    curve = s_ * (1.0 - f) * (1.0 - 2.0 * h_)
    slope = s_ * (f + h_ * (1.0 - f) * (1.0 + u_))
    under = slope**2 + 4.0 * curve * u_
    below = slope + np.sqrt(np.maximum(under, 0.0))
    root = 2.0 * u_ / np.where(below > 0.0, below, 1.0)
    swamped = (under < 0.0) | ((below <= 0.0) & (u_ > 0.0)) | (root > 1.0)
    return np.where(swamped, 1.0, root)[()]


def harmful_frequency_approximate(
    u: Numbers, s: Numbers, h: Numbers, inbreeding: Numbers = 0.0
) -> FloatArray:
    """Return u / (s (h + F - h F)), the textbook form of `harmful_frequency`.

    Good where s (h + F - h F) is far above sqrt(u s); inf for a hidden allele without inbreeding,
    where the balance is sqrt(u / s). Shapes (...).
    """
    h_, f = floats(h), floats(inbreeding)
    with np.errstate(divide="ignore"):
        return floats(u) / (floats(s) * (h_ + f - h_ * f))


def mutation_load(q: Numbers, s: Numbers, h: Numbers, inbreeding: Numbers = 0.0) -> FloatArray:
    """Return 1 - mean fitness at one locus: s [2 h q (1-q) (1-F) + q^2 + F q (1-q)].

    At the balance it is u for a hidden allele and about 2 u otherwise, whatever s (Haldane 1937).

    Parameters
    ----------
    q : (...) array
        Frequency of the harmful allele, 0 to 1.
    s, h : (...) array
        Selection and dominance.
    inbreeding : (...) array
        F among newborn.

    Returns
    -------
    (...) array
        Share of fitness lost, 0 to 1.
    """
    q_, f = floats(q), floats(inbreeding)
    mixed = q_ * (1.0 - q_)
    return floats(s) * (2.0 * floats(h) * mixed * (1.0 - f) + q_**2 + f * mixed)
