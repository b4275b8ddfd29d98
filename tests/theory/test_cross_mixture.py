"""Linkage and mixtures. Derived; checked by enumeration of two loci."""

import itertools

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import cross_mixture, line_cross
from rescue_planner.theory.line_cross import CrossEffects

SIX = 1e-5
EFFECTS = CrossEffects(-0.50, 0.05, 0.12, 0.10, -0.02, 0.02)
ONE, TWO = cross_mixture.pure(1), cross_mixture.pure(2)


def f1_gametes(r):
    return cross_mixture.gametes_of_young(ONE, TWO, r)


@pytest.mark.parametrize(("r", "aa", "dd"), [(0.5, 0, 0), (0.1, 0.4, 0.64), (0.01, 0.49, 0.9604)])
def test_that_linkage_keeps_epistasis_in_the_f2(r, aa, dd):
    found = cross_mixture.coefficients(f1_gametes(r), f1_gametes(r))
    assert_allclose(found, [1, 0, 0, aa, 0, dd], atol=1e-14)


def test_that_linkage_keeps_epistasis_in_a_backcross():
    found = cross_mixture.coefficients(f1_gametes(0.1), ONE)
    assert_allclose(found[3:], [0.45, -0.4, 0.8], atol=1e-14)


def test_that_unlinked_crosses_are_the_line_cross_model():
    free = f1_gametes(0.5)
    backcross = cross_mixture.gametes_of_young(free, ONE, 0.5)
    crosses = {
        "P1": (ONE, ONE),
        "P2": (TWO, TWO),
        "F1": (ONE, TWO),
        "F2": (free, free),
        "BC1": (free, ONE),
        "BC2": (free, TWO),
    }
    for name, pools in crosses.items():
        design = line_cross.design(*line_cross.GENERATIONS[name])
        assert_allclose(cross_mixture.coefficients(*pools), design, atol=1e-14, err_msg=name)
    assert_allclose(backcross.source, 0.5)
    assert_allclose(backcross.product, 0.25, atol=1e-15)


def enumerated(r):
    """Return the coefficients of F2 by writing out all two-locus gametes of an F1."""
    gametes = {
        (1, 1): 0.5 * (1 - r),
        (-1, -1): 0.5 * (1 - r),
        (1, -1): 0.5 * r,
        (-1, 1): 0.5 * r,
    }
    out = np.zeros(6)
    for (one, p), (two, q) in itertools.product(gametes.items(), repeat=2):
        x = [(a + b) / 2 for a, b in zip(one, two, strict=True)]
        z = [-a * b for a, b in zip(one, two, strict=True)]
        out += p * q * np.array([1, x[0], z[0], x[0] * x[1], x[0] * z[1], z[0] * z[1]])
    return out


@pytest.mark.parametrize("r", [0.0, 0.03, 0.25, 0.5])
def test_that_the_f2_is_the_sum_over_its_genotypes(r):
    pool = f1_gametes(r)
    assert_allclose(cross_mixture.coefficients(pool, pool), enumerated(r), atol=1e-14)


@pytest.mark.parametrize(
    ("t", "aa", "ad", "dd", "mean"),
    [
        (1, 0.68, -0.6, 1.0, -0.4132),
        (2, 0.52, -0.408, 0.4624, -0.443792),
        (3, 0.44, -0.312, 0.2704, -0.457552),
        (5, 0.38, -0.24, 0.16, -0.4672),
        (10, 0.360625, -0.21675, 0.130502, -0.470192),
    ],
)
def test_that_breakdown_unfolds_after_a_pulse(t, aa, ad, dd, mean):
    """m = 0.2, unlinked: theta_S = 0.6 and theta_H = -0.36 at every generation."""
    found = cross_mixture.after_pulse(0.2, 0.5, t)[-1]
    assert_allclose(found, [1, 0.6, -0.36, aa, ad, dd], rtol=SIX)
    assert_allclose(found @ np.array(EFFECTS, dtype=float), mean, rtol=SIX)


def test_that_population_means_are_only_the_limit():
    """Pitfall: indices of the population's mean give -0.470288 at once, worse than the truth."""
    at_once = line_cross.cross_mean(0.8, 0.32, EFFECTS)
    assert_allclose(at_once, -0.470288, rtol=SIX)
    first, *_, last = cross_mixture.after_pulse(0.2, 0.5, 40) @ np.array(EFFECTS, dtype=float)
    assert first > at_once + 0.05
    assert_allclose(last, at_once, rtol=1e-9)


@pytest.mark.parametrize(("m", "r"), [(0.2, 0.5), (0.35, 0.1), (0.05, 0.01)])
def test_that_a_pulse_follows_the_closed_form_of_its_disequilibrium(m, r):
    """D_t = m (1-m) (1-r)^(t-1)."""
    t = np.arange(1, 9)
    d = m * (1 - m) * (1 - r) ** (t - 1.0)
    aa = (1 - 2 * m) ** 2 + 2 * d
    pairs = ((1 - m) ** 2 + d) * (m**2 + d) + (m * (1 - m) - d) ** 2
    found = cross_mixture.after_pulse(m, r, 8)
    assert_allclose(found[:, 3], aa, rtol=1e-12)
    assert_allclose(found[:, 5], 1 - 8 * m * (1 - m) + 8 * pairs, rtol=1e-10)


def test_that_pulses_broadcast_over_draws():
    found = cross_mixture.after_pulse([0.1, 0.2, 0.3], 0.5, 4)
    assert found.shape == (4, 3, 6)
    assert_allclose(found[:, 1], cross_mixture.after_pulse(0.2, 0.5, 4), rtol=1e-14)


def test_that_the_mean_of_a_mixture_weighs_the_effects():
    pool = cross_mixture.pooled(ONE, TWO, 0.2)
    assert_allclose(cross_mixture.mixture_mean(pool, pool, EFFECTS), -0.4132, rtol=1e-12)


def test_that_an_unknown_parent_is_refused():
    with pytest.raises(ValueError, match="1 or 2"):
        cross_mixture.pure(3)
