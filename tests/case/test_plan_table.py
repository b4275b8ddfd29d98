"""The table of a plan's releases: texts go in, texts come out, and nothing is lost."""

import random

import pytest

from rescue_planner.case.edits import add_release, add_what_if, set_range
from rescue_planner.case.edits.releases import order_releases, remove_releases
from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.plan_entry import fill_down, followed, order_by, put_texts
from rescue_planner.case.plan_table import (
    COLUMNS,
    NOTHING_HELD,
    PLACES,
    headings,
    held_sentences,
    read_block,
    table_rows,
    write_block,
)
from rescue_planner.case.problems import read_case
from tests.case.sample import with_release

YEAR, EVERY, TIMES, DONOR, FEMALES, MALES, AGE, SURVIVE, BREED = (
    PLACES[key]
    for key in (
        "first_year", "every_years", "times", "donor", "females", "males", "age",
        "survive_to_breed", "breeding_relative_to_residents",
    )
)  # fmt: skip


def read(text):
    return float(text.replace(",", "."))


def fresh(most=8):
    raw = with_release()
    raw["donors"][0]["most_removed_per_year"] = most
    return read_case(raw)


def put(case, block, at=(0, 0), sheet=NOTHING_HELD):
    texts = {
        (at[0] + r, at[1] + c): text for r, line in enumerate(block) for c, text in enumerate(line)
    }
    return put_texts(case, "Wave", texts, read, sheet)


def block_of(rows):
    """Return rows of ten columns with unlike values."""
    draw = random.Random(7)
    return [
        [
            str(2027 + row), "2", "1", "Upper Fen", str(draw.randint(0, 4)),
            str(draw.randint(0, 4)), str(draw.randint(1, 9)), f"0.{draw.randint(1, 9)}",
            f"1.{draw.randint(1, 9)}", str(draw.randint(100, 5000)),
        ]
        for row in range(rows)
    ]  # fmt: skip


def test_that_a_block_of_50_rows_and_10_columns_keeps_every_value():
    block = block_of(50)
    entry = put(fresh(), read_block(write_block(block)), at=(0, 0))
    assert entry.sheet.is_clean
    case = entry.edit.case
    assert [list(row[:10]) for row in table_rows(case, "Wave")] == block
    held = case.plan("Wave").releases[49]
    assert held.when.first_year.best == 2076
    assert held.donor == "Upper Fen"
    assert isinstance(held.who.females.best, int | float)
    assert put(case, block).edit is None  # the same once more changes nothing


def test_that_cells_survive_a_spreadsheets_quotes_and_line_ends():
    cells = [["a\tb", 'say "hi"', "two\nlines"], ["1", "", "0.5"]]
    assert [list(line) for line in read_block(write_block(cells))] == cells
    assert read_block("1\t2\r\n3\t4\r\n\r\n") == (("1", "2"), ("3", "4"))


def test_that_a_wrong_text_stays_in_its_cell_and_the_rest_goes_in():
    entry = put(fresh(), [["2031", "3", "2", "upper fen", "many", "1", "-2"]])
    release = entry.edit.case.plan("Wave").releases[0]
    assert (release.when.first_year.best, release.who.males.best) == (2031, 1)
    assert release.who.females.best == 2  # as before
    assert {cell: held.text for cell, held in entry.sheet.held.items()} == {
        (0, FEMALES): "many", (0, AGE): "-2",
    }  # fmt: skip
    rows = table_rows(entry.edit.case, "Wave", entry.sheet)
    assert (rows[0][FEMALES], rows[0][AGE], rows[0][DONOR]) == ("many", "-2", "Upper Fen")
    said = dict(held_sentences(entry.sheet, 1))
    assert said[0, AGE].startswith("Row 1, Age: “Age” must be at least 1")


def test_that_a_mended_cell_goes_in_and_its_sentence_goes():
    entry = put(fresh(), [["many"]], at=(0, FEMALES))
    assert entry.edit is None
    mended = put(fresh(), [["4"]], at=(0, FEMALES), sheet=entry.sheet)
    assert mended.sheet.is_clean
    assert mended.edit.sentence == "Set females of release 1 of plan “Wave” to 4"
    assert mended.edit.case.plan("Wave").releases[0].who.females.best == 4


def test_that_a_row_that_is_no_whole_release_stays_below_until_it_is():
    entry = put(
        fresh(), [["2040", "", "", "Nowhere", "3"], ["2041", "", "", "Upper Fen", "2"]], (1, 0)
    )
    case = entry.edit.case
    assert [one.when.first_year.best for one in case.plan("Wave").releases] == [2030, 2041]
    rows = table_rows(case, "Wave", entry.sheet)
    assert rows[2][:5] == ("2040", "", "", "Nowhere", "3")
    assert held_sentences(entry.sheet, 2) == (
        ((2, DONOR), "Row 3, Donor: There is no donor “Nowhere”: write one of “Upper Fen”."),
    )
    mended = put(case, [["Upper Fen"]], at=(2, DONOR), sheet=entry.sheet)
    assert mended.sheet.is_clean
    assert len(mended.edit.case.plan("Wave").releases) == 3


def test_that_a_missing_year_is_asked_for():
    entry = put(fresh(), [["Upper Fen", "3"]], at=(1, DONOR))
    assert entry.edit is None
    assert held_sentences(entry.sheet, 1) == (((1, YEAR), "Row 2, Year: Year is missing: add it."),)


def test_that_rows_beyond_the_donors_limit_are_held_back_and_those_within_it_are_not():
    block = [["2035", "1", "1", "Upper Fen", "5", "0"], ["2035", "1", "1", "Upper Fen", "4", "0"]]
    entry = put(fresh(), block, at=(1, 0))
    assert len(entry.edit.case.plan("Wave").releases) == 2
    ((cell, words),) = held_sentences(entry.sheet, 2)
    assert cell == (2, FEMALES)
    assert "5 + 4 = 9 animals" in words
    assert "at most 8" in words


def test_that_a_change_beyond_the_limit_is_held_back_at_its_cell():
    entry = put(fresh(), [["30"]], at=(0, FEMALES))
    assert entry.edit is None
    assert entry.sheet.held[0, FEMALES].text == "30"
    assert "at most 8" in entry.sheet.held[0, FEMALES].why


def test_that_a_held_text_stays_while_others_are_typed_and_goes_in_where_they_make_room():
    wrong = put(fresh(), [["8"]], at=(0, FEMALES))  # beside 1 male: one too many
    other = put(fresh(), [["3"]], at=(0, AGE), sheet=wrong.sheet)
    assert other.sheet.held[0, FEMALES].text == "8"
    room = put(other.edit.case, [["0"]], at=(0, MALES), sheet=other.sheet)
    assert room.sheet.is_clean
    who = room.edit.case.plan("Wave").releases[0].who
    assert (who.females.best, who.males.best, who.age.best) == (8, 0, 3)


def test_that_a_range_is_kept_by_a_plain_number_and_guards_it():
    path = "plans[1].releases[0].who.females"
    case = set_range(fresh(), path, 1, 4, origin="guessed").case
    held = put(case, [["3"]], at=(0, FEMALES)).edit.case.plan("Wave").releases[0].who.females
    assert (held.best, held.low, held.high, held.origin) == (3, 1, 4, "guessed")
    outside = put(case, [["5"]], at=(0, FEMALES))
    assert outside.edit is None
    assert "in order" in outside.sheet.held[0, FEMALES].why


def test_that_fill_down_takes_the_whole_value():
    case = add_release(fresh(), "Wave", "Upper Fen", 2040, 1, 1).case
    case = set_range(case, "plans[1].releases[0].who.females", 1, 4, source="count").case
    filled = fill_down(case, "Wave", [0, 1], [FEMALES, MALES]).case.plan("Wave").releases
    assert filled[1].who == filled[0].who
    assert filled[1].when.first_year.best == 2040
    with pytest.raises(InvalidCase):  # 2 + 1 and 1 + 1 in one year are more than the donor gives
        fill_down(
            add_release(fresh(most=4), "Wave", "Upper Fen", 2040, 1, 1).case, "Wave", [0, 1], [YEAR]
        )


def test_that_sorting_moves_what_ifs_with_their_release():
    case = add_release(fresh(), "Wave", "Upper Fen", 2028, 5, 1).case
    change = {"path": "plans[1].releases[0].who.females", "set": 1}
    case = add_what_if(case, "fewer", [change]).case
    order = order_by(case, "Wave", YEAR)
    assert order == [1, 0]
    edit = order_releases(case, "Wave", "Sort", order)
    assert [one.when.first_year.best for one in edit.case.plan("Wave").releases] == [2028, 2030]
    assert edit.case.what_ifs[0].changes[0].path == "plans[1].releases[1].who.females"
    assert order_by(edit.case, "Wave", YEAR, falling=True) == [1, 0]
    assert order_by(edit.case, "Wave", DONOR, falling=True) == [0, 1]


def test_that_several_releases_are_removed_at_once():
    case = add_release(fresh(), "Wave", "Upper Fen", 2028, 5, 1).case
    case = add_release(case, "Wave", "Upper Fen", 2029, 2, 2).case
    left = remove_releases(case, "Wave", "Remove", [2, 0]).case.plan("Wave").releases
    assert [one.when.first_year.best for one in left] == [2028]


def test_that_held_texts_stay_with_their_release():
    case = add_release(fresh(), "Wave", "Upper Fen", 2028, 5, 1).case
    entry = put(case, [["many"]], at=(1, FEMALES))
    after = order_releases(case, "Wave", "Sort", [1, 0]).case
    sheet = followed(entry.sheet, case.plan("Wave"), after.plan("Wave"))
    assert list(sheet.held) == [(0, FEMALES)]
    gone = remove_releases(case, "Wave", "Remove", [1]).case
    assert followed(entry.sheet, case.plan("Wave"), gone.plan("Wave")).is_clean


def test_that_headings_have_units():
    assert len(headings(fresh())) == len(COLUMNS)
    assert headings(fresh())[FEMALES] == "Females\nanimals"
