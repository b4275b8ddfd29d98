"""The trade-off chart's points are the cells of the consequence table."""

import json
import math
from pathlib import Path

import pytest

from rescue_planner.advice.consequences import Consequence, Consequences, consequences
from rescue_planner.advice.trade_off import (
    axis_title,
    sizeable,
    trade_caption,
    trade_points,
    trade_range,
    trade_words,
)
from rescue_planner.case.document import Case
from rescue_planner.projection.compare import compare

MARSH = Path(__file__).parents[1] / "projection" / "marsh.json"
CASE = Case.model_validate(json.loads(MARSH.read_text(encoding="utf-8")))
KEYS = ("gene_diversity_kept", "donor_ancestry", "cost", "adults")


@pytest.fixture(scope="module")
def comparison():
    return compare(CASE)


@pytest.fixture(scope="module")
def table(comparison):
    return consequences(CASE, comparison, comparison.plans, KEYS, 2043.0)


def made(*rows):
    cells = tuple(tuple(Consequence(value) for value in row) for row in rows)
    keys = ("gene_diversity_kept", "cost", "trait_lag")
    return Consequences(
        2067, 2067, tuple("ABC"[: len(rows)]), keys, ("more", "less", "zero"), (1, 0, 2), cells
    )


def test_that_points_are_the_cells_of_the_table(table):
    points = trade_points(table, "cost", "gene_diversity_kept", "adults")
    assert [point.plan for point in points] == list(table.plans)
    for point in points:
        assert point.x == table.cell(point.plan, "cost").value
        assert point.y == table.cell(point.plan, "gene_diversity_kept").value


def test_that_areas_are_in_proportion_to_the_third_measure():
    points = trade_points(
        made((50, 0, 0.5), (60, 10, 0.1), (70, 40, 0.2)), "trait_lag", "gene_diversity_kept", "cost"
    )
    assert [point.area for point in points] == [0.0, 0.25, 1.0]


def test_that_a_measure_below_nought_is_no_area():
    table = made((50, 0, -0.5), (60, 0, 0.1))
    assert not sizeable(table, "trait_lag")
    assert not sizeable(table, "cost")
    points = trade_points(table, "cost", "gene_diversity_kept", "trait_lag")
    assert {point.area for point in points} == {None}


def test_that_a_plan_without_a_value_has_no_point_and_is_named(comparison, table):
    short = made((50, 0, 0.5), (math.nan, 1, 0.1))
    assert [point.plan for point in trade_points(short, "cost", "gene_diversity_kept")] == ["A"]
    late = consequences(CASE, comparison, comparison.plans, KEYS, 2087.0)
    gone = [p for p in late.plans if late.cell(p, "gene_diversity_kept").gone]
    assert gone
    words = trade_words(comparison, late, "cost", "gene_diversity_kept")
    assert len([w for w in words if "has no point" in w]) == len(gone)


def test_that_the_words_tell_axes_units_directions_and_every_point(comparison, table):
    words = trade_words(comparison, table, "cost", "gene_diversity_kept", "adults")
    assert words[0] == (
        "In 2043. Across: Cost, EUR so far (less is better). "
        "Up: Gene diversity kept, % of today’s (more is better)."
    )
    assert words[1] == "Area of a mark: Adults, animals; 0 is a dot."
    assert len(words) == 2 + len(table.plans)
    assert words[2].startswith("A No releases: Cost 0 EUR so far; Gene diversity kept 88.1 %")
    assert axis_title(comparison, table, "cost") == "Cost, EUR so far (less is better)"


@pytest.mark.parametrize("values", [(0.0, 10.0), (3.0, 3.0), (-0.2, 0.4), (0.01, 90.0), (0.0,)])
def test_that_an_axis_holds_its_values_and_does_not_begin_below_nought_for_nothing(values):
    low, high = trade_range(values)
    assert low <= min(values) <= max(values) <= high
    assert low < high
    if min(values) > 0:
        assert low >= 0


def test_that_the_caption_says_case_measures_year_and_area(comparison, table):
    words = trade_caption(comparison, table, "cost", "gene_diversity_kept", "adults")
    assert words == (
        f"{CASE.title}: Gene diversity kept against Cost in 2043; area of a mark: Adults, animals"
    )
    assert trade_caption(comparison, table, "cost", "gene_diversity_kept").endswith("in 2043")
