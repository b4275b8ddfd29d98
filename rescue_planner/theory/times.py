"""Generations that selection takes from one allele frequency to another.

p is the frequency of A among newborn; symbols and assumptions as in `selection`: no drift, so in a
small population these are times *if* the allele is not lost. Sources: Haldane 1924 (Trans. Camb.
Phil. Soc. 23:19), Crow & Kimura 1970 chapter 5, from memory; each held against counting.
"""

import numpy as np
from scipy.special import logit

from rescue_planner.theory.arrays import BoolArray, FloatArray, Numbers, floats
from rescue_planner.theory.equilibria import settles_at
from rescue_planner.theory.selection import after_selection, average_effect, mean_fitness

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)
_PANELS = 64


def _never(start: FloatArray, target: FloatArray, fitness: Numbers) -> BoolArray:
    """Return where selection never takes `start` to `target`: wrong way, or not that far."""
    end = settles_at(start, fitness)
    far_enough = np.abs(end - start) > np.abs(target - start)
    right_way = (end - start) * (target - start) > 0.0
    never = (start != target) & ~(far_enough & right_way)
    lands = after_selection(start, fitness) == target
    return np.asarray(never & ~lands, dtype=np.bool_)


def generations_counted(
    start: Numbers, target: Numbers, fitness: Numbers, most: int = 1_000_000
) -> FloatArray:
    """Return the first whole generation at which p has reached `target`, by counting: exact.

    Parameters
    ----------
    start, target : (...) array
        Frequencies, 0 to 1; `target` may lie on either side.
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa.
    most : int
        Generations after which counting is given up.

    Returns
    -------
    (...) array
        Whole generations; inf where selection never gets there (an end is only approached).

    Raises
    ------
    ValueError
        If `most` generations are not enough.
    """
    w = floats(fitness)
    p, goal = np.broadcast_arrays(floats(start), floats(target), w[..., 0])[:2]
    up = goal > p
    count = np.where(_never(p, goal, w), np.inf, 0.0)
    going = (count == 0.0) & (p != goal)
    for t in range(1, most + 1):
        if not np.any(going):
            return count[()]
        p = np.where(going, after_selection(p, w), p)
        count = np.where(going, float(t), count)
        going = going & np.where(up, p < goal, p > goal)
    if np.any(going):
        raise ValueError(f"not there after {most} generations: selection is too weak to count")
    return count[()]


def generations_by_integral(start: Numbers, target: Numbers, fitness: Numbers) -> FloatArray:
    """Return the integral of mean fitness / (p (1-p) alpha) from `start` to `target`.

    Continuous time, mean fitness kept: within about 2 % of the count even where s = 0.5. Computed
    over the log odds of p, in which the integrand is smooth.

    Parameters
    ----------
    start, target : (...) array
        Frequencies, strictly between 0 and 1.
    fitness : (..., 3) array
        w_AA, w_Aa, w_aa.

    Returns
    -------
    (...) array
        Generations; inf where selection never gets there.
    """
    w = floats(fitness)
    p, goal = np.broadcast_arrays(floats(start), floats(target), w[..., 0])[:2]
    low, high = logit(p), logit(goal)
    cut = (np.arange(_PANELS)[:, np.newaxis] + 0.5 * (_NODES + 1.0)).ravel() / _PANELS
    weight = np.tile(0.5 * _WEIGHTS / _PANELS, _PANELS)
    odds = low[..., np.newaxis] + (high - low)[..., np.newaxis] * cut
    x = 1.0 / (1.0 + np.exp(-odds))
    spread = w[..., np.newaxis, :]
    never = _never(p, goal, w)
    push = np.where(never[..., np.newaxis], 1.0, average_effect(x, spread))
    push = np.where(push == 0.0, 1.0, push)  # only where start is target: the interval is empty
    time = (high - low) * np.sum(weight * mean_fitness(x, spread) / push, axis=-1)
    return np.where(never, np.inf, time)[()]


def generations_multiplicative(
    start: Numbers, target: Numbers, x: Numbers, y: Numbers
) -> FloatArray:
    """Return ln[odds(target) / odds(start)] / ln(x / y): exact for x^2, x y, y^2 and for haploids.

    Shapes (...); frequencies strictly between 0 and 1; negative where selection goes the other way.
    """
    gained = logit(floats(target)) - logit(floats(start))
    return np.asarray(gained / np.log(floats(x) / floats(y)))[()]


def generations_recessive_lethal(start: Numbers, target: Numbers) -> FloatArray:
    """Return 1/q_t - 1/q_0, exact for a lethal that kills only homozygotes; q its frequency; (...).

    It slows without end: halving q takes 1/q generations.
    """
    return 1.0 / floats(target) - 1.0 / floats(start)


def _weak_potential(p: FloatArray, h: FloatArray) -> FloatArray:
    q = 1.0 - p
    ends = (h == 0.0) | (h == 1.0)
    inner = np.where(ends, 0.5, h)
    tilt = (2.0 * inner - 1.0) / (inner * (1.0 - inner))
    general = (
        np.log(p) / (1.0 - inner) - np.log(q) / inner - tilt * np.log(inner * p + (1.0 - inner) * q)
    )
    odds = np.log(p / q)
    return np.where(h == 0.0, odds + 1.0 / q, np.where(h == 1.0, odds - 1.0 / p, general))


def generations_weak(start: Numbers, target: Numbers, s: Numbers, h: Numbers) -> FloatArray:
    """Return the textbook closed form for weak selection, with fitness 1, 1 - h s, 1 - s.

    It takes mean fitness as 1, so it overstates the time where s isn't small (by 30 % at s = 0.5
    without dominance). h = 0: A dominant; h = 1: A recessive.

    Parameters
    ----------
    start, target : (...) array
        Frequencies of A, strictly between 0 and 1.
    s : (...) array
        As in `fitness_forms.against_other`, not 0.
    h : (...) array
        Dominance, 0 to 1.

    Returns
    -------
    (...) array
        Generations; negative where selection goes the other way.
    """
    h_ = floats(h)
    gained = _weak_potential(floats(target), h_) - _weak_potential(floats(start), h_)
    return np.asarray(gained / floats(s))[()]
