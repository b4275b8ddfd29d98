"""The exact Wright-Fisher chain of one locus, in plain numpy: no sampling noise.

The state is the number of copies of the named allele among n gene copies of the breeding adults
(n = 2Ne rounded). A state leads to a binomial distribution with n' copies and a chance that
selection, mutation and flow have set. The whole distribution is carried from step to step; n may
change every step. x is the chance that a gene copy of the next generation is the named allele.
Sources: Fisher 1930; Wright 1931; Ewens 2004 chapter 3, from memory.

How it stays fast and exact: each row of the transition matrix is built outwards from its mode by
ratios of neighbouring binomial terms, only as far as the tail beyond has less than 1e-18
(Bernstein's bound), and divided by its sum, so that it sums to 1. States that hold less than
1e-16 / (n + 1) are left out: at most 1e-16 a step, 1e-13 in a thousand steps, and nothing is
scaled up to hide it.
"""

from collections.abc import Iterator
from typing import NamedTuple

import numpy as np
from numpy.lib.stride_tricks import sliding_window_view

from rescue_planner.theory.arrays import FloatArray, IntArray, Numbers, floats, total

_LOG_TAIL = float(np.log(2e18))
_NEGLIGIBLE = 1e-16
_TINY = 1e-300  # a smaller chance cannot change any double of a distribution
_ROUNDING = 1e-12
_BLOCK = 1 << 16  # numbers worked on at once, so that they stay in the processor's cache


class Absorption(NamedTuple):
    """What becomes of each starting state 0..n where both ends are final.

    `fixation`: chance that the allele is alone in the end; `time`: mean generations until one end
    is reached; `time_to_fixation`, `sd_to_fixation`: mean and SD of the generations given fixation
    (nan for a start without the allele).
    """

    fixation: FloatArray
    time: FloatArray
    time_to_fixation: FloatArray
    sd_to_fixation: FloatArray


def copies(ne: float) -> int:
    """Return 2 Ne gene copies, rounded half up to a whole number, at least 2."""
    return max(2, int(np.floor(2.0 * ne + 0.5)))


def frequencies(copies_now: int) -> FloatArray:
    """Return the allele frequency of each state, 0, 1/n, ..., 1; (n + 1,)."""
    return np.arange(copies_now + 1) / copies_now


def _chances(next_frequency: Numbers) -> FloatArray:
    x = floats(next_frequency)
    if not np.all((x >= -_ROUNDING) & (x <= 1.0 + _ROUNDING)):
        raise ValueError("a frequency of the next generation lies outside 0 to 1")
    return np.clip(x, 0.0, 1.0)  # only rounding is left to take off


def _windows(x: FloatArray, n: int) -> tuple[IntArray, FloatArray]:
    """Return the mode of each row (R,) and its terms from mode - W to mode + W (R, 2W + 1).

    `x` (R,) lies strictly between 0 and 1. Terms outside 0..n are exactly 0. Going down from j
    equals going up from n - j with the odds turned round: one table of ratios serves both.
    """
    spread = n * float(np.max(x * (1.0 - x)))
    third = _LOG_TAIL / 3.0
    reach = min(n, int(third + np.sqrt(third**2 + 2.0 * _LOG_TAIL * spread)) + 2)
    mode = np.minimum(np.floor((n + 1) * x).astype(np.int64), n)
    odds = (x / (1.0 - x))[:, np.newaxis]
    j = np.arange(n)
    ratios = sliding_window_view(np.concatenate([(n - j) / (j + 1.0), np.zeros(reach)]), reach)
    terms = np.empty((x.size, 2 * reach + 1))
    terms[:, reach] = 1.0
    np.cumprod(ratios[mode] * odds, axis=1, out=terms[:, reach + 1 :])
    np.cumprod(ratios[n - mode] / odds, axis=1, out=terms[:, :reach][:, ::-1])
    terms /= np.sum(terms, axis=1, keepdims=True)
    return mode, terms


def _blocks(count: int, n: int) -> Iterator[slice]:
    """Cut so many rows into runs that fit the cache."""
    width = min(2 * n + 1, 40 + int(2.0 * np.sqrt(2.0 * _LOG_TAIL * 0.25 * n)))
    rows = max(1, _BLOCK // width)
    return (slice(first, first + rows) for first in range(0, count, rows))


def step(mass: Numbers, next_frequency: Numbers, copies_next: int) -> FloatArray:
    """Carry the distribution over one generation.

    Parameters
    ----------
    mass : (n + 1,) array
        Probability of each state.
    next_frequency : (n + 1,) array
        Chance that one gene copy of the next generation is the named allele, for each state: what
        flow, selection and mutation make of that state's frequency.
    copies_next : int
        n', gene copies of the next generation, at least 1.

    Returns
    -------
    (n' + 1,) array
        Probability of each state of the next generation.

    Raises
    ------
    ValueError
        If the two arrays differ in length or a chance lies outside 0 to 1 by more than 1e-12.
    """
    weight, x = floats(mass), _chances(next_frequency)
    if weight.ndim != 1 or weight.shape != x.shape:
        raise ValueError("mass and next_frequency need one value for each state")
    out = np.zeros(copies_next + 1)
    lost, fixed = x < _TINY, x == 1.0
    out[0] = np.sum(weight[lost])
    out[-1] += np.sum(weight[fixed])
    live = ~lost & ~fixed & (weight >= _NEGLIGIBLE / weight.size)
    weight, x = weight[live], x[live]
    for rows in _blocks(x.size, copies_next):
        mode, terms = _windows(x[rows], copies_next)
        terms *= weight[rows, np.newaxis]
        reach = terms.shape[1] // 2
        at = mode[:, np.newaxis] + np.arange(2 * reach + 1)
        summed = np.bincount(at.ravel(), terms.ravel(), minlength=copies_next + 1 + 2 * reach)
        out += summed[reach : reach + copies_next + 1]
    return out


def first_step(p_next: float, copies_next: int) -> FloatArray:
    """Return the distribution after a first step from one given frequency; (n' + 1,).

    `p_next` is the chance that a gene copy of the next generation is the named allele; the start
    itself need not be a whole number of copies.
    """
    return step(np.ones(1), np.array([p_next]), copies_next)


def transition_matrix(next_frequency: Numbers, copies_next: int) -> FloatArray:
    """Return the whole matrix of one generation, row = state now; (n + 1,) -> (n + 1, n' + 1).

    For solving linear systems: `step` never needs it. Errors as in `step`.
    """
    x = _chances(next_frequency)
    matrix = np.zeros((x.size, copies_next + 1))
    matrix[x < _TINY, 0] = 1.0
    matrix[x == 1.0, -1] = 1.0
    live = np.flatnonzero((x >= _TINY) & (x < 1.0))
    for rows in _blocks(live.size, copies_next):
        mode, terms = _windows(x[live[rows]], copies_next)
        reach = terms.shape[1] // 2
        at = mode[:, np.newaxis] + np.arange(-reach, reach + 1)
        row, column = np.nonzero((at >= 0) & (at <= copies_next))
        matrix[live[rows][row], at[row, column]] = terms[row, column]
    return matrix


def absorption(next_frequency: Numbers) -> Absorption:
    """Return the chance of fixation and the times to it, for every starting state.

    Constant size, no flow, no mutation: `next_frequency` is 0 at state 0 and 1 at state n, and the
    two are final. Solves (I - Q) u = P[., n], (I - Q) T = 1 and the like (Ewens 2004, from memory);
    memory grows with n squared.

    Parameters
    ----------
    next_frequency : (n + 1,) array
        As in `step`.

    Returns
    -------
    Absorption
        Each field (n + 1,), times in generations.

    Raises
    ------
    ValueError
        If one of the two ends is not final.
    """
    x = _chances(next_frequency)
    n = x.size - 1
    if x[0] != 0.0 or x[-1] != 1.0:
        raise ValueError("absorption needs both ends final: no flow and no mutation")
    matrix = transition_matrix(x, n)
    inside = np.eye(n - 1) - matrix[1:-1, 1:-1]
    both = np.linalg.solve(inside, np.column_stack([matrix[1:-1, -1], np.ones(n - 1)]))
    fixing, time = both[:, 0], both[:, 1]
    first = np.linalg.solve(inside, fixing)
    second = np.linalg.solve(inside, 2.0 * first - fixing)
    mean = first / fixing
    spread = np.sqrt(np.maximum(0.0, second / fixing - mean**2))
    ends = (np.array([0.0]), np.array([1.0]), np.array([np.nan]))
    return Absorption(
        np.concatenate([ends[0], fixing, ends[1]]),
        np.concatenate([ends[0], time, ends[0]]),
        np.concatenate([ends[2], mean, ends[0]]),
        np.concatenate([ends[2], spread, ends[0]]),
    )


def mean(mass: Numbers) -> FloatArray:
    """Return the mean allele frequency; (..., n + 1) -> (...)."""
    weight = floats(mass)
    return total(weight * frequencies(weight.shape[-1] - 1))


def sd(mass: Numbers) -> FloatArray:
    """Return the SD of the allele frequency among outcomes; (..., n + 1) -> (...)."""
    weight = floats(mass)
    away = frequencies(weight.shape[-1] - 1) - mean(weight)[..., np.newaxis]
    return np.sqrt(total(weight * away**2))


def heterozygosity(mass: Numbers) -> FloatArray:
    """Return the mean of 2 p (1 - p), drawn with replacement; (..., n + 1) -> (...)."""
    weight = floats(mass)
    p = frequencies(weight.shape[-1] - 1)
    return total(weight * 2.0 * p * (1.0 - p))


def quantile(mass: Numbers, q: Numbers) -> FloatArray:
    """Return the smallest frequency whose cumulative probability is at least q - 1e-12.

    Parameters
    ----------
    mass : (..., n + 1) array
        Probability of each state.
    q : (Q,) array or float
        Probabilities, 0 to 1.

    Returns
    -------
    (..., Q) array, or (...) for one q
        Frequencies.
    """
    reached = np.cumsum(floats(mass), axis=-1)
    wanted = floats(q)
    enough = reached[..., np.newaxis, :] >= np.atleast_1d(wanted)[:, np.newaxis] - _ROUNDING
    enough[..., -1] = True  # what rounding lost of the whole belongs to the last state
    found: FloatArray = np.argmax(enough, axis=-1) / (reached.shape[-1] - 1)
    return found if wanted.ndim else found[..., 0]


def share_kept(mass: Numbers) -> FloatArray:
    """Return the probability that the allele is still there; (..., n + 1) -> (...)."""
    return total(floats(mass)[..., 1:])


def share_fixed(mass: Numbers) -> FloatArray:
    """Return the probability that the allele is alone; (..., n + 1) -> (...)."""
    return floats(mass)[..., -1]
