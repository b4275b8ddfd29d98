"""Linkage and mixed populations: why source and heterozygosity alone don't give the mean.

Epistasis weighs products over two loci, whose mean is not the product of means. A pool of gametes
is described by x = mean of +1 (gene from parent 1) and -1 (from parent 2), and xx = mean product of
that sign over two loci with recombination fraction r. Everything follows from the two; derived,
checked by enumeration. Terms as in `line_cross` (Cockerham 1954, from memory).
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total
from rescue_planner.theory.line_cross import CrossEffects


class Gametes(NamedTuple):
    """A pool of gametes, each (...): `source` mean sign, `product` its mean over two loci."""

    source: FloatArray
    product: FloatArray


def pure(parent: int) -> Gametes:
    """Return the gametes of pure parent 1 or 2.

    Raises
    ------
    ValueError
        If `parent` is neither 1 nor 2.
    """
    if parent not in (1, 2):
        raise ValueError("parent is 1 or 2")
    return Gametes(floats(1.0 if parent == 1 else -1.0), floats(1.0))


def pooled(one: Gametes, other: Gametes, share_of_other: Numbers) -> Gametes:
    """Return the gametes of a pool in which `share_of_other` (...) come from the second."""
    m = floats(share_of_other)
    return Gametes(
        (1.0 - m) * one.source + m * other.source, (1.0 - m) * one.product + m * other.product
    )


def gametes_of_young(mothers: Gametes, fathers: Gametes, recombination: Numbers) -> Gametes:
    """Return the gametes of young that `mothers` and `fathers` gametes made.

    xx' = (1 - r) (xx_m + xx_f) / 2 + r x_m x_f; x' is the mean of both.

    Parameters
    ----------
    mothers, fathers : Gametes
        Each (...); united at random.
    recombination : (...) array
        r, 0 to 0.5.

    Returns
    -------
    Gametes
        Each (...).
    """
    r = floats(recombination)
    together = 0.5 * (mothers.product + fathers.product)
    return Gametes(
        0.5 * (mothers.source + fathers.source),
        (1.0 - r) * together + r * mothers.source * fathers.source,
    )


def coefficients(mothers: Gametes, fathers: Gametes) -> FloatArray:
    """Return what mu0, a, d, aa, ad, dd are weighed with in the young of two pools.

    Parameters
    ----------
    mothers, fathers : Gametes
        Each (...).

    Returns
    -------
    (..., 6) array
        1, theta_S, theta_H, E[x1 x2], E[x1 z2], E[z1 z2] with x the mean sign and z = +1
        heterozygous, -1 homozygous by source.
    """
    both = mothers.source * fathers.source
    parts = (
        np.ones_like(both),
        0.5 * (mothers.source + fathers.source),
        -both,
        0.25 * (mothers.product + fathers.product) + 0.5 * both,
        -0.5 * (mothers.product * fathers.source + fathers.product * mothers.source),
        mothers.product * fathers.product,
    )
    return np.stack(np.broadcast_arrays(*parts), axis=-1)


def mixture_mean(mothers: Gametes, fathers: Gametes, effects: CrossEffects) -> FloatArray:
    """Return mean log fitness of the young of two pools of gametes; effects each (...) -> (...)."""
    values = np.stack(np.broadcast_arrays(*map(floats, effects)), axis=-1)
    return total(coefficients(mothers, fathers) * values)


def after_pulse(share: Numbers, recombination: Numbers, generations: int) -> FloatArray:
    """Return the six coefficients for the young of generation 1..t after one pulse.

    Residents are parent 1, a share m of parents is of population 2; then random mating. Breakdown
    unfolds over several generations, longer where loci are linked.

    Parameters
    ----------
    share : (...) array
        m, share of gene copies from newcomers in the pulse.
    recombination : (...) array
        r, 0 to 0.5.
    generations : int
        t, at least 1.

    Returns
    -------
    (t, ..., 6) array
        As `coefficients`.
    """
    pool = pooled(pure(1), pure(2), share)
    out = []
    for _ in range(generations):
        out.append(coefficients(pool, pool))
        pool = gametes_of_young(pool, pool, recombination)
    return np.stack(np.broadcast_arrays(*out))
