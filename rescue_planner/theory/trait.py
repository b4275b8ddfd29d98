"""A trait under stabilising selection towards an optimum that may move (adaptive potential).

Values are in phenotypic standard deviations of the recipient at the start. V_A additive, V_E
environmental, V_P = V_A + V_E phenotypic variance, w2 the squared width of the fitness function
exp(-(z - theta)^2 / (2 w2)). V_A is kept in two parts: G, the genic variance that lasts, and D,
held by association between loci (positive just after mixing, halved by each mating). Loss of
variance by selection itself is left out.
Sources: Lande 1976 (Evolution 30:314), Bulmer 1980, Lynch & Lande 1993, Buerger & Lynch 1995
(Evolution 49:151), from memory; mixing derived and checked by enumeration.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total
from rescue_planner.theory.flow import mixed
from rescue_planner.theory.size import retained

_YEAR_TOLERANCE = 1e-9


def mixed_trait(mean: Numbers, donor_means: Numbers, shares: Numbers) -> FloatArray:
    """Return z* = (1-m) z + sum_d m_d z_d; shapes (...), (..., D), (..., D) -> (...)."""
    return mixed(mean, donor_means, shares)


def variance_between(mean: Numbers, donor_means: Numbers, shares: Numbers) -> FloatArray:
    """Return the variance of source means among the mixed parents.

    V_b = (1-m) z^2 + sum_d m_d z_d^2 - z*^2, computed about z* so that it is never below 0.

    Parameters
    ----------
    mean : (...) array
        z of the recipient, phenotypic SD.
    donor_means : (..., D) array
        z_d of each donor.
    shares : (..., D) array
        m_d, shares of gene copies.

    Returns
    -------
    (...) array
        Phenotypic SD squared.
    """
    m, pool = floats(shares), mixed(mean, donor_means, shares)
    of_donors = total(m * (floats(donor_means) - pool[..., np.newaxis]) ** 2)
    return (1.0 - total(m)) * (floats(mean) - pool) ** 2 + of_donors


def genic_from_mixing(
    between: Numbers, loci: Numbers, variance_per_diversity: Numbers, diversity_gain: Numbers
) -> FloatArray:
    """Return G_b, the genic variance that mixing adds for good.

    G_b = max(V_b / (2 loci), (V_A0 / H_r0) * gain): the first is what differences in trait means
    prove (equal loci, fixed differences), the second what differences at neutral loci let expect.

    Parameters
    ----------
    between : (...) array
        V_b from `variance_between`.
    loci : (...) array
        Loci of the trait.
    variance_per_diversity : (...) array
        Additive variance per unit of gene diversity at the start, V_A0 / H_r0.
    diversity_gain : (...) array
        `diversity.diversity_from_mixing`.

    Returns
    -------
    (...) array
        Phenotypic SD squared.
    """
    proven = floats(between) / (2.0 * floats(loci))
    return np.maximum(proven, floats(variance_per_diversity) * floats(diversity_gain))


def mixed_genic(
    genic: Numbers, donor_variances: Numbers, shares: Numbers, genic_gain: Numbers
) -> FloatArray:
    """Return G* = (1-m) G + sum_d m_d V_d + G_b; (...), (..., D), (..., D), (...) -> (...)."""
    return mixed(genic, donor_variances, shares) + floats(genic_gain)


def mixed_association(
    association: Numbers, between: Numbers, genic_gain: Numbers, m: Numbers
) -> FloatArray:
    """Return D* = (1-m) D/2 + V_b/2 - G_b, the variance held by association after one mating.

    The first mated generation holds (1-m) V + sum m_d V_d + V_b/2 in all; unlinked loci then halve
    the difference from the genic part with each mating. Shapes (...), phenotypic SD squared; `m` is
    the share of all donors together.
    """
    left = (1.0 - floats(m)) * 0.5 * floats(association)
    return left + 0.5 * floats(between) - floats(genic_gain)


def response(
    lag: Numbers, additive_variance: Numbers, environmental_variance: Numbers, width2: Numbers
) -> FloatArray:
    """Return the *change* of the trait mean by one generation of selection.

    V_A (theta - z*) / (w2 + V_A + V_E), so z' = z* + response.

    Parameters
    ----------
    lag : (...) array
        theta - z*, optimum minus mean, phenotypic SD.
    additive_variance, environmental_variance : (...) array
        V_A = G* + D* and V_E.
    width2 : (...) array
        w2, squared width of the fitness function.

    Returns
    -------
    (...) array
        Phenotypic SD per generation. Source: Lande 1976, from memory.
    """
    va = floats(additive_variance)
    return va * floats(lag) / (floats(width2) + va + floats(environmental_variance))


def genic_after_drift(genic: Numbers, ne: Numbers, mutational_input: Numbers) -> FloatArray:
    """Return (1 - 1/(2 Ne)) G* + V_m, V_m the new variance per generation; (...).

    Source: Lynch & Hill 1986 (Evolution 40:915), from memory. The part held by association drifts
    without input: `diversity.drifted`.
    """
    return retained(ne) * floats(genic) + floats(mutational_input)


def mean_fitness_at(lag: Numbers, phenotypic_variance: Numbers, width2: Numbers) -> FloatArray:
    """Return mean fitness sqrt(w2 / (w2 + V_P)) exp(-lag^2 / (2 (w2 + V_P))).

    Parameters
    ----------
    lag : (...) array
        Optimum minus mean, phenotypic SD.
    phenotypic_variance : (...) array
        V_P = V_A + V_E.
    width2 : (...) array
        w2, squared width of the fitness function, above 0.

    Returns
    -------
    (...) array
        Relative to an animal at the optimum, 0 to 1. Source: Lande 1976, from memory.
    """
    w2, spread = floats(width2), floats(width2) + floats(phenotypic_variance)
    return np.sqrt(w2 / spread) * np.exp(-(floats(lag) ** 2) / (2.0 * spread))


def sustainable_shift(
    additive_variance: Numbers, environmental_variance: Numbers, width2: Numbers, r_max: Numbers
) -> FloatArray:
    """Return the fastest steady move of the optimum that the population can follow.

    V_A sqrt(2 r_max / (w2 + V_A + V_E)), r_max below 0 counted as 0.

    Parameters
    ----------
    additive_variance, environmental_variance : (...) array
        V_A and V_E.
    width2 : (...) array
        w2.
    r_max : (...) array
        Log growth per *generation* of a population that sits at the optimum.

    Returns
    -------
    (...) array
        Phenotypic SD per generation; deterministic, V_A held. Source: Lynch & Lande 1993; Buerger &
        Lynch 1995, from memory.
    """
    va = floats(additive_variance)
    spread = floats(width2) + va + floats(environmental_variance)
    return va * np.sqrt(2.0 * np.maximum(0.0, floats(r_max)) / spread)


def optimum_at(
    years: Numbers,
    at_start: Numbers,
    shift_per_year: Numbers,
    jump_after_years: Numbers = np.inf,
    jump_by: Numbers = 0.0,
) -> FloatArray:
    """Return the optimum after so many years.

    Parameters
    ----------
    years : (...) array
        Years since the start.
    at_start, shift_per_year : (...) array
        Optimum at the start, phenotypic SD, and its steady move per year.
    jump_after_years, jump_by : (...) array
        A sudden move, in force from that many years after the start on (to 1e-9 year).

    Returns
    -------
    (...) array
        Phenotypic SD.
    """
    t = floats(years)
    jumped = t >= floats(jump_after_years) - _YEAR_TOLERANCE
    steady = floats(at_start) + floats(shift_per_year) * t
    return steady + np.where(jumped, floats(jump_by), 0.0)
