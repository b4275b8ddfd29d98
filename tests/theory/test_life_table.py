"""Life table. Derived values to six figures; Lotka 1913, Leslie 1945, Caswell 2001, from memory."""

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import life_table

SIX = 1e-5  # the check values are printed to six figures
BIRD = (0.7, 0.5, 0.8, 0.8, 2, 10)  # daughters, first year, subadult, adult, first age, last age
exact = settings(derandomize=True, deadline=None)
rate = st.floats(0.01, 1.0)


def parts(table):
    return life_table.births_and_survival(life_table.female_matrix(*table))


def precise_growth(table):
    """Root of the Euler-Lotka sum, written out with 40 digits: another route to lambda."""
    births, young, subadult, adult, first, last = table
    with mpmath.workdps(40):
        b, a = mpmath.mpf(births) * mpmath.mpf(young), mpmath.mpf(adult)
        reach = b * mpmath.mpf(subadult) ** (first - 1)
        terms = [(x, reach * a ** (x - first)) for x in range(first, last + 1)]

        def excess(y):
            return mpmath.log(mpmath.fsum(t * mpmath.exp(-x * y) for x, t in terms if t))

        low = max(mpmath.log(t) / x for x, t in terms if t)
        high = low + mpmath.log(len(terms))
        root = low if excess(low) == 0 else mpmath.findroot(excess, (low, high), "anderson")
        return float(mpmath.exp(root))


def test_that_the_matrix_has_ages_where_they_belong():
    matrix = life_table.female_matrix(0.7, 0.5, 0.6, 0.8, 3, 5)
    stated = [
        [0, 0, 0.35, 0.35, 0.35],
        [0.6, 0, 0, 0, 0],
        [0, 0.6, 0, 0, 0],
        [0, 0, 0.8, 0, 0],
        [0, 0, 0, 0.8, 0],
    ]
    assert_allclose(matrix, stated, rtol=1e-15)


def test_that_a_birds_life_table_grows_as_stated():
    """Derived: Euler-Lotka, pre- and post-breeding matrix agree."""
    assert_allclose(life_table.growth(*BIRD), 1.04377, rtol=SIX)
    assert_allclose(life_table.net_reproduction(*parts(BIRD)), 1.2121, rtol=SIX)


def test_that_leaving_out_first_year_survival_would_show():
    """Derived: the commonest error gives 1.24222."""
    assert_allclose(life_table.growth(0.7, 1.0, 0.8, 0.8, 2, 10), 1.24222, rtol=SIX)


def test_that_the_other_census_point_grows_alike():
    """Post-breeding census: classes are ages 0..9, a mother first survives, then breeds."""
    post = np.zeros((11, 11))
    post[1, 0] = 0.5
    for age in range(1, 10):
        post[age + 1, age] = 0.8
    post[0, 1:10] = 0.8 * 0.7
    post[0, 0] = (
        0.0  # first breeding at age 2: a newborn doesn't breed at the end of its first year
    )
    assert_allclose(life_table.dominant_eigenvalue(post), life_table.growth(*BIRD), rtol=1e-12)


def test_that_reproductive_values_and_stable_ages_are_as_stated():
    matrix = life_table.female_matrix(*BIRD)
    values, ages = life_table.reproductive_values(matrix), life_table.stable_ages(matrix)
    assert_allclose(values[[0, 1, 4, 8, 9]], [1, 1.30472, 1.1447, 0.59233, 0.335322], rtol=SIX)
    assert_allclose(ages[:2], [0.251117, 0.192469], rtol=SIX)
    assert_allclose(ages.sum(), 1.0, rtol=1e-14)


def test_that_a_removed_animal_costs_its_relative_reproductive_value():
    """Derived: v_x / sum(v w), ages 1, 2, 5, 9."""
    matrix = life_table.female_matrix(*BIRD)
    values, ages = life_table.reproductive_values(matrix), life_table.stable_ages(matrix)
    relative = values / (values @ ages)
    stated = [0.909647, 1.18683, 1.04127, 0.538811]
    assert_allclose(relative[[0, 1, 4, 8]], stated, rtol=SIX)


def test_that_three_generation_lengths_keep_their_names():
    lengths = life_table.generation_lengths(*parts(BIRD))
    assert_allclose(lengths.cohort, 4.60478, rtol=SIX)
    assert_allclose(lengths.stable_population, 4.37775, rtol=SIX)
    assert_allclose(lengths.to_grow_by_r0, 4.48984, rtol=SIX)


def test_that_mothers_mean_age_is_the_stable_populations_length():
    lengths = life_table.generation_lengths(*parts(BIRD))
    assert_allclose(life_table.mean_age_of_mothers(*BIRD), lengths.stable_population, rtol=1e-12)


def test_that_a_steady_population_has_one_generation_length():
    """At lambda = 1 ln R0 / ln lambda is 0/0; its limit is the cohort's length."""
    births = 0.7 / float(life_table.net_reproduction(*parts(BIRD)))
    lengths = life_table.generation_lengths(*parts((births, *BIRD[1:])))
    assert_allclose(lengths.to_grow_by_r0, lengths.cohort, rtol=1e-7)
    assert_allclose(lengths.stable_population, lengths.cohort, rtol=1e-7)


def test_that_an_old_age_without_end_gives_the_closed_form():
    """Mean age at lambda = 1 with constant adult survival: first + s/(1-s) = 6, derived."""
    births = 0.2 / 0.8  # R0 = births * 0.8 / (1 - 0.8) = 1 with first breeding at age 2
    age = life_table.mean_age_of_mothers(births, 1.0, 0.8, 0.8, 2, 400)
    assert_allclose(age, 6.0, rtol=1e-12)
    assert_allclose(life_table.growth(births, 1.0, 0.8, 0.8, 2, 400), 1.0, rtol=1e-14)


def test_that_nobody_breeding_means_growth_zero():
    growth = life_table.growth(
        [0.0, 1.0, 1.0, 1.0], [0.5, 0.0, 0.5, 0.5], [0.5, 0.5, 0.0, 0.5], [0.5, 0.5, 0.5, 0.0], 2, 5
    )
    assert_allclose(growth, [0, 0, 0, np.sqrt(0.25)], atol=1e-16)
    assert life_table.mean_age_of_mothers(0.0, 0.5, 0.5, 0.5, 2, 5) == 2.0


def test_that_a_single_class_grows_by_its_births():
    assert life_table.growth(2.0, 0.5, 0.3, 0.9, 1, 1) == 1.0
    assert_allclose(life_table.growth(3.0, 0.5, 0.0, 0.0, 1, 1), 1.5, rtol=1e-15)


def test_that_extreme_rates_stay_exact():
    for table in ((1e-300, 0.5, 0.99, 0.99, 1, 60), (1e300, 0.5, 0.99, 0.99, 2, 60)):
        assert_allclose(life_table.growth(*table), precise_growth(table), rtol=1e-13)


def test_that_ages_out_of_order_are_refused():
    for call in (life_table.growth, life_table.female_matrix, life_table.mean_age_of_mothers):
        for first, last in ((0, 5), (6, 5)):
            with pytest.raises(ValueError, match="ages"):
                call(1.0, 0.5, 0.5, 0.5, first, last)


def test_that_ten_thousand_draws_are_the_matrices_eigenvalues():
    """numpy's general eigenvalues: an independent solver, itself good to about 1e-13 here."""
    rng = np.random.default_rng(11)
    table = (rng.uniform(0.05, 3, 2000), *rng.uniform(0.02, 1, (3, 2000)))
    for first, last in ((1, 1), (1, 4), (2, 10), (3, 15)):
        eigen = life_table.dominant_eigenvalue(life_table.female_matrix(*table, first, last))
        assert_allclose(life_table.growth(*table, first, last), eigen, rtol=1e-12)


@exact
@given(b=st.floats(0.01, 10), young=rate, sub=rate, adult=rate, first=st.integers(1, 6))
def test_that_growth_is_the_root_to_the_last_digits(b, young, sub, adult, first):
    table = (b, young, sub, adult, first, first + 9)
    assert_allclose(life_table.growth(*table), precise_growth(table), rtol=1e-14)


@exact
@given(adult=st.floats(0.2, 1.0), near=st.floats(-1e-5, 1e-5), first=st.integers(1, 4))
def test_that_growth_near_adult_survival_is_no_special_place(adult, near, first):
    """Where lambda is almost adult survival the geometric sum is 0/0: a series takes over."""
    n = 8
    births = (adult * (1 + near)) ** first / n
    table = (births, 1.0, 1.0, adult, first, first + n - 1)
    assert_allclose(life_table.growth(*table), precise_growth(table), rtol=1e-14)


@exact
@given(b=st.floats(0.01, 10), young=rate, sub=rate, adult=rate, more=st.floats(1.0, 2.0))
def test_that_growth_rises_with_every_rate(b, young, sub, adult, more):
    base = life_table.growth(b, young, sub, adult, 2, 8) * (1 - 1e-14)
    assert life_table.growth(b * more, young, sub, adult, 2, 8) >= base
    assert life_table.growth(b, young, min(1, sub * more), adult, 2, 8) >= base
    assert life_table.growth(b, young, sub, min(1, adult * more), 2, 8) >= base
    assert life_table.growth(b, young, sub, adult, 2, 9) >= base


def test_that_draws_broadcast_against_single_rates():
    young = np.array([0.2, 0.5, 0.8])[:, np.newaxis]
    births = np.array([0.5, 1.0])
    together = life_table.growth(births, young, 0.7, 0.8, 2, 10)
    assert together.shape == (3, 2)
    assert_allclose(together[1, 0], life_table.growth(0.5, 0.5, 0.7, 0.8, 2, 10), rtol=1e-15)
    matrix = life_table.female_matrix(births, young, 0.7, 0.8, 2, 10)
    assert matrix.shape == (3, 2, 10, 10)
    assert life_table.stable_ages(matrix).shape == (3, 2, 10)
