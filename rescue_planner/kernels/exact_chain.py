"""The exact chain of one locus, compiled: windows, eight rows at a time, a stated tail.

No matrix is made. Eight neighbouring states share one window of outcomes, wide enough that each
row loses at most `tail` of its mass (Bernstein's inequality). A row starts at 1 in the middle of
the window and runs outwards by the ratio of neighbouring binomial terms, so there is no logarithm
and no underflow that matters; it is then scaled to its own sum. The eight rows are written out as
scalars: the compiler keeps them in vector registers, in one fixed order of sums. The plain twin is
`theory.chain`.

Axes: n gene copies now, k gene copies next, G steps.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from rescue_planner.kernels.compiled import kernel

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]

LANES = 8
WIDEST = 24.0  # outcomes by which the means of eight rows may differ and still share a middle


@kernel
def fill_ratios(k: int, up: FloatArray, down: FloatArray) -> None:
    """Fill up[j] = (k - j)/(j + 1) and down[j] = j/(k - j + 1) for j = 0..k."""
    for j in range(k + 1):
        up[j] = (k - j) / (j + 1.0)
        down[j] = j / (k - j + 1.0)


@kernel
def reach(k: int, x: float, log_tail: float) -> float:
    """Return how far from k x a binomial outcome lies with less than the tail's chance."""
    third = log_tail / 3.0
    return third + math.sqrt(third * third + 2.0 * log_tail * k * x * (1.0 - x))


@kernel
def run_up(terms: FloatArray, middle: int, last: int, up: FloatArray, odds: FloatArray) -> None:
    """Fill the terms above the middle, eight rows at a time, and their sums in `terms[-1]`."""
    o0, o1, o2, o3 = odds[0], odds[1], odds[2], odds[3]
    o4, o5, o6, o7 = odds[4], odds[5], odds[6], odds[7]
    t0 = t1 = t2 = t3 = t4 = t5 = t6 = t7 = 1.0
    s0 = s1 = s2 = s3 = s4 = s5 = s6 = s7 = 1.0
    for lane in range(LANES):
        terms[middle, lane] = 1.0
    for j in range(middle, last):
        r = up[j]
        t0 *= r * o0
        t1 *= r * o1
        t2 *= r * o2
        t3 *= r * o3
        t4 *= r * o4
        t5 *= r * o5
        t6 *= r * o6
        t7 *= r * o7
        s0 += t0
        s1 += t1
        s2 += t2
        s3 += t3
        s4 += t4
        s5 += t5
        s6 += t6
        s7 += t7
        terms[j + 1, 0] = t0
        terms[j + 1, 1] = t1
        terms[j + 1, 2] = t2
        terms[j + 1, 3] = t3
        terms[j + 1, 4] = t4
        terms[j + 1, 5] = t5
        terms[j + 1, 6] = t6
        terms[j + 1, 7] = t7
    end = terms.shape[0] - 1
    terms[end, 0], terms[end, 1], terms[end, 2], terms[end, 3] = s0, s1, s2, s3
    terms[end, 4], terms[end, 5], terms[end, 6], terms[end, 7] = s4, s5, s6, s7


@kernel
def run_down(
    terms: FloatArray, middle: int, first: int, down: FloatArray, back: FloatArray
) -> None:
    """Fill the terms below the middle and add their sums to `terms[-1]`; `back` is 1/odds."""
    o0, o1, o2, o3 = back[0], back[1], back[2], back[3]
    o4, o5, o6, o7 = back[4], back[5], back[6], back[7]
    t0 = t1 = t2 = t3 = t4 = t5 = t6 = t7 = 1.0
    s0 = s1 = s2 = s3 = s4 = s5 = s6 = s7 = 0.0
    for j in range(middle, first, -1):
        r = down[j]
        t0 *= r * o0
        t1 *= r * o1
        t2 *= r * o2
        t3 *= r * o3
        t4 *= r * o4
        t5 *= r * o5
        t6 *= r * o6
        t7 *= r * o7
        s0 += t0
        s1 += t1
        s2 += t2
        s3 += t3
        s4 += t4
        s5 += t5
        s6 += t6
        s7 += t7
        terms[j - 1, 0] = t0
        terms[j - 1, 1] = t1
        terms[j - 1, 2] = t2
        terms[j - 1, 3] = t3
        terms[j - 1, 4] = t4
        terms[j - 1, 5] = t5
        terms[j - 1, 6] = t6
        terms[j - 1, 7] = t7
    end = terms.shape[0] - 1
    terms[end, 0] += s0
    terms[end, 1] += s1
    terms[end, 2] += s2
    terms[end, 3] += s3
    terms[end, 4] += s4
    terms[end, 5] += s5
    terms[end, 6] += s6
    terms[end, 7] += s7


@kernel
def add_scaled(
    terms: FloatArray, first: int, last: int, weight: FloatArray, out: FloatArray
) -> None:
    """Add the eight rows, each scaled to its weight, to the outcomes."""
    end = terms.shape[0] - 1
    c0, c1 = weight[0] / terms[end, 0], weight[1] / terms[end, 1]
    c2, c3 = weight[2] / terms[end, 2], weight[3] / terms[end, 3]
    c4, c5 = weight[4] / terms[end, 4], weight[5] / terms[end, 5]
    c6, c7 = weight[6] / terms[end, 6], weight[7] / terms[end, 7]
    for j in range(first, last + 1):
        out[j] += (
            (c0 * terms[j, 0] + c1 * terms[j, 1]) + (c2 * terms[j, 2] + c3 * terms[j, 3])
        ) + ((c4 * terms[j, 4] + c5 * terms[j, 5]) + (c6 * terms[j, 6] + c7 * terms[j, 7]))


@kernel
def add_rows(
    x: FloatArray,
    weight: FloatArray,
    k: int,
    tables: FloatArray,
    terms: FloatArray,
    odds: FloatArray,
    log_tail: float,
    out: FloatArray,
) -> None:
    """Add eight rows with chances `x` strictly between 0 and 1 to the outcomes.

    `tables` (2, k + 1) holds the ratios up and down, `odds` (2, 8) is room for the odds.
    """
    least, most = x[0], x[0]
    for lane in range(1, LANES):
        least, most = min(least, x[lane]), max(most, x[lane])
    first = math.floor(k * least - reach(k, least, log_tail))
    last = math.ceil(k * most + reach(k, most, log_tail))
    first, last = max(0, first), min(k, last)
    middle = min(k, int((k + 1) * 0.5 * (least + most)))
    for lane in range(LANES):
        odds[0, lane] = x[lane] / (1.0 - x[lane])
        odds[1, lane] = (1.0 - x[lane]) / x[lane]
    run_up(terms, middle, last, tables[0], odds[0])
    run_down(terms, middle, first, tables[1], odds[1])
    add_scaled(terms, first, last, weight, out)


@kernel
def carry(
    mass: FloatArray,
    x: FloatArray,
    n: int,
    k: int,
    work: FloatArray,
    tail: float,
    out: FloatArray,
) -> float:
    """Carry a distribution over one generation and return the mass given up as negligible.

    `mass` and `x` are (n + 1,) or longer, `out` (k + 1,) or longer; `work` is (K + 4, 8) with K at
    least k. States whose mass is below tail/(n + 1) are given up and counted.
    """
    log_tail = math.log(2.0 / tail)
    tables = np.empty((2, k + 1))
    fill_ratios(k, tables[0], tables[1])
    odds = np.empty((2, LANES))
    chance = np.empty(LANES)
    weight = np.empty(LANES)
    least = tail / (n + 1)
    lost = 0.0
    out[: k + 1] = 0.0
    held = 0
    for i in range(n + 1):
        if mass[i] < least:
            lost += mass[i]
        elif x[i] < 1e-300:
            out[0] += mass[i]
        elif x[i] >= 1.0:
            out[k] += mass[i]
        else:
            if held > 0 and k * abs(x[i] - chance[0]) > WIDEST:
                held = flush(chance, weight, held, k, tables, work, odds, log_tail, out)
            chance[held], weight[held] = x[i], mass[i]
            held += 1
            if held == LANES:
                held = flush(chance, weight, held, k, tables, work, odds, log_tail, out)
    if held > 0:
        flush(chance, weight, held, k, tables, work, odds, log_tail, out)
    return lost


@kernel
def flush(
    chance: FloatArray,
    weight: FloatArray,
    held: int,
    k: int,
    tables: FloatArray,
    work: FloatArray,
    odds: FloatArray,
    log_tail: float,
    out: FloatArray,
) -> int:
    """Add the rows collected so far; empty lanes repeat the first with no weight. Return 0."""
    for lane in range(held, LANES):
        chance[lane], weight[lane] = chance[0], 0.0
    add_rows(chance, weight, k, tables, work, odds, log_tail, out)
    return 0


@kernel
def following(
    p: float, m: float, incoming: float, fitness: FloatArray, to: float, off: float
) -> float:
    """Return the chance of the named allele in the next gene pool: flow, selection, mutation."""
    mixed = min(1.0, max(0.0, (1.0 - m) * p + incoming))
    other = 1.0 - mixed
    carriers = mixed * fitness[0] + other * fitness[1]
    mean = mixed * carriers + other * (mixed * fitness[1] + other * fitness[2])
    selected = mixed if mean == 0.0 else mixed * carriers / mean
    return min(1.0, max(0.0, (1.0 - off) * selected + to * (1.0 - selected)))


@kernel
def quantile(mass: FloatArray, k: int, q: float) -> float:
    """Return the smallest frequency whose cumulative probability is at least q - 1e-12."""
    total = 0.0
    for j in range(k + 1):
        total += mass[j]
        if total >= q - 1e-12:
            return j / k
    return 1.0


@kernel
def describe(mass: FloatArray, k: int, quantiles: FloatArray, row: FloatArray) -> None:
    """Fill a row: mean, SD, the quantiles, chance kept, chance fixed."""
    mean = 0.0
    for j in range(k + 1):
        mean += mass[j] * (j / k)
    variance = 0.0
    for j in range(k + 1):
        variance += mass[j] * (j / k - mean) ** 2
    row[0], row[1] = mean, math.sqrt(variance)
    for i in range(quantiles.size):
        row[2 + i] = quantile(mass, k, quantiles[i])
    row[2 + quantiles.size] = 1.0 - mass[0]
    row[3 + quantiles.size] = mass[k]


@kernel
def course(
    start: float,
    m: FloatArray,
    incoming: FloatArray,
    copies: IntArray,
    fitness: FloatArray,
    mutation: FloatArray,
    quantiles: FloatArray,
    tail: float,
    stop: NDArray[np.uint8],
    rows: FloatArray,
    mass: FloatArray,
) -> float:
    """Run one locus over G steps and return all the mass given up; -1 when stopped.

    Parameters
    ----------
    start : float
        Frequency at t = 0; the first step starts from it.
    m, incoming : (G,) arrays
        Share of gene copies from donors, and the sum of share times the donors' frequency.
    copies : (G,) array of int64
        2Ne of each step, whole.
    fitness : (3,) array
        Of AA, Aa, aa; A is the named allele.
    mutation : (2,) array
        To the allele, from the allele, per gene copy and generation.
    quantiles : (Q,) array
    tail : float
        Mass a row may lose.
    stop : (1,) array of uint8
        Set to 1 from another thread to stop after the generation in hand.
    rows : (G + 1, Q + 4) array
        Filled: mean, SD, quantiles, kept, fixed.
    mass : (2, K + 1) array
        Room, K the largest of `copies`; row G % 2 holds the last distribution.
    """
    steps = m.size
    largest = mass.shape[1] - 1
    x = np.empty(largest + 1)
    work = np.empty((largest + 4, LANES))
    rows[0, :] = start
    rows[0, 1] = 0.0
    rows[0, 2 + quantiles.size] = 1.0 if start > 0.0 else 0.0
    rows[0, 3 + quantiles.size] = 1.0 if start >= 1.0 else 0.0
    now, lost = 0, 0.0
    mass[0, 0] = 1.0
    for t in range(steps):
        if stop[0] != 0:
            return -1.0
        old, new = mass[t % 2], mass[(t + 1) % 2]
        if t == 0:
            x[0] = following(start, m[0], incoming[0], fitness, mutation[0], mutation[1])
        else:
            for i in range(now + 1):
                x[i] = following(i / now, m[t], incoming[t], fitness, mutation[0], mutation[1])
        lost += carry(old, x, now, copies[t], work, tail, new)
        now = copies[t]
        describe(new, now, quantiles, rows[t + 1])
    return lost
