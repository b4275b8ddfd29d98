"""The help window: opened where the user is, read and searched by keys, and closed to the world."""

from __future__ import annotations

import re
from datetime import datetime

import pytest
from PySide6.QtCore import Qt, QUrl
from PySide6.QtGui import QAction, QKeySequence, QTextCursor
from PySide6.QtWidgets import QAbstractButton, QApplication, QComboBox, QLabel, QListWidget

from rescue_planner.case.measures import MEASURES
from rescue_planner.case.remarks import Remark
from rescue_planner.desk import help_pages, theme
from rescue_planner.desk.case_page.unknown import Unknown
from rescue_planner.desk.help_browser import LETTERS
from rescue_planner.desk.help_window import HERE, HelpWindow
from rescue_planner.desk.pages import start
from rescue_planner.desk.rail import PAGES
from rescue_planner.desk.recovery import Leftover
from rescue_planner.desk.remark_list import RemarkDialog
from rescue_planner.desk.view import ViewState


@pytest.fixture
def helped(qtbot) -> HelpWindow:
    made = HelpWindow(ViewState())
    qtbot.addWidget(made)
    made.show_page("contents")
    with qtbot.waitExposed(made):
        made.show()
    made.activateWindow()
    qtbot.waitUntil(made.isActiveWindow)
    return made


def _key_of(window, keys: str) -> QAction:
    return next(
        one for one in window.findChildren(QAction) if QKeySequence(keys) in one.shortcuts()
    )


def _row(rows: QListWidget, title: str) -> int:
    return next(at for at in range(rows.count()) if rows.item(at).text() == title)


def test_that_f1_opens_the_help_at_the_page_shown_in_one_window(qtbot, window) -> None:
    helper = window.menus.helper()
    first = helper.window
    for page, topic in HERE.items():
        window.show_page(page)
        _key_of(window, "F1").trigger()
        assert helper.window.here == (topic, "")
        assert helper.window.isVisible()
        assert helper.window is first
    assert set(HERE.values()) <= set(help_pages.page_keys())
    assert set(HERE) >= {entry.key for entry in PAGES}
    first.close()


def test_that_f1_is_pressed_as_a_key_and_export_and_remarks_have_pages_of_their_own(
    qtbot, window
) -> None:
    window.show_page("compare")
    helper = window.menus.helper()
    window.pages["compare"].export_button.setFocus()
    qtbot.keyClick(window, Qt.Key.Key_F1)
    qtbot.waitUntil(lambda: helper.window.here[0] == "export")
    helper.window.close()
    window.activateWindow()
    qtbot.waitUntil(window.isActiveWindow)
    window.work.say_remarks(2, 1)
    window.work.remarks.setFocus()
    assert helper.topic() == "remarks"


def test_that_every_page_can_be_chosen_from_the_contents(helped) -> None:
    for entry in help_pages.contents():
        if entry.key:
            helped.rows.setCurrentRow(_row(helped.rows, entry.title))
            helped.rows.itemActivated.emit(helped.rows.currentItem())
            assert helped.here == (entry.key, "")
            assert helped.browser.document().firstBlock().text() == help_pages.title(entry.key)


def test_that_every_heading_of_every_page_can_be_gone_to(helped) -> None:
    for key in help_pages.page_keys():
        helped.show_page(key)
        for section in help_pages.sections(key):
            if section.anchor:
                assert helped.browser.go_to_heading(section.anchor), f"{key}#{section.anchor}"


def test_that_a_link_leads_to_its_heading_and_back_and_forward_return(qtbot, helped) -> None:
    helped.show_page("newcomers")
    helped.browser.anchorClicked.emit(QUrl("plans.md#steady-flow"))
    assert helped.here == ("plans", "steady-flow")
    assert helped.browser.textCursor().block().text() == "Steady flow"
    qtbot.keyClick(helped, Qt.Key.Key_Left, Qt.KeyboardModifier.AltModifier)
    assert helped.here == ("newcomers", "")
    qtbot.keyClick(helped, Qt.Key.Key_Right, Qt.KeyboardModifier.AltModifier)
    assert helped.here == ("plans", "steady-flow")
    assert not helped.forward.isEnabled()


def test_that_a_link_within_a_page_stays_on_it(helped) -> None:
    helped.show_page("glossary")
    helped.browser.anchorClicked.emit(QUrl("#kinship"))
    assert helped.here == ("glossary", "kinship")


@pytest.mark.parametrize(
    "address", ["https://example.org/", "file:///etc/hosts", "mailto:a@example.org", "nowhere.md"]
)
def test_that_an_address_that_is_no_page_of_the_help_is_not_followed(
    helped, address, monkeypatch
) -> None:
    opened = []
    monkeypatch.setattr("PySide6.QtGui.QDesktopServices.openUrl", opened.append)
    helped.show_page("case")
    helped.browser.anchorClicked.emit(QUrl(address))
    assert helped.here == ("case", "")
    assert opened == []
    assert not helped.browser.openExternalLinks()
    assert helped.browser.loadResource(2, QUrl(address)).isEmpty()


def test_that_typing_searches_all_pages_and_enter_opens_the_first(qtbot, helped) -> None:
    qtbot.keyClick(helped, Qt.Key.Key_F, Qt.KeyboardModifier.ControlModifier)
    qtbot.waitUntil(helped.search.hasFocus)
    qtbot.keyClicks(helped.search, "lethal equivalents")
    assert "Found in" in helped.found.text()
    qtbot.keyClick(helped.search, Qt.Key.Key_Return)
    assert helped.here == ("glossary", "lethal-equivalents")
    assert helped.browser.hasFocus()


def test_that_nothing_found_is_said_and_clearing_brings_the_contents_back(helped) -> None:
    helped.search.setText("zzzz")
    assert helped.rows.count() == 0
    assert helped.found.text().startswith("Nothing found")
    helped.search.clear()
    assert helped.rows.count() == len(help_pages.contents())
    assert not helped.found.isVisible()


def test_that_a_row_is_opened_by_keys_alone(qtbot, helped) -> None:
    helped.rows.setFocus()
    helped.rows.setCurrentRow(_row(helped.rows, "Case"))
    qtbot.keyClick(helped.rows, Qt.Key.Key_Down)
    qtbot.keyClick(helped.rows, Qt.Key.Key_Return)
    assert helped.here == ("plans", "")


def test_that_tab_goes_from_link_to_link_and_enter_follows(qtbot, helped) -> None:
    helped.show_page("start")
    helped.browser.setFocus()
    qtbot.keyClick(helped.browser, Qt.Key.Key_Tab)
    qtbot.keyClick(helped.browser, Qt.Key.Key_Return)
    assert helped.here == ("new-case", "")


def test_that_escape_closes_the_help(qtbot, helped) -> None:
    qtbot.keyClick(helped, Qt.Key.Key_Escape)
    assert not helped.isVisible()


@pytest.mark.parametrize("scale", [1.0, 2.0])
def test_that_everything_has_a_name_a_target_of_24_pixels_and_headings_of_their_size(
    qtbot, helped, scale, qapp
) -> None:
    helped._view.set_text_scale(scale)
    theme.apply(qapp, "light", scale)
    helped.show_page("case")
    for one in (helped.search, helped.back, helped.forward, helped.close_button):
        assert one.accessibleName()
        assert min(one.width(), one.height()) >= theme.TARGET
    least = min(helped.rows.visualItemRect(helped.rows.item(at)).height() for at in (1, 2, 3))
    assert least >= theme.TARGET
    assert helped.browser.accessibleName()
    assert helped.rows.accessibleName()
    block = helped.browser.document().firstBlock()
    size = QTextCursor(block.next()).charFormat().font().pixelSize()
    title = next(iter(block)).fragment().charFormat().font().pixelSize()
    assert title == theme.pixels(theme.TITLE, scale)
    assert size != title
    assert helped.browser.horizontalScrollBar().maximum() == 0
    theme.apply(qapp, "light", 1.0)


def test_that_a_new_scheme_keeps_the_page_and_recolours_its_links(helped, qapp) -> None:
    helped.show_page("start")
    theme.apply(qapp, "dark", 1.0)
    helped._view.set_scheme("dark")
    QApplication.processEvents()
    assert helped.here == ("start", "")
    assert theme.palette("dark").accent in helped.browser.toHtml()
    theme.apply(qapp, "light", 1.0)


NAMED = ("first-ten-minutes", "start", "new-case", "plans", "compare", "export", "remarks",
         "targets", "case", "donors", "inbreeding-cost")  # fmt: skip
NOT_CONTROLS = {
    "No releases",
    "haploid",
    "diploid",
    "gamete",
    "Verdict",
    "borrowed",
    "guessed",
    "measured",
    "Met",
    "Stop",
    "Release",
}


def test_that_controls_named_by_the_help_are_on_the_desk_by_just_these_words(
    qtbot, window, monkeypatch, tmp_path
) -> None:
    left = Leftover(tmp_path / "copy", "Two meadows", None, datetime(2027, 3, 1, 9, 30))
    monkeypatch.setattr(start, "leftovers", lambda: [left])
    window.show_start()
    said = {measure.name for measure in MEASURES} | NOT_CONTROLS
    for page in ("case", "plans", "compare", "start", "known"):
        window.show_page(page)
        for one in window.findChildren(Unknown):
            one.link.click()
        said |= {one.text() for one in window.findChildren(QAbstractButton)}
        said |= {one.text() for one in window.findChildren(QLabel)}
        said |= {box.itemText(i) for box in window.findChildren(QComboBox) for i in range(9)}
        said |= {one.text().replace("&", "") for one in window.findChildren(QAction)}
    said |= {entry.name for entry in PAGES} | _words_of_remarks(window, qtbot)
    named = {
        words
        for key in NAMED
        for words in re.findall(r"(?<!\*)\*([^*]+)\*(?!\*)", help_pages.page(key))
    }
    assert named - said == set()


def _words_of_remarks(window, qtbot) -> set[str]:
    remark = Remark("recipient.effective_size", "asked", "Is this so?")
    dialog = RemarkDialog(window.desk, [remark], window)
    qtbot.addWidget(dialog)
    return {one.text() for one in dialog.findChildren(QAbstractButton)}


def test_that_long_lines_are_not_drawn_wider_than_can_be_read(qtbot, helped) -> None:
    helped.resize(1900, 700)
    QApplication.processEvents()
    letters = helped.browser.viewport().width() / helped.fontMetrics().averageCharWidth()
    assert 60 < letters <= LETTERS + 4
