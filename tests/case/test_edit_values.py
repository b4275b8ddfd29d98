"""Edits of single values, and edits that are taken back."""

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
        ("donors[1].fst_form", "hudson", "Set form of FST (donor “St. Anne [pens]”) to “hudson”"),
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
