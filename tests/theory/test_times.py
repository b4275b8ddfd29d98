"""Generations between two frequencies. Derived; Haldane 1924, Crow & Kimura 1970, from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import selection, times
from rescue_planner.theory.fitness_forms import against_other, heterozygote_best, multiplicative

DIGITS = 1e-11  # the check values are printed to 12 digits
ROWS = [
    (0.01, 0.5, 1829, 1838.04794005, 1828.85770035),
    (0.01, 0, 10812, 10818.013869, 10813.4187492),
    (0.01, 1, 10717, 10818.013869, 10714.4288502),
    (0.1, 0.5, 175, 183.804794005, 174.614554305),
    (0.1, 0, 1075, 1081.8013869, 1077.20626705),
    (0.1, 1, 981, 1081.8013869, 978.216368062),
    (0.5, 0.5, 28, 36.7609588011, 27.5707191008),
    (0.5, 0, 210, 216.36027738, 211.76515753),
    (0.5, 1, 115, 216.36027738, 112.77525854),
]


@pytest.mark.parametrize(("s", "h", "count", "weak", "integral"), ROWS)
def test_that_one_to_ninety_nine_percent_takes_this_long(s, h, count, weak, integral):
    w = against_other(s, h)
    assert times.generations_counted(0.01, 0.99, w) == count
    assert_allclose(times.generations_weak(0.01, 0.99, s, h), weak, rtol=DIGITS)
    assert_allclose(times.generations_by_integral(0.01, 0.99, w), integral, rtol=DIGITS)
    assert abs(integral / count - 1) < 0.021  # "within about 2 %" where mean fitness is kept


def test_that_intermediate_dominance_has_its_closed_form():
    """Derived, closed form and quadrature agree."""
    assert_allclose(times.generations_weak(0.01, 0.99, 0.1, 0.25), 216.483174055, rtol=DIGITS)


def test_that_complete_dominance_is_the_limit_of_nearly_complete():
    near = times.generations_weak(0.01, 0.9, 0.05, [1e-5, 1 - 1e-5])
    assert_allclose(near, times.generations_weak(0.01, 0.9, 0.05, [0.0, 1.0]), rtol=1e-3)


def test_that_a_multiplicative_gene_has_an_exact_time():
    t = times.generations_multiplicative(0.01, 0.99, 1.0, 0.95)
    assert_allclose(t, 179.170392739, rtol=DIGITS)
    assert times.generations_counted(0.01, 0.99, multiplicative(1.0, 0.95)) == np.ceil(t)


def test_that_a_recessive_lethal_slows_without_end():
    assert_allclose(times.generations_recessive_lethal(0.01, 0.001), 900.0, rtol=1e-12)
    counted = times.generations_counted(1 - 0.5, 1 - 0.0834, [1.0, 1.0, 0.0])
    assert counted == 10  # 1/2 to 1/12


def test_that_haldanes_printed_times_come_out():
    """Haldane 1924, s = 0.001 against recessives, percentages of dominants; from memory."""
    share = np.array([1e-5, 0.01, 0.5, 0.99, 0.99999])
    p = -np.expm1(0.5 * np.log1p(-share))
    found = times.generations_weak(p[:-1], p[1:], 0.001, 0.0)
    # the last spans four nines: the printed number differs by its own rounding of the start
    assert_allclose(found, [6920, 4819, 11664, 309780], atol=0.5, rtol=2e-5)
    assert_allclose(found, [6920.31519, 4818.584931, 11664.3846, 309783.8369], rtol=1e-8)
    assert times.generations_counted(p[1], p[2], [1.0, 1.0, 0.999]) == 4817


def test_that_a_count_runs_downwards_too():
    w = against_other(0.1, 0.5)[::-1]
    assert times.generations_counted(0.99, 0.01, w) == times.generations_counted(
        0.01, 0.99, against_other(0.1, 0.5)
    )


def test_that_an_end_never_reached_is_said_and_not_counted():
    over = heterozygote_best(0.1, 0.3)  # rests at 0.75
    for way in (times.generations_counted, times.generations_by_integral):
        assert list(way(0.5, [0.7, 0.8, 0.4], over)[1:]) == [np.inf, np.inf]
        assert np.isfinite(way(0.5, 0.7, over))
        assert way(0.5, 0.9, [1.0, 1.0, 1.0]) == np.inf
        assert way(0.4, 0.4, [1.0, 0.9, 0.8]) == 0.0
        assert way(0.4, 0.4, [1.0, 1.0, 1.0]) == 0.0
    assert times.generations_counted(0.5, 1.0, [1.0, 0.9, 0.8]) == np.inf
    assert times.generations_counted(0.5, 1.0, [1.0, 0.0, 0.0]) == 1  # only AA lives


def test_that_endless_counting_is_refused():
    with pytest.raises(ValueError, match="too weak to count"):
        times.generations_counted(0.1, 0.9, [1.0, 0.9999, 0.9998], most=50)


@settings(derandomize=True, deadline=None)
@given(start=st.floats(0.05, 0.9), s=st.floats(0.05, 0.5), h=st.floats(0.0, 1.0))
def test_that_the_count_is_the_first_generation_past_the_target(start, s, h):
    w, goal = against_other(s, h), start + 0.08
    count = int(times.generations_counted(start, goal, w))
    p = np.float64(start)
    for _ in range(count - 1):
        p = selection.after_selection(p, w)
    assert p < goal <= selection.after_selection(p, w)


def test_that_times_broadcast():
    w = against_other([[0.1], [0.2]], [0.0, 0.5, 1.0])
    together = times.generations_by_integral(0.1, 0.9, w)
    assert together.shape == (2, 3)
    assert_allclose(together[1, 2], times.generations_by_integral(0.1, 0.9, against_other(0.2, 1)))
    assert times.generations_counted(0.1, 0.9, w).shape == (2, 3)
