"""The compiled chain against its plain twin, dense matrices and closed forms."""

from __future__ import annotations

import threading

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose
from scipy.stats import binom

from rescue_planner.kernels import exact_chain
from rescue_planner.projection.chain_path import (
    COLUMNS,
    ChainInputs,
    compiled,
    plain,
)

QUANTILES = np.array([0.05, 0.25, 0.5, 0.75, 0.95])


def carried(mass, x, k, tail=1e-14):
    out = np.empty(k + 1)
    work = np.empty((k + 4, 8))
    lost = exact_chain.carry(mass, x, mass.size - 1, k, work, tail, out)
    return out, lost


def inputs(copies, **changes):
    steps = len(copies)
    given = {
        "start": 0.8123,
        "fitness": (1.0, 0.98, 0.9),
        "mutation_to": 0.0,
        "mutation_from": 0.0,
        "m": tuple(np.linspace(0, 0.2, steps)),
        "incoming": tuple(np.linspace(0, 0.2, steps) * 0.1),
        "copies": tuple(copies),
    }
    return ChainInputs(**{**given, **changes})


@pytest.mark.parametrize("copies", [2, 3, 17, 40, 201])
def test_that_one_generation_is_the_dense_binomial_matrix(copies):
    """scipy.stats.binom row by row; the tail given up is below 1e-14 a row."""
    rng = np.random.default_rng(7)
    mass = rng.dirichlet(np.ones(copies + 1))
    x = np.sort(rng.uniform(0, 1, copies + 1))
    x[0], x[-1] = 0.0, 1.0
    for k in (2, copies, 3 * copies):
        dense = mass @ np.array([binom.pmf(np.arange(k + 1), k, p) for p in x])
        out, lost = carried(mass, x, k)
        assert np.abs(out - dense).sum() / 2 < 1e-13
        assert lost < 1e-14


@settings(derandomize=True, deadline=None, max_examples=60)
@given(
    copies=st.lists(st.integers(2, 60), min_size=1, max_size=6),
    start=st.floats(0, 1),
    fitness=st.tuples(*[st.floats(0.001, 5) | st.just(0.0)] * 3).filter(any),
    m=st.floats(0, 0.9),
    donor=st.floats(0, 1),
    mutation=st.floats(0, 0.5),
)
def test_that_compiled_and_plain_agree_for_any_inputs(copies, start, fitness, m, donor, mutation):
    """Two codes of one chain; 1e-12 as the design asks."""
    given_inputs = inputs(
        copies,
        start=start,
        fitness=fitness,
        m=(m,) * len(copies),
        incoming=(m * donor,) * len(copies),
        mutation_to=mutation,
        mutation_from=mutation / 2,
    )
    a, b = plain(given_inputs), compiled(given_inputs)
    smooth = [COLUMNS.index(name) for name in ("mean", "kept", "fixed")]
    assert_allclose(a[:, smooth], b[:, smooth], atol=1e-12)
    # the SD is a root, so near zero a difference of 1e-16 in the variance shows as 1e-8
    assert_allclose(a[:, 1] ** 2, b[:, 1] ** 2, atol=1e-12)


def test_that_quantiles_of_both_paths_are_the_same_states():
    given_inputs = inputs([32] * 40)
    quantiles = slice(2, 7)
    assert np.array_equal(plain(given_inputs)[:, quantiles], compiled(given_inputs)[:, quantiles])


def test_that_selection_that_throws_neighbours_apart_is_still_exact():
    """Fitness ratios of 1e6 put neighbouring states at opposite ends of the outcomes."""
    given_inputs = inputs([60] * 5, fitness=(1e6, 1.0, 1e-3))
    a, b = plain(given_inputs), compiled(given_inputs)
    assert np.isfinite(b).all()
    assert_allclose(a[:, [0, 7, 8]], b[:, [0, 7, 8]], atol=1e-12)


def test_that_mean_heterozygosity_falls_by_one_over_the_copies():
    """Wright 1931, neutral: E[2p(1-p)] falls by 1 - 1/2N each generation, whatever the sizes."""
    copies = [100, 20, 20, 50, 100]
    rows = compiled(
        inputs(copies, fitness=(1.0,) * 3, m=(0.0,) * 5, incoming=(0.0,) * 5, start=0.3)
    )
    h = 2 * (rows[:, 0] - rows[:, 0] ** 2 - rows[:, 1] ** 2)
    assert_allclose(h, 0.42 * np.cumprod([1, *(1 - 1 / np.array(copies))]), rtol=1e-12)


def test_that_a_large_population_keeps_all_mass_to_the_stated_tail():
    rows, mass = np.empty((51, 9)), np.zeros((2, 2001))
    m = np.linspace(0, 0.05, 50)
    lost = exact_chain.course(
        0.8,
        m,
        m * 0.1,
        np.full(50, 2000),
        np.array([1, 0.98, 0.9]),
        np.zeros(2),
        QUANTILES,
        1e-12,
        np.zeros(1, dtype=np.uint8),
        rows,
        mass,
    )
    assert 0 <= lost < 50 * 2001 * 1e-12 / 2001 * 2
    assert_allclose(mass[0].sum(), 1 - lost, atol=1e-12)


def test_that_a_stop_from_another_thread_is_obeyed():
    stop = np.zeros(1, dtype=np.uint8)
    rows, mass = np.empty((200_001, 9)), np.zeros((2, 401))
    flow = np.full(200_000, 0.01)
    copies = np.full(200_000, 400)

    def run():
        said.append(
            exact_chain.course(
                0.5,
                flow,
                flow / 2,
                copies,
                np.ones(3),
                np.zeros(2),
                QUANTILES,
                1e-12,
                stop,
                rows,
                mass,
            )
        )

    said: list[float] = []
    worker = threading.Thread(target=run)
    worker.start()
    stop[0] = 1
    worker.join(timeout=30)
    assert said == [-1.0]
