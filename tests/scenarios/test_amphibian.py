"""An amphibian and a skin disease: how a protective allele gets a foothold."""

import pytest

from rescue_planner import places
from rescue_planner.case.file import load
from rescue_planner.case.what_if import applied
from rescue_planner.projection.compare import compare

NONE, FEW, WAIT = "No releases", "Few protected frogs now", "Wait, then sixty"
DIVERSE, BOTH = "Diverse frogs only", "Protected now, diverse later"
KEPT, FREQUENCY = "allele_kept:Skin defence", "allele_frequency:Skin defence"
ONE, BEFORE, AFTER, END = 2032, 2036, 2045, 2087  # read 2031.2, 2035.4, 2043.8 and 2085.8


@pytest.fixture(scope="module")
def case():
    return load(places.scenarios() / "amphibian-with-a-protective-allele.json").case


@pytest.fixture(scope="module")
def result(case):
    return compare(case)


def kept(result, plan, year):
    return float(result.get(plan, "exact", KEPT, "share").values[result.index_at(year)])


def mean(result, plan, measure, year):
    depth = "exact" if measure == FREQUENCY else "expected"
    return float(result.get(plan, depth, measure).values[result.index_at(year)])


def test_that_the_allele_never_comes_without_releases(result):
    assert kept(result, NONE, END) == 0.0


def test_that_six_frogs_may_fail_to_leave_the_allele_at_all(result):
    """3 a sex, 0.4 live, 0.8 as good: 0.96 a sex among 40 mothers and 35 fathers, m = 0.0250.

    The allele at 0.7 in the donor comes to 0.0175. Carriers survive 0.88 against 0.73, so among
    the young it is 0.0175 * 0.8636 / 0.7353 = 0.0206 at first order. Ne 34 is 68 copies: it is
    there with chance 1 - 0.979^68 = 0.76.
    """
    assert mean(result, FEW, "donor_ancestry", ONE) == pytest.approx(0.0250, abs=2e-4)
    assert kept(result, FEW, ONE) == pytest.approx(0.76, abs=0.015)


def test_that_few_frogs_now_lead_before_2036_and_sixty_later_lead_after(result):
    """Acting at once is ahead only until the breeding stock delivers ten times the frogs."""
    assert kept(result, FEW, BEFORE) > 0.5 > kept(result, WAIT, BEFORE) == 0.0
    assert kept(result, WAIT, AFTER) > 0.95
    assert kept(result, FEW, AFTER) < 0.6
    lead = mean(result, WAIT, FREQUENCY, END) - mean(result, FEW, FREQUENCY, END)
    assert lead > 0.3


def test_that_the_allele_spreads_by_itself_once_it_has_a_foothold(result):
    """With an advantage of a fifth when rare it doubles in about four generations, 17 years."""
    early, later = (mean(result, WAIT, FREQUENCY, year) for year in (2040, 2061))
    assert 1.6 < later / early < 2.2
    assert mean(result, WAIT, FREQUENCY, END) > 0.45


def test_that_the_diverse_donor_gains_most_diversity_and_hardly_any_protection(result):
    plans = (NONE, FEW, WAIT, DIVERSE, BOTH)
    best = max(plans, key=lambda p: mean(result, p, "gene_diversity_kept", BEFORE))
    assert best == DIVERSE
    assert mean(result, DIVERSE, "gene_diversity_kept", BEFORE) > 1.2
    assert kept(result, DIVERSE, END) < 0.4


def test_that_protected_now_and_diverse_later_ends_up_with_both(result):
    """Behind in diversity in 2035 by its fewer diverse frogs, level after its third release.

    The plan with diverse frogs only brings the allele as a few copies (0.02 of a third of 68, about
    one half copy), so it mostly lacks it.
    """
    measure = "gene_diversity_kept"
    assert mean(result, DIVERSE, measure, BEFORE) > mean(result, BOTH, measure, BEFORE) + 0.05
    assert mean(result, BOTH, measure, AFTER) > mean(result, DIVERSE, measure, AFTER) - 0.02
    assert kept(result, BOTH, END) > 0.9
    assert kept(result, DIVERSE, END) < 0.4


def test_that_later_diverse_frogs_hold_the_allele_down_while_they_come(result):
    """Frogs that lack it thin it out as fast as it spreads: about 0.13 from 2031 to 2044.

    The plan that waited, two generations later at its first release, is ahead by then.
    """
    held = [mean(result, BOTH, FREQUENCY, year) for year in (ONE, BEFORE, 2040, AFTER)]
    assert max(held) - min(held) < 0.04
    assert mean(result, WAIT, FREQUENCY, AFTER) > max(held) + 0.05


def test_that_the_few_copies_go_down_with_a_population_that_shrinks(result):
    """Six frogs don't stop the decline; fewer adults lose rare alleles faster, so chances fall."""
    assert float(result.get(FEW, "expected", "adults").values[-1]) < 5
    assert kept(result, FEW, END) < kept(result, FEW, AFTER) - 0.2


def test_that_the_breeding_stock_gives_what_it_holds_above_its_floor(case):
    """60 of 120 adults over three years leave just the 60 that must stay, if none is bred."""
    donor = next(d for d in case.donors if d.kind == "captive")
    release = case.plan(WAIT).releases[0]
    animals = (release.who.females.best + release.who.males.best) * release.when.times.best
    assert donor.adults.best - animals == donor.fewest_left.best


def test_that_the_order_holds_if_half_of_the_frogs_survive(case):
    """Half the animals: the chance at the first count falls to 1 - (1 - 0.0104)^68 = 0.51."""
    result = compare(applied(case, "Half of the released frogs survive"))
    assert kept(result, FEW, ONE) == pytest.approx(0.51, abs=0.02)
    assert kept(result, WAIT, END) > kept(result, FEW, END) + 0.5
