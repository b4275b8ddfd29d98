"""Effective size from families. Derived by enumeration; Wright 1938, Crow & Denniston 1988."""

from itertools import combinations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import families, size
from rescue_planner.theory.families import Families, SexFamilies

DIGITS = 1e-11  # the check values are printed to 12 digits


@pytest.mark.parametrize(
    ("young", "inbreeding", "variance"),
    [
        ([0, 0, 1, 1, 2, 3, 4, 5], 6.0, 6.0),
        ([2] * 8, 15.0, 15.0),
        ([0, 1, 1, 2, 3, 3, 4, 6], 95 / 14, None),
        ([0, 1, 5, 4], 45 / 16, 175 / 54),
        ([0, 1, 1, 2, 3, 3], 45 / 7, 275 / 52),
    ],
)
def test_that_families_give_both_sizes(young, inbreeding, variance):
    given = families.families(young)
    assert_allclose(families.inbreeding_size(given), inbreeding, rtol=1e-14)
    if variance is not None:
        assert_allclose(families.variance_size(given), variance, rtol=1e-14)


def test_that_the_variance_is_over_all_adults_and_divides_by_their_number():
    """Divisor N - 1 gives 5.526, the variance of breeders alone gives 7.1: both wrong."""
    young = [0, 0, 1, 1, 2, 3, 4, 5]
    right = families.families(young)
    assert_allclose((right.adults, right.mean, right.variance), (8, 2, 3))
    assert_allclose(size.from_family_variance(8, right.variance), 6.0)
    assert_allclose(size.from_family_variance(8, np.var(young, ddof=1)), 5.52631578947)
    breeders = families.families(young[2:])
    assert size.from_family_variance(8, breeders.variance) > 7.0
    assert families.variance_size(breeders) != pytest.approx(6.0, rel=0.05)
    assert_allclose(families.inbreeding_size(breeders), 6.0)  # sums of k (k-1) don't see zeros


def test_that_the_short_form_needs_two_recruits_a_parent():
    """(4N - 2) / (V + 2) gives 5.71 for a growing population: not valid."""
    given = families.families([0, 1, 1, 2, 3, 3, 4, 6])
    assert_allclose(size.from_family_variance(8, given.variance), 5.71428571429, rtol=DIGITS)
    assert families.inbreeding_size(given) > 6.7


@pytest.mark.parametrize("young", [(0, 2, 4), (1, 2, 3), (0, 1, 5, 4), (0, 1, 1, 2, 3, 3)])
@pytest.mark.parametrize("copies", [1, 2, 3])
def test_that_drift_over_every_arrangement_gives_the_variance_size(young, copies):
    """Second way: all ways to place 1 to 3 copies of an allele among the parents."""
    k, n = np.array(young), len(young)
    drift, p = [], copies / (2 * n)
    for places in combinations(range(2 * n), copies):
        x = np.bincount(np.array(places) // 2, minlength=n) / 2
        mean = np.sum(k * x) / k.sum()
        drift.append((mean - p) ** 2 + np.sum(k * x * (1 - x)) / k.sum() ** 2)
    ne = p * (1 - p) / (2 * np.mean(drift))
    assert_allclose(families.variance_size(families.families(young)), ne, rtol=1e-12)


@pytest.mark.parametrize(("young", "above"), [((2, 3, 4, 1, 5), True), ((1, 0, 2, 1, 1), False)])
def test_that_growth_separates_the_two_sizes(young, above):
    given = families.families(young)
    assert (families.variance_size(given) > families.inbreeding_size(given)) is np.bool_(above)


def test_that_a_random_draw_is_the_ideal_population():
    """Variance 2 (1 - 1/N) of the multinomial: Ne = N."""
    ideal = Families(np.array(20.0), np.array(2.0), np.array(2 * (1 - 1 / 20)))
    assert_allclose(families.inbreeding_size(ideal), 20.0, rtol=1e-14)
    assert_allclose(families.variance_size(ideal), 20.0, rtol=1e-14)


def sex(sons, daughters):
    s, d = np.array(sons), np.array(daughters)
    return SexFamilies(
        s.size, s.mean(), d.mean(), s.var(), d.var(), np.mean(s * d) - s.mean() * d.mean()
    )


FATHERS = sex([1, 0, 3], [2, 1, 3])
MOTHERS = sex([1, 2, 1, 0], [0, 3, 2, 1])


def test_that_two_sexes_meet_in_a_grandparent_as_enumerated():
    """Second way: every son and every daughter as father and mother of one young."""
    shared = 0.0
    for sons, daughters in (([1, 0, 3], [2, 1, 3]), ([1, 2, 1, 0], [0, 3, 2, 1])):
        of_son = [i for i, k in enumerate(sons) for _ in range(k)]
        of_daughter = [i for i, k in enumerate(daughters) for _ in range(k)]
        same = np.mean([a == b for a in of_son for b in of_daughter])
        shared += same / 4  # both copies come through this sex of grandparent
    assert_allclose(families.two_sexes_inbreeding_size(FATHERS, MOTHERS), 1 / shared, rtol=1e-13)


def test_that_two_sexes_drift_as_enumerated():
    """Second way: every arrangement of copies among the parents of each sex."""
    share = 0.0
    for sons, daughters in (([1, 0, 3], [2, 1, 3]), ([1, 2, 1, 0], [0, 3, 2, 1])):
        s, d = np.array(sons) / sum(sons), np.array(daughters) / sum(daughters)
        n, drift = s.size, []
        p = 3 / (2 * n)
        for places in combinations(range(2 * n), 3):
            x = np.bincount(np.array(places) // 2, minlength=n) / 2
            noise = np.sum((s / sum(sons) + d / sum(daughters)) / 4 * x * (1 - x))
            drift.append((np.sum((s + d) / 2 * x) - p) ** 2 + noise)
        share += 0.25 * 2 * np.mean(drift) / (p * (1 - p))
    assert_allclose(families.two_sexes_variance_size(FATHERS, MOTHERS), 1 / share, rtol=1e-12)


@pytest.mark.parametrize(("males", "females", "ne"), [(5, 20, 16), (1, 99, 3.96), (10, 10, 20)])
def test_that_poisson_families_at_constant_numbers_give_wrights_size(males, females, ne):
    """Wright 1931, confirmed: sons and daughters independent."""
    fathers = SexFamilies(males, 1.0, females / males, 1.0, females / males, 0.0)
    mothers = SexFamilies(females, males / females, 1.0, males / females, 1.0, 0.0)
    assert_allclose(families.two_sexes_inbreeding_size(fathers, mothers), ne, rtol=1e-14)
    large = [SexFamilies(1e6 * x[0], *x[1:]) for x in (fathers, mothers)]
    assert_allclose(families.two_sexes_variance_size(*large), 1e6 * ne, rtol=1e-5)


@pytest.mark.parametrize(
    ("numbers", "shares", "variance"),
    [
        ([40, 20, 16, 12], [0, 0.4, 0.4, 0.2], 6.85333333333),
        ([20, 20, 20], [0, 0.5, 0.5], 2.0),
        ([100, 20, 16, 12, 8], [0, 0.25, 0.3, 0.25, 0.2], 23.1666666667),
    ],
)
def test_that_dying_young_adds_to_the_variance(numbers, shares, variance):
    n, share = np.array(numbers, float), np.array(shares)
    found = families.lifetime_variance(n / n[0], 2 * n[0] * share / n)
    assert_allclose(found, variance, rtol=DIGITS)


def test_that_many_families_broadcast():
    given = families.families(np.array([[0, 2, 4], [1, 2, 3]]))
    assert families.variance_size(given).shape == (2,)
    assert_allclose(
        families.inbreeding_size(given)[1], families.inbreeding_size(families.families([1, 2, 3]))
    )
