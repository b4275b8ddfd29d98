"""Edits: each leads to a valid case and says what it did; wrong ones are refused whole."""

import pytest

from rescue_planner.case import edits
from rescue_planner.case.edits import Edit
from rescue_planner.case.file import canonical
from rescue_planner.case.problems import InvalidCase, read_case
from rescue_planner.case.raw import get, to_raw
from tests.case.sample import full, with_release


@pytest.fixture
def case():
    return read_case(full())


@pytest.fixture
def wave():
    return read_case(with_release())


def value(edit: Edit, path: str):
    return get(to_raw(edit.case), path)


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


def test_that_what_ifs_and_answers_follow_when_a_plan_comes_in_before():
    more = edits.duplicate_plan(with_numbered_what_if(), "Trickle").case
    assert more.what_ifs[0].changes[0].path == "plans[3].releases[0].who.females"
    assert more.answers[0].remark == "release-of-none plans[3].releases[0].who"


def test_that_what_ifs_stay_when_a_plan_comes_in_after():
    more = edits.duplicate_plan(with_numbered_what_if(), "Two pairs every fourth year").case
    assert more.what_ifs[0].changes[0].path == "plans[2].releases[0].who.females"


def test_that_a_plan_a_what_if_names_stays_until_that_is_changed():
    with pytest.raises(InvalidCase, match="changes the plan “Two pairs every fourth"):
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


def test_that_answers_follow_a_donor_that_is_renamed():
    raw = full()
    remarks = [
        "donor-below-floor plans[2]:Upper Fen",
        "fst-assumed donors[1].fst_to_donors.Upper Fen",
    ]
    others = ["disease-not-assessed", "size-high recipient.effective_size"]
    raw["answers"] = [{"remark": one, "reason": "agreed"} for one in [*remarks, *others]]
    renamed = edits.rename_donor(read_case(raw), "Upper Fen", "St. John").case
    assert [answer.remark for answer in renamed.answers] == [
        "donor-below-floor plans[2]:St. John",
        'fst-assumed donors[1].fst_to_donors["St. John"]',
        *others,
    ]


def test_that_a_donor_in_use_stays_and_every_use_is_named(case):
    with pytest.raises(InvalidCase) as refused:
        edits.remove_donor(case, "Upper Fen")
    for place in (
        "release 1 of plan “Two pairs every fourth year”",
        "rule “second wave” of plan “Two pairs every fourth year”",
        "rule “ancestry ceiling” of plan “Two pairs every fourth year”",
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
