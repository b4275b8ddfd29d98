"""When donor ancestry reaches a level. Derived; 20 % then 2.5 % after Hedrick 1995."""

import numpy as np
from numpy.testing import assert_allclose

from rescue_planner.theory import flow

DIGITS = 1e-11  # the check values are printed to 12 digits


def test_that_half_donor_ancestry_comes_when_worked_out():
    """The 2.5 % is from memory."""
    assert_allclose(flow.generations_to_ancestry(0.5, 0.2, 0.025), 19.564151744, rtol=DIGITS)
    # without a pulse every generation brings the same: the pulse is one of them
    assert_allclose(flow.generations_to_ancestry(0.2, 0.025, 0.025), 8.81369948981, rtol=DIGITS)


def test_that_the_pulse_is_the_first_generation():
    """An exponent t in place of t - 1 would miss it by one."""
    schedule = np.full(40, 0.025)
    schedule[0] = 0.2
    course = flow.pulse_schedule_ancestry(schedule)
    assert_allclose(
        flow.generations_to_ancestry(course[1:], 0.2, 0.025), np.arange(2, 41), rtol=1e-12
    )


def test_that_enough_is_reached_at_once_and_nothing_never():
    assert flow.generations_to_ancestry(0.2, 0.2, 0.025) == 1.0
    assert flow.generations_to_ancestry(0.1, 0.2, 0.0) == 1.0
    assert flow.generations_to_ancestry(0.3, 0.2, 0.0) == np.inf
