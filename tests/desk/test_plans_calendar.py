"""The calendar of a plan: keys and mouse edit the same releases as sentence and grid."""

import json
from pathlib import Path

import pytest
from PySide6.QtCore import QPoint, Qt

from rescue_planner.case.problems import read_case
from rescue_planner.desk.pages.plans import PlansPage

MARSH = Path(__file__).parents[1] / "projection" / "marsh.json"
PLAN = "Every fourth year"


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
def line(page):
    page.editor.timeline.setFocus()
    return page.editor.timeline


def years(desk, release=0):
    return list(desk.document.case.plan(PLAN).releases[release].years())


def test_that_keys_move_a_release_by_years_and_generations(qtbot, desk, line):
    qtbot.keyClick(line, Qt.Key.Key_Right)
    assert years(desk) == [2028, 2032, 2036, 2040, 2044]
    qtbot.keyClick(line, Qt.Key.Key_Right, Qt.KeyboardModifier.ShiftModifier)
    assert years(desk)[0] == 2032
    qtbot.keyClick(line, Qt.Key.Key_Left)
    assert years(desk)[0] == 2031
    assert desk.document.undo_stack.count() == 3


def test_that_a_release_is_not_moved_before_the_start_and_the_reason_is_said(
    qtbot, page, line, desk
):
    qtbot.keyClick(line, Qt.Key.Key_Left)
    assert years(desk)[0] == 2027
    assert page.editor.refused.text().startswith("⚠")
    assert page.editor.refused.isVisibleTo(page)


def test_that_keys_repeat_put_and_remove(qtbot, desk, page, line):
    qtbot.keyClick(line, Qt.Key.Key_Minus)
    assert len(years(desk)) == 4
    for _ in range(2):
        qtbot.keyClick(line, Qt.Key.Key_Plus)
    assert len(years(desk)) == 6
    qtbot.keyClick(line, Qt.Key.Key_Insert)
    assert len(desk.document.case.plan(PLAN).releases) == 2
    line = page.editor.timeline
    assert line.hasFocus()
    assert line.current == 1
    qtbot.keyClick(line, Qt.Key.Key_Delete)
    assert len(desk.document.case.plan(PLAN).releases) == 1
    assert len(years(desk)) == 6


def test_that_the_mouse_moves_what_it_drags_and_only_when_let_go(qtbot, desk, line):
    y = int(line.row_height() / 2)
    start, end = (QPoint(round(line.x_of(year)), y) for year in (2027, 2037))
    qtbot.mousePress(line, Qt.MouseButton.LeftButton, pos=start)
    qtbot.mouseMove(line, end)
    assert years(desk)[0] == 2027
    qtbot.mouseRelease(line, Qt.MouseButton.LeftButton, pos=end)
    assert years(desk)[0] == pytest.approx(2037, abs=1)  # a pixel is more than half a year here
    assert desk.document.undo_stack.count() == 1


def test_that_a_double_click_puts_a_release_there(qtbot, desk, line):
    at = QPoint(round(line.x_of(2060)), int(line.row_height() / 2))
    qtbot.mouseDClick(line, Qt.MouseButton.LeftButton, pos=at)
    (year,) = years(desk, release=1)
    assert year == pytest.approx(2060, abs=1)


def test_that_calendar_sentence_and_grid_agree(qtbot, desk, page, line):
    qtbot.keyClick(line, Qt.Key.Key_Right)
    rows = [row for row in line.calendar.rows if row.kind == "release"]
    assert list(rows[0].years) == years(desk)
    assert [row.year for row in page.editor.events.rows] == years(desk)
    made = page.editor.blocks[0].sentence.fields["plans[2].releases[0].when.first_year"]
    assert made.edit.text() == "2028"


def test_that_the_calendar_is_told_in_words(line):
    words = line.accessibleDescription()
    assert "Release 1: 2 + 1 from North Fell, 2027 to 2043, 5 times" in words
    assert "releases stop" in words
    assert "Left and Right move it a year" in words
