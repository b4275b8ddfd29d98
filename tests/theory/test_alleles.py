"""Catching, keeping and counting alleles. Derived by enumeration; sources from memory."""

from itertools import combinations
from math import comb

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import alleles

DIGITS = 1e-11  # the check values are printed to 12 digits
exact = settings(derandomize=True, deadline=None)
SEVEN = [0.5, 0.2, 0.15, 0.08, 0.04, 0.02, 0.01]


@pytest.mark.parametrize(
    ("p", "stated"),
    [
        (0.01, [0.0199, 0.0956179249912, 0.182093062403, 0.33102824143, 0.452843357609]),
        (0.05, [0.0975, 0.401263060762, 0.641514077591, 0.871487843435, 0.953930201013]),
        (0.1, [0.19, 0.6513215599, 0.878423345409, 0.985219117059, 0.9982029897]),
        (0.2, [0.36, 0.8926258176, 0.988470784954, 0.9998670772, 0.999998467504]),
    ],
)
def test_that_founders_bring_two_copies_each(p, stated):
    """Marshall & Brown 1975; the exponent is 2n."""
    assert_allclose(alleles.chance_caught(p, [1, 5, 10, 20, 30]), stated, rtol=DIGITS)


def test_that_inbred_founders_bring_fewer():
    found = alleles.chance_caught(0.1, 5, [0.25, 1.0])
    assert_allclose(found, [0.600127801085, 0.40951], rtol=DIGITS)


def test_that_chances_at_their_ends_are_exact():
    assert alleles.chance_caught(0.0, 5) == 0.0
    assert alleles.chance_caught(1.0, 5) == 1.0
    assert alleles.chance_caught(0.3, 0) == 0.0
    assert alleles.chance_caught(1.0, 0) == 0.0


@pytest.mark.parametrize(
    ("p", "sure", "surer"), [(0.01, 150, 230), (0.05, 30, 45), (0.1, 15, 22), (0.2, 7, 11)]
)
def test_that_so_many_founders_are_needed(p, sure, surer):
    assert list(np.ceil(alleles.founders_needed(p, [0.95, 0.99]))) == [sure, surer]


def test_that_the_number_needed_is_the_chances_inverse():
    exact_number = alleles.founders_needed(0.05, [0.95, 0.99])
    assert_allclose(exact_number, [29.2019874072, 44.8905674804], rtol=DIGITS)
    assert_allclose(alleles.chance_caught(0.05, exact_number), [0.95, 0.99], rtol=1e-13)


@pytest.mark.parametrize(
    ("copies", "founders", "chance"),
    [(3, 5, 0.427235534775), (6, 5, 0.682591394271), (3, 10, 0.711279953244)],
)
def test_that_a_small_donor_gives_more(copies, founders, chance):
    assert_allclose(alleles.chance_caught_from(30, copies, founders), chance, rtol=DIGITS)
    assert chance > alleles.chance_caught(copies / 60, founders)


def test_that_impossible_misses_are_exactly_nought():
    assert alleles.chance_missed(10, 3, 8) == 0.0
    assert alleles.chance_missed(10, 10, 1) == 0.0
    assert alleles.chance_missed(10, 0, 10) == 1.0
    with pytest.raises(ValueError, match="more are drawn"):
        alleles.chance_missed(10, 3, 11)


@exact
@given(w=st.integers(1, 2000), k=st.integers(0, 2000), d=st.integers(0, 2000))
def test_that_misses_are_ratios_of_whole_binomials(w, k, d):
    """Second way: whole numbers of any length. Beyond 170! doubles overflow."""
    k, d = min(k, w), min(d, w)
    assert_allclose(
        alleles.chance_missed(w, k, d), float(comb(w - k, d) / comb(w, d)), rtol=1e-10, atol=1e-300
    )


def test_that_seven_alleles_shrink_faster_than_diversity():
    found = alleles.alleles_caught(SEVEN, [2, 5, 10, 20])
    stated = [2.55719006, 3.87409887865, 4.8334996278, 5.6527212894]
    assert_allclose(found, stated, rtol=DIGITS)
    kept = 1 - 1 / (2 * np.array([2, 5, 10, 20]))
    assert np.all(found / 7 < kept)


@pytest.mark.parametrize(
    ("p", "stated"),
    [
        (0.05, [0.401263060762, 0.39659531205, 0.31290414428, 0.235494840672, 0.34848195319]),
        (0.1, [0.6513215599, 0.645569357937, 0.535706865475, 0.421857458296, 0.584005418813]),
        (0.3, [0.9717524751, 0.969931885048, 0.921115340392, 0.834398305538, 0.946099903678]),
    ],
)
def test_that_alleles_go_on_being_lost_after_the_founders(p, stated):
    paths = [], [20], [20] * 5, [20] * 10, [50] * 10
    found = [alleles.chance_kept(p, 5, path) for path in paths]
    assert_allclose(found, stated, rtol=DIGITS)


def test_that_both_alleles_and_all_seven_are_kept_so():
    assert_allclose(alleles.chance_both_kept(0.3, 5, [20] * 10), 0.830111423373, rtol=DIGITS)
    assert_allclose(alleles.chance_both_kept(0.3, 5, []), alleles.chance_both_caught(0.3, 5))
    found = sum(alleles.chance_kept(p, 5, [20] * 5) for p in SEVEN)
    assert_allclose(found, 3.4063768277, rtol=1e-10)


def test_that_one_copy_dies_out_as_fisher_printed():
    """Fisher 1930, from memory (0.3679 confirmed): four decimals; twelve digits derived."""
    stated = {
        1: 0.367879441171,
        2: 0.531463605387,
        3: 0.625917694717,
        5: 0.731923184324,
        7: 0.790451503351,
        15: 0.887349109572,
        31: 0.941127612009,
        63: 0.969786211103,
        127: 0.98466509472,
    }
    printed = {1: 0.3679, 2: 0.5315, 3: 0.6259, 7: 0.7905, 15: 0.8873, 31: 0.9411, 63: 0.9698}
    for t, value in stated.items():
        assert_allclose(alleles.loss_of_one_copy(1.0, t), value, rtol=DIGITS)
    for t, value in printed.items():
        assert round(float(alleles.loss_of_one_copy(1.0, t)), 4) == value


def test_that_an_advantage_saves_a_line_sometimes():
    ends = alleles.ultimate_loss_of_one_copy([0.9, 1.0, 1.5])
    assert_allclose(ends, [1.0, 1.0, 0.417188356134], rtol=DIGITS)
    assert_allclose(
        alleles.loss_of_one_copy([1.2, 1.5], 400), alleles.ultimate_loss_of_one_copy([1.2, 1.5])
    )
    assert_allclose(1 - alleles.ultimate_loss_of_one_copy(1.001), 0.002, rtol=0.01)  # Haldane: 2s
    # one copy among ten animals, one generation
    assert_allclose((1 - 1 / 20) ** 20, 0.358485922409, rtol=DIGITS)
    assert_allclose(1 - alleles.chance_kept(1 / 20, 10, []), 0.358485922409, rtol=DIGITS)


def test_that_counts_are_rarefied_to_the_same_copies():
    counts = [7, 2, 1]
    found = [alleles.rarefied_count(counts, g) for g in (1, 2, 4, 6, 10)]
    assert_allclose(found, [1, 68 / 45, 31 / 15, 37 / 15, 3], rtol=1e-13)
    unbiased = (1 - (0.49 + 0.04 + 0.01)) * 10 / 9
    assert_allclose(found[1], 1 + unbiased, rtol=1e-13)


@pytest.mark.parametrize(
    ("g", "stated"),
    [(2, [95 / 126, 129 / 140]), (4, [781 / 1050, 191 / 175]), (8, [44 / 45, 6 / 5])],
)
def test_that_private_alleles_are_rarefied_in_all_populations(g, stated):
    assert_allclose(alleles.rarefied_private([[7, 2, 1, 0], [3, 0, 4, 1]], g), stated, rtol=1e-12)


@pytest.mark.parametrize("g", [1, 2, 3, 5])
def test_that_every_subset_counted_gives_the_rarefied_number(g):
    """Second way: all subsets of g copies."""
    one, two = [0, 0, 0, 1, 1, 2], [0, 0, 2, 2, 3]
    counts = [np.bincount(x, minlength=4) for x in (one, two)]
    sets = [[set(c) for c in combinations(x, g)] for x in (one, two)]
    assert_allclose(alleles.rarefied_count(counts[0], g), np.mean([len(s) for s in sets[0]]))
    private = np.mean([len(a - b) for a in sets[0] for b in sets[1]])
    assert_allclose(alleles.rarefied_private(counts, g)[0], private)


def test_that_more_copies_than_the_smallest_sample_are_refused():
    for way in (alleles.rarefied_count, alleles.rarefied_private):
        with pytest.raises(ValueError, match="fewer than 9 gene copies"):
            way([[7, 2, 1, 0], [3, 0, 4, 1]], 9)


def test_that_loci_broadcast():
    counts = np.array([[[7, 2, 1, 0], [3, 0, 4, 1]]] * 3)
    assert alleles.rarefied_count(counts, 4).shape == (3, 2)
    assert alleles.rarefied_private(counts, 4).shape == (3, 2)
    assert alleles.alleles_caught(np.array([SEVEN] * 3), [[2], [5]]).shape == (2, 3)
