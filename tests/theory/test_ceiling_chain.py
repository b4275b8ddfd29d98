"""Exact chains under a ceiling. Derived; reproduced by simulation where the values came from."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import branching, ceiling_chain

SIX = 1e-5


@pytest.mark.parametrize(
    ("capacity", "start", "values", "mean"),
    [
        (10, 5, (0.164824, 0.351698, 0.56415), 122.816),
        (10, 10, (0.0511099, 0.240165, 0.488652), 141.696),
        (20, 10, (0.0253117, 0.0735986, 0.120176), 1020.58),
        (50, 10, (0.0252613, 0.0671709, 0.0800841), 8.3698e05),
    ],
)
def test_that_a_ceiling_ends_lines_as_stated(capacity, start, values, mean):
    matrix = ceiling_chain.one_sex_matrix(0.8, 0.25, capacity)
    assert_allclose(ceiling_chain.gone_by(matrix, start, 100)[[20, 50, 100]], values, rtol=SIX)
    assert_allclose(ceiling_chain.mean_time_to_extinction(matrix)[start - 1], mean, rtol=SIX)
    assert_allclose(matrix.sum(axis=1), 1.0, rtol=1e-12)


def test_that_shared_years_make_extinction_likelier():
    matrix = ceiling_chain.one_sex_matrix(0.8, 0.25, 20, survival_sd=0.15)
    found = ceiling_chain.gone_by(matrix, 10, 100)[[20, 50, 100]]
    assert_allclose(found, [0.0791374, 0.230109, 0.423889], rtol=SIX)
    assert_allclose(matrix.sum(axis=1), 1.0, rtol=1e-12)


def test_that_a_high_ceiling_is_a_free_branching_process():
    """Limit: ten years from three animals never reach sixty."""
    matrix = ceiling_chain.one_sex_matrix(0.8, 0.25, 60)
    free = branching.gone_by(0.8, 0.25, 10) ** 3
    assert_allclose(ceiling_chain.gone_by(matrix, 3, 10), free, rtol=1e-9)


def test_that_two_sexes_under_a_ceiling_fare_as_stated():
    """Pitfall: a sex is missing long before none is left (0.28 against 0.10 at year 10)."""
    found = ceiling_chain.two_sex_course(3, 3, 0.8, 0.5, 12, 50)
    stated = [
        (0.0136894, 0.137405, 6.9771),
        (0.0958603, 0.282901, 6.61533),
        (0.315165, 0.453245, 5.32601),
        (0.66609, 0.725074, 2.68725),
    ]
    assert_allclose(np.array(found)[:, [5, 10, 20, 50]].T, stated, rtol=SIX)
    few = ceiling_chain.two_sex_course(1, 5, 0.8, 0.5, 12, 50)
    assert_allclose(few.gone[[10, 20, 50]], [0.281993, 0.646188, 0.860291], rtol=SIX)


def test_that_one_year_of_two_sexes_is_simulated_alike():
    """Independent: animals drawn one by one, four standard errors."""
    rng = np.random.default_rng(11)
    runs, f0, m0, s, young, top = 200_000, 2, 3, 0.8, 0.9, 8
    f, m = rng.binomial(f0, s, runs), rng.binomial(m0, s, runs)
    born = np.minimum(rng.poisson(young * f0, runs), top - f - m)
    girls = rng.binomial(born, 0.5)
    f, m = f + girls, m + born - girls
    found = ceiling_chain.two_sex_course(f0, m0, s, young, top, 1)
    number = f + m
    assert abs(found.mean[1] - number.mean()) < 4 * number.std() / np.sqrt(runs)
    missing = np.mean((f == 0) | (m == 0))
    p = found.sex_missing[1]
    assert abs(p - missing) < 4 * np.sqrt(p * (1 - p) / runs)


def test_that_without_a_male_nothing_is_born():
    found = ceiling_chain.two_sex_course(3, 0, 0.8, 5.0, 6, 4)
    assert_allclose(found.mean, 3 * 0.8 ** np.arange(5.0), rtol=1e-12)
    assert_allclose(found.sex_missing, 1.0, rtol=1e-12)


def test_that_terms_are_whole_distributions():
    assert_allclose(ceiling_chain.binomial_terms(5, 0.3) @ np.arange(6), 1.5, rtol=1e-13)
    assert_allclose(ceiling_chain.binomial_terms(4, 1.0), [0, 0, 0, 0, 1], atol=1e-15)
    cut = ceiling_chain.poisson_terms_up_to(2.0, 3)
    stated = np.exp(-2) * np.array([1, 2, 2])
    assert_allclose(cut, [*stated, 1 - stated.sum()], rtol=1e-13)
    assert_allclose(ceiling_chain.poisson_terms_up_to(0.0, 2), [1, 0, 0], atol=1e-15)


def test_that_more_animals_than_places_are_refused():
    with pytest.raises(ValueError, match="more animals"):
        ceiling_chain.two_sex_course(4, 4, 0.8, 0.5, 6, 3)
