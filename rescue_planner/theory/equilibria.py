"""Where viability selection at one locus comes to rest, how firmly, and where it moves fastest.

p is the frequency of A among newborn; symbols and assumptions as in `selection`.
Sources: Fisher 1922 (Proc. R. Soc. Edinb. 42:321), Haldane 1924, Crow & Kimura 1970 chapter 5,
from memory; the algebra was checked by differentiating numerically.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import BoolArray, FloatArray, Numbers, floats
from rescue_planner.theory.fitness_forms import parts
from rescue_planner.theory.selection import after_selection, average_effect, mean_fitness


class Resting(NamedTuple):
    """Where selection can come to rest, each (...).

    `interior`: frequency at which both alleles stay, nan where there is none; `slope`: what a small
    distance from it is multiplied by in a generation; `interior_stable`: whether it is returned to;
    `fixed_stable`, `lost_stable`: whether a rare other allele (a rare A) is driven out again.
    """

    interior: FloatArray
    slope: FloatArray
    interior_stable: BoolArray
    fixed_stable: BoolArray
    lost_stable: BoolArray


def slope_of_selection(p: Numbers, fitness: Numbers) -> FloatArray:
    """Return dp'/dp, what selection multiplies a small difference in frequency by.

    Parameters
    ----------
    p : (...) array
        Frequency of A, 0 to 1.
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa.

    Returns
    -------
    (...) array
        Without unit, nan where nothing can live at p; derived.
    """
    w11, w12, _ = parts(fitness)
    p_ = floats(p)
    of_a, mean = p_ * w11 + (1.0 - p_) * w12, mean_fitness(p, fitness)
    rise = (of_a + p_ * (w11 - w12)) * mean - 2.0 * p_ * of_a * average_effect(p, fitness)
    dead = mean == 0.0
    return np.where(dead, np.nan, rise / np.where(dead, 1.0, mean) ** 2)[()]


def interior_equilibrium(fitness: Numbers) -> FloatArray:
    """Return (w_Aa - w_aa) / (2 w_Aa - w_AA - w_aa), where both alleles stay.

    Parameters
    ----------
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa, relative, not negative.

    Returns
    -------
    (...) array
        Frequency of A; nan where it does not lie strictly between 0 and 1.
    """
    w11, w12, w22 = parts(fitness)
    of_a, of_other = w12 - w22, w12 - w11  # both positive or both negative
    inside = of_a * of_other > 0.0
    return np.where(inside, of_a / np.where(inside, of_a + of_other, 1.0), np.nan)[()]


def resting_points(fitness: Numbers) -> Resting:
    """Return the equilibria of selection alone and whether each is stable.

    A heterozygote that is best holds both alleles; one that is worst lets the side of the interior
    point decide. With complete dominance the end is judged by the next term: A dominant and fitter
    is driven to fixation, if slowly. Without any difference no end is stable (nothing moves).

    Parameters
    ----------
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa, relative, not negative.

    Returns
    -------
    Resting
        Each field (...).
    """
    w11, w12, w22 = parts(fitness)
    at = interior_equilibrium(fitness)
    with np.errstate(invalid="ignore", divide="ignore"):
        slope = (w12 * (w11 + w22) - 2.0 * w11 * w22) / (w12**2 - w11 * w22)
    slope = np.where(np.isnan(at), np.nan, slope)[()]
    fixed = (w11 > w12) | ((w11 == w12) & (w12 > w22))
    lost = (w22 > w12) | ((w22 == w12) & (w12 > w11))
    held = ~np.isnan(at) & (w12 > w11)
    return Resting(at, slope, held, fixed, lost)


def settles_at(p: Numbers, fitness: Numbers) -> FloatArray:
    """Return the frequency that selection alone ends at, from `p`.

    Parameters
    ----------
    p : (...) array
        Frequency of A now; exactly 0, 1 or an equilibrium stays where it is.
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa.

    Returns
    -------
    (...) array
        0, 1, the stable interior point, or `p` itself where nothing moves it.
    """
    rest = resting_points(fitness)
    p_, push = np.broadcast_arrays(floats(p), average_effect(p, fitness))
    end = np.where(push > 0.0, 1.0, 0.0)
    end = np.where(rest.interior_stable, rest.interior, end)
    stays = (push == 0.0) | (p_ <= 0.0) | (p_ >= 1.0) | (p_ == rest.interior)
    return np.where(stays, p_, end)[()]


def _fastest(w: FloatArray) -> float:
    """Return the p of the largest |p' - p| for one triple: a root of d(change)/dp."""
    tilt, base = float(w[0] - 2.0 * w[1] + w[2]), float(w[1] - w[2])
    change = np.array([-tilt, tilt - base, base, 0.0])  # p (1-p) (base + tilt p)
    mean = np.array([tilt, 2.0 * base, float(w[2])])
    rise, tip = floats(np.polyder(change)), floats(np.polyder(mean))
    roots = np.roots(np.convolve(rise, mean) - np.convolve(change, tip))
    real = floats(roots.real[np.abs(roots.imag) < 1e-7])
    inside = floats(real[(real > 0.0) & (real < 1.0)])
    if len(inside) == 0 or float(np.max(np.abs(change))) == 0.0:
        return float("nan")
    moved = np.abs(np.polyval(change, inside) / np.polyval(mean, inside))
    return float(inside[np.argmax(moved)])


def fastest_at(fitness: Numbers) -> FloatArray:
    """Return the frequency at which one generation of selection moves p most, either way.

    It is 1/2 only for weak selection without dominance. A root of
    d/dp [p (1-p) alpha / mean fitness] = 0, the one with the largest |p' - p|; derived.

    Parameters
    ----------
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa.

    Returns
    -------
    (...) array
        Frequency of A; nan where selection moves nothing, or moves most at an end (lethals).
    """
    parts(fitness)
    found = np.vectorize(_fastest, signature="(k)->()", otypes=[np.float64])(floats(fitness))
    return np.asarray(found, dtype=np.float64)[()]


def fastest_additive(fitness: Numbers) -> FloatArray:
    """Return sqrt(w_aa) / (sqrt(w_AA) + sqrt(w_aa)), `fastest_at` where w_Aa is the mean of both.

    Shapes as in `fastest_at`; derived. w_Aa is not looked at.
    """
    w11, _, w22 = parts(fitness)
    at: FloatArray = np.sqrt(w22) / (np.sqrt(w11) + np.sqrt(w22))
    return at


def fastest_multiplicative(x: Numbers, y: Numbers) -> FloatArray:
    """Return sqrt(y) / (sqrt(x) + sqrt(y)), `fastest_at` for x^2, x y, y^2; (...), derived."""
    x_, y_ = np.sqrt(floats(x)), np.sqrt(floats(y))
    at: FloatArray = y_ / (x_ + y_)
    return at


def change(p: Numbers, fitness: Numbers) -> FloatArray:
    """Return p' - p of one generation of selection; shapes as in `selection.after_selection`."""
    return after_selection(p, fitness) - floats(p)
