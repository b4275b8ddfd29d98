"""Each sampler against its distribution, below and above one half, few and many."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy import stats
from scipy.special import ndtri

from rescue_planner.kernels import draws, streams
from rescue_planner.kernels.compiled import kernel

N = 60_000


def fresh(seed):
    s = np.zeros((streams.PURPOSES, 4), dtype=np.uint64)
    streams.open_year(s, np.uint64(seed), 0, 0, 0)
    return s


@kernel
def fill_binomial(s, n, p, out):
    for i in range(out.size):
        out[i] = draws.binomial(s, 0, n, p)


@kernel
def fill_poisson(s, mean, out):
    for i in range(out.size):
        out[i] = draws.poisson(s, 0, mean)


@kernel
def fill_gamma(s, shape, out):
    for i in range(out.size):
        out[i] = draws.gamma(s, 0, shape)


@kernel
def fill_normal(s, out):
    for i in range(out.size):
        out[i] = draws.normal(s, 0)


@kernel
def fill_pick(s, sums, out):
    for i in range(out.size):
        out[i] = draws.pick(s, 0, sums, sums.size)


def chi_square_p(seen, chance):
    """p value of counts against chances, classes joined until 10 are expected in each."""
    counts = np.bincount(seen, minlength=chance.size)[: chance.size].astype(float)
    assert counts.sum() == seen.size
    expected, met = [0.0], [0.0]
    for e, c in zip(chance * seen.size, counts, strict=True):
        if expected[-1] >= 10.0:
            expected.append(0.0)
            met.append(0.0)
        expected[-1] += e
        met[-1] += c
    e, m = np.array(expected), np.array(met)
    e *= seen.size / e.sum()
    return stats.chi2.sf(((m - e) ** 2 / e).sum(), max(1, e.size - 1))


@pytest.mark.parametrize(
    ("n", "p"),
    [(1, 0.3), (10, 0.2), (10, 0.8), (40, 0.5), (100, 0.3), (100, 0.7), (400, 0.04), (400, 0.97)],
)
def test_that_binomial_numbers_follow_their_distribution(n, p):
    out = np.empty(N, dtype=np.int64)
    fill_binomial(fresh(100 + n), n, p, out)
    assert chi_square_p(out, stats.binom.pmf(np.arange(n + 1), n, p)) > 1e-4


@pytest.mark.parametrize(("p", "n", "answer"), [(0.0, 9, 0), (1.0, 9, 9), (0.5, 0, 0)])
def test_that_certain_outcomes_of_a_binomial_are_certain(p, n, answer):
    out = np.empty(100, dtype=np.int64)
    fill_binomial(fresh(3), n, p, out)
    assert np.all(out == answer)


@pytest.mark.parametrize("mean", [0.05, 1.0, 2.4, 9.99, 10.0, 37.5, 400.0])
def test_that_poisson_numbers_follow_their_distribution(mean):
    out = np.empty(N, dtype=np.int64)
    fill_poisson(fresh(int(mean * 10)), mean, out)
    most = max(int(out.max()), int(stats.poisson.isf(1e-9, mean)))
    assert chi_square_p(out, stats.poisson.pmf(np.arange(most + 1), mean)) > 1e-4


@pytest.mark.parametrize("shape", [0.05, 0.4, 1.0, 3.7, 60.0])
def test_that_gamma_numbers_follow_their_distribution(shape):
    out = np.empty(20_000)
    fill_gamma(fresh(int(shape * 100)), shape, out)
    assert stats.kstest(out, stats.gamma(shape).cdf).pvalue > 1e-4


def test_that_normal_numbers_follow_their_distribution():
    out = np.empty(N)
    fill_normal(fresh(5), out)
    assert stats.kstest(out, stats.norm.cdf).pvalue > 1e-4


def test_that_the_normal_quantile_equals_that_of_a_library():
    u = np.concatenate([np.logspace(-300, -1, 400), np.linspace(0.1, 0.9, 201)])
    u = np.concatenate([u, 1.0 - np.logspace(-15, -1, 100)])
    ours = np.array([draws.normal_quantile(v) for v in u])
    assert_allclose(ours, ndtri(u), rtol=4e-14, atol=1e-15)


def test_that_a_choice_by_weight_follows_the_weights():
    weights = np.array([0.1, 0.0, 5.0, 1.3, 0.6])
    out = np.empty(N, dtype=np.int64)
    fill_pick(fresh(6), np.cumsum(weights), out)
    counts = np.bincount(out, minlength=5)
    assert counts[1] == 0
    keep = weights > 0
    expected = N * weights[keep] / weights.sum()
    assert ((counts[keep] - expected) ** 2 / expected).sum() < 21.1  # 3 df, p = 1e-4


def test_that_without_any_weight_all_are_chosen_alike():
    out = np.empty(9000, dtype=np.int64)
    fill_pick(fresh(7), np.zeros(3), out)
    assert np.all(np.abs(np.bincount(out) - 3000) < 5 * np.sqrt(2000))


def test_that_a_shuffle_reaches_every_order_alike():
    s, counts = fresh(8), {}
    for _ in range(6000):
        items = np.arange(3)
        draws.shuffle(s, 0, items, 3)
        counts[tuple(items)] = counts.get(tuple(items), 0) + 1
    assert len(counts) == 6
    assert sum((c - 1000) ** 2 / 1000 for c in counts.values()) < 25.7  # 5 df, p = 1e-4


def test_that_unequal_weights_have_the_mean_and_variation_asked_for():
    s = fresh(9)
    w = np.array([draws.unequal(s, 0, 0.7) for _ in range(20_000)])
    assert abs(w.mean() - 1.0) < 5 * 0.7 / np.sqrt(w.size)
    # The variance of a gamma variance estimate: (kurtosis - 1) v^2 / n, kurtosis 3 + 6 cv^2.
    assert abs(w.var() - 0.49) < 5 * 0.49 * np.sqrt((2 + 6 * 0.49) / w.size)
    assert draws.unequal(s, 0, 0.0) == 1.0
