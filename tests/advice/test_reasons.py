"""The why panel's tables hold the parts of each step."""

import json
from pathlib import Path

import pytest

from rescue_planner.advice.reasons import DIVERSITY, signed, topics, why_table
from rescue_planner.case.document import Case
from rescue_planner.projection.compare import compare
from rescue_planner.projection.reading import plain
from rescue_planner.projection.why import why

MARSH = Path(__file__).parents[1] / "projection" / "marsh.json"
CASE = Case.model_validate(json.loads(MARSH.read_text(encoding="utf-8")))
LOCUS = "allele_frequency:dark bill"


@pytest.fixture(scope="module")
def comparison():
    return compare(CASE)


def numbers(row):
    return [float(plain(cell)) for cell in row[1:]]


def test_that_topics_are_diversity_and_each_tracked_locus(comparison):
    found = topics(why(CASE, "Trickle", comparison))
    assert [key for key, _ in found] == [DIVERSITY, LOCUS]


def test_that_the_rows_of_diversity_are_the_steps_parts(comparison):
    parts = why(CASE, "Trickle", comparison)
    table = why_table(comparison, parts, DIVERSITY)
    assert table.rows[0][0] == "2027 to 2031"
    for row, step in zip(table.rows, parts.diversity, strict=False):
        before, kept, brought, lost, after, share, ne = numbers(row)
        wanted = (step.before, step.kept, step.brought, step.lost, step.after)
        assert (before, kept, brought, lost, after) == pytest.approx(wanted, abs=5.1e-5)
        assert kept + brought - lost == pytest.approx(after, abs=2.1e-4)
        assert share == pytest.approx(100 * step.newcomers, abs=0.051)
        assert ne == 16.0


def test_that_the_rows_of_an_allele_are_the_steps_parts(comparison):
    parts = why(CASE, "Every fourth year", comparison)
    table = why_table(comparison, parts, LOCUS)
    for row, step in zip(table.rows, parts.loci["dark bill"], strict=False):
        wanted = (step.before, step.flow, step.selection, step.mutation, step.after, step.spread)
        assert numbers(row) == pytest.approx(wanted, abs=5.1e-5)


def test_that_steps_after_the_population_is_gone_are_left_out_and_said(comparison):
    for plan in comparison.plans:
        gone = comparison.gone_after(plan)
        table = why_table(comparison, why(CASE, plan, comparison), DIVERSITY)
        count = comparison.years.size if gone is None else gone
        assert len(table.rows) == count - 1
        assert table.notes[0].startswith("Later steps") == (gone is not None)
    assert any(comparison.gone_after(plan) is not None for plan in comparison.plans)


def test_that_a_spread_that_was_not_computed_is_said_to_be_missing():
    only = compare(CASE, depths=("expected",))
    table = why_table(only, why(CASE, "Trickle", only), LOCUS)
    assert {row[-1] for row in table.rows} == {"–"}
    assert table.notes[1].startswith("–: ")


def test_that_another_topic_is_refused(comparison):
    with pytest.raises(KeyError):
        why_table(comparison, why(CASE, "Trickle", comparison), "cost")


def test_that_differences_carry_their_sign_and_nought_has_none():
    assert [signed(x, 1) for x in (0.26, -0.26, 0.04, -0.04, 0.0)] == [
        "+0.3", "−0.3", "0.0", "0.0", "0.0",
    ]  # fmt: skip
