"""Random streams keyed by (seed, replicate, year, purpose, population).

Philox4x32-10 (Salmon et al. 2011) is the key schedule: a keyed bijection of its counter, so two
streams never start from one state. xoshiro256++ (Blackman & Vigna 2021) is the runner. Each stream
belongs to one purpose in one year of one replicate: plans share their chance, and an edit in year
20 leaves the years before it as they were.

A set of streams is a (purposes, 4) array of uint64, one state a row. All constants are uint64: a
plain integer would turn 64-bit words into floating-point numbers.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rescue_planner.kernels.inner import leaf

Words = NDArray[np.uint64]

FOUNDERS, SURVEY, WEATHER, DIE_OFFS, RELEASE = 0, 1, 2, 3, 4
FLOW, BREEDING, YOUNG, GAMETES, DEATH, CROWDING = 5, 6, 7, 8, 9, 10
FIRST_YEAR = 11
PURPOSES = 12
"""What a stream is for: the rows of a set of streams."""

_LOW = np.uint64(0xFFFFFFFF)
_HALF = np.uint64(32)
_MULTIPLY_0 = np.uint64(0xD2511F53)
_MULTIPLY_1 = np.uint64(0xCD9E8D57)
_WEYL_0 = np.uint64(0x9E3779B9)
_WEYL_1 = np.uint64(0xBB67AE85)
_PURPOSE_BITS = np.uint64(8)
_SHIFT_17, _TURN_23, _TURN_45 = np.uint64(17), np.uint64(23), np.uint64(45)
_BACK_41, _BACK_19 = np.uint64(41), np.uint64(19)
_SHIFT_11 = np.uint64(11)
_UNIT = 2.0**-53


@leaf
def philox(
    c0: np.uint64, c1: np.uint64, c2: np.uint64, c3: np.uint64, k0: np.uint64, k1: np.uint64
) -> tuple[np.uint64, np.uint64, np.uint64, np.uint64]:
    """Return the block of Philox4x32-10 at a counter under a key, 32 bits in each word."""
    for _ in range(10):
        p0 = _MULTIPLY_0 * c0
        p1 = _MULTIPLY_1 * c2
        c0, c1, c2, c3 = (
            (p1 >> _HALF) ^ c1 ^ k0,
            p1 & _LOW,
            (p0 >> _HALF) ^ c3 ^ k1,
            p0 & _LOW,
        )
        k0 = (k0 + _WEYL_0) & _LOW
        k1 = (k1 + _WEYL_1) & _LOW
    return c0, c1, c2, c3


@leaf
def open_stream(
    s: Words, k: int, seed: np.uint64, replicate: int, year: int, population: int
) -> None:
    """Set row `k` of the streams to the start of its stream.

    Parameters
    ----------
    s : (purposes, 4) array
        Filled in row k, the purpose.
    seed : uint64
        The key.
    replicate, year, population : int
        Below 2^32, 2^24 and 2^32.
    """
    c0 = np.uint64(replicate) & _LOW
    c1 = ((np.uint64(year) << _PURPOSE_BITS) | np.uint64(k)) & _LOW
    c3 = np.uint64(population) & _LOW
    k0, k1 = seed & _LOW, seed >> _HALF
    for block in range(2):
        a, b, c, d = philox(c0, c1, np.uint64(block), c3, k0, k1)
        s[k, 2 * block] = a | (b << _HALF)
        s[k, 2 * block + 1] = c | (d << _HALF)


@leaf
def open_year(s: Words, seed: np.uint64, replicate: int, year: int, population: int) -> None:
    """Open the streams of all purposes for one year; arguments as in `open_stream`."""
    for k in range(s.shape[0]):
        open_stream(s, k, seed, replicate, year, population)


@leaf
def word(s: Words, k: int) -> np.uint64:
    """Return the next 64 random bits of stream `k` (xoshiro256++)."""
    s0, s1, s2, s3 = s[k, 0], s[k, 1], s[k, 2], s[k, 3]
    both = s0 + s3
    result: np.uint64 = ((both << _TURN_23) | (both >> _BACK_41)) + s0
    t = s1 << _SHIFT_17
    s2 ^= s0
    s3 ^= s1
    s1 ^= s2
    s0 ^= s3
    s2 ^= t
    s3 = (s3 << _TURN_45) | (s3 >> _BACK_19)
    s[k, 0], s[k, 1], s[k, 2], s[k, 3] = s0, s1, s2, s3
    return result


@leaf
def uniform(s: Words, k: int) -> float:
    """Return a number in [0, 1): a multiple of 2^-53."""
    return np.float64(word(s, k) >> _SHIFT_11) * _UNIT


@leaf
def below(s: Words, k: int, n: int) -> int:
    """Return a whole number in 0..n-1, each with the same chance; n from 1 to below 2^32.

    The high half of a 32-bit number times n, redrawn where it would favour some (Lemire 2019).
    """
    m = np.uint64(n)
    least = (np.uint64(0x100000000) - m) % m
    while True:
        product = (word(s, k) >> _HALF) * m
        if (product & _LOW) >= least:
            return int(np.int64(product >> _HALF))
