"""The overview: small multiples of the measures, all plans on one scale in each panel."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from rescue_planner.annex.captions import panel_marks
from rescue_planner.annex.curves import Curve, curves, goals
from rescue_planner.annex.figures import blank, scales
from rescue_planner.annex.frame import Frame
from rescue_planner.annex.labels import spread, wrapped
from rescue_planner.annex.numerals import year_text
from rescue_planner.annex.panel import dash, draw_goals, draw_lines, marker_style
from rescue_planner.annex.sheet import Sheet, text_width
from rescue_planner.annex.wording import axis_title, plan_label
from rescue_planner.case.document import Case
from rescue_planner.case.measures import split
from rescue_planner.projection.results import Comparison

if TYPE_CHECKING:
    from matplotlib.figure import Figure

MOST_PANELS = 12
# What decides most often comes first; the rest follows in the order of the measures.
_FIRST = (
    "adults",
    "inbreeding",
    "gene_diversity_kept",
    "relative_first_year_survival",
    "donor_ancestry",
    "yearly_growth",
    "persists",
    "allele_kept",
    "additive_variance_kept",
    "trait_lag",
    "cost",
    "effective_migrants",
    "allele_frequency",
    "released",
)


def overview_measures(comparison: Comparison, measures: Sequence[str]) -> tuple[str, ...]:
    """Return the measures of the overview's panels, at most twelve."""
    drawn = [key for key in measures if curves(comparison, key)]
    drawn = [key for key in drawn if not (split(key)[0] == "donor_ancestry" and split(key)[1])]
    if "gene_diversity_kept" in drawn and "gene_diversity" in drawn:
        drawn.remove("gene_diversity")
    place = {base: index for index, base in enumerate(_FIRST)}
    ranked = sorted(drawn, key=lambda key: (place.get(split(key)[0], 99), measures.index(key)))
    return tuple(ranked[:MOST_PANELS])


@dataclass(frozen=True, slots=True)
class _Grid:
    """How panels lie on the sheet, in millimetres; `panel` is one of them as its own sheet."""

    columns: int
    height: float
    head: float
    foot: float
    panel: Sheet

    def corner(self, index: int) -> tuple[float, float]:
        """Return the lower left corner of a panel's plot."""
        row, column = index // self.columns, index % self.columns
        left = column * self.panel.width + self.panel.left
        low = self.height - self.head - (row + 1) * self.panel.height + self.panel.bottom
        return left, low


def _grid(width: int, panels: int, key_rows: int, left: float) -> _Grid:
    narrow = width < 120
    columns = min(2 if narrow else 3, panels)
    rows = -(-panels // columns)
    row, head = (33.0, 9.5) if narrow else (36.0, 9.5)
    foot = 10.0 + _KEY_MM * key_rows
    line, marker = (0.9, 2.4) if narrow else (1.0, 2.8)
    panel = Sheet(
        width / columns, row, _TEXT_PT, line, marker, max(left, 10.0), 4.5, 3.0, 8.2, _YEAR_TICKS
    )
    return _Grid(columns, head + rows * row + foot, head, foot, panel)


_KEY_MM = 4.0
_TEXT_PT = 7.0
_YEAR_TICKS = 3
_TEXT_PT = 7.0


def draw_overview(
    case: Case, comparison: Comparison, measures: Sequence[str], width: int
) -> Figure:
    """Draw a panel for each of `measures`; call within `sheet.printed()`."""
    key_columns = 1 if width < 120 else 2
    found = [scales(case, comparison, measure, _YEAR_TICKS, 5) for measure in measures]
    widest = max(text_width(words, _TEXT_PT) for scale in found for words in scale.values.texts)
    grid = _grid(width, len(measures), -(-len(comparison.plans) // key_columns), widest + 2.0)
    whole = replace(grid.panel, width=width, height=grid.height)
    figure = blank(whole)
    for index, (mark, measure) in enumerate(panel_marks(measures)):
        frame = Frame(figure, grid.corner(index), grid.panel, found[index])
        frame.values_axis()
        frame.years_axis(named=index + grid.columns >= len(measures))
        if index < grid.columns:
            frame.generations_axis("Generations", grid.panel.top)
        lines = curves(comparison, measure)
        draw_lines(frame, lines)
        draw_goals(frame, goals(case, measure))
        _letters(frame, lines)
        _words(frame, f"{mark}  {axis_title(comparison, measure)}")
    key = Frame(figure, (0.0, 0.0), replace(whole, left=0, right=0, bottom=0, top=0), found[0])
    _key(key, comparison, curves(comparison, measures[0]), grid.foot - 10.0, key_columns)
    return figure


def _letters(frame: Frame, lines: Sequence[Curve]) -> None:
    """Write each plan's letter at the end of its line."""
    ends = [float(frame.up(line.values[-1])) for line in lines]
    tall = [frame.paper.line_height * 0.84] * len(lines)  # single capitals need no room below
    need = sum(tall)
    low = min(-1.0, (frame.tall - need) / 2)
    for line, centre in zip(lines, spread(ends, tall, low, frame.tall - low), strict=True):
        words = line.mark.letter
        frame.text(frame.wide + 1.4, centre, words, color=line.mark.light, va="center")


def _words(frame: Frame, words: str) -> None:
    """Write a panel's axis title above it."""
    paper = frame.paper
    rows = wrapped(words, paper.width - 1.5, lambda text: text_width(text, paper.text), 2)
    frame.text(0.8 - paper.left, frame.tall + 1.0, "\n".join(rows), va="bottom", linespacing=1.1)


def _key(
    frame: Frame, comparison: Comparison, lines: Sequence[Curve], top: float, columns: int
) -> None:
    """Draw the key of the plans at the foot of the sheet."""
    paper = frame.paper
    rows = -(-len(lines) // columns)
    cell = paper.width / columns
    for index, line in enumerate(lines):
        left = (index // rows) * cell + 3.0
        y = top - _KEY_MM * (index % rows) - 1.2
        frame.line(
            [left, left + 5, left + 10],
            [y, y, y],
            color=line.mark.light,
            linestyle=dash(line.mark),
            linewidth=paper.line,
            markevery=[1],
            **marker_style(line.mark, paper.marker),
        )
        words = plan_label(comparison, line.plan)
        if line.gone is not None:
            words += f" (gone by {year_text(line.gone)})"
        one = wrapped(words, cell - 17.0, lambda text: text_width(text, paper.text), 1)[0]
        frame.text(left + 12, y, one, va="center")
