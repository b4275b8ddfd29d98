"""A small marsupial and a moving climate: the donor with less diversity keeps up better."""

import pytest

from rescue_planner import places
from rescue_planner.case.file import load
from rescue_planner.case.what_if import applied
from rescue_planner.projection.compare import compare

NONE, COOL, WARM = "No releases", "Cool, diverse donor", "Warm donor"
HALF, DOUBLE = "Half from each", "Warm donor, twice as many"
EARLY, LATE, END = 2030, 2061, 2071  # read 2029.2, 2060.0 and 2071.0


@pytest.fixture(scope="module")
def case():
    return load(places.scenarios() / "marsupial-and-a-moving-climate.json").case


@pytest.fixture(scope="module")
def result(case):
    return compare(case, depths=("expected",))


def at(result, plan, measure, year):
    return float(result.get(plan, "expected", measure).values[result.index_at(year)])


def test_that_both_donors_give_the_same_ancestry_at_first(result):
    """6 + 6 animals twice in the first generation, times 0.6 times 0.8: 5.76 a sex.

    Against 30 mothers and 15 fathers: (5.76 / 35.76 + 5.76 / 20.76) / 2 = 0.219.
    """
    for plan in (COOL, WARM, HALF):
        assert at(result, plan, "donor_ancestry", EARLY) == pytest.approx(0.219, abs=5e-4)


def test_that_the_cool_donor_gives_more_diversity_throughout(result):
    for year in range(EARLY, END, 2):
        lead = at(result, COOL, "gene_diversity_kept", year) - at(
            result, WARM, "gene_diversity_kept", year
        )
        assert lead > 0.03


def test_that_the_warm_donor_moves_the_mean_by_its_share_of_the_difference(result):
    """0.219 * 2.3 SD = 0.504 by mixing; selection then pulls a little back, to 0.1."""
    assert 0.42 < at(result, WARM, "trait_mean", EARLY) < 0.504


def test_that_growth_favours_the_cool_donor_first_and_the_warm_donor_later(result):
    """At first the warm animals overshoot the optimum; with a climb of 0.06 SD a year it overtakes.

    By hand for 2060: lags 1.47 and 1.12, fitness ratio exp((1.47^2 - 1.12^2) / (2 * 5.9)) = 1.08,
    while inbreeding takes 4 % off the warm plan's survival: about 3 to 4 % more first-year
    survival, half of that in yearly growth.
    """
    early = at(result, COOL, "yearly_growth", EARLY) - at(result, WARM, "yearly_growth", EARLY)
    late = at(result, WARM, "yearly_growth", LATE) - at(result, COOL, "yearly_growth", LATE)
    assert early > 0.03
    assert 0.008 < late < 0.03
    assert at(result, COOL, "yearly_growth", LATE) < 1.0 < at(result, WARM, "yearly_growth", LATE)


def test_that_the_warm_donor_has_more_animals_in_the_end(result):
    assert at(result, WARM, "adults", END) > at(result, COOL, "adults", END) * 1.1


def test_that_the_warm_donor_lags_less_by_a_third_of_an_sd(result):
    lag = at(result, COOL, "trait_lag", LATE) - at(result, WARM, "trait_lag", LATE)
    assert 0.25 < lag < 0.45


def test_that_variance_from_mixing_mostly_vanishes_in_a_few_generations(result):
    """What association of genes adds halves with each mating; the genic part stays."""
    peak, later = (at(result, WARM, "additive_variance_kept", year) for year in (2032, 2045))
    assert peak > 2.0
    assert 1.0 < later < 1.4


def test_that_twice_as_many_grow_best_but_cost_half_of_the_local_ancestry(case, result):
    plans = (NONE, COOL, WARM, HALF, DOUBLE)
    assert max(plans, key=lambda p: at(result, p, "yearly_growth", LATE)) == DOUBLE
    assert max(plans, key=lambda p: at(result, p, "donor_ancestry", LATE)) == DOUBLE
    ceiling = next(t for t in case.targets if t.measure == "donor_ancestry").at_most.best
    assert (
        at(result, DOUBLE, "donor_ancestry", 2070)
        > ceiling
        > at(result, WARM, "donor_ancestry", 2070)
    )


def test_that_every_plan_still_falls_behind_the_climate(result):
    """0.06 SD a year is 0.13 a generation, above the 0.1 that is rarely followed."""
    for plan in result.plans:
        assert at(result, plan, "trait_lag", END) > at(result, plan, "trait_lag", 2045) + 0.3


def test_that_the_cool_donor_stays_ahead_if_the_climate_moves_half_as_fast(case):
    """Lags halve, so their cost falls to a quarter, and diversity decides again."""
    slow = compare(applied(case, "The climate moves half as fast"), depths=("expected",))
    assert at(slow, COOL, "yearly_growth", LATE) > at(slow, WARM, "yearly_growth", LATE)
    assert at(slow, COOL, "adults", END) == pytest.approx(220)
