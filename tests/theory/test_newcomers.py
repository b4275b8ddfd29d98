"""Whole numbers of newcomers. Derived: exact chains over both populations' counts."""

from math import comb

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import flow, newcomers
from rescue_planner.theory.newcomers import Exchange

DIGITS = 1e-11  # the check values are printed to 12 digits


@pytest.mark.parametrize(
    ("n", "came", "both", "settled"),
    [
        (10, 1, 0.805263157895, 0.171332586786),
        (25, 1, 0.920816326531, 0.188691870191),
        (50, 1, 0.960202020202, 0.194372878583),
        (50, 5, 0.809090909091, 0.0406578346277),
        (25, 5, 0.636734693878, 0.0338688666956),
        (200, 1, 0.990012531328, 0.198598301169),
    ],
)
def test_that_a_whole_number_does_more_than_a_rate(n, came, both, settled):
    assert_allclose(newcomers.both_resident(n - came, came), both, rtol=DIGITS)
    assert both < (1 - came / n) ** 2
    assert_allclose(newcomers.identity_settled(n - came, came), settled, rtol=DIGITS)
    assert settled < flow.fst_equilibrium(n, came / n)


def test_that_adding_is_not_replacing():
    assert_allclose(newcomers.identity_settled(25, 1), 0.189130770418, rtol=DIGITS)


def test_that_a_random_number_does_less_than_a_rate():
    """Derived, and the same by summing over the binomial law."""
    both = newcomers.both_resident_random(50, 1.0)
    assert_allclose(both, 0.960597979798, rtol=DIGITS)
    summed = sum(
        comb(50, k) * 0.02**k * 0.98 ** (50 - k) * newcomers.both_resident(50 - k, k)
        for k in range(51)
    )
    assert_allclose(both, summed, rtol=1e-12)
    assert_allclose(both / (100 - 99 * both), 0.196008402669, rtol=DIGITS)


def saw_tooth(came, every):
    f, cycle = 0.2, []
    for t in range(200 * every):
        now = came if t % every == 0 else 0
        f = newcomers.identity_after(f, 50, 50 - now, now)
        cycle.append(f)
    return np.array(cycle[-every:])


def test_that_newcomers_every_few_generations_make_a_saw_tooth():
    """Derived, ten digits."""
    cycle = saw_tooth(5, 5)
    stated = [0.1719858545, 0.1802659959, 0.188463336, 0.1965787026, 0.2046129156]
    assert_allclose(cycle, stated, atol=1e-10)
    assert_allclose(cycle.mean(), 0.188381360913, rtol=DIGITS)
    rarer = saw_tooth(10, 10)
    assert_allclose([rarer.mean(), rarer.max()], [0.181913966416, 0.2184146417], rtol=1e-9)


@pytest.mark.parametrize(
    ("n", "came", "stated"),
    [
        (25, 1, [0.0388, 0.07381312, 0.159650351046, 0.255185967662, 0.346565231671]),
        (25, 5, [0.178, 0.289072, 0.428616932221, 0.469167064192, 0.473366330462]),
        (10, 2, [0.175, 0.28, 0.40348, 0.4348546048, 0.437484004307]),
    ],
)
def test_that_a_fixed_recipient_gains_diversity_so(n, came, stated):
    now, course = Exchange(0.0, 0.5, 0.5), []
    for _ in range(20):
        now = newcomers.after_newcomers(now, n, n - came, came)
        course.append(newcomers.with_replacement(now.recipient, n))
    assert_allclose(np.array(course)[[0, 1, 4, 9, 19]], stated, rtol=DIGITS)


def test_that_newcomers_leave_a_finite_donor():
    """Derived: moved animals no longer breed in the donor (a usual slip)."""
    now = Exchange(0.0, 2 * 18 * 42 / (60 * 59), 0.3)
    parents, course = 30, []
    for _ in range(10):
        now = newcomers.after_removal(now, 10, 8, 2, parents)
        parents = 28
        course.append(now)
    rows = {
        1: (0.114315789474, 0.1086, 0.42, 0.324),
        2: (0.190752631579, 0.181215, 0.4125, 0.3417),
        5: (0.301051134928, 0.285998578182, 0.390794047809, 0.36863025548),
        10: (0.33829105175, 0.321376499162, 0.357125821818, 0.367829498444),
    }
    for t, stated in rows.items():
        at = course[t - 1]
        found = at.recipient, newcomers.with_replacement(at.recipient, 10), at.donor, at.between
        assert_allclose(found, stated, rtol=DIGITS)


def test_that_a_very_large_donor_is_the_limit_of_a_finite_one():
    before = Exchange(0.3, 0.5, 0.45)
    one = newcomers.after_newcomers(before, 10, 8, 2)
    other = newcomers.after_removal(before, 10, 8, 2, 1e12)
    assert_allclose(one, other, rtol=1e-11)


def test_that_two_generations_agree_with_a_joint_chain():
    """Second way: every count of copies in recipient and donor, tiny populations.

    Recipient of 2 adults, donor of 3; a generation: 1 resident recruited, 1 newcomer out of 3
    recruits of the donor, 2 of which stay.
    """
    states = {(1, 3): 1.0}  # copies of A among 4 and among 6
    parents_d, now = 3, Exchange(2 * 1 * 3 / (4 * 3), 2 * 3 * 3 / (6 * 5), 0.5)
    for _ in range(2):
        after = {}
        for (k, j), mass in states.items():
            for i in range(3):  # the resident's two copies
                a = comb(2, i) * (k / 4) ** i * (1 - k / 4) ** (2 - i)
                for c in range(7):  # the donor's six recruited copies
                    q = j / (2 * parents_d)
                    b = comb(6, c) * q**c * (1 - q) ** (6 - c)
                    for x in range(max(0, c - 4), min(2, c) + 1):  # two of them move
                        h = comb(c, x) * comb(6 - c, 2 - x) / comb(6, 2)
                        key = i + x, c - x
                        after[key] = after.get(key, 0.0) + mass * a * b * h
        states = after
        now = newcomers.after_removal(now, 2, 1, 1, parents_d)
        parents_d = 2
        recipient = sum(m * 2 * k * (4 - k) / 12 for (k, j), m in states.items())
        donor = sum(m * 2 * j * (4 - j) / 12 for (k, j), m in states.items())
        between = sum(
            m * (k / 4 * (1 - j / 4) + (1 - k / 4) * j / 4) for (k, j), m in states.items()
        )
        assert_allclose(now, (recipient, donor, between), rtol=1e-13)


@settings(derandomize=True, deadline=None)
@given(
    own=st.integers(1, 100),
    came=st.integers(0, 50),
    h=st.floats(0.0, 1.0),
    d=st.floats(0.0, 1.0),
    b=st.floats(0.0, 1.0),
)
def test_that_diversities_stay_probabilities(own, came, h, d, b):
    after = newcomers.after_removal(Exchange(h, d, b), own + came, own, came, 5)
    assert min(after) >= 0
    assert max(after) <= 1 + 1e-12


def test_that_no_newcomers_leave_drift_alone():
    assert newcomers.identity_settled(20, 0) == 1.0
    after = newcomers.after_newcomers(Exchange(0.4, 0.5, 0.6), 20, 20, 0)
    assert_allclose(after, (0.4 * (1 - 1 / 40), 0.5, 0.6), rtol=1e-14)


def test_that_draws_broadcast():
    after = newcomers.after_removal(Exchange(np.zeros(4), 0.5, np.full((3, 1), 0.5)), 10, 8, 2, 30)
    assert after.recipient.shape == (3, 4)
    assert after.donor.shape == (3, 4)


def test_that_half_an_animal_is_refused_and_not_rounded():
    for refused in (0.5, -1):
        with pytest.raises(ValueError, match="whole number"):
            newcomers.both_resident(20, refused)
        with pytest.raises(ValueError, match="whole number"):
            newcomers.after_newcomers(Exchange(0.3, 0.5, 0.5), 20, 20, refused)
