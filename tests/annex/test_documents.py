from __future__ import annotations

import io
import re
import zipfile
from html.parser import HTMLParser
from itertools import pairwise

import pytest
from docx import Document
from docx.oxml.ns import qn

_VOID = {"meta", "img", "br", "wbr", "link", "hr", "input", "col"}


class _Page(HTMLParser):
    """Reads a page strictly: every element is closed in order."""

    def __init__(self) -> None:
        super().__init__()
        self.open: list[str] = []
        self.seen: list[tuple[str, dict[str, str | None]]] = []
        self.text: list[str] = []

    def handle_starttag(self, tag, attrs):
        self.seen.append((tag, dict(attrs)))
        if tag not in _VOID:
            self.open.append(tag)

    def handle_endtag(self, tag):
        assert self.open.pop() == tag

    def handle_data(self, data):
        self.text.append(data)


@pytest.fixture(scope="module")
def page(written):
    reader = _Page()
    reader.feed((written.folder / "annex.html").read_text("utf-8"))
    reader.close()
    return reader


@pytest.fixture(scope="module")
def document(written):
    return Document(str(written.folder / "annex.docx"))


def _words(document) -> str:
    return "\n".join(node.text or "" for node in document.element.iter(qn("w:t")))


CHAPTERS = [
    "Decision asked",
    "Standing caution",
    "Plans",
    "Plans compared",
    "Target checks",
    "Inputs and their origins",
    "Methods",
    "Assumptions",
    "Limits",
    "Remarks and answers",
    "Cautions",
    "Run record",
]


def test_that_every_element_of_the_page_is_closed(page):
    assert page.open == []


def test_that_the_page_points_nowhere_outside_itself(page, written):
    for tag, held in page.seen:
        for name in ("src", "href", "action", "srcset", "data"):
            link = held.get(name)
            assert link is None or link.startswith(("data:", "#")), (tag, link)
    assert "http:" not in (text := (written.folder / "annex.html").read_text("utf-8"))
    assert "https:" not in text
    assert "@import" not in text
    assert "<script" not in text


def test_that_the_page_names_its_language_and_title(page):
    html = next(held for tag, held in page.seen if tag == "html")
    assert html["lang"] == "en-GB"
    assert "title" in [tag for tag, _ in page.seen]


def test_that_headings_of_the_page_never_skip_a_level(page):
    levels = [int(tag[1]) for tag, _ in page.seen if re.fullmatch(r"h[1-6]", tag)]
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert all(after <= before + 1 for before, after in pairwise(levels))


def test_that_every_header_cell_has_a_scope_and_every_figure_an_alternative(page):
    assert all(held.get("scope") in ("col", "row") for tag, held in page.seen if tag == "th")
    pictures = [held for tag, held in page.seen if tag == "img"]
    assert pictures
    assert all(len(held["alt"] or "") > 40 for held in pictures)


def test_that_the_page_has_a_style_for_print_and_for_dark(written):
    text = (written.folder / "annex.html").read_text("utf-8")
    assert "@media print" in text
    assert "prefers-color-scheme: dark" in text


def test_that_the_document_has_the_chapters_as_true_headings_in_order(document):
    found = [p.text for p in document.paragraphs if p.style.name == "Heading 1"]
    assert found == CHAPTERS


def test_that_the_head_of_every_table_repeats_and_no_row_is_split(document):
    tables = list(document.element.body.iter(qn("w:tbl")))
    assert len(tables) == len(document.tables) > 20
    for table in tables:
        rows = list(table.iter(qn("w:tr")))
        assert rows[0].find(f"{qn('w:trPr')}/{qn('w:tblHeader')}") is not None
        assert all(row.find(f"{qn('w:trPr')}/{qn('w:cantSplit')}") is not None for row in rows)
        assert len({len(list(row.iter(qn("w:tc")))) for row in rows}) == 1


def test_that_every_picture_of_the_document_has_an_alternative_and_a_caption(document, written):
    pictures = list(document.element.body.iter(qn("wp:docPr")))
    drawn = list((written.folder / "figures").glob("*_170mm.png"))
    assert len(pictures) == len(drawn)
    assert all(len(one.get("descr")) > 40 for one in pictures)
    captions = [p.text for p in document.paragraphs if p.text.startswith("Figure ")]
    assert len(captions) == len(pictures)


def test_that_no_table_or_picture_is_wider_than_the_text(document):
    for section in document.sections:
        assert section.page_width - section.left_margin - section.right_margin > 0
    upright = 170 * 1440 / 25.4
    wide = 257 * 1440 / 25.4
    for table in document.element.body.iter(qn("w:tbl")):
        width = sum(int(col.get(qn("w:w"))) for col in table.iter(qn("w:gridCol")))
        columns = len(list(table.iter(qn("w:gridCol"))))
        assert width <= (wide if columns > 8 else upright) + columns  # a twip each for rounding


def test_that_the_document_has_title_and_language_and_names_nobody(document):
    held = document.core_properties
    assert held.title == "Tarn vole of the Upper Sill"
    assert held.language == "en-GB"
    assert held.author == "Rescue Planner"
    assert held.last_modified_by == ""
    assert held.created.year == 2027


def test_that_the_document_opens_as_a_package_of_well_formed_parts(written):
    from lxml import etree

    with zipfile.ZipFile(io.BytesIO((written.folder / "annex.docx").read_bytes())) as packed:
        assert packed.testzip() is None
        for name in packed.namelist():
            if name.endswith((".xml", ".rels")):
                etree.fromstring(packed.read(name))


# Written out here, so that no edit of the program changes their wording unnoticed.
CAUTIONS = (
    "These results describe what would follow if the stated assumptions held. The decision rests "
    "with the responsible authorities.",
    "Moving, holding or releasing animals may need several approvals. Ask the competent authority "
    "before any step.",
    "The legal status of translocated animals and of their offspring must be settled with counsel "
    "and the listing authority.",
    "Disease risk is not assessed by this projection. A disease risk analysis led by qualified "
    "veterinarians is needed and may rule out a plan.",
    "Expected losses shown here are estimates. Handling, transport and release need an "
    "animal-welfare review and approved protocols.",
    "Cross-border movement may need findings and permits from each country’s authorities.",
    "Consent of the indigenous peoples concerned is sought early, freely and with full "
    "information. No plan here presumes it.",
    "Genetic data and knowledge shared by communities are used only under their conditions.",
    "Removal limits are set by those responsible for the donor population.",
    "Compare plans with one another. Do not read a single line as a forecast of what will happen.",
    "Not included: ",
)


@pytest.mark.parametrize("words", CAUTIONS)
def test_that_every_caution_stands_word_for_word_in_both(words, document, page):
    assert words in _words(document)
    assert words in "".join(page.text)


@pytest.mark.parametrize("chapter", CHAPTERS)
def test_that_the_page_has_every_chapter(chapter, page):
    assert chapter in page.text


def test_that_both_say_the_same_in_the_same_tables(document, page):
    rows = [tuple(cell.text for cell in row.cells) for row in document.tables[4].rows]
    assert rows[0][0] == "Measure (unit)"
    text = "".join(page.text)
    for row in rows:
        assert all(cell in text for cell in row)


def test_that_the_run_record_allows_to_compute_it_again(document, comparison):
    words = _words(document)
    assert comparison.case_hash in words
    assert "20270101" in words
    assert f"Rescue Planner {comparison.program_version}" in words


def test_that_what_is_not_included_is_named_from_the_settings(document):
    words = _words(document)
    assert "Not included: chance events in single animals, weather and die-offs;" in words
    assert "Target 4 (Persists by 2087) was not checked" in words
    assert "Rule not applied: Zoo males: kin check." in words
