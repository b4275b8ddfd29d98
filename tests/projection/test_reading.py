"""Numbers as people read them, checked against the series they come from."""

import json
from pathlib import Path

import numpy as np
import pytest

from rescue_planner.case.problems import read_case
from rescue_planner.projection import plan_reading, reading, table_words
from rescue_planner.projection.compare import compare
from rescue_planner.projection.picture import no_input, picture, why_empty
from rescue_planner.projection.results import Comparison, Series, read_only
from rescue_planner.projection.value_table import course_table, value_table

MARSH = json.loads((Path(__file__).parent / "marsh.json").read_text(encoding="utf-8"))


def marsh(**changes):
    raw = json.loads(json.dumps(MARSH))
    for name, part in changes.items():
        if part is None:
            raw.pop(name)
        else:
            raw[name] = part
    return read_case(raw)


@pytest.fixture(scope="module")
def case():
    return marsh()


@pytest.fixture(scope="module")
def comparison(case):
    return compare(case)


# numbers


@pytest.mark.parametrize(
    ("value", "decimals", "text"),
    [
        (1234567.0, 0, "1\u202f234\u202f567"),
        (-0.0312, 3, "−0.031"),
        (-0.0001, 2, "0.00"),
        (float("nan"), 2, "–"),
        (2.5, 1, "2.5"),
    ],
)
def test_that_a_number_reads_well(value, decimals, text):
    assert reading.number(value, decimals) == text


def test_that_a_shown_number_copies_as_a_spreadsheet_reads_it():
    assert float(reading.plain(reading.number(-1234567.25, 2))) == -1234567.25


@pytest.mark.parametrize(
    ("value", "text"), [(99.97, "> 99.9"), (100.0, "100.0"), (0.01, "< 0.1"), (0.0, "0.0")]
)
def test_that_a_chance_is_never_rounded_to_certainty(value, text):
    assert reading.shown("allele_kept:dark bill", value, 1) == text


def test_that_other_shares_round_as_usual():
    assert reading.shown("gene_diversity_kept", 99.97, 1) == "100.0"


def test_that_animals_have_no_decimals_where_all_are_whole():
    assert reading.places("released", [0.0, 3.0, 15.0]) == 0
    assert reading.places("adults", [40.0, 12.3]) == 1
    assert reading.places("adults", [140.2, 12.3]) == 0


def test_that_the_error_bounds_the_digits():
    assert reading.places("inbreeding", [0.31234], error=0.04) == 3
    assert reading.places("inbreeding", [0.31234], error=0.4) == 2
    assert reading.places("adults", [40.25, 12.3], error=12.0) == 0


def test_that_less_than_one_animal_is_not_rounded_up_to_one():
    assert reading.shown("adults", 0.7, 0) == "< 1"
    assert reading.shown("adults", 0.7, 1) == "0.7"


# curves


def test_that_a_curve_is_the_series_in_the_unit_shown(comparison):
    line = reading.curve(comparison, "Trickle", "donor_ancestry")
    series = comparison.get("Trickle", "expected", "donor_ancestry")
    np.testing.assert_array_equal(line.values, series.values * 100)
    np.testing.assert_array_equal(line.years, comparison.years)


def test_that_genetics_end_before_nobody_is_left_and_numbers_go_on(comparison):
    gone = comparison.gone_after("No releases")
    assert gone is not None
    genetics = reading.curve(comparison, "No releases", "inbreeding")
    numbers = reading.curve(comparison, "No releases", "adults")
    assert genetics.values.size == gone
    assert numbers.values.size == comparison.years.size
    assert genetics.gone_by == numbers.gone_by == comparison.years[gone]


def test_that_a_locus_is_drawn_from_the_exact_depth_with_its_bands(comparison):
    key = "allele_frequency:dark bill"
    line = reading.curve(comparison, "Trickle", key)
    bands = reading.fan(comparison, "Trickle", key)
    assert line.depth == bands.depth == "exact"
    q05 = comparison.get("Trickle", "exact", key, "q05")
    np.testing.assert_array_equal(bands.q05, q05.values)
    assert reading.fan(comparison, "Trickle", "inbreeding") is None


def test_that_the_range_holds_every_plan_target_and_reference(case, comparison):
    for key in comparison.measures:
        marks = reading.target_marks(case, key)
        low, high = reading.extent(comparison, key, [mark.value for mark in marks], fans=True)
        assert low < high
        held = [mark.value for mark in marks] + [v for _, v in reading.references(comparison, key)]
        for plan in comparison.plans:
            held += reading.curve(comparison, plan, key).values.tolist()
        assert low <= min(held) + 1e-9
        assert high >= max(held) - 1e-9


def test_that_a_target_is_marked_in_the_unit_shown_with_its_owner(case):
    (mark,) = reading.target_marks(case, "gene_diversity_kept")
    assert (mark.year, mark.value, mark.at_least) == (2066.0, 90.0, True)
    assert mark.words == "≥ 90, Marsh Trust"
    (other,) = reading.target_marks(case, "donor_ancestry")
    assert other.words.endswith("owner not stated")


def test_that_axes_only_differ_in_labels(comparison):
    years = reading.time_ticks(comparison, "years", 4)
    generations = reading.time_ticks(comparison, "generations", 4)
    assert years[0] == (2027.0, "2027")
    assert generations[0] == (2027.0, "0")
    assert {text: at for at, text in generations}["10"] == 2027 + 10 * 4


def test_that_fifty_years_at_four_a_generation_are_twelve_and_a_half_generations():
    time = {**MARSH["time"], "horizon_years": 50}
    found = compare(marsh(time=time, targets=[], plans=[{"name": "No releases"}]))
    ticks = {int(text): at for at, text in reading.time_ticks(found, "generations", 4)}
    each = (ticks[10] - ticks[0]) / 10
    assert 50 / each == 12.5
    assert found.years[-1] == 2027 + 13 * 4  # whole generations are projected


# words


def test_that_a_chart_in_words_gives_start_end_and_the_end_of_the_population(comparison):
    words = reading.describe(comparison, "inbreeding", comparison.plans)
    assert words.startswith("Inbreeding F, F against the reference, 2027 to 2087.")
    assert "A No releases: 0.382 to" in words
    assert "fewer than one adult left by 2075" in words
    end = comparison.best("Trickle", "inbreeding").values[-1]
    assert f"B Trickle: 0.382 to {end:.3f}." in words


def test_that_the_read_out_is_the_value_of_the_comparison(case, comparison):
    made = picture(comparison, case, "relative_first_year_survival", comparison.plans)
    for line in made.lines:
        series = comparison.best(line.plan, "relative_first_year_survival")
        for t in range(line.curve.values.size):
            assert float(made.text_at(line, t)) == pytest.approx(100 * series.values[t], abs=0.05)
    assert made.text_at(made.lines[0], comparison.years.size - 1) == "gone"


def test_that_targets_are_told_with_their_year(case, comparison):
    made = picture(comparison, case, "gene_diversity_kept", comparison.plans)
    assert made.description.endswith("Target ≥ 90, Marsh Trust, by 2066.")


def test_that_hidden_plans_are_not_drawn_but_keep_the_range(case, comparison):
    whole = picture(comparison, case, "donor_ancestry", comparison.plans)
    part = picture(comparison, case, "donor_ancestry", ("No releases",))
    assert [line.plan for line in part.lines] == ["No releases"]
    assert (part.low, part.high, part.ticks) == (whole.low, whole.high, whole.ticks)


def test_that_marks_stay_with_their_plan_where_others_are_hidden(case, comparison):
    part = picture(comparison, case, "donor_ancestry", ("Every fourth year",))
    assert [(line.letter, line.mark) for line in part.lines] == [("C", 2)]


def test_that_a_missing_life_cycle_is_said_in_words():
    bare = marsh(life_cycle=None)
    made = picture(compare(bare), bare, "adults", ("No releases",))
    assert made.empty == (
        "No life cycle entered: numbers are not projected. Add one on the Case page."
    )
    assert made.lines == ()
    assert "simulated animals" in why_empty(bare, "kinship")
    assert "trait" in why_empty(bare, "trait_lag")


def test_that_survival_without_an_inbreeding_cost_is_no_result():
    bare = marsh(inbreeding_cost=None)
    made = picture(compare(bare), bare, "relative_first_year_survival", ("No releases",))
    assert made.empty.startswith("No inbreeding cost entered")
    assert made.lines == ()
    assert no_input(bare, "inbreeding") == ""
    assert no_input(bare, "donor_ancestry") == ""
    assert no_input(marsh(), "relative_first_year_survival") == ""


def test_that_ancestry_without_a_donor_is_no_result():
    alone = marsh(donors=[], loci=[], plans=[{"name": "No releases"}], targets=[])
    made = picture(compare(alone), alone, "donor_ancestry", ("No releases",))
    assert made.empty.startswith("No donor entered")


def test_that_all_plans_hidden_is_said_in_words(case, comparison):
    assert "hidden" in picture(comparison, case, "inbreeding", ()).empty


def test_that_rules_that_acted_or_could_not_be_read_are_told(comparison):
    said = table_words.event_sentences(comparison, comparison.plans)
    assert any("C Every fourth year, rule “ceiling”" in one and "2047" in one for one in said)
    assert any("watch" in one and "not applied" in one for one in said)
    assert table_words.event_sentences(comparison, ("Trickle",)) == ()


def test_that_a_depth_is_told_with_what_it_leaves_out(case):
    words = table_words.depth_words(case, "expected")
    assert words.startswith("Average course: Ne is held at 16")


@pytest.mark.parametrize("text", ["2047, 2067", "2047;2067", " 2047 2067 2047 "])
def test_that_a_list_of_years_is_read(text):
    assert table_words.read_years(text) == (2047.0, 2067.0)


@pytest.mark.parametrize("text", ["", "next year", "2047, x", "-4", "0", "nan", "inf"])
def test_that_what_is_no_list_of_years_is_refused_in_a_sentence(text):
    with pytest.raises(ValueError, match="year"):
        table_words.read_years(text)


# tables


def test_that_a_table_holds_the_values_of_the_last_step_reached(comparison):
    table = value_table(comparison, ("Trickle",), ("inbreeding", "donor_ancestry"), (2048, 2087))
    t = comparison.index_at(2048)
    inbreeding = comparison.best("Trickle", "inbreeding").values
    assert table.rows[0][1] == "2048 (as of 2047)"
    assert float(table.rows[0][2]) == pytest.approx(inbreeding[t], abs=0.0005)
    assert float(table.rows[1][2]) == pytest.approx(inbreeding[-1], abs=0.0005)
    assert "last one reached by then" in table.notes[0]


def test_that_both_ways_round_hold_the_same_values(comparison):
    keys, years = ("inbreeding", "adults", "cost"), (2027.0, 2059.0)
    one = value_table(comparison, comparison.plans, keys, years, "plans")
    other = value_table(comparison, comparison.plans, keys, years, "measures")
    plans = len(comparison.plans)
    for i in range(len(years)):
        for p in range(plans):
            for k in range(len(keys)):
                a = one.rows[i * plans + p][one.lead + k]
                b = other.rows[k * len(years) + i][other.lead + p]
                assert a == b


def test_that_numbers_under_one_another_share_their_decimals(comparison):
    table = value_table(comparison, comparison.plans, comparison.measures, (2027, 2051, 2087))
    for column in range(table.lead, len(table.header)):
        texts = [row[column] for row in table.rows if row[column][-1].isdigit()]
        assert len({len(text.partition(".")[2]) for text in texts}) == 1


def test_that_a_copied_table_is_rectangular_and_plain(comparison):
    keys = ("gene_diversity_kept", "cost")
    table = value_table(comparison, comparison.plans, keys, (2087,))
    lines = table.tab_separated().rstrip("\n").split("\n")
    assert {line.count("\t") for line in lines} == {len(table.header) - 1}
    assert (
        float(lines[-1].split("\t")[-1]) == comparison.best("Every fourth year", "cost").values[-1]
    )
    assert "\n" not in table.tab_separated().rstrip("\n").split("\n")[0]


def test_that_one_chart_as_a_table_has_a_row_for_each_year(comparison):
    table = course_table(comparison, comparison.plans, "adults")
    assert [row[1] for row in table.rows] == [str(t) for t in range(comparison.years.size)]
    assert table.header[2:] == ("A No releases", "B Trickle", "C Every fourth year")


# what plans come to


def test_that_ten_released_of_which_some_survive_and_breed_come_to_2_4():
    who = {"females": 6, "males": 4}
    after = {"survive_to_breed": 0.6, "breeding_relative_to_residents": 0.4}
    release = {
        "donor": "North Fell", "who": who, "when": {"first_year": 2027}, "afterwards": after,
    }  # fmt: skip
    donors = [{**MARSH["donors"][0], "most_removed_per_year": 10}]
    plans = [{"name": "No releases"}, {"name": "P", "releases": [release]}]
    found = marsh(plans=plans, donors=donors).plan("P").releases[0]
    chain = plan_reading.chain(found)
    assert chain.newcomers == pytest.approx(2.4)
    assert chain.sentence() == (
        "10 released × 0.6 survive to breed × 0.4 breeding = 2.4 newcomers that breed"
    )


def test_that_a_repeat_expands_to_its_rows(case):
    rows = plan_reading.event_rows(case, case.plan("Every fourth year"))
    assert [row.year for row in rows] == [2027, 2031, 2035, 2039, 2043]
    assert [row.t for row in rows] == [0, 1, 2, 3, 4]
    assert all((row.females, row.males, row.age) == (2.0, 1.0, 2.0) for row in rows)


def test_that_planned_newcomers_are_those_of_the_projection_until_a_rule_acts(case, comparison):
    for plan in case.plans:
        planned = np.concatenate(
            [[0.0], np.cumsum(plan_reading.newcomers_per_generation(case, plan))]
        )
        projected = comparison.best(plan.name, "effective_migrants").values
        until = 5 if plan.rules else None  # the ceiling is met at t = 5
        np.testing.assert_allclose(planned[:until], projected[:until], rtol=1e-12)


def test_that_steady_flow_gives_the_share_of_gene_copies_of_the_projection(case, comparison):
    flow = plan_reading.steady_flow(case, case.plan("Trickle"), 0)
    ancestry = comparison.best("Trickle", "donor_ancestry").values
    assert flow.m == pytest.approx(ancestry[1])  # the first step brings just m
    assert flow.m == pytest.approx((0.5 / 14.5 + 0.5 / 6.5) / 2)
    assert flow.ne_m == pytest.approx(16 * flow.m)
    assert "Ne·m = 0.89 (Ne 16)" in plan_reading.flow_words(flow)


def test_that_the_donors_limit_is_told_with_what_the_plan_takes(case):
    (said,) = plan_reading.limit_sentences(case, case.plan("Every fourth year"))
    assert said == (
        "This plan takes at most 3 in one year (first in 2027) from North Fell, "
        "which gives up to 8 a year."
    )
    assert plan_reading.limit_sentences(case, case.plan("Trickle")) == ()


def test_that_the_generation_of_a_year_is_told(case):
    said = plan_reading.generation_sentence(case, 2033)
    assert said.startswith("2033 falls in generation 2, 2031 to 2035.")
    assert "changes nothing" in said


def test_that_newcomers_of_a_plan_are_told(case):
    words = [plan_reading.newcomers_words(case, plan) for plan in case.plans]
    assert words[0] == "Newcomers that breed: none planned."
    assert (
        words[1]
        == "Newcomers that breed: 1 in 15 of 15 generations, 15.0 in all, before any rule acts."
    )
    assert words[2].startswith("Newcomers that breed: 1.68 in 5 of 15 generations, 8.4 in all")


def test_that_an_interval_bounds_the_digits_of_simulated_values(comparison):
    values = read_only(np.full(comparison.years.size, 41.234))
    noisy = Series(
        "Trickle",
        "simulated",
        "adults",
        "mean",
        values,
        read_only(values - 20),
        read_only(values + 20),
    )
    from dataclasses import replace

    other: Comparison = replace(comparison, series=(*comparison.series, noisy), _found={})
    assert reading.column_places(other, "adults", ("Trickle", "No releases")) == 0
