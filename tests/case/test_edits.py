"""Edits: each leads to a valid case and says what it did; wrong ones are refused whole."""

import copy

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rescue_planner.case import edits
from rescue_planner.case.edits import Edit
from rescue_planner.case.file import canonical
from rescue_planner.case.problems import InvalidCase, read_case
from rescue_planner.case.quantity import Quantity
from rescue_planner.case.raw import get, to_raw
from tests.case.sample import full, small, with_release


@pytest.fixture
def case():
    return read_case(full())


@pytest.fixture
def wave():
    return read_case(with_release())


def value(edit: Edit, path: str):
    return get(to_raw(edit.case), path)


# --- values -------------------------------------------------------------------------


def test_that_a_value_is_set_and_said(wave):
    edit = edits.set_value(wave, "recipient.effective_size", 14)
    assert edit.sentence == "Set effective size (Ne) to 14"
    assert value(edit, "recipient.effective_size") == 14


@pytest.mark.parametrize(
    ("path", "new", "sentence"),
    [
        (
            "plans[2].releases[0].who.females",
            3,
            "Set females (release 1 of plan “Two pairs every fourth year”) to 3",
        ),
        ("donors[1].fst_form", "hudson", "Set fst form (donor “St. Anne [pens]”) to “hudson”"),
        ("donors[0].fst_to_recipient", 0.3, "Set FST to the recipient (donor “Upper Fen”) to 0.3"),
        ("donors[0].drifts", True, "Set drifts (donor “Upper Fen”) to yes"),
        ("title", "Voles", "Set title to “Voles”"),
        (
            "loci[0].fitness[1]",
            0.95,
            "Set fitness of AA, Aa, aa, entry 2 (tracked locus “coat”) to 0.95",
        ),
        (
            "loci[0].donor_frequency.Upper Fen",
            0.2,
            "Set frequency in the donor, “Upper Fen” (tracked locus “coat”) to 0.2",
        ),
        (
            "recipient.adults",
            Quantity(best=44, low=40, high=50),
            "Set adults to 44 (40 to 50)",
        ),
    ],
)
def test_that_the_sentence_names_field_holder_and_value(case, path, new, sentence):
    assert edits.set_value(case, path, new).sentence == sentence


def test_that_a_plain_number_keeps_range_and_source(case):
    edit = edits.set_value(case, "recipient.effective_size", 14)
    before = full()["recipient"]["effective_size"]
    assert value(edit, "recipient.effective_size") == before | {"best": 14}


def test_that_a_quantity_replaces_range_and_source(case):
    edit = edits.set_value(case, "recipient.effective_size", Quantity(best=14, low=10))
    assert value(edit, "recipient.effective_size") == {"best": 14, "low": 10}


def test_that_nothing_leaves_a_field_out_and_its_empty_holder_too(wave):
    path = "plans[1].releases[0].afterwards.survive_to_breed"
    edit = edits.set_value(edits.set_value(wave, path, 0.5).case, path, None)
    assert edit.sentence == "Leave out survive to breed (release 1 of plan “Wave”)"
    assert to_raw(edit.case) == to_raw(wave)


def test_that_leaving_out_what_is_left_out_changes_nothing(wave):
    assert edits.set_value(wave, "recipient.carrying_capacity", None).case == wave


def test_that_a_needed_field_cannot_be_left_out(wave):
    with pytest.raises(InvalidCase, match=r"recipient\.adults: .* is missing"):
        edits.set_value(wave, "recipient.adults", None)


def test_that_a_value_that_makes_a_problem_is_refused(wave):
    with pytest.raises(InvalidCase, match="before the start"):
        edits.set_value(wave, "plans[1].releases[0].when.first_year", 1999)


def test_that_a_whole_part_can_be_set(wave):
    cycle = full()["life_cycle"]
    edit = edits.set_value(wave, "life_cycle", cycle)
    assert value(edit, "life_cycle") == cycle


def test_that_a_part_left_out_gets_its_other_defaults(case):
    raw = full()
    del raw["load"]["mild_selection"]
    edit = edits.set_value(read_case(raw), "load.mild_selection.mean", 0.1)
    assert value(edit, "load.mild_selection") == {"mean": 0.1, "shape": 0.5}


def test_that_a_range_keeps_the_best_value_and_the_source(case):
    edit = edits.set_range(case, "recipient.effective_size", 10, 20, shape="pert")
    held = value(edit, "recipient.effective_size")
    assert (held["best"], held["low"], held["high"], held["shape"]) == (16, 10, 20, "pert")
    assert held["source"] == full()["recipient"]["effective_size"]["source"]
    assert edit.sentence == "Set the range of effective size (Ne) to 10 to 20"


def test_that_a_range_on_a_field_left_out_takes_its_default(wave):
    path = "plans[1].releases[0].afterwards.survive_to_breed"
    assert value(edits.set_range(wave, path, 0.4, 1), path) == {"best": 1, "low": 0.4, "high": 1}


def test_that_a_range_out_of_order_is_refused(wave):
    with pytest.raises(InvalidCase, match="in order"):
        edits.set_range(wave, "recipient.adults", 50, 60)


def test_that_taking_the_range_away_leaves_a_plain_number(wave):
    ranged = edits.set_range(wave, "recipient.adults", 30, 60).case
    edit = edits.set_range(ranged, "recipient.adults", None, None)
    assert (value(edit, "recipient.adults"), edit.case) == (40, wave)


def test_that_a_source_is_set_on_a_plain_number(wave):
    edit = edits.set_source(wave, "recipient.adults", origin="measured", source="count of 2024")
    held = {"best": 40, "origin": "measured", "source": "count of 2024"}
    assert value(edit, "recipient.adults") == held


# --- plans --------------------------------------------------------------------------


def test_that_a_plan_is_added_at_the_end(wave):
    edit = edits.add_plan(wave, "Trickle")
    assert [plan.name for plan in edit.case.plans] == ["No releases", "Wave", "Trickle"]
    assert edit.sentence == "Add plan “Trickle”"


def test_that_a_thirteenth_plan_is_refused(wave):
    for i in range(10):
        wave = edits.add_plan(wave, f"Plan {i}").case
    with pytest.raises(InvalidCase, match="13 plans"):
        edits.add_plan(wave, "One more")


def test_that_a_copy_stands_after_its_plan_with_a_free_name(case):
    twice = edits.duplicate_plan(edits.duplicate_plan(case, "Trickle").case, "Trickle").case
    names = [plan.name for plan in twice.plans]
    assert names[1:4] == ["Trickle", "Trickle 3", "Trickle 2"]
    assert twice.plans[2].steady == twice.plans[1].steady


def test_that_a_copy_of_no_releases_may_be_filled(wave):
    edit = edits.duplicate_plan(wave, "No releases", "Something")
    assert [plan.name for plan in edit.case.plans] == ["No releases", "Something", "Wave"]


def test_that_a_plan_is_renamed(wave):
    edit = edits.rename_plan(wave, "Wave", "Two waves")
    assert (edit.case.plans[1].name, edit.sentence) == (
        "Two waves",
        "Rename plan “Wave” to “Two waves”",
    )


@pytest.mark.parametrize("change", [edits.remove_plan, lambda c, n: edits.rename_plan(c, n, "x")])
def test_that_no_releases_is_neither_renamed_nor_removed(wave, change):
    with pytest.raises(InvalidCase, match="No releases"):
        change(wave, "No releases")


@pytest.mark.parametrize(
    "change",
    [
        edits.remove_plan,
        edits.duplicate_plan,
        lambda c, n: edits.move_plan(c, n, 0),
        lambda c, n: edits.remove_release(c, n, 0),
        lambda c, n: edits.add_release(c, n, "Upper Fen", 2030),
    ],
)
def test_that_an_unknown_plan_is_a_key_error(wave, change):
    with pytest.raises(KeyError, match="Nowhere"):
        change(wave, "Nowhere")


def test_that_plans_move(case):
    edit = edits.move_plan(case, "Two pairs every fourth year", 0)
    assert [plan.name[:2] for plan in edit.case.plans] == ["Tw", "No", "Tr"]
    back = edits.move_plan(edit.case, "Two pairs every fourth year", 2)
    assert canonical(back.case) == canonical(case)


def with_numbered_what_if():
    raw = full()
    raw["what_ifs"][0]["changes"] = [{"path": "plans[2].releases[0].who.females", "times": 2}]
    raw["answers"] = [{"remark": "release-of-none plans[2].releases[0].who", "reason": "later"}]
    return read_case(raw)


def test_that_what_ifs_and_answers_follow_a_plan_that_moves():
    moved = edits.move_plan(with_numbered_what_if(), "Two pairs every fourth year", 0).case
    assert moved.what_ifs[0].changes[0].path == "plans[0].releases[0].who.females"
    assert moved.answers[0].remark == "release-of-none plans[0].releases[0].who"


def test_that_what_ifs_and_answers_follow_when_an_earlier_plan_goes():
    left = edits.remove_plan(with_numbered_what_if(), "Trickle").case
    assert left.what_ifs[0].changes[0].path == "plans[1].releases[0].who.females"
    assert left.answers[0].remark == "release-of-none plans[1].releases[0].who"


def test_that_a_plan_a_what_if_names_stays_until_that_is_changed():
    with pytest.raises(InvalidCase, match=r"The what-if “half survive” changes plans\[2\]"):
        edits.remove_plan(with_numbered_what_if(), "Two pairs every fourth year")


def test_that_answers_about_a_removed_plan_go_with_it():
    raw = full()
    raw["answers"] = [{"remark": "size-high plans[1].effective_size", "reason": "grows"}]
    assert edits.remove_plan(read_case(raw), "Trickle").case.answers == ()


# --- releases, steady flow, rules, actions ----------------------------------------------


def test_that_a_release_is_added_and_said(wave):
    edit = edits.add_release(wave, "Wave", "Upper Fen", 2040, 2, 1, survive_to_breed=0.5, times=2)
    assert edit.sentence == (
        "Add a release of 2 females and 1 male from “Upper Fen” in 2040 to plan “Wave”"
    )
    assert value(edit, "plans[1].releases[1]") == {
        "donor": "Upper Fen",
        "who": {"females": 2, "males": 1},
        "when": {"first_year": 2040, "times": 2},
        "afterwards": {"survive_to_breed": 0.5},
    }


def test_that_a_release_has_no_unknown_part(wave):
    with pytest.raises(TypeError, match="colour"):
        edits.add_release(wave, "Wave", "Upper Fen", 2040, colour=2)


def test_that_a_release_changes_in_one_step(wave):
    edit = edits.change_release(wave, "Wave", 0, females=4, first_year=2035, loan_years=None)
    release = edit.case.plans[1].releases[0]
    assert (release.who.females.best, release.when.first_year.best) == (4, 2035)
    assert edit.sentence == (
        "Change release 1 of plan “Wave”: females 4, first year 2035, loan years left out"
    )


def test_that_removing_what_was_added_gives_the_same_plain_case(wave):
    added = edits.add_release(wave, "Wave", "Upper Fen", 2040, 2).case
    assert to_raw(edits.remove_release(added, "Wave", 1).case) == to_raw(wave)


def test_that_a_release_that_is_not_there_is_a_key_error(wave):
    with pytest.raises(KeyError):
        edits.remove_release(wave, "Wave", 4)


def test_that_steady_flow_is_set_and_set_again(wave):
    first = edits.set_steady(wave, "Wave", "Upper Fen", 1, 2030)
    again = edits.set_steady(first.case, "Wave", "Upper Fen", 2)
    assert value(again, "plans[1].steady") == [{"donor": "Upper Fen", "migrants_per_generation": 2}]
    assert "1 newcomers that breed per generation from “Upper Fen”" in first.sentence
    assert to_raw(edits.remove_steady(again.case, "Wave", 0).case) == to_raw(wave)


def test_that_a_rule_is_added_and_removed(wave):
    rule = {"name": "enough", "when": "donor_ancestry", "above": 0.4, "then": "stop"}
    added = edits.add_rule(wave, "Wave", rule)
    assert added.sentence == "Add rule “enough” to plan “Wave”"
    assert value(added, "plans[1].rules[0]") == rule
    assert to_raw(edits.remove_rule(added.case, "Wave", 0).case) == to_raw(wave)


def test_that_another_action_is_added_and_removed(wave):
    action = {"what": "ditches", "year": 2030, "carrying_capacity_times": 1.5}
    added = edits.add_action(wave, "Wave", action)
    assert value(added, "plans[1].other_actions[0]") == action
    removed = edits.remove_action(added.case, "Wave", 0)
    assert removed.sentence == "Remove other action “ditches” of plan “Wave”"
    assert to_raw(removed.case) == to_raw(wave)


# --- donors and loci --------------------------------------------------------------------


def test_that_a_donor_comes_with_its_frequencies(case):
    edit = edits.add_donor(case, "High Fen", 0.6, 0.1, {"coat": 0.3}, kind="wild", adults=90)
    assert value(edit, "loci[0].donor_frequency.High Fen") == 0.3
    assert value(edit, "donors[2].kind") == "wild"


def test_that_a_donor_without_a_frequency_is_refused(case):
    with pytest.raises(InvalidCase, match="The frequency of this allele"):
        edits.add_donor(case, "High Fen", 0.6, 0.1)


def test_that_a_donor_in_use_stays_and_every_use_is_named(case):
    with pytest.raises(InvalidCase) as refused:
        edits.remove_donor(case, "Upper Fen")
    for place in (
        "plans[2].releases[0].donor",
        "plans[2].rules[1].release.donor",
        "plans[2].rules[0].when",
    ):
        assert place in refused.value.problems[0].text


def test_that_a_donor_of_whom_ancestry_is_left_stays():
    raw = with_release()
    raw["plans"].pop()
    raw["recipient"]["donor_ancestry_at_start"] = {"Upper Fen": 0.1}
    with pytest.raises(InvalidCase, match="donor_ancestry_at_start"):
        edits.remove_donor(read_case(raw), "Upper Fen")


def test_that_a_donor_not_in_use_goes_with_all_that_is_kept_under_its_name():
    raw = full()
    raw["plans"] = raw["plans"][:1]
    raw["what_ifs"] = []
    left = to_raw(edits.remove_donor(read_case(raw), "St. Anne [pens]").case)
    assert [donor["name"] for donor in left["donors"]] == ["Upper Fen"]
    assert "St. Anne" not in str(left)


def test_that_a_donor_is_renamed_wherever_it_is_used():
    raw = full()
    raw["what_ifs"][0]["changes"] = [{"path": "loci[*].donor_frequency.Upper Fen", "set": 0.2}]
    raw["targets"].append({"measure": "donor_adults:Upper Fen", "at_least": 9, "by_year": 2050})
    case = read_case(raw)
    edit = edits.rename_donor(case, "Upper Fen", "Isle [9.5]")
    assert "Upper Fen" not in str(to_raw(edit.case))
    assert edit.case.what_ifs[0].changes[0].path == 'loci[*].donor_frequency["Isle [9.5]"]'
    back = edits.rename_donor(edit.case, "Isle [9.5]", "Upper Fen")
    assert to_raw(back.case) == to_raw(case)


def test_that_a_name_that_is_taken_is_refused(case):
    with pytest.raises(InvalidCase, match="Another donor"):
        edits.rename_donor(case, "Upper Fen", "st. anne [PENS]")


def test_that_a_locus_is_added_renamed_and_removed(case):
    frequencies = {"Upper Fen": 0, "St. Anne [pens]": 0.2}
    added = edits.add_locus(case, "tail", 0.5, frequencies, role="neutral").case
    target = edits.add_target(added, "allele_kept:tail", 2087, at_least=0.9).case
    renamed = edits.rename_locus(target, "tail", "tail tip").case
    assert renamed.targets[1].measure == "allele_kept:tail tip"
    with pytest.raises(InvalidCase, match=r"targets\[1\]\.measure"):
        edits.remove_locus(renamed, "tail tip")
    left = edits.remove_locus(edits.remove_target(renamed, 1).case, "tail tip").case
    assert to_raw(left) == to_raw(case)


# --- targets, what-ifs, answers -----------------------------------------------------------


def test_that_a_target_is_added_and_removed(wave):
    added = edits.add_target(wave, "inbreeding", 2087, at_most=0.3, owner="Fen Office")
    assert added.sentence == "Add a target for Inbreeding F"
    removed = edits.remove_target(added.case, 0)
    assert to_raw(removed.case)["targets"] == []
    assert canonical(removed.case) == canonical(wave)


def test_that_a_what_if_is_added_and_removed(wave):
    changes = [{"path": "recipient.effective_size", "times": 0.5}]
    added = edits.add_what_if(wave, "half", changes, asked_by="Fen Office")
    assert value(added, "what_ifs[0].changes") == changes
    assert canonical(edits.remove_what_if(added.case, "half").case) == canonical(wave)


def test_that_a_remark_is_answered_once_and_the_answer_taken_back(wave):
    key = "horizon-short time.horizon_years"
    first = edits.answer_remark(wave, key, "asked for", by="A. Hill").case
    second = edits.answer_remark(first, key, "asked for by the office").case
    assert [answer.reason for answer in second.answers] == ["asked for by the office"]
    assert to_raw(edits.answer_remark(second, key, None).case) == to_raw(wave)


# --- together ---------------------------------------------------------------------------


def _plan(case):
    return next(plan.name for plan in case.plans if plan.name != "No releases")


def _set_value(case, draw):
    path = draw(st.sampled_from(["recipient.carrying_capacity", "recipient.gene_diversity"]))
    before = get(to_raw(case), path)
    edit = edits.set_value(case, path, draw(st.floats(0.01, 0.6)))
    return edit, lambda after: edits.set_value(after, path, before)


def _set_range(case, draw):
    before = case.recipient.adults
    edit = edits.set_range(case, "recipient.adults", draw(st.floats(1, 40)), None, origin="guessed")
    return edit, lambda after: edits.set_value(after, "recipient.adults", before)


def _add_release(case, draw):
    plan, year, females = _plan(case), draw(st.integers(2027, 2087)), draw(st.integers(0, 3))
    place = len(case.plan(plan).releases)
    edit = edits.add_release(case, plan, case.donors[1].name, year, females)
    return edit, lambda after: edits.remove_release(after, plan, place)


def _rename_donor(case, draw):
    before, name = case.donors[0].name, f"x{draw(names)}"
    edit = edits.rename_donor(case, before, name)
    return edit, lambda after: edits.rename_donor(after, name, before)


def _rename_plan(case, draw):
    before, name = _plan(case), f"x{draw(names)}"
    edit = edits.rename_plan(case, before, name)
    return edit, lambda after: edits.rename_plan(after, name, before)


def _move_plan(case, draw):
    plan, to = _plan(case), draw(st.integers(0, len(case.plans) - 1))
    place = [one.name for one in case.plans].index(plan)
    edit = edits.move_plan(case, plan, to)
    return edit, lambda after: edits.move_plan(after, plan, place)


def _duplicate_plan(case, draw):
    edit = edits.duplicate_plan(case, _plan(case))
    (new,) = {plan.name for plan in edit.case.plans} - {plan.name for plan in case.plans}
    return edit, lambda after: edits.remove_plan(after, new)


names = st.text(max_size=9).filter(str.isprintable)
UNDOABLE = [
    _set_value,
    _set_range,
    _add_release,
    _rename_donor,
    _rename_plan,
    _move_plan,
    _duplicate_plan,
]


@settings(deadline=None, max_examples=30)
@given(st.data())
def test_that_random_edits_taken_back_in_turn_give_the_same_case_to_the_byte(data):
    case = read_case(full())
    undo = []
    for change in data.draw(st.lists(st.sampled_from(UNDOABLE), min_size=1, max_size=6)):
        edit, back = change(case, data.draw)
        undo.append((canonical(case), back))
        case = edit.case
    for before, back in reversed(undo):
        case = back(case).case
        assert canonical(case) == before


def test_that_no_edit_touches_the_case_it_was_given(case):
    before = copy.deepcopy(to_raw(case))
    edits.set_value(case, "recipient.adults", 50)
    edits.duplicate_plan(case, "Trickle")
    edits.rename_donor(case, "Upper Fen", "x")
    assert to_raw(case) == before == full()


def test_that_a_plain_small_case_survives_every_kind_of_addition():
    case = read_case(small())
    case = edits.add_donor(case, "Upper Fen", 0.66, 0.2).case
    case = edits.add_locus(case, "coat", 0.5, {"Upper Fen": 0.1}).case
    case = edits.add_plan(case, "Wave").case
    case = edits.add_release(case, "Wave", "Upper Fen", 2030, Quantity(best=2, low=1, high=3)).case
    assert case.plans[1].releases[0].who.females.spread == (1, 3)
