"""The annex as a word processor's document, with true headings, table heads and alternatives."""

from __future__ import annotations

import io
import zipfile
from collections.abc import Iterable
from datetime import datetime
from typing import TYPE_CHECKING, Any

from rescue_planner.annex import cautions
from rescue_planner.annex.blocks import Block, Bullets, Illustration, Report, Section, Table, Text
from rescue_planner.annex.columns import column_shares
from rescue_planner.annex.document_xml import page_number, table_xml
from rescue_planner.annex.wording import clean

if TYPE_CHECKING:
    from docx.document import Document

LANGUAGE = "en-GB"
TEXT_MM = 170
WIDE_TEXT_MM = 257
_MARGIN_MM = 20
_PAPER_MM = (210, 297)
_MOST_UPRIGHT_COLUMNS = 8
_INK = "1A1A1A"


def docx_bytes(report: Report, began: datetime) -> bytes:
    """Return the annex as a DOCX file.

    Parameters
    ----------
    began : datetime
        When the run began (UTC); the document's date.
    """
    from docx import Document as new_document

    document = new_document()
    _page(document, wide=False, first=True)
    _styles(document)
    _properties(document, report, began)
    _Writer(document, report).write()
    out = io.BytesIO()
    document.save(out)
    return _undated(out)


def _undated(packed: io.BytesIO) -> bytes:
    """Return a packed document with one fixed time on its parts: the same bytes every time."""
    out = io.BytesIO()
    with zipfile.ZipFile(packed) as held, zipfile.ZipFile(out, "w") as kept:
        for part in held.infolist():
            plain = zipfile.ZipInfo(part.filename, (1980, 1, 1, 0, 0, 0))
            plain.compress_type = (
                zipfile.ZIP_STORED if part.filename.endswith(".png") else zipfile.ZIP_DEFLATED
            )
            kept.writestr(plain, held.read(part.filename))
    return out.getvalue()


def _properties(document: Document, report: Report, began: datetime) -> None:
    """Set title and language; no person, no machine."""
    held = document.core_properties
    held.title = clean(report.title)[:250]
    held.subject = clean(report.subtitle)[:250]
    held.language = LANGUAGE
    held.author = "Rescue Planner"
    held.last_modified_by = ""
    held.comments = cautions.AUTHORITY
    held.keywords = ""
    held.revision = 1
    moment = began.replace(tzinfo=None, microsecond=0)
    held.created = held.modified = moment


def _page(document: Document, *, wide: bool, first: bool = False) -> None:
    """Begin a page of A4, upright or wide."""
    from docx.enum.section import WD_ORIENT, WD_SECTION
    from docx.shared import Mm

    section = document.sections[0] if first else document.add_section(WD_SECTION.NEW_PAGE)
    across, down = reversed(_PAPER_MM) if wide else _PAPER_MM
    section.orientation = WD_ORIENT.LANDSCAPE if wide else WD_ORIENT.PORTRAIT
    section.page_width, section.page_height = Mm(across), Mm(down)
    section.left_margin = section.right_margin = Mm(_MARGIN_MM)
    section.top_margin = section.bottom_margin = Mm(_MARGIN_MM)


def _styles(document: Document) -> None:
    from docx.oxml.ns import qn
    from docx.shared import Pt, RGBColor

    sizes = {
        "Normal": (10, 6),
        "Title": (20, 4),
        "Subtitle": (12, 14),
        "Heading 1": (15, 6),
        "Heading 2": (12, 4),
        "Caption": (8.5, 6),
        "List Bullet": (10, 3),
    }
    for name, (size, after) in sizes.items():
        style: Any = document.styles[name]
        style.font.name = "Calibri"
        style.font.size = Pt(size)
        style.font.color.rgb = RGBColor.from_string(_INK)
        style.paragraph_format.space_after = Pt(after)
        fonts = style.element.get_or_add_rPr().get_or_add_rFonts()
        for part in ("asciiTheme", "hAnsiTheme", "eastAsiaTheme", "cstheme"):
            fonts.attrib.pop(qn(f"w:{part}"), None)
    caption: Any = document.styles["Caption"]
    caption.font.bold, caption.font.italic = False, False
    for name in ("Title", "Subtitle"):
        plain: Any = document.styles[name]
        plain.font.italic = False
        for part in [*plain.element.iter(qn("w:pBdr")), *plain.element.iter(qn("w:spacing"))]:
            if part.tag == qn("w:pBdr") or part.getparent().tag == qn("w:rPr"):
                part.getparent().remove(part)
    for lang in document.styles.element.iter(qn("w:lang")):
        lang.set(qn("w:val"), LANGUAGE)


class _Writer:
    """Writes one report into one document, counting its tables."""

    def __init__(self, document: Document, report: Report) -> None:
        self.document = document
        self.report = report
        self.tables = 0
        self.wide = False

    def write(self) -> None:
        self._footer()
        self.document.add_paragraph(clean(self.report.title), style="Title")
        self.document.add_paragraph(clean(self.report.subtitle), style="Subtitle")
        if self.report.authority:
            self.document.add_paragraph(clean(self.report.authority))
        for section in self.report.sections:
            self._turn(section)
            self.document.add_heading(clean(section.title), section.level)
            for block in section.blocks:
                self._block(block)

    def _turn(self, section: Section) -> None:
        """Turn the page where tables are too wide for an upright one, and back again."""
        tables = [block for block in section.blocks if isinstance(block, Table)]
        wide = any(len(table.head) > _MOST_UPRIGHT_COLUMNS for table in tables)
        if wide != self.wide:
            self.wide = wide
            _page(self.document, wide=wide)

    def _footer(self) -> None:
        from docx.shared import Pt

        line = self.document.sections[0].footer.paragraphs[0]
        words = line.add_run(f"{clean(self.report.title)}. {cautions.AUTHORITY} Page ")
        words.font.size = Pt(7.5)
        page_number(line, 7.5)

    def _block(self, block: Block) -> None:
        if isinstance(block, Table):
            self._table(block)
        elif isinstance(block, Text):
            self._text(block)
        elif isinstance(block, Bullets):
            self._bullets(block.items)
        else:
            self._figure(block)

    def _text(self, text: Text) -> None:
        from docx.shared import Mm, Pt

        line = self.document.add_paragraph()
        words = line.add_run(clean(text.words))
        if text.kind == "caution":
            words.bold = True
            line.paragraph_format.left_indent = Mm(4)
        elif text.kind == "note":
            words.font.size = Pt(8.5)

    def _bullets(self, items: Iterable[str]) -> None:
        for item in items:
            self.document.add_paragraph(clean(item), style="List Bullet")

    def _table(self, table: Table) -> None:
        self.tables += 1
        words = f"Table {self.tables}. {clean(table.caption)}"
        line = self.document.add_paragraph(words, style="Caption")
        line.paragraph_format.keep_with_next = True
        width = WIDE_TEXT_MM if self.wide else TEXT_MM
        line._p.addnext(table_xml(table, column_shares(table), width))
        self.document.add_paragraph().paragraph_format.space_after = 0

    def _figure(self, figure: Illustration) -> None:
        from docx.shared import Mm

        line = self.document.add_paragraph()
        line.paragraph_format.keep_with_next = True
        shape = line.add_run().add_picture(io.BytesIO(figure.png), width=Mm(TEXT_MM))
        about = shape._inline.docPr
        about.set("descr", clean(figure.picture.caption.alternative))
        about.set("title", clean(figure.picture.title))
        words = f"Figure {figure.number}. {clean(figure.picture.caption.text)}"
        self.document.add_paragraph(words, style="Caption")
