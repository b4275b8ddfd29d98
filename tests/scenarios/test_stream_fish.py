"""A stream fish with few numbers known: what newcomers and a longer stream do, in closed forms."""

import pytest

from rescue_planner import places
from rescue_planner.case.file import load
from rescue_planner.case.what_if import applied
from rescue_planner.projection.compare import compare

NONE, ONE, FIVE = "No releases", "One newcomer a generation", "Five newcomers a generation"
JOIN, BOTH = "Join the pools", "Join the pools, one newcomer"
END = 2087  # 20 generations of three years


@pytest.fixture(scope="module")
def case():
    return load(places.scenarios() / "stream-fish-with-few-numbers.json").case


@pytest.fixture(scope="module")
def result(case):
    return compare(case)


def at(result, plan, measure, year=END):
    return float(result.get(plan, "expected", measure).values[result.index_at(year)])


@pytest.mark.parametrize(("plan", "size"), [(NONE, 22), (JOIN, 55)])
def test_that_a_closed_population_loses_one_part_in_2ne_each_generation(result, plan, size):
    """(1 - 1/44)^20 = 0.631 and, with Ne 2.5 times as large, (1 - 1/110)^20 = 0.833."""
    kept = at(result, plan, "gene_diversity_kept")
    assert kept == pytest.approx((1 - 1 / (2 * size)) ** 20, abs=1e-12)


@pytest.mark.parametrize(("plan", "newcomers"), [(ONE, 1), (BOTH, 1), (FIVE, 5)])
def test_that_ancestry_follows_the_share_of_newcomers_among_parents(result, plan, newcomers):
    """Half join 30 mothers, half 30 fathers: 1 - (1 - m)^20, 28 % for one, 80 % for five."""
    m = newcomers / 2 / (30 + newcomers / 2)
    assert at(result, plan, "donor_ancestry") == pytest.approx(1 - (1 - m) ** 20, abs=1e-12)


def test_that_diversity_and_local_ancestry_rank_the_plans_in_opposite_order(result):
    by_diversity = sorted((JOIN, ONE, FIVE), key=lambda p: at(result, p, "gene_diversity_kept"))
    by_local = sorted((JOIN, ONE, FIVE), key=lambda p: -at(result, p, "donor_ancestry"))
    assert by_diversity == [JOIN, ONE, FIVE]
    assert by_local == by_diversity[::-1]
    assert at(result, FIVE, "donor_ancestry") > 0.75


def test_that_one_newcomer_holds_diversity_where_it_is(result):
    """The rule of thumb: about where it stands after 60 years, not a rescue."""
    assert at(result, ONE, "gene_diversity_kept") == pytest.approx(0.97, abs=0.02)


def test_that_the_order_of_newcomer_and_joined_pools_turns_if_half_of_them_breed(case, result):
    """One newcomer keeps clearly more than joined pools, half a newcomer keeps less.

    Joined pools do not change with newcomers: 0.833 both times.
    """
    lead = at(result, ONE, "gene_diversity_kept") - at(result, JOIN, "gene_diversity_kept")
    assert lead > 0.1
    fewer = compare(applied(case, "Half of the newcomers breed"))
    assert at(fewer, JOIN, "gene_diversity_kept") == pytest.approx(0.833, abs=1e-3)
    assert at(fewer, ONE, "gene_diversity_kept") < at(fewer, JOIN, "gene_diversity_kept")


def test_that_joining_pools_and_one_newcomer_meet_both_targets(case, result):
    for target in case.targets:
        value = at(result, BOTH, target.measure)
        if target.at_least is not None:
            assert value > target.at_least.best
        if target.at_most is not None:
            assert value < target.at_most.best


def test_that_steady_flow_counts_as_newcomers_and_not_as_released_animals(result):
    assert at(result, FIVE, "effective_migrants") == pytest.approx(100)
    assert at(result, FIVE, "released") == 0
    assert at(result, BOTH, "cost") == 140_000


def test_that_a_case_without_a_life_cycle_has_no_numbers_of_animals(result):
    assert not {"adults", "yearly_growth", "sustainable_shift"} & set(result.measures)
