"""Means of crosses between two populations: source, heterozygosity and epistasis (log fitness).

theta_S = 2p - 1, p the share of genes from parent 1; theta_H = 2H - 1, H the share of loci
heterozygous by source. mean = mu0 + theta_S a + theta_H d + theta_S^2 aa + theta_S theta_H ad +
theta_H^2 dd; mu0 is the F2 mean of unlinked loci. Use either d here or a cost of inbreeding for the
parents, never both: in inbred parents the relief of inbreeding *is* d. Sources: Lynch 1991
(Evolution 45:622); Lynch & Walsh 1998 chapter 9; Cockerham 1954; Cavalli 1952, from memory;
coefficients checked by two-locus enumeration.
"""

from typing import NamedTuple

import numpy as np
from scipy.special import gammaincc

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total


class CrossEffects(NamedTuple):
    """Effects on log fitness: F2 mean, additive, dominance, and three kinds of epistasis."""

    mu0: Numbers = 0.0
    a: Numbers = 0.0
    d: Numbers = 0.0
    aa: Numbers = 0.0
    ad: Numbers = 0.0
    dd: Numbers = 0.0


class CrossFit(NamedTuple):
    """Joint scaling test: `estimates` and `errors` (M,), `chi2`, its degrees of freedom and P."""

    estimates: FloatArray
    errors: FloatArray
    chi2: float
    degrees: int
    p_value: float


GENERATIONS: dict[str, tuple[float, float]] = {
    "P1": (1.0, 0.0),
    "P2": (0.0, 0.0),
    "F1": (0.5, 1.0),
    "F2": (0.5, 0.5),
    "BC1": (0.75, 0.5),
    "BC2": (0.25, 0.5),
    "BC1xP1": (0.875, 0.25),
    "F1xBC1": (0.625, 0.5),
}
"""p and H of the usual generations; BC1 is F1 x P1."""


def indices(p: Numbers, h: Numbers) -> FloatArray:
    """Return theta_S and theta_H, both -1 to 1, on a new last axis; (...) -> (..., 2).

    Parameters
    ----------
    p : (...) array
        Share of genes from parent 1, 0 to 1.
    h : (...) array
        Share of loci heterozygous by source, 0 to 2 min(p, 1 - p).

    Returns
    -------
    (..., 2) array
        theta_S, theta_H.

    Raises
    ------
    ValueError
        If H lies outside 0 to 2 min(p, 1 - p).
    """
    p_, h_ = np.broadcast_arrays(floats(p), floats(h))
    most = 2.0 * np.minimum(p_, 1.0 - p_)
    if np.any((h_ < -1e-12) | (h_ > most + 1e-12)):
        raise ValueError("heterozygosity by source lies between 0 and twice the rarer share")
    return np.stack([2.0 * p_ - 1.0, 2.0 * h_ - 1.0], axis=-1)


def design(p: Numbers, h: Numbers) -> FloatArray:
    """Return the coefficients of mu0, a, d, aa, ad, dd; (...) -> (..., 6). Errors as `indices`."""
    theta = indices(p, h)
    s, het = theta[..., 0], theta[..., 1]
    return np.stack([np.ones_like(s), s, het, s * s, s * het, het * het], axis=-1)


def cross_mean(p: Numbers, h: Numbers, effects: CrossEffects) -> FloatArray:
    """Return the mean log fitness of a cross of *unlinked* loci.

    Parameters
    ----------
    p, h : (...) array
        As in `indices`. They describe one kind of animal: for a mixed population the mean of the
        products counts, not the product of means (`cross_mixture`).
    effects : CrossEffects
        Each (...).

    Returns
    -------
    (...) array
        Log fitness.

    Raises
    ------
    ValueError
        As `indices`.
    """
    weights = design(p, h)
    return total(weights * np.stack(np.broadcast_arrays(*map(floats, effects)), axis=-1))


def heterosis(effects: CrossEffects) -> FloatArray:
    """Return F1 minus the parents' mean: 2d - aa; (...)."""
    return 2.0 * floats(effects.d) - floats(effects.aa)


def breakdown(effects: CrossEffects) -> FloatArray:
    """Return F2 minus the mean of F1 and midparent: -aa/2 - dd; (...), 0 without epistasis."""
    return -0.5 * floats(effects.aa) - floats(effects.dd)


def effects_of_inbred_parents(
    load_haploid: Numbers, f_one: Numbers, f_two: Numbers
) -> CrossEffects:
    """Return the effects that a load fixed by drift amounts to: then set B to 0 elsewhere.

    d = B (F_1 + F_2) / 4, a = -B (F_1 - F_2) / 2, mu0 = -B (F_1 + F_2) / 4; derived.

    Parameters
    ----------
    load_haploid : (...) array
        B per *haploid* genome.
    f_one, f_two : (...) array
        F of the parent populations relative to a common base.

    Returns
    -------
    CrossEffects
        Each (...); no epistasis.
    """
    b, one, two = floats(load_haploid), floats(f_one), floats(f_two)
    quarter = 0.25 * b * (one + two)
    return CrossEffects(-quarter, -0.5 * b * (one - two), quarter)


def fit_crosses(
    means: Numbers, errors: Numbers, p: Numbers, h: Numbers, effects: int = 3
) -> CrossFit:
    """Fit generation means by weighted least squares (joint scaling test).

    Parameters
    ----------
    means, errors : (G,) array
        Mean of each generation and its standard error, above 0; log fitness for fitness.
    p, h : (G,) array
        As in `indices`.
    effects : int
        How many of mu0, a, d, aa, ad, dd to fit, in this order; 3 is the test of no epistasis.

    Returns
    -------
    CrossFit
        With G = `effects` the fit is exact: chi2 0 on 0 degrees, P nan.

    Raises
    ------
    ValueError
        If there are fewer generations than effects, an error isn't above 0, or the generations
        cannot tell the effects apart.
    """
    y, se = floats(means), floats(errors)
    x = design(p, h)[:, :effects]
    if np.any(se <= 0.0):
        raise ValueError("standard errors of generation means must be above 0")
    weighted = x / se[:, np.newaxis]
    if np.linalg.matrix_rank(weighted) < effects:
        raise ValueError("these generations cannot tell the effects apart: add crosses")
    covariance = np.linalg.inv(weighted.T @ weighted)
    estimates = covariance @ (weighted.T @ (y / se))
    chi2 = float(np.sum(((y - x @ estimates) / se) ** 2))
    degrees = y.size - effects
    p_value = float(gammaincc(0.5 * degrees, 0.5 * chi2)) if degrees else float("nan")
    return CrossFit(estimates, np.sqrt(np.diagonal(covariance)), chi2, degrees, p_value)
