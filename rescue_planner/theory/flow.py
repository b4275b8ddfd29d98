"""Gene flow into the recipient: shares of parents, mixing, ancestry, and how much is enough.

e_d is the number of effective newcomers from donor d, u_d their share among the parents of one sex,
m_d their share of all gene copies of the breeding pool, m = sum m_d. Donors keep their frequencies.
Sources: Wright 1931 (Genetics 16:97), Bernstein 1931, Verdu & Rosenberg 2011 (Genetics 189:1413),
from memory; re-derived.
"""

import numpy as np
from scipy.special import xlog1py

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total
from rescue_planner.theory.size import retained


def effective_newcomers(released: Numbers, survive: Numbers, breeding: Numbers) -> FloatArray:
    """Return released animals * chance to live to breed * breeding relative to residents; (...).

    Animals released are not migrants: six animals can differ five-fold in gene flow.
    """
    return floats(released) * floats(survive) * floats(breeding)


def chance_any_breeds(released: Numbers, chance_each: Numbers) -> FloatArray:
    """Return 1 - (1 - c)^n, the chance that at least one of n released animals breeds.

    Parameters
    ----------
    released : (...) array
        n, animals, not negative.
    chance_each : (...) array
        c, chance that one of them lives and breeds, 0 to 1; animals independent.

    Returns
    -------
    (...) array
        Probability.
    """
    chance: FloatArray = -np.expm1(xlog1py(floats(released), -floats(chance_each)))
    return chance


def parent_shares(newcomers: Numbers, residents: Numbers) -> FloatArray:
    """Return the share of each donor's newcomers among the parents of one sex.

    u_d = e_d / (N + sum_k e_k).

    Parameters
    ----------
    newcomers : (..., D) array
        Effective newcomers of this sex from each donor, not negative.
    residents : (...) array
        Breeding residents of this sex, above 0 where there are no newcomers.

    Returns
    -------
    (..., D) array
        Shares; what is left to 1 is the residents'.

    Raises
    ------
    ValueError
        If there is neither a resident nor a newcomer to breed.
    """
    e, n = floats(newcomers), floats(residents)
    parents = n + total(e)
    if np.any(parents <= 0.0):
        raise ValueError("no breeders of one sex: neither residents nor newcomers")
    return e / parents[..., np.newaxis]


def gene_copy_shares(mothers: Numbers, fathers: Numbers) -> FloatArray:
    """Return m_d = (u_mothers + u_fathers) / 2: each parent gives half; (..., D) -> (..., D)."""
    return 0.5 * (floats(mothers) + floats(fathers))


def mixed(value: Numbers, donor_values: Numbers, shares: Numbers) -> FloatArray:
    """Return (1 - m) x + sum_d m_d x_d, m = sum_d m_d.

    Parameters
    ----------
    value : (...) array
        Allele frequency or trait mean of the recipient.
    donor_values : (..., D) array
        The same of each donor.
    shares : (..., D) array
        m_d, shares of gene copies.

    Returns
    -------
    (...) array
        In the unit of `value`, between the smallest and the largest of the sources.
    """
    m = floats(shares)
    return (1.0 - total(m)) * floats(value) + total(m * floats(donor_values))


def ancestry_after(ancestry: Numbers, shares: Numbers) -> FloatArray:
    """Return a_d' = (1 - m) a_d + m_d, expected ancestry from each donor; (..., D) -> (..., D)."""
    m = floats(shares)
    return (1.0 - total(m)[..., np.newaxis]) * floats(ancestry) + m


def ancestry_spread_after(variance: Numbers, mean: Numbers, m: Numbers) -> FloatArray:
    """Return the variance of donor ancestry among newborn after one step of flow.

    V' = [(1 - m) V + m (1 - m) (1 - a)^2] / 2 with a the mean ancestry before the step. Ancestry is
    genealogical (no segregation noise of a finite genome), newcomers pure, mating random.

    Parameters
    ----------
    variance, mean : (...) array
        V and a before the step, shares.
    m : (...) array
        Share of gene copies brought by newcomers.

    Returns
    -------
    (...) array
        Variance of shares; it halves in each generation without flow.
    """
    m_, rest = floats(m), 1.0 - floats(m)
    return 0.5 * (rest * floats(variance) + m_ * rest * (1.0 - floats(mean)) ** 2)


def pulse_schedule_ancestry(shares: Numbers) -> FloatArray:
    """Return donor ancestry after each step of a schedule: 1 - prod_{i<=t} (1 - m_i).

    Parameters
    ----------
    shares : (..., T) array
        m of each step.

    Returns
    -------
    (..., T) array
        Ancestry from all donors together, 0 to 1.
    """
    return 1.0 - np.cumprod(1.0 - floats(shares), axis=-1, dtype=np.float64)


def generations_to_ancestry(ancestry: Numbers, pulse: Numbers, then: Numbers) -> FloatArray:
    """Return when donor ancestry reaches a level after a first pulse and a steady flow.

    t = 1 + ln[(1-D) / (1-m1)] / ln(1-m2): the pulse is generation 1, so the steady flow has had
    t - 1 generations.

    Parameters
    ----------
    ancestry : (...) array
        D, share of donor ancestry, below 1.
    pulse, then : (...) array
        m1 of the first generation, m2 of every later one, shares of gene copies below 1.

    Returns
    -------
    (...) array
        Generations, a real number; 1 where the pulse alone is enough, inf where nothing follows a
        pulse that isn't.
    """
    first, later = floats(pulse), floats(then)
    left = np.log1p(-floats(ancestry)) - np.log1p(-first)
    flows = later > 0.0
    after = np.where(flows, left / np.log1p(-np.where(flows, later, 0.5)), np.inf)
    return np.where(left >= 0.0, 1.0, 1.0 + after)[()]


def fst_equilibrium(ne: Numbers, m: Numbers) -> FloatArray:
    """Return the exact long-run FST of a recipient under steady flow from a constant donor.

    f = (1-m)^2 / [2 Ne - (2 Ne - 1) (1-m)^2], identity of two distinct gene copies of the breeding
    adults, newcomers counted (Wright 1931, 1943).

    Parameters
    ----------
    ne : (...) array
        Effective size, animals.
    m : (...) array
        Share of gene copies that newcomers bring each generation, 0 to 1.

    Returns
    -------
    (...) array
        0 to 1; 1 without flow.
    """
    copies, stay = 2.0 * floats(ne), (1.0 - floats(m)) ** 2
    return stay / (copies - (copies - 1.0) * stay)


def fst_equilibrium_approximate(ne: Numbers, m: Numbers) -> FloatArray:
    """Return 1 / (4 Ne m + 1), the textbook form of `fst_equilibrium` for small m (Wright 1931)."""
    return 1.0 / (4.0 * floats(ne) * floats(m) + 1.0)


def cohort_cycle(
    ne: Numbers, m: Numbers, generations_between: Numbers
) -> tuple[FloatArray, FloatArray]:
    """Return F just after and just before a pulse, once pulses every k generations have settled.

    F_after = (1-m)^2 (1-A) / (1 - (1-m)^2 A), F_before = 1 - A (1 - F_after),
    A = (1 - 1/(2 Ne))^k. Donors unrelated to the recipient and to each other; derived.

    Parameters
    ----------
    ne : (...) array
        Effective size, animals.
    m : (...) array
        Share of gene copies that each pulse brings, above 0.
    generations_between : (...) array
        k, need not be whole: years between releases / years per generation.

    Returns
    -------
    tuple of (...) arrays
        Inbreeding coefficient just after, and just before, each pulse.
    """
    kept = retained(ne) ** floats(generations_between)
    stay = (1.0 - floats(m)) ** 2
    after = stay * (1.0 - kept) / (1.0 - stay * kept)
    return after, 1.0 - kept * (1.0 - after)
