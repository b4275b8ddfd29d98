"""The expected depth against closed forms, limits and hand-worked values."""

from __future__ import annotations

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.projection.compare import compare
from rescue_planner.projection.expected import expected_course
from rescue_planner.projection.setup import setup


def values(case, plan, measure):
    found = compare(case, depths=("expected",)).get(plan, "expected", measure)
    assert found is not None, f"{measure} of {plan} was not computed"
    return found.values


def release(donor="Mainland", females=4, males=2, first_year=2027, **more):
    return {
        "donor": donor,
        "who": {"females": females, "males": males},
        "when": {"first_year": first_year, **more.pop("when", {})},
        **more,
    }


def test_that_without_flow_diversity_falls_by_one_over_twice_ne(build):
    """Wright 1931: H_t = H_0 (1 - 1/(2 Ne))^t."""
    h = values(build(), "No releases", "gene_diversity")
    assert_allclose(h, 0.42 * (1 - 1 / 32) ** np.arange(11), rtol=1e-13)


def test_that_inbreeding_is_one_minus_diversity_over_the_reference(build):
    f = values(build(), "No releases", "inbreeding")
    assert_allclose(f, 1 - 0.42 * (1 - 1 / 32) ** np.arange(11) / 0.68, rtol=1e-12)


def test_that_a_release_brings_the_shares_of_its_mothers_and_fathers(build):
    """e_f = 4 * .5 * .8 = 1.6 of 13.6 mothers, e_m = .8 of 8.8 fathers, worked by hand."""
    after = {"survive_to_breed": 0.5, "breeding_relative_to_residents": 0.8}
    case = build([{"name": "Pulse", "releases": [release(afterwards=after)]}])
    m = (1.6 / 13.6 + 0.8 / 8.8) / 2
    assert_allclose(values(case, "Pulse", "donor_ancestry")[1], m, rtol=1e-14)
    assert_allclose(values(case, "Pulse", "effective_migrants")[1:], 2.4, rtol=1e-14)
    assert_allclose(values(case, "Pulse", "released"), [0] + [6] * 10)


def test_that_diversity_after_a_release_is_the_pool_of_pairs(build):
    case = build([{"name": "Pulse", "releases": [release()]}])
    m = (4 / 16 + 2 / 10) / 2
    between = ((0.42 + 0.64) / 2) / 0.8
    pool = (1 - m) ** 2 * 0.42 + 2 * m * (1 - m) * between + m**2 * 0.64
    assert_allclose(values(case, "Pulse", "gene_diversity")[1], pool * (1 - 1 / 32), rtol=1e-14)


def test_that_neis_form_is_turned_to_hudsons(build):
    """G = 0.2 is Hudson's 2G/(1+G) = 1/3."""
    donor = {"name": "Mainland", "gene_diversity": 0.64, "fst_to_recipient": 0.2}
    nei = build(donors=[{**donor, "fst_form": "nei"}])
    hudson = build(donors=[{**donor, "fst_to_recipient": 1 / 3}])
    a, b = (setup(case, case.plans[0]).distances.between for case in (nei, hudson))
    assert_allclose(a, b, rtol=1e-14)


def test_that_donors_without_an_fst_get_the_larger_of_the_two_means(build):
    apart = setup(case := build(), case.plans[0]).distances
    r1, r2 = 0.53 / 0.8, 0.46 / 0.7
    assert_allclose(apart.donors[0, 0, 1], max((r1 + r2) / 2, (0.64 + 0.5) / 2), rtol=1e-14)
    assert apart.assumed == (("Mainland", "Far shore"),)


def test_that_steady_flow_covers_the_part_of_a_step_its_years_cover(build):
    """2027-2029 is three of the four years of the first step: 0.75 of 2 newcomers."""
    steady = {
        "donor": "Mainland",
        "migrants_per_generation": 2,
        "from_year": 2027,
        "to_year": 2029,
    }
    case = build([{"name": "Trickle", "steady": [steady]}])
    assert_allclose(values(case, "Trickle", "effective_migrants"), [0] + [1.5] * 10)
    assert_allclose(values(case, "Trickle", "released"), 0)


def test_that_first_generation_survival_is_the_mean_over_pairs_not_that_of_mean_f(build):
    """Jensen: science of inbreeding, worked here with plain numbers."""
    case = build(
        [{"name": "Pulse", "releases": [release()]}],
        inbreeding_cost={"lethal_equivalents_diploid": {"first_year": 6}},
    )
    uf, um = 4 / 16, 2 / 10
    f_rr, f_rd, f_dd = 1 - 0.42 / 0.68, 1 - 0.6625 / 0.68, 1 - 0.64 / 0.68
    by_pairs = (
        (1 - uf) * (1 - um) * math.exp(-3 * f_rr)
        + (uf * (1 - um) + um * (1 - uf)) * math.exp(-3 * f_rd)
        + uf * um * math.exp(-3 * f_dd)
    )
    got = values(case, "Pulse", "relative_first_year_survival")
    assert_allclose(got[0], math.exp(-3 * f_rr), rtol=1e-13)
    assert_allclose(got[1], by_pairs, rtol=1e-13)


def test_that_inbreeding_below_zero_is_shown_and_costs_nothing(build):
    donor = {"name": "Mainland", "gene_diversity": 0.9, "fst_to_recipient": 0.3}
    case = build(
        [{"name": "Flood", "releases": [release(females=400, males=400)]}],
        donors=[donor],
        inbreeding_cost={"lethal_equivalents_diploid": {"first_year": 6}},
    )
    assert values(case, "Flood", "inbreeding")[1] < 0
    assert values(case, "Flood", "relative_first_year_survival")[2] <= 1


def test_that_with_all_gene_copies_from_the_donor_its_ancestry_is_whole(build):
    case = build([{"name": "Flood", "releases": [release(females=1e5, males=1e5)]}])
    assert_allclose(values(case, "Flood", "donor_ancestry")[1], 1.0, atol=2e-4)
    h = values(case, "Flood", "gene_diversity")[1]
    assert_allclose(h, 0.64 * (1 - 1 / 32), rtol=1e-3)


def test_that_a_drifting_donor_loses_diversity_at_its_own_size(build):
    donor = {
        "name": "Mainland",
        "gene_diversity": 0.64,
        "fst_to_recipient": 0.2,
        "drifts": True,
        "effective_size": 20,
    }
    course = expected_course(setup(case := build(donors=[donor]), case.plans[0]))
    donors = [at[0, 0, 0] for at in course.donors]
    assert_allclose(donors, 0.64 * (1 - 1 / 40) ** np.arange(11), rtol=1e-13)


def test_that_a_stop_rule_ends_releases_and_flow_for_good(build):
    plan = {
        "name": "Until a tenth",
        "releases": [release(when={"every_years": 4, "times": 10})],
        "steady": [{"donor": "Far shore", "migrants_per_generation": 1}],
        "rules": [{"name": "cap", "when": "donor_ancestry", "above": 0.1, "then": "stop"}],
    }
    ancestry = values(build([plan]), "Until a tenth", "donor_ancestry")
    first = int(np.flatnonzero(ancestry > 0.1)[0])
    assert first == 1
    assert_allclose(ancestry[first:], ancestry[first], rtol=1e-14)


def test_that_a_rule_releases_later_by_its_delay_and_not_more_often_than_allowed(build):
    rule = {
        "name": "second wave",
        "when": "inbreeding",
        "above": 0.0,
        "then": "release",
        "at_most": 2,
        "delay_years": 9,
        "release": {"donor": "Mainland", "who": {"females": 3}},
    }
    released = values(build([{"name": "Wait", "rules": [rule]}]), "Wait", "released")
    assert released.tolist() == [0, 0, 0, 3, 6, 6, 6, 6, 6, 6, 6]


def test_that_a_rule_on_a_measure_without_expected_value_is_named(build):
    rule = {"name": "kin", "when": "kinship", "above": 0.1, "then": "stop"}
    got = compare(build([{"name": "Odd", "rules": [rule]}]))
    assert got.not_applied == ("Odd: kin",)


def test_that_capacity_of_other_actions_multiplies_ne_while_they_last(build):
    action = {"what": "fence", "year": 2031, "until_year": 2034, "carrying_capacity_times": 2}
    h = values(build([{"name": "Fence", "other_actions": [action]}]), "Fence", "gene_diversity")
    kept = h[1:] / h[:-1]
    assert_allclose(kept[[0, 2]], 1 - 1 / 32, rtol=1e-13)
    assert_allclose(kept[1], 1 - 1 / 64, rtol=1e-13)


def test_that_costs_are_counted_after_the_step_of_their_year(build):
    plan = {
        "name": "Costly",
        "releases": [release(cost={"each_animal": 100, "each_event": 1000}, first_year=2031)],
        "other_actions": [{"what": "traps", "year": 2039, "cost": 50}],
    }
    cost = values(build([plan]), "Costly", "cost")
    assert cost.tolist() == [0, 0, 1600, 1600, 1650, *[1650] * 6]


def test_that_adults_grow_to_the_ceiling_and_take_in_survivors(build, life):
    case = build(
        [{"name": "Pulse", "releases": [release(afterwards={"survive_to_breed": 0.5})]}],
        life_cycle=life,
        recipient={"carrying_capacity": 300},
    )
    adults = values(case, "Pulse", "adults")
    growth = values(case, "Pulse", "yearly_growth")
    assert_allclose(adults[1], (40 + 3) * growth[1] ** 4, rtol=1e-12)
    assert adults[-1] == 300


def test_that_growth_is_the_dominant_eigenvalue_of_the_age_matrix(build, life):
    """An independent route: the matrix written out here, numpy's eigenvalues."""
    matrix = np.zeros((10, 10))
    matrix[0, 1:] = 0.8 * 2.4 * 0.5 * 0.5
    for age in range(9):
        matrix[age + 1, age] = 0.75 if age == 0 else 0.85
    largest = np.abs(np.linalg.eigvals(matrix)).max()
    assert_allclose(values(build(life_cycle=life), "No releases", "yearly_growth")[0], largest)


@pytest.mark.parametrize("measured", ["here_now", "unrelated_parents"])
def test_that_growth_starts_from_survival_as_measured(build, life, measured):
    """Measured here and now, the cost is in the rate already; else it comes on top."""
    case = build(
        life_cycle={**life, "survival_measured": measured},
        inbreeding_cost={"lethal_equivalents_diploid": {"first_year": 6, "young_per_female": 2}},
    )
    plain = values(build(life_cycle=life), "No releases", "yearly_growth")[0]
    costly = values(case, "No releases", "yearly_growth")[0]
    assert (costly == pytest.approx(plain)) == (measured == "here_now")
    assert costly <= plain + 1e-12


def test_that_ne_follows_adults_where_asked_and_never_falls_below_one(build, life):
    poor = {**life, "yearly_survival": {"first_year": 0.1, "subadult": 0.3, "adult": 0.4}}
    case = build(life_cycle=poor, recipient={"effective_size_follows_adults": True})
    course = expected_course(setup(case, case.plans[0]))
    sizes = np.array([step.ne[0] for step in course.steps])
    adults = course.values["adults"][0]
    assert_allclose(sizes, np.maximum(16 * adults[:-1] / 40, 1.0), rtol=1e-13)
    assert sizes.min() == 1.0


def test_that_the_trait_stays_put_without_shift_flow_or_lag(build):
    case = build(trait={"heritability": 0.3, "mutational_variance": 0})
    kept = values(case, "No releases", "additive_variance_kept")
    assert_allclose(kept, (1 - 1 / 32) ** np.arange(11), rtol=1e-13)
    assert_allclose(values(case, "No releases", "trait_lag"), 0, atol=1e-15)


def test_that_every_draw_of_the_parameters_equals_its_own_single_run(build, life):
    plan = {
        "name": "Pulse",
        "releases": [release(when={"every_years": 8, "times": 3})],
        "rules": [{"name": "cap", "when": "donor_ancestry", "above": 0.25, "then": "stop"}],
    }
    changes = {
        "life_cycle": life,
        "trait": {"heritability": 0.3, "optimum_shift_per_year": 0.02},
        "inbreeding_cost": {"lethal_equivalents_diploid": {"first_year": 6}},
    }
    sizes, copies = [6.0, 16.0, 30.0], [0.1, 0.2, 0.3]
    draws = {
        "recipient.effective_size": np.array(sizes),
        "donors[0].fst_to_recipient": np.array(copies),
        "plans[1].releases[0].who.females": np.array([2.0, 6.0, 12.0]),
    }
    together = expected_course(setup(case := build([plan], **changes), case.plans[1], draws))
    for i, (size, fst) in enumerate(zip(sizes, copies, strict=True)):
        single = {
            "recipient.effective_size": np.array([size]),
            "donors[0].fst_to_recipient": np.array([fst]),
            "plans[1].releases[0].who.females": draws["plans[1].releases[0].who.females"][
                i : i + 1
            ],
        }
        alone = expected_course(setup(case, case.plans[1], single))
        for measure, got in alone.values.items():
            assert_allclose(together.values[measure][i], got[0], rtol=1e-12, atol=1e-14)


def test_that_order_of_plans_does_not_change_a_plan(build):
    pulse = {"name": "Pulse", "releases": [release()]}
    trickle = {"name": "Trickle", "steady": [{"donor": "Mainland", "migrants_per_generation": 1}]}
    one, other = build([pulse, trickle]), build([trickle, pulse])
    for plan in ("Pulse", "Trickle"):
        assert_allclose(
            values(one, plan, "gene_diversity"), values(other, plan, "gene_diversity"), rtol=0
        )


def test_that_a_horizon_of_21_years_at_0_7_a_generation_is_30_steps(build):
    case = build(time={"horizon_years": 21, "generation_years": 0.7})
    assert values(case, "No releases", "gene_diversity").size == 31
