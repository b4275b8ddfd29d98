"""Reasons why crosses may do badly: incompatible pairs, chromosomes, lost adaptation, divergence.

Defaults are no such effects; these are stress tests, not estimates. Sources: Dobzhansky 1936;
Muller 1942; Orr 1995 (Genetics 139:1805); Turelli & Orr 2000 (Genetics 154:1663); Lande 1979
(Evolution 33:234); Lynch & Walsh 1998; Frankham et al. 2011 (Conserv. Biol. 25:465), from memory;
losses derived.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.size import retained
from rescue_planner.theory.trait import mean_fitness_at


class PairLoss(NamedTuple):
    """Mean fitness lost to one incompatible pair in F1, F2 and F1 x parent; each (...)."""

    f1: FloatArray
    f2: FloatArray
    backcross: FloatArray


def pair_loss(
    s: Numbers, h0: Numbers, h1: Numbers, h2: Numbers = 1.0, recombination: Numbers = 0.5
) -> PairLoss:
    """Return the loss by one pair of derived alleles, A fixed in one parent and B in the other.

    Parameters
    ----------
    s : (...) array
        Loss in the double homozygote AABB (times h2).
    h0, h1, h2 : (...) array
        Share of s lost by AaBb, by AABb and AaBB, and by AABB.
    recombination : (...) array
        Recombination fraction r of the two loci, 0 to 0.5.

    Returns
    -------
    PairLoss
        Unlinked: s h0; s (h0/4 + h1/4 + h2/16); s (h0/4 + h1/4).
    """
    s_, r = floats(s), floats(recombination)
    none, one, two = floats(h0), floats(h1), floats(h2)
    f2 = s_ * (none * 0.5 * (r**2 + (1.0 - r) ** 2) + one * r * (1.0 - r) + two * 0.25 * r**2)
    back = s_ * 0.5 * (none * (1.0 - r) + one * r)
    return PairLoss(s_ * none + 0.0 * r, f2, back)


def log_fitness_of_pairs(loss: Numbers, pairs: Numbers) -> FloatArray:
    """Return K ln(1 - loss), K independent pairs that multiply; (...)."""
    return floats(pairs) * np.log1p(-floats(loss))


def expected_pairs(substitutions: Numbers, chance_each: Numbers) -> FloatArray:
    """Return P k (k - 1) / 2, incompatible pairs among k substitutions: a snowball; (...)."""
    k = floats(substitutions)
    return floats(chance_each) * 0.5 * k * (k - 1.0)


def rearrangement_fitness(share_of_one: Numbers, loss: Numbers) -> FloatArray:
    """Return 1 - 2 p (1-p) s, mean fitness of a random-mating mix of two karyotypes.

    Parameters
    ----------
    share_of_one : (...) array
        p, frequency of one arrangement; 1/2 for an F2.
    loss : (...) array
        s, fitness that the heterozygote loses; an F1, all heterozygous, keeps 1 - s. Published
        losses run from near 0 (many fusions) to about 0.5 (reciprocal translocations), from memory.

    Returns
    -------
    (...) array
        Relative to either pure karyotype.
    """
    p = floats(share_of_one)
    return 1.0 - 2.0 * p * (1.0 - p) * floats(loss)


def segregation_variance(distance: Numbers, effective_loci: Numbers) -> FloatArray:
    """Return Delta^2 / (8 n_e), the variance that segregates in an F2 (Castle-Wright); (...)."""
    return floats(distance) ** 2 / (8.0 * floats(effective_loci))


def fitness_away_from_home(
    local_ancestry: Numbers,
    distance: Numbers,
    phenotypic_variance: Numbers,
    width2: Numbers,
    segregation: Numbers = 0.0,
) -> FloatArray:
    """Return mean fitness at the recipient's optimum of animals with so much local ancestry.

    `trait.mean_fitness_at` of a mean (1 - p) Delta and variance V_P + V_seg, an additive trait.

    Parameters
    ----------
    local_ancestry : (...) array
        p, 0 to 1.
    distance : (...) array
        Delta, donor mean minus the recipient's optimum, phenotypic SD.
    phenotypic_variance, width2 : (...) array
        V_P and w2, phenotypic SD squared.
    segregation : (...) array
        V_seg of `segregation_variance` in F2 and later; 0 in parents and F1.

    Returns
    -------
    (...) array
        0 to 1. No incompatible genes are needed for hybrids to do worse.
    """
    lag = (1.0 - floats(local_ancestry)) * floats(distance)
    return mean_fitness_at(lag, floats(phenotypic_variance) + floats(segregation), width2)


def divergence(
    differential: Numbers, heritability: Numbers, ne: Numbers, generations: Numbers
) -> FloatArray:
    """Return GA_t, adaptive divergence that selection has made: 2 Ne S h2 [1 - (1 - 1/(2Ne))^t].

    Parameters
    ----------
    differential : (...) array
        S, selection differential per generation, phenotypic SD (order 0.1; range 0 to 0.5).
    heritability : (...) array
        h2 at the start.
    ne, generations : (...) array
        Effective size, animals; t.

    Returns
    -------
    (...) array
        Phenotypic SD; 2 Ne S h2 in the long run (t infinite). It ranks cases: no new mutations,
        constant S. Frankham et al. 2011 in words, the form from memory.
    """
    size = floats(ne)
    gone = 1.0 - retained(size) ** floats(generations)
    return 2.0 * size * floats(differential) * floats(heritability) * gone
