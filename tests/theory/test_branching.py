"""Branching oracles. Harris 1963, Kendall 1948, Bailey 1964, from memory; values derived."""

import mpmath
import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import branching

SIX = 1e-5
AT = [1, 2, 5, 10, 20, 50]


@pytest.mark.parametrize(
    ("m", "values", "ever"),
    [
        (0.9, (0.40657, 0.586204, 0.802771, 0.915083, 0.976331, 0.99909), 1.0),
        (1.0, (0.367879, 0.531464, 0.731923, 0.841765, 0.912429, 0.96235), 1.0),
        (1.1, (0.332871, 0.480061, 0.657874, 0.750718, 0.802363, 0.822864), 0.823866),
        (1.5, (0.22313, 0.311828, 0.394979, 0.41514, 0.41717, 0.417188), 0.417188),
    ],
)
def test_that_a_poisson_line_ends_as_stated(m, values, ever):
    assert_allclose(branching.poisson_by_generation(m, 50)[AT], values, rtol=SIX)
    assert_allclose(branching.poisson_ever(m), ever, rtol=SIX)


def test_that_the_end_is_the_root_of_its_generating_function():
    """Pitfall: the wrong branch of Lambert's function gives 1 everywhere."""
    m = np.array([1.05, 1.1, 1.2, 2.0])
    q = branching.poisson_ever(m)
    assert_allclose(q[[0, 2, 3]], [0.906298, 0.686302, 0.203188], rtol=SIX)
    assert_allclose(q, np.exp(m * (q - 1)), rtol=1e-13)
    assert np.all(q < 1.0)


def test_that_founders_multiply_their_chances():
    q = branching.poisson_ever(1.1)
    assert_allclose(q ** np.array([5, 10]), [0.379562, 0.144067], rtol=SIX)
    by = branching.poisson_by_generation(1.1, 50)[[10, 50]] ** 10
    assert_allclose(by, [0.0568551, 0.142325], rtol=SIX)


YEARS = [1, 10, 20, 50, 100]


@pytest.mark.parametrize(
    ("animals", "values", "ever"),
    [
        (1, (0.15576, 0.587124, 0.692222, 0.76334, 0.776867), 0.778006),
        (10, (8.4055e-09, 0.00486746, 0.0252613, 0.0671707, 0.0800699), 0.0812511),
        (20, (7.06525e-17, 2.36921e-05, 0.000638136, 0.00451191, 0.0064112), 0.00660173),
    ],
)
def test_that_overlapping_generations_end_as_stated(animals, values, ever):
    q = branching.gone_by(0.8, 0.25, 100)
    assert_allclose(q[YEARS] ** animals, values, rtol=SIX)
    assert_allclose(branching.gone_ever(0.8, 0.25) ** animals, ever, rtol=SIX)


def test_that_the_order_of_events_changes_the_answer():
    """Only survivors breed, the same growth 1.05: 0.822405, not 0.778006."""
    found = branching.gone_ever(0.8, 0.3125, only_survivors=True)
    assert_allclose(found, 0.822405, rtol=SIX)
    by = branching.gone_by(0.8, 0.3125, 4000, only_survivors=True)
    assert_allclose(by[-1], found, rtol=1e-12)


@pytest.mark.parametrize(("s", "b"), [(0.8, 0.2), (0.7, 0.1), (0.5, 0.5)])
def test_that_a_line_that_does_not_grow_always_ends(s, b):
    assert branching.gone_ever(s, b) == 1.0


def test_that_the_root_is_that_of_arbitrary_precision():
    with mpmath.workdps(30):
        s, b = mpmath.mpf("0.8"), mpmath.mpf("0.25")

        def excess(q):
            return (1 - s + s * q) * mpmath.exp(b * (q - 1)) - q

        root = mpmath.findroot(excess, (0.6, 0.9), "anderson")
    assert_allclose(branching.gone_ever(0.8, 0.25), float(root), rtol=1e-13)


def test_that_two_ages_end_as_stated():
    found = branching.two_ages_gone_by(0.5, 0.8, 0.5, 2000)
    stated = [[0.68455, 0.416716], [0.832344, 0.671636], [0.887637, 0.775386]]
    assert_allclose(found[[5, 20, 100]], stated, rtol=SIX)
    assert_allclose(found[-1], [0.889003, 0.778006], rtol=SIX)


def schedule(ne, b, years):
    y = np.arange(1, years + 1)
    f = 1 - (1 - 1 / (2 * ne)) ** (y / 5)
    return 0.30 * np.exp(-b * f)


@pytest.mark.parametrize(
    ("ne", "b", "values", "growth"),
    [
        (25, 0, (3.33781e-05, 9.35548e-05, 9.81795e-05), 1.1),
        (25, 1.57, (6.69332e-05, 0.000464473, 0.00135835), 0.978026),
        (25, 3, (0.00012615, 0.003146, 0.35525), 0.910676),
        (25, 6, (0.000460668, 0.137943, 0.996965), 0.840831),
        (10, 6, (0.0100643, 0.927206, 0.999997), 0.80639),
    ],
)
def test_that_a_schedule_of_inbreeding_ends_twenty_lines_as_stated(ne, b, values, growth):
    found = [branching.gone_on_schedule(0.8, schedule(ne, b, y)) ** 20 for y in (20, 50, 100)]
    assert_allclose(found, values, rtol=SIX)
    assert_allclose(0.8 + schedule(ne, b, 100)[-1], growth, rtol=SIX)


def test_that_schedules_are_composed_backwards():
    """Pitfall: forwards gives another number. Two years written out over all outcomes."""
    s, b = [0.5, 0.9], [0.8, 0.1]
    last = branching.all_breed(0.0, s[1], b[1])
    k = np.arange(60)
    poisson = np.exp(-b[0] + k * np.log(b[0]) - np.cumsum(np.log(np.maximum(k, 1))))
    slow = sum(p * last**n * (0.5 + 0.5 * last) for n, p in zip(k, poisson, strict=True))
    assert_allclose(branching.gone_on_schedule(s, b), slow, rtol=1e-12)
    assert abs(branching.gone_on_schedule(s[::-1], b[::-1]) - slow) > 0.01


def test_that_a_constant_schedule_is_the_plain_recursion():
    found = branching.gone_on_schedule(np.full((2, 30), 0.8), np.full(30, 0.25))
    assert_allclose(found, branching.gone_by(0.8, 0.25, 30)[-1], rtol=1e-13)


@pytest.mark.parametrize(
    ("rates", "t", "n", "gone"),
    [
        ((0.3, 0.25), 10, 1, 0.662999),
        ((0.3, 0.25), 10, 10, 0.0164107),
        ((0.3, 0.25), 100, 10, 0.159691),
        ((0.25, 0.25), 10, 10, 0.0345716),
        ((0.2, 0.25), 20, 10, 0.332522),
    ],
)
def test_that_births_and_deaths_in_continuous_time_end_as_stated(rates, t, n, gone):
    assert_allclose(branching.birth_death(*rates, t, n).gone, gone, rtol=SIX)


def test_that_births_and_deaths_have_the_stated_moments():
    found = branching.birth_death(0.3, 0.25, 10, 10)
    assert_allclose((found.mean, found.variance), (16.4872, 117.652), rtol=SIX)
    level = branching.birth_death(0.25, 0.25, 10, 10)
    near = branching.birth_death(0.25 + 1e-9, 0.25, 10, 10)
    assert_allclose(level, near, rtol=1e-6)
    assert_allclose(branching.birth_death_ever(0.3, 0.25, 10), (0.25 / 0.3) ** 10, rtol=1e-13)
    assert branching.birth_death_ever(0.2, 0.25, 10) == 1.0


def test_that_births_and_deaths_solve_their_equations():
    """Independent: matrix exponential of the rates, cut at 400 animals."""
    from scipy.linalg import expm

    top, birth, death = 400, 0.3, 0.25
    rates = np.zeros((top + 1, top + 1))
    for n in range(1, top):
        rates[n, n - 1], rates[n, n + 1], rates[n, n] = death * n, birth * n, -(birth + death) * n
    mass = expm(10.0 * rates)[10]
    number = np.arange(top + 1)
    mean = mass @ number
    slow = (mass[0], mean, mass @ (number - mean) ** 2)
    assert_allclose(branching.birth_death(birth, death, 10, 10), slow, rtol=1e-8)


def test_that_newcomers_keep_a_failing_population_as_stated():
    found = branching.birth_death_with_newcomers(0.2, 0.25, 0.1)
    assert_allclose(found, (0.447214, 2.0, 10.0), rtol=SIX)
    with pytest.raises(ValueError, match="below the death rate"):
        branching.birth_death_with_newcomers(0.3, 0.25, 0.1)
