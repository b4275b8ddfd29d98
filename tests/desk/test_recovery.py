"""Work that was not saved is found again."""

from __future__ import annotations

import subprocess
import sys

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QAbstractButton

from rescue_planner.case.edits import set_value
from rescue_planner.case.file import load
from rescue_planner.desk import recovery as recovery_module
from rescue_planner.desk.recovery import crash_hook, leftovers


def _edit(window) -> None:
    document = window.desk.document
    document.apply(set_value(document.case, "recipient.effective_size", 12))


def test_that_a_copy_is_written_soon_after_a_change_and_not_over_the_file(
    qtbot, window, small_file, monkeypatch
) -> None:
    before = small_file.read_bytes()
    window.recovery._timer.setInterval(20)
    _edit(window)
    qtbot.waitUntil(window.recovery.copy.exists)
    assert load(window.recovery.copy).case.recipient.effective_size.best == 12
    assert small_file.read_bytes() == before


def test_that_the_wait_is_two_seconds() -> None:
    assert recovery_module.AUTOSAVE_MS == 2000


def test_that_saving_deletes_the_copy(window) -> None:
    _edit(window)
    assert window.recovery.write()
    window.files.save()
    assert not window.recovery.copy.exists()
    assert leftovers() == ()


def test_that_nothing_is_written_where_nothing_changed(window) -> None:
    assert not window.recovery.write()
    assert not window.recovery.copy.exists()


def test_that_the_copy_of_a_running_session_is_not_offered(window) -> None:
    _edit(window)
    assert window.recovery.write()
    assert leftovers() == ()


def test_that_a_copy_left_by_a_killed_session_is_offered_and_recovered(
    qtbot, make_window, small_file, state_folder
) -> None:
    script = (
        "import os, sys, pathlib\n"
        "from PySide6.QtCore import QCoreApplication\n"
        "from rescue_planner import places\n"
        "places.user_state = lambda: pathlib.Path(sys.argv[2])\n"
        "from rescue_planner.case.edits import set_value\n"
        "from rescue_planner.desk.document import CaseDocument\n"
        "from rescue_planner.desk.recovery import Recovery\n"
        "app = QCoreApplication([])\n"
        "document = CaseDocument()\n"
        "recovery = Recovery(document)\n"
        "document.open(pathlib.Path(sys.argv[1]))\n"
        "document.apply(set_value(document.case, 'recipient.effective_size', 12))\n"
        "assert recovery.write()\n"
        "os._exit(9)\n"
    )
    ended = subprocess.run(
        [sys.executable, "-c", script, str(small_file), str(state_folder)], check=False
    )
    assert ended.returncode == 9
    found = leftovers()
    assert [(left.title, left.original) for left in found] == [("Two meadows", small_file)]

    window = make_window()
    qtbot.waitUntil(lambda: window.current == "start")
    offer = next(
        b
        for b in window.pages["start"].findChildren(QAbstractButton)
        if b.accessibleName() == "Recover Two meadows"
    )
    qtbot.mouseClick(offer, Qt.MouseButton.LeftButton)
    document = window.desk.document
    assert document.case.recipient.effective_size.best == 12
    assert document.is_modified
    assert document.path == small_file
    assert leftovers() == ()


def test_that_a_defect_writes_the_copy_and_a_report_and_goes_on(window, state_folder) -> None:
    told = []
    hook = crash_hook(window.recovery, told.append)
    _edit(window)
    try:
        raise RuntimeError("planted")
    except RuntimeError as error:
        hook(RuntimeError, error, error.__traceback__)
    assert "planted" in told[0]
    assert window.recovery.copy.exists()
    reports = list((state_folder / "reports").glob("*.txt"))
    assert len(reports) == 1
    assert "planted" in reports[0].read_text("utf-8")


def test_that_a_disk_failure_is_said_in_one_sentence(window, monkeypatch) -> None:
    said = []
    window.recovery.failed.connect(said.append)
    monkeypatch.setattr(recovery_module, "folder", lambda: recovery_module.Path("/dev/null/no"))
    _edit(window)
    assert not window.recovery.write()
    assert "No recovery copy could be written" in said[0]


def test_that_giving_up_changes_on_purpose_deletes_the_copy(
    window, monkeypatch: pytest.MonkeyPatch
) -> None:
    _edit(window)
    assert window.recovery.write()
    monkeypatch.setattr(window.files, "may_close", lambda: True)
    window.close_case()
    assert leftovers() == ()
    assert not window.recovery.copy.exists()
