"""What cannot be done in a plan: seeded faults are found, and sound plans are left in peace."""

import json
from pathlib import Path

import pytest

from rescue_planner.case.edits import add_rule, change_release, set_range, set_value
from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.problems import read_case
from rescue_planner.projection.compare import compare
from rescue_planner.projection.feasibility import findings

MARSH = json.loads((Path(__file__).parent / "marsh.json").read_text(encoding="utf-8"))
PLAN = "Every fourth year"
AT = "plans[2]"


@pytest.fixture
def case():
    """The marsh without the plan's stop rule."""
    raw = json.loads(json.dumps(MARSH))
    raw["plans"][2].pop("rules", None)
    return read_case(raw)


def test_that_a_sound_plan_has_no_finding(case):
    assert findings(case, PLAN, compare(case)) == ()
    assert findings(case, "No releases", compare(case)) == ()


def test_that_more_than_the_yearly_limit_never_gets_into_a_case_and_says_how_to_mend(case):
    with pytest.raises(InvalidCase, match="at most 8 may be removed a year: release fewer"):
        change_release(case, PLAN, 0, females=9)


def test_that_a_range_past_the_yearly_limit_is_found(case):
    ranged = set_range(case, f"{AT}.releases[0].who.females", 1, 8).case
    (found,) = findings(ranged, PLAN)
    assert "up to 9 animals from North Fell" in found.sentence
    assert "gives up to 8 a year" in found.sentence
    assert found.path == f"{AT}.releases[0].who.females"
    assert findings(set_range(case, found.path, 1, 7).case, PLAN) == ()


def test_that_a_rule_beside_the_calendar_can_pass_the_limit(case):
    rule = {
        "name": "more", "when": "inbreeding", "above": 0.25, "then": "release",
        "release": {"donor": "North Fell", "who": {"females": 5, "males": 1}},
    }  # fmt: skip
    (found,) = findings(add_rule(case, PLAN, rule).case, PLAN)
    assert "3 + 6 = 9 animals would be taken from North Fell" in found.sentence
    rule["release"]["who"]["females"] = 4
    assert findings(add_rule(case, PLAN, rule).case, PLAN) == ()


def test_that_a_donor_below_its_floor_is_found(case):
    low = set_value(case, "donors[0].fewest_left", 798).case
    found = findings(low, PLAN)
    assert len(found) == 1
    assert "North Fell would have about 797 adults left, fewer than the 798" in found[0].sentence
    assert found[0].mend.startswith("Take at least 1 animal fewer up to 2027")
    assert found[0].path == f"{AT}.releases[0].who.females"
    assert findings(set_value(case, "donors[0].fewest_left", 700).case, PLAN) == ()


@pytest.mark.parametrize(("age", "count"), [(10, 0), (11, 1)])
def test_that_an_age_past_the_last_one_is_found(case, age, count):
    found = findings(change_release(case, PLAN, 0, age=age).case, PLAN)
    assert len(found) == count
    if found:
        assert "Release 1 holds animals of age 11" in found[0].sentence
        assert "none lives past 10 years" in found[0].sentence
        assert "Release animals of 1 to 10 years" in found[0].mend
        assert found[0].path == f"{AT}.releases[0].who.age"


def test_that_releases_after_a_stop_are_found_in_the_rules_own_year():
    case = set_value(read_case(MARSH), f"{AT}.rules[0].above", 0.1).case
    comparison = compare(case)
    (stop,) = [event for event in comparison.events if event.plan == PLAN]
    late = [year for year in case.plan(PLAN).releases[0].years() if year >= stop.year]
    (found,) = findings(case, PLAN, comparison)
    assert f"“{stop.rule}”" in found.sentence
    assert f"stops all releases in {stop.year:g}" in found.sentence
    assert f"{len(late)} of the 5 times of release 1 (from {late[0]} on)" in found.sentence
    mended = change_release(case, PLAN, 0, times=5 - len(late)).case
    assert findings(mended, PLAN, compare(mended)) == ()


def test_that_a_release_of_none_is_found_with_its_number(case):
    (found,) = findings(change_release(case, PLAN, 0, females=0, males=0).case, PLAN)
    assert found.path == f"{AT}.releases[0].who.females"
