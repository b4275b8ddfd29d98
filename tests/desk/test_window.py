"""The window around the document, as a user meets it."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from PySide6.QtCore import QMimeData, QPointF, Qt, QUrl
from PySide6.QtGui import QAction, QDropEvent
from PySide6.QtWidgets import QAbstractButton, QApplication, QFileDialog, QMessageBox

from rescue_planner import places
from rescue_planner.case.edits import set_value
from rescue_planner.case.file import load
from rescue_planner.desk import rail
from rescue_planner.desk.fields import NumberField, TextField
from rescue_planner.desk.pages.case import CasePage
from rescue_planner.desk.work_strip import CAUTION, time_left

NE = "recipient.effective_size"


def _field(window, path: str) -> NumberField:
    return next(f for f in window.findChildren(NumberField) if f.path == path)


def _set(window, path: str, value) -> None:
    assert window.desk.document.try_edit(lambda case: set_value(case, path, value)) == ()


def test_that_the_desk_begins_with_the_start_page_and_shipped_cases(qtbot, make_window) -> None:
    window = make_window()
    qtbot.waitUntil(lambda: window.current == "start")
    titles = [link.text() for link in window.pages["start"].links]
    shipped = sorted(places.scenarios().glob("*.json"))
    assert titles == [json.loads(path.read_text("utf-8"))["title"] for path in shipped]
    assert not window.strip.isVisible()


@pytest.mark.parametrize("index", range(len(sorted(places.scenarios().glob("*.json")))))
def test_that_every_shipped_case_opens_on_the_case_page(qtbot, make_window, index) -> None:
    window = make_window()
    qtbot.waitUntil(lambda: window.current == "start")
    qtbot.mouseClick(window.pages["start"].links[index], Qt.MouseButton.LeftButton)
    assert window.current == "case"
    assert not window.desk.document.is_modified
    assert window.desk.document.path is None  # a copy: saving asks for a place of its own
    assert len(window.strip.chips) == len(window.desk.document.case.plans)


def test_that_title_and_unsaved_mark_follow_the_document(window) -> None:
    assert "Two meadows" in window.windowTitle()
    assert not window.isWindowModified()
    _set(window, "title", "Three meadows")
    assert "Three meadows" in window.windowTitle()
    assert window.isWindowModified()
    window.desk.document.undo_stack.undo()
    assert not window.isWindowModified()


def test_that_a_chip_hides_its_plan_everywhere_and_shows_it_again(qtbot, window) -> None:
    chip = window.strip.chips[1]
    heard = []
    window.desk.view.changed.connect(lambda: heard.append(window.desk.view.hidden))
    chip.setFocus()
    qtbot.keyClick(chip, Qt.Key.Key_Space)
    assert window.desk.view.hidden == {"Pairs"}
    assert "hidden" in chip.accessibleName()
    qtbot.mouseClick(chip, Qt.MouseButton.LeftButton)
    assert window.desk.view.hidden == frozenset()
    assert heard == [{"Pairs"}, frozenset()]


def test_that_the_strip_follows_the_plans_of_the_case(window) -> None:
    assert [chip.plan for chip in window.strip.chips] == ["No releases", "Pairs"]
    _set(window, "plans[1].name", "Two pairs")
    assert [chip.plan for chip in window.strip.chips] == ["No releases", "Two pairs"]


def test_that_another_case_leaves_no_text_of_the_last_one(qtbot, window, small_file) -> None:
    field = _field(window, NE)
    field.edit.setFocus()
    field.edit.selectAll()
    qtbot.keyClicks(field.edit, "4000\r")
    assert field.has_problem
    assert window.files.open(small_file)
    assert field.edit.text() == "16"
    assert not field.has_problem
    assert window.desk.problems_shown.shown == {}
    assert not window.work.problems.isVisible()


def test_that_another_case_hides_nothing(window, small_file) -> None:
    window.desk.view.set_hidden("Pairs", True)
    window.files.open(small_file)
    assert window.desk.view.hidden == frozenset()


def test_that_years_and_generations_change_the_axis_and_no_result(qtbot, window) -> None:
    window.desk.live.recompute()
    before = window.desk.live.comparison
    qtbot.mouseClick(window.strip.generations, Qt.MouseButton.LeftButton)
    assert window.desk.view.axis == "generations"
    assert window.desk.live.comparison is before


def test_that_a_number_edited_by_keyboard_can_be_undone_from_the_menu(qtbot, window) -> None:
    field = _field(window, NE)
    field.edit.setFocus()
    field.edit.selectAll()
    qtbot.keyClicks(field.edit, "14\r")
    assert window.desk.document.case.recipient.effective_size.best == 14
    assert window.menus.undo.text() == "Undo: Set effective size (Ne) to 14"
    window.menus.undo.trigger()
    assert field.edit.text() == "16"


def test_that_no_releases_cannot_be_taken_away(window) -> None:
    from rescue_planner.case.edits import remove_plan

    problems = window.desk.document.try_edit(lambda case: remove_plan(case, "No releases"))
    assert problems
    assert window.desk.document.case.plans[0].name == "No releases"


def test_that_ctrl_z_in_a_field_takes_back_the_last_edits_of_the_case(qtbot, window) -> None:
    edit = _field(window, NE).edit
    for number in ("15", "14"):
        edit.setFocus()
        edit.selectAll()
        qtbot.keyClicks(edit, f"{number}\r")
    held = window.desk.document
    for left in (15, 16):
        qtbot.keyClick(edit, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
        assert held.case.recipient.effective_size.best == left
        assert edit.text() == str(left)
    qtbot.keyClick(edit, Qt.Key.Key_Y, Qt.KeyboardModifier.ControlModifier)
    assert edit.text() == "15"


def test_that_ctrl_z_takes_back_half_typed_text_before_it_touches_the_case(qtbot, window) -> None:
    edit = _field(window, NE).edit
    edit.setFocus()
    edit.selectAll()
    qtbot.keyClicks(edit, "1")
    qtbot.keyClick(edit, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert edit.text() == "16"
    assert window.desk.document.undo_stack.count() == 0


def test_that_ctrl_z_in_a_text_takes_back_the_last_edit_and_shows_it(qtbot, window) -> None:
    edit = next(
        one for one in window.pages["case"].findChildren(TextField) if one.path == "recipient.name"
    ).edit
    edit.setFocus()
    edit.selectAll()
    qtbot.keyClicks(edit, "High Fen\r")
    assert window.desk.document.case.recipient.name == "High Fen"
    qtbot.keyClick(edit, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert window.desk.document.case.recipient.name == "Low Meadow"
    assert edit.text() == "Low Meadow"
    window.show_page("plans")  # leaving the field puts nothing back
    assert window.desk.document.case.recipient.name == "Low Meadow"


def test_that_a_page_reached_by_its_key_has_the_focus(qtbot, window) -> None:
    window.rail.buttons["plans"].animateClick()  # what its shortcut does
    qtbot.waitUntil(lambda: window.current == "plans")
    focused = QApplication.focusWidget()
    assert window.pages["plans"].isAncestorOf(focused)
    assert focused.accessibleName() == "Plans"


def test_that_no_two_things_answer_to_the_same_key(window) -> None:
    # Qt calls a key given twice ambiguous and does nothing, even where both are one action's
    for key in ("case", "plans", "compare"):
        window.show_page(key)
    keys = [
        key.toString()
        for one in window.findChildren(QAction)
        for key in one.shortcuts()
        if one.isEnabled()
    ]
    keys += [one.shortcut().toString() for one in window.findChildren(QAbstractButton)]
    held = [key for key in keys if key]
    assert "Ctrl+Q" in held
    assert sorted(held) == sorted(set(held))


def test_that_a_new_case_begins_at_its_first_question(window) -> None:
    window.show_known()
    page = window.pages["known"]
    assert QApplication.focusWidget() is page.title


def test_that_the_explainer_of_a_page_tells_what_it_answers(window) -> None:
    window.show_page("compare")
    assert window.explainer._heading.text() == "What does each plan buy and cost?"
    window.desk.explain.show("gene_diversity_kept")
    shown = window.explainer
    assert "office" in shown._bounds.text()  # whose target it is
    assert "Ne is held at 16" in shown._published.text()
    assert "Source: Wright 1931" in shown._published.text()


def test_that_the_caution_is_always_in_view(window) -> None:
    assert window.work.caution.text() == CAUTION
    for page in ("case", "start", "known"):
        window.show_page(page)
        assert window.work.caution.isVisible()


def test_that_the_explainer_tells_meaning_bounds_source_and_caution(window) -> None:
    _field(window, NE).edit.setFocus()
    window.desk.explain.show(NE)
    shown = window.explainer
    assert shown._heading.text() == "Effective size (Ne)"
    assert "loses diversity" in shown._meaning.text()
    assert "at least 1" in shown._bounds.text()
    assert "Frankham 1995" in shown._published.text()
    assert "Never enter the census" in shown._caution.text()


def test_that_the_explainer_of_one_page_is_not_left_on_another(window) -> None:
    window.desk.explain.show(NE)
    window.show_page("plans")
    assert window.explainer._heading.text() != "Effective size (Ne)"


def test_that_the_explainer_tells_a_measure_too(window) -> None:
    window.desk.explain.show("inbreeding")
    assert window.explainer._heading.text() == "Inbreeding F"


def test_that_range_and_source_are_edited_in_the_explainer(qtbot, window) -> None:
    window.desk.explain.show(NE)
    form = window.explainer._origin
    form.low.setFocus()
    qtbot.keyClicks(form.low, "9")
    form.high.setFocus()
    qtbot.keyClicks(form.high, "30\r")
    form.source.setFocus()
    qtbot.keyClicks(form.source, "laboratory report\r")
    held = window.desk.document.case.recipient.effective_size
    assert (held.low, held.high, held.source) == (9, 30, "laboratory report")
    assert _field(window, NE).note.text() == "9 to 30"
    form.low.setFocus()
    form.low.selectAll()
    qtbot.keyClicks(form.low, "20\r")
    assert form.problem.text()
    assert window.desk.document.case.recipient.effective_size.low == 9


def test_that_fields_that_are_not_in_the_case_are_counted_and_found(qtbot, window) -> None:
    field = _field(window, NE)
    field.edit.setFocus()
    field.edit.selectAll()
    qtbot.keyClicks(field.edit, "4000\r")
    assert window.work.problems.isVisible()
    assert "1 field holds" in window.work.problems.text()
    window.show_page("start")
    qtbot.mouseClick(window.work.problems, Qt.MouseButton.LeftButton)
    assert window.current == "case"
    assert QApplication.focusWidget() is field.edit


def test_that_remarks_are_counted_and_answered(qtbot, window) -> None:
    with qtbot.waitSignal(window.finder.found, timeout=10_000):
        window.finder.look()
    count = len(window.finder.remarks)
    assert count > 0
    assert window.work.remarks.text().startswith(f"{count} remark")

    from rescue_planner.desk.remark_list import RemarkDialog

    dialog = RemarkDialog(window.desk, window.finder.remarks, window)
    qtbot.addWidget(dialog)
    row = dialog.rows[0]
    qtbot.keyClicks(row.answer, "The field office knows this place.")
    qtbot.mouseClick(row.keep, Qt.MouseButton.LeftButton)
    answer = window.desk.document.case.answers[0]
    assert answer.remark == row.remark.name
    assert answer.reason == "The field office knows this place."
    assert "1 answered" in window.work.remarks.text()


@pytest.mark.parametrize(
    ("path", "words"),
    [
        (NE, "Effective size (Ne)"),
        ("plans[1]", "Plan “Pairs”"),
        ("donors[0].fst_to_recipient", "FST to the recipient (donor “High Meadow”)"),
        ("not a path [", "not a path ["),
    ],
)
def test_that_the_place_of_a_remark_is_said_in_words(small, path, words) -> None:
    from rescue_planner.desk.remark_list import place_in_words

    assert place_in_words(small, path) == words


def test_that_a_remark_leads_to_its_field(qtbot, window) -> None:
    from rescue_planner.case.remarks import Remark
    from rescue_planner.desk.remark_list import RemarkDialog

    dialog = RemarkDialog(window.desk, [Remark("horizon-short", NE, "Look.")], window)
    qtbot.addWidget(dialog)
    dialog.show()
    qtbot.mouseClick(dialog.rows[0].go, Qt.MouseButton.LeftButton)
    assert dialog.wanted == NE
    window.show_page("compare")
    window.go_to(dialog.wanted)
    assert window.current == "case"
    assert _field(window, NE).edit is window.focusWidget()


def test_that_a_place_without_a_field_leads_to_its_page(window) -> None:
    window.go_to("plans[1]")
    assert window.current == "plans"
    window.go_to("recipient")
    assert window.current == "case"


def test_that_save_writes_the_file_and_says_so(window, small_file) -> None:
    _set(window, NE, 14)
    assert window.files.save()
    assert load(small_file).case.recipient.effective_size.best == 14
    assert not window.isWindowModified()
    assert window.work.status.text() == f"Saved {small_file.name}."


def test_that_saving_takes_in_the_number_that_is_being_typed(qtbot, window, small_file) -> None:
    field = _field(window, NE)
    field.edit.setFocus()
    field.edit.selectAll()
    qtbot.keyClicks(field.edit, "13")
    assert window.files.save()
    assert load(small_file).case.recipient.effective_size.best == 13


def test_that_save_as_adds_the_suffix_and_becomes_recent(window, tmp_path, monkeypatch) -> None:
    target = tmp_path / "copy"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (str(target), ""))
    assert window.files.save_as()
    assert load(target.with_suffix(".rescue")).case.title == "Two meadows"
    assert window.settings.recent[0] == str(target.with_suffix(".rescue").resolve())


def test_that_a_save_that_fails_says_why_and_keeps_the_mark(window, monkeypatch) -> None:
    said = []
    monkeypatch.setattr(QMessageBox, "exec", lambda box: said.append(box.text()) or 0)
    _set(window, NE, 14)
    window.desk.document.path = Path("/dev/null/no folder/case.rescue")
    assert not window.files.save()
    assert "cannot be saved" in said[0]
    assert window.isWindowModified()


@pytest.mark.parametrize(
    ("answer", "closed", "kept"),
    [
        (QMessageBox.StandardButton.Cancel, False, 16),
        (QMessageBox.StandardButton.Discard, True, 16),
        (QMessageBox.StandardButton.Save, True, 14),
    ],
)
def test_that_closing_asks_about_unsaved_changes(
    window, small_file, monkeypatch, answer, closed, kept
) -> None:
    monkeypatch.setattr(QMessageBox, "exec", lambda _box: answer)
    _set(window, NE, 14)
    assert window.close() is closed
    assert load(small_file).case.recipient.effective_size.best == kept


def test_that_nothing_is_asked_where_nothing_changed(window, monkeypatch) -> None:
    monkeypatch.setattr(QMessageBox, "exec", lambda _box: pytest.fail("asked"))
    window.close_case()
    assert window.current == "start"
    assert not window.strip.isVisible()


def test_that_an_unreadable_file_gives_one_sentence_and_keeps_the_open_case(
    window, tmp_path, monkeypatch
) -> None:
    said = []
    monkeypatch.setattr(QMessageBox, "exec", lambda box: said.append(box.text()) or 0)
    broken = tmp_path / "broken.rescue"
    broken.write_bytes(b"PK\x03\x04 cut off")
    assert not window.files.open(broken)
    assert "broken.rescue" in said[0]
    assert "Traceback" not in said[0]
    assert window.desk.document.case.title == "Two meadows"


def test_that_a_file_with_problems_names_each_with_its_path(window, tmp_path, monkeypatch) -> None:
    details = []
    monkeypatch.setattr(QMessageBox, "exec", lambda box: details.append(box.informativeText()) or 0)
    raw = json.loads(window.desk.document.path.read_text("utf-8"))
    raw["recipient"]["effective_size"] = 400
    raw["plans"][1]["releases"][0]["donor"] = "Nowhere"
    wrong = tmp_path / "wrong.json"
    wrong.write_text(json.dumps(raw), encoding="utf-8")
    assert not window.files.open(wrong)
    assert "recipient.effective_size" in details[0]
    assert "plans[1].releases[0].donor" in details[0]


def test_that_a_dropped_file_is_opened(window, small_file, tmp_path) -> None:
    other = tmp_path / "other.json"
    raw = json.loads(small_file.read_text("utf-8")) | {"title": "Dropped"}
    other.write_text(json.dumps(raw), encoding="utf-8")
    data = QMimeData()
    data.setUrls([QUrl.fromLocalFile(str(other))])
    window.dropEvent(
        QDropEvent(
            QPointF(5, 5),
            Qt.DropAction.CopyAction,
            data,
            Qt.MouseButton.LeftButton,
            Qt.KeyboardModifier.NoModifier,
        )
    )
    assert window.desk.document.case.title == "Dropped"


def test_that_the_regions_are_reached_in_turn_by_one_key(window) -> None:
    window.desk.explain.show(NE)
    _field(window, NE).edit.setFocus()
    met = []
    for _ in range(5):
        window.next_region()
        focused = QApplication.focusWidget()
        regions = (window.strip, window.rail, window.stack, window.explainer, window.work)
        met.append(next(i for i, one in enumerate(regions) if one.isAncestorOf(focused)))
    assert set(met) >= {0, 1, 2, 3}


def test_that_a_session_can_be_done_without_a_mouse(qtbot, window, small_file) -> None:
    page = window.pages["case"]
    page.links["Recipient"].setFocus()
    qtbot.keyClick(page.links["Recipient"], Qt.Key.Key_Space)
    for _ in range(20):  # Tab on from the name of the recipient until Ne is reached
        focused = QApplication.focusWidget()
        if focused.property("path") == NE:
            break
        qtbot.keyClick(focused, Qt.Key.Key_Tab)
    assert QApplication.focusWidget().property("path") == NE
    qtbot.keyClicks(QApplication.focusWidget(), "12")  # Tab has chosen the old number
    qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
    assert window.desk.document.case.recipient.effective_size.best == 12
    qtbot.keyClick(window, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert window.desk.document.case.recipient.effective_size.best == 16
    qtbot.keyClick(window, Qt.Key.Key_Y, Qt.KeyboardModifier.ControlModifier)
    qtbot.keyClick(window, Qt.Key.Key_S, Qt.KeyboardModifier.ControlModifier)
    assert load(small_file).case.recipient.effective_size.best == 12
    qtbot.keyClick(window, Qt.Key.Key_1, Qt.KeyboardModifier.ControlModifier)
    assert isinstance(window.stack.currentWidget(), CasePage)


def test_that_every_page_of_the_rail_can_be_made(window) -> None:
    for page in rail.PAGES:
        window.show_page(page.key)
        assert window.stack.currentWidget() is window.pages[page.key]
        assert window.rail.buttons[page.key].isChecked()


def test_that_text_size_and_scheme_are_remembered(window, state_folder) -> None:
    from rescue_planner.desk.settings import Settings

    window.resize_text(1)
    window.choose_scheme("dark")
    assert window.close()
    kept = Settings.load()
    assert (kept.text_scale, kept.scheme) == (1.25, "dark")


def test_that_damaged_settings_are_forgotten(state_folder) -> None:
    from rescue_planner.desk.settings import Settings

    state_folder.mkdir(parents=True)
    Settings.path().write_text('{"recent": 5, "text_scale": "big", "scheme"', encoding="utf-8")
    assert Settings.load() == Settings()
    Settings.path().write_text('{"recent": 5, "text_scale": "big"}', encoding="utf-8")
    assert Settings.load() == Settings()


@pytest.mark.parametrize(
    ("seconds", "words"),
    [(3, "a few seconds left"), (42, "about 40 s left"), (200, "about 3 min left")],
)
def test_that_time_left_is_no_finer_than_it_is_known(seconds, words) -> None:
    assert time_left(seconds) == words


def test_that_a_running_job_is_shown_and_can_be_cancelled(qtbot, window) -> None:
    import threading

    def work(control) -> None:
        for done in range(10_000):
            control.step(done, 10_000)
            threading.Event().wait(0.002)

    window.desk.jobs.start(work, "Export")
    line = window.work.job_line
    qtbot.waitUntil(line.isVisible)
    assert line.words.text().startswith("Export")
    with qtbot.waitSignal(window.desk.jobs.cancelled):
        qtbot.mouseClick(line.cancel, Qt.MouseButton.LeftButton)
    assert not line.isVisible()
