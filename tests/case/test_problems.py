"""Every problem of a case, with its path; that several show at once; and what is no problem."""

import copy
import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from rescue_planner.case.problems import InvalidCase, Problem, read_case
from tests.case.sample import changed, full, problems_of, small, with_release
from tests.outside.random_cases import random_cases

# --- what is fine --------------------


def test_that_the_full_and_the_small_case_have_no_problem():
    assert problems_of(full()) == {}
    assert problems_of(small()) == {}


@pytest.mark.parametrize(("name", "raw"), random_cases(), ids=lambda one: str(one)[:10])
def test_that_varied_cases_have_no_problem(name, raw):
    assert problems_of(raw) == {}


def test_that_an_event_at_the_start_and_at_the_horizon_is_inside():
    for year in (2027, 2087):
        assert problems_of(with_release(when={"first_year": year})) == {}


def test_that_reading_changes_nothing_in_what_was_given():
    raw = full()
    read_case(raw)
    assert raw == full()


# --- types, bounds, fields --------------------


@pytest.mark.parametrize(
    ("path", "value", "word"),
    [
        ("recipient.adults", "forty", 'the text "forty"'),
        ("recipient.adults", True, "got true"),
        ("recipient.adults", [40], "must be a number"),
        ("recipient.adults", math.nan, "finite"),
        ("recipient.adults", math.inf, "finite"),
        ("recipient.adults", 10**400, "finite"),
        ("recipient.adults", -3, "above 0"),
        ("recipient.gene_diversity", 1.01, "at most 1"),
        ("recipient.gene_diversity", 0, "above 0"),
        ("time.start_year", 2027.5, "whole number"),
        ("recipient.effective_size_follows_adults", "yes", "true or false"),
        ("recipient.markers", "blood", '"SNPs"'),
        ("recipient", 3, "named fields"),
        ("title", 3, "text"),
        ("plans", {"name": "x"}, "list"),
        ("format", "other", '"rescue case"'),
        ("recipient.donor_ancestry_at_start", [0.1], "number for each name"),
    ],
)
def test_that_a_wrong_value_is_named_by_its_path(path, value, word):
    assert word in problems_of(changed(small(), path, value))[path]


@pytest.mark.parametrize("entry", ["", 7, None, [], "text"])
def test_that_what_is_no_case_is_one_problem(entry):
    assert problems_of(entry) == {"": "The case must be an object with named fields."}


def test_that_a_needed_field_is_missed():
    raw = small()
    del raw["recipient"]["effective_size"]
    assert problems_of(raw) == {
        "recipient.effective_size": "“Effective size (Ne)” is missing: add it."
    }


def test_that_an_unknown_field_is_named_with_the_nearest_known_one():
    raw = changed(small(), "recipient.carrying_capacty", 3)
    assert "did you mean “carrying_capacity”" in problems_of(raw)["recipient.carrying_capacty"]


def test_that_an_unknown_field_of_a_number_is_named():
    raw = changed(small(), "recipient.adults", {"best": 40, "lo": 30})
    assert "did you mean “low”" in problems_of(raw)["recipient.adults.lo"]


def test_that_a_range_out_of_order_is_named_without_best():
    raw = changed(small(), "recipient.adults", {"best": 40, "low": 50})
    assert "in order" in problems_of(raw)["recipient.adults"]


def test_that_a_wrong_end_of_a_range_says_which_end():
    raw = changed(small(), "recipient.gene_diversity", {"best": 0.4, "high": 1.5})
    assert "its high must be" in problems_of(raw)["recipient.gene_diversity"]


@pytest.mark.parametrize(
    ("path", "value"),
    [
        ("loci[0].fitness[1]", -1),
        ('loci[0].donor_frequency["St. Anne [pens]"]', 1.5),
        ("donors[0].fst_to_recipient", 1),
        ('donors[0].fst_to_donors["St. Anne [pens]"]', -0.1),
        ("life_cycle.young_per_breeding_female.counts.1", 2),
    ],
)
def test_that_bounds_hold_inside_lists_and_mappings(path, value):
    assert "must be" in problems_of(changed(full(), path, value))[path]


def test_that_a_wrong_word_for_a_donors_life_cycle_is_one_problem():
    found = problems_of(changed(full(), "donors[0].life_cycle", "sme"))
    assert list(found) == ["donors[0].life_cycle"]


def test_that_a_donors_own_life_cycle_is_checked_without_noise():
    cycle = copy.deepcopy(full()["life_cycle"])
    cycle["last_age"] = "old"
    found = problems_of(changed(full(), "donors[0].life_cycle", cycle))
    assert list(found) == ["donors[0].life_cycle.last_age"]


# --- all at once --------------------


def test_that_problems_of_types_and_across_fields_show_together():
    raw = with_release(donor="Nowhere", who={"females": "two"}, when={"first_year": 1990})
    raw["recipient"]["gene_diversity"] = 7
    raw["targets"] = [{"measure": "adults", "by_year": 2040}]
    assert set(problems_of(raw)) == {
        "recipient.gene_diversity",
        "plans[1].releases[0].who.females",
        "plans[1].releases[0].donor",
        "plans[1].releases[0].when.first_year",
        "targets[0]",
    }


def test_that_the_refusal_prints_every_path():
    with pytest.raises(InvalidCase, match=r"recipient\.adults: .*\n.*recipient\.gene_diversity: "):
        read_case(changed(changed(small(), "recipient.adults", -1), "recipient.gene_diversity", 2))


json_value = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=5),
    lambda inner: (
        st.lists(inner, max_size=3)
        | st.dictionaries(
            st.sampled_from(["name", "best", "low", "donor", "when"]), inner, max_size=3
        )
    ),
    max_leaves=6,
)
places = [
    "donors", "donors[0]", "donors[0].name", "donors[0].fst_to_donors", "donors[0].life_cycle",
    "loci", "loci[0].fitness", "loci[0].donor_frequency", "life_cycle", "trait", "recipient",
    "life_cycle.young_per_breeding_female.counts", "life_cycle.yearly_sd", "plans", "plans[0]",
    "plans[1]", "plans[2].releases", "plans[2].releases[0].when", "plans[2].rules",
    "plans[2].rules[0]", "plans[2].other_actions[0]", "what_ifs", "what_ifs[0].changes[0].path",
    "targets", "targets[0].measure", "time", "time.generation_years", "run", "answers",
]  # fmt: skip


@given(st.lists(st.tuples(st.sampled_from(places), json_value), min_size=1, max_size=3))
def test_that_nothing_in_a_file_makes_reading_fail_in_another_way(entries):
    raw = full()
    for path, value in entries:
        try:
            raw = changed(raw, path, value)
        except KeyError:
            continue
    try:
        read_case(raw)
    except InvalidCase as invalid:
        assert all(problem.text for problem in invalid.problems)  # noqa: PT017


def test_that_a_file_full_of_nonsense_is_refused_at_a_readable_length():
    raw = small() | {f"field {i}": i for i in range(20_000)}
    with pytest.raises(InvalidCase) as refused:
        read_case(raw)
    assert len(refused.value.problems) == 1001
    assert refused.value.problems[-1].text == "More than 1000 problems: the rest is not listed."


# --- names --------------------


def test_that_no_releases_must_be_there():
    found = problems_of(changed(small(), "plans", [{"name": "Wave"}]))
    assert '"No releases" is missing' in found["plans"]


def test_that_no_releases_must_be_spelt_so():
    assert "missing" in problems_of(changed(small(), "plans[0].name", "no releases"))["plans"]


def test_that_no_releases_may_stand_anywhere():
    raw = with_release()
    raw["plans"].reverse()
    assert problems_of(raw) == {}


def test_that_no_releases_holds_nothing_but_its_name():
    raw = with_release()
    raw["plans"][0]["effective_size"] = 10
    assert "nothing but its name" in problems_of(raw)["plans[0].effective_size"]


def test_that_no_releases_may_hold_empty_lists():
    assert problems_of(changed(small(), "plans[0].releases", [])) == {}


def test_that_two_no_releases_are_a_doubled_name():
    raw = changed(small(), "plans[1]", {"name": "No releases"})
    assert list(problems_of(raw)) == ["plans[1].name"]


@pytest.mark.parametrize(
    ("kind", "path"),
    [
        ("plans", "plans[3].name"),
        ("donors", "donors[2].name"),
        ("loci", "loci[1].name"),
        ("what_ifs", "what_ifs[1].name"),
    ],
)
def test_that_names_of_one_kind_differ_whatever_their_capitals_and_blanks(kind, path):
    raw = full()
    again = copy.deepcopy(raw[kind][-1])
    again["name"] = f"  {again['name'].upper()} "
    raw[kind].append(again)
    assert "Another" in problems_of(raw)[path]


def test_that_rules_of_one_plan_differ_in_name():
    raw = changed(full(), "plans[2].rules[1].name", "Ancestry ceiling")
    assert "Another rule" in problems_of(raw)["plans[2].rules[1].name"]


@pytest.mark.parametrize(
    "path",
    [
        "recipient.name",
        "donors[1].name",
        "loci[0].name",
        "plans[1].name",
        "what_ifs[0].name",
        "plans[2].rules[0].name",
        "plans[2].other_actions[0].what",
        "life_cycle.die_offs[0].name",
    ],
)
def test_that_an_empty_name_is_a_problem(path):
    assert path in problems_of(changed(full(), path, "  "))


def test_that_twelve_plans_are_enough():
    plans = [{"name": "No releases"}] + [{"name": f"Plan {i}"} for i in range(11)]
    assert problems_of(changed(small(), "plans", plans)) == {}
    assert "13 plans" in problems_of(changed(small(), "plans", [*plans, {"name": "x"}]))["plans"]


def test_that_ten_thousand_plans_are_one_sentence_beside_the_other_problems():
    plans = [{"name": "same", "releases": [{"donor": "x"}]}] * 10_000
    raw = changed(changed(small(), "plans", plans), "recipient.adults", -1)
    assert set(problems_of(raw)) == {"plans", "recipient.adults"}


@pytest.mark.parametrize(
    "path",
    [
        "plans[2].releases[0].donor",
        "plans[1].steady[0].donor",
        "plans[2].rules[1].release.donor",
    ],
)
def test_that_an_unknown_donor_in_a_plan_is_named(path):
    assert (
        "no donor called “Upper Fin”: did you mean “Upper Fen”"
        in problems_of(changed(full(), path, "Upper Fin"))[path]
    )


@pytest.mark.parametrize(
    "path",
    [
        "loci[0].donor_frequency.Nowhere",
        "recipient.donor_ancestry_at_start.Nowhere",
        "donors[0].fst_to_donors.Nowhere",
    ],
)
def test_that_a_value_kept_for_an_unknown_donor_is_named(path):
    assert "no donor called “Nowhere”" in problems_of(changed(full(), path, 0.0))[path]


def test_that_a_locus_must_say_every_donors_frequency():
    raw = full()
    del raw["loci"][0]["donor_frequency"]["St. Anne [pens]"]
    path = 'loci[0].donor_frequency["St. Anne [pens]"]'
    assert "0 if the donor lacks the allele" in problems_of(raw)[path]


# --- the refusal itself --------------------


def test_that_a_refusal_travels_to_another_process():
    import pickle

    invalid = InvalidCase([Problem("a", "b")])
    assert pickle.loads(pickle.dumps(invalid)).problems == invalid.problems


def test_that_a_case_travels_to_another_process_and_hashes():
    import pickle

    case = read_case(full())
    assert pickle.loads(pickle.dumps(case)) == case
    assert len({case, read_case(full())}) == 1
