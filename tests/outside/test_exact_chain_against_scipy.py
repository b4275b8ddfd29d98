"""The banded chain against dense matrix powers made with scipy.stats.binom.

A different route to each binomial term (scipy's incomplete-gamma code) and plain matrix products.
"""

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.stats import binom

from rescue_planner.theory import chain, flow, selection

SELECTED = [1.0, 0.98, 0.9]


def chances(n, fitness=SELECTED, m=0.04, donor=0.3, mutation=(1e-4, 1e-3)):
    """The order of a step: flow, selection, mutation."""
    x = flow.mixed(chain.frequencies(n), [donor], np.array([m]))
    return selection.after_mutation(selection.after_selection(x, fitness), *mutation)


def dense(x, n):
    return binom.pmf(np.arange(n + 1)[np.newaxis, :], n, np.asarray(x)[:, np.newaxis])


@pytest.mark.parametrize("n", [2, 3, 12, 40, 200, 333])
def test_that_rows_are_scipys_binomials(n):
    x = chances(n)
    assert_allclose(chain.transition_matrix(x, n), dense(x, n), rtol=0, atol=2e-15)


@pytest.mark.parametrize(("n", "to"), [(100, 20), (20, 101), (2, 400), (400, 2)])
def test_that_rows_are_scipys_binomials_when_the_size_changes(n, to):
    x = chances(n)
    assert_allclose(chain.transition_matrix(x, to), dense(x, to), rtol=0, atol=2e-15)


@pytest.mark.parametrize("n", [10, 40, 200])
def test_that_a_hundred_generations_are_the_matrix_power(n):
    x = chances(n)
    power = np.linalg.matrix_power(dense(x, n), 99)
    mass = chain.first_step(0.37, n)
    judge = mass @ power
    for _ in range(99):
        mass = chain.step(mass, x, n)
    assert np.abs(mass - judge).sum() <= 1e-12  # total variation; scipy's own error is 3e-15 a step
    assert abs(mass.sum() - 1.0) <= 1e-13


def test_that_changing_sizes_and_flows_are_a_product_of_rectangles():
    sizes, flows = [40, 12, 13, 60, 200, 31], [0.2, 0.0, 0.025, 0.1, 0.0, 1.0]
    mass = judge = binom.pmf(np.arange(25), 24, 0.6)
    for n, m in zip(sizes, flows, strict=True):
        x = chances(mass.size - 1, m=m)
        mass, judge = chain.step(mass, x, n), judge @ dense(x, n)
    assert np.abs(mass - judge).sum() <= 1e-13


@pytest.mark.parametrize("fitness", [[1, 1, 1], [1, 1, 0], [0.2, 1, 0.4], [1, 0.5, 1]])
def test_that_absorbing_ends_and_strong_selection_agree(fitness):
    n = 60
    x = chances(n, fitness=fitness, m=0.0, mutation=(0.0, 0.0))
    mass = judge = binom.pmf(np.arange(n + 1), n, 0.2)
    matrix = dense(x, n)
    for _ in range(200):
        mass, judge = chain.step(mass, x, n), judge @ matrix
    assert np.abs(mass - judge).sum() <= 1e-12


def test_that_two_thousand_gene_copies_agree():
    n = 2000
    x = chances(n)
    rows = np.arange(0, n + 1, 50)
    assert_allclose(chain.transition_matrix(x[rows], n), dense(x[rows], n), rtol=0, atol=1e-14)
    mass = np.zeros(n + 1)
    mass[rows] = 1.0 / rows.size
    judge = mass[rows] @ dense(x[rows], n)
    assert np.abs(chain.step(mass, x, n) - judge).sum() <= 1e-13


def test_that_the_first_step_is_one_binomial():
    for p in (0.0, 1e-9, 0.2, 0.5, 0.999, 1.0):
        mass = chain.first_step(p, 77)
        assert_allclose(mass, binom.pmf(np.arange(78), 77, p), rtol=0, atol=2e-15)
