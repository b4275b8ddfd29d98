"""Plan against plan: differences are those of the projection, and swapping mirrors them."""

import json
from pathlib import Path

import pytest
from numpy.testing import assert_array_equal

from rescue_planner.advice.differences import (
    difference,
    difference_table,
    difference_unit,
    steps_shown,
)
from rescue_planner.case.document import Case
from rescue_planner.projection import reading
from rescue_planner.projection.compare import compare

MARSH = Path(__file__).parents[1] / "projection" / "marsh.json"
ONE, OTHER = "Trickle", "No releases"
KEYS = ("gene_diversity_kept", "inbreeding", "donor_ancestry", "allele_frequency:dark bill", "cost")


@pytest.fixture(scope="module")
def comparison():
    return compare(Case.model_validate(json.loads(MARSH.read_text(encoding="utf-8"))))


def test_that_a_difference_is_one_plan_less_the_other_in_shown_units(comparison):
    for key in KEYS:
        found = difference(comparison, ONE, OTHER, key)
        n = found.values.size
        mine, theirs = (comparison.best(plan, key).values[:n] for plan in (ONE, OTHER))
        scale = reading.scale(key)
        assert_array_equal(found.values, mine * scale - theirs * scale)


def test_that_swapping_mirrors_every_number(comparison):
    for key in KEYS:
        found, back = (difference(comparison, *pair, key) for pair in ((ONE, OTHER), (OTHER, ONE)))
        assert_array_equal(found.values, -back.values)
    table = difference_table(comparison, ONE, OTHER, KEYS)
    mirror = difference_table(comparison, OTHER, ONE, KEYS)
    turn = str.maketrans("+−", "−+")
    for row, turned in zip(table.rows, mirror.rows, strict=True):
        assert turned[1:3] == (row[2], row[1])
        assert [cell.translate(turn) for cell in turned[3:]] == list(row[3:])
    assert any("+" in cell for row in table.rows for cell in row)


def test_that_a_plan_does_not_differ_from_itself(comparison):
    for row in difference_table(comparison, ONE, ONE, KEYS).rows:
        assert all(cell == "gone" or float(cell) == 0.0 for cell in row[3:])
        assert not any(sign in cell for cell in row[3:] for sign in "+−")


def test_that_the_years_end_at_the_horizon(comparison):
    assert steps_shown(comparison) == (3, 6, 9, 12, 15)
    table = difference_table(comparison, ONE, OTHER, KEYS)
    assert [head.split("\n")[-1] for head in table.header[3:]] == [
        "2039", "2051", "2063", "2075", "2087",
    ]  # fmt: skip


def test_that_nothing_is_compared_after_either_population_is_gone(comparison):
    gone = comparison.gone_after(OTHER)
    assert gone is not None
    assert difference(comparison, ONE, OTHER, "inbreeding").values.size <= gone


def test_that_percentages_differ_by_percentage_points(comparison):
    words = difference_unit(comparison, "gene_diversity_kept")
    assert words == "percentage points (% of today’s)"
    assert difference_unit(comparison, "cost") == "EUR so far"


def test_that_a_measure_that_was_not_computed_has_no_difference(comparison):
    assert difference(comparison, ONE, OTHER, "kinship") is None
    (row,) = difference_table(comparison, ONE, OTHER, ("kinship",)).rows
    assert set(row[1:]) == {"–"}
