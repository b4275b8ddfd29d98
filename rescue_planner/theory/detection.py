"""What a genetic sample can show: rare alleles, and a fall of gene diversity between two samples.

Sources: Nei & Roychoudhury 1974 (Genetics 76:379), Nei 1978 (Genetics 89:583), Weir, Reynolds &
Dodds 1990, Hoban et al. 2014 (Evol. Appl. 7:984), from memory; variances checked by enumeration,
the drift terms by the exact chain.
"""

from typing import NamedTuple

import numpy as np
from scipy.special import ndtr, ndtri

from rescue_planner.theory.alleles import chance_missed, founders_needed
from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total
from rescue_planner.theory.size import retained


class FallOfDiversity(NamedTuple):
    """What a paired comparison of gene diversity at two times is made of, per locus, each (...).

    `change`: expected change of He, below 0; `sampling`: variance from sampling animals at both
    times, which more animals shrink; `drift`: variance from one locus to another by drift, which
    they do not; `between`: variance of the expected change among loci.
    """

    change: FloatArray
    sampling: FloatArray
    drift: FloatArray
    between: FloatArray

    @property
    def variance(self) -> FloatArray:
        """All three together, for the change at one locus."""
        return self.sampling + self.drift + self.between


def animals_to_see(p: Numbers, chance: Numbers, inbreeding: Numbers = 0.0) -> FloatArray:
    """Return the whole number of animals whose sample holds an allele with the chance wanted.

    Parameters
    ----------
    p : (...) array
        Frequency of the allele, strictly between 0 and 1.
    chance : (...) array
        Chance wanted, 0 to below 1.
    inbreeding : (...) array
        F of the animals.

    Returns
    -------
    (...) array
        Animals, of a large population.
    """
    exact = founders_needed(p, chance, inbreeding)
    whole = floats(np.ceil(exact - 1e-9))  # a whole number stays itself in spite of rounding
    return np.where(whole > 0.0, whole, 0.0)[()]


def chance_to_see_carriers(animals: Numbers, carriers: Numbers, sampled: Numbers) -> FloatArray:
    """Return the chance to sample at least one of K carriers among N animals, no replacement.

    Whole numbers, shapes (...); errors as in `alleles.chance_missed`.
    """
    return 1.0 - chance_missed(animals, carriers, sampled)


def animals_to_see_carriers(animals: int, carriers: int, chance: float) -> int:
    """Return the smallest sample of a small population that shows a carrier with this chance.

    Parameters
    ----------
    animals, carriers : int
        N animals, K of them with the allele, K at least 1.
    chance : float
        Chance wanted, at most 1.

    Returns
    -------
    int
        Animals, at most N - K + 1: then it is certain.
    """
    most = animals - carriers + 1
    reached = chance_to_see_carriers(animals, carriers, np.arange(most + 1))
    return int(np.argmax(reached >= chance - 1e-12))


def sampling_variance(frequencies: Numbers, copies: Numbers) -> FloatArray:
    """Return the variance of unbiased gene diversity at one locus, by sampling alone.

    2/[g(g-1)] {2(g-2) [sum p^3 - (sum p^2)^2] + sum p^2 - (sum p^2)^2}.

    Parameters
    ----------
    frequencies : (..., K) array
        Allele frequencies of the population, summing to 1.
    copies : (...) array
        g, gene copies sampled (twice the animals), independent, above 1.

    Returns
    -------
    (...) array
        Variance.
    """
    p, g = floats(frequencies), floats(copies)
    square = total(p**2)
    skew = total(p**3) - square**2
    return 2.0 / (g * (g - 1.0)) * (2.0 * (g - 2.0) * skew + square - square**2)


def se_over_loci(values: Numbers) -> FloatArray:
    """Return sqrt(sum (x - mean)^2 / [L (L-1)]), SE of a mean over loci; (..., L) -> (...).

    Holds sampling, drift history and differences among loci together; L at least 2.
    """
    x = floats(values)
    loci = float(x.shape[-1])
    away = x - np.mean(x, axis=-1, keepdims=True)
    return np.sqrt(total(away**2) / (loci * (loci - 1.0)))


def observed_heterozygosity_variance(heterozygosity: Numbers, animals: Numbers) -> FloatArray:
    """Return Ho (1 - Ho) / n at one locus; (...)."""
    ho = floats(heterozygosity)
    return ho * (1.0 - ho) / floats(animals)


def product_moments(p: Numbers, ne: Numbers, generations: int) -> tuple[FloatArray, FloatArray]:
    """Return the means of p (1-p) and of its square after neutral drift: exact.

    Means of p^k, k up to 4, follow a triangular recursion (moments of the binomial).

    Parameters
    ----------
    p : (...) array
        Frequency at the start.
    ne : (...) array
        Constant effective size, at least 0.5; 2 Ne need not be whole.
    generations : int
        t.

    Returns
    -------
    tuple of (...) arrays
        E[p(1-p)] and E[p^2 (1-p)^2].
    """
    freq, n = np.broadcast_arrays(floats(p), 2.0 * floats(ne))
    one, two, three, four = freq, freq**2, freq**3, freq**4
    pair, trio = 1.0 - 1.0 / n, (1.0 - 1.0 / n) * (1.0 - 2.0 / n)
    quad = trio * (1.0 - 3.0 / n)
    for _ in range(generations):
        four = quad * four + 6.0 * trio * three / n + 7.0 * pair * two / n**2 + one / n**3
        three = trio * three + 3.0 * pair * two / n + one / n**2
        two = pair * two + one / n
    return one - two, two - 2.0 * three + four


def _two_allele_variance(product: FloatArray, square: FloatArray, copies: FloatArray) -> FloatArray:
    """Return the mean `sampling_variance` of two alleles, given the means of pq and (pq)^2."""
    inner = 2.0 * (copies - 2.0) * (product - 4.0 * square) + 2.0 * product - 4.0 * square
    return 2.0 / (copies * (copies - 1.0)) * inner


def fall_of_diversity(
    frequencies: Numbers, ne: Numbers, generations: int, animals: Numbers
) -> FallOfDiversity:
    """Return the expected fall of gene diversity and its variance, two alleles at each locus.

    Closed population; n animals sampled at each time, from the population as it was and as it is.

    Parameters
    ----------
    frequencies : (..., L) array
        Frequency of one allele at each locus (or at each kind of locus, in equal shares).
    ne : (...) array
        Effective size, constant.
    generations : int
        t between the samples.
    animals : (...) array
        n at each time; inf gives the floor that drift sets.

    Returns
    -------
    FallOfDiversity
        Each (...). Without `drift` and `between` it answers only whether *these* loci fell.
    """
    p, size = floats(frequencies), floats(ne)[..., np.newaxis]
    g = 2.0 * floats(animals)[..., np.newaxis]
    product, square = product_moments(p, size, generations)
    before = p * (1.0 - p)
    with np.errstate(invalid="ignore"):
        sampled = _two_allele_variance(before, before**2, g)
        sampled = sampled + _two_allele_variance(product, square, g)
    sampled = np.where(np.isinf(g), 0.0, sampled)
    lost = 1.0 - retained(size) ** generations
    change = -2.0 * lost * before
    drift = 4.0 * (square - product**2)
    return FallOfDiversity(
        np.mean(change, axis=-1),
        np.mean(sampled, axis=-1),
        np.mean(drift, axis=-1),
        np.var(change, axis=-1),
    )


def loci_needed(fall: FallOfDiversity, alpha: Numbers = 0.05, power: Numbers = 0.8) -> FloatArray:
    """Return the unlinked loci that show the fall: (z_alpha + z_power)^2 Var / change^2.

    Parameters
    ----------
    fall : FallOfDiversity
        From `fall_of_diversity`.
    alpha : (...) array
        Chance of a false alarm, one-sided.
    power : (...) array
        Chance to see a fall that is there.

    Returns
    -------
    (...) array
        Loci as a real number; round it *up*. Linked loci count for less.
    """
    z = ndtri(1.0 - floats(alpha)) + ndtri(floats(power))
    loci: FloatArray = z**2 * fall.variance / fall.change**2
    return loci


def power_to_see(fall: FallOfDiversity, loci: Numbers, alpha: Numbers = 0.05) -> FloatArray:
    """Return the chance to see the fall with so many unlinked loci, one-sided paired test; (...).

    Phi(|change| sqrt(L / Var) - z_alpha); arguments as in `loci_needed`.
    """
    signal = np.abs(fall.change) * np.sqrt(floats(loci) / fall.variance)
    seen: FloatArray = ndtr(signal - ndtri(1.0 - floats(alpha)))
    return seen
