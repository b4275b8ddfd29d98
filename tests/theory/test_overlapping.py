"""Overlapping generations. Derived; Hill 1972, 1979, from memory."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import families, overlapping, size
from rescue_planner.theory.families import SexFamilies

DIGITS = 1e-11  # the check values are printed to 12 digits
ROWS = [
    ([40, 20, 16, 12], [0, 0.4, 0.4, 0.2], 2.8, 0.996465661348, 50.5247080612),
    ([20, 20, 20], [0, 0.5, 0.5], 2.5, 0.995999295698, 49.9911977743),
    ([100, 20, 16, 12, 8], [0, 0.25, 0.3, 0.25, 0.2], 3.4, 0.997273746880, 53.9417350591),
]


@pytest.mark.parametrize(("numbers", "shares", "length", "kept", "ne"), ROWS)
def test_that_age_classes_drift_at_the_exact_rate(numbers, shares, length, kept, ne):
    found = overlapping.exact_age_classes(numbers, shares)
    assert_allclose(found.generation_length, length, rtol=1e-14)
    assert_allclose(found.kept_per_unit, kept, rtol=1e-12)
    assert_allclose(found.ne, ne, rtol=DIGITS)


@pytest.mark.parametrize(("numbers", "shares", "length", "kept", "ne"), ROWS)
def test_that_hills_size_is_close_to_the_exact_one(numbers, shares, length, kept, ne):
    n = np.array(numbers, float)
    spread = families.lifetime_variance(n / n[0], 2 * n[0] * np.array(shares) / n)
    assert_allclose(size.from_overlapping_generations(n[0], length, spread), ne, rtol=0.003)


def test_that_one_age_class_is_the_ideal_population():
    found = overlapping.exact_age_classes([25], [1.0])
    assert_allclose(found, (1.0, 1 - 1 / 50, 25.0), rtol=1e-12)


def test_that_resampled_age_classes_lose_diversity_so():
    """Second way: 40,000 loci through 40 years of 12, 8 and 5 animals, seed fixed, 4 errors."""
    rng = np.random.default_rng(20270101)
    numbers, shares, loci = [12, 8, 5], np.array([0.0, 0.6, 0.4]), 40_000
    ages = [rng.random((loci, 2 * n)) < 0.5 for n in numbers]
    course = []
    for _ in range(41):
        p = np.stack([a.mean(axis=1) for a in ages])
        course.append(p[0] * (1 - p[0]))
        born = rng.random((loci, 2 * numbers[0])) < (shares @ p)[:, None]
        older = []
        for n, a in zip(numbers[1:], ages[:-1], strict=True):
            kept = np.argsort(rng.random(a.shape), axis=1)[:, : 2 * n]  # copies survive at random
            older.append(np.take_along_axis(a, kept, axis=1))
        ages = [born, *older]
    first, last = course[10].mean(), course[40].mean()
    error = course[40].std() / np.sqrt(loci) / last / 30
    error += course[10].std() / np.sqrt(loci) / first / 30
    rate = (last / first) ** (1 / 30)
    assert abs(rate - overlapping.exact_age_classes(numbers, shares).kept_per_unit) < 4 * error


def test_that_two_sexes_give_hills_worked_sizes():
    """Derived: Poisson, and a case in which the full and the short form agree."""
    poisson = [SexFamilies(5, 1, 4, 1, 4, 0), SexFamilies(20, 0.25, 1, 0.25, 1, 0)]
    assert_allclose(overlapping.two_sexes_full(*poisson, 1.0), 16.0, rtol=1e-14)
    males, females = SexFamilies(10, 1, 1, 3, 3, 2), SexFamilies(10, 1, 1, 1.2, 1.2, 0.1)
    assert_allclose(overlapping.two_sexes_full(males, females, 4), 38.5542168675, rtol=DIGITS)
    spread = 3 + 3 + 2 * 2, 1.2 + 1.2 + 2 * 0.1
    assert_allclose(overlapping.two_sexes_short(20, 4, *spread), 38.5542168675, rtol=DIGITS)


@pytest.mark.parametrize(("m", "f"), [(3, 47), (10, 10), (1, 9)])
def test_that_poisson_sexes_are_wrights_at_any_ratio(m, f):
    """Limit: one age class (L = 1), Poisson sons and daughters."""
    males = SexFamilies(m, 1, f / m, 1, f / m, 0)
    females = SexFamilies(f, m / f, 1, m / f, 1, 0)
    assert_allclose(overlapping.two_sexes_full(males, females, 1), size.from_sexes(m, f))


def test_that_the_short_form_of_one_sex_is_that_of_two_alike():
    assert_allclose(
        overlapping.two_sexes_short(30, 5, 6, 6), size.from_overlapping_generations(30, 5, 6)
    )


def test_that_a_year_is_not_a_generation():
    """1/(2 Ne) is lost a generation, 1/(2 Ne L) a year."""
    found = overlapping.exact_age_classes(*ROWS[0][:2])
    assert_allclose(1 - found.kept_per_unit, 1 / (2 * found.ne * found.generation_length))
    assert_allclose(size.size_to_keep_for_years(0.9, 100, 4), size.size_to_keep(0.9, 25))
    ne = size.size_to_keep_for_years(0.9, 100.0, 4.0)
    assert_allclose((1 - size.yearly_loss(ne, 4.0)) ** 100, 0.9, rtol=1e-12)


@pytest.mark.parametrize(
    ("numbers", "shares"), [([20, 10], [0.5, 0.3]), ([20, 10], [1.0]), (20, 1.0)]
)
def test_that_shares_must_fit_the_classes(numbers, shares):
    with pytest.raises(ValueError, match="one number and one share"):
        overlapping.exact_age_classes(numbers, shares)
