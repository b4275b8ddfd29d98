"""Reasons for outbreeding depression. Derived values; forms from memory."""

import itertools

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import inbreeding
from rescue_planner.theory import incompatibilities as bad

SIX = 1e-5


@pytest.mark.parametrize(
    ("h0", "h1", "losses"),
    [
        (0.0, 0.5, (0.0, 0.0375, 0.025)),
        (0.25, 0.5, (0.05, 0.05, 0.0375)),
        (0.0, 0.0, (0.0, 0.0125, 0.0)),
    ],
)
def test_that_a_pair_costs_crosses_as_stated(h0, h1, losses):
    assert_allclose(bad.pair_loss(0.2, h0, h1), losses, atol=1e-15)


def test_that_linkage_shields_a_recessive_pair():
    assert_allclose(bad.pair_loss(0.2, 0.0, 0.5, recombination=0.1).f2, 0.0095, rtol=1e-12)


@pytest.mark.parametrize("r", [0.0, 0.1, 0.37, 0.5])
def test_that_a_pair_is_the_sum_over_two_locus_genotypes(r):
    """A comes from one parent (Ab), B from the other (aB); gametes written out."""
    s, share = 0.3, {(1, 1): 0.2, (2, 1): 0.6, (1, 2): 0.6, (2, 2): 1.0}
    f1 = {(1, 0): 0.5 * (1 - r), (0, 1): 0.5 * (1 - r), (1, 1): 0.5 * r, (0, 0): 0.5 * r}

    def loss(one, two):
        out = 0.0
        for (g, p), (k, q) in itertools.product(one.items(), two.items()):
            out += p * q * s * share.get((g[0] + k[0], g[1] + k[1]), 0.0)
        return out

    found = bad.pair_loss(s, 0.2, 0.6, 1.0, r)
    slow = (loss({(1, 0): 1.0}, {(0, 1): 1.0}), loss(f1, f1), loss(f1, {(1, 0): 1.0}))
    assert_allclose(found, slow, rtol=1e-13)


def test_that_pairs_multiply_and_snowball():
    loss = bad.pair_loss(0.2, 0.0, 0.5).f2
    assert_allclose(bad.log_fitness_of_pairs(loss, 10), -0.382212, rtol=SIX)
    assert_allclose(bad.expected_pairs([10, 50, 100], 1e-3), [0.045, 1.225, 4.95], rtol=1e-13)


def test_that_rearrangements_cost_heterozygotes():
    """Lande 1979, from memory: s = 0.3; F1 0.7 is all heterozygous."""
    assert_allclose(bad.rearrangement_fitness([0.5, 0.8, 1.0], 0.3), [0.85, 0.904, 1.0], rtol=1e-13)


def test_that_lost_adaptation_costs_hybrids_as_stated():
    local = bad.fitness_away_from_home([1.0, 0.5, 0.0, 0.75], 2.0, 1.0, 9.0)
    assert_allclose(local, [0.948683, 0.902415, 0.776716, 0.936899], rtol=SIX)
    segregating = bad.segregation_variance(2.0, [5, 20])
    assert_allclose(segregating, [0.1, 0.025], rtol=1e-14)
    f2 = bad.fitness_away_from_home(0.5, 2.0, 1.0, 9.0, segregating)
    assert_allclose(f2, [0.898382, 0.901402], rtol=SIX)


def test_that_segregation_variance_is_that_of_equal_fixed_loci():
    """Independent: n loci of effect a, Delta = 2 n a; F2 adds a^2/2 a locus over the F1."""
    n, a = 8, 0.3
    locus = np.array([-a, 0.0, a])
    f2 = np.sum([0.25, 0.5, 0.25] * locus**2)
    assert_allclose(bad.segregation_variance(2 * n * a, n), n * f2, rtol=1e-13)


@pytest.mark.parametrize(
    ("ne", "t", "made"),
    [
        (25, 10, 0.274391),
        (25, 50, 0.953745),
        (25, np.inf, 1.5),
        (100, 50, 1.33012),
        (1000, 50, 1.48177),
        (1000, 500, 13.2749),
    ],
)
def test_that_divergence_accumulates_as_stated(ne, t, made):
    """Frankham et al. 2011 in words; the explicit form from memory. S = 0.1 SD, h2 = 0.3."""
    assert_allclose(bad.divergence(0.1, 0.3, ne, t), made, rtol=SIX)


def test_that_divergence_is_the_sum_over_generations():
    slow = sum(0.1 * 0.3 * (1 - inbreeding.inbreeding_after(40, i)) for i in range(30))
    assert_allclose(bad.divergence(0.1, 0.3, 40, 30), slow, rtol=1e-12)
