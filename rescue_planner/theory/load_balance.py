"""Load at the balance of mutation, selection and drift.

Harmful allele with fitness 1, 1 - h s, 1 - s; u is the mutation rate to it, v back, per gene copy
and generation. These are states of populations long constant: never the state after a recent
bottleneck (`load.load_after_bottleneck`). Sources: Haldane 1937; Wright 1937; Crow & Kimura 1970,
from memory; the stationary state was checked against the exact chain.
"""

from typing import NamedTuple

import numpy as np
from scipy.special import beta, roots_jacobi

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.balance import harmful_frequency
from rescue_planner.theory.load import Load, population_load

_NODES = 400


class StationaryLoad(NamedTuple):
    """Long-run state of one locus: mean frequency, realised and masked load, each (...)."""

    frequency: FloatArray
    realised: FloatArray
    masked: FloatArray


def load_at_balance(u: Numbers, s: Numbers, h: Numbers) -> Load:
    """Return the load of a very large population at mutation-selection balance.

    `load.population_load` at `balance.harmful_frequency`. Masked about u (1/h - 2) a locus for h s
    well above sqrt(u s), about sqrt(u s) for a recessive.

    Parameters
    ----------
    u, s, h : (..., L) array
        Mutation rate per gene copy, selection against the homozygote, dominance, at each locus.

    Returns
    -------
    Load
        Each (...), summed over loci.
    """
    return population_load(harmful_frequency(u, s, h), s, h)


def load_from_mutation(genomic_rate: Numbers, h: Numbers) -> FloatArray:
    """Return haploid B = U (1/(2h) - 1) of a large population at balance, one common dominance.

    Parameters
    ----------
    genomic_rate : (...) array
        U, new harmful mutations per *diploid* genome and generation.
    h : (...) array
        Dominance, well above sqrt(u/s) (for recessives the form fails).

    Returns
    -------
    (...) array
        Per *haploid* genome. Source: Charlesworth & Charlesworth 1987, from memory.
    """
    return floats(genomic_rate) * (0.5 / floats(h) - 1.0)


def _moments(given: FloatArray, nodes: int) -> tuple[float, float]:
    """Return E[x] and E[x(1-x)] of Wright's density by Gauss-Jacobi quadrature.

    The density runs to infinity at both ends where mutation is rare. The straight line through the
    selection factor's two end values is integrated exactly (beta functions); what is left vanishes
    at both ends, so that the rule with weight x^(4 Ne u) (1-x)^(4 Ne v) serves.
    """
    ne, u, v, s, h = (float(x) for x in given)
    low, high = 4.0 * ne * u, 4.0 * ne * v
    points, weights = roots_jacobi(nodes, high, low)
    weights, x = weights * 0.5 ** (low + high + 1.0), 0.5 * (points + 1.0)
    ends = -2.0 * ne * s * np.array([0.0, 1.0])
    exponent = -2.0 * ne * s * (2.0 * h * x + (1.0 - 2.0 * h) * x**2)
    top = max(float(np.max(exponent)), float(np.max(ends)))
    g, (left, right) = np.exp(exponent - top), np.exp(ends - top)
    rest = (g - left * (1.0 - x) - right * x) / (x * (1.0 - x))
    upper = right * beta(low + 1.0, high)
    whole = left * beta(low, high + 1.0) + upper + np.sum(weights * rest)
    mean = upper + np.sum(weights * (g - right) / (1.0 - x))
    return float(mean / whole), float(np.sum(weights * g) / whole)


def stationary_load(
    ne: Numbers, s: Numbers, h: Numbers, u: Numbers = 1e-5, v: Numbers = 1e-7, nodes: int = _NODES
) -> StationaryLoad:
    """Return the load per locus that drift, selection and mutation settle at (Wright 1937).

    Density ~ exp(-2 Ne s [2 h x + (1-2h) x^2]) x^(4 Ne u - 1) (1-x)^(4 Ne v - 1).

    Parameters
    ----------
    ne, s, h, u, v : (...) array
        Effective size; selection against the homozygote; dominance; mutation to and from, above 0.
    nodes : int
        Points of the quadrature; 400 carry nine figures up to 2 Ne s of some 10,000.

    Returns
    -------
    StationaryLoad
        Realised E[s (2 h x (1-x) + x^2)] and masked E[s (1-2h) x (1-x)], losses of log fitness per
        locus. It takes some 1/u generations to get there. Diffusion: poor where s is not small.

    Raises
    ------
    ValueError
        If a mutation rate is not above 0: then no lasting state exists.
    """
    arrays = np.broadcast_arrays(*(floats(x) for x in (ne, u, v, s, h)))
    if np.any(arrays[1] <= 0.0) or np.any(arrays[2] <= 0.0):
        raise ValueError("a stationary state needs both mutation rates above 0")
    rows = np.stack([a.ravel() for a in arrays], axis=-1)
    moments = np.array([_moments(row, nodes) for row in rows])
    mean, mixed = (moments[:, i].reshape(arrays[0].shape) for i in range(2))
    s_, h_ = arrays[3], arrays[4]
    realised = s_ * (2.0 * h_ * mixed + mean - mixed)
    return StationaryLoad(mean[()], realised[()], (s_ * (1.0 - 2.0 * h_) * mixed)[()])


def house_of_cards_variance(
    loci: Numbers, u: Numbers, effect_variance: Numbers, ne: Numbers, strength: Numbers
) -> FloatArray:
    """Return V_A ~ 4 n u a2 Ne / (1 + a2 Ne / V_s), held by mutation against stabilising selection.

    Parameters
    ----------
    loci, u : (...) array
        n loci of the trait; mutation rate per locus.
    effect_variance : (...) array
        a2, variance of new mutations' effects, trait unit squared.
    ne : (...) array
        Effective size, animals.
    strength : (...) array
        V_s = w2 + V_E, trait unit squared.

    Returns
    -------
    (...) array
        Trait unit squared; 4 n u V_s for large Ne, 4 n u a2 Ne = 2 Ne V_m for small. Source:
        stochastic house of cards, Buerger & Lynch 1995, from memory, not checked otherwise.
    """
    spread = floats(effect_variance) * floats(ne)
    return 4.0 * floats(loci) * floats(u) * spread / (1.0 + spread / floats(strength))
