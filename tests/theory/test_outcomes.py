"""Dominance, tails, trade-offs. Sources from memory; worked values derived."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import outcomes

X, Y = [0.2, 0.4, 0.5, 0.7], [0.1, 0.4, 0.45, 0.7]
Z, W = [0.35, 0.4, 0.45, 0.5], [0.2, 0.3, 0.55, 0.65]


def test_that_dominance_is_found_as_stated():
    assert outcomes.dominates_first_order(X, Y)
    assert outcomes.dominates_second_order(X, Y)  # the first order implies the second
    assert not outcomes.dominates_first_order(Z, W)
    assert not outcomes.dominates_first_order(W, Z)
    assert outcomes.dominates_second_order(Z, W, margin=1e-12)
    assert not outcomes.dominates_second_order(W, Z, margin=1e-12)


def test_that_order_of_replicates_and_equality_do_not_matter():
    assert outcomes.dominates_first_order(X[::-1], [0.45, 0.1, 0.7, 0.4])
    assert not outcomes.dominates_first_order(X, X)
    assert not outcomes.dominates_second_order(X, X)


def test_that_dominance_inside_the_margin_is_not_claimed():
    """Pitfall: dominance inside Monte Carlo error."""
    better = np.array(X) + 0.001
    assert outcomes.dominates_first_order(better, X)
    assert not outcomes.dominates_first_order(better, X, margin=0.002)
    # the margin is per replicate: four gains of 0.001 don't add up to one of 0.004
    assert not outcomes.dominates_second_order(better, X, margin=0.002)
    assert outcomes.dominates_second_order(better, X, margin=0.0005)


def test_that_unequal_numbers_of_replicates_are_refused():
    with pytest.raises(ValueError, match="equally many"):
        outcomes.dominates_first_order([1, 2], [1, 2, 3])


def test_that_the_worst_fifth_has_the_stated_mean():
    values = [0, 0.05, 0.1, 0.2, 0.4, 0.5, 0.6, 0.7, 0.8, 0.95]
    assert_allclose(outcomes.lower_tail_mean(values[::-1], 0.2), 0.025, rtol=1e-13)
    assert_allclose(outcomes.lower_tail_mean(values, 1.0), np.mean(values), rtol=1e-13)
    quarter = (0 + 0.05 + 0.5 * 0.1) / 2.5  # half of the third replicate
    assert_allclose(outcomes.lower_tail_mean(values, 0.25), quarter, rtol=1e-13)


@pytest.mark.parametrize("share", [0.0, -0.1, 1.1])
def test_that_an_impossible_tail_is_refused(share):
    with pytest.raises(ValueError, match="worst outcomes"):
        outcomes.lower_tail_mean([1, 2], share)


def test_that_a_tail_mean_solves_its_variational_form():
    """Rockafellar & Uryasev: the largest over t of t - mean(max(0, t - x)) / share."""
    x = np.random.default_rng(2).gamma(2.0, size=40)
    slow = max(t - np.mean(np.maximum(0, t - x)) / 0.15 for t in x)
    assert_allclose(outcomes.lower_tail_mean(x, 0.15), slow, rtol=1e-12)


BENEFIT = [0.30, 0.45, 0.40, 0.60, 0.62, 0.52]  # a to f
COST = [10, 25, 30, 45, 70, 38]


def test_that_the_front_and_its_volume_are_as_stated():
    assert list(outcomes.pareto_front(BENEFIT, COST)) == [True, True, False, True, True, True]
    assert_allclose(outcomes.hypervolume(BENEFIT, COST, (0.0, 80.0)), 35.19, rtol=1e-13)


def test_that_equal_options_share_the_front():
    assert list(outcomes.pareto_front([1, 1, 0.5], [2, 2, 2])) == [True, True, False]


def test_that_the_volume_is_the_area_counted_on_a_grid():
    cells = (np.arange(1000) + 0.5) / 1000
    b, c = np.meshgrid(cells, cells * 80, indexing="ij")
    covered = np.zeros_like(b, dtype=bool)
    for benefit, cost in zip(BENEFIT, COST, strict=True):
        covered |= (b <= benefit) & (c >= cost)
    area = covered.mean() * 80
    assert_allclose(outcomes.hypervolume(BENEFIT, COST, (0.0, 80.0)), area, rtol=2e-3)


def test_that_options_beyond_the_reference_add_nothing():
    assert outcomes.hypervolume([0.1, 0.9], [10, 90], (0.2, 80)) == 0.0


def test_that_increments_show_extended_dominance():
    kept = outcomes.efficient_options(BENEFIT, COST, (0.10, 0.0))
    assert list(kept) == [0, 1, 3, 4]  # f, on the front, is beaten by a mix of b and d
    b, c = np.array(BENEFIT)[kept], np.array(COST)[kept]
    found = outcomes.incremental_costs(b, c, (0.10, 0.0))
    assert_allclose(found, [50, 100, 133.333, 1250], rtol=1e-5)
    with_f = outcomes.incremental_costs(
        [0.30, 0.45, 0.52, 0.60, 0.62], [10, 25, 38, 45, 70], (0.10, 0.0)
    )
    assert_allclose(with_f, [50, 100, 185.714, 87.5, 1250], rtol=1e-5)


def test_that_increments_of_efficient_options_rise():
    rng = np.random.default_rng(8)
    for _ in range(50):
        benefit, cost = rng.uniform(0.1, 1, 12), rng.uniform(1, 100, 12)
        kept = outcomes.efficient_options(benefit, cost, (0.0, 0.0))
        steps = outcomes.incremental_costs(benefit[kept], cost[kept], (0.0, 0.0))
        assert np.all(np.diff(steps) >= 0)


def test_that_average_costs_rank_otherwise():
    """Pitfall: e costs 134.6 on average yet 1250 for its last unit."""
    average = outcomes.average_cost(BENEFIT, COST, (0.10, 0.0))
    assert_allclose(average[4], 70 / 0.52, rtol=1e-13)


def test_that_dominated_options_have_no_increment():
    with pytest.raises(ValueError, match="leave dominated"):
        outcomes.incremental_costs(BENEFIT[:3], COST[:3], (0.1, 0.0))


def test_that_costs_are_discounted_from_their_year():
    found = outcomes.present_value([100.0, 100.0], [0, 10], [0.0, 0.03])
    assert_allclose(found, [200.0, 100 + 100 / 1.03**10], rtol=1e-13)
