"""What the charts draw is the comparison, and every way to read them gives its numbers."""

import itertools

import numpy as np
import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QColor, QGuiApplication

from rescue_planner.desk.charts.look import Look, contrast
from rescue_planner.desk.charts.shown import PanelSpec, specs
from rescue_planner.projection import reading
from rescue_planner.projection.compare import compare

LOCUS = "allele_frequency:dark bill"


def panel_of(charts, key):
    return next(p for p in charts.panels if p.picture.key == key)


def test_that_every_line_holds_the_values_of_the_comparison(draw, comparison):
    charts = draw()
    for panel in charts.panels:
        assert set(panel.plans) == set(comparison.plans)
        for plan, items in panel.plans.items():
            wanted = reading.curve(comparison, plan, panel.picture.key)
            years, values = items.curve.getData()
            np.testing.assert_array_equal(years, wanted.years)
            np.testing.assert_array_equal(values, wanted.values)


def test_that_bands_are_the_quantiles_of_the_exact_depth(draw, comparison):
    charts = draw(specs=(PanelSpec(LOCUS, "Trickle"),))
    years, values = charts.panels[0].fan.outer.getData()
    count = comparison.years.size
    q05 = comparison.get("Trickle", "exact", LOCUS, "q05").values
    q95 = comparison.get("Trickle", "exact", LOCUS, "q95").values
    np.testing.assert_array_equal(years[:count], comparison.years)
    np.testing.assert_array_equal(values[:count], q05)
    np.testing.assert_array_equal(values[count:], q95[::-1])


def test_that_bands_go_with_their_hidden_plan(draw):
    charts = draw(specs=(PanelSpec(LOCUS, "Trickle"),), plans=("No releases",))
    assert charts.panels[0].picture.fan is None
    assert not charts.panels[0].fan.outer.isVisible()


def test_that_a_hidden_plan_is_on_no_panel(draw):
    charts = draw()
    draw(plans=("No releases", "Every fourth year"))
    for panel in charts.panels:
        assert set(panel.plans) == {"No releases", "Every fourth year"}
        assert {line.letter for line in panel.picture.lines} == {"A", "C"}


def test_that_only_the_changed_plan_is_drawn_again(draw, marsh, case):
    charts = draw()
    before = {(i, p): x.times_drawn for i, pan in enumerate(charts.panels)
              for p, x in pan.plans.items()}  # fmt: skip
    plans = [plan.model_dump(mode="json", exclude_unset=True) for plan in case.plans]
    plans[1]["steady"][0]["migrants_per_generation"] = 2.0
    changed = marsh(plans=plans)
    draw(case=changed, comparison=compare(changed))
    for i, panel in enumerate(charts.panels):
        for plan, items in panel.plans.items():
            more = items.times_drawn - before[i, plan]
            cost_only = panel.picture.key == "cost"
            assert more == (1 if plan == "Trickle" and not cost_only else 0), (i, plan)


@pytest.mark.parametrize("axis", ["years", "generations"])
def test_that_the_axis_changes_labels_only(draw, axis):
    one = draw()
    before = [
        (p.view.viewRange(), [x.curve.getData() for x in p.plans.values()]) for p in one.panels
    ]
    charts = draw(look=Look(axis=axis))
    for panel, (view, data) in zip(charts.panels, before, strict=True):
        assert panel.view.viewRange() == view
        for items, (years, values) in zip(panel.plans.values(), data, strict=True):
            np.testing.assert_array_equal(items.curve.getData()[0], years)
            np.testing.assert_array_equal(items.curve.getData()[1], values)
    lowest = charts.panels[-1].time
    first, second = lowest.labels()
    years = ("2027", "2047", "2067", "2087")
    assert (first if axis == "years" else second) == years
    assert (second if axis == "years" else first) == ("0", "5", "10", "15")


def test_that_both_scales_stand_under_the_lowest_panel_of_each_column(draw):
    charts = draw()
    columns = charts.grid.columns
    assert columns == 3
    assert [panel.time.rows for panel in charts.panels] == [2, 2, 2, 2, 2]
    charts.resize(300, charts.height())
    assert charts.grid.columns == 1
    assert [panel.time.rows for panel in charts.panels] == [1, 1, 1, 1, 2]


def test_that_keys_move_one_read_out_through_all_panels(qtbot, draw, comparison):
    charts = draw()
    charts.setFocus()
    qtbot.keyClick(charts, Qt.Key.Key_Home)
    for _ in range(3):
        qtbot.keyClick(charts, Qt.Key.Key_Right)
    qtbot.keyClick(charts, Qt.Key.Key_Left)
    assert charts.read_at == 2
    for panel, texts in zip(charts.panels, charts.read_out_texts(), strict=True):
        assert panel.overlay.read_out == comparison.years[2]
        assert panel.heading.when == "2035"
        for plan, text in zip(comparison.plans, texts, strict=True):
            letter, value = text.split(" ", 1)
            assert letter == reading.letter(comparison, plan)
            shown = reading.curve(comparison, plan, panel.picture.key).values[2]
            assert float(reading.plain(value)) == pytest.approx(
                shown, abs=0.5 * 10.0**-panel.picture.decimals + 1e-12
            )
    qtbot.keyClick(charts, Qt.Key.Key_End)
    assert charts.read_at == comparison.years.size - 1
    qtbot.keyClick(charts, Qt.Key.Key_Escape)
    assert all(panel.overlay.read_out is None for panel in charts.panels)


def test_that_the_mouse_reads_the_nearest_generation(qtbot, draw, comparison):
    charts = draw()
    panel = charts.panels[1]
    box = panel.view.sceneBoundingRect()
    for t in (1, 7, 14):
        x = box.left() + panel.overlay.x_of(float(comparison.years[t])) + 2
        at = charts.mapFromScene(x, box.center().y())
        qtbot.mouseMove(charts.viewport(), QPoint(at.x(), at.y()))
        qtbot.waitUntil(lambda t=t: charts.read_at == t)


def test_that_a_chosen_panel_is_told_and_copied(qtbot, draw, comparison):
    charts = draw()
    charts.setFocus()
    with qtbot.waitSignal(charts.panel_chosen) as told:
        qtbot.keyClick(charts, Qt.Key.Key_Down)
    assert told.args == ["gene_diversity_kept"]
    qtbot.keyClick(charts, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    lines = QGuiApplication.clipboard().text().rstrip("\n").split("\n")
    assert lines[0].startswith("Gene diversity kept")
    assert lines[1].split("\t") == [
        "Year", "Generation", "A No releases", "B Trickle", "C Every fourth year",
    ]  # fmt: skip
    assert len(lines) == 2 + comparison.years.size
    kept = reading.curve(comparison, "Trickle", "gene_diversity_kept").values
    assert float(lines[-1].split("\t")[3]) == pytest.approx(kept[-1], abs=0.05)


def test_that_charts_are_told_in_words(qtbot, draw):
    charts = draw()
    qtbot.waitUntil(lambda: bool(charts.accessibleDescription()))
    words = charts.accessibleDescription()
    assert charts.accessibleName() == "Charts"
    for panel in charts.panels:
        assert panel.picture.description in words
    assert "B Trickle: 0.382 to" in words


@pytest.mark.parametrize("width", [300, 620, 900, 1300])
@pytest.mark.parametrize("scale", [1.0, 2.0])
def test_that_no_letters_overlap_and_all_are_in_the_panel(draw, qtbot, width, scale):
    charts = draw(look=Look(text_scale=scale))
    charts.resize(width, charts.height())
    charts.scene().update()
    qtbot.wait(1)
    for panel in charts.panels:
        places = panel.letters.places()
        height = panel.letters.size().height()
        tall = panel.letters.look.line_height * 0.92
        for (_, _, one, a), (_, _, other, b) in itertools.combinations(places, 2):
            assert a != b or abs(one - other) >= tall - 1e-6
        for _, _, at, column in places:
            assert tall / 2 - 1e-6 <= at <= height - tall / 2 + 1e-6
            assert column < panel.letters.columns


def test_that_panels_are_where_their_text_fits(draw, qtbot):
    for width in (300, 900):
        charts = draw(specs=specs((*KEYS_ALL,), ("No releases", "Trickle", "Every fourth year")))
        charts.resize(width, charts.height())
        qtbot.wait(1)
        for panel in charts.panels:
            box = panel.sceneBoundingRect()
            assert box.right() <= charts.width() + 0.5
            assert box.bottom() <= charts.height() + 0.5
            assert panel.heading.rows_needed(panel.heading.size().width()) <= panel.heading.lines
            assert panel.view.height() > 80


KEYS_ALL = ("inbreeding", "donor_ancestry", "adults", LOCUS, "allele_kept:dark bill")


def test_that_twelve_plans_have_twelve_letters(draw, marsh):
    names = [{"name": f"Plan {i}"} for i in range(11)]
    twelve = marsh(plans=[{"name": "No releases"}, *names], targets=[])
    found = compare(twelve)
    charts = draw(case=twelve, comparison=found, plans=found.plans)
    adults = panel_of(charts, "adults")
    places = adults.letters.places()
    assert len(set(places)) == 12
    assert max(column for *_, column in places) == adults.letters.columns - 1 > 0
    assert {line.letter for line in adults.picture.lines} == set("ABCDEFGHIJKL")


def test_that_a_sentence_stands_where_there_are_no_charts(draw):
    charts = draw()
    charts.show_message("No case is open.")
    assert charts.panels == []
    assert charts.message == charts.accessibleDescription() == "No case is open."
    assert charts.shown is None
    draw()
    assert charts.message == ""
    assert len(charts.panels) == 5


def test_that_the_message_is_seen(draw, qtbot):
    charts = draw()
    charts.show_message("No case is open.")
    image = charts.grab().toImage()
    ground = image.pixelColor(image.width() - 2, image.height() - 2)
    inked = sum(image.pixelColor(x, y) != ground for x in range(0, 160, 1) for y in range(8, 30))
    assert inked > 100


def test_that_redraws_within_a_frame_are_gathered(qtbot, charts, draw, case, comparison):
    draw()
    drawn = []
    charts.drawn.connect(lambda: drawn.append(1))
    shown = charts.shown
    for _ in range(5):
        charts.show_all(shown)
    qtbot.waitUntil(lambda: bool(drawn))
    qtbot.wait(40)
    assert len(drawn) == 1


def test_that_the_colour_scheme_reaches_every_line(draw):
    charts = draw()
    light = charts.panels[0].plans["Trickle"].curve.opts["pen"].color().name()
    charts = draw(look=Look(scheme="dark"))
    dark = charts.panels[0].plans["Trickle"].curve.opts["pen"].color().name()
    assert (light, dark) == ("#0072b2", "#6db6e8")


def test_that_a_strong_plan_has_the_widest_line(draw):
    charts = draw(strong="Trickle")
    widths = {p: x.curve.opts["pen"].widthF() for p, x in charts.panels[0].plans.items()}
    assert widths["Trickle"] == max(widths.values()) > widths["No releases"]


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_that_letters_are_readable_and_lines_are_seen(scheme):
    look = Look(scheme=scheme)
    paper = QColor(look.colours.paper)
    for place in range(12):
        assert contrast(look.letter_colour(place), paper) >= 4.5
        assert contrast(look.plan_colour(place), paper) >= 3.0


def test_that_contrast_is_that_of_the_guideline():
    # W3C, WCAG 2.2: black on white is 21:1; #767676 on white is the usual 4.54:1 example
    white = QColor("#ffffff")
    assert contrast(QColor("#000000"), white) == pytest.approx(21.0)
    assert contrast(QColor("#767676"), white) == pytest.approx(4.54, abs=0.005)
