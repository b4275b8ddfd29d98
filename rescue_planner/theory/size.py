"""Effective population size Ne: what it is made from and what it costs a generation.

Ne counts diploid animals of an idealised population that loses gene diversity at the same rate.
Sources: Wright 1931 (Genetics 16:97), Wright 1938 and Crow & Denniston 1988 (Evolution 42:482),
Hill 1972 (Theor. Popul. Biol. 3:278), Frankham 1995 (Genet. Res. 66:95); formulas from memory,
re-derived or checked by enumeration.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total


def retained(ne: Numbers) -> FloatArray:
    """Return 1 - 1/(2 Ne), the share of gene diversity kept through one generation of drift.

    Parameters
    ----------
    ne : (...) array
        Effective size of the generation that is *entered*, in animals.

    Returns
    -------
    (...) array
        Share, 0 to 1.

    Raises
    ------
    ValueError
        If an Ne is below 0.5: fewer than one gene copy.
    """
    size = floats(ne)
    if np.any(size < 0.5):
        raise ValueError("effective size below 0.5 animals: fewer than one gene copy")
    return 1.0 - 0.5 / size


def from_sexes(males: Numbers, females: Numbers) -> FloatArray:
    """Return Ne = 4 Nm Nf / (Nm + Nf) of a population with unequal numbers of breeders.

    Parameters
    ----------
    males, females : (...) array
        Breeding adults of each sex, not negative.

    Returns
    -------
    (...) array
        Animals; 0 without a male or without a female (Wright 1931). With separate sexes the exact
        long-run value is about half an animal more.
    """
    m, f = floats(males), floats(females)
    both = m + f
    return 4.0 * m * f / np.where(both == 0.0, 1.0, both)


def harmonic_mean(sizes: Numbers) -> FloatArray:
    """Return T / sum(1 / N_t): Ne of changing sizes to first order; (..., T) -> (...).

    Source: Wright 1938, from memory. `equivalent_size` is exact.
    """
    size = floats(sizes)
    mean: FloatArray = size.shape[-1] / total(1.0 / size)
    return mean


def equivalent_size(sizes: Numbers) -> FloatArray:
    """Return the constant Ne that keeps as much gene diversity over T generations.

    Solves prod(1 - 1/(2 N_t)) = (1 - 1/(2 Ne))^T; (..., T) -> (...), animals. Crow & Kimura 1970,
    from memory.
    """
    size = floats(sizes)
    mean_log = total(np.log1p(-0.5 / size)) / size.shape[-1]
    constant: FloatArray = -0.5 / np.expm1(mean_log)
    return constant


def from_family_variance(breeders: Numbers, variance: Numbers) -> FloatArray:
    """Return Ne = (4 N - 2) / (V_k + 2) at constant size (two recruits a parent on average).

    Parameters
    ----------
    breeders : (...) array
        Adults N that could breed, both sexes.
    variance : (...) array
        V_k, variance (divisor N) of the number of recruited young over all N, zeros included.

    Returns
    -------
    (...) array
        Animals. Source: Wright 1938; Crow & Denniston 1988.
    """
    return (4.0 * floats(breeders) - 2.0) / (floats(variance) + 2.0)


def from_overlapping_generations(
    newborn: Numbers, generation_length: Numbers, lifetime_variance: Numbers
) -> FloatArray:
    """Return Hill's Ne = 4 N_1 L / (V_k + 2) for overlapping generations at constant size.

    Parameters
    ----------
    newborn : (...) array
        N_1, animals that enter the cohort per unit of time, both sexes.
    generation_length : (...) array
        L, mean age of parents, in the same unit of time.
    lifetime_variance : (...) array
        V_k, variance of the lifetime number of recruits per animal of the cohort.

    Returns
    -------
    (...) array
        Animals per generation. Source: Hill 1972.
    """
    return 4.0 * floats(newborn) * floats(generation_length) / (floats(lifetime_variance) + 2.0)


def from_ratio(adults: Numbers, ratio: Numbers) -> FloatArray:
    """Return Ne guessed as adults * (Ne/N); (...), animals.

    Frankham 1995: Ne/N averages 0.10 to 0.11 where changing numbers, families and sex ratio are all
    counted. Never apply it to a number that already is an Ne.
    """
    return floats(adults) * floats(ratio)


def size_to_keep(share: Numbers, generations: Numbers) -> FloatArray:
    """Return the Ne that keeps `share` of gene diversity for so many generations.

    Ne = 1 / (2 (1 - share^(1/t))); (...), animals. Soule et al. 1986 (Zoo Biol. 5:101), from
    memory. `share` between 0 and 1, both excluded.
    """
    return -0.5 / np.expm1(np.log(floats(share)) / floats(generations))


def size_to_keep_for_years(share: Numbers, years: Numbers, generation_years: Numbers) -> FloatArray:
    """Return the Ne that keeps `share` of gene diversity for so many years; (...), animals.

    `size_to_keep` for years / generation_years generations: a rule in years asks less of an animal
    that lives long. `share` between 0 and 1, both excluded.
    """
    return size_to_keep(share, floats(years) / floats(generation_years))


def yearly_loss(ne: Numbers, generation_years: Numbers) -> FloatArray:
    """Return the share of gene diversity lost per year: 1 - (1 - 1/(2 Ne))^(1/T).

    Parameters
    ----------
    ne : (...) array
        Effective size per generation, animals, at least 0.5.
    generation_years : (...) array
        T, years per generation.

    Returns
    -------
    (...) array
        Share per year; about 1 / (2 Ne T) (Hill 1972, from memory).
    """
    with np.errstate(divide="ignore"):  # Ne = 0.5 keeps nothing: log(0), loss 1
        return -np.expm1(np.log(retained(ne)) / floats(generation_years))
