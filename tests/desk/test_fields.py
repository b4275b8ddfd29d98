"""Fields bound to the case, by keyboard."""

from __future__ import annotations

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLineEdit, QVBoxLayout, QWidget

from rescue_planner.case.edits import set_value
from rescue_planner.desk import theme
from rescue_planner.desk.fields import CheckField, ChoiceField, NumberField, TextField

NE = "recipient.effective_size"


@pytest.fixture
def form(qtbot, desk, small):
    """A shown widget that fields are put on, and another place for the focus."""
    desk.document.new(small, unsaved=False)
    holder = QWidget()
    holder.setLayout(QVBoxLayout())
    other = QLineEdit()
    holder.layout().addWidget(other)
    qtbot.addWidget(holder)
    holder.other = other  # type: ignore[attr-defined]

    def put(field):
        holder.layout().addWidget(field)
        holder.show()
        holder.activateWindow()
        qtbot.waitUntil(holder.isActiveWindow)
        field.edit.setFocus()
        return field

    holder.put = put  # type: ignore[attr-defined]
    return holder


def _type(qtbot, field, words: str) -> None:
    field.edit.selectAll()
    qtbot.keyClicks(field.edit, words)


def test_that_a_field_shows_value_unit_and_name_of_its_input(desk, form) -> None:
    field = form.put(NumberField(desk, NE))
    assert field.edit.text() == "16"
    assert field.label.text() == "Effective size (Ne)"
    assert field.unit.text() == "animals per generation"
    assert field.edit.accessibleName() == "Effective size (Ne), animals per generation"
    assert "at least 1" in field.edit.accessibleDescription()


def test_that_enter_puts_a_typed_number_into_the_case_as_one_step(qtbot, desk, form) -> None:
    field = form.put(NumberField(desk, NE))
    _type(qtbot, field, "14")
    assert desk.document.case.recipient.effective_size.best == 16
    qtbot.keyClick(field.edit, Qt.Key.Key_Return)
    assert desk.document.case.recipient.effective_size.best == 14
    assert desk.document.undo_stack.count() == 1


def test_that_leaving_the_field_puts_the_number_into_the_case(qtbot, desk, form) -> None:
    field = form.put(NumberField(desk, NE))
    _type(qtbot, field, "13,5")
    form.other.setFocus()
    assert desk.document.case.recipient.effective_size.best == 13.5
    assert field.edit.text() == "13.5"


def test_that_undo_and_redo_are_shown(qtbot, desk, form) -> None:
    field = form.put(NumberField(desk, NE))
    _type(qtbot, field, "14\r")
    desk.document.undo_stack.undo()
    assert field.edit.text() == "16"
    desk.document.undo_stack.redo()
    assert field.edit.text() == "14"


def test_that_a_wrong_number_stays_with_one_sentence_and_the_case_is_unchanged(
    qtbot, desk, form
) -> None:
    field = form.put(NumberField(desk, NE))
    _type(qtbot, field, "4000\r")
    assert field.edit.text() == "4000"
    assert field.problem.isVisible()
    assert "4000 is above the 40 adults" in field.problem.text()
    assert desk.document.case.recipient.effective_size.best == 16
    assert list(desk.problems_shown.shown) == [NE]
    _type(qtbot, field, "15\r")
    assert not field.problem.isVisible()
    assert desk.document.case.recipient.effective_size.best == 15
    assert desk.problems_shown.shown == {}


def test_that_text_that_is_no_number_stays_with_one_sentence(qtbot, desk, form) -> None:
    field = form.put(NumberField(desk, NE))
    _type(qtbot, field, "about 20\r")
    assert field.edit.text() == "about 20"
    assert "is not a number" in field.problem.text()


def test_that_wrong_text_outlives_edits_elsewhere(qtbot, desk, form) -> None:
    field = form.put(NumberField(desk, NE))
    _type(qtbot, field, "4000\r")
    desk.document.apply(set_value(desk.document.case, "title", "Other"))
    assert field.edit.text() == "4000"
    assert field.has_problem


def test_that_escape_takes_typed_text_back(qtbot, desk, form) -> None:
    field = form.put(NumberField(desk, NE))
    _type(qtbot, field, "4000\r")
    qtbot.keyClick(field.edit, Qt.Key.Key_Escape)
    assert field.edit.text() == "16"
    assert not field.has_problem
    assert desk.document.undo_stack.count() == 0


@pytest.mark.parametrize(
    ("key", "after"),
    [
        (Qt.Key.Key_Up, 17),
        (Qt.Key.Key_Down, 15),
        (Qt.Key.Key_PageUp, 26),
        (Qt.Key.Key_PageDown, 6),
    ],
)
def test_that_arrows_step_the_number(qtbot, desk, form, key, after) -> None:
    field = form.put(NumberField(desk, NE))
    qtbot.keyClick(field.edit, key)
    assert desk.document.case.recipient.effective_size.best == after
    assert field.edit.text() == str(after)


def test_that_an_optional_number_can_be_left_out_and_a_needed_one_not(qtbot, desk, form) -> None:
    optional = form.put(NumberField(desk, "recipient.breeding_males"))
    _type(qtbot, optional, "x")
    optional.edit.clear()
    optional.edit.setModified(True)
    qtbot.keyClick(optional.edit, Qt.Key.Key_Return)
    assert desk.document.case.recipient.breeding_males is None
    assert optional.note.text() == "left out"
    needed = form.put(NumberField(desk, NE))
    needed.edit.clear()
    needed.edit.setModified(True)
    qtbot.keyClick(needed.edit, Qt.Key.Key_Return)
    assert needed.has_problem
    assert desk.document.case.recipient.effective_size.best == 16


def test_that_a_number_outside_its_range_offers_to_widen_it(qtbot, desk, form) -> None:
    field = form.put(NumberField(desk, "recipient.adults"))
    _type(qtbot, field, "60\r")
    assert "outside the range 34 to 49" in field.problem.text()
    assert desk.document.case.recipient.adults.best == 40
    qtbot.mouseClick(field.widen, Qt.MouseButton.LeftButton)
    held = desk.document.case.recipient.adults
    assert (held.best, held.low, held.high) == (60, 34, 60)
    assert (held.origin, held.source) == ("measured", "count")
    assert not field.has_problem
    assert not field.widen.isVisible()


def test_that_range_and_origin_stand_beside_the_number(desk, form) -> None:
    field = form.put(NumberField(desk, "recipient.adults"))
    assert field.note.text() == "34 to 49 · measured"


def test_that_the_explainer_is_told_of_the_focused_field(qtbot, desk, form) -> None:
    form.other.setFocus()
    field = NumberField(desk, NE)
    with qtbot.waitSignal(desk.explain.asked) as told:
        form.put(field)
    assert told.args == [NE]


def test_that_a_compact_number_is_as_wide_as_its_digits(qtbot, desk, form) -> None:
    field = form.put(NumberField(desk, "plans[1].releases[0].when.first_year", compact=True))
    narrow = form.put(NumberField(desk, "plans[1].releases[0].who.females", compact=True))
    assert narrow.edit.width() < field.edit.width() < 80
    assert field.edit.height() >= theme.TARGET
    text = field.edit.fontMetrics().horizontalAdvance(field.edit.text())
    assert field.edit.width() >= text


def test_that_a_retired_field_no_longer_writes(qtbot, desk, form) -> None:
    field = form.put(NumberField(desk, NE))
    _type(qtbot, field, "12")
    field.retire()
    form.other.setFocus()
    assert desk.document.case.recipient.effective_size.best == 16


def test_that_a_text_is_committed_on_leaving_and_shown_after_undo(qtbot, desk, form) -> None:
    field = form.put(TextField(desk, "title", label="Title"))
    _type(qtbot, field, "Three meadows")
    form.other.setFocus()
    assert desk.document.case.title == "Three meadows"
    desk.document.undo_stack.undo()
    assert field.text() == "Two meadows"


def test_that_a_long_text_takes_several_lines_and_tab_leaves_it(qtbot, desk, form) -> None:
    field = form.put(TextField(desk, "decision.goal", label="Goal", lines=3))
    qtbot.keyClicks(field.edit, "Keep them")
    qtbot.keyClick(field.edit, Qt.Key.Key_Tab)
    assert desk.document.case.decision.goal == "Keep them"


def test_that_a_choice_is_made_by_keyboard(qtbot, desk, form) -> None:
    choices = ((None, "not stated"), ("SNPs", "SNPs"), ("pedigree", "pedigree"))
    field = form.put(ChoiceField(desk, "recipient.markers", choices, label="Markers"))
    assert field.edit.currentText() == "not stated"
    qtbot.keyClick(field.edit, Qt.Key.Key_Down)
    assert desk.document.case.recipient.markers == "SNPs"
    qtbot.keyClick(field.edit, Qt.Key.Key_Up)
    assert desk.document.case.recipient.markers is None


def test_that_a_check_box_is_set_by_space(qtbot, desk, form) -> None:
    field = form.put(CheckField(desk, "donors[0].drifts", "It drifts"))
    qtbot.keyClick(field.edit, Qt.Key.Key_Space)
    assert desk.document.case.donors[0].drifts is True
