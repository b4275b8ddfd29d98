"""Three orders of selection and arrival of newcomers: the same animals, different frequencies.

Say which one is meant: they differ by 2 to 13 points of allele frequency. A rare local allele
survives or not at the same flow in all three. The projection uses *mixed, then selected*.
Source: Wright 1931; Nagylaki 1992, from memory; derived.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.fitness_forms import parts
from rescue_planner.theory.selection import after_selection


def residents_selected_then_joined(
    p: Numbers, fitness: Numbers, m: Numbers, donor_p: Numbers
) -> FloatArray:
    """Return (1-m) S(p) + m p_d: adult newcomers breed without having been selected here.

    Parameters
    ----------
    p : (...) array
        Frequency of A among newborn.
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa.
    m, donor_p : (...) array
        Share of gene copies from newcomers, and A's frequency among them.

    Returns
    -------
    (...) array
        Frequency among the next newborn.
    """
    m_ = floats(m)
    return (1.0 - m_) * after_selection(p, fitness) + m_ * floats(donor_p)


def mixed_then_selected(p: Numbers, fitness: Numbers, m: Numbers, donor_p: Numbers) -> FloatArray:
    """Return S((1-m) p + m p_d): parents mix at random, then their young are selected.

    Arguments and shapes as above; p is counted among breeders, after selection. The same loop as
    `residents_selected_then_joined`, seen at the other stage.
    """
    m_ = floats(m)
    return after_selection((1.0 - m_) * floats(p) + m_ * floats(donor_p), fitness)


def selected_as_a_mixture(p: Numbers, fitness: Numbers, m: Numbers, donor_p: Numbers) -> FloatArray:
    """Return the frequency where young newcomers are selected here *before* they breed.

    Residents and newcomers keep their own genotype frequencies for that round (a Wahlund effect).
    Arguments and shapes as above; p is counted among breeders, after selection.

    Raises
    ------
    ValueError
        If no genotype that is present can live.
    """
    w11, w12, w22 = parts(fitness)
    own, came, m_ = floats(p), floats(donor_p), floats(m)
    both = ((1.0 - m_) * own**2 + m_ * came**2) * w11
    one = 2.0 * ((1.0 - m_) * own * (1.0 - own) + m_ * came * (1.0 - came)) * w12
    none = ((1.0 - m_) * (1.0 - own) ** 2 + m_ * (1.0 - came) ** 2) * w22
    alive = both + one + none
    if np.any(alive == 0.0):
        raise ValueError("mean fitness is 0: no genotype that is present can live")
    return (both + 0.5 * one) / alive
