"""The overview: small multiples of the measures, all plans on one scale in each panel."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from rescue_planner.annex.captions import panel_marks
from rescue_planner.annex.curves import Curve, curves, goals
from rescue_planner.annex.labels import spread, wrapped
from rescue_planner.annex.numerals import year_text
from rescue_planner.annex.panel import (
    Scales,
    bare,
    dash,
    draw_goals,
    draw_lines,
    generations_on_top,
    marker_style,
)
from rescue_planner.annex.scales import generations_scale, values_scale, years_scale
from rescue_planner.annex.sheet import INK, MM_PER_INCH, Sheet, text_width
from rescue_planner.annex.wording import axis_title, plan_label
from rescue_planner.case.document import Case
from rescue_planner.case.measures import split
from rescue_planner.projection.results import Comparison

if TYPE_CHECKING:
    from matplotlib.axes import Axes
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
    """How panels lie on the sheet, in millimetres."""

    columns: int
    rows: int
    paper: Sheet
    gap: float
    row: float
    foot: float
    head: float

    def box(self, index: int) -> tuple[float, float, float, float]:
        """Return the place of one panel's plot as shares of the sheet."""
        paper, row, column = self.paper, index // self.columns, index % self.columns
        cell = paper.width / self.columns
        wide = cell - paper.left - paper.right
        low = paper.height - self.head - (row + 1) * self.row + paper.bottom
        tall = self.row - paper.bottom - paper.top
        return (
            (column * cell + paper.left) / paper.width,
            low / paper.height,
            wide / paper.width,
            tall / paper.height,
        )

    @property
    def panel(self) -> Sheet:
        """One panel as a sheet of its own, for placing within it."""
        paper = self.paper
        return Sheet(
            paper.width / self.columns,
            self.row,
            paper.text,
            paper.line,
            paper.marker,
            paper.left,
            paper.right,
            paper.bottom,
            paper.top,
            paper.year_ticks,
        )


def _grid(width: int, panels: int, key_rows: int) -> _Grid:
    columns = 2 if width < 120 else 3
    columns = min(columns, panels)
    rows = -(-panels // columns)
    row, head = (34.0, 9.0) if width < 120 else (37.0, 9.5)
    foot = 9.0 + 4.0 * key_rows
    text, line, marker = (7.0, 0.9, 2.4) if width < 120 else (7.0, 1.0, 2.8)
    height = head + rows * row + foot
    paper = Sheet(width, height, text, line, marker, 10.0, 4.5, 3.0, 8.2, 3)
    return _Grid(columns, rows, paper, 0.0, row, foot, head)


def draw_overview(
    case: Case, comparison: Comparison, measures: Sequence[str], width: int
) -> Figure:
    """Draw a panel for each of `measures`; call within `sheet.printed()`."""
    from matplotlib.figure import Figure

    key_columns = 1 if width < 120 else 2
    key_rows = -(-len(comparison.plans) // key_columns)
    grid = _grid(width, len(measures), key_rows)
    paper = grid.paper
    figure = Figure(figsize=(paper.width / MM_PER_INCH, paper.height / MM_PER_INCH))
    for index, (mark, measure) in enumerate(panel_marks(measures)):
        axes = figure.add_axes(grid.box(index))
        _panel(axes, case, comparison, measure, grid)
        _panel_words(axes, f"{mark}  {axis_title(comparison, measure)}", grid)
        if index < grid.columns:
            _generations(axes, case, comparison, measure, grid)
        if index + grid.columns >= len(measures):
            axes.set_xlabel("Year", fontsize=paper.text, labelpad=1.5)
        else:
            axes.tick_params(axis="x", labelbottom=False)
    _key(figure, comparison, curves(comparison, measures[0]), grid, key_columns)
    return figure


def _scales(case: Case, comparison: Comparison, measure: str, most: int) -> Scales:
    first, last = float(comparison.years[0]), float(comparison.years[-1])
    return Scales(
        years_scale(first, last, most),
        generations_scale(first, last, comparison.generation_years, most),
        values_scale(measure, curves(comparison, measure), goals(case, measure), 4),
    )


def _panel(
    axes: Axes, case: Case, comparison: Comparison, measure: str, grid: _Grid
) -> None:
    paper = grid.panel
    lines = curves(comparison, measure)
    bare(axes, _scales(case, comparison, measure, paper.year_ticks), paper.text)
    draw_lines(axes, lines, paper)
    draw_goals(axes, goals(case, measure), paper)
    plot = paper.height - paper.bottom - paper.top
    low, high = axes.get_ylim()
    ends = [(line.values[-1] - low) / (high - low) * plot for line in lines]
    tall = [paper.line_height * 0.84] * len(lines)  # single capitals need no room below
    centres = spread(ends, tall, -1.0, max(plot, len(lines) * tall[0]))
    across = paper.width - paper.left - paper.right
    for line, centre in zip(lines, centres, strict=True):
        axes.text(
            1 + 1.6 / across,
            centre / plot,
            line.mark.letter,
            transform=axes.transAxes,
            fontsize=paper.text,
            color=line.mark.light,
            va="center",
        )


def _panel_words(axes: Axes, words: str, grid: _Grid) -> None:
    paper = grid.panel
    rows = wrapped(words, paper.width - 1.5, lambda text: text_width(text, paper.text), 2)
    axes.annotate(
        "\n".join(rows),
        xy=(0, 1),
        xytext=(-(paper.left - 0.8) * 72 / MM_PER_INCH, 3.0),
        xycoords="axes fraction",
        textcoords="offset points",
        fontsize=paper.text,
        color=INK,
        va="bottom",
        linespacing=1.1,
    )


def _generations(
    axes: Axes, case: Case, comparison: Comparison, measure: str, grid: _Grid
) -> None:
    paper = grid.panel
    scales = _scales(case, comparison, measure, paper.year_ticks)
    top = generations_on_top(axes, scales, paper.text, outward=8.0 * 72 / MM_PER_INCH)
    top.set_xlabel("Generations", fontsize=paper.text, labelpad=2)


def _key(
    figure: Figure,
    comparison: Comparison,
    lines: Sequence[Curve],
    grid: _Grid,
    columns: int,
) -> None:
    """Draw the key of the plans at the foot of the sheet."""
    from matplotlib.lines import Line2D

    paper = grid.paper
    rows = -(-len(lines) // columns)
    cell = paper.width / columns
    for index, line in enumerate(lines):
        left = (index // rows) * cell + 3.0
        y = (grid.foot - 9.0 - 4.0 * (index % rows) - 1.2) / paper.height
        figure.add_artist(
            Line2D(
                [left / paper.width, (left + 5) / paper.width, (left + 10) / paper.width],
                [y, y, y],
                color=line.mark.light,
                linestyle=dash(line.mark),
                linewidth=paper.line,
                markevery=[1],
                **marker_style(line.mark, paper.marker),
            )
        )
        words = plan_label(comparison, line.plan)
        if line.gone is not None:
            words += f" (gone by {year_text(line.gone)})"
        one = wrapped(words, cell - 17.0, lambda text: text_width(text, paper.text), 1)[0]
        figure.text((left + 12) / paper.width, y, one, fontsize=paper.text, va="center")
