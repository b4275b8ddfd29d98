"""The differences of two plans are the edits that led from one to the other."""

import random

import pytest

from rescue_planner.case.edits import (
    add_action,
    add_release,
    add_rule,
    change_release,
    duplicate_plan,
    remove_release,
    set_range,
    set_steady,
    set_value,
)
from rescue_planner.case.plan_differences import differences, differences_words
from rescue_planner.case.problems import read_case
from tests.case.sample import full, with_release


def fresh():
    """Return a case with a plan of four unlike releases, and its copy."""
    case = read_case(with_release())
    for k, (females, males, times) in enumerate([(1, 3, 2), (4, 1, 3), (2, 5, 4)]):
        more = {"every_years": k + 2, "times": times, "age": k + 1}
        case = add_release(case, "Wave", "Upper Fen", 2035 + 3 * k, females, males, **more).case
    return duplicate_plan(case, "Wave", "Copy").case


def said(case, plan="Copy", other="Wave"):
    return [one.sentence for one in differences(case, plan, other)]


def test_that_a_copy_differs_in_nothing():
    case = fresh()
    assert said(case) == []
    assert differences_words((), "Wave") == "The same as “Wave” in everything but the name."


def test_that_a_changed_number_is_one_difference_with_both_values_and_the_unit():
    case = change_release(fresh(), "Copy", 0, females=3).case
    assert said(case) == ["Release 1, females: 3 instead of 2 (animals)."]
    assert differences(case, "Copy", "Wave")[0].path == "plans[2].releases[0].who.females"
    assert said(case, "Wave", "Copy") == ["Release 1, females: 2 instead of 3 (animals)."]


def test_that_a_left_out_value_is_its_default():
    case = change_release(fresh(), "Copy", 0, survive_to_breed=1, times=1).case
    assert said(case) == []


def test_that_added_and_removed_releases_are_told_whole_and_the_rest_is_not_blamed():
    case = remove_release(fresh(), "Copy", 1).case
    case = add_release(case, "Copy", "Upper Fen", 2050, 6, 6).case
    assert said(case) == [
        "Release 2 of “Wave” is not here: 1 female and 3 males from “Upper Fen” in 2035 and then "
        "every 2 years, 2 times in all.",
        "Release 4 is only here: 6 females and 6 males from “Upper Fen” in 2050.",
    ]


def test_that_ranges_and_sources_are_differences_too():
    path = "plans[2].releases[0].afterwards.survive_to_breed"
    case = set_value(fresh(), path, 0.7).case
    same = set_value(case, path.replace("[2]", "[1]"), 0.7).case
    ranged = set_range(same, path, 0.3, 1.0).case
    assert said(ranged) == [
        "Release 1, survive to breed: 0.7 (0.3 to 1) instead of 0.7 (share, 0 to 1)."
    ]
    sourced = set_range(same, path, None, None, origin="borrowed", source="Jule 2008").case
    assert said(sourced) == [
        "Release 1, survive to breed: 0.7 is borrowed, Jule 2008 instead of without a source."
    ]


def test_that_flow_rules_actions_and_size_are_compared():
    case = set_value(fresh(), "plans[2].effective_size", 20).case
    case = set_steady(case, "Copy", "Upper Fen", 2).case
    rule = {"name": "ceiling", "when": "donor_ancestry", "above": 0.3, "then": "stop"}
    case = add_rule(case, "Copy", rule).case
    case = add_action(case, "Copy", {"what": "ditches", "year": 2030}).case
    assert said(case) == [
        "Effective size (Ne) under this plan: 20 instead of left out (animals per generation).",
        "Steady flow 1 is only here: 2 newcomers that breed per generation from “Upper Fen”.",
        "Rule “ceiling” is only here: stop all releases when donor ancestry is above 0.3.",
        "Other action 1 is only here: ditches, from 2030.",
    ]


def test_that_a_release_of_a_rule_is_looked_into():
    case = duplicate_plan(read_case(full()), read_case(full()).plans[-1].name, "Copy").case
    at = next(i for i, plan in enumerate(case.plans) if plan.name == "Copy")
    case = set_value(case, f"plans[{at}].rules[1].release.who.females", 2).case
    (only,) = said(case, "Copy", case.plans[at - 1].name)
    assert only == "Rule “second wave”, its release, females: 2 instead of 0 (animals)."


def test_that_the_measure_of_a_rule_is_named_as_on_the_screen():
    case = duplicate_plan(read_case(full()), read_case(full()).plans[-1].name, "Copy").case
    at = next(i for i, plan in enumerate(case.plans) if plan.name == "Copy")
    case = set_value(case, f"plans[{at}].rules[0].when", "inbreeding").case
    assert said(case, "Copy", case.plans[at - 1].name) == [
        "Rule “ancestry ceiling”, measure read: inbreeding F instead of donor ancestry: Upper Fen."
    ]


def test_that_an_unknown_plan_is_a_key_error():
    with pytest.raises(KeyError):
        differences(fresh(), "Copy", "Nothing")


@pytest.mark.parametrize("seed", range(25))
def test_that_the_list_equals_the_edits_made(seed):
    """Up to two values of each release changed, perhaps one removed, perhaps one added."""
    draw = random.Random(seed)
    case, made = fresh(), []
    for index in range(4):
        names = draw.sample(["females", "males", "loan_years", "each_animal"], draw.randint(0, 2))
        new = {name: draw.randint(10, 30) for name in names}
        if new:
            case = change_release(case, "Copy", index, **new).case
        made.append(len(new))
    if draw.random() < 0.5:
        gone = draw.randrange(4)
        case = remove_release(case, "Copy", gone).case
        made[gone] = 1  # what was changed in it went with it
    if draw.random() < 0.5:
        case = add_release(case, "Copy", "Upper Fen", 2080, 31, 31, age=9, loan_years=40).case
        made.append(1)
    assert len(said(case)) == sum(made)
