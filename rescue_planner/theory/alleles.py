"""Catching alleles with few founders, keeping them, and counting them fairly.

p is an allele's frequency in the source; n founders bring 2n gene copies. A founder that does not
breed is none. Gene diversity hardly falls while rare alleles vanish: report both. Sources: Fisher
1930, Haldane 1927, Hurlbert 1971 (Ecology 52:577), Marshall & Brown 1975, Allendorf 1986 (Zoo Biol.
5:181), El Mousadik & Petit 1996, Kalinowski 2004, from memory; checked by enumeration.
"""

from collections.abc import Sequence
from typing import Any

import numpy as np
from scipy.special import gammaln, lambertw, xlog1py

from rescue_planner.theory import chain
from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total


def chance_caught(p: Numbers, founders: Numbers, inbreeding: Numbers = 0.0) -> FloatArray:
    """Return the chance that n unrelated founders hold an allele: 1 - [(1-p)^2 + F p (1-p)]^n.

    Parameters
    ----------
    p : (...) array
        Frequency in the source, 0 to 1.
    founders : (...) array
        n, animals (2n copies), not negative.
    inbreeding : (...) array
        F of the founders, 0 to 1.

    Returns
    -------
    (...) array
        Probability.
    """
    freq = floats(p)
    carries = freq * (2.0 - freq) - floats(inbreeding) * freq * (1.0 - freq)
    caught: FloatArray = -np.expm1(xlog1py(floats(founders), -carries))
    return caught


def founders_needed(p: Numbers, chance: Numbers, inbreeding: Numbers = 0.0) -> FloatArray:
    """Return the founders that hold an allele with the chance wanted, as a real number.

    ln(1 - P) / ln[(1-p)^2 + F p (1-p)]; round it *up*. Arguments as in `chance_caught`, p and P
    strictly between 0 and 1. Also the animals to sample to see an allele.
    """
    freq = floats(p)
    carries = freq * (2.0 - freq) - floats(inbreeding) * freq * (1.0 - freq)
    return np.log1p(-floats(chance)) / np.log1p(-carries)


def _log_choose(whole: FloatArray, part: FloatArray) -> FloatArray:
    chosen: FloatArray = gammaln(whole + 1.0) - gammaln(part + 1.0) - gammaln(whole - part + 1.0)
    return chosen


def chance_missed(whole: Numbers, of_kind: Numbers, drawn: Numbers) -> FloatArray:
    """Return the chance that none of `of_kind` is drawn: C(W - K, d) / C(W, d), no replacement.

    Parameters
    ----------
    whole, of_kind, drawn : (...) array
        Whole numbers W, K, d (gene copies, or animals); K and d at most W.

    Returns
    -------
    (...) array
        Probability; exactly 0 where fewer than d are not of the kind.

    Raises
    ------
    ValueError
        If more are drawn than there are.
    """
    w, k, d = np.broadcast_arrays(floats(whole), floats(of_kind), floats(drawn))
    if np.any(d > w):
        raise ValueError("more are drawn than there are")
    possible = d <= w - k
    rest = np.where(possible, w - k, d)
    missed = np.exp(_log_choose(rest, d) - _log_choose(w, d))
    return np.where(possible, missed, 0.0)[()]


def chance_caught_from(donor: Numbers, copies: Numbers, founders: Numbers) -> FloatArray:
    """Return the chance to catch an allele from a *small* donor, without replacement.

    Parameters
    ----------
    donor : (...) array
        Animals of the donor.
    copies : (...) array
        Copies of the allele among its 2N.
    founders : (...) array
        Animals taken.

    Returns
    -------
    (...) array
        Probability, above `chance_caught` at the same frequency. Copies count as scattered at
        random among animals.
    """
    return 1.0 - chance_missed(2.0 * floats(donor), copies, 2.0 * floats(founders))


def chance_both_caught(p: Numbers, founders: Numbers) -> FloatArray:
    """Return 1 - (1-p)^(2n) - p^(2n), both alleles of a locus; (...), n above 0."""
    freq, copies = floats(p), 2.0 * floats(founders)
    return 1.0 - (1.0 - freq) ** copies - freq**copies


def alleles_caught(frequencies: Numbers, founders: Numbers) -> FloatArray:
    """Return the expected number of alleles n founders hold; (..., K), (...) -> (...)."""
    return total(chance_caught(frequencies, floats(founders)[..., np.newaxis]))


def _carried(p: float, founders: int, sizes: Sequence[float]) -> FloatArray:
    mass = chain.first_step(p, 2 * founders)
    for ne in sizes:
        mass = chain.step(mass, chain.frequencies(mass.size - 1), chain.copies(ne))
    return mass


def chance_kept(p: float, founders: int, sizes: Sequence[float]) -> float:
    """Return the chance that an allele is caught and still there after some generations: exact.

    Neutral. A locus of many alleles: take each against all others and add the chances up.

    Parameters
    ----------
    p : float
        Frequency in the source.
    founders : int
        n, animals.
    sizes : sequence of float
        Effective size of each generation after the founders.

    Returns
    -------
    float
        Probability.
    """
    return float(chain.share_kept(_carried(p, founders, sizes)))


def chance_both_kept(p: float, founders: int, sizes: Sequence[float]) -> float:
    """Return the chance that *both* alleles are caught and still there; as in `chance_kept`."""
    mass = _carried(p, founders, sizes)
    return float(1.0 - mass[0] - mass[-1])


def loss_of_one_copy(copies_left: Numbers, generations: int) -> FloatArray:
    """Return the chance that one copy's line has died out by a generation, in a large population.

    x_0 = 0, x_(t+1) = exp(lambda (x_t - 1)): Poisson numbers of copies, no limit of numbers.

    Parameters
    ----------
    copies_left : (...) array
        lambda, mean copies each copy leaves: 1 where neutral, 1 + s with an advantage.
    generations : int
        t.

    Returns
    -------
    (...) array
        Probability. Source: Fisher 1930; Haldane 1927.
    """
    mean = floats(copies_left)
    lost: FloatArray = np.zeros_like(mean)
    for _ in range(generations):
        lost = np.exp(mean * (lost - 1.0))
    return lost


def ultimate_loss_of_one_copy(copies_left: Numbers) -> FloatArray:
    """Return the smallest root of x = exp(lambda (x - 1)): 1 up to lambda = 1, then below; (...).

    -W(-lambda e^-lambda) / lambda, W Lambert's function; about 1 - 2s for lambda = 1 + s small.
    """
    mean = floats(copies_left)
    more = np.where(mean > 1.0, mean, 2.0)
    branch: Any = lambertw  # so that its result is not tied to one version of its stubs
    root = -np.real(branch(-more * np.exp(-more))) / more
    return np.where(mean > 1.0, root, 1.0)[()]


def rarefied_count(counts: Numbers, copies: int) -> FloatArray:
    """Return the expected number of alleles in `copies` gene copies drawn from a sample.

    sum_i [1 - C(N - N_i, g) / C(N, g)].

    Parameters
    ----------
    counts : (..., K) array
        Copies of each allele in the sample, whole.
    copies : int
        g, *gene copies* (twice the animals), at most the smallest sample at the locus.

    Returns
    -------
    (...) array
        Alleles; 1 + unbiased gene diversity at g = 2.

    Raises
    ------
    ValueError
        If a sample has fewer than g copies.
    """
    n = floats(counts)
    whole = total(n)[..., np.newaxis]
    if np.any(whole < copies):
        raise ValueError(f"a sample has fewer than {copies} gene copies at this locus")
    return total(1.0 - chance_missed(whole, n, copies))


def rarefied_private(counts: Numbers, copies: int) -> FloatArray:
    """Return the expected number of alleles that only one population has, in samples of g copies.

    Parameters
    ----------
    counts : (..., P, K) array
        Copies of each allele in each population's sample.
    copies : int
        g, as in `rarefied_count`.

    Returns
    -------
    (..., P) array
        Private alleles of each population. Source: Kalinowski 2004. Errors as in `rarefied_count`.
    """
    n = floats(counts)
    whole = total(n)[..., np.newaxis]
    if np.any(whole < copies):
        raise ValueError(f"a sample has fewer than {copies} gene copies at this locus")
    missed = chance_missed(whole, n, copies)
    private = np.empty(n.shape[:-1])
    for one in range(n.shape[-2]):
        others = np.prod(np.delete(missed, one, axis=-2), axis=-2)
        private[..., one] = total((1.0 - missed[..., one, :]) * others)
    return private
