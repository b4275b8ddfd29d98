"""A new case from what is known, by keyboard."""

from __future__ import annotations

from PySide6.QtCore import Qt


def _page(window):
    window.show_known()
    return window.pages["known"]


def _answer(qtbot, page, key: str, words: str) -> None:
    edit = page.questions[key].edit
    edit.setFocus()
    edit.selectAll()
    qtbot.keyClicks(edit, words)


def test_that_adults_alone_are_enough_for_a_first_case(qtbot, make_window) -> None:
    window = make_window()
    page = _page(window)
    assert not page.start.isEnabled()
    _answer(qtbot, page, "adults", "46")
    assert page.start.isEnabled()
    page.start.setFocus()
    qtbot.keyClick(page.start, Qt.Key.Key_Space)
    assert window.desk.document.case.recipient.adults.best == 46
    assert window.desk.document.is_modified
    assert window.current == "compare"
    qtbot.waitUntil(lambda: window.desk.live.comparison is not None)
    assert "gene_diversity_kept" in window.desk.live.comparison.measures


def test_that_the_arithmetic_is_shown_as_answers_are_given(qtbot, make_window) -> None:
    page = _page(make_window())
    _answer(qtbot, page, "adults", "46")
    assert "Frankham 1995" in page.workings.text()
    _answer(qtbot, page, "breeding_females", "20")
    _answer(qtbot, page, "breeding_males", "3")
    assert "4 · 3 · 20 / 23 = 10.4" in page.workings.text()
    assert not page.questions["breeding_males"].unknown.isChecked()


def test_that_i_do_not_know_takes_an_answer_back(qtbot, make_window) -> None:
    page = _page(make_window())
    _answer(qtbot, page, "adults", "46")
    _answer(qtbot, page, "trend", "0.97")
    assert page.draft.case.recipient.yearly_trend.best == 0.97
    unknown = page.questions["trend"].unknown
    unknown.setFocus()
    qtbot.keyClick(unknown, Qt.Key.Key_Space)
    assert page.draft.case.recipient.yearly_trend is None


def test_that_a_wrong_answer_is_named_beside_its_question(qtbot, make_window) -> None:
    page = _page(make_window())
    _answer(qtbot, page, "adults", "46")
    _answer(qtbot, page, "years_isolated", "long")
    assert "is not a number" in page.questions["years_isolated"].problem.text()
    assert not page.start.isEnabled()
    _answer(qtbot, page, "years_isolated", "60")
    assert page.start.isEnabled()


def test_that_an_impossible_answer_is_said_in_words(qtbot, make_window) -> None:
    page = _page(make_window())
    _answer(qtbot, page, "adults", "46")
    _answer(qtbot, page, "gene_diversity", "4")
    assert not page.start.isEnabled()
    assert page.problem.text().startswith("⚠")


def test_that_a_donor_needs_a_name_to_be_asked_about(qtbot, make_window) -> None:
    page = _page(make_window())
    _answer(qtbot, page, "adults", "46")
    assert not page.questions["donor_fst"].isEnabled()
    page.donor.setFocus()
    qtbot.keyClicks(page.donor, "North Fell")
    assert page.questions["donor_fst"].isEnabled()
    assert page.draft.case.donors[0].name == "North Fell"
    _answer(qtbot, page, "donor_fst", "0.2")
    assert page.draft.case.donors[0].fst_to_recipient.best == 0.2
