"""Draws from the usual distributions, each from one keyed stream.

Every sampler inverts or rejects by a published method and never turns a chance above one half
around by hand: where a tail is mirrored the mirror is written out once, and tested on both sides.
`s, k` are a set of streams and a row of it (`streams`).

Sources, from memory: Wichura 1988 (AS 241, inverse normal); Hormann 1993 (PTRS, BTRS);
Marsaglia & Tsang 2000 (gamma).
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from rescue_planner.kernels.inner import leaf
from rescue_planner.kernels.streams import Words, below, uniform

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]

FEW = 10.0  # expected successes below which a search from zero is quicker than rejection
_HALF_STEP = 2.0**-54


@leaf
def normal_quantile(u: float) -> float:
    """Return the standard normal quantile at 0 < u < 1 (AS 241, relative error about 1e-16)."""
    q = u - 0.5
    if abs(q) <= 0.425:
        r = 0.180625 - q * q
        top = 2.5090809287301226727e3
        for a in (
            3.3430575583588128105e4,
            6.7265770927008700853e4,
            4.5921953931549871457e4,
            1.3731693765509461125e4,
            1.9715909503065514427e3,
            1.3314166789178437745e2,
            3.3871328727963666080e0,
        ):
            top = top * r + a
        bottom = 5.2264952788528545610e3
        for b in (
            2.8729085735721942674e4,
            3.9307895800092710610e4,
            2.1213794301586595867e4,
            5.3941960214247511077e3,
            6.8718700749205790830e2,
            4.2313330701600911252e1,
            1.0,
        ):
            bottom = bottom * r + b
        return q * top / bottom
    r = math.sqrt(-math.log(u if q < 0.0 else 1.0 - u))
    if r <= 5.0:
        r -= 1.6
        top = 7.74545014278341407640e-4
        for a in (
            2.27238449892691845833e-2,
            2.41780725177450611770e-1,
            1.27045825245236838258e0,
            3.64784832476320460504e0,
            5.76949722146069140550e0,
            4.63033784615654529590e0,
            1.42343711074968357734e0,
        ):
            top = top * r + a
        bottom = 1.05075007164441684324e-9
        for b in (
            5.47593808499534494600e-4,
            1.51986665636164571966e-2,
            1.48103976427480074590e-1,
            6.89767334985100004550e-1,
            1.67638483018380384940e0,
            2.05319162663775882187e0,
            1.0,
        ):
            bottom = bottom * r + b
    else:
        r -= 5.0
        top = 2.01033439929228813265e-7
        for a in (
            2.71155556874348757815e-5,
            1.24266094738807843860e-3,
            2.65321895265761230930e-2,
            2.96560571828504891230e-1,
            1.78482653991729133580e0,
            5.46378491116411436990e0,
            6.65790464350110377720e0,
        ):
            top = top * r + a
        bottom = 2.04426310338993978564e-15
        for b in (
            1.42151175831644588870e-7,
            1.84631831751005468180e-5,
            7.86869131145613259100e-4,
            1.48753612908506148525e-2,
            1.36929880922735805310e-1,
            5.99832206555887937690e-1,
            1.0,
        ):
            bottom = bottom * r + b
    return -top / bottom if q < 0.0 else top / bottom


@leaf
def normal(s: Words, k: int) -> float:
    """Return a standard normal number: the quantile at one uniform, so one word for each."""
    return normal_quantile(uniform(s, k) + _HALF_STEP)


@leaf
def poisson(s: Words, k: int, mean: float) -> int:
    """Return a Poisson number; `mean` at least 0. Search below a mean of 10, PTRS above."""
    if mean <= 0.0:
        return 0
    if mean < FEW:
        term = math.exp(-mean)
        left, n = uniform(s, k) - term, 0
        while left >= 0.0 and n < 200:
            n += 1
            term *= mean / n
            left -= term
        return n
    root = math.sqrt(mean)
    b = 0.931 + 2.53 * root
    a = -0.059 + 0.02483 * b
    inverse = 1.1239 + 1.1328 / (b - 3.4)
    quick = 0.9277 - 3.6224 / (b - 2.0)
    while True:
        u = uniform(s, k) - 0.5
        v = 1.0 - uniform(s, k)
        us = 0.5 - abs(u)
        if us <= 0.0:
            continue
        x = math.floor((2.0 * a / us + b) * u + mean + 0.43)
        if us >= 0.07 and v <= quick:
            return int(x)
        if x < 0.0 or (us < 0.013 and v > us):
            continue
        height = math.log(v * inverse / (a / (us * us) + b))
        if height <= x * math.log(mean) - mean - math.lgamma(x + 1.0):
            return int(x)


@leaf
def _binomial_low(s: Words, k: int, n: int, p: float) -> int:
    """Return a binomial number for 0 < p <= 1/2. Search below 10 expected, BTRS above."""
    odds = p / (1.0 - p)
    if n * p < FEW:
        term = math.exp(n * math.log1p(-p))
        left, x = uniform(s, k) - term, 0
        while left >= 0.0 and x < n:
            term *= odds * (n - x) / (x + 1.0)
            x += 1
            left -= term
        return x
    spread = math.sqrt(n * p * (1.0 - p))
    b = 1.15 + 2.53 * spread
    a = -0.0873 + 0.0248 * b + 0.01 * p
    centre = n * p + 0.5
    quick = 0.92 - 4.2 / b
    alpha = (2.83 + 5.1 / b) * spread
    middle = math.floor((n + 1.0) * p)
    top = math.lgamma(middle + 1.0) + math.lgamma(n - middle + 1.0)
    while True:
        u = uniform(s, k) - 0.5
        v = 1.0 - uniform(s, k)
        us = 0.5 - abs(u)
        if us <= 0.0:
            continue
        y = math.floor((2.0 * a / us + b) * u + centre)
        if us >= 0.07 and v <= quick:
            return int(y)
        if y < 0.0 or y > n:
            continue
        height = math.log(v * alpha / (a / (us * us) + b))
        rest = top - math.lgamma(y + 1.0) - math.lgamma(n - y + 1.0)
        if height <= rest + (y - middle) * math.log(odds):
            return int(y)


@leaf
def binomial(s: Words, k: int, n: int, p: float) -> int:
    """Return how many of `n` succeed with chance `p` each; p outside 0..1 counts as its end."""
    if n <= 0 or p <= 0.0:
        return 0
    if p >= 1.0:
        return n
    if p <= 0.5:
        return _binomial_low(s, k, n, p)
    return n - _binomial_low(s, k, n, 1.0 - p)


@leaf
def gamma(s: Words, k: int, shape: float) -> float:
    """Return a gamma number of scale 1; `shape` above 0 (Marsaglia & Tsang, with the boost)."""
    boost = 1.0
    if shape < 1.0:
        boost = (uniform(s, k) + _HALF_STEP) ** (1.0 / shape)
        shape += 1.0
    d = shape - 1.0 / 3.0
    c = 1.0 / math.sqrt(9.0 * d)
    while True:
        x = normal(s, k)
        v = (1.0 + c * x) ** 3
        if v <= 0.0:
            continue
        if math.log(uniform(s, k) + _HALF_STEP) < 0.5 * x * x + d - d * v + d * math.log(v):
            return boost * d * v


@leaf
def unequal(s: Words, k: int, cv: float) -> float:
    """Return a gamma number of mean 1 and coefficient of variation `cv`; 1 where that is 0."""
    if cv <= 0.0:
        return 1.0
    shape = 1.0 / (cv * cv)
    return gamma(s, k, shape) / shape


@leaf
def shuffle(s: Words, k: int, items: IntArray, count: int) -> None:
    """Put the first `count` items in a random order (Fisher & Yates)."""
    for i in range(count - 1, 0, -1):
        j = below(s, k, i + 1)
        items[i], items[j] = items[j], items[i]


@leaf
def pick(s: Words, k: int, sums: FloatArray, count: int) -> int:
    """Return an index 0..count-1 with chance by weight; `sums` holds the running sums."""
    total = sums[count - 1]
    if total <= 0.0:
        return below(s, k, count)
    u = uniform(s, k) * total
    low, high = 0, count - 1
    while low < high:
        middle = (low + high) // 2
        if sums[middle] > u:
            high = middle
        else:
            low = middle + 1
    return low
