"""The sections under the charts of the Compare page with a real document."""

import json
import math
from pathlib import Path

import pytest
from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QGuiApplication

from rescue_planner.advice.consequence_words import consequence_table
from rescue_planner.advice.consequences import consequences
from rescue_planner.advice.differences import difference, difference_table
from rescue_planner.advice.reasons import why_table
from rescue_planner.case.edits import set_value
from rescue_planner.case.problems import read_case
from rescue_planner.desk.compare.trade import LARGEST, LEAST, USUAL, even, radius
from rescue_planner.desk.pages.compare import ComparePage
from rescue_planner.desk.plan_mark import marker_path
from rescue_planner.projection.marks import MARKERS
from rescue_planner.projection.why import why

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


def test_that_the_points_of_the_trade_off_are_the_tables_and_stand_where_they_should(page, table):
    (item,) = page.chooser.findItems("Cost", Qt.MatchFlag.MatchStartsWith)
    item.setCheckState(Qt.CheckState.Checked)
    trade = page.sections.trade_off
    trade.across.choose("cost")
    trade.up.choose("gene_diversity_kept")
    table.year.setCurrentIndex(4)
    frame = trade.chart.frame()
    assert [point.plan for point in trade.chart.points] == list(table.shown.plans)
    for point in trade.chart.points:
        assert point.x == table.shown.cell(point.plan, "cost").value
        assert point.y == table.shown.cell(point.plan, "gene_diversity_kept").value
        at = frame.at(point.x, point.y)
        assert frame.plot.contains(at)
    dear = max(trade.chart.points, key=lambda point: point.x)
    cheap = min(trade.chart.points, key=lambda point: point.x)
    assert frame.at(dear.x, dear.y).x() > frame.at(cheap.x, cheap.y).x()


def test_that_a_third_measure_is_the_area_of_the_marks(page, table):
    trade = page.sections.trade_off
    table.year.setCurrentIndex(4)
    assert {radius(point) for point in trade.chart.points} == {USUAL}
    trade.size_of.choose("adults")
    adults = {plan: table.shown.cell(plan, "adults").value for plan in table.shown.plans}
    for point in trade.chart.points:
        wanted = LARGEST**2 * adults[point.plan] / max(adults.values())
        assert radius(point) ** 2 == pytest.approx(max(wanted, LEAST**2))
    assert "Area of a mark: Adults, animals" in trade.words.text()
    assert trade.chart.accessibleDescription().split() == trade.words.text().split()


@pytest.mark.parametrize("marker", MARKERS)
def test_that_all_kinds_of_marks_have_the_same_area(marker):
    """Counted on a grid of points, apart from the formula."""
    path = marker_path(marker, QPointF(0, 0), 10 * even(marker))
    grid = [k / 4 for k in range(-80, 81)]
    inside = sum(path.contains(QPointF(x, y)) for x in grid for y in grid)
    assert inside / 16 == pytest.approx(math.pi * 100, rel=0.04)  # cells along the outline


def test_that_charts_are_copied_as_pictures_on_their_own_ground(qtbot, page):
    trade, against = page.sections.trade_off, page.sections.against
    qtbot.waitUntil(lambda: against.picture.height() > against.chart.height() > 100)
    for click, chart in (
        (trade.copy_button.click, trade.picture),
        (against.picture_button.click, against.picture),
    ):
        QGuiApplication.clipboard().clear()
        click()
        picture = QGuiApplication.clipboard().image()
        assert (picture.width(), picture.height()) == (2 * chart.width(), 2 * chart.height())
        corner = picture.pixelColor(picture.width() - 1, picture.height() // 2)
        assert corner.name() == page.averages.look().colours.paper
        colours = {
            picture.pixel(x, y) for x in range(0, picture.width(), 7) for y in range(60, 300)
        }
        assert len(colours) > 3


def test_that_two_plans_are_told_apart_and_swapping_mirrors_the_table(page, desk):
    against, comparison = page.sections.against, desk.live.comparison
    keys = page.chooser.shown_keys()
    assert (against.one.currentData(), against.other.currentData()) == ("Trickle", "No releases")
    wanted = difference_table(comparison, "Trickle", "No releases", keys)
    assert against.model.table == wanted
    against.measure.choose("donor_ancestry")
    found = difference(comparison, "Trickle", "No releases", "donor_ancestry")
    assert against.chart.shown.values.tolist() == found.values.tolist()
    against.swap_button.click()
    assert against.model.table == difference_table(comparison, "No releases", "Trickle", keys)
    assert against.chart.shown.values.tolist() == (-found.values).tolist()
    assert "percentage points" in against.drawn.text()


def test_that_the_why_panel_shows_the_parts_of_each_step(page, desk):
    panel, comparison = page.sections.why, desk.live.comparison
    panel.plan.choose("Every fourth year")
    parts = why(desk.document.case, "Every fourth year", comparison)
    assert panel.model.table == why_table(comparison, parts, "gene_diversity")
    panel.topic.choose("allele_frequency:dark bill")
    assert panel.model.table == why_table(comparison, parts, "allele_frequency:dark bill")
    assert "Haldane 1924" in panel.notes.text()


def test_that_one_plan_alone_needs_no_second(page, desk):
    for plan in ("Trickle", "Every fourth year"):
        desk.view.set_hidden(plan, True)
    assert page.sections.against.one.currentData() == "No releases"
    assert len(page.sections.trade_off.chart.points) <= 1
    desk.view.set_hidden("No releases", True)
    assert page.sections.consequences.shown.plans == ()
    assert page.sections.against.model.rowCount() == 0
    assert page.sections.why.model.rowCount() == 0
