"""“I don’t know” and published values on the Case page, by keyboard."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLineEdit

from rescue_planner.desk.case_page.unknown import AtHand, Unknown
from rescue_planner.theory.inbreeding import survival_factor

FIRST_YEAR = "inbreeding_cost.lethal_equivalents_diploid.first_year"


def _opened(qtbot, window, section: str, path: str) -> AtHand:
    found = next(
        one for one in window.pages["case"].sections[section].findChildren(Unknown)
        if one.path == path
    )  # fmt: skip
    found.link.setFocus()
    qtbot.keyClick(found.link, Qt.Key.Key_Space)
    assert found.at_hand.isVisible()
    return found.at_hand


def _form(at_hand: AtHand, key: str):
    return next(form for form in at_hand.ways if form.way.key == key)


def _press(qtbot, link) -> None:
    link.setFocus()
    qtbot.keyClick(link, Qt.Key.Key_Space)


def _type(qtbot, form, **answers: str) -> None:
    for key, words in answers.items():
        edit = form.answers[key]
        assert isinstance(edit, QLineEdit)
        edit.setFocus()
        edit.selectAll()
        qtbot.keyClicks(edit, words)


def test_that_breeders_give_ne_with_the_arithmetic_and_one_undo_step(qtbot, window) -> None:
    document = window.desk.document
    at_hand = _opened(qtbot, window, "Recipient", "recipient.effective_size")
    form = _form(at_hand, "breeders")
    assert not form.use.isEnabled()
    _type(qtbot, form, males="3", females="20")
    assert form.said.text().startswith("4 · 3 · 20 / 23 = 10.4")
    before, steps = document.case, document.undo_stack.index()
    _press(qtbot, form.use)
    held = document.case.recipient.effective_size
    assert (held.best, held.origin) == (10.4, "measured")
    assert document.undo_stack.index() == steps + 1
    document.undo_stack.undo()
    assert document.case == before


def test_that_the_ratio_follows_the_adults(qtbot, window) -> None:
    form = _form(_opened(qtbot, window, "Recipient", "recipient.effective_size"), "ratio")
    assert "of 40 adults = 6 (4 to 8)" in form.said.text()
    from rescue_planner.case.edits import set_value

    document = window.desk.document
    document.apply(set_value(document.case, "recipient.adults", 46))
    assert "of 46 adults = 6.9" in form.said.text()


def test_that_a_published_value_is_used_from_the_page(qtbot, window) -> None:
    at_hand = _opened(qtbot, window, "Inbreeding cost", FIRST_YEAR)
    link = next(one for one in at_hand.published.uses if "12 (4 to 20)" in one.accessibleName())
    _press(qtbot, link)
    held = window.desk.document.case.inbreeding_cost.lethal_equivalents_diploid.first_year
    assert (held.best, held.low, held.high, held.origin) == (12, 4, 20, "borrowed")


def test_that_lethal_equivalents_ask_for_convention_and_span_with_nothing_preset(
    qtbot, window
) -> None:
    section = window.pages["case"].sections["Inbreeding cost"]
    form = _form(section.findChild(AtHand), "printed")
    _type(qtbot, form, best="4")
    assert form.answers["convention"].currentIndex() == 0
    assert not form.use.isEnabled()
    assert "haploid or per diploid" in form.said.text()
    for key in ("convention", "span"):
        form.answers[key].setFocus()
        qtbot.keyClick(form.answers[key], Qt.Key.Key_Down)
    assert "4 haploid = 8 diploid" in form.said.text()
    assert "covering survival through the first year" in form.said.text()
    assert f"{100 * survival_factor(0.25, 8):.1f}\u00a0%" in form.said.text()
    _type(qtbot, form, source="Report 12")
    _press(qtbot, form.use)
    held = window.desk.document.case.inbreeding_cost.lethal_equivalents_diploid.first_year
    assert held.best == 8
    assert held.source.startswith("Report 12; 4 haploid = 8 diploid")
    assert "covers survival through the first year" in held.source


def test_that_a_removal_limit_nobody_stated_is_left_out_in_words(qtbot, window) -> None:
    path = "donors[0].most_removed_per_year"
    at_hand = _opened(qtbot, window, "Donors", path)
    form = _form(at_hand, "not stated")
    assert form.use.text() == "Leave it as not stated"
    _press(qtbot, form.use)
    assert window.desk.document.case.donors[0].most_removed_per_year is None
    lines = [label.text() for label, _ in window.pages["case"].sections["Donors"]._lines]
    assert any("not stated, which is not unlimited" in words for words in lines)


def test_that_a_wrong_answer_is_named_and_enters_nothing(qtbot, window) -> None:
    form = _form(_opened(qtbot, window, "Recipient", "recipient.effective_size"), "breeders")
    _type(qtbot, form, males="three", females="20")
    assert "is not a number" in form.problem.text()
    assert not form.use.isEnabled()


def test_that_a_value_with_its_source_is_kept_among_the_users_own(qtbot, window) -> None:
    at_hand = _opened(qtbot, window, "Recipient", "recipient.gene_diversity")
    _press(qtbot, at_hand.published.keep)
    assert "state the source" in at_hand.published.problem.text().lower()
    from rescue_planner.case.edits import set_source

    document = window.desk.document
    document.apply(set_source(document.case, "recipient.gene_diversity", source="report 3"))
    _press(qtbot, at_hand.published.keep)
    assert any("0.42" in one.accessibleName() for one in at_hand.published.uses)
    _press(qtbot, at_hand.published.removes[0])
    assert not any("0.42" in one.accessibleName() for one in at_hand.published.uses)


def test_that_the_explainer_offers_the_same_for_the_number_with_the_focus(qtbot, window) -> None:
    path = "plans[1].releases[0].afterwards.survive_to_breed"
    window.desk.explain.show(path)
    at_hand = window.explainer.at_hand
    assert at_hand.path == path
    use = next(one for one in at_hand.published.uses if "0.7 (0.3 to 1)" in one.accessibleName())
    _press(qtbot, use)
    held = window.desk.document.case.plans[1].releases[0].afterwards.survive_to_breed
    assert (held.best, held.low, held.high, held.origin) == (0.7, 0.3, 1, "borrowed")
    window.desk.explain.show("title")
    assert window.explainer.at_hand is None


def test_that_nothing_can_be_used_for_a_donor_that_is_gone_until_it_is_back(qtbot, window) -> None:
    from rescue_planner.case.edits import add_donor, remove_donor, set_value

    document = window.desk.document
    document.apply(add_donor(document.case, "Far Meadow", 0.6, 0.1, {"winter coat": 0}))
    document.apply(set_value(document.case, "donors[1].adults", 400))
    window.desk.explain.show("donors[1].effective_size")
    at_hand = window.explainer.at_hand
    form = _form(at_hand, "ratio")
    assert form.use.text() == "Use 60"
    document.apply(remove_donor(document.case, "Far Meadow"))
    usable = [link for link in (form.use, *at_hand.published.uses) if link.isEnabled()]
    assert usable == []
    document.undo_stack.undo()
    _press(qtbot, form.use)
    assert document.case.donors[1].effective_size.best == 60
