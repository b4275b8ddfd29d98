"""The annex as one HTML page: nothing outside it, readable in light and dark, ready for print."""

from __future__ import annotations

import base64
from collections.abc import Iterator
from html import escape

from rescue_planner.annex.blocks import Block, Bullets, Illustration, Report, Section, Table, Text
from rescue_planner.annex.wording import clean

LANGUAGE = "en-GB"

_STYLE = """
:root { color-scheme: light dark; --paper: #fdfcfa; --ink: #1a1a1a; --quiet: #555; --hair: #d0ccc4;
  --rule: #1a1a1a; --accent: #00557f; }
@media (prefers-color-scheme: dark) { :root { --paper: #1d2125; --ink: #ecebe7; --quiet: #b5b3ad;
  --hair: #454b52; --rule: #ecebe7; --accent: #8cc8ee; } }
* { box-sizing: border-box; }
body { margin: 0 auto; max-width: 62rem; padding: 2rem 1.5rem 4rem; background: var(--paper);
  color: var(--ink); font: 1rem/1.5 system-ui, "Segoe UI", "Liberation Sans", sans-serif; }
h1 { font-size: 1.9rem; line-height: 1.2; margin: 0 0 .25rem; font-weight: 600; }
h2 { font-size: 1.35rem; margin: 2.5rem 0 .75rem; padding-top: .5rem;
  border-top: 1px solid var(--hair); font-weight: 600; }
h3 { font-size: 1.1rem; margin: 1.75rem 0 .5rem; font-weight: 600; }
p, li { max-width: 46rem; }
a { color: var(--accent); }
.subtitle { font-size: 1.1rem; margin: 0 0 .25rem; }
.caution { border-left: 4px solid var(--accent); padding-left: .75rem; font-weight: 600; }
.note, figcaption, caption { color: var(--quiet); font-size: .875rem; }
nav ol { columns: 2; padding-left: 1.25rem; }
nav ol, nav li { margin: .1rem 0; }
figure { margin: 1.5rem 0; }
figure img { display: block; width: 100%; max-width: 45rem; height: auto; background: #fff;
  padding: .5rem; }
figcaption { max-width: 46rem; margin-top: .4rem; }
.scroll { overflow-x: auto; margin: 1rem 0; }
table { border-collapse: collapse; width: 100%; font-size: .875rem; line-height: 1.35;
  border-bottom: 1.5px solid var(--rule); font-variant-numeric: tabular-nums; }
caption { text-align: left; padding: .25rem 0 .4rem; caption-side: top; }
th, td { text-align: left; vertical-align: top; padding: .28rem .5rem;
  border-top: 1px solid var(--hair); overflow-wrap: break-word; }
thead th { border-top: 1.5px solid var(--rule); border-bottom: 1px solid var(--rule);
  vertical-align: bottom; }
tbody th { font-weight: 500; }
.number { text-align: right; }
@media print { :root { --paper: #fff; --ink: #000; --quiet: #333; --hair: #bbb; --rule: #000;
  --accent: #000; } @page { size: A4; margin: 18mm; }
  body { max-width: none; padding: 0; font-size: 9.5pt; } nav { display: none; }
  .scroll { overflow: visible; } table { font-size: 7.5pt; } thead { display: table-header-group; }
  tr, figure { break-inside: avoid; } h2, h3, caption { break-after: avoid; } }
"""


def html_text(report: Report) -> str:
    """Return the annex as one HTML page."""
    return "".join(_Writer(report).write())


class _Writer:
    """Writes one report as HTML, counting its tables."""

    def __init__(self, report: Report) -> None:
        self.report = report
        self.tables = 0

    def write(self) -> Iterator[str]:
        title = _text(self.report.title)
        yield f'<!DOCTYPE html>\n<html lang="{LANGUAGE}">\n<head>\n<meta charset="utf-8">\n'
        yield '<meta name="viewport" content="width=device-width, initial-scale=1">\n'
        yield f"<title>{title}</title>\n<style>{_STYLE}</style>\n</head>\n<body>\n"
        yield f'<header>\n<h1>{title}</h1>\n<p class="subtitle">{_text(self.report.subtitle)}</p>\n'
        if self.report.authority:
            yield f"<p>{_text(self.report.authority)}</p>\n"
        yield "</header>\n"
        yield from self._contents()
        yield "<main>\n"
        for index, section in enumerate(self.report.sections):
            yield from self._section(section, index)
        yield "</main>\n</body>\n</html>\n"

    def _contents(self) -> Iterator[str]:
        yield '<nav aria-label="Contents">\n<ol>\n'
        for index, section in enumerate(self.report.sections):
            if section.level == 1:
                yield f'<li><a href="#s{index}">{_text(section.title)}</a></li>\n'
        yield "</ol>\n</nav>\n"

    def _section(self, section: Section, index: int) -> Iterator[str]:
        level = section.level + 1
        yield f'<h{level} id="s{index}">{_text(section.title)}</h{level}>\n'
        for block in section.blocks:
            yield from self._block(block)

    def _block(self, block: Block) -> Iterator[str]:
        if isinstance(block, Table):
            yield from self._table(block)
        elif isinstance(block, Text):
            kind = "" if block.kind == "plain" else f' class="{block.kind}"'
            yield f"<p{kind}>{_text(block.words)}</p>\n"
        elif isinstance(block, Bullets):
            yield "<ul>\n"
            yield from (f"<li>{_text(item)}</li>\n" for item in block.items)
            yield "</ul>\n"
        else:
            yield _figure(block)

    def _table(self, table: Table) -> Iterator[str]:
        self.tables += 1
        yield '<div class="scroll">\n<table>\n'
        yield f"<caption>Table {self.tables}. {_text(table.caption)}</caption>\n<thead>\n<tr>"
        for index, words in enumerate(table.head):
            yield f'<th scope="col"{_side(table, index)}>{_text(words)}</th>'
        yield "</tr>\n</thead>\n<tbody>\n"
        for row in table.rows:
            yield f'<tr><th scope="row">{_text(row[0])}</th>'
            for index, words in enumerate(row[1:], start=1):
                yield f"<td{_side(table, index)}>{_breakable(words)}</td>"
            yield "</tr>\n"
        yield "</tbody>\n</table>\n</div>\n"


def _side(table: Table, index: int) -> str:
    return ' class="number"' if index in table.numbers else ""


def _figure(figure: Illustration) -> str:
    held = base64.b64encode(figure.svg).decode()
    caption = figure.picture.caption
    return (
        f'<figure>\n<img src="data:image/svg+xml;base64,{held}" '
        f'alt="{_text(caption.alternative)}">\n'
        f"<figcaption>Figure {figure.number}. {_text(caption.text)}</figcaption>\n</figure>\n"
    )


_LONG_WORD = 26


def _breakable(words: str) -> str:
    """Return a cell's text; a long path or hash may be broken at its dots and underlines."""
    text = _text(words)
    if max((len(word) for word in words.split()), default=0) <= _LONG_WORD:
        return text
    return text.replace(".", ".<wbr>").replace("_", "_<wbr>")


def _text(words: str) -> str:
    return escape(clean(words))
