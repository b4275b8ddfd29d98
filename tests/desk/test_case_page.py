"""The Case page: parts are added and taken away, and every number is a field of the case."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QAbstractButton, QLabel

from rescue_planner.case.edits import add_donor, set_value
from rescue_planner.desk.case_page.living import _new_life
from rescue_planner.desk.fields import CheckField, ChoiceField, NumberField, TextField
from rescue_planner.desk.locus_notes import LocusNotes

FIELDS = (NumberField, TextField, ChoiceField, CheckField)


def _section(window, title):
    return window.pages["case"].sections[title]


def _press(qtbot, section, words: str) -> None:
    found = next(
        b
        for b in section.findChildren(QAbstractButton)
        if words in (b.text(), b.accessibleName()) and b.isVisible()
    )
    found.setFocus()
    qtbot.keyClick(found, Qt.Key.Key_Space)


def _paths(section) -> list[str]:
    return [f.path for f in section.findChildren(NumberField) if not f.retired]


def test_that_a_donor_is_added_with_marked_guesses_and_removed_again(qtbot, window) -> None:
    section = _section(window, "Donors")
    _press(qtbot, section, "Add a donor")
    donors = window.desk.document.case.donors
    assert [donor.name for donor in donors] == ["High Meadow", "Donor 1"]
    assert donors[1].fst_to_recipient.origin == "guessed"
    assert "donors[1].fst_to_recipient" in _paths(section)
    _press(qtbot, section, "Remove Donor 1")
    assert [donor.name for donor in window.desk.document.case.donors] == ["High Meadow"]
    assert "donors[1].fst_to_recipient" not in _paths(section)


def test_that_a_donor_in_use_is_not_removed_and_the_page_says_where(qtbot, window) -> None:
    section = _section(window, "Donors")
    _press(qtbot, section, "Remove High Meadow")
    assert [donor.name for donor in window.desk.document.case.donors] == ["High Meadow"]
    assert section.problem.isVisible()
    assert "release 1 of plan “Pairs”" in section.problem.text()


def test_that_a_renamed_donor_is_renamed_everywhere(qtbot, window) -> None:
    field = next(
        f for f in window.findChildren(TextField) if f.path == "donors[0].name" and not f.retired
    )
    field.edit.setFocus()
    field.edit.selectAll()
    qtbot.keyClicks(field.edit, "Hill Meadow\r")
    case = window.desk.document.case
    assert case.plans[1].releases[0].donor == "Hill Meadow"
    assert "loci[0].donor_frequency.Hill Meadow" in _paths(_section(window, "Tracked loci"))


def test_that_a_life_cycle_is_added_edited_and_removed_by_undo(qtbot, window) -> None:
    section = _section(window, "Life cycle")
    assert _paths(section) == []
    _press(qtbot, section, "Add a life cycle")
    life = window.desk.document.case.life_cycle
    assert life.yearly_survival.adult.origin == "guessed"
    assert "life_cycle.yearly_survival.adult" in _paths(section)
    window.desk.document.undo_stack.undo()
    assert window.desk.document.case.life_cycle is None
    assert _paths(section) == []


def test_that_locus_trait_and_target_are_added_and_removed(qtbot, window) -> None:
    document = window.desk.document
    _press(qtbot, _section(window, "Tracked loci"), "Add a tracked locus")
    assert len(document.case.loci) == 2
    _press(qtbot, _section(window, "Tracked loci"), "Remove Locus 1")
    assert len(document.case.loci) == 1
    _press(qtbot, _section(window, "Trait"), "Add a trait")
    assert document.case.trait.heritability.origin == "borrowed"
    assert "donors[0].trait_mean_difference" in _paths(_section(window, "Donors"))
    _press(qtbot, _section(window, "Trait"), "Remove the trait")
    assert document.case.trait is None
    _press(qtbot, _section(window, "Targets"), "Add a target")
    assert len(document.case.targets) == 2
    _press(qtbot, _section(window, "Targets"), "Remove target 2, Gene diversity kept")
    assert len(document.case.targets) == 1


def test_that_the_lethal_equivalents_are_echoed_both_ways_with_the_curve(window) -> None:
    words = [label.text() for label in _section(window, "Inbreeding cost").findChildren(QLabel)]
    echoed = next(text for text in words if "haploid)" in text)
    assert "7 diploid (3.5 haploid)" in echoed
    assert "half sibs (F = 0.125) survive 65 %, of full sibs (F = 0.25) 42 %" in echoed
    assert "Does this look right?" in echoed


def test_that_lines_follow_the_numbers(window) -> None:
    document = window.desk.document
    document.apply(set_value(document.case, "time.generation_years", 5))
    words = [label.text() for label in _section(window, "Time").findChildren(QLabel)]
    assert "2027 to 2067: 40 years are 8 generations." in words


def test_that_the_focus_stays_in_its_field_when_parts_change(qtbot, window) -> None:
    field = next(
        f for f in window.findChildren(NumberField) if f.path == "donors[0].gene_diversity"
    )
    field.edit.setFocus()
    document = window.desk.document
    document.apply(add_donor(document.case, "Far Meadow", 0.6, 0.3, {"winter coat": 0}))
    again = next(
        f
        for f in window.findChildren(NumberField)
        if f.path == "donors[0].gene_diversity" and not f.retired
    )
    assert again is not field
    assert again.edit.hasFocus()


def test_that_the_evidence_is_counted_by_origin(window) -> None:
    document = window.desk.document
    page = window.pages["case"]
    before = page.evidence.text()
    assert "1 measured" in before
    document.apply(
        set_value(document.case, "recipient.effective_size", {"best": 16, "origin": "borrowed"})
    )
    assert "1 borrowed" in page.evidence.text()


def test_that_disease_is_never_passed_over(window) -> None:
    words = " ".join(label.text() for label in _section(window, "Donors").findChildren(QLabel))
    assert "Disease risk is not assessed by this projection." in words


def test_that_links_lead_to_their_section_by_keyboard(qtbot, window) -> None:
    page = window.pages["case"]
    for name, section in page.sections.items():
        page.links[name].setFocus()
        qtbot.keyClick(page.links[name], Qt.Key.Key_Space)
        top = section.mapTo(page.area.viewport(), section.rect().topLeft()).y()
        assert top < page.area.viewport().height()


def _notes(window) -> str:
    notes = _section(window, "Tracked loci").findChild(LocusNotes)
    notes.refresh()
    return notes.words.text()


def test_that_a_tracked_locus_tells_equilibria_critical_flow_and_each_plans_own(qtbot, window):
    qtbot.waitUntil(lambda: window.desk.live.comparison is not None)
    words = _notes(window)
    assert "Equilibria of selection alone" in words
    assert "Selection acts fastest at" in words
    assert "Critical flow: m = " in words
    assert "A No releases: no gene flow." in words
    assert "B Pairs: m = " in words


def test_that_the_words_of_a_locus_follow_an_edit_and_a_hidden_plan(qtbot, window) -> None:
    qtbot.waitUntil(lambda: window.desk.live.comparison is not None)
    before = _notes(window)
    document = window.desk.document
    assert document.try_edit(lambda case: set_value(case, "loci[0].fitness[2]", 0.7)) == ()
    qtbot.waitUntil(lambda: window.desk.live.comparison is not None)
    after = _notes(window)
    assert after != before
    window.desk.view.set_hidden("Pairs", True)
    assert "Pairs" not in _notes(window)


def test_that_the_life_cycle_tells_growth_and_generation_length(window) -> None:
    document = window.desk.document
    assert document.try_edit(_new_life) == ()
    labels = _section(window, "Life cycle").findChildren(QLabel)
    words = " ".join(label.text() for label in labels)
    assert "Growth of the females" in words
    assert "mean age of mothers in the stable population" in words
    assert "T entered: 4" in words
