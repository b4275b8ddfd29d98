"""Genetic load. Derived values, six figures; Morton, Crow & Muller 1956, from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import inbreeding, load

SIX = 1e-5  # the check values are printed to six figures
exact = settings(derandomize=True, deadline=None)
share = st.floats(0.0, 1.0)


@pytest.mark.parametrize(
    ("locus", "realised", "masked", "whole"),
    [
        ((0.02, 0.5, 0.1), 0.00216, 0.00784, 0.01),
        ((0.005, 1.0, 0.02), 0.000224, 0.004776, 0.005),
        ((0.1, 0.05, 0.25), 0.00275, 0.00225, 0.005),
        ((0.3, 0.2, 0.5), 0.06, 0.0, 0.06),
    ],
)
def test_that_a_locus_has_the_stated_load(locus, realised, masked, whole):
    """Derived; the last is additive: no inbreeding load."""
    found = load.population_load(*([x] for x in locus))
    assert_allclose(found, (realised, masked, whole), rtol=SIX, atol=1e-15)


def test_that_loads_add_over_loci():
    q, s, h = [0.02, 0.005, 0.1, 0.3], [0.5, 1, 0.05, 0.2], [0.1, 0.02, 0.25, 0.5]
    assert_allclose(load.population_load(q, s, h), (0.065134, 0.014866, 0.08), rtol=SIX)
    found = load.population_load(q[:3], s[:3], h[:3])
    assert_allclose(found, (0.005134, 0.014866, 0.02), rtol=SIX)


@pytest.mark.parametrize(
    ("loci", "q", "s", "h", "at_quarter", "at_one"),
    [(2000, 0.01, 0.1, 0.1, 0.672925, 0.204957), (160, 0.01, 1.0, 0.0, 0.67265, 0.203507)],
)
def test_that_the_product_over_loci_is_near_the_exponential(loci, q, s, h, at_quarter, at_one):
    """Derived: B = 1.584 both times; exp(-B F) is 0.673007 and 0.205153."""
    q, s, h = np.full(loci, q), np.full(loci, s), np.full(loci, h)
    relative = load.fitness(q, s, h, [0.25, 1.0]) / load.fitness(q, s, h)
    assert_allclose(relative, [at_quarter, at_one], rtol=SIX)
    b = load.population_load(q, s, h).masked
    assert_allclose(b, 1.584, rtol=1e-12)
    exponential = inbreeding.survival_factor([0.25, 1.0], 2 * b)
    assert_allclose(exponential, [0.673007, 0.205153], rtol=SIX)
    assert np.all(relative < exponential)


@exact
@given(q=share, s=share, h=st.floats(0.0, 0.5), f=share)
def test_that_fitness_is_the_mean_over_genotypes(q, s, h, f):
    """Independent: genotype frequencies under inbreeding written out."""
    aa = q**2 * (1 - f) + q * f
    het = 2 * q * (1 - q) * (1 - f)
    slow = aa * (1 - s) + het * (1 - h * s) + (1 - aa - het)
    assert_allclose(load.locus_fitness(q, s, h, f), slow, rtol=1e-12, atol=1e-12)


@exact
@given(q=share, s=share, h=st.floats(0.0, 0.5))
def test_that_realised_and_masked_load_make_up_the_whole(q, s, h):
    found = load.population_load([q], [s], [h])
    assert_allclose(found.realised + found.masked, found.whole, rtol=1e-12, atol=1e-15)
    lost = 1 - load.locus_fitness(q, s, h, np.array([0.0, 1.0]))
    assert_allclose(lost, [found.realised, found.whole], rtol=1e-9, atol=1e-13)


S_H = ([0.02, 0.1, 0.5, 1.0, 0.05, 0.01], [0.3, 0.2, 0.05, 0.02, 0.25, 0.45])


def test_that_an_animal_carries_the_stated_load():
    """Derived; formulas of Bertorelle et al. 2022, from memory."""
    copies = [2, 1, 1, 1, 0, 2]
    assert_allclose(load.animal_load(copies, *S_H), (0.095, 0.735, 0.83), rtol=1e-14)
    assert_allclose(load.animal_fitness(copies, *S_H), 0.908486, rtol=SIX)
    assert_allclose(np.exp(-load.animal_load(copies, *S_H).realised), 0.909373, rtol=SIX)


def test_that_the_mean_load_of_animals_is_the_populations():
    """Independent: every genotype of two loci, weighted by its frequency."""
    q, s, h = np.array([0.2, 0.6]), np.array([0.3, 0.1]), np.array([0.1, 0.4])
    parts = np.zeros(3)
    for one in range(3):
        for two in range(3):
            chance = [(1 - q) ** 2, 2 * q * (1 - q), q**2]
            weight = chance[one][0] * chance[two][1]
            parts += weight * np.array(load.animal_load([one, two], s, h))
    assert_allclose(parts, load.population_load(q, s, h), rtol=1e-13)


def test_that_a_fixed_allele_is_realised_load_only():
    found = load.population_load([1.0], [0.1], [0.1])
    assert_allclose(found, (0.1, 0.0, 0.1), atol=1e-16)


@pytest.mark.parametrize("copies", [3, -1, 0.5, np.nan])
def test_that_impossible_copies_are_refused(copies):
    with pytest.raises(ValueError, match="0, 1 or 2"):
        load.animal_load([copies], [0.1], [0.1])


@pytest.mark.parametrize(("ne", "kept"), [(25, 0.817073), (50, 0.904382), (100, 0.95111)])
def test_that_a_bottleneck_turns_masked_load_into_realised(ne, kept):
    """Derived: the share of B still masked after ten generations."""
    before = load.population_load([0.1, 0.02], [0.1, 0.8], [0.2, 0.02])
    after = load.load_after_bottleneck(before, ne, 10)
    assert_allclose(after.masked / before.masked, kept, rtol=SIX)
    f = inbreeding.inbreeding_after(ne, 10)
    assert_allclose(after.realised, before.realised + before.masked * f, rtol=1e-12)
    assert_allclose(after.whole, before.whole, rtol=0)


def test_that_lethals_are_counted_twice_the_lethal_load():
    q = np.array([0.01, 0.02, 0.005])
    masked = load.population_load(q, np.ones(3), np.zeros(3)).masked
    assert_allclose(load.lethals_per_animal(masked), np.sum(2 * q * (1 - q)), rtol=1e-14)


def test_that_the_split_of_the_load_adds_up_and_refuses_impossible_shares():
    lethal, mild = load.split_load(3.0, [0.2, 0.5, 0.8])
    assert_allclose(lethal, [0.6, 1.5, 2.4], rtol=1e-14)
    assert_allclose(lethal + mild, 3.0, rtol=1e-14)
    with pytest.raises(ValueError, match="between 0 and 1"):
        load.split_load(3.0, 1.2)


def test_that_a_sib_mating_lives_as_lethals_let_it():
    """Derived: exp(-B_L/4) is the exponential model at F = 1/4, exactly."""
    assert_allclose(load.sib_mating_survival([1.0, 1.5]), [0.778801, 0.687289], rtol=SIX)
    assert_allclose(load.sib_mating_survival_of([4, 8]), [0.772476, 0.596719], rtol=SIX)
    assert_allclose(
        load.sib_mating_survival(1.5), inbreeding.survival_factor(0.25, 3.0), rtol=1e-14
    )


def test_that_poisson_lethals_average_to_the_sib_mating_identity():
    """Independent: sum over Poisson(4 B_L) lethals in the pair of (15/16)^n."""
    mean, n = 4 * 1.5, np.arange(80)
    weights = np.exp(-mean + n * np.log(mean) - np.cumsum(np.log(np.maximum(n, 1))))
    assert_allclose(
        np.sum(weights * load.sib_mating_survival_of(n)), load.sib_mating_survival(1.5), rtol=1e-13
    )


def test_that_ten_percent_in_five_generations_at_a_hundred_needs_a_small_load():
    """Frankham, Bradshaw & Brook 2014 state the rule (confirmed); the bound on B is derived."""
    f = inbreeding.inbreeding_after(100, 5)
    assert_allclose(f, 0.0247512, rtol=SIX)
    assert_allclose(load.largest_load(0.1, f), 4.25678, rtol=SIX)


@pytest.mark.parametrize(("ne", "loss"), [(100, 0.138006), (50, 0.254768)])
def test_that_the_size_that_holds_a_loss_is_found_back(ne, loss):
    """Derived: B = 6 per haploid genome, five generations."""
    stated = 1 - inbreeding.survival_factor(inbreeding.inbreeding_after(ne, 5), 12.0)
    assert_allclose(stated, loss, rtol=SIX)
    assert_allclose(load.size_to_hold_loss(stated, 6.0, 5), ne, rtol=1e-9)


def test_that_any_size_holds_a_loss_above_full_inbreeding():
    assert load.size_to_hold_loss(0.9, 0.5, 5) == 0.5
