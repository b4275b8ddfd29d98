"""Plans walked together are the plans walked one by one."""

from __future__ import annotations

import numpy as np
from numpy.testing import assert_allclose

from rescue_planner.case.problems import read_case
from rescue_planner.projection import joined
from rescue_planner.projection.compare import plan_courses
from rescue_planner.projection.expected import expected_course
from rescue_planner.projection.setup import setup
from tests.outside.random_cases import random_cases


def test_that_plans_walked_together_are_those_walked_alone():
    """Random cases with rules, traits, life cycles; only the last bits may differ."""
    acted = 0
    for _, raw in random_cases(count=25, seed=41):
        case = read_case(raw)
        together = joined.courses([setup(case, plan) for plan in case.plans])
        for plan, course in zip(case.plans, together, strict=True):
            alone = expected_course(setup(case, plan))
            assert course.values.keys() == alone.values.keys()
            for measure, values in alone.values.items():
                assert_allclose(course.values[measure], values, rtol=1e-11, atol=1e-13)
            for a, b in zip(course.steps, alone.steps, strict=True):
                assert_allclose(a.shares, b.shares, rtol=1e-12, atol=1e-15)
                assert_allclose(a.ne, b.ne, rtol=1e-11)
            assert np.array_equal(np.stack(course.capped), np.stack(alone.capped))
            assert course.book.events == alone.book.events
            acted += len(alone.book.events)
    assert acted > 10


def test_that_a_rule_acts_in_its_own_plan_only(build):
    steady = [{"donor": "Mainland", "migrants_per_generation": 2}]
    rule = {"name": "cap", "when": "donor_ancestry", "above": 0.1, "then": "stop"}
    case = build(
        [{"name": "Held", "steady": steady, "rules": [rule]}, {"name": "Free", "steady": steady}]
    )
    held, free = plan_courses(case, ["Held", "Free"])
    assert held.values["donor_ancestry"][0, -1] < 0.25 < free.values["donor_ancestry"][0, -1]
    assert [event.plan for event in held.book.events] == ["Held"]
    assert free.book.events == []


def test_that_a_plan_that_did_not_change_is_not_walked_again(build):
    plans = [
        {"name": name, "steady": [{"donor": "Mainland", "migrants_per_generation": rate}]}
        for name, rate in (("One", 1), ("Two", 2))
    ]
    before = plan_courses(case := build(plans), ["One", "Two"])
    plans[1]["steady"][0]["migrants_per_generation"] = 3
    after = plan_courses(build(plans), ["One", "Two"])
    assert after[0] is before[0]
    assert after[1] is not before[1]
    assert plan_courses(case, ["Two"])[0] is before[1]


def test_that_no_plans_give_no_courses():
    assert joined.courses([]) == ()
