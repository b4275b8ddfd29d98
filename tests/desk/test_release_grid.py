"""The grid of releases with a real document: keys, paste, and what agrees with it."""

import json
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication

from rescue_planner.case.edits import change_release, duplicate_plan, rename_plan, set_value
from rescue_planner.case.plan_table import COLUMNS, PLACES, write_block
from rescue_planner.case.problems import read_case
from rescue_planner.desk.pages.plans import PlansPage

MARSH = Path(__file__).parents[1] / "projection" / "marsh.json"
PLAN = "Every fourth year"
YEAR, TIMES, DONOR, FEMALES, MALES = (
    PLACES[key] for key in ("first_year", "times", "donor", "females", "males")
)
CONTROL = Qt.KeyboardModifier.ControlModifier
SHIFT = Qt.KeyboardModifier.ShiftModifier


@pytest.fixture
def page(qtbot, desk):
    desk.document.new(read_case(json.loads(MARSH.read_text(encoding="utf-8"))))
    made = PlansPage(desk)
    qtbot.addWidget(made)
    made.resize(1100, 720)
    with qtbot.waitExposed(made):
        made.show()
    made.activateWindow()
    desk.live.recompute()
    made.list.choose(PLAN)
    yield made
    made.hide()


@pytest.fixture
def table(page):
    page.editor.grid.show_cell(0, 0)
    return page.editor.grid.table


def releases(desk):
    return desk.document.case.plan(PLAN).releases


def type_over(qtbot, table, text):
    """Type as a person does: the first key opens the cell."""
    qtbot.keyClick(table, text[0])
    edit = QApplication.focusWidget()
    assert edit is not table
    qtbot.keyClicks(edit, text[1:])
    qtbot.keyClick(edit, Qt.Key.Key_Return)
    QApplication.processEvents()  # Qt hands a typed cell over a moment later


def block(rows):
    return [
        [str(2028 + r), "1", "1", "North Fell", str(r % 3), "1", str(1 + r % 9),
         f"0.{1 + r % 9}", f"1.{1 + r % 9}", str(100 + r)]
        for r in range(rows)
    ]  # fmt: skip


def assert_agree(page, desk):
    """Grid, time line and sentences show the releases of the case."""
    held = releases(desk)
    rows = page.editor.grid.model.rows[: len(held)]
    line = [row for row in page.editor.timeline.calendar.rows if row.kind == "release"]
    assert [float(row[YEAR]) for row in rows] == [one.when.first_year.best for one in held]
    assert [list(row.years) for row in line] == [list(one.years()) for one in held]
    for sentence in page.editor.blocks:
        for path, field in sentence.sentence.fields.items():
            if ".releases[" in path and path.endswith("who.females"):
                index = int(path.split("releases[")[1].split("]")[0])
                assert field.edit.text() == rows[index][FEMALES]


def test_that_50_rows_of_10_cells_are_pasted_by_key_as_one_step(qtbot, page, desk, table):
    QGuiApplication.clipboard().setText(write_block(block(50)))
    before = desk.document.case
    qtbot.keyClick(table, Qt.Key.Key_V, CONTROL)
    assert len(releases(desk)) == 50
    assert [list(row[:10]) for row in page.editor.grid.model.rows] == block(50)
    assert desk.document.undo_stack.count() == 1
    assert_agree(page, desk)
    assert table.hasFocus()
    qtbot.keyClick(table, Qt.Key.Key_A, CONTROL)
    qtbot.keyClick(table, Qt.Key.Key_C, CONTROL)
    copied = QGuiApplication.clipboard().text().splitlines()
    assert [line.split("\t")[:10] for line in copied] == block(50)
    desk.document.undo_stack.undo()
    assert desk.document.case == before
    assert_agree(page, desk)


def test_that_of_many_releases_the_one_in_the_grid_is_told(qtbot, page, desk, table):
    QGuiApplication.clipboard().setText(write_block(block(9)))
    qtbot.keyClick(table, Qt.Key.Key_V, CONTROL)
    assert [one.index for one in page.editor.blocks if hasattr(one, "duplicate")] == [0]
    for _ in range(3):
        qtbot.keyClick(table, Qt.Key.Key_Down)
    qtbot.waitUntil(lambda: page.editor.blocks[0].index == 3)
    assert table.hasFocus()
    assert any("Release 4 of 9" in words for words in page.editor.words())


def test_that_a_cell_is_typed_over_by_keys_alone(qtbot, page, desk, table):
    for _ in range(FEMALES):
        qtbot.keyClick(table, Qt.Key.Key_Right)
    assert desk.explain.current == "plans[2].releases[0].who.females"
    type_over(qtbot, table, "5")
    assert releases(desk)[0].who.females.best == 5
    assert table.hasFocus()
    assert_agree(page, desk)


def test_that_a_wrong_cell_stays_with_its_sentence_until_it_is_mended(qtbot, page, desk, table):
    before = desk.document.case
    page.editor.grid.show_cell(0, FEMALES)
    type_over(qtbot, table, "many")
    model = page.editor.grid.model
    assert desk.document.case == before
    assert model.rows[0][FEMALES] == "many"
    (words,) = model.why.values()
    assert words.startswith("Row 1, Females: “many” is not a number")
    assert page.editor.grid.held.isVisibleTo(page)
    assert "plans[2].releases" in desk.problems_shown.shown
    desk.document.try_edit(lambda case: change_release(case, PLAN, 0, males=2))
    assert model.rows[0][FEMALES] == "many"  # an edit elsewhere loses nothing
    desk.document.try_edit(lambda case: rename_plan(case, PLAN, "Fourth"))
    page.list.choose("Fourth")
    assert model.rows[0][FEMALES] == "many"
    model.setData(model.index(0, FEMALES), "3")
    assert model.why == {}
    assert desk.problems_shown.shown == {}
    assert not page.editor.grid.held.isVisibleTo(page)


def test_that_the_sentence_under_the_grid_leads_to_its_cell(qtbot, page, desk, table):
    model = page.editor.grid.model
    model.put({(1, YEAR): "2040", (1, DONOR): "Nowhere", (1, FEMALES): "2"})
    assert len(releases(desk)) == 1
    assert model.rowCount() == 2
    link = page.editor.grid.held.layout().itemAt(0).widget()
    qtbot.keyClick(table, Qt.Key.Key_Tab)
    assert link.hasFocus()
    page.list.list.setFocus()
    link.click()
    assert table.hasFocus()
    assert (table.currentIndex().row(), table.currentIndex().column()) == (1, DONOR)
    type_over(qtbot, table, "north fell")
    assert [one.when.first_year.best for one in releases(desk)] == [2027, 2040]
    assert_agree(page, desk)


def test_that_fill_down_delete_and_insert_are_keys(qtbot, page, desk, table):
    qtbot.keyClick(table, Qt.Key.Key_Insert)
    assert len(releases(desk)) == 2
    assert table.currentIndex().row() == 1
    page.editor.grid.show_cell(0, FEMALES)
    qtbot.keyClick(table, Qt.Key.Key_Right, SHIFT)
    qtbot.keyClick(table, Qt.Key.Key_Down, SHIFT)
    count = desk.document.undo_stack.count()
    page.editor.grid.model.setData(page.editor.grid.model.index(0, FEMALES), "3")
    page.editor.grid.show_cell(0, FEMALES)
    qtbot.keyClick(table, Qt.Key.Key_Down, SHIFT)
    qtbot.keyClick(table, Qt.Key.Key_D, CONTROL)
    assert releases(desk)[1].who.females.best == 3
    assert desk.document.undo_stack.count() == count + 2
    page.editor.grid.show_cell(0, PLACES["age"])
    qtbot.keyClick(table, Qt.Key.Key_Delete)
    assert releases(desk)[0].who.age is None


def test_that_one_cell_fills_all_chosen_and_a_wide_block_is_refused_whole(qtbot, page, desk, table):
    qtbot.keyClick(table, Qt.Key.Key_Insert)
    page.editor.grid.show_cell(0, MALES)
    qtbot.keyClick(table, Qt.Key.Key_Down, SHIFT)
    QGuiApplication.clipboard().setText("2\n")
    qtbot.keyClick(table, Qt.Key.Key_V, CONTROL)
    assert [one.who.males.best for one in releases(desk)] == [2, 2]
    before = desk.document.case
    QGuiApplication.clipboard().setText("\t".join("1" * len(COLUMNS)))
    qtbot.keyClick(table, Qt.Key.Key_V, CONTROL)
    assert desk.document.case == before
    assert "paste it further to the left" in page.editor.grid.said.text()


def test_that_sorting_is_one_step_and_goes_both_ways(qtbot, page, desk, table):
    QGuiApplication.clipboard().setText(write_block([["2050"], ["2030"], ["2040"]]))
    page.editor.grid.model.put(
        {(r, c): text for r, row in enumerate(block(3)) for c, text in enumerate(row)}
    )
    qtbot.keyClick(table, Qt.Key.Key_V, CONTROL)
    count = desk.document.undo_stack.count()
    page.editor.grid.show_cell(0, YEAR)
    page.editor.grid.buttons["Sort"].click()
    assert [one.when.first_year.best for one in releases(desk)] == [2030, 2040, 2050]
    page.editor.grid.buttons["Sort"].click()
    assert [one.when.first_year.best for one in releases(desk)] == [2050, 2040, 2030]
    assert desk.document.undo_stack.count() == count + 2
    assert_agree(page, desk)


def test_that_rows_are_removed_whole_or_not(page, desk, table):
    model = page.editor.grid.model
    model.put({(1, YEAR): "2040"})
    page.editor.grid.show_cell(1, 0)
    table.remove_chosen()
    assert model.rowCount() == 1
    page.editor.grid.show_cell(0, 0)
    table.remove_chosen()
    assert releases(desk) == ()
    assert table.isVisibleTo(page)  # an empty plan can be pasted into
    QGuiApplication.clipboard().setText(write_block(block(2)))
    table.paste()
    assert len(releases(desk)) == 2


def test_that_every_event_of_the_pattern_can_be_shown_as_a_row(page, table):
    grid = page.editor.grid
    grid.kind.setCurrentIndex(1)
    assert grid.event_table.isVisibleTo(page)
    assert not table.isVisibleTo(page)
    assert [row.year for row in grid.events.rows] == [2027, 2031, 2035, 2039, 2043]
    assert not grid.buttons["Paste"].isEnabled()
    grid.show_cell(0, FEMALES)
    assert table.isVisibleTo(page)


def test_that_without_a_donor_a_row_is_refused_and_a_pasted_one_is_held(qtbot, page, desk):
    raw = json.loads(MARSH.read_text(encoding="utf-8"))
    plans = [{"name": "No releases"}, {"name": "Try"}]
    desk.document.new(read_case({**raw, "donors": [], "loci": [], "targets": [], "plans": plans}))
    grid = page.editor.grid
    qtbot.keyClick(grid.table, Qt.Key.Key_Insert)
    assert "No donor is entered yet" in grid.said.text()
    QGuiApplication.clipboard().setText(write_block(block(1)))
    qtbot.keyClick(grid.table, Qt.Key.Key_V, CONTROL)
    assert grid.model.rows[0][DONOR] == "North Fell"
    assert "No donor is entered yet" in grid.model.why[0, DONOR]


def test_that_the_grid_is_a_proper_model(page, qtmodeltester):
    page.editor.grid.model.put({(1, YEAR): "2040"})
    qtmodeltester.check(page.editor.grid.model, force_py=True)


def test_that_what_cannot_be_done_leads_to_its_number(page, desk):
    assert page.editor.feasible.found == ()
    desk.document.try_edit(lambda case: change_release(case, PLAN, 0, age=40))
    desk.live.recompute()
    (found,) = page.editor.feasible.found
    assert "age 40" in found.sentence
    page.editor.feasible.links[0].click()
    field = page.editor.blocks[0].sentence.fields["plans[2].releases[0].who.age"]
    assert field.edit.hasFocus()
    desk.document.undo_stack.undo()
    desk.live.recompute()
    assert page.editor.feasible.found == ()


def test_that_what_a_stop_rule_cuts_off_is_said_from_the_projection(page, desk):
    desk.document.try_edit(lambda case: set_value(case, "plans[2].rules[0].above", 0.1))
    desk.live.recompute()
    (found,) = page.editor.feasible.found
    assert "“ceiling” stops all releases in" in found.sentence


def test_that_the_differences_to_a_copy_are_the_edits(page, desk):
    desk.document.try_edit(lambda case: duplicate_plan(case, PLAN, "Copy"))
    page.list.choose("Copy")
    assert page.editor.differs.other.currentText() == PLAN
    assert "The same as" in page.editor.differs.count.text()
    desk.document.try_edit(lambda case: change_release(case, "Copy", 0, females=4, times=2))
    assert page.editor.differs.lines.text().splitlines() == [
        "Release 1, females: 4 instead of 2 (animals).",
        "Release 1, times: 2 instead of 5 (releases).",
    ]
    other = page.editor.differs.other
    other.activated.emit(other.findText("No releases"))
    assert "only here" in page.editor.differs.lines.text()


def test_that_the_whole_chain_is_said(page):
    assert "Whole plan: 15 released → 10.5 survive to breed → 8.4" in page.editor.fates.text()
    page.list.choose("No releases")
    assert not page.editor.grid.isVisibleTo(page)
    assert not page.editor.differs.isVisibleTo(page)
