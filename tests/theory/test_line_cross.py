"""Means of crosses. Coefficients from memory, verified by enumeration; values derived."""

import itertools

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import inbreeding, line_cross
from rescue_planner.theory.line_cross import GENERATIONS, CrossEffects

SIX = 1e-5
exact = settings(derandomize=True, deadline=None)
EFFECTS = CrossEffects(-0.50, 0.05, 0.12, 0.10, -0.02, 0.02)
NAMES = ("P1", "P2", "F1", "F2", "BC1", "BC2", "BC1xP1", "F1xBC1")
P, H = np.array([GENERATIONS[name] for name in NAMES]).T


def test_that_generations_have_the_stated_means():
    stated = [-0.43, -0.57, -0.36, -0.5, -0.45, -0.5, -0.45375, -0.48125]
    assert_allclose(line_cross.cross_mean(P, H, EFFECTS), stated, rtol=1e-12)
    assert_allclose(line_cross.heterosis(EFFECTS), 0.14, rtol=1e-12)
    assert_allclose(line_cross.breakdown(EFFECTS), -0.07, rtol=1e-12)


effect = st.floats(-1.0, 1.0)


@exact
@given(values=st.tuples(effect, effect, effect, effect, effect, effect))
def test_that_contrasts_are_those_of_the_means(values):
    effects = CrossEffects(*values)
    p1, p2, f1, f2 = line_cross.cross_mean(P[:4], H[:4], effects)
    middle = 0.5 * (p1 + p2)
    assert_allclose(line_cross.heterosis(effects), f1 - middle, atol=1e-13)
    assert_allclose(line_cross.breakdown(effects), f2 - 0.5 * (f1 + middle), atol=1e-13)


def genotypes(name):
    """Yield chance, x and z of one locus in a generation, from its parents' gametes."""
    gametes = {"P1": 1.0, "P2": 0.0, "F1": 0.5, "BC1": 0.75}
    parents = {
        "P1": ("P1", "P1"),
        "P2": ("P2", "P2"),
        "F1": ("P1", "P2"),
        "F2": ("F1", "F1"),
        "BC1": ("F1", "P1"),
        "BC2": ("F1", "P2"),
        "BC1xP1": ("BC1", "P1"),
        "F1xBC1": ("F1", "BC1"),
    }[name]
    for one, two in itertools.product((1, -1), repeat=2):
        chance = 1.0
        for sign, parent in ((one, parents[0]), (two, parents[1])):
            share = gametes[parent]
            chance *= share if sign == 1 else 1 - share
        yield chance, (one + two) / 2, -one * two


@pytest.mark.parametrize("name", NAMES)
def test_that_coefficients_are_those_of_two_unlinked_loci(name):
    """Enumeration: two loci that assort freely are independent within each of these crosses."""
    pairs = list(itertools.product(genotypes(name), repeat=2))
    slow = [
        1.0,
        sum(c * d * x for (c, x, _), (d, _, _) in pairs),
        sum(c * d * z for (c, _, z), (d, _, _) in pairs),
        sum(c * d * x * y for (c, x, _), (d, y, _) in pairs),
        sum(c * d * x * z for (c, x, _), (d, _, z) in pairs),
        sum(c * d * z * w for (c, _, z), (d, _, w) in pairs),
    ]
    assert_allclose(line_cross.design(*GENERATIONS[name]), slow, atol=1e-14)


@pytest.mark.parametrize(("p", "h"), [(0.5, 1.1), (0.75, 0.6), (1.0, 0.1), (0.5, -0.1)])
def test_that_heterozygosity_by_source_has_bounds(p, h):
    """Pitfall: theta_H of 0..1 and -1..1 mixed up shows here."""
    with pytest.raises(ValueError, match="twice the rarer share"):
        line_cross.indices(p, h)


def test_that_an_inbreeding_load_translates_into_dominance():
    """Derived: B = 3, F of the parents 0.4 and 0.1; means are -B F of each cross's own F."""
    effects = line_cross.effects_of_inbred_parents(3.0, 0.4, 0.1)
    assert_allclose((effects.d, effects.a, effects.mu0), (0.375, -0.45, -0.375), rtol=1e-13)
    means = line_cross.cross_mean(P[:5], H[:5], effects)
    assert_allclose(means, [-1.2, -0.3, 0.0, -0.375, -0.6], atol=1e-13)
    own = np.array([0.4, 0.1, 0.0, 0.125, 0.2])
    assert_allclose(np.exp(means), inbreeding.survival_factor(own, 6.0), rtol=1e-13)


MEANS, ERRORS = [0.62, 0.48, 0.74, 0.58, 0.64, 0.55], [0.02, 0.025, 0.03, 0.03, 0.03, 0.03]


def test_that_the_joint_scaling_test_gives_the_stated_estimates():
    found = line_cross.fit_crosses(MEANS, ERRORS, P[:6], H[:6])
    assert_allclose(found.estimates, [0.61789, 0.0747812, 0.0802762], rtol=SIX)
    assert_allclose(found.errors, [0.01213, 0.01494, 0.01564], atol=5.1e-6)
    assert_allclose((found.chi2, found.p_value), (5.44884, 0.141731), rtol=SIX)
    assert found.degrees == 3


def test_that_a_saturated_fit_goes_through_every_mean():
    found = line_cross.fit_crosses(MEANS, ERRORS, P[:6], H[:6], effects=6)
    assert_allclose(found.estimates, [0.58, 0.09, 0.125, 0.06, 0.02, 0.035], rtol=1e-9)
    assert_allclose(found.chi2, 0.0, atol=1e-18)
    assert found.degrees == 0
    assert np.isnan(found.p_value)


def test_that_true_effects_are_found_back():
    means = line_cross.cross_mean(P, H, EFFECTS)
    found = line_cross.fit_crosses(means, np.full(8, 0.01), P, H, effects=6)
    assert_allclose(found.estimates, EFFECTS, rtol=1e-9)


@pytest.mark.parametrize(
    ("names", "errors", "words"),
    [
        (("P1", "P2", "F1"), [0.1, 0.1, 0.0], "above 0"),
        (("P1", "P2"), [0.1, 0.1], "cannot tell"),
        (("F2", "F2", "BC1"), [0.1, 0.1, 0.1], "cannot tell"),
    ],
)
def test_that_crosses_which_tell_too_little_are_refused(names, errors, words):
    p, h = np.array([GENERATIONS[name] for name in names]).T
    with pytest.raises(ValueError, match=words):
        line_cross.fit_crosses(np.zeros(len(names)), errors, p, h)
