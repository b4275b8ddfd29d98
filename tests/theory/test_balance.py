"""Mutation against selection. Derived; Haldane 1927, 1937, Crow & Kimura 1970, from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import balance, selection
from rescue_planner.theory.fitness_forms import against_other

DIGITS = 1e-11  # the check values are printed to 12 digits


@pytest.mark.parametrize(
    ("u", "s", "h", "settled", "load"),
    [
        (1e-6, 0.1, 0.5, 2e-5 / (1 + 1e-6), 1.999998e-6),
        (1e-6, 1, 0.02, 4.98805229243e-5, 1.99760946087e-6),
        (1e-5, 1, 0, 0.00316227766017, 1e-5),
        (1e-6, 0.2, 0.1, 4.9979966044e-5, 1.99959832128e-6),
        (1e-4, 0.01, 0.25, 0.0372248922976, 0.000193052924521),
    ],
)
def test_that_mutation_holds_a_harmful_allele_here(u, s, h, settled, load):
    q = balance.harmful_frequency(u, s, h)
    assert_allclose(q, settled, rtol=DIGITS)
    assert_allclose(balance.mutation_load(q, s, h), load, rtol=1e-6 if h == 0.5 else DIGITS)


def test_that_the_load_does_not_depend_on_how_bad_the_allele_is():
    """Haldane 1937: u for a hidden allele (exact), about 2u otherwise."""
    s = np.array([0.01, 0.1, 1.0])
    hidden = balance.mutation_load(balance.harmful_frequency(1e-5, s, 0.0), s, 0.0)
    assert_allclose(hidden, 1e-5, rtol=1e-12)
    shown = balance.mutation_load(balance.harmful_frequency(1e-6, s, 0.5), s, 0.5)
    assert_allclose(shown, 2e-6, rtol=1e-3)


@pytest.mark.parametrize(
    ("f", "settled", "rule"),
    [
        (0.0, 0.000247069668713, 0.00025),
        (0.05, 7.23944763594e-5, 7.24637681159e-5),
        (0.25, 1.88669563182e-5, 1.88679245283e-5),
    ],
)
def test_that_inbreeding_purges_the_balance(f, settled, rule):
    assert_allclose(balance.harmful_frequency(1e-6, 0.2, 0.02, f), settled, rtol=DIGITS)
    assert_allclose(balance.harmful_frequency_approximate(1e-6, 0.2, 0.02, f), rule, rtol=DIGITS)


@settings(derandomize=True, deadline=None)
@given(
    u=st.floats(1e-6, 1e-3),
    s=st.floats(0.05, 1.0),
    h=st.floats(0.0, 0.5),
    f=st.floats(0.0, 0.9),
)
def test_that_a_generation_leaves_the_balance_where_it_is(u, s, h, f):
    q = balance.harmful_frequency(u, s, h, f)
    survived, mean = balance.after_selection_inbred(1 - q, against_other(s, h), f)
    assert_allclose(1 - selection.after_mutation(survived, 0.0, u), q, atol=1e-15, rtol=1e-9)
    assert_allclose(1 - mean, balance.mutation_load(q, s, h, f), atol=1e-15, rtol=1e-9)


def test_that_mutation_can_overwhelm_selection():
    """Second way: a million generations are not needed, 20,000 settle it."""
    p = np.float64(0.999)
    for _ in range(20_000):
        p = selection.after_mutation(
            selection.after_selection(p, against_other(0.001, 0.9)), 0.0, 0.01
        )
    assert p < 1e-6
    assert balance.harmful_frequency(0.01, 0.001, 0.9) == 1.0
    assert balance.harmful_frequency(0.01, 0.001, 0.0) == 1.0
    assert balance.harmful_frequency(1e-5, 0.0, 0.5) == 1.0


def test_that_no_mutation_leaves_none():
    assert list(balance.harmful_frequency(0.0, 0.1, [0.0, 0.5, 1.0])) == [0.0, 0.0, 0.0]


def test_that_the_rule_has_no_answer_for_a_hidden_allele():
    assert balance.harmful_frequency_approximate(1e-6, 0.1, 0.0) == np.inf


@pytest.mark.parametrize(
    ("f", "after", "mean"),
    [(0.0, 0.903258246179, 0.9944), (0.25, 0.906994348002, 0.9908), (1.0, 0.918367346939, 0.98)],
)
def test_that_selection_among_inbred_young_sees_more_homozygotes(f, after, mean):
    found = balance.after_selection_inbred(0.9, [1.0, 0.98, 0.8], f)
    assert_allclose(found, [after, mean], rtol=DIGITS)


def test_that_no_survivor_is_an_error():
    with pytest.raises(ValueError, match="mean fitness is 0"):
        balance.after_selection_inbred(0.5, [0.0, 1.0, 0.0], 1.0)
