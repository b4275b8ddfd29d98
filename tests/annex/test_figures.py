from __future__ import annotations

import re
from itertools import combinations, pairwise
from xml.etree import ElementTree

import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.lines import Line2D
from PIL import Image
from pypdf import PdfReader

from rescue_planner.annex.figures import draw_measure
from rescue_planner.annex.overview import draw_overview, overview_measures
from rescue_planner.annex.panel import MARKERS, dash
from rescue_planner.annex.sheet import MM_PER_INCH, printed
from rescue_planner.case.document import Case
from rescue_planner.projection.compare import compare
from rescue_planner.projection.marks import mark

STEMS = ("comparison", "gene_diversity_kept", "allele_frequency_winter-coat", "cost")
HALF_MM = 0.5  # what journals and the design allow


def _svg(written, stem: str, width: int) -> ElementTree.Element:
    text = (written.folder / "figures" / f"{stem}_{width}mm.svg").read_text("utf-8")
    return ElementTree.fromstring(text)


@pytest.mark.parametrize("width", [85, 170])
@pytest.mark.parametrize("stem", STEMS)
def test_that_every_format_is_as_wide_as_its_name_says(written, stem, width):
    folder = written.folder / "figures"
    in_points = float(_svg(written, stem, width).get("width").removesuffix("pt"))
    assert in_points / 72 * MM_PER_INCH == pytest.approx(width, abs=HALF_MM)
    page = PdfReader(folder / f"{stem}_{width}mm.pdf").pages[0].mediabox
    assert float(page.width) / 72 * MM_PER_INCH == pytest.approx(width, abs=HALF_MM)
    with Image.open(folder / f"{stem}_{width}mm.png") as picture:
        dots = picture.info["dpi"][0]
        assert dots == pytest.approx(300, abs=0.01)
        assert picture.width / dots * MM_PER_INCH == pytest.approx(width, abs=HALF_MM)


@pytest.mark.parametrize("width", [85, 170])
def test_that_no_figure_is_higher_than_a_page(written, width):
    for path in (written.folder / "figures").glob(f"*_{width}mm.svg"):
        height = float(ElementTree.fromstring(path.read_text("utf-8")).get("height")[:-2])
        assert height / 72 * MM_PER_INCH <= 257  # A4 less two margins of 20 mm


@pytest.mark.parametrize("width", [85, 170])
@pytest.mark.parametrize("stem", STEMS)
def test_that_every_font_of_a_pdf_is_embedded(written, stem, width):
    page = PdfReader(written.folder / "figures" / f"{stem}_{width}mm.pdf").pages[0]
    fonts = [font.get_object() for font in page["/Resources"]["/Font"].values()]
    assert fonts
    for font in fonts:
        below = font["/DescendantFonts"][0].get_object() if "/DescendantFonts" in font else font
        assert "/FontFile2" in below["/FontDescriptor"].get_object()
        assert "DejaVu" in str(font["/BaseFont"])


def test_that_text_in_a_pdf_can_be_read_and_searched(written):
    page = PdfReader(written.folder / "figures" / "gene_diversity_kept_170mm.pdf").pages[0]
    assert "Refill tarns" in page.extract_text()


@pytest.mark.parametrize("width", [85, 170])
def test_that_no_text_is_under_seven_points_and_no_line_under_half_a_point(case, comparison, width):
    with printed():
        for measure in ("gene_diversity_kept", "allele_frequency:winter coat", "cost"):
            figure = draw_measure(case, comparison, measure, width)
            assert min(text.get_fontsize() for text in figure.texts) >= 7
            assert min(line.get_linewidth() for line in figure.findobj(Line2D)) >= 0.5
            edges = [line.get_markeredgewidth() for line in figure.findobj(Line2D)]
            assert min(edges) >= 0.5


def test_that_the_overview_keeps_to_the_same_limits(case, comparison):
    shown = overview_measures(comparison, comparison.measures)
    with printed():
        for width in (85, 170):
            figure = draw_overview(case, comparison, shown, width)
            assert min(text.get_fontsize() for text in figure.texts) >= 7
            assert min(line.get_linewidth() for line in figure.findobj(Line2D)) >= 0.5


def _assert_inside(figure) -> None:
    figure.set_dpi(300)  # as the PNG is drawn; hinting at fewer dots widens letters
    canvas = FigureCanvasAgg(figure)
    canvas.draw()
    wide, high = canvas.get_width_height()
    for text in figure.texts:
        box = text.get_window_extent(canvas.get_renderer())
        assert box.x0 >= 0, text
        assert box.y0 >= 0, text
        assert box.x1 <= wide, text
        assert box.y1 <= high, text


@pytest.mark.parametrize("width", [85, 170])
def test_that_no_word_is_cut_off_by_the_edge_of_the_sheet(case, comparison, width):
    with printed():
        for measure in comparison.measures:
            _assert_inside(draw_measure(case, comparison, measure, width))
        shown = overview_measures(comparison, comparison.measures)
        _assert_inside(draw_overview(case, comparison, shown, width))


@pytest.mark.parametrize("width", [85, 170])
def test_that_twelve_plans_with_long_names_still_have_labels_apart(sample, width):
    raw = sample.raw()
    for number in range(7):
        plan = {**raw["plans"][2], "name": f"A plan with a rather long name, number {number}"}
        raw["plans"].append(plan)
    case = Case.model_validate(raw)
    comparison = compare(case)
    with printed():
        figure = draw_measure(case, comparison, "gene_diversity_kept", width)
        _assert_inside(figure)
        canvas = FigureCanvasAgg(figure)
        names = [text for text in figure.texts if re.match(r"[A-L] ", text.get_text())]
        assert len(names) == 12
        boxes = sorted(
            (text.get_window_extent(canvas.get_renderer()) for text in names), key=lambda b: b.y0
        )
        # boxes hold the room below the baseline too, so that they may touch by a hair
        assert all(low.y1 <= high.y0 + 1.0 for low, high in pairwise(boxes))


def test_that_both_time_axes_are_labelled(written):
    words = "".join(_svg(written, "inbreeding", 85).itertext())
    assert "Year" in words
    assert "Generations (4 years each)" in words


def test_that_a_value_axis_names_its_unit(written):
    words = "".join(_svg(written, "gene_diversity_kept", 170).itertext())
    assert "Gene diversity kept (% of today’s)" in words


def test_that_a_target_is_marked_with_its_owner(written):
    words = "".join(_svg(written, "gene_diversity_kept", 170).itertext())
    assert "Target 1: at least 90 %, Species board" in words


def test_that_a_population_that_is_gone_is_said_to_be(written):
    words = " ".join(_svg(written, "gene_diversity_kept", 170).itertext())
    assert re.search(r"A No releases\s+gone by 2075", words)


@pytest.mark.parametrize(("first", "second"), list(combinations(range(12), 2)))
def test_that_any_two_plans_differ_without_colour(first, second):
    one, other = mark(first), mark(second)
    alike = dash(one) == dash(other) and MARKERS[one.marker] == MARKERS[other.marker]
    assert not alike


def test_that_an_svg_carries_its_font_its_title_and_a_description(written):
    text = (written.folder / "figures" / "inbreeding_85mm.svg").read_text("utf-8")
    assert "@font-face" in text
    root = ElementTree.fromstring(text)
    named = {child.tag.rpartition("}")[2]: child.text for child in root}
    assert named["title"].startswith("Inbreeding F")
    assert "Line chart of Inbreeding F" in named["desc"]
    assert "<text" in text


def test_that_no_picture_holds_a_date(written):
    folder = written.folder / "figures"
    assert "/CreationDate" not in PdfReader(folder / "cost_85mm.pdf").metadata
    assert "<dc:date>" not in (folder / "cost_85mm.svg").read_text("utf-8")


def test_that_captions_stand_alone(written, comparison):
    text = (written.folder / "figures" / "captions.md").read_text("utf-8")
    part = text.split("## gene_diversity_kept\n")[1].split("\n## ")[0]
    for words in (
        "Gene diversity kept (% of today’s)",
        "Upper Sill",
        "2027–2087",
        "15 generations of 4 years",
        "average course",
        "Ne is held at 16",
        "Tarn vole of the Upper Sill",
        f"Rescue Planner {comparison.program_version}",
        comparison.case_hash[:12],
        "Alternative text:",
    ):
        assert words in part
