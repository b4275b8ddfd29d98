"""Two sexes and single fates. Caswell & Weeks 1986 from memory; variances derived."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import two_sexes

exact = settings(derandomize=True, deadline=None)


@pytest.mark.parametrize(
    ("males", "females", "harem", "harmonic", "minimum"),
    [(5, 5, 1, 2.5, 5), (2, 8, 1, 1.6, 2), (2, 8, 4, 4, 8), (1, 10, 10, 5, 10)],
)
def test_that_births_follow_both_rules_as_stated(males, females, harem, harmonic, minimum):
    assert_allclose(two_sexes.births_harmonic(males, females, harem, 1.0), harmonic, rtol=1e-14)
    assert two_sexes.mated_females(males, females, harem) == minimum


def test_that_without_one_sex_there_are_no_births():
    assert_allclose(two_sexes.births_harmonic([0, 3, 0], [4, 0, 0], 2, 1.0), 0.0)
    assert_allclose(two_sexes.mated_females([0, 3], [4, 0], 2), 0.0)


number = st.floats(0.1, 200.0)


@exact
@given(males=number, females=number, harem=st.floats(1.0, 20.0))
def test_that_the_harmonic_form_is_half_to_all_of_the_minimum_rule(males, females, harem):
    """Limit: with one sex in plenty the other sets births; half at N_f = H N_m."""
    harmonic = two_sexes.births_harmonic(males, females, harem, 1.0)
    minimum = two_sexes.mated_females(males, females, harem)
    assert 0.5 * minimum <= harmonic * (1 + 1e-12)
    assert harmonic <= minimum * (1 + 1e-12)


def test_that_all_of_one_sex_is_as_likely_as_stated():
    found = two_sexes.chance_one_sex([2, 4, 6, 10])
    assert_allclose(found, [0.5, 0.125, 0.03125, 0.001953125], rtol=1e-14)
    assert_allclose(two_sexes.chance_one_sex(3, 0.7), 0.7**3 + 0.3**3, rtol=1e-14)


def moments(terms):
    """Return mean and variance of the number next year from one female, summed over outcomes."""
    number = np.arange(terms.size)
    mean = terms @ number
    return mean, terms @ (number - mean) ** 2


def poisson(mean, top=60):
    k = np.arange(top)
    return np.exp(-mean + k * np.log(mean) - np.cumsum(np.log(np.maximum(k, 1))))


def test_that_demographic_variance_depends_on_who_breeds():
    """Derived: 0.41 and 0.45 for s = 0.8, b = 0.25; summed over all outcomes here."""
    assert_allclose(two_sexes.variance_all_breed(0.8, 0.25), 0.41, rtol=1e-14)
    assert_allclose(two_sexes.variance_survivors_breed(0.8, 0.25), 0.45, rtol=1e-14)
    daughters = poisson(0.25)
    all_breed = np.convolve([0.2, 0.8], daughters)
    survivors = 0.2 * (np.arange(61) == 0)
    survivors[1:] += 0.8 * daughters
    assert_allclose(moments(all_breed), (1.05, 0.41), rtol=1e-12)
    assert_allclose(moments(survivors), (1.0, 0.45), rtol=1e-12)
