"""Remarks on the course of every plan, and on what plans take from donors."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.projection.compare import compare
from rescue_planner.projection.donor_take import ceiling_course, donor_takes
from rescue_planner.projection.leaves_out import leaves_out
from rescue_planner.projection.remarks import every_remark


def keys(case):
    return {remark.key for remark in every_remark(case)}


def pulse(females, donor="Mainland", **when):
    return {
        "name": "Pulse",
        "releases": [
            {"donor": donor, "who": {"females": females}, "when": {"first_year": 2027, **when}}
        ],
    }


def test_that_a_ceiling_donor_of_sixty_can_give_six_a_year_but_not_eight():
    """N' = min(80, 1.1 N) - R from 60 adults, five years: R = 6 holds 60, R = 8 leaves 47.79.

    Worked value from the recursion itself (derived).
    """
    for taken, left in ((6, 60.0), (8, 47.7898)):
        course = ceiling_course(60, 1.1, 80, dict.fromkeys(range(2027, 2032), taken))
        assert_allclose(course[2031], left, atol=5e-5)


def test_that_a_donor_that_gives_more_than_it_grows_by_is_named(build, life):
    donor = {
        "name": "Mainland",
        "gene_diversity": 0.64,
        "fst_to_recipient": 0.2,
        "adults": 40,
        "life_cycle": "same",
        "most_removed_per_year": 8,
    }
    poor = {**life, "young_per_breeding_female": {"mean": 1.4}}
    case = build([pulse(8, every_years=1, times=6)], donors=[donor], life_cycle=poor)
    assert "donor-not-made-up" in keys(case)
    once = build([pulse(8)], donors=[donor], life_cycle=poor)
    assert "donor-not-made-up" not in keys(once)


def test_that_a_take_below_the_donors_floor_is_named(build):
    donor = {
        "name": "Mainland",
        "gene_diversity": 0.64,
        "fst_to_recipient": 0.2,
        "adults": 40,
        "fewest_left": 35,
    }
    case = build([pulse(6)], donors=[donor])
    assert "donor-below-floor" in keys(case)
    (take,) = donor_takes(case)
    assert dict(take.taken) == {2027: 6}
    assert "donor-below-floor" not in keys(build([pulse(5)], donors=[donor]))


def test_that_growth_falling_below_one_while_ne_is_held_is_said_with_plan_and_year(build, life):
    cost = {"lethal_equivalents_diploid": {"first_year": 12}}
    held = build(life_cycle=life, inbreeding_cost=cost, time={"horizon_years": 80})
    growth = compare(held).get("No releases", "expected", "yearly_growth").values
    t = int(np.flatnonzero(growth < 1)[0])
    assert t > 0
    said = [r for r in every_remark(held) if r.key == "decline-with-size-held"]
    assert [r.path for r in said] == ["plans[0]"]
    assert f"from {2027 + 4 * t} on" in said[0].text
    follows = build(
        life_cycle=life,
        inbreeding_cost=cost,
        time={"horizon_years": 80},
        recipient={"effective_size_follows_adults": True},
    )
    assert "decline-with-size-held" not in keys(follows)


def test_that_a_population_that_goes_below_one_adult_is_said(build, life):
    poor = {**life, "yearly_survival": {"first_year": 0.1, "subadult": 0.3, "adult": 0.3}}
    assert "gone" in keys(build(life_cycle=poor))
    assert "gone" not in keys(build(life_cycle=life))


def test_that_survival_held_at_one_is_said(build, life):
    high = {**life, "yearly_survival": {"first_year": 0.9, "subadult": 0.8, "adult": 0.85}}
    case = build(
        [pulse(200)],
        life_cycle=high,
        inbreeding_cost={"lethal_equivalents_diploid": {"first_year": 12}},
    )
    assert "survival-capped" in keys(case)


def test_that_a_rule_that_cannot_be_read_is_said(build):
    rule = {"name": "kin", "when": "kinship", "above": 0.1, "then": "stop"}
    assert "rule-not-applied" in keys(build([{"name": "Odd", "rules": [rule]}]))


def test_that_a_chain_too_large_is_left_out_and_said(build):
    locus = {"name": "coat", "frequency": 0.5, "donor_frequency": {"Mainland": 0, "Far shore": 0}}
    large = {"adults": 4e5, "effective_size": 1e5, "breeding_females": 9, "breeding_males": 9}
    case = build(loci=[locus], recipient=large)
    assert "chain-too-large" in keys(case)


@pytest.mark.parametrize("follows", [False, True])
def test_that_what_is_left_out_says_what_ne_does(build, life, follows):
    case = build(life_cycle=life, recipient={"effective_size_follows_adults": follows})
    first = leaves_out(case, "expected")[0]
    assert "16" in first
    assert ("follows" in first) == follows


def test_that_the_exact_depth_says_nothing_without_a_locus(build):
    assert leaves_out(build(), "exact") == ()
    assert leaves_out(build(), "simulated") == ()


@pytest.mark.parametrize(
    ("first_year", "bound", "delay", "said"),
    [(2027, 0.1, 0, True), (2027, 0.1, 8, False), (2031, 0.1, 0, False), (2027, 0.9, 0, False)],
)
def test_that_a_rule_that_adds_a_release_to_the_first_one_is_named(
    build, first_year, bound, delay, said
):
    plan = pulse(2, first_year=first_year)
    rule = {"name": "more", "when": "inbreeding", "above": bound, "then": "release"}
    release = {"donor": "Mainland", "who": {"females": 2}}
    plan["rules"] = [{**rule, "delay_years": delay, "release": release}]
    assert ("rule-at-once" in keys(build([plan]))) is said
