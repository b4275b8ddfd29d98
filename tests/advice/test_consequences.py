"""The consequence table: its values, and which plans are dominated."""

import math

import pytest

from rescue_planner.advice.consequence_words import consequence_table, dominance_sentences, verdicts
from rescue_planner.advice.consequences import (
    Consequence,
    Consequences,
    alike,
    consequences,
    dominated,
    usual_direction,
)
from rescue_planner.case.document import Case
from rescue_planner.projection import reading
from rescue_planner.projection.compare import compare

RELEASE = {
    "donor": "Mainland",
    "who": {"females": 2, "males": 2, "age": 1},
    "when": {"first_year": 2027, "every_years": 4, "times": 3},
    "cost": {"each_animal": 100},
}
CASE = {
    "format": "rescue case",
    "version": 1,
    "title": "Saltmarsh vole of Ness Holm (invented)",
    "time": {"start_year": 2027, "horizon_years": 40, "generation_years": 4},
    "recipient": {
        "name": "Ness Holm",
        "adults": 40,
        "effective_size": 16,
        "gene_diversity": 0.42,
        "reference_gene_diversity": 0.68,
    },
    "donors": [{"name": "Mainland", "gene_diversity": 0.64, "fst_to_recipient": 0.2}],
    "loci": [
        {"name": "coat", "role": role, "fitness": [1, 1, 1], "frequency": 0.5,
         "donor_frequency": {"Mainland": 0.1}}
        for role in ("neutral",)
    ],
    "plans": [
        {"name": "No releases"},
        {"name": "Pairs", "releases": [RELEASE]},
        {"name": "The same pairs", "releases": [RELEASE]},
    ],
}  # fmt: skip
KEYS = ("gene_diversity_kept", "inbreeding", "donor_ancestry", "cost")


@pytest.fixture(scope="module")
def case():
    return Case.model_validate(CASE)


@pytest.fixture(scope="module")
def comparison(case):
    return compare(case)


def made(rows, directions=("more", "less"), places=(1, 1)):
    """Return a table of two measures from numbers; a plan a row."""
    cells = tuple(
        tuple(x if isinstance(x, Consequence) else Consequence(x) for x in r) for r in rows
    )
    names = tuple("ABCDEF"[: len(rows)])
    keys = ("gene_diversity_kept", "cost", "inbreeding")[: len(directions)]
    return Consequences(2067, 2067, names, keys, directions, places, cells)


def pairs(table):
    return [(one.plan, one.by) for one in dominated(table)]


def test_that_a_plan_worse_on_all_measures_is_dominated():
    assert pairs(made([(50.0, 9.0), (60.0, 5.0)])) == [("A", "B")]


def test_that_a_plan_worse_on_one_and_equal_on_the_rest_is_dominated():
    (one,) = dominated(made([(50.0, 5.0), (60.0, 5.0)]))
    assert (one.plan, one.by, one.worse_on) == ("A", "B", ("gene_diversity_kept",))


def test_that_a_tie_is_not_dominated_but_said_to_be_alike():
    table = made([(60.0, 5.0), (60.0, 5.0)])
    assert pairs(table) == []
    assert alike(table) == (("A", "B"),)


def test_that_plans_that_trade_one_measure_for_another_are_not_dominated():
    assert pairs(made([(50.0, 5.0), (60.0, 9.0)])) == []


def test_that_being_better_by_a_hair_saves_a_plan():
    assert pairs(made([(60.0001, 9.0), (60.0, 5.0)])) == []


def test_that_a_disadvantage_that_is_not_seen_marks_nothing():
    table = made([(60.0, 5.0), (60.0001, 5.0)])
    assert pairs(table) == []
    assert alike(table) == (("A", "B"),)


def test_that_a_measure_switched_off_does_not_count():
    rows = [(50.0, 5.0), (60.0, 9.0)]
    assert pairs(made(rows, ("more", "none"))) == [("A", "B")]
    assert pairs(made(rows, ("none", "none"))) == []
    assert alike(made(rows, ("none", "none"))) == ()


def test_that_a_direction_turned_round_turns_the_verdict_round():
    rows = [(50.0, 9.0), (60.0, 5.0)]
    assert pairs(made(rows, ("less", "more"))) == [("B", "A")]


def test_that_nearer_to_nought_is_better_on_both_sides():
    rows = [(-0.5, 1.0), (0.3, 1.0), (-0.2, 1.0)]
    assert pairs(made(rows, ("zero", "more"))) == [("A", "B"), ("A", "C"), ("B", "C")]


def test_that_a_plan_whose_population_is_gone_is_worse_than_any_other():
    gone = Consequence(math.nan, gone=True)
    assert pairs(made([(gone, 5.0), (1.0, 5.0)])) == [("A", "B")]
    assert pairs(made([(gone, 5.0), (gone, 5.0)])) == []


def test_that_a_value_not_computed_leaves_two_plans_without_a_verdict():
    assert pairs(made([(math.nan, 9.0), (60.0, 5.0)])) == []
    assert pairs(made([(math.nan, 9.0), (math.nan, 5.0)])) == [("A", "B")]


def test_that_values_are_those_of_the_projection_at_the_last_step_reached(case, comparison):
    table = consequences(case, comparison, comparison.plans, KEYS, 2050.0)
    assert table.year == 2047.0
    for plan in comparison.plans:
        for key in KEYS:
            wanted = comparison.best(plan, key).values[5] * reading.scale(key)
            assert table.cell(plan, key).value == wanted


def test_that_quantiles_stand_beside_the_value_where_a_depth_has_them(case, comparison):
    key = "allele_frequency:coat"
    table = consequences(case, comparison, comparison.plans, (key, "cost"), 2067.0)
    cell = table.cell("Pairs", key)
    assert cell.low == comparison.get("Pairs", "exact", key, "q05").values[-1]
    assert cell.high == comparison.get("Pairs", "exact", key, "q95").values[-1]
    assert table.cell("Pairs", "cost").low is None


def test_that_equal_plans_are_told_apart_from_a_plan_that_differs(case, comparison):
    table = consequences(case, comparison, comparison.plans, KEYS, 2067.0)
    assert dominated(table) == ()
    assert alike(table) == (("Pairs", "The same pairs"),)
    off = {"donor_ancestry": "none", "cost": "none"}
    table = consequences(case, comparison, comparison.plans, KEYS, 2067.0, off)
    assert pairs(table) == [("No releases", "Pairs"), ("No releases", "The same pairs")]


def test_that_an_allele_counts_by_its_role(case):
    assert usual_direction(case, "allele_kept:coat") == "none"
    for role, wanted in (("harmful", "less"), ("resistance", "more"), ("locally adapted", "more")):
        locus = case.loci[0].model_copy(update={"role": role})
        changed = case.model_copy(update={"loci": (locus,)})
        assert usual_direction(changed, "allele_kept:coat") == wanted


def test_that_the_table_states_units_directions_and_the_verdict_in_words(case, comparison):
    off = {"donor_ancestry": "none", "cost": "none"}
    table = consequences(case, comparison, comparison.plans, KEYS, 2067.0, off)
    shown = consequence_table(comparison, table)
    assert shown.header[:2] == ("Measure, unit", "Which way")
    assert [" ".join(row[1].split()) for row in shown.rows] == [
        "more is better", "less is better", "not counted", "not counted", "2 measures counted",
    ]  # fmt: skip
    assert shown.rows[0][0].endswith(comparison.unit(KEYS[0]))
    words = [" ".join(cell.split()) for cell in shown.rows[-1][2:]]
    assert words == ["dominated by B, C", "shown like C", "shown like B"]
    assert dominance_sentences(comparison, table)[0] == (
        "A No releases is dominated by B Pairs: worse on 2 of 2 measures counted, better on none."
    )
    assert "Values of 2067." in shown.notes


def test_that_without_a_measure_that_counts_there_is_no_verdict(case, comparison):
    none = dict.fromkeys(KEYS, "none")
    table = consequences(case, comparison, comparison.plans, KEYS, 2067.0, none)
    assert set(verdicts(comparison, table)) == {"no measure\ncounts"}
