"""Evolutionary rescue. Gomulkiewicz & Holt 1995 from memory, verified by iteration."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import evolutionary_rescue as rescue
from rescue_planner.theory import trait

SIX = 1e-5
PEAK = rescue.Peak(1.5)
CASES = [
    (500, 3.0, 0.3, (3.99533, 395.094, 4, None)),
    (500, 4.5, 0.3, (17.3071, 3.17501, 18, (3, 39))),
    (500, 4.5, 0.6, (8.5197, 34.7132, 9, (3, 17))),
    (5000, 4.5, 0.3, (17.3071, 31.7501, 18, (9, 29))),
]


@pytest.mark.parametrize(("n0", "lag", "h2", "stated"), CASES)
def test_that_numbers_fall_and_rise_as_stated(n0, lag, h2, stated):
    """w2 = 9, V_P = 1, W_max = 1.5, N_c = 100."""
    turn, least, at, below = stated
    assert_allclose(rescue.generations_to_growth(lag, h2, PEAK), turn, rtol=SIX)
    course = rescue.course_after_shift(n0, lag, h2, PEAK, 60)
    assert np.argmin(course.log_numbers) == at
    assert_allclose(np.exp(course.log_numbers.min()), least, rtol=SIX)
    count = rescue.generations_below(course.log_numbers, 100)
    under = np.flatnonzero(course.log_numbers < np.log(100))
    if below is None:
        assert count == 0
    else:
        assert (under[0], under[-1], count) == (*below, below[1] - below[0] + 1)


def test_that_the_closed_form_is_the_generation_by_generation_course():
    """Independent: mean fitness and response of `trait`, step by step."""
    log_n, lag = np.log(500.0), 4.5
    course = rescue.course_after_shift(500, lag, 0.3, rescue.Peak(1.5, 1.2, 7.0), 25)
    for t in range(26):
        assert_allclose(course.log_numbers[t], log_n, rtol=1e-11)
        assert_allclose(course.lag[t], lag, rtol=1e-11)
        log_n += np.log(1.5 * trait.mean_fitness_at(lag, 1.2, 7.0))
        lag -= float(trait.response(lag, 0.3 * 1.2, 0.7 * 1.2, 7.0))


def test_that_growth_may_never_stop_or_never_come():
    assert rescue.generations_to_growth(0.5, 0.3, PEAK) == 0.0
    assert rescue.generations_to_growth(0.0, 0.3, PEAK) == 0.0
    assert (
        rescue.generations_to_growth(4.5, 0.3, rescue.Peak(1.0)) == np.inf
    )  # the best type declines
    assert rescue.generations_to_growth(4.5, 0.0, PEAK) == np.inf  # nothing is inherited


def test_that_draws_broadcast():
    course = rescue.course_after_shift(500, [3.0, 4.5], 0.3, PEAK, 60)
    assert course.log_numbers.shape == (2, 61)
    assert_allclose(np.exp(course.log_numbers.min(axis=-1)), [395.094, 3.17501], rtol=SIX)
