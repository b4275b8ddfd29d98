"""Effective size. Wright 1931, 1938; Crow & Denniston 1988; Hill 1972; from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import size

DIGITS = 1e-11  # the check values are printed to 12 digits
exact = settings(derandomize=True, deadline=None)


@pytest.mark.parametrize(
    ("males", "females", "ne"),
    [(5, 20, 16), (1, 9, 3.6), (3, 47, 11.28), (1, 99, 3.96), (10, 10, 20), (0, 5, 0), (0, 0, 0)],
)
def test_that_unequal_sexes_give_wrights_size(males, females, ne):
    """Wright 1931, confirmed; zeros are the limit of no breeders of a sex."""
    assert_allclose(size.from_sexes(males, females), ne, rtol=1e-15)


@pytest.mark.parametrize(("males", "ne"), [(10, 24), (4, 12.6316), (1, 3.75)])
def test_that_fifteen_females_depend_on_their_males(males, ne):
    """Derived, printed to six figures."""
    assert_allclose(size.from_sexes(males, 15), ne, rtol=1e-5)


def test_that_changing_sizes_average_harmonically():
    """Textbook series (confirmed for the series); exact product derived."""
    sizes = [10, 100, 50, 80, 20, 500]
    assert_allclose(size.harmonic_mean(sizes), 30.8483290488, rtol=DIGITS)
    assert_allclose(size.equivalent_size(sizes), 30.5708396011, rtol=DIGITS)
    assert_allclose(np.prod(size.retained(sizes)), 0.905793346438, rtol=DIGITS)


def test_that_a_single_bottleneck_dominates_ten_generations():
    assert_allclose(size.harmonic_mean([1000] * 9 + [10]), 91.7431192661, rtol=DIGITS)


def test_that_fords_tiger_moths_give_the_printed_size():
    """Counts of Ford's scarlet tiger moth; 5374 printed in course notes, confirmed."""
    assert round(float(size.harmonic_mean([11000, 2000, 11000, 16000]))) == 5374


@pytest.mark.parametrize(
    ("young", "ne"), [([0, 0, 1, 1, 2, 3, 4, 5], 6.0), ([2] * 8, 15.0), ([1, 3] * 4, 10.0)]
)
def test_that_family_sizes_give_the_chance_of_one_parent(young, ne):
    """Derived: 1/Ne = sum k(k-1) / [T(T-1)], the chance that two gametes share a parent."""
    k = np.array(young)
    shared = np.sum(k * (k - 1)) / (k.sum() * (k.sum() - 1))
    assert_allclose(size.from_family_variance(k.size, k.var()), 1 / shared, rtol=1e-13)
    assert_allclose(1 / shared, ne, rtol=1e-13)


@pytest.mark.parametrize(
    ("newborn", "length", "variance", "ne"),
    [
        (40, 2.8, 6.85333333333, 50.6024096386),
        (20, 2.5, 2, 50),
        (100, 3.4, 23.1666666667, 54.0397350993),
    ],
)
def test_that_overlapping_generations_give_hills_size(newborn, length, variance, ne):
    """Derived: within 0.3 % of an exact age-class identity recursion."""
    assert_allclose(size.from_overlapping_generations(newborn, length, variance), ne, rtol=1e-10)


def test_that_a_ratio_scales_the_count():
    assert_allclose(size.from_ratio([100.0, 250.0], 0.1), [10.0, 25.0], rtol=1e-15)


def test_that_a_year_loses_the_part_of_a_generation_that_compounds():
    loss = size.yearly_loss(25.0, 4.0)
    assert_allclose((1 - loss) ** 4, size.retained(25.0), rtol=1e-14)
    assert_allclose(loss, 1 / (2 * 25 * 4), rtol=0.01)  # Hill's first look, 1 % off at Ne 25
    assert size.yearly_loss(0.5, 4.0) == 1.0


def test_that_the_size_to_keep_a_share_keeps_it():
    ne = size.size_to_keep([0.9, 0.95], [25.0, 10.0])
    assert_allclose(size.retained(ne) ** [25.0, 10.0], [0.9, 0.95], rtol=1e-13)


def test_that_less_than_one_gene_copy_is_refused():
    with pytest.raises(ValueError, match=r"below 0\.5"):
        size.retained([10.0, 0.4])
    assert size.retained(0.5) == 0.0


@exact
@given(m=st.floats(0.5, 500.0), f=st.floats(0.5, 500.0))
def test_that_the_scarcer_sex_bounds_the_size(m, f):
    ne = size.from_sexes(m, f)
    assert ne <= (m + f) * (1 + 1e-15)
    assert ne <= 4 * min(m, f) * (1 + 1e-15)
    assert ne == size.from_sexes(f, m)


@exact
@given(sizes=st.lists(st.floats(1.0, 1000.0), min_size=1, max_size=12))
def test_that_an_equivalent_size_lies_between_the_sizes(sizes):
    ne = size.equivalent_size(sizes)
    assert min(sizes) * (1 - 1e-10) <= ne <= max(sizes) * (1 + 1e-10)
    assert ne <= np.mean(sizes) * (1 + 1e-10)
    assert_allclose(
        size.retained(ne) ** len(sizes), np.prod(size.retained(sizes)), rtol=1e-12, atol=1e-300
    )
