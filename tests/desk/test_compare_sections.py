"""The sections under the charts of the Compare page with a real document."""

import json
from pathlib import Path

import pytest

from rescue_planner.advice.consequence_words import consequence_table
from rescue_planner.advice.consequences import consequences
from rescue_planner.case.edits import set_value
from rescue_planner.case.problems import read_case
from rescue_planner.desk.pages.compare import ComparePage

MARSH = Path(__file__).parents[1] / "projection" / "marsh.json"


@pytest.fixture
def page(qtbot, desk):
    desk.document.new(read_case(json.loads(MARSH.read_text(encoding="utf-8"))))
    made = ComparePage(desk)
    qtbot.addWidget(made)
    made.resize(1000, 720)
    with qtbot.waitExposed(made):
        made.show()
    desk.live.recompute()
    return made


@pytest.fixture
def table(page):
    return page.sections.consequences


def test_that_the_table_is_the_one_made_without_a_window(page, desk, table):
    comparison = desk.live.comparison
    wanted = consequences(
        desk.document.case,
        comparison,
        comparison.plans,
        page.chooser.shown_keys(),
        float(comparison.years[-1]),
    )
    assert table.shown == wanted
    assert table.model.table == consequence_table(comparison, wanted)


def test_that_another_year_can_be_chosen(table):
    table.year.setCurrentIndex(3)
    assert table.shown.year == table.year.currentData()
    assert f"Values of {table.year.currentText()}." in table.notes.text()


def test_that_a_direction_can_be_switched_off_and_stays_off_after_an_edit(desk, table):
    table.measure.choose("donor_ancestry")
    assert table.direction.currentData() == "less"
    table.direction.choose("none")
    at = table.shown.keys.index("donor_ancestry")
    assert table.model.table.rows[at][1] == "not counted"
    desk.document.try_edit(lambda case: set_value(case, "recipient.effective_size", 12))
    desk.live.recompute()
    assert table.shown.directions[at] == "none"
    assert table.direction.currentData() == "none"


def test_that_another_case_begins_with_the_usual_directions(desk, table):
    table.measure.choose("inbreeding")
    table.direction.choose("none")
    raw = json.loads(MARSH.read_text(encoding="utf-8"))
    desk.document.new(read_case({**raw, "title": "Another"}))
    desk.live.recompute()
    assert table.shown.directions[table.shown.keys.index("inbreeding")] == "less"


def test_that_a_hidden_plan_is_left_out(page, desk, table):
    desk.view.set_hidden("Trickle", True)
    assert "Trickle" not in table.shown.plans


def test_that_hidden_sections_wait_until_they_are_shown(page, desk, table):
    page.hide()
    before = table.shown
    desk.document.try_edit(lambda case: set_value(case, "recipient.effective_size", 12))
    desk.live.recompute()
    assert table.shown is before
    page.show()
    assert table.shown is not before
