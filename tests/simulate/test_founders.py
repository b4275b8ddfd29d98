"""Founders: marker diversities within and between, kinship sets, ages."""

from __future__ import annotations

import numpy as np
import pytest
from lives import life
from numpy.testing import assert_allclose

from rescue_planner.simulate import founders
from rescue_planner.theory.life_table import female_matrix, stable_ages


def drawn(model, count, seed):
    from scipy.special import ndtr

    z = np.random.default_rng(seed).standard_normal((count, model.mixing.shape[0]))
    return ndtr(z @ model.mixing.T)


@pytest.mark.parametrize(
    "diversity",
    [
        [[0.42]],
        [[0.8]],
        [[0.42, 0.65], [0.65, 0.66]],
        [[0.7, 0.85, 0.9], [0.85, 0.8, 0.88], [0.9, 0.88, 0.75]],
        [[0.0, 0.3], [0.3, 0.2]],
        [[0.05, 0.6], [0.6, 0.1]],
    ],
)
def test_that_marker_frequencies_hold_every_diversity_times_one_constant(diversity):
    h = np.array(diversity)
    model = founders.marker_model(h)
    assert model.moved == 0.0
    assert model.scale * h.max() <= 0.45 + 1e-12
    p = drawn(model, 200_000, 3)
    for i in range(h.shape[0]):
        for j in range(h.shape[0]):
            differ = p[:, i] * (1 - p[:, j]) + p[:, j] * (1 - p[:, i])
            se = differ.std() / np.sqrt(differ.size)
            assert abs(differ.mean() - model.scale * h[i, j]) < 5 * se + 1e-6


def test_that_an_impossible_set_of_diversities_is_said_to_be_moved():
    # Less between than within: two populations nearer to each other than to themselves.
    model = founders.marker_model(np.array([[0.4, 0.1], [0.1, 0.4]]))
    assert model.moved > 0.05


def test_that_kinship_is_on_the_reference_scale_and_kept_where_possible():
    h = np.array([[0.42, 0.65], [0.65, 0.66]])
    near, own = founders.founder_kinship(h, 0.68, (0.2,))
    assert near.moved == 0.0
    assert_allclose(near.matrix[0, 0], 1 - 0.42 / 0.68, rtol=1e-15)
    assert_allclose(near.matrix[1, 1], 0.2, rtol=1e-15)
    assert_allclose(own, 1 - np.diagonal(h) / 0.68, rtol=1e-15)


def test_that_an_impossible_kinship_becomes_the_nearest_possible_one():
    near, _ = founders.founder_kinship(np.array([[0.7, 0.3], [0.3, 0.6]]), 0.68, ())
    assert near.moved > 0.0
    assert np.linalg.eigvalsh(near.matrix).min() > -1e-12


def test_that_stable_ages_are_those_of_the_age_matrix():
    one = life(
        first_breeding_age=(2, 3),
        last_age=8,
        survival=(0.5, 0.7, 0.9),
        mean_young=2.0,
        share_of_females_breeding=0.7,
    )
    matrix = female_matrix(0.7 * 2.0 * 0.5, 0.5, 0.7, 0.9, 2, 8)
    ages = founders.stable_ages(one)
    assert_allclose(ages[0] / ages[0].sum(), stable_ages(matrix), rtol=1e-9)
    ratio = ages[0, 0] / ages[0, 1:].sum()
    assert founders.subadults(one, 30, 0, ages) == int(30 * ratio + 0.5)
