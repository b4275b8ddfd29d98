"""Rules for choosing. Sources from memory; worked values derived."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import decisions

SIX = 1e-5
exact = settings(derandomize=True, deadline=None)
PAYOFFS = [[0.80, 0.35, 0.30], [0.65, 0.60, 0.40], [0.55, 0.55, 0.50], [0.70, 0.20, 0.45]]
CHANCES = [0.5, 0.3, 0.2]
GAMBLES = [([0.9, 0.3], [0.5, 0.5]), ([0.55, 0.55], [0.5, 0.5]), ([0.75, 0.1], [0.8, 0.2])]


@pytest.mark.parametrize(
    ("rho", "values", "best"),
    [
        (0.0, (0.6, 0.55, 0.62), 2),
        (2.0, (0.514932, 0.55, 0.536107), 1),
        (5.0, (0.428912, 0.55, 0.393051), 1),
        (-2.0, (0.685068, 0.55, 0.671384), 0),
    ],
)
def test_that_risk_attitude_turns_the_order_as_stated(rho, values, best):
    found = [decisions.certainty_equivalent(x, p, rho) for x, p in GAMBLES]
    assert_allclose(found, values, rtol=SIX)
    assert np.argmax(found) == best


@exact
@given(rho=st.floats(-8, 8), x=st.lists(st.floats(0, 1), min_size=3, max_size=3))
def test_that_the_sure_payoff_has_the_gambles_utility(rho, x):
    sure = decisions.certainty_equivalent(x, CHANCES, rho)
    mean = np.sum(np.array(CHANCES) * decisions.utility(x, rho))
    assert_allclose(decisions.utility(sure, rho), mean, rtol=1e-6, atol=1e-9)


def test_that_utility_is_anchored_and_smooth_through_indifference():
    assert_allclose(decisions.utility([0.0, 1.0], 3.0), [0.0, 1.0], atol=1e-15)
    rho = np.array([-1.1e-6, -0.9e-6, 0.0, 0.9e-6, 1.1e-6])
    assert_allclose(decisions.utility(0.3, rho), 0.3 + 0.5 * rho * 0.21, rtol=0, atol=1e-12)
    near = decisions.certainty_equivalent([0.9, 0.3], [0.5, 0.5], rho)
    assert_allclose(near, 0.6 - 0.5 * rho * 0.09, rtol=0, atol=1e-9)


@pytest.mark.parametrize(
    ("rule", "values", "chosen"),
    [
        (decisions.worst_case, (0.3, 0.4, 0.5, 0.2), 2),
        (decisions.best_case, (0.8, 0.65, 0.55, 0.7), 0),
        (decisions.equal_weights, (0.483333, 0.55, 0.533333, 0.45), 1),
        (lambda x: decisions.hurwicz(x, 0.4), (0.5, 0.5, 0.52, 0.4), 2),
        (lambda x: -decisions.greatest_regret(x), (-0.25, -0.15, -0.25, -0.4), 1),
        (lambda x: decisions.expected(x, CHANCES), (0.565, 0.585, 0.54, 0.5), 1),
    ],
)
def test_that_each_rule_values_actions_as_stated(rule, values, chosen):
    found = rule(PAYOFFS)
    assert_allclose(found, values, rtol=SIX)
    assert np.argmax(found) == chosen
    assert_allclose(rule([PAYOFFS, PAYOFFS])[1], values, rtol=SIX)


def test_that_regret_hangs_on_the_options_at_hand():
    """Pitfall: a poor option added turns the choice between the others."""
    two = np.array([[0.6, 0.3], [0.45, 0.5]])
    assert np.argmin(decisions.greatest_regret(two)) == 1
    third = np.vstack([two, [0.9, 0.0]])
    assert np.argmin(decisions.greatest_regret(third)) == 0


def test_that_hurwicz_runs_from_worst_to_best():
    assert_allclose(decisions.hurwicz(PAYOFFS, 0.0), decisions.worst_case(PAYOFFS))
    assert_allclose(decisions.hurwicz(PAYOFFS, 1.0), decisions.best_case(PAYOFFS))


KNOW_FIRST = [[1, 0, 0], [0, 1, 1]]
TEST_FIRST = [[0.85, 0.2, 0.2], [0.15, 0.8, 0.8]]


def test_that_information_is_worth_what_is_stated():
    assert_allclose(decisions.value_of_perfect_information(PAYOFFS, CHANCES), 0.095, rtol=1e-12)
    assert_allclose(decisions.value_of_signal(PAYOFFS, CHANCES, KNOW_FIRST), 0.08, rtol=1e-12)
    assert_allclose(decisions.value_of_signal(PAYOFFS, CHANCES, TEST_FIRST), 0.04475, rtol=1e-12)
    after = decisions.updated(CHANCES, TEST_FIRST[0])
    assert_allclose(after[0], 0.809524, rtol=SIX)
    assert_allclose(np.array(TEST_FIRST[0]) @ CHANCES, 0.525, rtol=1e-14)


@exact
@given(
    payoffs=st.lists(st.lists(st.floats(0, 1), min_size=3, max_size=3), min_size=2, max_size=4),
    sensitivity=st.floats(0, 1),
    specificity=st.floats(0, 1),
)
def test_that_a_test_is_worth_nothing_to_perfect_knowledge(payoffs, sensitivity, specificity):
    """0 <= EVSI <= EVPPI <= EVPI, always."""
    likelihood = [
        [sensitivity, 1 - specificity, 1 - specificity],
        [1 - sensitivity, specificity, specificity],
    ]
    sample = decisions.value_of_signal(payoffs, CHANCES, likelihood)
    partial = decisions.value_of_signal(payoffs, CHANCES, KNOW_FIRST)
    perfect = decisions.value_of_perfect_information(payoffs, CHANCES)
    assert 0.0 <= sample <= partial + 1e-12
    assert partial <= perfect + 1e-12


def test_that_a_signal_which_tells_all_is_perfect_information():
    found = decisions.value_of_signal(PAYOFFS, CHANCES, np.eye(3))
    assert_allclose(found, decisions.value_of_perfect_information(PAYOFFS, CHANCES), rtol=1e-12)
    assert_allclose(
        decisions.value_of_signal(PAYOFFS, CHANCES, np.full((2, 3), 0.5)), 0, atol=1e-15
    )


@pytest.mark.parametrize("chances", [[0.5, 0.3, 0.3], [1.2, -0.2, 0.0]])
def test_that_probabilities_must_be_probabilities(chances):
    with pytest.raises(ValueError, match="sum to 1"):
        decisions.expected(PAYOFFS, chances)
    with pytest.raises(ValueError, match="sum to 1"):
        decisions.certainty_equivalent([0.1, 0.2, 0.3], chances, 1.0)


def test_that_a_signals_chances_must_sum_to_one_in_every_scenario():
    with pytest.raises(ValueError, match="sum to 1"):
        decisions.value_of_signal(PAYOFFS, CHANCES, [[0.85, 0.2, 0.2], [0.15, 0.8, 0.7]])
