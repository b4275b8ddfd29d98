"""Released, surviving, breeding: the chain of numbers of a plan and of each release."""

import json
from pathlib import Path

import numpy as np
import pytest

from rescue_planner.case.edits import add_release, change_release
from rescue_planner.case.problems import read_case
from rescue_planner.projection.compare import compare
from rescue_planner.projection.plan_reading import (
    chain,
    event_rows,
    fate,
    fate_words,
    newcomers_per_generation,
    plan_fate,
)

MARSH = json.loads((Path(__file__).parent / "marsh.json").read_text(encoding="utf-8"))
PLAN = "Every fourth year"


@pytest.fixture
def case():
    return read_case(MARSH)


def test_that_ten_released_of_which_six_tenths_live_and_breed_by_four_tenths_are_2_4(case):
    values = {"survive_to_breed": 0.6, "breeding_relative_to_residents": 0.4}
    raw = json.loads(json.dumps(MARSH))
    raw["donors"][0]["most_removed_per_year"] = 20
    one = change_release(read_case(raw), PLAN, 0, females=6, males=4, times=1, **values).case
    release = one.plan(PLAN).releases[0]
    assert chain(release).newcomers == pytest.approx(2.4, abs=1e-12)
    assert fate(release, 0).sentence() == (
        "Release 1: 10 released → 6 survive to breed → 2.4 newcomers that breed"
    )


def test_that_the_whole_plan_is_the_sum_of_its_events(case):
    more = add_release(case, PLAN, "North Fell", 2050, 4, 1, survive_to_breed=0.5).case
    plan = more.plan(PLAN)
    whole = plan_fate(plan)
    assert (whole.events, whole.released) == (6, 5 * 3 + 5)
    assert whole.survive == pytest.approx(5 * 3 * 0.7 + 5 * 0.5)
    rows = event_rows(more, plan)
    assert whole.breed == pytest.approx(sum(row.newcomers for row in rows), abs=1e-12)
    assert whole.breed == pytest.approx(float(newcomers_per_generation(more, plan).sum()))
    assert fate_words(plan) == (
        "Whole plan: 20 released → 13 survive to breed → 10.9 newcomers that breed, before any "
        "rule acts."
    )
    assert fate_words(more.plan("No releases")) == ""


def test_that_everything_at_1_equals_no_failure(case):
    all_1 = change_release(case, PLAN, 0, survive_to_breed=1, breeding_relative_to_residents=1)
    unsaid = change_release(
        case, PLAN, 0, survive_to_breed=None, breeding_relative_to_residents=None
    )
    whole = plan_fate(all_1.case.plan(PLAN))
    assert whole.released == whole.survive == whole.breed == 15
    one, two = compare(all_1.case), compare(unsaid.case)
    for series in one.series:
        other = two.get(series.plan, series.depth, series.measure, series.statistic)
        np.testing.assert_array_equal(series.values, other.values)
