"""The Compare page with a real document: charts, table, words, targets and export agree."""

import json
from pathlib import Path

import numpy as np
import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication, QFileDialog, QMessageBox, QWidget

from rescue_planner.advice.targets import target_checks
from rescue_planner.case.edits import set_value
from rescue_planner.case.problems import read_case
from rescue_planner.desk.compare.exporting import Wanted, write
from rescue_planner.desk.compare.targets import target_table
from rescue_planner.desk.pages.compare import ComparePage
from rescue_planner.projection import reading
from rescue_planner.projection.jobs import Cancelled, JobControl

MARSH = Path(__file__).parents[1] / "projection" / "marsh.json"
OPENING = [
    "relative_first_year_survival", "gene_diversity_kept", "inbreeding", "donor_ancestry", "adults",
]  # fmt: skip
LOCUS = "allele_frequency:dark bill"


def marsh(**changes):
    raw = {**json.loads(MARSH.read_text(encoding="utf-8")), **changes}
    return read_case({name: part for name, part in raw.items() if part is not None})


@pytest.fixture
def show_page(qtbot, desk):
    """Return a function that shows a page of the desk; pages live as long as the test."""
    kept = []

    def show():
        made = ComparePage(desk)
        kept.append(made)
        qtbot.addWidget(made)
        made.resize(1000, 720)
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
    page.averages.charts.flush()
    page.odds.charts.flush()


def keys(charts):
    return [panel.picture.key for panel in charts.panels]


def panels(page):
    return [*page.averages.charts.panels, *page.odds.charts.panels]


def table_rows(page):
    model = page.values.model
    return [
        [model.data(model.index(r, c)) for c in range(model.columnCount())]
        for r in range(model.rowCount())
    ]


def test_that_it_opens_on_the_measures_of_the_case(page):
    assert keys(page.averages.charts) == OPENING
    assert keys(page.odds.charts) == [LOCUS] * 3 + ["allele_kept:dark bill"]
    fans = [panel.picture.fan_of for panel in page.odds.charts.panels]
    assert fans == ["No releases", "Trickle", "Every fourth year", None]


def test_that_without_a_life_cycle_it_opens_without_numbers_but_offers_them(qtbot, page, desk):
    desk.document.new(marsh(life_cycle=None))
    settle(page)
    assert keys(page.averages.charts) == OPENING[:-1]
    tick(page, "adults", True)
    words = page.averages.charts.panels[-1].picture.empty
    assert words.startswith("No life cycle entered: numbers are not projected.")


def tick(page, key, on):
    for row in range(page.chooser.count()):
        item = page.chooser.item(row)
        if item.data(Qt.ItemDataRole.UserRole) == key:
            item.setCheckState(Qt.CheckState.Checked if on else Qt.CheckState.Unchecked)
    page.averages.charts.flush()
    page.odds.charts.flush()


def test_that_any_edit_updates_every_chart_of_every_plan(page, desk):
    edits = {
        "recipient.effective_size": 20,
        "recipient.gene_diversity": 0.4,
        "plans[2].releases[0].who.females": 4,
        "loci[0].donor_frequency.North Fell": 0.2,
        "inbreeding_cost.lethal_equivalents_diploid.first_year": 8,
        "life_cycle.yearly_survival.adult": 0.8,
    }
    for path, value in edits.items():
        problems = desk.document.try_edit(lambda case, p=path, v=value: set_value(case, p, v))
        assert problems == ()
        settle(page)
        comparison = desk.live.comparison
        for panel in panels(page):
            for plan in comparison.plans:
                wanted = reading.curve(comparison, plan, panel.picture.key)
                got = panel.plans[plan].curve.getData()[1]
                np.testing.assert_array_equal(got, wanted.values)


def test_that_the_bands_follow_an_edit(page, desk):
    desk.document.try_edit(lambda case: set_value(case, "recipient.effective_size", 10))
    settle(page)
    comparison = desk.live.comparison
    for panel in page.odds.charts.panels[:3]:
        q25 = comparison.get(panel.picture.fan_of, "exact", LOCUS, "q25").values
        drawn = panel.fan.inner.getData()[1]
        count = drawn.size // 2
        np.testing.assert_array_equal(drawn[:count], q25[:count])


def test_that_hiding_a_plan_hides_it_everywhere(page, desk):
    desk.view.set_hidden("Trickle", True)
    settle(page)
    for panel in panels(page):
        assert "Trickle" not in panel.plans
        assert panel.picture.fan_of != "Trickle"
    assert all("Trickle" not in row[0] for row in table_rows(page))
    model = page.target_model
    assert all("Trickle" not in str(head) for head in model.table.header)


def test_that_hiding_the_plan_of_a_rule_hides_what_it_did(page, desk):
    assert "ceiling" in page.events.text()
    desk.view.set_hidden("Every fourth year", True)
    assert not page.events.isVisibleTo(page)


def test_that_one_read_out_goes_through_both_groups(qtbot, page):
    charts = page.averages.charts
    charts.setFocus()
    qtbot.keyClick(charts, Qt.Key.Key_Home)
    qtbot.keyClick(charts, Qt.Key.Key_Right)
    assert {panel.overlay.t for panel in panels(page)} == {1}
    assert {panel.heading.when for panel in panels(page)} == {"2031"}


def test_that_the_table_holds_the_comparison(page, desk):
    comparison = desk.live.comparison
    rows = table_rows(page)
    assert len(rows) == 4 * 3
    shown = page.chooser.shown_keys()
    for row in rows:
        plan = row[0].partition(" ")[2]
        t = comparison.index_at(float(row[1].split()[0]))
        for key, text in zip(shown, row[2:], strict=True):
            series = comparison.best(plan, key)
            if text in ("gone", "> 99.9"):
                continue
            value = series.values[t] * reading.scale(key)
            assert float(reading.plain(text)) == pytest.approx(value, abs=0.051)


def test_that_the_years_of_the_table_are_chosen(qtbot, page):
    page.values.edit.setFocus()
    page.values.edit.selectAll()
    qtbot.keyClicks(page.values.edit, "2048; 2087")
    qtbot.keyClick(page.values.edit, Qt.Key.Key_Return)
    assert [row[1] for row in table_rows(page)][::3] == ["2048 (as of 2047)", "2087"]
    assert "last one reached by then" in page.values.notes.text()


def test_that_a_wrong_year_is_said_and_the_table_stays(qtbot, page):
    before = table_rows(page)
    page.values.edit.setFocus()
    page.values.edit.selectAll()
    qtbot.keyClicks(page.values.edit, "soon")
    qtbot.keyClick(page.values.edit, Qt.Key.Key_Return)
    assert "“soon” is not a year" in page.values.problem.text()
    assert page.values.edit.text() == "soon"
    assert table_rows(page) == before


def test_that_the_table_turns_round(page):
    page.values.rows.setCurrentIndex(1)
    rows = table_rows(page)
    assert len(rows) == 4 * len(page.chooser.shown_keys())
    assert page.values.model.table.header[:3] == ("Measure", "Unit", "Year")


def test_that_numbers_stand_at_the_right(page):
    model = page.values.model
    right = int(Qt.AlignmentFlag.AlignRight)
    role = Qt.ItemDataRole.TextAlignmentRole
    assert model.data(model.index(0, 2), role) & right
    assert not model.data(model.index(0, 0), role) & right


def test_that_the_table_is_copied_whole_or_in_part(qtbot, page):
    page.values.copy_button.click()
    text = QGuiApplication.clipboard().text()
    lines = text.rstrip("\n").split("\n")
    assert len(lines) == 1 + page.values.model.rowCount()
    assert lines[1].split("\t")[:2] == ["A No releases", "2027"]
    page.values.table.setFocus()
    page.values.table.selectAll()
    qtbot.keyClick(page.values.table, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    assert QGuiApplication.clipboard().text().rstrip("\n").split("\n") == lines[1:]


def test_that_the_table_is_a_proper_model(page, qtmodeltester):
    qtmodeltester.check(page.values.model, force_py=True)


def test_that_measures_are_chosen_by_keyboard(qtbot, page):
    qtbot.keyClick(page.measures_button, Qt.Key.Key_Space)
    assert page.chooser.isVisibleTo(page)
    assert page.chooser.hasFocus()
    qtbot.keyClick(page.chooser, Qt.Key.Key_Space)
    page.averages.charts.flush()
    assert keys(page.averages.charts) == OPENING[1:]
    assert "First-year" not in page.values.model.table.header[2]
    tick(page, "cost", True)
    assert keys(page.averages.charts)[-1] == "cost"
    assert page.averages.charts.panels[-1].picture.unit == "EUR so far"


def test_that_each_group_says_its_depth_and_what_it_leaves_out(page):
    assert page.average_depth.text().startswith("Average course: Ne is held at 16")
    assert page.odds_depth.text().startswith("One-locus odds: ")
    assert page.odds_depth.isVisibleTo(page)


def test_that_without_loci_there_is_no_locus_group(page, desk):
    desk.document.new(marsh(loci=[]))
    settle(page)
    assert not page.odds.isVisibleTo(page)
    assert not page.odds_heading.isVisibleTo(page)


def test_that_survival_without_an_inbreeding_cost_is_not_shown_as_a_result(page, desk):
    assert desk.document.try_edit(lambda c: set_value(c, "inbreeding_cost", None)) == ()
    desk.live.recompute()
    page.averages.charts.flush()
    survival = page.averages.charts.panels[0]
    assert survival.picture.empty.startswith("No inbreeding cost entered")
    assert not any("outbred" in head for head in page.values.model.table.header)


def test_that_the_locus_group_tells_equilibria_and_each_plans_flow(page, desk):
    words = page.locus_notes.words.text()
    assert "Equilibria of selection alone" in words
    assert all(f"{plan.name}: " in words for plan in desk.document.case.plans)


def test_that_targets_are_checked_for_every_plan(page, desk):
    comparison = desk.live.comparison
    table = target_table(desk.document.case, comparison, comparison.plans)
    assert page.target_model.table == table
    checks = {(c.target, c.plan): c for c in target_checks(desk.document.case, comparison)}
    for number, row in enumerate(table.rows, start=1):
        for plan, cell in zip(comparison.plans, row[3:], strict=True):
            check = checks[number, plan]
            if "gone" in cell:
                assert cell.startswith("✗ not met")
                continue
            assert cell.startswith("✓ met" if check.met else "✗ not met")
            shown = float(reading.plain(cell.split("\n")[1]))
            assert shown == pytest.approx(100 * check.value, abs=0.05)
    assert "by 2066 (as of 2063)" in table.rows[0][0]
    assert "no reason stated" in table.rows[1][0]


def test_that_the_decision_is_shown_under_the_question(page, desk):
    assert page.question.text() == "What does each plan buy and cost?"
    assert not page.decision.isVisibleTo(page)
    desk.document.try_edit(
        lambda case: set_value(case, "decision.question", "Bring in rails in 2027?")
    )
    settle(page)
    assert page.decision.text() == "To be decided: Bring in rails in 2027?"


def test_that_a_stale_comparison_is_never_drawn_or_tabled(page, desk):
    desk.live._timer.timeout.disconnect()
    desk.document.try_edit(lambda case: set_value(case, "recipient.effective_size", 9))
    desk.view.set_axis("generations")
    assert page.averages.charts.shown is None
    assert "being computed" in page.averages.charts.message
    assert page.values.model.rowCount() == 0
    assert not page.export_button.isEnabled()


def test_that_without_a_case_the_page_says_so(show_page):
    made = show_page()
    assert "No case is open" in made.averages.charts.message
    assert not made.export_button.isEnabled()
    assert not made.values.isVisibleTo(made)


def test_that_everything_that_takes_the_focus_has_a_name_and_is_big_enough(page):
    page.measures_button.setChecked(True)
    for widget in page.findChildren(QWidget):
        if not (widget.isVisibleTo(page) and widget.focusPolicy() & Qt.FocusPolicy.TabFocus):
            continue
        if widget.focusProxy() is not None:  # a chart's viewport: the chart has the name
            continue
        assert widget.accessibleName(), widget
        assert min(widget.width(), widget.height()) >= 24, widget.accessibleName()


def test_that_export_writes_the_files_of_a_run(qtbot, page, desk, tmp_path, monkeypatch):
    said = []
    monkeypatch.setattr(QFileDialog, "getExistingDirectory", lambda *a, **k: str(tmp_path))
    monkeypatch.setattr(QMessageBox, "information", lambda *a, **k: said.append(a[2]))
    desk.view.set_hidden("No releases", True)
    desk.view.set_hidden("Trickle", True)
    for key in page.chooser.shown_keys()[2:]:
        tick(page, key, False)
    with qtbot.waitSignal(page.exporter.done, timeout=60_000):
        page.export_button.click()
    rows = (tmp_path / "projection.csv").read_text(encoding="utf-8").splitlines()
    plans = {row.partition(",")[0] for row in rows[1:]}
    assert plans == {"No releases", "Every fourth year"}
    assert (tmp_path / "target_checks.csv").is_file()
    assert (tmp_path / "record.json").is_file()
    names = {path.name for path in (tmp_path / "figures").glob("*.svg")}
    assert any("inbreeding" in name for name in names) is False
    assert any("gene_diversity_kept" in name for name in names)
    assert str(tmp_path) in said[0]


def test_that_a_left_dialog_writes_nothing(page, desk, monkeypatch):
    monkeypatch.setattr(QFileDialog, "getExistingDirectory", lambda *a, **k: "")
    page.export_button.click()
    assert not desk.jobs.is_running


def test_that_a_folder_that_cannot_be_written_is_said_in_a_sentence(
    qtbot, page, tmp_path, monkeypatch
):
    blocked = tmp_path / "file"
    blocked.write_text("not a folder")
    said = []
    monkeypatch.setattr(QFileDialog, "getExistingDirectory", lambda *a, **k: str(blocked))
    monkeypatch.setattr(QMessageBox, "warning", lambda *a, **k: said.append(a[2]))
    with qtbot.waitSignal(page.exporter.failed, timeout=60_000):
        page.export_button.click()
    assert len(said) == 1
    assert said[0].endswith(".")


def test_that_export_stops_when_cancelled(desk, tmp_path):
    control = JobControl()
    seen = []

    def step(done, total):
        seen.append(done / total)
        if done / total > 0.3:
            control.cancel()

    control._on_progress = step
    wanted = Wanted(marsh(), ("No releases", "Trickle"), ("inbreeding",), tmp_path)
    with pytest.raises(Cancelled):
        write(wanted, control)
    assert seen == sorted(seen)
    assert not (tmp_path / "record.json").exists()


def test_that_tab_goes_down_the_page(qtbot, page):
    page.measures_button.setFocus()
    wanted = [
        page.measures_button, page.export_button, page.averages.charts, page.odds.charts,
        *page.sections.stops(), page.values.edit, page.values.rows, page.values.copy_button,
        page.values.table, page.targets,
    ]  # fmt: skip
    seen = []
    for _ in wanted:
        seen.append(QApplication.focusWidget())
        qtbot.keyClick(seen[-1], Qt.Key.Key_Tab)
    assert seen == wanted


def test_that_a_chosen_panel_is_brought_into_view(qtbot, page):
    page.resize(1000, 400)
    qtbot.wait(20)
    charts = page.averages.charts
    charts.setFocus()
    for _ in range(4):
        qtbot.keyClick(charts, Qt.Key.Key_Down)
    assert charts.current == 4
    box = charts.mapFromScene(charts.panels[4].sceneBoundingRect()).boundingRect()
    seen = charts.mapTo(page.area.viewport(), box.center())
    assert 0 <= seen.y() <= page.area.viewport().height()
