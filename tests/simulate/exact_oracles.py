"""Exact answers for the order of a year that the simulated animals live by.

The order: all adults alive at the census breed; then everybody lives through the year or dies;
then age, last age, ceiling. Nothing here draws a random number, and nothing comes from the engines
it judges. Derived here unless a source is named; `test_plain_engine.py` first holds the pieces to
published or tabulated values where there are any.
"""

import itertools
import math

import numpy as np
from scipy.special import betaincinv, ndtr

# --- lines of females without crowding --------------------------------------------------------


def gone_by(rates, years, first_year_times=None):
    """Return the chance that the line of one female of each age 1..last is gone after `years`.

    A branching process with one type an age (Harris 1963; Athreya & Ney 1972, from memory). Rates
    may change from year to year: generating functions are composed backwards, last year first.

    Parameters
    ----------
    rates : dict
        first_year, subadult, adult (yearly survival), first, last (ages), share (females that
        breed), litter (generating function of a litter), females (share among young). Males are
        never short.
    years : int
        Years from the census.
    first_year_times : list of float, optional
        What multiplies first-year survival in each of the years.
    """
    last, q = rates["last"], [0.0] * rates["last"]
    for year in reversed(range(years)):
        times = 1.0 if first_year_times is None else first_year_times[year]
        joins = rates["females"] * rates["first_year"] * times  # a young one is a daughter we count
        none = rates["litter"](1.0 - joins + joins * q[0])
        none = 1.0 - rates["share"] + rates["share"] * none
        before = []
        for age in range(1, last + 1):
            adult = age >= rates["first"]
            survival = rates["adult" if adult else "subadult"]
            self_gone = 1.0 - survival + survival * (q[age] if age < last else 1.0)
            before.append(self_gone * (none if adult else 1.0))
        q = before
    return q


def poisson_litter(mean):
    return lambda z: math.exp(mean * (z - 1.0))


def counted_litter(counts):
    return lambda z: sum(p * z**size for size, p in counts.items())


# --- two sexes under a ceiling ----------------------------------------------------------------

MOST_RECRUITS = 40


def binomial(n, chance):
    """Return P(0..n)."""
    return [math.comb(n, k) * chance**k * (1.0 - chance) ** (n - k) for k in range(n + 1)]


def poisson(mean):
    """Return P(0..MOST_RECRUITS)."""
    terms = [math.exp(-mean)]
    for k in range(1, MOST_RECRUITS + 1):
        terms.append(terms[-1] * mean / k)
    return terms


def hypergeometric(drawn, of_a_kind, total, kept):
    """Return the chance that `drawn` of the `kept` out of `total` are of the kind."""
    other = math.comb(total - of_a_kind, kept - drawn)
    return math.comb(of_a_kind, drawn) * other / math.comb(total, kept)


def _after_ceiling(f, m, capacity):
    """Yield (females, males, chance) after random removal of what is above the ceiling."""
    if f + m <= capacity:
        yield f, m, 1.0
        return
    for kept in range(max(0, capacity - m), min(f, capacity) + 1):
        yield kept, capacity - kept, hypergeometric(kept, f, f + m, capacity)


def two_sex_matrix(capacity, form, share, young, females, skies):
    """Return the chain of (females, males) counted at the census; both sexes breed at age 1.

    Parameters
    ----------
    capacity : int
        Ceiling on all adults, who are all animals at the census.
    form : str
        "pairs": each breeding female needs a male of her own; else one male is enough for all.
    share, young, females : float
        Share of females that breed; Poisson mean of a litter; share of females among young.
    skies : list of (weight, adult survival, first-year survival, young factor)
        The kinds of year, with their chances.

    Returns
    -------
    (list of states, (states, states) array)
        Rows sum to 1 but for the Poisson tail beyond `MOST_RECRUITS`.
    """
    states = [(f, n - f) for n in range(capacity + 1) for f in range(n + 1)]
    place = {state: k for k, state in enumerate(states)}
    top = capacity + MOST_RECRUITS
    fall = np.zeros(((top + 1) ** 2, len(states)))
    for f, m in itertools.product(range(top + 1), repeat=2):
        for kept_f, kept_m, chance in _after_ceiling(f, m, capacity):
            fall[f * (top + 1) + m, place[kept_f, kept_m]] += chance
    matrix = np.zeros((len(states), len(states)))
    for row, (f, m) in enumerate(states):
        both = np.zeros((top + 1, top + 1))
        for ready, p_ready in enumerate(binomial(f, share)):
            mothers = min(ready, m) if form == "pairs" else ready * (m > 0)
            for weight, survival, first_year, factor in skies:
                born = mothers * young * factor * first_year
                next_f = _sex_next(f, survival, born * females, capacity)
                next_m = _sex_next(m, survival, born * (1.0 - females), capacity)
                both += weight * p_ready * np.outer(next_f, next_m)
        matrix[row] = both.ravel() @ fall
    return states, matrix


def _sex_next(n, survival, recruits, capacity):
    """Return the chances of 0..capacity + MOST_RECRUITS animals of a sex before the ceiling."""
    lived = binomial(n, survival) + [0.0] * (capacity - n)
    return np.convolve(lived, poisson(recruits))


def course(states, matrix, start, years, allowed=lambda f, m: True):
    """Return the chance of each state after `years`, never having been in a state not allowed."""
    keep = np.array([float(allowed(f, m)) for f, m in states])
    mass = np.array([float(state == start) for state in states]) * keep
    for _ in range(years):
        mass = (mass @ matrix) * keep
    return mass


def shared_weather(adult, adult_sd, first_year, first_year_sd, young_sd, nodes=24):
    """Return kinds of year for one normal draw shared by survival and young (correlation 1).

    Gauss-Hermite quadrature over the draw; each survival is at that quantile of its own beta.
    """
    points, weights = np.polynomial.hermite_e.hermegauss(nodes)
    skies = []
    sigma = math.sqrt(math.log(1.0 + young_sd**2))
    for z, weight in zip(points, weights / math.sqrt(2.0 * math.pi), strict=True):
        at = [
            _beta_quantile(mean, sd, ndtr(z))
            for mean, sd in ((adult, adult_sd), (first_year, first_year_sd))
        ]
        skies.append((weight, *at, math.exp(sigma * z - sigma**2 / 2.0)))
    return skies


def _beta_quantile(mean, sd, u):
    if sd == 0.0:
        return mean
    c = mean * (1.0 - mean) / sd**2 - 1.0
    return float(betaincinv(mean * c, (1.0 - mean) * c, u))


# --- genes with one generation a year ---------------------------------------------------------


def mean_inverse_size(animals):
    """Return E[1/Ne], 1/Ne = (1/Nm + 1/Nf)/4 (Wright 1931), sexes by coin, both there."""
    chances = {f: math.comb(animals, f) for f in range(1, animals)}
    total = sum(chances.values())
    return sum(p * 0.25 * (1 / f + 1 / (animals - f)) for f, p in chances.items()) / total


def identity_course(inverse_size, kinship, years):
    """Return [(kinship of distinct animals, F)] at 0..years: separate sexes, father a young.

    kinship' = (1 - 1/Ne) kinship + (1 + F)/(2 Ne), F' = kinship (Wright 1931, 1938, from memory).

    Parameters
    ----------
    inverse_size : list of float
        1/Ne of each year's parents.
    kinship : float
        Of founders, and their F.
    years : int
        Generations.
    """
    rows = [(kinship, kinship)]
    for t in range(years):
        theta, f = rows[-1]
        rate = inverse_size[t]
        rows.append(((1.0 - rate) * theta + rate * (1.0 + f) / 2.0, theta))
    return rows


def diversity_without_replacement(kinship, inbreeding, animals):
    """Return the expected chance that two distinct gene copies of the animals differ.

    On the scale 1 - identity: 1 of 2n - 1 partners of a copy is in the same animal.
    """
    same = 1.0 / (2 * animals - 1)
    return same * (1.0 - inbreeding) + (1.0 - same) * (1.0 - kinship)


def mean_newcomer_share(animals, newcomers):
    """Return E[n / (N_f + n)], the share of mothers that are newcomers, N_f by coin."""
    chances = {f: math.comb(animals, f) for f in range(1, animals)}
    total = sum(chances.values())
    return sum(p * newcomers / (f + newcomers) for f, p in chances.items()) / total


def same_father(males, unequal):
    """Return the chance that two young have one father: gamma weights with that CV.

    The shares are Dirichlet with k = 1/CV^2 each: E[sum p^2] = (k + 1)/(M k + 1).
    """
    return (1.0 + unequal**2) / (males + unequal**2)


def kinship_of_young(same_mother, same_father_, kinship):
    """Return the kinship of two young; their parents' kinship is also the parents' F.

    The two copies come from two mothers, two fathers (a quarter each) or one of each.
    """
    twice = (1.0 + kinship) / 2.0
    through = [same * twice + (1.0 - same) * kinship for same in (same_mother, same_father_)]
    return 0.25 * sum(through) + 0.5 * kinship


def mean_capped_at_one(share, cv):
    """Return E[min(1, share X)], X lognormal with mean 1 and that CV."""
    sigma = math.sqrt(math.log(1.0 + cv**2))
    top = (math.log(1.0 / share) + sigma**2 / 2.0) / sigma
    return float(share * ndtr(top - sigma) + 1.0 - ndtr(top))


def copies_after_a_generation(adults, females, copies, fitness, next_adults):
    """Return the chances of 0..2n copies of A among the next adults, first selection included.

    Founders: `copies` copies of A put at random on the adults' 2 * adults places; any two parents,
    one of each sex, are equally likely; a young one survives by its genotype (w_AA, w_Aa, w_aa);
    the next adults are as many independent draws among surviving young.
    """
    total = np.zeros(2 * next_adults + 1)
    places = 2 * adults
    for in_females in range(min(copies, 2 * females) + 1):
        if copies - in_females > places - 2 * females:
            continue
        chance = hypergeometric(in_females, copies, places, 2 * females)
        pf = in_females / (2 * females)
        pm = (copies - in_females) / (2 * (adults - females))
        one = np.array(
            [
                (1.0 - pf) * (1.0 - pm) * fitness[2],
                (pf * (1.0 - pm) + pm * (1.0 - pf)) * fitness[1],
                pf * pm * fitness[0],
            ]
        )
        one /= one.sum()
        many = np.ones(1)
        for _ in range(next_adults):
            many = np.convolve(many, one)
        total += chance * many
    return total


def recombination(distance):
    """Return Haldane's (1 - e^{-2d})/2 for a distance in Morgans (Haldane 1919, from memory)."""
    return (1.0 - math.exp(-2.0 * distance)) / 2.0
