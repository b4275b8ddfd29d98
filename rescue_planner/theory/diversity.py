"""Gene diversity (expected heterozygosity) under drift and gene flow: exact expectations.

H is the chance that two gene copies drawn with replacement differ; H_rd the chance that one of the
recipient and one of donor d differ; H_dd = H_d. Neutral loci, no mutation, discrete generations.
Sources: Wright 1931, Malecot 1948, Nei 1973, Hudson, Slatkin & Maddison 1992, from memory; the
recursions were checked against the exact one-locus chain.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total
from rescue_planner.theory.size import retained


def hudson_from_nei(g: Numbers) -> FloatArray:
    """Return Hudson's FST from Nei's two-population G: 2 G / (1 + G); (...), 0 to 1.

    Nei compares the mean within with the pool of both, Hudson with the pairs between them.
    """
    g_ = floats(g)
    return 2.0 * g_ / (1.0 + g_)


def between_from_fst(h_one: Numbers, h_two: Numbers, fst: Numbers) -> FloatArray:
    """Return H between two populations from their own H and FST in Hudson's form.

    H_between = ((H_1 + H_2) / 2) / (1 - FST).

    Parameters
    ----------
    h_one, h_two : (...) array
        Gene diversity of each population, 0 to 1.
    fst : (...) array
        Hudson's FST, 0 to below 1.

    Returns
    -------
    (...) array
        Probability that a copy of one and a copy of the other differ. A value above 1 means that
        diversities and FST do not fit together: the caller has to say so.

    Raises
    ------
    ValueError
        If an FST is 1 or above.
    """
    f = floats(fst)
    if np.any(f >= 1.0):
        raise ValueError("FST has to be below 1")
    return 0.5 * (floats(h_one) + floats(h_two)) / (1.0 - f)


def least_fst(h_one: Numbers, h_two: Numbers) -> FloatArray:
    """Return Hudson's FST at which H between equals the larger of the two populations' own H.

    1 - mean(H_1, H_2) / max(H_1, H_2): where one population only drifted apart from the other, FST
    is at least this; a smaller one deserves a question. 0 where neither has diversity; (...).
    """
    one, two = floats(h_one), floats(h_two)
    larger = np.maximum(one, two)
    return np.where(
        larger > 0.0, 1.0 - 0.5 * (one + two) / np.where(larger > 0.0, larger, 1.0), 0.0
    )[()]


def pooled(h: Numbers, h_between: Numbers, h_donors: Numbers, shares: Numbers) -> FloatArray:
    """Return the gene diversity of the breeding pool after newcomers joined, before drift.

    H_pool = (1-m)^2 H + sum_d 2 m_d (1-m) H_rd + sum_{d,e} m_d m_e H_de.

    Parameters
    ----------
    h : (...) array
        Gene diversity of the recipient.
    h_between : (..., D) array
        H_rd between recipient and each donor.
    h_donors : (..., D, D) array
        H_de between donors, with each donor's own H_d on the diagonal.
    shares : (..., D) array
        m_d, shares of gene copies, sum at most 1.

    Returns
    -------
    (...) array
        Probability. Can exceed every source's own diversity.
    """
    m = floats(shares)
    rest = 1.0 - total(m)
    among = total(m * total(floats(h_donors) * m[..., np.newaxis, :]))
    return rest**2 * floats(h) + 2.0 * rest * total(m * floats(h_between)) + among


def between_after(h_between: Numbers, h_donors: Numbers, shares: Numbers) -> FloatArray:
    """Return H between the recipient and each donor after flow: (1-m) H_rd + sum_e m_e H_ed.

    Parameters
    ----------
    h_between : (..., D) array
        H_rd before the step.
    h_donors : (..., D, D) array
        H_de, symmetric, each donor's own H_d on the diagonal.
    shares : (..., D) array
        m_d.

    Returns
    -------
    (..., D) array
        H_rd after the step; drift leaves it as it is.
    """
    m = floats(shares)
    rest = (1.0 - total(m))[..., np.newaxis]
    return rest * floats(h_between) + total(floats(h_donors) * m[..., np.newaxis, :])


def diversity_from_mixing(
    h_pool: Numbers, h: Numbers, donor_h: Numbers, shares: Numbers
) -> FloatArray:
    """Return what mixing itself adds: H_pool - (1-m) H - sum_d m_d H_d.

    Shapes (...), (...), (..., D), (..., D) -> (...). With two alleles at frequencies p and p_d and
    one donor it is 2 m (1-m) (p - p_d)^2 (Wahlund 1928 read backwards).
    """
    m = floats(shares)
    return floats(h_pool) - (1.0 - total(m)) * floats(h) - total(m * floats(donor_h))


def settled_under_flow(donor_h: Numbers, ne: Numbers, m: Numbers) -> FloatArray:
    """Return the long-run gene diversity of a recipient under steady flow from one large donor.

    H = (1 - 1/(2 Ne)) H_d [1 - (1-m)^2] / [1 - (1 - 1/(2 Ne)) (1-m)^2].

    Parameters
    ----------
    donor_h : (...) array
        H_d of the donor, constant.
    ne : (...) array
        Effective size of the recipient, animals, at least 0.5.
    m : (...) array
        Share of gene copies from the donor per generation.

    Returns
    -------
    (...) array
        Drawn with replacement; below H_d, 0 without flow. Source: Wright 1931, 1943.
    """
    left, stay = retained(ne), (1.0 - floats(m)) ** 2
    return left * floats(donor_h) * (1.0 - stay) / (1.0 - left * stay)


def drifted(h: Numbers, ne: Numbers) -> FloatArray:
    """Return (1 - 1/(2 Ne)) H, gene diversity after one generation of drift.

    Parameters
    ----------
    h : (...) array
        Gene diversity of the parents' pool.
    ne : (...) array
        Effective size of the generation entered, animals, at least 0.5.

    Returns
    -------
    (...) array
        Expectation over loci; one locus varies widely. Source: Wright 1931.
    """
    return retained(ne) * floats(h)


def kept(ne_per_generation: Numbers) -> FloatArray:
    """Return the share of gene diversity left after each generation without flow.

    Parameters
    ----------
    ne_per_generation : (..., T) array
        Effective size of each generation entered, animals, at least 0.5.

    Returns
    -------
    (..., T) array
        prod_{i<=t} (1 - 1/(2 Ne_i)); 1 minus it is F relative to the start.
    """
    return np.cumprod(retained(ne_per_generation), axis=-1, dtype=np.float64)
