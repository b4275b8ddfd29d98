"""Streams: published answers, keys that keep apart, the same stream the same numbers."""

from __future__ import annotations

import numpy as np
import pytest

from rescue_planner.kernels import streams

MASK = 2**64 - 1


def fresh(seed=1, replicate=0, year=0, population=0):
    s = np.zeros((streams.PURPOSES, 4), dtype=np.uint64)
    streams.open_year(s, np.uint64(seed), replicate, year, population)
    return s


def words(s, k, count):
    return np.array([streams.word(s, k) for _ in range(count)], dtype=np.uint64)


# Known answers published with the Random123 library (kat_vectors), written down from memory; the
# third is made of the digits of pi. That the code meets all three says that memory was right.
@pytest.mark.parametrize(
    ("counter", "key", "answer"),
    [
        ([0] * 4, [0] * 2, [0x6627E8D5, 0xE169C58D, 0xBC57AC4C, 0x9B00DBD8]),
        (
            [0xFFFFFFFF] * 4,
            [0xFFFFFFFF] * 2,
            [0x408F276D, 0x41C83B0E, 0xA20BC7C6, 0x6D5451FD],
        ),
        (
            [0x243F6A88, 0x85A308D3, 0x13198A2E, 0x03707344],
            [0xA4093822, 0x299F31D0],
            [0xD16CFE09, 0x94FDCCEB, 0x5001E420, 0x24126EA1],
        ),
    ],
)
def test_that_the_key_schedule_gives_the_published_answers(counter, key, answer):
    given = [np.uint64(v) for v in [*counter, *key]]
    assert [int(v) for v in streams.philox(*given)] == answer


def test_that_the_runner_gives_the_published_answers():
    # First outputs of xoshiro256++ from the state 1, 2, 3, 4 (from memory).
    s = np.array([[1, 2, 3, 4]], dtype=np.uint64)
    assert [int(v) for v in words(s, 0, 6)] == [
        41943041,
        58720359,
        3588806011781223,
        3591011842654386,
        9228616714210784205,
        9973669472204895162,
    ]


def test_that_the_runner_equals_a_plain_one_with_whole_numbers_of_any_size():
    s = fresh(77, 3, 2)
    state = [int(v) for v in s[4]]

    def turn(x, n):
        return ((x << n) | (x >> (64 - n))) & MASK

    plain = []
    for _ in range(200):
        plain.append((turn((state[0] + state[3]) & MASK, 23) + state[0]) & MASK)
        t = (state[1] << 17) & MASK
        state[2] ^= state[0]
        state[3] ^= state[1]
        state[1] ^= state[2]
        state[0] ^= state[3]
        state[2] ^= t
        state[3] = turn(state[3], 45)
    assert [int(v) for v in words(s, 4, 200)] == plain


def test_that_one_key_gives_one_stream():
    assert np.array_equal(words(fresh(9, 8, 7, 1), 3, 50), words(fresh(9, 8, 7, 1), 3, 50))


def test_that_seed_replicate_year_purpose_and_population_each_make_another_stream():
    starts = {
        tuple(int(v) for v in fresh(seed, replicate, year, population)[k])
        for seed in (1, 2, 2**40)
        for replicate in (0, 1, 2**31)
        for year in (0, 1, 300)
        for population in (0, 1, 5)
        for k in range(streams.PURPOSES)
    }
    assert len(starts) == 3**4 * streams.PURPOSES


def test_that_neighbouring_streams_share_half_of_their_bits():
    first = np.array([words(fresh(5, replicate), 0, 1)[0] for replicate in range(2000)])
    flipped = np.bitwise_count(first[1:] ^ first[:-1])
    # 1,999 x 64 fair bits: the mean of 32 has a standard error of 4 / sqrt(1999) = 0.09.
    assert abs(flipped.mean() - 32.0) < 5 * 4.0 / np.sqrt(1999)


def test_that_uniform_numbers_fill_the_unit_interval_evenly():
    s = fresh(11)
    u = np.array([streams.uniform(s, 1) for _ in range(40_000)])
    assert u.min() >= 0.0
    assert u.max() < 1.0
    counts = np.histogram(u, bins=20, range=(0, 1))[0]
    assert ((counts - 2000.0) ** 2 / 2000.0).sum() < 50.8  # chi-square 19 df, p = 1e-4


@pytest.mark.parametrize("n", [1, 2, 7, 64, 1000])
def test_that_whole_numbers_below_n_are_even(n):
    s = fresh(12)
    bins = min(n, 10)
    x = np.array([streams.below(s, 2, n) for _ in range(20_000)])
    assert x.min() >= 0
    assert x.max() < n
    counts = np.histogram(x, bins=np.linspace(0, n, bins + 1))[0]
    expected = 20_000 * np.diff(np.ceil(np.linspace(0, n, bins + 1))) / n
    assert ((counts - expected) ** 2 / expected).sum() < 34.0  # 9 df, p = 1e-4
