"""Genetic load of harmful alleles: what shows now, what inbreeding would bring to light.

Genotype fitness AA 1, Aa 1 - h s, aa 1 - s; q is the frequency of the harmful allele a. Loads are
losses of log fitness, summed over loci (last axis, L). B is always the load per *haploid* genome
here, the slope of -ln(fitness) on F: half of the lethal equivalents per diploid animal that
`inbreeding` takes. Sources: Morton, Crow & Muller 1956; Crow & Kimura 1970; Bertorelle et al. 2022
(Nat. Rev. Genet. 23:492), from memory; re-derived.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total
from rescue_planner.theory.size import retained


class Load(NamedTuple):
    """Load in three parts; `whole` = `realised` + `masked`, each (...), losses of log fitness.

    `realised` shows in the animals as they are, `masked` is what full inbreeding would add (for a
    random-mating population the haploid inbreeding load B), `whole` is the load when fully inbred.
    """

    realised: FloatArray
    masked: FloatArray
    whole: FloatArray


def locus_fitness(q: Numbers, s: Numbers, h: Numbers, f: Numbers = 0.0) -> FloatArray:
    """Return mean fitness at one locus among zygotes of inbreeding F.

    1 - 2 q (1-q) (1-F) h s - (q^2 + q (1-q) F) s.

    Parameters
    ----------
    q, s, h : (...) array
        Frequency of the harmful allele, selection against its homozygote, its dominance.
    f : (...) array
        Inbreeding coefficient of the zygotes, 0 to 1.

    Returns
    -------
    (...) array
        Relative to an animal without the allele, 0 to 1.
    """
    q_, s_, f_ = floats(q), floats(s), floats(f)
    mixed = q_ * (1.0 - q_)
    return 1.0 - 2.0 * mixed * (1.0 - f_) * floats(h) * s_ - (q_**2 + mixed * f_) * s_


def fitness(q: Numbers, s: Numbers, h: Numbers, f: Numbers = 0.0) -> FloatArray:
    """Return the product of `locus_fitness` over loci; q, s, h (..., L), f (...) -> (...).

    exp(-A - B F) is its limit for small q s; for common alleles only the product is right.
    """
    by_locus = locus_fitness(q, s, h, floats(f)[..., np.newaxis])
    whole: FloatArray = np.prod(by_locus, axis=-1)
    return whole


def population_load(q: Numbers, s: Numbers, h: Numbers) -> Load:
    """Return the load of a random-mating population.

    realised = A = sum(q^2 s + 2 q (1-q) h s), masked = B = sum q (1-q) s (1 - 2h),
    whole = sum q s.

    Parameters
    ----------
    q, s, h : (..., L) array
        Frequency, selection against the homozygote, dominance of each harmful allele.

    Returns
    -------
    Load
        Each (...). An additive allele (h = 1/2) has no masked load; h above 1/2 makes it negative.
    """
    q_, s_, h_ = floats(q), floats(s), floats(h)
    mixed = q_ * (1.0 - q_)
    realised = total(s_ * (q_**2 + 2.0 * mixed * h_))
    masked = total(mixed * s_ * (1.0 - 2.0 * h_))
    return Load(realised, masked, total(np.broadcast_to(q_ * s_, np.shape(mixed * s_ * h_))))


def animal_load(copies: Numbers, s: Numbers, h: Numbers) -> Load:
    """Return the load that one animal carries.

    realised = sum_hom s + sum_het h s, masked = sum_het (1/2 - h) s.

    Parameters
    ----------
    copies : (..., L) array
        Copies of the harmful allele: 0, 1 or 2.
    s, h : (..., L) array
        Selection against the homozygote, dominance.

    Returns
    -------
    Load
        Each (...). Relative scores unless s and h are known.

    Raises
    ------
    ValueError
        If a count is not 0, 1 or 2.
    """
    g, s_, h_ = floats(copies), floats(s), floats(h)
    if not np.all(np.isin(g, (0.0, 1.0, 2.0))):
        raise ValueError("copies of an allele in a diploid animal are 0, 1 or 2")
    one, two = g == 1.0, g == 2.0
    realised = total(s_ * (two + one * h_))
    masked = total(s_ * one * (0.5 - h_))
    return Load(realised, masked, realised + masked)


def animal_fitness(copies: Numbers, s: Numbers, h: Numbers) -> FloatArray:
    """Return an animal's fitness, multiplied over loci; (..., L) -> (...). See `animal_load`."""
    g, s_ = floats(copies), floats(s)
    loss = np.where(g == 2.0, s_, np.where(g == 1.0, floats(h) * s_, 0.0))
    whole: FloatArray = np.prod(1.0 - loss, axis=-1)
    return whole


def load_after_bottleneck(load: Load, ne: Numbers, generations: Numbers) -> Load:
    """Return the load after t generations at a small size, drift alone.

    masked_t = B_0 (1 - 1/(2 Ne))^t, realised_t = A_0 + B_0 F_t: an expectation without selection,
    so it says nothing of purging. The whole load stays. For a long past use `load_balance`.

    Parameters
    ----------
    load : Load
        At the start, each (...).
    ne, generations : (...) array
        Constant effective size, animals, at least 0.5; t.

    Returns
    -------
    Load
        Each (...).
    """
    masked = load.masked * retained(ne) ** floats(generations)
    return Load(load.whole - masked, masked, load.whole + 0.0 * masked)


def lethals_per_animal(lethal_load_haploid: Numbers) -> FloatArray:
    """Return 2 B_L, the mean number of hidden recessive lethals that an animal carries; (...).

    Exact for fully recessive lethals (s = 1, h = 0) in a random-mating population: derived. Draw a
    founder's lethals as Poisson(2 B_L), each at a locus of its own.
    """
    return 2.0 * floats(lethal_load_haploid)


def split_load(load_haploid: Numbers, share_from_lethals: Numbers) -> tuple[FloatArray, FloatArray]:
    """Return (B_L, B_D), the parts of B due to lethal and to mild alleles.

    Parameters
    ----------
    load_haploid : (...) array
        B per haploid genome.
    share_from_lethals : (...) array
        0 to 1; about half in Drosophila (Simmons & Crow 1977, from memory).

    Returns
    -------
    tuple of (...) arrays
        They add to B. The split changes purging, not the first generation's depression.

    Raises
    ------
    ValueError
        If the share lies outside 0 to 1.
    """
    share, whole = floats(share_from_lethals), floats(load_haploid)
    if np.any((share < 0.0) | (share > 1.0)):
        raise ValueError("share of the load from lethals must lie between 0 and 1")
    return whole * share, whole * (1.0 - share)


def sib_mating_survival(lethal_load_haploid: Numbers) -> FloatArray:
    """Return exp(-B_L / 4), survival of a full-sib mating's young as far as lethals go; (...).

    Exact, not a limit, where both founders carry independent Poisson(2 B_L) lethals: derived.
    """
    return np.exp(-0.25 * floats(lethal_load_haploid))


def sib_mating_survival_of(lethals_in_founders: Numbers) -> FloatArray:
    """Return (15/16)^n: the same with n distinct lethals in the two founders together; (...)."""
    return (15.0 / 16.0) ** floats(lethals_in_founders)


def largest_load(loss: Numbers, inbreeding: Numbers) -> FloatArray:
    """Return the largest haploid B whose cost at F is no more than `loss`: -ln(1 - loss) / F.

    Parameters
    ----------
    loss : (...) array
        Loss of fitness that is still accepted, 0 to below 1.
    inbreeding : (...) array
        F, above 0; `inbreeding.inbreeding_after` gives it for a size and time.

    Returns
    -------
    (...) array
        Per *haploid* genome; report it beside any rule on Ne (Frankham et al. 2014).
    """
    return -np.log1p(-floats(loss)) / floats(inbreeding)


def size_to_hold_loss(loss: Numbers, load_haploid: Numbers, generations: Numbers) -> FloatArray:
    """Return the constant Ne at which inbreeding costs `loss` after t generations.

    Solves 1 - exp(-B F_t) = loss with F_t = 1 - (1 - 1/(2 Ne))^t; no purging.

    Parameters
    ----------
    loss : (...) array
        0 to 1, both excluded.
    load_haploid : (...) array
        B per *haploid* genome, above 0.
    generations : (...) array
        t, above 0.

    Returns
    -------
    (...) array
        Animals; 0.5 (any size will do) where even full inbreeding costs less.
    """
    f = np.minimum(1.0, -np.log1p(-floats(loss)) / floats(load_haploid))
    with np.errstate(divide="ignore"):
        log_kept = np.log1p(-f) / floats(generations)
    return -0.5 / np.expm1(log_kept)
