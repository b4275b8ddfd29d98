"""Shares and replicates. Wilson 1927, Clopper & Pearson 1934, from memory; values derived."""

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import sample_size

SIX = 1e-5
exact = settings(derandomize=True, deadline=None)


@pytest.mark.parametrize(
    ("k", "n", "wilson", "exactly"),
    [
        (0, 100, (0.0, 0.0369935), (0.0, 0.0362167)),
        (0, 1000, (0.0, 0.00382676), (0.0, 0.00368208)),
        (5, 1000, (0.00213754, 0.011651), (0.00162542, 0.0116295)),
        (37, 500, (0.0541612, 0.100335), (0.0526351, 0.100559)),
        (250, 500, (0.456341, 0.543659), (0.455286, 0.544714)),
    ],
)
def test_that_intervals_of_a_share_are_as_stated(k, n, wilson, exactly):
    assert_allclose(sample_size.wilson_interval(k, n), wilson, rtol=SIX)
    assert_allclose(sample_size.clopper_pearson_interval(k, n), exactly, rtol=SIX)


def test_that_none_and_all_never_print_an_empty_interval():
    """Pitfall: 0 of n shown as 0 to 0."""
    for interval in (sample_size.wilson_interval, sample_size.clopper_pearson_interval):
        low, high = interval([0, 40], 40)
        assert low[0] == 0.0
        assert high[0] > 0.05
        assert low[1] < 0.95
        assert high[1] == 1.0
        assert_allclose(low[1], 1.0 - high[0], rtol=1e-9)


@exact
@given(n=st.integers(1, 400), part=st.floats(0.0, 1.0))
def test_that_wilsons_ends_lie_one_z_from_the_share(n, part):
    """Defining equation: |p - end| = z sqrt(end (1 - end) / n) at both ends."""
    k = round(part * n)
    p, z = k / n, 1.959963984540054
    for end in sample_size.wilson_interval(k, n):
        assert_allclose((p - end) ** 2, z**2 * end * (1 - end) / n, rtol=1e-9, atol=1e-13)


def test_that_clopper_pearson_leaves_the_stated_tails():
    low, high = (float(x) for x in sample_size.clopper_pearson_interval(7, 60))
    above = mpmath.fsum(
        mpmath.binomial(60, j) * low**j * (1 - low) ** (60 - j) for j in range(7, 61)
    )
    below = mpmath.fsum(mpmath.binomial(60, j) * high**j * (1 - high) ** (60 - j) for j in range(8))
    assert_allclose([float(above), float(below)], 0.025, rtol=1e-9)


@pytest.mark.parametrize(("k", "n"), [(-1, 10), (11, 10), (0, 0)])
def test_that_impossible_counts_are_refused(k, n):
    with pytest.raises(ValueError, match="between 0 and the number of runs"):
        sample_size.wilson_interval(k, n)
    with pytest.raises(ValueError, match="between 0 and the number of runs"):
        sample_size.clopper_pearson_interval(k, n)


def test_that_nothing_seen_leaves_a_bound_of_three_over_n():
    found = sample_size.bound_at_zero([100, 1000])
    assert_allclose((1 - found) ** np.array([100, 1000]), 0.05, rtol=1e-10)
    assert_allclose(found, 3 / np.array([100, 1000]), rtol=0.02)


def test_that_a_half_width_takes_the_stated_runs():
    found = sample_size.runs_for_half_width([0.05, 0.05, 0.5, 0.01], [0.01, 0.005, 0.01, 0.005])
    assert list(found) == [1825, 7299, 9604, 1522]


def test_that_telling_shares_apart_takes_the_stated_runs():
    found = sample_size.runs_to_tell_apart([0.10, 0.20, 0.05], [0.05, 0.15, 0.04])
    assert list(found) == [435, 906, 6745]
    assert sample_size.runs_to_tell_apart(0.1, 0.1) == np.inf


def test_that_pairing_makes_a_difference_surer():
    """Derived: 10 % against 7 % in 1000 runs; 3.5 % and 0.5 % in one plan only."""
    unpaired = sample_size.error_of_difference(0.10, 0.07, 1000)
    paired = sample_size.error_of_paired_difference(0.035, 0.005, 1000)
    assert_allclose((unpaired, paired), (0.0124539, 0.006253), rtol=1e-5)


def test_that_independent_plans_gain_nothing_from_pairing():
    one, two = 0.3, 0.2
    paired = sample_size.error_of_paired_difference(one * (1 - two), two * (1 - one), 500)
    assert_allclose(paired, sample_size.error_of_difference(one, two, 500), rtol=1e-13)
