"""Samples that see alleles and falls of diversity. Derived; sources from memory."""

from itertools import product
from math import comb, factorial

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import chain, detection

DIGITS = 1e-11  # the check values are printed to 12 digits
FIVE = [0.1, 0.2, 0.3, 0.4, 0.5]


@pytest.mark.parametrize(
    ("p", "outbred", "inbred"),
    [
        (0.01, [81, 150, 230], [92, 171, 262]),
        (0.02, [40, 75, 114], [46, 85, 131]),
        (0.05, [16, 30, 45], [18, 34, 52]),
        (0.1, [8, 15, 22], [9, 17, 26]),
        (0.2, [4, 7, 11], [5, 8, 12]),
    ],
)
def test_that_so_many_animals_show_an_allele(p, outbred, inbred):
    chances = [0.8, 0.95, 0.99]
    assert list(detection.animals_to_see(p, chances)) == outbred
    assert list(detection.animals_to_see(p, chances, 0.25)) == inbred


def test_that_a_whole_number_stays_whole():
    assert detection.animals_to_see(0.5, 1 - 0.25**3) == 3
    assert detection.animals_to_see(0.5, 0.0) == 0


def test_that_a_small_population_shows_its_carriers():
    assert_allclose(detection.chance_to_see_carriers(20, 2, 10), 0.763157894737, rtol=DIGITS)
    assert detection.animals_to_see_carriers(20, 2, 0.95) == 16
    assert detection.animals_to_see_carriers(20, 2, 1.0) == 19
    assert detection.animals_to_see_carriers(20, 20, 0.99) == 1


@pytest.mark.parametrize(
    ("p", "g", "variance"),
    [
        ((0.7, 0.3), 20, 0.00764842105263),
        ((0.5, 0.3, 0.2), 8, 0.0151),
        ((0.5, 0.5), 60, 0.000141242937853),
        ((0.9, 0.1), 60, 0.00385830508475),
        ((0.25,) * 4, 60, 0.00010593220339),
    ],
)
def test_that_sampling_spreads_gene_diversity_so(p, g, variance):
    assert_allclose(detection.sampling_variance(p, g), variance, rtol=DIGITS)


@pytest.mark.parametrize(("p", "g"), [((0.5, 0.3, 0.2), 6), ((0.8, 0.2), 7)])
def test_that_every_sample_enumerated_spreads_as_much(p, g):
    """Second way: all counts of a multinomial sample, unbiased diversity of each."""
    mean = square = 0.0
    for counts in product(range(g + 1), repeat=len(p)):
        if sum(counts) != g:
            continue
        chance = factorial(g) * np.prod(
            [x**k / factorial(k) for x, k in zip(p, counts, strict=True)]
        )
        h = g / (g - 1) * (1 - sum((k / g) ** 2 for k in counts))
        mean, square = mean + chance * h, square + chance * h * h
    assert_allclose(mean, 1 - sum(x * x for x in p), rtol=1e-12)
    assert_allclose(detection.sampling_variance(p, g), square - mean**2, rtol=1e-10)


def test_that_loci_spread_about_their_mean():
    h = [0.32, 0.48, 0.50, 0.10, 0.42]
    assert_allclose(detection.se_over_loci(h), 0.0730479294709987, rtol=1e-14)
    assert_allclose(detection.observed_heterozygosity_variance(0.3, 30), 0.3 * 0.7 / 30)


@pytest.mark.parametrize(("ne", "t"), [(10, 1), (10, 5), (3, 4), (50, 10)])
def test_that_moments_are_the_exact_chains(ne, t):
    """Second way: the whole distribution."""
    for p in (0.1, 0.35, 0.5):
        mass, n = chain.first_step(p, 2 * ne), 2 * ne
        for _ in range(t - 1):
            mass = chain.step(mass, chain.frequencies(n), n)
        x = chain.frequencies(n) * (1 - chain.frequencies(n))
        found = detection.product_moments(p, ne, t)
        assert_allclose(found, (np.sum(mass * x), np.sum(mass * x * x)), rtol=1e-11)


def test_that_no_generation_leaves_the_moments():
    assert_allclose(detection.product_moments(0.3, 20, 0), (0.21, 0.21**2), rtol=1e-14)


ROWS = [
    (10, 1, 30, -0.019, 0.0043622232, 0.00647026, 0.0000348, 186.1152, 112),
    (10, 5, 30, -0.0859632437, 0.0040824079, 0.0250273412, 0.0007123569, 24.9506, 22),
    (25, 1, 30, -0.0076, 0.0043948833, 0.0025581606, 0.000005568, 744.841, 275),
    (25, 5, 20, -0.0365100972, 0.0066222253, 0.0116816891, 0.0001284985, 85.4918, 55),
    (25, 5, 30, -0.0365100972, 0.0043280833, 0.0116816891, 0.0001284985, 74.8513, 55),
    (25, 5, 50, -0.0365100972, 0.0025558487, 0.0116816891, 0.0001284985, 66.6314, 55),
    (25, 10, 30, -0.0695123334, 0.0041977024, 0.0206752382, 0.000465796, 32.4212, 28),
    (50, 1, 30, -0.0038, 0.0044003146, 0.0012733301, 0.000001392, 2429.7949, 546),
    (50, 10, 30, -0.0363348115, 0.004335255, 0.0115295268, 0.0001272676, 74.8905, 55),
]


@pytest.mark.parametrize("row", ROWS)
def test_that_a_fall_takes_so_many_loci(row):
    """Derived, ten decimals. More animals cannot go below the floor that drift sets."""
    ne, t, n, change, sampling, drift, between, loci, floor = row
    fall = detection.fall_of_diversity(FIVE, ne, t, n)
    stated = [change, sampling, drift, between]
    assert_allclose(fall, stated, rtol=0, atol=5.1e-11)
    assert_allclose(detection.loci_needed(fall), loci, rtol=1e-6)
    endless = detection.fall_of_diversity(FIVE, ne, t, np.inf)
    assert endless.sampling == 0.0
    assert np.ceil(detection.loci_needed(endless)) == floor


def test_that_power_and_loci_are_inverses():
    fall = detection.fall_of_diversity(FIVE, 25, 5, 30)
    found = detection.power_to_see(fall, [20, 100])
    assert_allclose(found, [0.359584926382, 0.890488712102], rtol=DIGITS)
    loci = detection.loci_needed(fall, 0.01, [0.5, 0.9])
    assert_allclose(detection.power_to_see(fall, loci, 0.01), [0.5, 0.9], rtol=1e-12)


def test_that_leaving_drift_out_promises_too_much():
    fall = detection.fall_of_diversity(FIVE, 25, 5, 30)
    without = fall._replace(drift=np.zeros(()), between=np.zeros(()))
    assert detection.loci_needed(fall) > 3 * detection.loci_needed(without)


def test_that_carriers_are_binomials():
    assert_allclose(
        detection.chance_to_see_carriers(12, 3, [0, 4, 12]),
        [0.0, 1 - comb(9, 4) / comb(12, 4), 1.0],
        rtol=1e-13,
    )


def test_that_plans_broadcast():
    fall = detection.fall_of_diversity(FIVE, [[10], [25]], 5, [20, 30, 50])
    assert fall.variance.shape == (2, 3)
    assert_allclose(
        detection.loci_needed(fall)[1, 2],
        detection.loci_needed(detection.fall_of_diversity(FIVE, 25, 5, 50)),
    )
