"""Purging. Recursion: Garcia-Dorado 2012, Ballou 1997, confirmed; oracles and limit derived."""

import itertools

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import inbreeding, purging

SIX = 1e-5


@pytest.mark.parametrize(
    ("ne", "d", "values", "limit"),
    [
        (25, 0.5, (0.0819305, 0.0982861, 0.0492496, 0.0119168), 0.0),
        (25, 0.1, (0.0931274, 0.16187, 0.215235, 0.1357), 0.0740741),
        (50, 0.25, (0.0471044, 0.0815266, 0.100729, 0.0440912), 0.00990099),
    ],
)
def test_that_purged_inbreeding_follows_its_recursion(ne, d, values, limit):
    found = purging.purged_inbreeding(ne, d, 4000)
    assert_allclose(found.purged[[5, 10, 20, 50]], values, rtol=SIX)
    assert_allclose(purging.purged_limit(ne, d), limit, rtol=SIX, atol=1e-15)
    # for a recessive lethal g falls like 1/t^2 or faster; 4000 generations leave no more than this
    assert_allclose(found.purged[-1], limit, atol=1e-7)
    assert found.holds


def test_that_without_selection_purged_inbreeding_is_inbreeding():
    found = purging.purged_inbreeding(25, 0.0, 50)
    stated = [0.0960792, 0.182927, 0.332392, 0.63583]
    assert_allclose(found.inbreeding[[5, 10, 20, 50]], stated, rtol=SIX)
    assert_allclose(found.purged, found.inbreeding, rtol=1e-12, atol=1e-15)
    assert_allclose(found.inbreeding, inbreeding.inbreeding_after(25, np.arange(51)), atol=1e-15)
    assert purging.purged_limit(25, 0.0) == 1.0


def test_that_purging_is_not_credited_below_its_condition():
    """Pitfall: N d below 1; then the load behaves as if neutral."""
    found = purging.purged_inbreeding([25, 25], [0.03, 0.1], 20)
    assert list(found.holds) == [False, True]
    assert_allclose(found.usable[0], found.inbreeding[0], rtol=0)
    assert_allclose(found.usable[1], found.purged[1], rtol=0)
    assert found.purged[0, -1] < found.usable[0, -1]


@pytest.mark.parametrize("d", [-0.1, 0.6])
def test_that_an_impossible_purging_coefficient_is_refused(d):
    with pytest.raises(ValueError, match=r"between 0 and 0\.5"):
        purging.purged_inbreeding(25, d, 5)


def test_that_the_coefficient_is_half_for_a_recessive_lethal_and_nothing_for_an_additive_allele():
    assert_allclose(purging.purging_coefficient([1.0, 0.2, 0.3], [0.0, 0.0, 0.5]), [0.5, 0.1, 0.0])


ORACLE = [
    (25, 1.0, (0.03845, 0.06874, 0.05878, 0.02182, 0.00083)),
    (50, 1.0, (0.01961, 0.04087, 0.04761, 0.02745, 0.00277)),
    (25, 0.2, (0.03937, 0.08969, 0.14005, 0.15172, 0.06196)),
    (25, 0.02, (0.03958, 0.09542, 0.17793, 0.30552, 0.50425)),
]


@pytest.mark.parametrize(("ne", "s", "exact"), ORACLE)
def test_that_the_exact_chain_expresses_the_stated_load(ne, s, exact):
    found = purging.expressed_load_exact(ne, s, 0.0, 50)
    assert_allclose(found[[2, 5, 10, 20, 50]], exact, atol=5.1e-6)  # five decimals printed


@pytest.mark.parametrize(
    ("ne", "s", "quick"),
    [
        (25, 1.0, (0.03881, 0.08193, 0.09829, 0.04925, 0.01192)),
        (50, 1.0, (0.01970, 0.04525, 0.06939, 0.05804, 0.01617)),
        (25, 0.2, (0.03944, 0.09313, 0.16187, 0.21523, 0.13570)),
        (25, 0.02, (0.03958, 0.09578, 0.18071, 0.31798, 0.51968)),
    ],
)
def test_that_the_recursion_is_pessimistic_beside_the_chain(ne, s, quick):
    """Derived: the closed recursion expects more expressed load, most so for strong alleles."""
    found = purging.purged_inbreeding(ne, purging.purging_coefficient(s, 0.0), 50).purged
    assert_allclose(found[[2, 5, 10, 20, 50]], quick, atol=5.1e-6)
    assert np.all(found[2:] > purging.expressed_load_exact(ne, s, 0.0, 50)[2:])


def test_that_a_neutral_allele_expresses_its_inbreeding():
    """Invariant of the chain: 2N E[x^2] = F_t without selection."""
    found = purging.expressed_load_exact(10, 0.0, 0.0, 30)
    assert_allclose(found, inbreeding.inbreeding_after(10, np.arange(31)), rtol=1e-11, atol=1e-15)


def test_that_a_line_of_sibs_purges_a_lethal_as_stated():
    stated = [0.0, 0.0625, 0.0590278, 0.048804, 0.039534, 0.031915]
    assert_allclose(purging.sib_line_deaths([1, 1, 0], 5), stated, rtol=SIX, atol=1e-15)


def test_that_a_line_without_deaths_shows_quarter_of_its_inbreeding():
    """F of full-sib mating 0, 1/4, 3/8, 1/2, 19/32, 43/64 (Falconer & Mackay, from memory)."""
    f = np.array([0.0, 0.25, 0.375, 0.5, 0.59375, 0.671875])
    tiny = 1e-7  # a viability loss so small that it purges nothing
    found = purging.sib_line_deaths([1, 1, 1 - tiny], 5) / tiny
    assert_allclose(found, f / 4, rtol=1e-6, atol=1e-9)


def test_that_a_line_of_sibs_is_the_sum_over_its_histories():
    """Independent: enumerate two generations of surviving pairs."""

    def young(pair):
        chance = np.zeros(3)
        for a, b in itertools.product((0, 1), repeat=2):
            p = (pair[0] / 2 if a else 1 - pair[0] / 2) * (pair[1] / 2 if b else 1 - pair[1] / 2)
            chance[a + b] += p
        return chance

    def deaths(pair, depth):
        zygotes = young(pair)
        if depth == 0:
            return zygotes[2]
        alive = zygotes[:2] / zygotes[:2].sum()
        return sum(
            alive[i] * alive[j] * deaths((i, j), depth - 1) for i in range(2) for j in range(2)
        )

    slow = [deaths((0, 1), g) for g in range(5)]
    assert_allclose(purging.sib_line_deaths([1, 1, 0], 4), slow, rtol=1e-13, atol=1e-16)


def test_that_ancestral_inbreeding_rises_along_a_line_of_sibs():
    """Ballou 1997, recursion confirmed; generations 1 to 5."""
    f = [0.25, 0.375, 0.5, 0.59375, 0.671875]
    ancestral = [0.0]
    for own in f[:-1]:
        ancestral.append(
            float(purging.ancestral_inbreeding(ancestral[-1], own, ancestral[-1], own))
        )
    assert_allclose(ancestral, [0, 0.25, 0.53125, 0.765625, 0.904785], rtol=SIX)


def test_that_parents_count_equally_in_ancestral_inbreeding():
    one = purging.ancestral_inbreeding(0.2, 0.1, 0.0, 0.3)
    assert_allclose(one, purging.ancestral_inbreeding(0.0, 0.3, 0.2, 0.1), rtol=1e-15)
    assert_allclose(one, 0.5 * (0.2 + 0.8 * 0.1 + 0.3), rtol=1e-15)


def test_that_ancestry_eases_the_cost_of_inbreeding():
    assert_allclose(purging.log_survival(0.25, 0.4, 3.0, 2.0), 0.25 * (0.8 - 3.0), rtol=1e-15)
    assert purging.log_survival(0.25, 0.0, 3.0, 2.0) == -0.75
