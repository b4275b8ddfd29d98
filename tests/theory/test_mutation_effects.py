"""Effects of mutations. Derived values; parameters of the distributions from memory."""

import mpmath
import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import load, mutation_effects

SIX = 1e-5
EDGES = ([0.0, 1e-3, 1e-2, 0.1], [1e-3, 1e-2, 0.1, np.inf])


@pytest.mark.parametrize(
    ("mean", "shape", "shares"),
    [
        (0.0427, 0.23, (0.3299, 0.2253, 0.3139, 0.1309)),
        (0.0131, 0.186, (0.4905, 0.2477, 0.2358, 0.0260)),
    ],
)
def test_that_effects_fall_into_classes_as_stated(mean, shape, shares):
    found = mutation_effects.share_of_effects(*EDGES, mean, shape)
    assert_allclose(found, shares, atol=5.1e-5)  # four decimals printed
    assert_allclose(np.sum(found), 1.0, rtol=1e-14)


def test_that_human_effects_agree_with_the_published_statement():
    """Eyre-Walker, Woolfit & Phelps 2006, confirmed: over half in 1e-3..1e-1, under 15 % above."""
    shares = mutation_effects.share_of_effects(*EDGES, 0.0427, 0.23)
    assert shares[1] + shares[2] > 0.5
    assert shares[3] < 0.15


def test_that_dominance_falls_with_the_effect():
    """Deng & Lynch 1996, from memory."""
    stated = [0.439048, 0.261023, 0.136266, 0.010121]
    assert_allclose(mutation_effects.dominance([0.01, 0.05, 0.1, 0.3]), stated, rtol=SIX)
    assert mutation_effects.dominance(0.0) == 0.5


@pytest.mark.parametrize(("mean", "shape", "h"), [(0.05, 0.3, 0.353826), (0.0131, 0.186, 0.443059)])
def test_that_mean_dominance_is_the_integral_over_effects(mean, shape, h):
    assert_allclose(mutation_effects.mean_dominance(mean, shape), h, rtol=SIX)
    rate = shape / mean

    def integrand(y):  # s = y^(1/shape) takes the singularity at 0 away
        s = y ** (1 / mpmath.mpf(shape))
        return mpmath.exp(-(13 + rate) * s) / 2

    top = mpmath.mpf(40 / rate) ** shape
    slow = mpmath.quad(integrand, mpmath.linspace(0, top, 20))
    slow *= mpmath.mpf(rate) ** shape / (shape * mpmath.gamma(shape))
    assert_allclose(mutation_effects.mean_dominance(mean, shape), float(slow), rtol=1e-8)


def test_that_the_shortcut_for_the_load_says_where_it_fails():
    """Pitfall: U (E[1/2h] - 1) diverges for k mean / shape at or above 1."""
    found = mutation_effects.load_from_mutation_over_effects(0.5, [0.01, 0.02, 0.05], 0.26)
    assert_allclose(found[0], 0.5 * (0.5**-0.26 - 1), rtol=1e-12)
    assert np.all(np.isinf(found[1:]))
    none = mutation_effects.load_from_mutation_over_effects(1.0, 1e-9, 0.3)
    assert_allclose(none, 0.0, atol=1e-7)  # additive: no inbreeding load


def test_that_scaled_frequencies_hold_the_load_wanted():
    """The calibration of generated founders: their B is the one asked for."""
    rng = np.random.default_rng(5)
    s = np.minimum(rng.gamma(0.5, 0.1, size=400), 0.5)
    h, q = mutation_effects.dominance(s), rng.uniform(0.0, 0.3, size=400)
    scaled = mutation_effects.scaled_frequencies(q, s, h, 1.2)
    assert_allclose(load.population_load(scaled, s, h).masked, 1.2, rtol=1e-12)
    assert_allclose(scaled / q, scaled[0] / q[0], rtol=1e-12)
    assert_allclose(mutation_effects.scaled_frequencies(q, s, h, 0.0), 0.0, atol=1e-30)


def test_that_too_few_loci_are_refused():
    with pytest.raises(ValueError, match="more loci"):
        mutation_effects.scaled_frequencies([0.1, 0.2], [0.1, 0.1], [0.2, 0.2], 3.0)
