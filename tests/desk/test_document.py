"""The open case and its undo stack."""

from __future__ import annotations

import os
import random
from pathlib import Path

import pytest

from rescue_planner.case.edits import set_value
from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.file import CaseFileError, canonical, load
from rescue_planner.desk.document import CaseDocument, NoCase


@pytest.fixture
def document(qapp, small) -> CaseDocument:
    made = CaseDocument()
    made.new(small, unsaved=False)
    return made


def test_that_an_edit_is_one_undo_step_named_by_its_sentence(document, small) -> None:
    document.apply(set_value(document.case, "recipient.effective_size", 14))
    assert document.case.recipient.effective_size.best == 14
    assert document.undo_stack.count() == 1
    assert document.undo_stack.undoText() == "Set effective size (Ne) to 14"
    document.undo_stack.undo()
    assert document.case is small


def test_that_an_edit_that_changes_nothing_makes_no_step(document) -> None:
    document.apply(set_value(document.case, "recipient.effective_size", 16))
    assert document.undo_stack.count() == 0
    assert not document.is_modified


def test_that_a_wrong_edit_gives_its_problems_and_changes_nothing(document, small) -> None:
    problems = document.try_edit(lambda case: set_value(case, "recipient.effective_size", 400))
    assert [problem.path for problem in problems] == ["recipient.effective_size"]
    assert document.case is small
    assert document.undo_stack.count() == 0


def test_that_listeners_hear_of_edits_undo_and_redo(document) -> None:
    heard = []
    document.changed.connect(lambda case: heard.append(case.recipient.effective_size.best))
    document.apply(set_value(document.case, "recipient.effective_size", 14))
    document.undo_stack.undo()
    document.undo_stack.redo()
    assert heard == [14, 16, 14]


def test_that_two_hundred_random_edits_undone_give_the_identical_file(document, small) -> None:
    before = canonical(small)
    chance = random.Random(20270101)
    paths = {
        "recipient.effective_size": lambda: chance.randint(2, 40),
        "recipient.gene_diversity": lambda: round(chance.uniform(0.1, 0.65), 3),
        "plans[1].releases[0].who.females": lambda: chance.randint(0, 4),
        "loci[0].frequency": lambda: round(chance.random(), 3),
        "title": lambda: f"Meadows {chance.randint(0, 9)}",
    }
    for _ in range(200):
        path = chance.choice(sorted(paths))
        value = paths[path]()
        document.try_edit(lambda case, path=path, value=value: set_value(case, path, value))
    assert canonical(document.case) != before
    while document.undo_stack.canUndo():
        document.undo_stack.undo()
    assert canonical(document.case) == before


def test_that_the_trail_holds_the_edits_that_led_to_the_case(document) -> None:
    document.apply(set_value(document.case, "recipient.effective_size", 14))
    document.apply(set_value(document.case, "recipient.effective_size", 12))
    document.undo_stack.undo()
    document.apply(set_value(document.case, "title", "Three meadows"))
    assert [entry["edit"] for entry in document.trail] == [
        "Set effective size (Ne) to 14",
        "Set title to “Three meadows”",
    ]


def test_that_saving_clears_the_unsaved_mark_and_reads_back_the_same(document, tmp_path) -> None:
    document.apply(set_value(document.case, "recipient.effective_size", 14))
    assert document.is_modified
    path = tmp_path / "meadows.rescue"
    document.save(path)
    assert not document.is_modified
    assert document.path == path
    opened = load(path)
    assert opened.case == document.case
    assert [entry["edit"] for entry in opened.log] == ["Set effective size (Ne) to 14"]


def test_that_undoing_past_a_save_sets_the_unsaved_mark(document, tmp_path) -> None:
    document.apply(set_value(document.case, "recipient.effective_size", 14))
    document.save(tmp_path / "meadows.rescue")
    document.undo_stack.undo()
    assert document.is_modified


def test_that_a_new_case_is_unsaved_from_the_beginning(qapp, small) -> None:
    document = CaseDocument()
    document.new(small)
    assert document.is_modified


def test_that_a_failing_disk_keeps_the_old_file_and_the_case(
    document, tmp_path, monkeypatch
) -> None:
    path = tmp_path / "meadows.rescue"
    document.save(path)
    before = path.read_bytes()
    document.apply(set_value(document.case, "recipient.effective_size", 14))

    def full(*_args: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "replace", full)
    with pytest.raises(CaseFileError):
        document.save(path)
    assert path.read_bytes() == before
    assert document.is_modified
    assert document.case.recipient.effective_size.best == 14


def test_that_a_damaged_file_leaves_the_open_case_open(document, small, tmp_path: Path) -> None:
    broken = tmp_path / "broken.rescue"
    broken.write_bytes(b"PK\x03\x04 cut off")
    with pytest.raises(CaseFileError):
        document.open(broken)
    wrong = tmp_path / "wrong.json"
    wrong.write_text('{"format": "rescue case", "version": 1}', encoding="utf-8")
    with pytest.raises(InvalidCase):
        document.open(wrong)
    assert document.case is small


def test_that_opening_another_case_empties_the_undo_stack(document, small_file) -> None:
    document.apply(set_value(document.case, "title", "Other"))
    document.open(small_file)
    assert document.undo_stack.count() == 0
    assert document.path == small_file
    assert not document.is_modified


def test_that_reading_without_a_case_says_so(qapp) -> None:
    document = CaseDocument()
    assert not document.has_case
    with pytest.raises(NoCase):
        _ = document.case
