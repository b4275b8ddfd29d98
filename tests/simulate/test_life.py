"""What happens in a year besides births and deaths: releases, loans, donors, rules, sums."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from lives import TWO, life, world

from rescue_planner.simulate.run import run
from rescue_planner.simulate.world import DieOff, Donor, Release, Rule, Steady

STILL = life(survival=(1.0, 1.0, 1.0), mean_young=3.0)


def with_donor(still=True, **changes):
    """A recipient and a donor; `still`: no young lives, and adults are young at the start."""
    given = {
        "years": 8,
        "life": STILL,
        "adults": 10,
        "adult_females": 5,
        "diversity": TWO,
        "donors": (Donor(100),),
        "markers": 1,
    }
    whole = {**given, **changes}
    if still:
        whole["first_year_times"] = np.zeros(whole["years"])
    return world(**whole)


@settings(max_examples=25, deadline=None)
@given(
    pairing=st.tuples(st.sampled_from(["pairs", "harems", "open"]), st.booleans()),
    gradual=st.booleans(),
    first=st.sampled_from([(1, 1), (2, 3), (3, 1)]),
    capacity=st.sampled_from([0.0, 3.5, 12.0, np.inf]),
    arrival=st.tuples(st.integers(1, 4), st.sampled_from([None, 1, 3])),
    seed=st.integers(0, 2**64 - 1),
)
def test_that_animals_are_conserved_and_ancestry_sums(
    pairing, gradual, first, capacity, arrival, seed
):
    (form, stay), (age, loan) = pairing, arrival
    aged = life(
        first_breeding_age=first,
        last_age=6,
        survival=(0.6, 0.8, 0.8),
        survival_sd=(0.1, 0.1, 0.1),
        young_sd=0.5,
        mean_young=2.5,
        form=form,
        gradual=gradual and capacity > 0,
        stay_together=stay,
        unequal_success=0.8,
        die_offs=(DieOff(0.3, (0.5, 0.5, 0.5), 0.5),),
    )
    start = with_donor(
        still=False,
        years=10,
        life=aged,
        adults=14,
        adult_females=7,
        capacity=np.full(10, capacity),
        diversity=np.full((3, 3), 0.4),
        donors=(Donor(30), Donor(40, 20, aged, 40.0)),
        releases=(
            Release(0, 0, 2, 1, age, 0.7, 0.5, loan),
            Release(3, 1, 0, 3, age, 0.9, 2.0, loan, 10.0, 100.0),
        ),
        steady=(Steady(1, 3.0, 2, 5),),
        markers=70,
        lethal_first_year=5.0,
        lethal_young=2.0,
    )
    r = run(start, 6, seed, chunk=2)
    balance = (
        r.of("born")
        - r.of("died_in_first_year")
        - r.of("died")
        - r.of("removed")
        - r.of("left")
        + r.of("arrived")
    )
    animals = r.of("animals")
    assert np.array_equal(animals, animals[:, :1] + balance)
    assert np.all(r.of("adults") <= animals)
    assert np.array_equal(r.of("adults"), r.of("adult_females") + r.of("adult_males"))
    if not gradual and capacity > 0:
        assert np.all(r.of("adults")[:, 1:] <= np.floor(capacity))
    both = r.of("donor_ancestry:0") + r.of("donor_ancestry:1")
    np.testing.assert_allclose(both, r.of("donor_ancestry"), atol=1e-12)
    assert np.all(np.diff(r.of("persists"), axis=1) <= 0)
    gone = r.of("adults") == 0
    assert np.array_equal(np.isnan(r.of("gene_diversity")), gone)
    assert not np.any(np.isnan(r.of("cost")))


def test_that_the_census_is_taken_before_the_years_releases():
    r = run(with_donor(releases=(Release(0, 0, 3, 2, 1), Release(8 - 1, 0, 1, 0, 1))), 2, 1)
    assert list(r.of("adults")[0]) == [10, *[15] * 7, 16]
    assert list(r.of("released")[0]) == [0, *[5] * 7, 6]


def test_that_losers_leave_at_once_and_the_donor_loses_them_too():
    r = run(with_donor(releases=(Release(0, 0, 20, 20, 1, survive_to_breed=0.7),)), 300, 2)
    arrived = r.of("arrived")[:, 1]
    assert abs(arrived.mean() - 28.0) < 5 * np.sqrt(40 * 0.21 / 300)
    assert np.array_equal(arrived + r.of("lost_after_release")[:, 1], np.full(300, 40.0))
    assert np.all(r.of("donor_adults:0")[:, 1] == 60)


def test_that_young_released_animals_wait_untouched_until_they_breed():
    hard = life(first_breeding_age=(3, 3), survival=(0.0, 0.0, 0.0), mean_young=0.0, last_age=9)
    start = with_donor(life=hard, subadults=(4, 4), releases=(Release(0, 0, 5, 5, 1),))
    r = run(start, 3, 3)
    assert list(r.of("animals")[0]) == [18, 10, 10, 0, 0, 0, 0, 0, 0]
    assert list(r.of("adults")[0]) == [10, 0, 10, 0, 0, 0, 0, 0, 0]


def test_that_an_adult_let_go_breeds_in_its_first_year():
    start = with_donor(
        years=1,
        life=life(survival=(1.0, 1.0, 1.0), mean_young=3.0),
        adults=5,
        adult_females=5,
        releases=(Release(0, 0, 0, 1, 1),),
    )
    r = run(start, 200, 4)
    assert r.of("born")[:, 1].mean() > 10
    assert np.all(r.of("effective_migrants")[:, 1] == (r.of("born")[:, 1] > 0))


def test_that_a_loan_ends_after_so_many_breeding_seasons():
    r = run(with_donor(releases=(Release(1, 0, 0, 4, 1, loan_years=2),)), 2, 5)
    assert list(r.of("adults")[0]) == [10, 10, 14, 14, 10, 10, 10, 10, 10]
    assert r.of("left")[0, -1] == 4


def test_that_a_factor_changes_how_often_released_animals_have_young():
    one = life(survival=(1.0, 1.0, 1.0), mean_young=4.0, share_of_females_breeding=0.5)
    share = {}
    for factor in (0.0, 0.5, 1.0):
        start = with_donor(
            still=False,
            years=1,
            life=one,
            adults=20,
            adult_females=10,
            markers=40,
            releases=(Release(0, 0, 10, 10, 1, 1.0, factor),),
        )
        r = run(start, 600, 6)
        n = r.of("adults")[:, 1]
        # Ancestry of the young: all adults' less the 40 grown ones, half of which are donors.
        share[factor] = (r.of("donor_ancestry")[:, 1] * n - 20).sum() / (n - 40).sum()
        assert abs(r.of("born")[:, 1].mean() - 20 * (1 + factor)) < 1.5
    assert share[0.0] == pytest.approx(0.0, abs=1e-9)
    # Mothers and fathers each: f / (1 + f), to the first order in numbers of mothers.
    assert share[0.5] == pytest.approx(1 / 3, abs=0.015)
    assert share[1.0] == pytest.approx(1 / 2, abs=0.015)


def test_that_steady_flow_is_poisson_in_its_years_and_not_released():
    start = with_donor(generation_years=4.0, steady=(Steady(0, 6.0, 2, 4),))
    r = run(start, 1500, 7)
    came = np.diff(r.of("arrived"), axis=1)
    assert np.all(came[:, [0, 1, 5, 6, 7]] == 0)
    inside = came[:, 2:5]
    assert abs(inside.mean() - 1.5) < 5 * np.sqrt(1.5 / inside.size)
    assert abs(inside.var() - 1.5) < 5 * np.sqrt((1.5 + 2 * 1.5**2) / inside.size)
    assert np.all(r.of("released") == 0)
    females = r.of("adult_females")[:, -1] - 5
    assert abs(females.mean() - 2.25) < 5 * np.sqrt(2.25 / 1500)


def test_that_a_donor_emptied_gives_no_more_and_it_is_counted():
    r = run(with_donor(donors=(Donor(7),), releases=(Release(0, 0, 5, 5, 1),)), 2, 8)
    assert list(r.of("arrived")[0, :2]) == [0, 7]
    assert r.of("not_available")[0, -1] == 3
    assert r.of("donor_adults:0")[0, -1] == 0


def test_that_taking_animals_lowers_a_donor_that_lives_and_leaves_its_weather():
    steady = life(survival=(0.4, 0.8, 0.8), mean_young=1.0, form="pairs")
    donor = Donor(60, 30, steady)
    none = with_donor(donors=(donor,))
    some = with_donor(donors=(donor,), releases=(Release(0, 0, 10, 10, 1),))
    without, taken = run(none, 400, 9), run(some, 400, 9)
    a, b = without.of("donor_adults:0"), taken.of("donor_adults:0")
    assert np.array_equal(a[:, 0], b[:, 0])
    assert abs((b / a)[:, 1].mean() - 2 / 3) < 0.02
    assert np.corrcoef(a[:, 1], b[:, 1])[0, 1] > 0.2


def plain_rule(rule, seen, years):
    """When a rule with no survey error acts, from what it read: {year: times}."""
    row, acts, times = 0, {}, 0
    for year in range(years):
        if year % rule.survey_every_years:
            continue
        value = seen[year]
        met = (rule.above is None or value > rule.above) and (
            rule.below is None or value < rule.below
        )
        row = row + 1 if met and not np.isnan(value) else 0
        if row < rule.surveys:
            continue
        row = 0
        if times < rule.at_most:
            times += 1
            acts[year + rule.delay_years] = acts.get(year + rule.delay_years, 0) + 1
    return {year: n for year, n in acts.items() if year < years}


@pytest.mark.parametrize(
    ("surveys", "every", "delay", "at_most"),
    [(1, 1, 0, 1), (2, 1, 1, 3), (2, 3, 2, 2), (3, 2, 0, 9)],
)
def test_that_rules_act_when_their_surveys_have_seen_enough(surveys, every, delay, at_most):
    years = 25
    falling = life(survival=(0.5, 0.85, 0.85), mean_young=0.6)
    rule = Rule(
        "adults",
        "release",
        below=9.0,
        surveys=surveys,
        survey_every_years=every,
        delay_years=delay,
        at_most=at_most,
        release=Release(None, 0, 2, 2, 1),
    )
    start = with_donor(
        still=False,
        years=years,
        life=falling,
        adults=20,
        adult_females=10,
        rules=(rule,),
        donors=(Donor(999),),
    )
    r = run(start, 60, 10)
    for replicate in range(60):
        acts = plain_rule(rule, r.of("adults")[replicate], years)
        got = {int(y): int(r.acted[replicate, 0, y]) for y in np.flatnonzero(r.acted[replicate, 0])}
        assert got == acts
        came = np.diff(r.of("released")[replicate])
        assert {int(y): came[y] // 4 for y in np.flatnonzero(came)} == acts


def test_that_a_stop_ends_releases_and_flow_for_good():
    start = with_donor(
        releases=tuple(Release(y, 0, 1, 0, 1) for y in range(8)),
        steady=(Steady(0, 40.0, 0, 7),),
        rules=(Rule("released", "stop", above=2.5, delay_years=1),),
    )
    r = run(start, 5, 11)
    # Three are out after year 2; the census of year 3 sees them; year 4 is the first without.
    assert np.all(r.of("released")[:, -1] == 4)
    assert np.all(np.diff(r.of("arrived"), axis=1)[:, 4:] == 0)
    assert np.all(r.acted[:, 0, 4] == 1)


def test_that_a_survey_error_makes_a_rule_act_by_its_chance():
    rule = Rule("adults", "stop", above=12.0, survey_sd=2.0)
    r = run(with_donor(years=1, rules=(rule,)), 4000, 12)
    chance = 0.15866  # of a normal number above 1
    seen = r.acted[:, 0, 0].mean()
    assert abs(seen - chance) < 5 * np.sqrt(chance * (1 - chance) / 4000)


def test_that_money_is_summed_after_the_year_it_is_spent():
    start = with_donor(
        releases=(Release(1, 0, 2, 1, 1, cost_each_animal=10.0, cost_each_event=100.0),),
        cost=np.array([0, 0, 0, 7.0, 0, 0, 0, 0]),
    )
    assert list(run(start, 1, 13).of("cost")[0]) == [0, 0, 130, 130, 137, 137, 137, 137, 137]


def test_that_persistence_is_not_undone_by_a_later_release():
    start = with_donor(
        life=replace(STILL, survival=(1, 1, 0.0)), releases=(Release(2, 0, 5, 5, 1),)
    )
    assert list(run(start, 1, 14).of("persists")[0]) == [1, *[0] * 8]


def test_that_all_die_in_the_first_year_without_a_nan_outside_genetics():
    r = run(with_donor(life=replace(STILL, survival=(0.0, 0.0, 0.0)), markers=40), 3, 15)
    assert np.all(r.of("adults")[:, 1:] == 0)
    assert np.all(r.mean("gene_diversity").runs[1:] == 0)
    for name in r.measures:
        if np.any(np.isnan(r.of(name))):
            assert "ancestry" in name or name in {
                "gene_diversity",
                "gene_diversity_kept",
                "observed_heterozygosity",
                "inbreeding",
                "kinship",
                "rare_alleles_kept",
            }
