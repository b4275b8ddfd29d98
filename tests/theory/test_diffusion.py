"""Kimura's diffusion. Derived (34-digit quadrature); Kimura 1962, Kimura & Ohta 1969."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import chain, diffusion, selection
from rescue_planner.theory.fitness_forms import for_allele

DIGITS = 1e-11  # the check values are printed to 12 digits
ROWS = [
    (10, 0, 0.5, 1, 0.05, 38.9829037345),
    (10, 0.1, 0.5, 1, 0.11005720497102, 36.9494639125),
    (10, 0.1, 0.5, 10, 0.73105857863, 25.8648068754),
    (25, 0, 0.5, 25, 0.5, 69.314718056),
    (25, 0.05, 0.5, 10, 0.42865552877717, 81.7101706921),
    (25, 0.1, 0, 10, 0.47365219935684, 57.0500969148),
    (25, 0.1, 1, 10, 0.77667046013179, 81.7182722602),
    (25, 0.02, 5, 5, 0.34896596225999, 180.395109973),
    (50, -0.05, 0.5, 50, 0.075858180021244, 99.036960794),
    (50, 0.1, 1, 1, 0.170941702591, 133.233273501),
    (50, 0.02, 0.5, 1, 0.022900583670587, 188.828747841),
    (200, 0, 0.5, 1, 0.0025, 798.999165623),
    (200, 0.02, 0.5, 1, 0.019807971527427, 501.138636817),
    (200, -0.02, 0, 40, 0.00050981045717383, 561.59492233),
    (200, 0.02, 0.25, 20, 0.23845984365857, 451.56454158),
]


@pytest.mark.parametrize(("n", "s", "h", "start", "chance", "time"), ROWS)
def test_that_an_allele_is_fixed_with_kimuras_chance_and_time(n, s, h, start, chance, time):
    p = start / (2 * n)
    assert_allclose(diffusion.fixation(p, n, s, h), chance, rtol=DIGITS)
    assert_allclose(diffusion.time_to_fixation(p, n, s, h), time, rtol=DIGITS)


@pytest.mark.parametrize(("n", "s", "h", "start", "chance", "time"), ROWS)
def test_that_the_diffusion_is_near_the_exact_chain(n, s, h, start, chance, time):
    """Derived: within 7 % in the chance and 9 % in the time at these sizes."""
    x = selection.after_selection(chain.frequencies(2 * n), for_allele(s, h))
    end = chain.absorption(x)
    assert abs(chance / end.fixation[start] - 1) < 0.07 + 1e-3
    assert abs(time / end.time_to_fixation[start] - 1) < 0.09


def test_that_the_advantage_of_one_copy_is_not_that_of_two():
    """Kimura's printed exponent 4 Ne s holds for 1 + 2s, 1 + s, 1: the usual factor of two."""
    assert_allclose(diffusion.fixation_per_copy(0.1, 50, 0.01), diffusion.fixation(0.1, 50, 0.02))
    assert diffusion.fixation(0.1, 50, 0.01) < diffusion.fixation_per_copy(0.1, 50, 0.01)


@pytest.mark.parametrize("s", [1e-9, -1e-9, 0.001, -0.001, 0.3, -0.3, 5.0, -5.0])
def test_that_the_closed_form_stands_at_any_strength(s):
    """Second way: the general integral."""
    p = np.array([0.0, 1e-4, 0.2, 0.9, 1.0])
    closed = diffusion.fixation_per_copy(p, 100, s)
    assert np.all(np.isfinite(closed))
    assert list(closed[[0, -1]]) == [0.0, 1.0]
    assert_allclose(diffusion.fixation(p, 100, 2 * s), closed, rtol=2e-9, atol=1e-300)


def test_that_no_selection_leaves_the_frequency():
    p = np.linspace(0.0, 1.0, 5)
    assert list(diffusion.fixation(p, 50, 0.0)) == list(p)
    assert list(diffusion.fixation_per_copy(p, 50, 0.0)) == list(p)


@settings(derandomize=True, deadline=None, max_examples=40)
@given(p=st.floats(0.01, 0.99), n=st.floats(5, 300), s=st.floats(-0.1, 0.1), h=st.floats(-0.5, 1.5))
def test_that_one_allele_or_the_other_is_fixed(p, n, s, h):
    """The other allele's fitness over 1 is 1 - s, 1 - (1-h) s... on the scale of the diffusion."""
    other = diffusion.fixation(1 - p, n, -s, 1 - h)
    assert_allclose(diffusion.fixation(p, n, s, h) + other, 1.0, atol=1e-12)


def test_that_neutral_times_have_their_closed_forms():
    p = np.array([0.025, 0.3, 0.5, 0.9])
    assert_allclose(
        diffusion.time_to_fixation(p, 40, 0.0),
        diffusion.neutral_time_to_fixation(p, 40),
        rtol=1e-12,
    )
    assert diffusion.neutral_time_to_fixation(0.0, 40) == 160.0
    assert diffusion.neutral_time_to_fixation(1.0, 40) == 0.0
    assert_allclose(diffusion.neutral_time_to_fixation(1e-9, 40), 160.0, rtol=1e-8)
    # either end: a mean over fixation and loss
    fixed, lost = (diffusion.neutral_time_to_fixation(x, 40) for x in (p, 1 - p))
    either = diffusion.neutral_time_to_either_end(p, 40)
    assert_allclose(p * fixed + (1 - p) * lost, either, rtol=1e-12)
    assert list(diffusion.neutral_time_to_either_end([0.0, 1.0], 40)) == [0.0, 0.0]


def test_that_the_time_of_a_new_neutral_allele_spreads_widely():
    """About 2.15 Ne, confirmed; the exact chain's 430.10 at Ne 200, derived."""
    assert_allclose(diffusion.neutral_sd_of_time(1.0), 2.15357612801, rtol=DIGITS)
    assert_allclose(diffusion.neutral_sd_of_time(200), 430.095844736, rtol=0.002)


def test_that_ends_and_strong_selection_are_told_apart():
    assert diffusion.time_to_fixation(1.0, 50, 0.01) == 0.0
    assert np.isnan(diffusion.time_to_fixation(0.0, 50, 0.01))
    assert 0.0 < diffusion.time_to_fixation(1e-6, 50, 0.01) < 200
    with pytest.raises(ValueError, match="too strong"):
        diffusion.time_to_fixation(0.1, 10_000, 0.5)
    assert_allclose(diffusion.fixation(0.1, 10_000, 0.5), 1.0)
    with pytest.raises(ValueError, match="too strong"):
        diffusion.fixation(0.1, 1e9, 0.5)


def test_that_cases_broadcast():
    found = diffusion.time_to_fixation([0.1, 0.2, 0.3], [[20], [40]], 0.01, 0.5)
    assert found.shape == (2, 3)
    assert diffusion.fixation([0.1, 0.2], 20, [[0.0], [0.1]]).shape == (2, 2)
