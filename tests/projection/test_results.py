"""Results are read-only, labelled, and know what they belong to."""

from __future__ import annotations

import csv
import io

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rescue_planner.projection.compare import compare, comparison_key
from rescue_planner.projection.marks import mark
from rescue_planner.projection.table import COLUMNS, comparison_csv, shortest

PULSE = {
    "name": "Pulse",
    "releases": [{"donor": "Mainland", "who": {"females": 3}, "when": {"first_year": 2035}}],
}


def test_that_series_cannot_be_written_to(build):
    series = compare(build()).get("No releases", "expected", "inbreeding")
    with pytest.raises(ValueError, match="read-only"):
        series.values[0] = 1


def test_that_the_key_changes_with_any_input_and_only_then(build):
    case = build([PULSE])
    names = [plan.name for plan in case.plans]
    key = comparison_key(case, names, ("expected",))
    assert key == comparison_key(build([PULSE]), names, ("expected",))
    assert key != comparison_key(build([PULSE], recipient={"adults": 41}), names, ("expected",))
    assert key != comparison_key(case, names, ("expected",), what_if="half")
    assert key != comparison_key(case, names, ("exact",))


def test_that_a_value_at_a_year_is_the_last_step_reached_by_then(build):
    got = compare(build())
    assert [got.index_at(y) for y in (2020, 2027, 2030, 2031, 2066, 2067, 2100)] == [
        0,
        0,
        0,
        1,
        9,
        10,
        10,
    ]


def test_that_rows_come_in_the_order_of_plans_depths_measures_statistics_time(build):
    locus = {"name": "coat", "frequency": 0.5, "donor_frequency": {"Mainland": 0, "Far shore": 0}}
    text = comparison_csv(compare(build([PULSE], loci=[locus])))
    rows = list(csv.DictReader(io.StringIO(text)))
    assert tuple(rows[0]) == COLUMNS
    assert "\r" not in text
    seen = list(dict.fromkeys((r["plan"], r["depth"]) for r in rows))
    assert seen == [(p, d) for p in ("No releases", "Pulse") for d in ("expected", "exact")]
    exact = [r for r in rows if r["depth"] == "exact" and r["plan"] == "Pulse"]
    heads = list(dict.fromkeys((r["measure"], r["statistic"]) for r in exact))
    statistics = ("mean", "sd", "q05", "q25", "q50", "q75", "q95")
    assert heads == [
        *(("allele_frequency:coat", s) for s in statistics),
        ("allele_kept:coat", "share"),
        ("allele_fixed:coat", "share"),
    ]
    assert [r["generation"] for r in exact[:11]] == [str(t) for t in range(11)]


def test_that_plans_chosen_keep_their_own_marks(build):
    trickle = {"name": "Trickle", "steady": [{"donor": "Mainland", "migrants_per_generation": 1}]}
    got = compare(build([PULSE, trickle]), plans=["Trickle", "No releases"])
    assert got.plans == ("No releases", "Trickle")
    assert got.marks == (0, 2)
    with pytest.raises(KeyError, match="Nothing"):
        compare(build(), plans=["Nothing"])


def test_that_twelve_marks_differ_without_colour():
    seen = {(mark(i).dash, mark(i).marker) for i in range(12)}
    assert len(seen) == 12
    assert len({mark(i).letter for i in range(12)}) == 12
    with pytest.raises(IndexError):
        mark(12)


@settings(derandomize=True, deadline=None)
@given(st.floats(allow_nan=False, allow_infinity=False))
def test_that_the_shortest_form_reads_back_the_same(value):
    assert float(shortest(value)) == value
    assert len(shortest(value)) <= len(repr(value))


def test_that_a_population_below_one_adult_is_gone(build, life):
    poor = {**life, "yearly_survival": {"first_year": 0.1, "subadult": 0.3, "adult": 0.3}}
    got = compare(build(life_cycle=poor))
    gone = got.gone_after("No releases")
    adults = got.get("No releases", "expected", "adults").values
    assert adults[gone] < 1 <= adults[gone - 1]
    assert compare(build(life_cycle=life)).gone_after("No releases") is None
