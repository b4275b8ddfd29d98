"""The checks and remarks at the start against what the projection computes there by itself."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rescue_planner.case.filled import steps
from rescue_planner.case.problems import read_case
from rescue_planner.case.remarks import remarks
from rescue_planner.projection.compare import plan_courses
from rescue_planner.projection.distances import distances
from rescue_planner.projection.schedule import schedule
from tests.case.sample import changed, problems_of, with_release
from tests.outside.random_cases import random_cases


def read(path, quantity):
    """Return a value as the projection's reader does, without draws."""
    return np.array([float(getattr(quantity, "best", quantity))])


def keys(case):
    return {(one.key, one.path) for one in remarks(case)}


@pytest.mark.parametrize("raw", [raw for _, raw in random_cases()], ids=lambda raw: raw["title"])
def test_that_remarks_on_the_start_are_those_the_projection_would_make(raw):
    case = read_case(raw)
    apart, said = distances(case, read), keys(case)
    reference = float(case.recipient.reference_gene_diversity.best)
    for i in range(len(case.donors)):
        path = f"donors[{i}].fst_to_recipient"
        between, own = apart.between[0, i], max(apart.recipient[0], apart.donors[0, i, i])
        assert (("between-below-own", path) in said) == (between < own - 1e-9)
        assert (("kinship-below-0", path) in said) == (between > reference + 1e-9)
    assert sum(key == "fst-assumed" for key, _ in said) == len(apart.assumed)
    least = np.linalg.eigvalsh(1 - apart.matrix[0] / reference)[0]
    assert (("kinships-not-possible", "donors") in said) == (len(case.donors) > 0 and least < -1e-9)


@pytest.mark.parametrize(
    "raw", [raw for _, raw in random_cases() if "life_cycle" in raw], ids=lambda raw: raw["title"]
)
def test_that_decline_at_the_start_is_that_of_the_projection(raw):
    case = read_case(raw)
    course = plan_courses(case, ["No releases"])[0]
    held = not case.recipient.effective_size_follows_adults
    rate = course.values["yearly_growth"][0][0]
    assert (("decline-with-size-held", "life_cycle") in keys(case)) == (held and rate < 1 - 1e-9)


def _until_after_year(action):
    later = action["year"] + action.get("until_year", 0)
    return {**action, "until_year": later} if "until_year" in action else action


actions = st.lists(
    st.fixed_dictionaries(
        {
            "what": st.just("ditch"),
            "year": st.integers(2027, 2047),
            "carrying_capacity_times": st.sampled_from([0.1, 0.3, 0.5, 0.9, 2, 5]),
        },
        optional={"until_year": st.integers(0, 15)},
    ),
    min_size=1,
    max_size=5,
).map(lambda drawn: [_until_after_year(action) for action in drawn])


@settings(max_examples=150, deadline=None)
@given(actions, st.sampled_from([0.7, 1, 2.5, 3.3, 4]), st.sampled_from([1, 2, 8]))
def test_that_the_least_effective_size_is_that_of_the_schedule(drawn, generation, size):
    """A case is refused just where the schedule's smallest factor takes the size below 1."""
    raw = changed(
        with_release(),
        "time",
        {"start_year": 2027, "horizon_years": 20, "generation_years": generation},
    )
    raw["recipient"]["effective_size"] = size
    raw["plans"][1]["other_actions"] = drawn
    harmless = changed(
        raw,
        "plans[1].other_actions",
        [{**action, "carrying_capacity_times": 1} for action in drawn],
    )
    plan = read_case(harmless).plans[1]
    factors = [action["carrying_capacity_times"] for action in drawn]
    told = plan.model_copy(
        update={
            "other_actions": tuple(
                action.model_copy(update={"carrying_capacity_times": factor})
                for action, factor in zip(plan.other_actions, factors, strict=True)
            )
        }
    )
    times = schedule(read_case(harmless), told, 1, steps(20, generation), read).size_times
    refused = "plans[1].other_actions" in problems_of(raw)
    assert refused == (size * times.min() < 1 - 1e-9)
