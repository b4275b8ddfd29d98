"""Parts of a word processor's document that are written as its own XML.

A table of some hundred rows takes seconds cell by cell through the library; as XML, none.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any
from xml.sax.saxutils import escape, quoteattr

from rescue_planner.annex.blocks import Table
from rescue_planner.annex.wording import clean

_TWIPS_PER_MM = 1440 / 25.4
_LINE = 'w:val="single" w:sz="4" w:space="0" w:color="BFBFBF"'
_RULE = 'w:val="single" w:sz="8" w:space="0" w:color="1A1A1A"'
# A table of at most so many rows is not split over two pages.
_KEPT_WHOLE = 14
_NAMES = 'xmlns:w="http://schemas.openxmlformats.org/wordprocessingml/2006/main"'


def table_xml(table: Table, shares: Sequence[float], width_mm: float) -> Any:  # noqa: ANN401
    """Return a table as an element: its head repeats on every page, no row is split.

    Parameters
    ----------
    shares : share of the width for each column
    width_mm : width of the table in millimetres
    """
    from docx.oxml import parse_xml

    widths = [round(share * width_mm * _TWIPS_PER_MM) for share in shares]
    size = 15 if len(table.head) > 5 else 17  # in half points
    grid = "".join(f'<w:gridCol w:w="{width}"/>' for width in widths)
    rows = "".join(_rows(table, widths, size))
    return parse_xml(
        f"<w:tbl {_NAMES}><w:tblPr>"
        f'<w:tblW w:w="{sum(widths)}" w:type="dxa"/>'
        f"<w:tblBorders><w:top {_RULE}/><w:bottom {_RULE}/><w:insideH {_LINE}/></w:tblBorders>"
        '<w:tblLayout w:type="fixed"/>'
        '<w:tblCellMar><w:left w:w="55" w:type="dxa"/><w:right w:w="55" w:type="dxa"/>'
        '</w:tblCellMar><w:tblLook w:val="0020" w:firstRow="1" w:firstColumn="1"/>'
        f"<w:tblCaption w:val={quoteattr(clean(table.caption))}/></w:tblPr>"
        f"<w:tblGrid>{grid}</w:tblGrid>{rows}</w:tbl>"
    )


def _rows(table: Table, widths: Sequence[int], size: int) -> Iterator[str]:
    head = "".join(
        _cell(text, width, size, bold=True, right=index in table.numbers, kept=True)
        for index, (text, width) in enumerate(zip(table.head, widths, strict=True))
    )
    yield f"<w:tr><w:trPr><w:cantSplit/><w:tblHeader/></w:trPr>{head}</w:tr>"
    for place, row in enumerate(table.rows, start=1):
        kept = len(table.rows) <= _KEPT_WHOLE and place < len(table.rows)
        cells = "".join(
            _cell(text, width, size, right=index in table.numbers, kept=kept)
            for index, (text, width) in enumerate(zip(row, widths, strict=True))
        )
        yield f"<w:tr><w:trPr><w:cantSplit/></w:trPr>{cells}</w:tr>"


def _cell(text: str, width: int, size: int, *, right: bool, kept: bool, bold: bool = False) -> str:
    """Return one cell; `kept` holds its row on the page of the next."""
    side = '<w:jc w:val="right"/>' if right else ""
    together = "<w:keepNext/>" if kept else ""
    heavy = "<w:b/>" if bold else ""
    return (
        f'<w:tc><w:tcPr><w:tcW w:w="{width}" w:type="dxa"/></w:tcPr>'
        f'<w:p><w:pPr>{together}<w:spacing w:before="20" w:after="20"/>{side}</w:pPr>'
        f'<w:r><w:rPr>{heavy}<w:sz w:val="{size}"/></w:rPr>'
        f'<w:t xml:space="preserve">{escape(clean(text))}</w:t></w:r></w:p></w:tc>'
    )


def page_number(line: Any, points: float) -> None:  # noqa: ANN401 - a paragraph of the library
    """Append the field that shows the page's number to a paragraph."""
    from docx.oxml import parse_xml

    field = (
        f'<w:fldSimple {_NAMES} w:instr="PAGE"><w:r><w:rPr>'
        f'<w:sz w:val="{round(2 * points)}"/></w:rPr><w:t>1</w:t></w:r></w:fldSimple>'
    )
    line._p.append(parse_xml(field))
