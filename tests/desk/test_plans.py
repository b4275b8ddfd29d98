"""The Plans page with a real document: every edit reaches the case, the charts and the words."""

import json
from pathlib import Path

import numpy as np
import pytest
from PySide6.QtCore import QEvent, Qt
from PySide6.QtWidgets import QAbstractButton, QApplication, QLabel, QWidget

from rescue_planner.case.problems import read_case
from rescue_planner.desk.pages.plans import PlansPage
from rescue_planner.desk.plan_editor.blocks import ReleaseBlock, SteadyBlock
from rescue_planner.desk.plan_editor.events import FEMALES, NEWCOMERS, YEAR
from rescue_planner.projection import reading

MARSH = Path(__file__).parents[1] / "projection" / "marsh.json"
FOURTH = "plans[2].releases[0]"


def marsh(**changes):
    return read_case({**json.loads(MARSH.read_text(encoding="utf-8")), **changes})


@pytest.fixture
def show_page(qtbot, desk):
    """Return a function that shows a page of the desk; pages live as long as the test."""
    kept = []

    def show():
        made = PlansPage(desk)
        kept.append(made)
        qtbot.addWidget(made)
        made.resize(1100, 720)
        with qtbot.waitExposed(made):
            made.show()
        made.activateWindow()
        return made

    yield show
    kept.clear()


@pytest.fixture
def page(desk, show_page):
    desk.document.new(marsh())
    made = show_page()
    settle(made)
    return made


def settle(page):
    page._desk.live.recompute()
    page.charts.flush()


def choose(page, plan):
    page.list.choose(plan)
    page.charts.flush()


def field(page, path):
    fields = dict(page.editor.at_hand.fields)
    for block in page.editor.blocks:
        fields.update(block.sentence.fields)
    return fields[path]


def press(page, words):
    made = next(b for b in page.editor.findChildren(QAbstractButton) if b.text() == words)
    made.click()
    QApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete.value)


def type_into(qtbot, made, text):
    made.edit.setFocus()
    made.edit.selectAll()
    qtbot.keyClicks(made.edit, text)
    qtbot.keyClick(made.edit, Qt.Key.Key_Return)


def assert_drawn(page):
    """Every line of every panel is the comparison of the case as it stands."""
    comparison = page._desk.live.comparison
    assert page.charts.shown.comparison is comparison
    assert len(page.charts.panels) >= 4
    for panel in page.charts.panels:
        assert set(panel.plans) == set(comparison.plans)
        for plan, items in panel.plans.items():
            wanted = reading.curve(comparison, plan, panel.picture.key)
            np.testing.assert_array_equal(items.curve.getData()[1], wanted.values)


def test_that_any_number_of_a_plan_updates_every_chart_of_every_plan(qtbot, page, desk):
    choose(page, "Every fourth year")
    edits = {
        f"{FOURTH}.when.first_year": "2031",
        f"{FOURTH}.when.every_years": "5",
        f"{FOURTH}.when.times": "3",
        f"{FOURTH}.who.females": "3",
        f"{FOURTH}.who.males": "2",
        f"{FOURTH}.afterwards.survive_to_breed": "0.55",
        f"{FOURTH}.afterwards.breeding_relative_to_residents": "0.9",
        "plans[2].rules[0].above": "0.2",
        "plans[2].effective_size": "12",
        "recipient.effective_size": "20",
        "loci[0].donor_frequency.North Fell": "0.3",
    }
    for path, text in edits.items():
        before = desk.live.comparison.key
        type_into(qtbot, field(page, path), text)
        settle(page)
        assert desk.live.comparison.key != before, path
        assert_drawn(page)


def test_that_the_chain_of_numbers_follows_its_fields(qtbot, page):
    choose(page, "Every fourth year")
    block = page.editor.blocks[0]
    assert isinstance(block, ReleaseBlock)
    assert "3 released × 0.7 survive to breed × 0.8 breeding = 1.68" in block.comes_to.text()
    type_into(qtbot, field(page, f"{FOURTH}.afterwards.survive_to_breed"), "0.5")
    assert "3 released × 0.5 survive to breed × 0.8 breeding = 1.2 " in block.comes_to.text()
    assert "Moving a release within it changes nothing" in block.comes_to.text()
    assert "2027 to 2031" in block.comes_to.text()


def test_that_an_edit_is_one_step_that_undo_takes_back(qtbot, page, desk):
    choose(page, "Every fourth year")
    before = desk.document.case
    type_into(qtbot, field(page, f"{FOURTH}.who.females"), "4")
    assert desk.document.undo_stack.count() == 1
    desk.document.undo_stack.undo()
    assert desk.document.case == before
    assert field(page, f"{FOURTH}.who.females").edit.text() == "2"


def test_that_more_than_the_donor_gives_is_said_beside_the_release(qtbot, page, desk):
    choose(page, "Every fourth year")
    before = desk.document.case
    made = field(page, f"{FOURTH}.who.females")
    type_into(qtbot, made, "9")
    assert desk.document.case == before
    assert made.edit.text() == "9"
    block = page.editor.blocks[0]
    said = [label.text() for label in block.findChildren(QLabel) if label.isVisibleTo(page)]
    assert any("North Fell" in text and "8" in text and text.startswith("⚠") for text in said)
    type_into(qtbot, made, "5")
    assert desk.document.case.plan("Every fourth year").releases[0].who.females.best == 5
    assert not made.problem.isVisibleTo(page)


def test_that_a_duplicate_that_takes_too_many_is_refused_beside_it(qtbot, page, desk):
    choose(page, "Every fourth year")
    type_into(qtbot, field(page, f"{FOURTH}.who.females"), "5")
    page.editor.blocks[0].duplicate.click()
    block = page.editor.blocks[0]
    assert len(desk.document.case.plan("Every fourth year").releases) == 1
    assert "North Fell" in block.sentence.refused.text()
    assert block.sentence.refused.isVisibleTo(page)


def test_that_a_release_is_added_duplicated_and_removed(qtbot, page, desk):
    choose(page, "Every fourth year")
    page.editor.blocks[0].duplicate.click()
    plan = desk.document.case.plan("Every fourth year")
    assert plan.releases[1] == plan.releases[0]
    assert sum(isinstance(block, ReleaseBlock) for block in page.editor.blocks) == 2
    page.editor.blocks[1].remove.click()
    page.editor.add_buttons[ReleaseBlock].click()
    plan = desk.document.case.plan("Every fourth year")
    assert len(plan.releases) == 2
    assert plan.releases[1].donor == "North Fell"
    assert page.editor.events.rowCount() == 6
    settle(page)
    assert_drawn(page)


def test_that_the_grid_and_the_sentence_agree_and_both_edit(page, desk):
    choose(page, "Every fourth year")
    model = page.editor.events
    assert [model.rows[i].year for i in range(5)] == [2027, 2031, 2035, 2039, 2043]
    assert model.setData(model.index(2, FEMALES), "3")
    assert field(page, f"{FOURTH}.who.females").edit.text() == "3"
    assert model.data(model.index(4, FEMALES)) == "3"
    assert model.setData(model.index(1, YEAR), "2032")  # the second event: all move by one year
    assert field(page, f"{FOURTH}.when.first_year").edit.text() == "2028"
    assert [row.year for row in model.rows] == [2028, 2032, 2036, 2040, 2044]
    assert float(model.data(model.index(0, NEWCOMERS))) == pytest.approx(4 * 0.7 * 0.8)


def test_that_a_wrong_cell_of_the_grid_is_said_and_changes_nothing(page, desk):
    choose(page, "Every fourth year")
    model, before = page.editor.events, desk.document.case
    for text in ("many", "-1", "20", ""):
        model.setData(model.index(0, FEMALES), text)
        if text:
            assert page.editor.refused.text().startswith("⚠"), text
            assert desk.document.case == before
    assert desk.document.case.plan("Every fourth year").releases[0].who.females.best == 0


def test_that_the_grid_is_a_proper_model(page, qtmodeltester):
    choose(page, "Every fourth year")
    qtmodeltester.check(page.editor.events, force_py=True)


def test_that_steady_flow_shows_m_and_ne_m(qtbot, page, desk):
    choose(page, "Trickle")
    (block,) = page.editor.blocks
    assert isinstance(block, SteadyBlock)
    assert "m = 5.6 % of gene copies a generation, Ne·m = 0.89 (Ne 16)" in block.comes_to.text()
    type_into(qtbot, field(page, "plans[1].effective_size"), "32")
    assert "Ne·m = 1.78 (Ne 32)" in block.comes_to.text()
    block.remove.click()
    assert desk.document.case.plan("Trickle").steady == ()
    page.editor.add_buttons[SteadyBlock].click()
    assert desk.document.case.plan("Trickle").steady[0].donor == "North Fell"


def test_that_rules_and_other_actions_are_added_and_removed(page, desk):
    choose(page, "Trickle")
    for _ in range(2):
        press(page, "Add stop rule")
    press(page, "Add release rule")
    press(page, "Add other action")
    plan = desk.document.case.plan("Trickle")
    assert [rule.name for rule in plan.rules] == [
        "ancestry ceiling", "ancestry ceiling 2", "another wave",
    ]  # fmt: skip
    assert plan.rules[2].release.donor == "North Fell"
    assert len(plan.other_actions) == 1
    for kind, count in (("rules", 2), ("other_actions", 0)):
        last = next(
            b
            for b in reversed(page.editor.blocks)
            if type(b).__name__[:4].lower() in kind + "acti"
            and hasattr(b, "remove")
            and (kind == "rules") == ("Rule" in type(b).__name__)
        )
        last.remove.click()
        assert len(getattr(desk.document.case.plan("Trickle"), kind)) == count


def test_that_a_rules_measure_is_chosen_from_a_list(page, desk):
    choose(page, "Every fourth year")
    block = page.editor.blocks[1]
    choice = block.sentence.choices["plans[2].rules[0].when"]
    values = [value for value, _ in choice.choices]
    choice.activated.emit(values.index("inbreeding"))
    assert desk.document.case.plan("Every fourth year").rules[0].when == "inbreeding"
    assert choice.currentText() == "inbreeding F"
    assert "F against the reference" in block.comes_to.text()


def test_that_no_releases_cannot_be_removed_or_renamed_and_says_why(qtbot, page, desk):
    choose(page, "No releases")
    assert not page.list.remove_button.isEnabled()
    assert not page.list.rename_button.isEnabled()
    assert "compared with it" in page.list.reason.text()
    assert page.list.reason.isVisibleTo(page)
    page.list.list.setFocus()
    qtbot.keyClick(page.list.list, Qt.Key.Key_Delete)
    assert desk.document.case.plans[0].name == "No releases"
    assert "compared with it" in page.list.problem.text()
    assert page.editor.blocks == []


def test_that_plans_are_added_duplicated_renamed_moved_and_removed_by_keys(qtbot, page, desk):
    choose(page, "Trickle")
    page.list.duplicate_button.click()
    assert [p.name for p in desk.document.case.plans][1:3] == ["Trickle", "Trickle 2"]
    assert page.list.current == "Trickle 2"
    page.list.list.currentItem().setText("Drip")
    assert desk.document.case.plans[2].name == "Drip"
    assert page.list.current == "Drip"
    assert page.editor.heading.text() == "Drip"
    page.list.list.setFocus()
    qtbot.keyClick(page.list.list, Qt.Key.Key_Up, Qt.KeyboardModifier.AltModifier)
    assert [p.name for p in desk.document.case.plans][1:3] == ["Drip", "Trickle"]
    qtbot.keyClick(page.list.list, Qt.Key.Key_Delete)
    assert "Drip" not in [p.name for p in desk.document.case.plans]
    page.list._add()
    assert desk.document.case.plans[-1].name == "Plan 3"
    assert page.list.current == "Plan 3"


def test_that_a_taken_name_is_refused_in_a_sentence(page, desk):
    choose(page, "Trickle")
    page.list.list.currentItem().setText("No releases")
    assert page.list.problem.text().startswith("⚠")
    assert page.list.list.currentItem().text() == "Trickle"
    assert desk.document.case.plans[1].name == "Trickle"


def test_that_twelve_plans_are_the_most(page, desk):
    while page.list.add_button.isEnabled():
        page.list._add()
    assert len(desk.document.case.plans) == 12
    assert "at most 12" in page.list.reason.text()
    assert not page.list.duplicate_button.isEnabled()


def test_that_hiding_a_plan_hides_it_on_every_panel(page, desk):
    desk.view.set_hidden("Trickle", True)
    page.charts.flush()
    assert all("Trickle" not in panel.plans for panel in page.charts.panels)
    assert "Trickle" in page.list.names()
    desk.view.set_hidden("Trickle", False)
    page.charts.flush()
    assert_drawn(page)


def test_that_the_axis_switch_changes_no_value(page, desk):
    before = [x.curve.getData()[1] for x in page.charts.panels[0].plans.values()]
    desk.view.set_axis("generations")
    page.charts.flush()
    after = [x.curve.getData()[1] for x in page.charts.panels[0].plans.values()]
    for one, other in zip(before, after, strict=True):
        np.testing.assert_array_equal(one, other)
    assert page.charts.panels[-1].time.labels()[0][0] == "0"


def test_that_a_stale_comparison_is_never_drawn(qtbot, page, desk, monkeypatch):
    """Between an edit and its projection, a redraw draws words, not the old lines."""
    from rescue_planner.case.edits import set_value

    choose(page, "Trickle")
    monkeypatch.setattr(desk.live, "recompute", lambda: None)
    desk.live._timer.timeout.disconnect()
    desk.document.try_edit(lambda case: set_value(case, "recipient.effective_size", 9))
    assert desk.live.comparison is None
    desk.view.set_axis("generations")
    page.charts.flush()
    assert page.charts.shown is None
    assert "being computed" in page.charts.message


def test_that_old_lines_are_taken_away_where_new_ones_are_late(qtbot, page, desk):
    from rescue_planner.case.edits import set_value

    desk.live._timer.timeout.disconnect()
    desk.document.try_edit(lambda case: set_value(case, "recipient.effective_size", 9))
    qtbot.waitUntil(lambda: page.charts.shown is None)
    assert "being computed" in page.charts.message


def test_that_the_plan_being_edited_is_emphasised(page):
    choose(page, "Trickle")
    items = page.charts.panels[0].plans
    widths = {plan: x.curve.opts["pen"].widthF() for plan, x in items.items()}
    assert widths["Trickle"] > max(w for plan, w in widths.items() if plan != "Trickle")
    fan = page.charts.panels[-1].picture
    assert fan.fan_of == "Trickle"
    assert fan.fan is not None


def test_that_tab_reaches_every_field_from_the_list_to_the_charts(qtbot, page):
    choose(page, "Every fourth year")
    wanted = page.editor.reached()
    assert len(wanted) > 15
    page.list.list.setFocus()
    seen = []
    for _ in range(200):
        now = QApplication.focusWidget()
        seen.append(now)
        if now is page.charts:
            break
        qtbot.keyClick(now, Qt.Key.Key_Tab)
    assert seen[-1] is page.charts
    enabled = [w for w in wanted if w.isEnabled() and w.isVisibleTo(page)]
    assert [widget for widget in seen if widget in enabled] == enabled


def test_that_everything_that_takes_the_focus_has_a_name_and_is_big_enough(page):
    choose(page, "Every fourth year")
    for widget in page.findChildren(QWidget):
        if not (widget.isVisibleTo(page) and widget.focusPolicy() & Qt.FocusPolicy.TabFocus):
            continue
        if widget.focusProxy() is not None:  # a chart's viewport: the chart has the name
            continue
        assert widget.accessibleName(), widget
        assert min(widget.width(), widget.height()) >= 24, widget.accessibleName()


def test_that_the_explainer_follows_fields_and_panels(qtbot, page, desk):
    choose(page, "Every fourth year")
    field(page, f"{FOURTH}.who.males").edit.setFocus()
    assert desk.explain.current == f"{FOURTH}.who.males"
    page.charts.setFocus()
    qtbot.keyClick(page.charts, Qt.Key.Key_Down)
    assert desk.explain.current == "gene_diversity_kept"


def test_that_without_a_case_the_page_says_so(show_page):
    made = show_page()
    assert made.empty.isVisibleTo(made)
    assert "No case is open" in made.empty.text()
    assert not made.list.isVisibleTo(made)


def test_that_without_a_donor_the_reason_is_said(desk, show_page):
    desk.document.new(
        marsh(donors=[], loci=[], targets=[], plans=[{"name": "No releases"}, {"name": "Try"}])
    )
    made = show_page()
    made.list.choose("Try")
    assert "No donor is entered yet: add one on the Case page." in made.editor.words()


def test_that_another_case_replaces_everything(page, desk):
    other = marsh(plans=[{"name": "No releases"}, {"name": "Other"}], targets=[])
    desk.document.new(other)
    settle(page)
    assert page.list.names() == ["No releases", "Other"]
    assert page.list.current == "Other"
    assert page.editor.heading.text() == "Other"
    assert set(page.charts.panels[0].plans) == {"No releases", "Other"}


@pytest.mark.parametrize(("width", "scale"), [(1100, 1.0), (900, 2.0), (640, 1.0)])
def test_that_nothing_is_cut_off_at_the_side(qtbot, page, desk, width, scale):
    choose(page, "Every fourth year")
    desk.view.set_text_scale(scale)
    page.resize(width, 720)
    settle(page)
    qtbot.wait(30)
    for block in page.editor.blocks:
        for label in block.findChildren(QLabel, "word"):
            right = label.mapTo(page, label.rect().topRight()).x()
            assert right <= page.width()
            assert label.width() >= label.sizeHint().width() - 1


def test_that_nouns_agree_with_their_numbers(qtbot, page):
    choose(page, "Every fourth year")

    def sentence():
        return " ".join(
            label.text() for label in page.editor.blocks[0].findChildren(QLabel, "word")
        )

    assert "females and male of age" in sentence()
    type_into(qtbot, field(page, f"{FOURTH}.who.males"), "2")
    type_into(qtbot, field(page, f"{FOURTH}.who.females"), "1")
    assert "female and males of age" in sentence()


def test_that_the_cursor_goes_to_a_new_part_and_stays_near_a_removed_one(page):
    choose(page, "Trickle")
    press(page, "Add stop rule")
    assert QApplication.focusWidget().accessibleName().startswith("Rule “ancestry ceiling”: acts")
    press(page, "Add other action")
    assert QApplication.focusWidget() is page.editor.blocks[-1].what.edit
    page.editor.blocks[-1].remove.click()
    assert QApplication.focusWidget().text() == "Add other action"
    choose(page, "Every fourth year")
    page.editor.blocks[0].duplicate.click()
    assert QApplication.focusWidget().accessibleName().startswith("Release 2: first year")
    page.editor.blocks[1].remove.click()
    assert QApplication.focusWidget().accessibleName() == "Remove release 1"
