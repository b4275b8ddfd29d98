"""Steady flow against local selection: what is kept, what is lost, and above which flow.

A is the locally favoured allele, m the share of gene copies from donors per generation. Residents
are selected, then newcomers join (the first order of `orders`); p is counted among newborn, and
`selection.after_selection(p)` is the same equilibrium counted among breeders. No drift: in a small
population an allele is lost below these limits too. Sources: Haldane 1930 (Proc. Camb. Phil. Soc.
26:220), Wright 1931, Bulmer 1972 (Am. Nat. 106:254), Nagylaki 1992, from memory; derived.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.equilibria import slope_of_selection
from rescue_planner.theory.fitness_forms import parts, triple
from rescue_planner.theory.orders import residents_selected_then_joined


class CriticalFlow(NamedTuple):
    """The flow above which A is lost for certain, each (...).

    `m`: that flow, 0 where A has no advantage anywhere; `frequency`: where A then stands. Above 0
    it is a fold: just below `m`, A still is lost if a pulse pushes it under the lower equilibrium.
    `invasion`: flow below which a *rare* A rises by itself, 0 or more, never above `m`.
    """

    m: FloatArray
    frequency: FloatArray
    invasion: FloatArray


class FlowEquilibria(NamedTuple):
    """Equilibria under flow in rising order, each (..., 3), nan where there are fewer.

    `slope`: what a small distance is multiplied by each generation; stable where below 1.
    """

    p: FloatArray
    slope: FloatArray


def _bearable(p: FloatArray, w: FloatArray) -> FloatArray:
    """Return 1 - mean fitness / fitness of A = (1-p) alpha / w_A: the flow that p can balance."""
    w11, w12, w22 = (x[..., np.newaxis] for x in parts(w))
    of_a = p * w11 + (1.0 - p) * w12
    alpha = p * (w11 - w12) + (1.0 - p) * (w12 - w22)
    with np.errstate(divide="ignore", invalid="ignore"):
        borne = (1.0 - p) * alpha / of_a
    return np.where(of_a > 0.0, borne, 0.0)


def critical_flow(fitness: Numbers) -> CriticalFlow:
    """Return the flow from a donor without A above which A is lost whatever its frequency.

    max over 0 < p <= 1 of 1 - mean fitness / w_A, the limit p -> 0 included: one rule for invasion
    and fold, for any fitness. Weak selection: s without dominance of copies, s/2 additive, s for A
    dominant, s/4 for A recessive: "m = s" can be four times too high.

    Parameters
    ----------
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa, not negative.

    Returns
    -------
    CriticalFlow
        Shares of gene copies per generation, 0 to 1.
    """
    w = floats(fitness)
    w11, w12, w22 = parts(w)
    tilt, base, gain = w11 - 2.0 * w12 + w22, w12 - w22, w11 - w12
    a, b = -tilt * gain, -2.0 * tilt * w12
    c = (tilt - base) * w12 - gain * base  # a p^2 + b p + c = 0 where the bearable flow peaks
    under = np.sqrt(np.maximum(b**2 - 4.0 * a * c, 0.0))
    half = -0.5 * (b + np.where(b < 0.0, -under, under))
    with np.errstate(divide="ignore", invalid="ignore"):
        roots = np.stack([np.zeros_like(a), half / a, c / half, np.ones_like(a)], axis=-1)
    roots = np.where((roots >= 0.0) & (roots <= 1.0), roots, 0.0)
    borne = _bearable(roots, w)
    at = np.argmax(borne, axis=-1)[..., np.newaxis]
    best = np.take_along_axis(borne, at, axis=-1)[..., 0]
    where = np.take_along_axis(roots, at, axis=-1)[..., 0]
    kept = best > 0.0
    return CriticalFlow(
        np.where(kept, best, 0.0)[()],
        np.where(kept, where, 0.0)[()],
        np.maximum(borne[..., 0], 0.0)[()],
    )


def _roots(w: FloatArray, m: FloatArray, donor_p: FloatArray) -> FloatArray:
    """Return real roots in 0..1 of the cubic, rising, padded with nan to three."""
    tilt, base, gain = w[0] - 2.0 * w[1] + w[2], w[1] - w[2], w[0] - w[1]
    cubic = np.array(
        [
            -tilt,
            (1.0 - m) * gain + m * donor_p * tilt - 2.0 * base,
            (1.0 - m) * w[1] + 2.0 * m * donor_p * base - w[2],
            m * donor_p * w[2],
        ]
    )
    found = np.roots(cubic) if np.any(cubic) else np.empty(0)
    real = found.real[np.abs(found.imag) < 1e-9]
    for _ in range(3):  # polish what the eigenvalues left
        rise = np.polyval(np.polyder(cubic), real)
        real = real - np.where(rise == 0.0, 0.0, np.polyval(cubic, real) / (rise + (rise == 0.0)))
    inside = np.sort(real[(real > -1e-12) & (real < 1.0 + 1e-12)])
    out = np.full(3, np.nan)
    out[: inside.size] = np.clip(inside, 0.0, 1.0)  # only rounding is left to take off
    return out


def flow_equilibria(fitness: Numbers, m: Numbers, donor_p: Numbers = 0.0) -> FlowEquilibria:
    """Return every equilibrium of A under steady flow, with its slope.

    Roots in 0..1 of the cubic -a p^3 + [(1-m) g + m p_d a - 2 e] p^2 + [(1-m) w_Aa + 2 m p_d e
    - w_aa] p + m p_d w_aa, with a = w_AA - 2 w_Aa + w_aa, e = w_Aa - w_aa, g = w_AA - w_Aa. Three
    roots: the middle one is the edge between two fates. With a donor that has A it is never lost
    while flow goes on.

    Parameters
    ----------
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa.
    m : (...) array
        Share of gene copies from the donor per generation, 0 to 1.
    donor_p : (...) array
        A's frequency in the donor.

    Returns
    -------
    FlowEquilibria
        Without flow and without any difference of fitness every frequency stays: all nan.
    """
    parts(fitness)
    solve = np.vectorize(_roots, signature="(k),(),()->(r)", otypes=[np.float64])
    p = np.asarray(solve(floats(fitness), floats(m), floats(donor_p)), dtype=np.float64)
    w = floats(fitness)[..., np.newaxis, :]
    slope = (1.0 - floats(m))[..., np.newaxis] * slope_of_selection(p, w)
    return FlowEquilibria(p, slope)


def course_under_flow(
    start: Numbers, fitness: Numbers, shares: Numbers, donor_p: Numbers = 0.0
) -> FloatArray:
    """Return p after each generation of a schedule of flow; (...), (..., 3), (..., T) -> (..., T).

    Residents selected, then joined. `shares` may change from generation to generation.
    """
    m, p, course = floats(shares), floats(start), []
    for t in range(m.shape[-1]):
        p = residents_selected_then_joined(p, fitness, m[..., t], donor_p)
        course.append(p)
    return np.stack(np.broadcast_arrays(*course), axis=-1)


def haploid(s: Numbers) -> FloatArray:
    """Return the triple that acts as a haploid locus of fitness 1 : 1 - s; (...) -> (..., 3)."""
    other = 1.0 - floats(s)
    return triple(1.0, other, other**2)


def two_niche_growth_when_rare(gain: Numbers, loss: Numbers, m: Numbers) -> FloatArray:
    """Return the growth of a rare allele in two niches that exchange the share m both ways.

    Leading eigenvalue of [[(1-m)(1+s1), m(1-s2)], [m(1+s1), (1-m)(1-s2)]]: the allele is protected
    where it is above 1 (Bulmer 1972).

    Parameters
    ----------
    gain, loss : (...) array
        s1, s2: the allele has fitness 1 + s1 in niche 1 and 1 - s2 in niche 2, relative to the
        other allele.
    m : (...) array
        Share exchanged each way per generation.

    Returns
    -------
    (...) array
        Growth of its frequency per generation while rare.
    """
    stay = 1.0 - floats(m)
    one, two = stay * (1.0 + floats(gain)), stay * (1.0 - floats(loss))
    product = (1.0 + floats(gain)) * (1.0 - floats(loss)) * floats(m) ** 2
    return 0.5 * (one + two + np.sqrt((one - two) ** 2 + 4.0 * product))


def two_niche_critical_exchange(gain: Numbers, loss: Numbers) -> FloatArray:
    """Return the exchange below which the allele is protected: exact.

    (r1-1)(r2-1) / (2 r1 r2 - r1 - r2) with r1 = 1 + s1, r2 = 1 - s2; about s1 s2 / (s2 - s1) for
    weak selection. One-way flow is the case s2 = 1.

    Parameters
    ----------
    gain, loss : (...) array
        s1 and s2 as above.

    Returns
    -------
    (...) array
        Share per generation; inf where no exchange loses it, 0 where it is nowhere favoured.
    """
    r1, r2 = 1.0 + floats(gain), 1.0 - floats(loss)
    below = 2.0 * r1 * r2 - r1 - r2
    opposed = (r1 - 1.0) * (r2 - 1.0)
    finite = (below < 0.0) & (opposed < 0.0)
    limit = opposed / np.where(below < 0.0, below, -1.0)
    nowhere = (r1 <= 1.0) & (r2 <= 1.0)
    return np.where(finite, limit, np.where(nowhere, 0.0, np.inf))[()]
