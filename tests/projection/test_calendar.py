"""The rows of a plan's calendar, checked by hand."""

import json
from pathlib import Path

import pytest

from rescue_planner.case.problems import read_case
from rescue_planner.projection.calendar import calendar
from rescue_planner.projection.compare import compare

MARSH = json.loads((Path(__file__).parent / "marsh.json").read_text(encoding="utf-8"))


@pytest.fixture(scope="module")
def case():
    action = {"what": "Restore the reed beds", "year": 2030, "until_year": 2040}
    plans = [*MARSH["plans"], {"name": "Reeds", "other_actions": [action]}]
    return read_case({**MARSH, "plans": plans})


def test_that_a_repeated_release_is_one_row_with_all_its_years(case):
    found = calendar(case, case.plan("Every fourth year"))
    (row,) = found.rows
    assert (row.kind, row.index) == ("release", 0)
    assert row.years == (2027.0, 2031.0, 2035.0, 2039.0, 2043.0)
    assert row.words == "Release 1: 2 + 1 from North Fell, 2027 to 2043, 5 times"
    assert (found.first, found.last) == (2027.0, 2087.0)
    assert found.generations[:3] == (2027.0, 2031.0, 2035.0)
    assert len(found.generations) == 16


def test_that_flows_and_actions_are_spans(case):
    (flow,) = calendar(case, case.plan("Trickle")).rows
    assert (flow.kind, flow.span) == ("steady", (2027.0, 2087.0))
    assert flow.words == "1 newcomers per generation from North Fell, 2027 to 2087"
    (action,) = calendar(case, case.plan("Reeds")).rows
    assert (action.kind, action.name, action.span) == (
        "action", "Restore the reed beds", (2030.0, 2040.0),
    )  # fmt: skip


def test_that_rules_that_acted_stand_at_their_year(case):
    comparison = compare(case)
    rows = calendar(case, case.plan("Every fourth year"), comparison).rows
    acted = [row for row in rows if row.kind == "rule"]
    assert [row.name for row in acted] == ["ceiling"]
    assert acted[0].years == tuple(event.year for event in comparison.events)
    assert "releases stop" in acted[0].words


def test_that_an_empty_plan_has_no_rows(case):
    assert calendar(case, case.plan("No releases")).rows == ()
