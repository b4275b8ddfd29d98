"""The usual ways to write the fitness of three genotypes, as one triple (w_AA, w_Aa, w_aa).

A is the named allele. The same letters s and h mean different things in different books: name the
form, never mix them. Source: Crow & Kimura 1970; Ewens 2004; Falconer & Mackay 1996, from memory.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats


def triple(w11: Numbers, w12: Numbers, w22: Numbers) -> FloatArray:
    """Return the three fitnesses on a last axis; (...), (...), (...) -> (..., 3)."""
    return np.stack(np.broadcast_arrays(floats(w11), floats(w12), floats(w22)), axis=-1)


def parts(fitness: Numbers) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return w_AA, w_Aa, w_aa of a (..., 3) array, each (...).

    Raises
    ------
    ValueError
        If the last axis of `fitness` isn't 3 long.
    """
    w = floats(fitness)
    if w.ndim == 0 or w.shape[-1] != 3:
        raise ValueError("fitness needs three values on its last axis: w_AA, w_Aa, w_aa")
    return w[..., 0], w[..., 1], w[..., 2]


def against_other(s: Numbers, h: Numbers) -> FloatArray:
    """Return 1, 1 - h s, 1 - s: selection against the *other* allele.

    Parameters
    ----------
    s : (...) array
        Loss of fitness of the homozygote without A.
    h : (...) array
        Share of it that a heterozygote has: 0 where A is dominant, 1 where A is recessive.

    Returns
    -------
    (..., 3) array
        w_AA, w_Aa, w_aa.
    """
    s_ = floats(s)
    return triple(1.0, 1.0 - floats(h) * s_, 1.0 - s_)


def for_allele(s: Numbers, h: Numbers) -> FloatArray:
    """Return 1 + s, 1 + h s, 1: advantage of A.

    Parameters
    ----------
    s : (...) array
        Gain of fitness of the homozygote AA.
    h : (...) array
        Share of it that a heterozygote has: 1 where A is dominant, 0 where A is recessive.

    Returns
    -------
    (..., 3) array
        w_AA, w_Aa, w_aa.
    """
    s_ = floats(s)
    return triple(1.0 + s_, 1.0 + floats(h) * s_, 1.0)


def per_copy(s: Numbers) -> FloatArray:
    """Return 1 + 2 s, 1 + s, 1, s the advantage of *one* copy; (...) -> (..., 3).

    The form of Kimura's printed exponent 4 Ne s: its s is half the s of `for_allele` with h = 1/2.
    """
    return for_allele(2.0 * floats(s), 0.5)


def heterozygote_best(s: Numbers, t: Numbers) -> FloatArray:
    """Return 1 - s, 1, 1 - t; (...), (...) -> (..., 3). Both negative: heterozygotes fare worst."""
    return triple(1.0 - floats(s), 1.0, 1.0 - floats(t))


def multiplicative(x: Numbers, y: Numbers) -> FloatArray:
    """Return x^2, x y, y^2: each copy multiplies, exactly the haploid recursion; -> (..., 3)."""
    x_, y_ = floats(x), floats(y)
    return triple(x_**2, x_ * y_, y_**2)


def as_against_other(s: Numbers, h: Numbers) -> tuple[FloatArray, FloatArray]:
    """Return s and h of `against_other` that select as s, h of `for_allele` do.

    s / (1 + s) and 1 - h: dominance turns round because it counts from the other homozygote.

    Parameters
    ----------
    s, h : (...) array
        As in `for_allele`, s above -1.

    Returns
    -------
    tuple of (...) arrays
        s and h.
    """
    s_ = floats(s)
    return s_ / (1.0 + s_), 1.0 - floats(h)
