"""Comparing whole distributions of outcomes, and plans on two scales at once.

Outcomes are larger = better. Allow for Monte Carlo error before saying that one plan dominates.
Sources: Hadar & Russell 1969; Rockafellar & Uryasev 2000; Drummond et al. 2005, from memory.
"""

import numpy as np

from rescue_planner.theory.arrays import BoolArray, FloatArray, IntArray, Numbers, floats, total


def _sorted_pair(one: Numbers, other: Numbers) -> tuple[FloatArray, FloatArray]:
    x, y = np.sort(floats(one), axis=-1), np.sort(floats(other), axis=-1)
    if x.shape[-1] != y.shape[-1]:
        raise ValueError("dominance is judged on equally many replicates of both plans")
    return x, y


def dominates_first_order(one: Numbers, other: Numbers, margin: float = 0.0) -> BoolArray:
    """Return whether `one` is at least as good at every quantile and better at some.

    Parameters
    ----------
    one, other : (..., R) array
        Outcomes of equally many replicates.
    margin : float
        Differences up to so much count as none (rounding, Monte Carlo error).

    Returns
    -------
    (...) bool array
        First-order stochastic dominance: whoever prefers more prefers `one`.

    Raises
    ------
    ValueError
        If the numbers of replicates differ.
    """
    x, y = _sorted_pair(one, other)
    apart = x - y
    better: BoolArray = np.all(apart >= -margin, axis=-1) & np.any(apart > margin, axis=-1)
    return better


def dominates_second_order(one: Numbers, other: Numbers, margin: float = 0.0) -> BoolArray:
    """Return whether `one`'s sums of worst outcomes are never smaller, and larger somewhere.

    Whoever prefers more and shuns risk prefers `one`. Arguments and errors as in
    `dominates_first_order`; `margin` is per replicate.
    """
    x, y = _sorted_pair(one, other)
    apart = np.cumsum(x - y, axis=-1) / np.arange(1.0, x.shape[-1] + 1.0)
    better: BoolArray = np.all(apart >= -margin, axis=-1) & np.any(apart > margin, axis=-1)
    return better


def lower_tail_mean(outcomes: Numbers, share: float) -> FloatArray:
    """Return the mean of the worst `share` of outcomes (CVaR).

    Parameters
    ----------
    outcomes : (..., R) array
        Replicates, equally likely.
    share : float
        Above 0, at most 1; a replicate is split where R * share isn't whole.

    Returns
    -------
    (...) array
        At most the mean.

    Raises
    ------
    ValueError
        If the share lies outside 0 to 1.
    """
    if not 0.0 < share <= 1.0:
        raise ValueError("the share of worst outcomes must lie above 0 and not above 1")
    x = np.sort(floats(outcomes), axis=-1)
    wanted = share * x.shape[-1]
    weight = np.clip(wanted - np.arange(x.shape[-1]), 0.0, 1.0)
    mean: FloatArray = total(x * weight) / wanted
    return mean


def pareto_front(benefit: Numbers, cost: Numbers) -> BoolArray:
    """Return which options no other beats: at least the benefit at no more cost, one strictly.

    Parameters
    ----------
    benefit, cost : (A,) array
        Of each option.

    Returns
    -------
    (A,) bool array
        True on the front; equal options are both on it.
    """
    b, c = floats(benefit), floats(cost)
    no_worse = (b[:, np.newaxis] >= b) & (c[:, np.newaxis] <= c)
    strictly = (b[:, np.newaxis] > b) | (c[:, np.newaxis] < c)
    on_front: BoolArray = ~np.any(no_worse & strictly, axis=0)
    return on_front


def hypervolume(benefit: Numbers, cost: Numbers, worst: tuple[float, float]) -> float:
    """Return the area that the front dominates, up to a worst benefit and cost.

    Parameters
    ----------
    benefit, cost : (A,) array
        Of each option.
    worst : tuple of float
        Benefit and cost of the reference point; options beyond it add nothing.

    Returns
    -------
    float
        Unit of benefit times unit of cost.
    """
    b, c = floats(benefit), floats(cost)
    inside = (b > worst[0]) & (c < worst[1])
    area, reached = 0.0, worst[0]
    for at in np.lexsort((-b[inside], c[inside])):
        gain = float(b[inside][at]) - reached
        if gain > 0.0:
            area += gain * (worst[1] - float(c[inside][at]))
            reached += gain
    return area


def average_cost(benefit: Numbers, cost: Numbers, base: tuple[float, float]) -> FloatArray:
    """Return cost per unit of benefit over doing nothing, `base`; (A,). It ranks wrongly."""
    return (floats(cost) - base[1]) / (floats(benefit) - base[0])


def incremental_costs(benefit: Numbers, cost: Numbers, base: tuple[float, float]) -> FloatArray:
    """Return the cost of each further unit of benefit, from one option to the next.

    Parameters
    ----------
    benefit, cost : (A,) array
        Options in rising order of both, none dominated.
    base : tuple of float
        Benefit and cost of doing nothing.

    Returns
    -------
    (A,) array
        First against `base`, each other against the one before.

    Raises
    ------
    ValueError
        If the options aren't in strictly rising order of benefit and of cost.
    """
    b = np.concatenate([[base[0]], floats(benefit)])
    c = np.concatenate([[base[1]], floats(cost)])
    if np.any(np.diff(b) <= 0.0) or np.any(np.diff(c) < 0.0):
        raise ValueError("options must rise in benefit and in cost: leave dominated ones out")
    return np.diff(c) / np.diff(b)


def efficient_options(benefit: Numbers, cost: Numbers, base: tuple[float, float]) -> IntArray:
    """Return the options that no other beats and no *mix* of two others beats.

    Extended dominance: on the way up the front, costs per further unit of benefit must rise.

    Parameters
    ----------
    benefit, cost : (A,) array
        Of each option.
    base : tuple of float
        Benefit and cost of doing nothing.

    Returns
    -------
    (E,) int array
        Positions, by rising benefit.
    """
    b = np.concatenate([[base[0]], floats(benefit)])
    c = np.concatenate([[base[1]], floats(cost)])
    front = np.flatnonzero(pareto_front(b, c))
    hull: list[int] = []
    for i in front[np.argsort(b[front], kind="stable")]:
        while len(hull) > 1 and _above_line(b, c, (hull[-2], hull[-1], int(i))):
            hull.pop()
        hull.append(int(i))
    return np.array([i - 1 for i in hull if i > 0], dtype=np.int64)


def _above_line(b: FloatArray, c: FloatArray, at: tuple[int, int, int]) -> bool:
    """Tell whether the middle option costs more than the mix of its two neighbours would."""
    left, middle, right = at
    rise = (c[middle] - c[left]) * (b[right] - b[middle])
    return bool(rise > (c[right] - c[middle]) * (b[middle] - b[left]))


def present_value(costs: Numbers, years: Numbers, rate: Numbers) -> FloatArray:
    """Return sum of costs / (1 + rate)^year; (..., T), (..., T), (...) -> (...). State the rate."""
    factor = (1.0 + floats(rate))[..., np.newaxis] ** floats(years)
    return total(floats(costs) / factor)
