"""Purging: selection removes harmful alleles while inbreeding lays them bare.

d = s (1/2 - h) is the purging coefficient, 0 to 0.5. Data show little of it (1 of 25 captive mammal
populations, Ballou 1997; 14 of 119 zoo populations, Boakes, Wang & Amos 2007, Heredity 98:172): off
by default, never a free benefit. Sources: Garcia-Dorado 2008 (Genetics 180:1559), 2012 (Genetics
190:1461); Ballou 1997 (J. Hered. 88:169); exact oracles derived.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory import chain
from rescue_planner.theory.arrays import BoolArray, FloatArray, Numbers, floats
from rescue_planner.theory.selection import after_selection
from rescue_planner.theory.size import retained


class PurgedInbreeding(NamedTuple):
    """F and its purged counterpart g at generations 0..t, (..., t + 1), and whether g may be used.

    `holds` (...): N d is at least 1. Where it is not, show a warning and use `inbreeding`: the
    load behaves as if neutral, and purging must not be credited.
    """

    inbreeding: FloatArray
    purged: FloatArray
    holds: BoolArray

    @property
    def usable(self) -> FloatArray:
        """Purged g where it holds, F elsewhere; (..., t + 1)."""
        return np.where(self.holds[..., np.newaxis], self.purged, self.inbreeding)


def purging_coefficient(s: Numbers, h: Numbers) -> FloatArray:
    """Return d = s (1/2 - h); (...), 0.5 for a recessive lethal, 0 for an additive allele."""
    return floats(s) * (0.5 - floats(h))


def purged_inbreeding(ne: Numbers, coefficient: Numbers, generations: int) -> PurgedInbreeding:
    """Return g_t of g' = [(1 - 1/(2N)) g + 1/(2N)] (1 - 2 d f), f the inbreeding before the step.

    Parameters
    ----------
    ne : (...) array
        Constant effective size N, animals, at least 0.5.
    coefficient : (...) array
        d, 0 to 0.5.
    generations : int
        t.

    Returns
    -------
    PurgedInbreeding
        ln W_t = ln W_0 - B g_t. A quick estimate that errs on the dark side: for lethals at N = 25
        it is 1 % above the exact chain at t = 2, 19 % at 5, more than double at 20; for s = 0.02
        never more than 6 %. Where purging decides, use `expressed_load_exact` or single loci.

    Raises
    ------
    ValueError
        If d lies outside 0 to 0.5.
    """
    d, kept = floats(coefficient), retained(ne)
    if np.any((d < 0.0) | (d > 0.5)):
        raise ValueError("the purging coefficient d = s (1/2 - h) lies between 0 and 0.5")
    shape = np.broadcast_shapes(d.shape, kept.shape)
    f, g = np.zeros((*shape, generations + 1)), np.zeros((*shape, generations + 1))
    for t in range(generations):
        f[..., t + 1] = 1.0 - kept ** (t + 1.0)
        g[..., t + 1] = (kept * g[..., t] + 1.0 - kept) * (1.0 - 2.0 * d * f[..., t])
    return PurgedInbreeding(f, g, np.asarray(floats(ne) * d >= 1.0))


def purged_limit(ne: Numbers, coefficient: Numbers) -> FloatArray:
    """Return where g settles: (1 - 2d) / (1 + 2d (2N - 1)); (...), derived. 1 for d = 0."""
    double = 2.0 * floats(coefficient)
    return (1.0 - double) / (1.0 + double * (2.0 * floats(ne) - 1.0))


def expressed_load_exact(ne: float, s: float, h: float, generations: int) -> FloatArray:
    """Return 2N E[x_t^2], the expressed load of a rare allele, from the exact chain.

    One copy at generation 1 among 2N, selection before sampling; without selection it is F_t, so
    it is what g_t stands for.

    Parameters
    ----------
    ne : float
        Effective size N, animals; 2N is rounded.
    s, h : float
        Selection against the homozygote, dominance.
    generations : int
        t, at least 1.

    Returns
    -------
    (t + 1,) array
        At generations 0 (0) to t. Derived.
    """
    n = chain.copies(ne)
    states = chain.frequencies(n)
    following = after_selection(states, [1.0 - s, 1.0 - h * s, 1.0])
    mass = np.zeros(n + 1)
    mass[1] = 1.0
    out = np.zeros(generations + 1)
    for t in range(1, generations + 1):
        out[t] = n * float(np.sum(mass * states**2))
        mass = chain.step(mass, following, n)
    return out


_GAMETES = np.array([0.0, 0.5, 1.0])


def sib_line_deaths(viability: Numbers, generations: int) -> FloatArray:
    """Return the chance that a zygote dies, along a line of full-sib matings that persists.

    One copy of the harmful allele in one of the two founders. Each generation two of the surviving
    young, whatever their sex, are mated: an exact chain of the nine pairs of genotypes.

    Parameters
    ----------
    viability : (3,) array
        Chance to live with 0, 1, 2 copies; (1, 1, 0) for a recessive lethal.
    generations : int
        g.

    Returns
    -------
    (g + 1,) array
        Among zygotes of generation 0 (the founders' young, F = 0) to g. Without purging a recessive
        lethal kills F/4. Derived.
    """
    w = floats(viability)
    mass = np.zeros((3, 3))
    mass[0, 1] = 1.0
    out = np.empty(generations + 1)
    one = _GAMETES[:, np.newaxis]
    other = _GAMETES[np.newaxis, :]
    zygotes = np.stack(
        [(1 - one) * (1 - other), one * (1 - other) + other * (1 - one), one * other], axis=-1
    )
    living = zygotes * w
    share = np.sum(living, axis=-1)
    young = living / np.where(share == 0.0, 1.0, share)[..., np.newaxis]
    for g in range(generations + 1):
        out[g] = np.sum(mass * (1.0 - share))
        mass = np.einsum("ij,ijk,ijl->kl", mass, young, young)
        mass = mass / np.sum(mass)  # families in which none lives end their line
    return out


def ancestral_inbreeding(
    ancestral_sire: Numbers, f_sire: Numbers, ancestral_dam: Numbers, f_dam: Numbers
) -> FloatArray:
    """Return f_a of an animal: the part of its genome once homozygous by descent in an ancestor.

    f_a = [f_a(s) + (1 - f_a(s)) F_s + f_a(d) + (1 - f_a(d)) F_d] / 2.

    Parameters
    ----------
    ancestral_sire, f_sire, ancestral_dam, f_dam : (...) array
        f_a and F of sire and of dam.

    Returns
    -------
    (...) array
        0 to 1. Takes f_a and F as independent, which is approximate. Source: Ballou 1997.
    """
    sire, dam = floats(ancestral_sire), floats(ancestral_dam)
    of_sire = sire + (1.0 - sire) * floats(f_sire)
    return 0.5 * (of_sire + dam + (1.0 - dam) * floats(f_dam))


def log_survival(
    f: Numbers, ancestral: Numbers, load_haploid: Numbers, purging_slope: Numbers
) -> FloatArray:
    """Return -B F + c F f_a, Ballou's regression without its intercept; (...).

    B is per *haploid* genome; c above 0 is purging, estimated from the same data as B.
    """
    f_ = floats(f)
    return f_ * (floats(purging_slope) * floats(ancestral) - floats(load_haploid))
