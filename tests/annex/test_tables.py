from __future__ import annotations

import numpy as np
import pytest

from rescue_planner.advice.targets import target_checks
from rescue_planner.annex import tables
from rescue_planner.annex.curves import curves, goals
from rescue_planner.annex.methods import assumptions, methods, not_included
from rescue_planner.annex.schedule import action_sentences, rule_sentences, schedule_table
from rescue_planner.case.document import Case
from rescue_planner.projection.compare import compare
from rescue_planner.projection.value_table import value_table


def test_that_a_repeated_release_is_expanded_to_its_years(case):
    table = schedule_table(case, case.plan("Two pairs every fourth year"), "C")
    assert [row[0] for row in table.rows] == ["2027", "2031", "2035", "2039", "2043"]
    row = dict(zip(table.head, table.rows[0], strict=True))
    assert row["Donor"] == "North Fell"
    assert row["Females (animals)"] == "2"
    assert row["Survive to breed (%)"] == "70"
    assert row["Cost (crowns)"] == "18\u202f000"  # 4 animals of 2500 and 8000 a time


def test_that_steady_flow_is_a_row_of_its_own(case):
    table = schedule_table(case, case.plan("Trickle"), "B")
    assert table.rows[0][:3] == (
        "2027–2086",
        "North Fell (steady flow)",
        "0.5 that breed, per generation",
    )


def test_that_a_loan_is_said(case):
    table = schedule_table(case, case.plan("Zoo males"), "D")
    assert table.rows[0][1] == "Zoo group (loan, 2 years)"


def test_that_a_plan_without_releases_has_no_schedule(case):
    assert schedule_table(case, case.plan("No releases"), "A") is None
    assert schedule_table(case, case.plan("Refill tarns"), "E") is None


def test_that_rules_read_as_sentences_with_units(case):
    (stop,) = rule_sentences(case, case.plan("Two pairs every fourth year"))
    assert stop == (
        "ancestry ceiling: where “Donor ancestry” is above 30 % of gene copies in a survey "
        "(yearly), releases and steady flow stop for good."
    )
    wave = rule_sentences(case, case.plan("Zoo males"))[0]
    assert "in 2 surveys in a row (one every 2 years, survey error SD 0.03 F against" in wave
    assert "2 females from North Fell are released 1 year later, at most 2 times." in wave


def test_that_other_actions_read_as_sentences(case):
    assert action_sentences(case, case.plan("Refill tarns")) == (
        "From 2030 on: Refill two more tarns (carrying capacity × 1.5, first-year survival × 1.1 "
        "and cost 40\u202f000 crowns).",
    )


def test_that_the_steps_compared_are_the_start_some_generations_and_the_horizon(comparison):
    assert tables.chosen_steps(comparison) == (0, 1, 2, 3, 5, 10, 15)


def test_that_a_horizon_of_two_generations_has_no_step_twice(sample):
    raw = sample.raw()
    raw["time"]["horizon_years"] = 8
    raw["plans"] = raw["plans"][:1]
    raw["targets"] = []
    assert tables.chosen_steps(compare(Case.model_validate(raw))) == (0, 1, 2)


def test_that_the_table_holds_the_numbers_of_the_comparison(comparison):
    table = tables.horizon_table(comparison, ["gene_diversity_kept"])
    row = dict(zip(table.head, table.rows[0], strict=True))
    held = comparison.get("Trickle", "expected", "gene_diversity_kept").values[-1]
    assert row["B Trickle"] == f"{100 * held:.1f}"
    assert row["Today"] == "100.0"


def test_that_no_genetics_is_printed_once_the_population_is_gone(comparison):
    table = tables.course_tables(comparison, ["inbreeding"])[0]
    by_year = {row[0]: row[2] for row in table.rows}
    assert by_year["2067"] != "gone"
    assert by_year["2087"] == "gone"
    adults = tables.course_tables(comparison, ["adults"])[0]
    assert adults.rows[-1][2] != "gone"


def test_that_a_line_ends_before_the_year_in_which_no_adult_is_left(comparison):
    line = curves(comparison, "inbreeding")[0]
    assert line.gone == 2075
    assert line.years[-1] == 2071
    assert curves(comparison, "adults")[0].years[-1] == 2087


def test_that_curves_are_the_comparison_in_printed_units(comparison):
    line = curves(comparison, "gene_diversity_kept")[1]
    held = comparison.get("Trickle", "expected", "gene_diversity_kept").values
    assert np.array_equal(line.values, held * 100)


def test_that_a_frequency_carries_its_bands_from_the_exact_depth(comparison):
    line = curves(comparison, "allele_frequency:winter coat")[1]
    low = comparison.get("Trickle", "exact", "allele_frequency:winter coat", "q05").values
    assert line.depth == "exact"
    assert np.array_equal(line.band.wide[0], low)


def test_that_a_target_with_two_bounds_has_two_marks(sample):
    raw = sample.raw()
    raw["targets"] = [
        {"measure": "inbreeding", "at_least": 0.1, "at_most": 0.2, "by_year": 2060, "owner": "Us"}
    ]
    marks = goals(Case.model_validate(raw), "inbreeding")
    assert [(m.at_least, m.bound, m.words) for m in marks] == [
        (True, 0.1, "Target 1: at least 0.1, Us"),
        (False, 0.2, "Target 1: at most 0.2, Us"),
    ]


def test_that_every_check_is_a_row_of_the_target_table(case, comparison):
    checks = target_checks(case, comparison)
    table = tables.target_table(case, comparison, checks)
    assert len(table.rows) == len(checks)
    assert table.rows[0][0] == "1: Gene diversity kept at least 90 % of today’s by 2087"
    assert [row[-2:] for row in table.rows[:2]] == [("gone", "no animals left"), ("120.1", "yes")]


def test_that_a_check_of_many_runs_shows_count_share_and_interval(case, comparison):
    from dataclasses import replace

    first = target_checks(case, comparison)[0]
    check = replace(
        first, depth="simulated", met=None, runs=1000, share=0.612, low=0.581, high=0.642
    )
    table = tables.target_table(case, comparison, [check])
    assert table.rows[0][-1] == "612 of 1000 runs, 61.2 % (58.1 to 64.2 %)"


def test_that_methods_hold_the_settings_and_only_what_was_used(case, comparison):
    words = "\n".join(methods(case, comparison))
    assert "15 steps of one generation, T = 4 years" in words
    assert "H_ref = 0.68" in words
    assert "B = 6 diploid lethal equivalents" in words
    assert "Tracked locus." in words
    least = case.model_copy(update={"loci": (), "trait": None})
    told = "\n".join(methods(least, compare(least)))
    assert "Tracked locus." not in told
    assert "Trait." not in told
    assert "One-locus odds." not in told


def test_that_what_is_not_included_follows_the_settings(case, comparison):
    assert "alleles of named loci" not in not_included(case, comparison)
    without = case.model_copy(update={"loci": (), "inbreeding_cost": None})
    found = not_included(without, compare(without))
    assert "alleles of named loci" in found
    assert "cost of inbreeding (no lethal equivalents given)" in found


def test_that_assumptions_are_listed_by_depth(case, comparison):
    names = [name for name, _ in assumptions(case, comparison)]
    assert names == ["average course", "one-locus odds"]


@pytest.mark.parametrize("measure", ["inbreeding", "cost", "allele_kept:winter coat"])
def test_that_every_head_and_caption_names_a_unit(comparison, measure):
    table = tables.course_tables(comparison, [measure])[0]
    assert comparison.unit(measure) in table.caption


def test_that_print_and_screen_show_the_same_digits(comparison):
    """Both tables of the annex against the table that the screen draws, value by value."""
    last = comparison.years.size - 1
    for measure in comparison.measures:
        printed = tables.course_tables(comparison, [measure])[0]
        steps = tables.chosen_steps(comparison)
        years = [float(comparison.years[t]) for t in steps]
        screen = value_table(comparison, comparison.plans, [measure], years, "measures")
        for row, shown in zip(printed.rows, screen.rows, strict=True):
            cells = [cell.partition(" (")[0] for cell in row[2:]]
            assert cells == list(shown[3:]), (measure, row)
        ends = [float(comparison.years[t]) for t in (0, last)]
        screen = value_table(comparison, comparison.plans, [measure], ends, "measures")
        row = tables.horizon_table(comparison, [measure]).rows[0]
        cells = [cell.partition(" (")[0] for cell in row[-len(comparison.plans) :]]
        assert cells == list(screen.rows[1][3:]), measure
