"""The schema and the page on the file: current, and true."""

import json
import re
from pathlib import Path

import jsonschema
import pytest

from rescue_planner.case.document import Case
from rescue_planner.case.field_table import field_table, measure_table, renewed
from rescue_planner.case.inputs import every_input
from rescue_planner.case.measures import MEASURES
from rescue_planner.case.problems import read_case
from rescue_planner.case.schema import case_schema, schema_text
from tests.case.sample import changed, full, problems_of, small
from tests.outside.random_cases import random_cases

DOCS = Path(__file__).parents[2] / "docs"
PAGE = (DOCS / "file-format.md").read_text(encoding="utf-8")
VALIDATOR = jsonschema.Draft202012Validator(case_schema())


def test_that_the_committed_schema_is_current():
    assert (DOCS / "case.schema.json").read_text(encoding="utf-8") == schema_text()


def test_that_the_schema_is_one():
    jsonschema.Draft202012Validator.check_schema(case_schema())


def test_that_the_schema_accepts_what_the_program_accepts():
    for raw in (full(), small(), *(raw for _, raw in random_cases())):
        assert [error.message for error in VALIDATOR.iter_errors(raw)] == []


@pytest.mark.parametrize(
    ("path", "value"),
    [
        ("recipient.adults", "40"),
        ("recipient.adults", 0),
        ("recipient.adults", {"best": 0}),
        ("recipient.adults", {"best": 40, "colour": 1}),
        ("recipient.adults", {"best": 40, "origin": "invented"}),
        ("time.start_year", 2027.5),
        ("donors[0].fst_to_recipient", 1),
        ("donors[0].fst_form", "wright"),
        ("loci[0].fitness[1]", -1),
        ("loci[0].donor_frequency.Upper Fen", 1.2),
        ("life_cycle.young_per_breeding_female.counts.1", -0.1),
        ("plans[2].releases[0].colour", 1),
        ("version", 2),
    ],
)
def test_that_the_schema_refuses_what_the_program_refuses_at_the_same_path(path, value):
    raw = changed(full(), path, value)
    assert any(found.startswith(path) for found in problems_of(raw))
    assert not VALIDATOR.is_valid(raw)


def test_that_every_input_is_described_in_the_schema():
    written = json.dumps(case_schema(), ensure_ascii=False)
    missing = [one.name for _, one in every_input(Case) if one.meaning not in written]
    assert missing == []


def test_that_every_field_is_defined_in_one_plain_sentence():
    defined = dict(every_input(Case))
    leaves = re.findall(r"^\| `([^`]+)` \|", field_table(), re.MULTILINE)
    parts = {"format", "version", "donors[*].life_cycle"}
    for path in leaves:
        whole = f"| `{path}` | The whole part |" in field_table()
        assert path in defined or path in parts or whole, path
    for path, one in defined.items():
        assert one.meaning.endswith("."), path
        assert len(one.meaning.split()) >= 4, path
        assert "'" not in one.name + one.unit + one.meaning + one.caution + one.published, path


def test_that_the_committed_table_of_fields_is_current():
    assert renewed(PAGE) == PAGE


def test_that_the_table_has_every_input():
    lines = field_table()
    paths = [path for path, _ in every_input(Case) if "donors[*].life_cycle." not in path]
    assert [path for path in paths if f"| `{path}` |" not in lines] == []


def test_that_the_page_lists_every_measure_by_its_key():
    assert [one.key for one in MEASURES if f"`{one.key}" not in measure_table()] == []


def test_that_a_page_without_marks_is_refused():
    with pytest.raises(ValueError, match="lacks the marks"):
        renewed("# A page")


def test_that_the_example_of_the_page_is_a_case():
    example = re.findall(r"```json\n(\{.*?\n\})\n```", PAGE, re.DOTALL)[-1]
    assert read_case(json.loads(example)).title == "Marsh voles of Lower Fen"
