import pytest

from rescue_planner.case.problems import InvalidCase, read_case
from rescue_planner.case.raw import to_raw
from rescue_planner.case.what_if import ChangedValue, applied, changed_values
from tests.case.sample import full, with_release


def asked(raw, *changes):
    raw["what_ifs"] = [{"name": "asked", "changes": list(changes)}]
    return read_case(raw)


def test_that_a_star_changes_every_plan_and_set_replaces():
    case = applied(read_case(full()), "half survive")
    assert case.plans[2].releases[0].afterwards.survive_to_breed.best == 0.35
    assert case.recipient.effective_size.best == 12
    assert case.recipient.effective_size.spread is None


def test_that_everything_else_stays():
    case = read_case(full())
    raw, after = to_raw(case), to_raw(applied(case, "half survive"))
    raw["recipient"]["effective_size"] = 12
    raw["plans"][2]["releases"][0]["afterwards"]["survive_to_breed"] = 0.35
    assert after == raw


def test_that_a_default_is_multiplied_where_the_field_was_left_out():
    change = {"path": "plans[*].releases[*].afterwards.survive_to_breed", "times": 0.5}
    case = applied(asked(with_release(), change), "asked")
    assert case.plans[1].releases[0].afterwards.survive_to_breed.best == 0.5


def test_that_times_acts_on_the_whole_range_and_keeps_the_source():
    case = asked(full(), {"path": "recipient.effective_size", "times": 0.5})
    held = applied(case, "asked").recipient.effective_size
    assert (held.best, held.low, held.high) == (8, 4.5, 15)
    assert held.source == "markers, 2024"


def test_that_a_negative_factor_swaps_the_ends():
    raw = full()
    raw["trait"]["optimum_shift_per_year"] = {"best": 0.01, "low": 0.0, "high": 0.02}
    case = asked(raw, {"path": "trait.optimum_shift_per_year", "times": -1})
    held = applied(case, "asked").trait.optimum_shift_per_year
    assert (held.low, held.best, held.high) == (-0.02, -0.01, 0)


@pytest.mark.parametrize(
    ("path", "expected"),
    [
        ("recipient.breeding_males", 10.0),
        ("plans[1].effective_size", 8.0),
        ("life_cycle.females_among_young", 0.25),
    ],
)
def test_that_defaults_that_follow_from_other_fields_are_multiplied_too(path, expected):
    raw = full()
    for part, field in (("recipient", "breeding_males"), ("life_cycle", "females_among_young")):
        del raw[part][field]
    case = asked(raw, {"path": path, "times": 0.5})
    assert [one.after for one in changed_values(case, "asked")] == [expected]


def test_that_a_part_left_out_gets_its_other_defaults():
    raw = full()
    del raw["load"]["mild_selection"]
    case = applied(asked(raw, {"path": "load.mild_selection.mean", "times": 2}), "asked")
    assert (case.load.mild_selection.mean.best, case.load.mild_selection.shape.best) == (0.1, 0.5)


def test_that_changes_act_one_after_the_other():
    path = "recipient.effective_size"
    case = asked(full(), {"path": path, "set": 12}, {"path": path, "times": 0.5})
    assert changed_values(case, "asked") == (
        ChangedValue(path, full()["recipient"]["effective_size"], 6),
    )


def test_that_changed_values_name_path_before_and_after():
    first, second = changed_values(read_case(full()), "half survive")
    assert first == ChangedValue("plans[2].releases[0].afterwards.survive_to_breed", 0.7, 0.35)
    assert (second.path, second.after) == ("recipient.effective_size", 12)


def test_that_an_unknown_what_if_is_a_key_error():
    with pytest.raises(KeyError, match="none"):
        applied(read_case(full()), "none")


def test_that_a_change_that_makes_a_problem_is_refused_with_the_what_ifs_name():
    case = asked(with_release(), {"path": "recipient.gene_diversity", "times": 3})
    with pytest.raises(InvalidCase, match=r"recipient\.gene_diversity: Under the what-if “asked”"):
        applied(case, "asked")
