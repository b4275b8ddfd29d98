"""Closed forms about a trait's adaptation: where the recursions of `trait` settle, and why.

Symbols as in `trait`; V_s = w2 + V_E, gamma = V_A / (V_A + V_s) the share of the lag that one
generation makes up. Sources: Falconer & Mackay 1996; Lande 1976; Lynch & Hill 1986; Lynch & Lande
1993; Buerger & Lynch 1995, from memory; the recursions were iterated to check them.
"""

import numpy as np
from scipy.special import ndtri

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.size import retained


def selection_intensity(share_selected: Numbers) -> FloatArray:
    """Return i = phi(x_p) / p of truncation selection that keeps the share p; (...), in SD.

    Falconer & Mackay 1996, from memory. p above 0 and below 1, large population.
    """
    share = floats(share_selected)
    ordinate: FloatArray = np.exp(-0.5 * ndtri(share) ** 2) / np.sqrt(2.0 * np.pi)
    return ordinate / share


def variance_after_drift(
    additive_variance: Numbers, ne: Numbers, generations: Numbers, mutational_input: Numbers = 0.0
) -> FloatArray:
    """Return V_A after t generations of V_A' = (1 - 1/(2 Ne)) V_A + V_m.

    Parameters
    ----------
    additive_variance : (...) array
        V_A at the start, phenotypic SD squared.
    ne : (...) array
        Effective size, animals, at least 0.5.
    generations : (...) array
        t.
    mutational_input : (...) array
        V_m, new additive variance per generation.

    Returns
    -------
    (...) array
        Phenotypic SD squared; it settles at 2 Ne V_m (Lynch & Hill 1986).
    """
    settled = settled_variance(ne, mutational_input)
    return settled + (floats(additive_variance) - settled) * retained(ne) ** floats(generations)


def settled_variance(ne: Numbers, mutational_input: Numbers) -> FloatArray:
    """Return 2 Ne V_m, the additive variance at which drift and mutation balance; (...)."""
    return 2.0 * floats(ne) * floats(mutational_input)


def share_of_lag_made_up(additive_variance: Numbers, strength: Numbers) -> FloatArray:
    """Return gamma = V_A / (V_A + V_s), `strength` being V_s = w2 + V_E; (...), 0 to 1."""
    va = floats(additive_variance)
    return va / (va + floats(strength))


def steady_lag(shift: Numbers, additive_variance: Numbers, strength: Numbers) -> FloatArray:
    """Return the lag behind a steadily moving optimum, once it has settled: shift / gamma.

    Parameters
    ----------
    shift : (...) array
        Move of the optimum per generation, phenotypic SD.
    additive_variance, strength : (...) array
        V_A and V_s = w2 + V_E.

    Returns
    -------
    (...) array
        Optimum minus mean *when selection acts*; one `shift` less just after the response.
    """
    return floats(shift) / share_of_lag_made_up(additive_variance, strength)


def lag_load(lag: Numbers, additive_variance: Numbers, strength: Numbers) -> FloatArray:
    """Return lag^2 / (2 (V_s + V_A)), the loss of log fitness that the lag causes; (...)."""
    return floats(lag) ** 2 / (2.0 * (floats(additive_variance) + floats(strength)))


def drift_load(additive_variance: Numbers, strength: Numbers, ne: Numbers) -> FloatArray:
    """Return the loss of log growth by random wandering of the mean about its course; (...).

    Var(z) / (2 (V_s + V_A)) with Var(z) = (V_A / Ne) / (1 - (1 - gamma)^2): take it off r_max.
    """
    va = floats(additive_variance)
    stay = 1.0 - share_of_lag_made_up(va, strength)
    wander = va / floats(ne) / (1.0 - stay**2)
    return wander / (2.0 * (va + floats(strength)))


def flow_lag(
    distance: Numbers, m: Numbers, additive_variance: Numbers, strength: Numbers
) -> FloatArray:
    """Return the settled distance from the optimum under steady flow from an ill-fitting donor.

    d = D m / (1 - (1-m)(1-gamma)), counted after mixing and before selection; derived.

    Parameters
    ----------
    distance : (...) array
        D, donor mean minus the recipient's optimum, phenotypic SD.
    m : (...) array
        Share of gene copies from the donor each generation.
    additive_variance, strength : (...) array
        V_A and V_s = w2 + V_E, held.

    Returns
    -------
    (...) array
        Phenotypic SD. Its `lag_load` is the migration load.
    """
    m_, stay = floats(m), 1.0 - share_of_lag_made_up(additive_variance, strength)
    return floats(distance) * m_ / (1.0 - (1.0 - m_) * stay)
