from __future__ import annotations

import pytest
from pydantic import BaseModel

from rescue_planner.annex.blocks import Table, Text
from rescue_planner.annex.input_tables import HEAD, input_blocks
from rescue_planner.annex.inputs import CHOICE, DEFAULT, NOT_STATED, TEXT, input_rows
from rescue_planner.annex.numerals import given
from rescue_planner.case.document import Case
from rescue_planner.case.quantity import FrozenMap, Quantity


def _numbers(held: object, path: str = "") -> dict[str, Quantity]:
    """Walk a case another way than the annex does: by its own iteration of fields."""
    if isinstance(held, Quantity):
        return {path: held}
    found: dict[str, Quantity] = {}
    if isinstance(held, BaseModel):
        for name, inner in held:
            found |= _numbers(inner, f"{path}.{name}" if path else name)
    elif isinstance(held, FrozenMap):
        for name, inner in held.items():
            found |= _numbers(inner, f"{path}.{name}")
    elif isinstance(held, tuple):
        for index, inner in enumerate(held):
            found |= _numbers(inner, f"{path}[{index}]")
    return found


@pytest.fixture(scope="module")
def rows(case):
    return {row.path: row for row in input_rows(case)}


def test_that_every_number_of_the_case_has_a_row_with_its_value(case, rows):
    numbers = _numbers(case)
    assert set(numbers) <= set(rows)
    for path, held in numbers.items():
        if path != "run.seed":
            assert given(held.best) in rows[path].value


def test_that_no_row_lacks_an_origin(case):
    tables = [block for block in input_blocks(case) if isinstance(block, Table)]
    assert tables
    for table in tables:
        assert table.head == HEAD
        assert all(row[HEAD.index("Origin")] for row in table.rows)


def test_that_every_input_stands_in_the_chapter_once(case):
    """A row of a table, or a name in the line below it; the first page has the decision."""
    blocks = input_blocks(case)
    cells = [row for block in blocks if isinstance(block, Table) for row in block.rows]
    left = " ".join(block.words for block in blocks if isinstance(block, Text))
    first_page = ("title", "species", "authority", "decision")
    given = [row for row in input_rows(case) if row.origin != DEFAULT]
    told = [row for row in given if not row.path.startswith(first_page)]
    names = [row for row in told if row.path.endswith("].name") and row.path.count("[") == 1]
    assert len(cells) == len(told) - len(names)
    for row in input_rows(case):
        if row.origin == DEFAULT and not row.path.startswith(first_page):
            assert row.name.lower() in left.lower(), row.path


def test_that_a_range_stands_with_its_value_and_a_source_with_date_and_person(case):
    tables = {block.caption: block for block in input_blocks(case) if isinstance(block, Table)}
    recipient = tables["Inputs: Recipient (recipient in the case file)"]
    row = next(row for row in recipient.rows if row[0] == "Adults")
    assert row[1:] == (
        *("40 (32 to 52, triangular)", "animals", "measured"),
        *("Spring count; 2026-04; Field team", "adults"),
    )


def test_that_what_was_left_out_stands_under_its_table(case):
    notes = [block.words for block in input_blocks(case) if isinstance(block, Text)]
    (life,) = [words for words in notes if words.startswith("Life cycle, left out: ")]
    assert "Females among young: taken as 0.5" in life


def test_that_a_blank_origin_reads_not_stated(rows):
    assert rows["recipient.breeding_females"].origin == NOT_STATED
    assert rows["recipient.adults"].origin == "measured"


def test_that_range_shape_source_date_and_person_are_kept(rows):
    row = rows["recipient.adults"]
    assert row.spread == "32 to 52, triangular"
    assert (row.source, row.date, row.by) == ("Spring count", "2026-04", "Field team")


def test_that_what_was_left_out_is_marked_with_the_value_taken(rows):
    assert rows["recipient.adult_females"].value == "left out; taken as 20, half of the adults"
    assert rows["life_cycle.females_among_young"].value == "left out; taken as 0.5"
    assert rows["life_cycle.females_among_young"].origin == DEFAULT
    assert rows["plans[1].effective_size"].value == "left out; the recipient’s, 16"


def test_that_a_value_given_is_not_marked_as_left_out_even_where_it_is_the_default(sample):
    raw = sample.raw()
    raw["life_cycle"]["females_among_young"] = 0.5
    found = {row.path: row for row in input_rows(Case.model_validate(raw))}
    assert found["life_cycle.females_among_young"].value == "0.5"
    assert found["life_cycle.females_among_young"].origin == NOT_STATED


def test_that_choices_and_texts_say_what_they_are(rows):
    assert rows["recipient.markers"].origin == CHOICE
    assert rows["recipient.name"].origin == TEXT


def test_that_a_bound_is_printed_in_the_unit_of_its_measure(rows):
    assert rows["targets[0].at_least"].unit == "share (1 = 100 % of today’s)"
    assert rows["plans[3].rules[0].survey_sd"].unit == "SD, F against the reference"


def test_that_money_is_printed_in_the_currency_of_the_case(rows):
    assert rows["plans[2].releases[0].cost.each_event"].unit == "crowns"


def test_that_names_with_dots_and_underlines_stay_as_they_are(sample):
    raw = sample.raw()
    raw["donors"][1]["name"] = "St. Mary_2"
    raw["donors"][0]["fst_to_donors"] = {"St. Mary_2": 0.08}
    raw["loci"][0]["donor_frequency"] = {"North Fell": 0.1, "St. Mary_2": 0.3}
    raw["plans"][3]["releases"][0]["donor"] = "St. Mary_2"
    found = {row.path: row for row in input_rows(Case.model_validate(raw))}
    assert found["plans[3].releases[0].donor"].value == "St. Mary_2"
    assert found['donors[0].fst_to_donors["St. Mary_2"]'].value == "0.08"


def test_that_the_least_case_has_its_rows_too():
    least = Case.model_validate(
        {
            "format": "rescue case",
            "version": 1,
            "title": "Least",
            "time": {"start_year": 2027, "horizon_years": 20, "generation_years": 4},
            "recipient": {
                "name": "Least",
                "adults": 20,
                "effective_size": 8,
                "gene_diversity": 0.4,
                "reference_gene_diversity": 0.6,
            },
            "plans": [{"name": "No releases"}],
        }
    )
    found = {row.path: row for row in input_rows(least)}
    assert found["life_cycle"].value == "left out; numbers and growth not projected"
    assert found["inbreeding_cost"].value.startswith("left out; lethal equivalents taken as 0")
    assert all(row.origin for row in found.values())
