"""Identity by descent step by step: separate sexes, steady flow, any number of populations.

The other side of `diversity` (identity = 1 - diversity), kept for cases with finite donors and as a
check of the shorter recursions. Sources: Wright 1931, 1938, 1943; Malecot 1948; Nagylaki 1992, from
memory; each was checked against an exact chain.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.size import retained


def separate_sexes_after(
    coancestry: Numbers, inbreeding: Numbers, ne: Numbers
) -> tuple[FloatArray, FloatArray]:
    """Return coancestry and inbreeding one generation on, with two sexes and no selfing.

    theta' = (1 - 1/Ne) theta + (1 + F) / (2 Ne), F' = theta, with Ne = 4 Nm Nf / (Nm + Nf).

    Parameters
    ----------
    coancestry, inbreeding : (...) array
        theta of two distinct animals and F, before.
    ne : (...) array
        Effective size, animals, at least 1.

    Returns
    -------
    tuple of (...) arrays
        theta' and F'. F lags one generation behind a population with selfing.
    """
    theta, share = floats(coancestry), 1.0 / floats(ne)
    return (1.0 - share) * theta + 0.5 * share * (1.0 + floats(inbreeding)), theta


def separate_sexes_kept(ne: Numbers) -> FloatArray:
    """Return the share of diversity two sexes keep per generation in the long run.

    [1 - 1/Ne + sqrt(1 + 1/Ne^2)] / 2, about 1 - 1/(2 Ne + 1): as if Ne were half an animal more.

    Parameters
    ----------
    ne : (...) array
        4 Nm Nf / (Nm + Nf), animals, at least 1.

    Returns
    -------
    (...) array
        Share, 0 to 1. Source: Wright 1931, from memory; derived.
    """
    share = 1.0 / floats(ne)
    return 0.5 * (1.0 - share + np.sqrt(1.0 + share**2))


def with_flow_after(identity: Numbers, ne: Numbers, m: Numbers) -> FloatArray:
    """Return identity of two distinct copies after drift and steady flow.

    f' = (1-m)^2 [1/(2 Ne) + (1 - 1/(2 Ne)) f], counted among breeders with newcomers; every donor
    copy distinct. Settles at `flow.fst_equilibrium`.

    Parameters
    ----------
    identity : (...) array
        f before.
    ne : (...) array
        Effective size, animals, at least 0.5.
    m : (...) array
        Share of gene copies that newcomers bring.

    Returns
    -------
    (...) array
        Probability.
    """
    left = retained(ne)
    return (1.0 - floats(m)) ** 2 * (1.0 - left + left * floats(identity))


def populations_after(identity: Numbers, backward: Numbers, sizes: Numbers) -> FloatArray:
    """Return identity within and between populations after flow and drift in each of them.

    J* = M J M^T; J'_ij = J*_ij between, J'_ii = J*_ii + (1 - J*_ii) / (2 N_i) within.

    Parameters
    ----------
    identity : (..., K, K) array
        J_ij: two copies, one of i and one of j (with replacement where i = j), alike.
    backward : (..., K, K) array
        M: row i says where the breeding copies of population i come from; rows sum to 1.
    sizes : (..., K) array
        Effective size of each population in the generation entered, animals, at least 0.5.

    Returns
    -------
    (..., K, K) array
        J'.
    """
    m = floats(backward)
    after = m @ floats(identity) @ np.swapaxes(m, -1, -2)
    differ = 1.0 - np.diagonal(after, axis1=-2, axis2=-1)
    lost = differ * (1.0 - retained(sizes))
    return after + lost[..., np.newaxis] * np.eye(m.shape[-1])
