"""Figures for print: one measure each, and an overview of small multiples.

A figure is laid out in millimetres and points, so that it is right at its final size.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from rescue_planner.annex.curves import Curve, curves, goals
from rescue_planner.annex.goal_words import write_goals
from rescue_planner.annex.labels import spread, wrapped
from rescue_planner.annex.numerals import year_text
from rescue_planner.annex.panel import (
    Scales,
    bare,
    draw_goals,
    draw_lines,
    generations_on_top,
    marker_style,
)
from rescue_planner.annex.scales import generations_scale, values_scale, years_scale
from rescue_planner.annex.sheet import INK, MM_PER_INCH, THINNEST_PT, Sheet, sheet, text_width
from rescue_planner.annex.wording import axis_title, plan_label
from rescue_planner.case.document import Case
from rescue_planner.projection.results import Comparison

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure


def scales(case: Case, comparison: Comparison, measure: str, paper: Sheet) -> Scales:
    """Return the scales of one measure, the same for all plans."""
    first, last = float(comparison.years[0]), float(comparison.years[-1])
    lines = curves(comparison, measure)
    return Scales(
        years_scale(first, last, paper.year_ticks),
        generations_scale(first, last, comparison.generation_years, paper.year_ticks),
        values_scale(measure, lines, goals(case, measure)),
    )


def draw_measure(case: Case, comparison: Comparison, measure: str, width: int) -> Figure:
    """Draw one measure of all plans; call within `sheet.printed()`.

    Parameters
    ----------
    width : 85 or 170
        Width of the figure in millimetres.
    """
    from matplotlib.figure import Figure

    paper = sheet(width)
    figure = Figure(figsize=(paper.width / MM_PER_INCH, paper.height / MM_PER_INCH))
    axes = figure.add_axes(paper.box)
    lines = curves(comparison, measure)
    marks = goals(case, measure)
    axis = scales(case, comparison, measure, paper)
    bare(axes, axis, paper.text)
    top = generations_on_top(axes, axis, paper.text)
    draw_lines(axes, lines, paper)
    draw_goals(axes, marks, paper)
    write_goals(axes, marks, lines, paper)
    _axis_titles(axes, top, comparison, measure, paper)
    write_names(axes, comparison, lines, paper)
    return figure


def _axis_titles(
    axes: Axes, top: Axes, comparison: Comparison, measure: str, paper: Sheet
) -> None:
    room = paper.height - paper.bottom - paper.top
    words = axis_title(comparison, measure)
    rows = wrapped(words, room, lambda text: text_width(text, paper.text), 2)
    axes.set_ylabel("\n".join(rows), fontsize=paper.text, linespacing=1.15)
    axes.yaxis.set_label_coords(-(paper.left - 1.2) / (paper.width - paper.left - paper.right), 0.5)
    axes.yaxis.label.set_verticalalignment("top")
    axes.set_xlabel("Year", fontsize=paper.text, labelpad=2)
    length = f"{comparison.generation_years:g}"
    top.set_xlabel(f"Generations ({length} years each)", fontsize=paper.text, labelpad=3)


def write_names(
    axes: Axes, comparison: Comparison, lines: Sequence[Curve], paper: Sheet
) -> list[tuple[float, float]]:
    """Write letter and name of each plan at the end of its line.

    Returns
    -------
    list of (low, high)
        The height each label takes, in millimetres above the foot of the plot.
    """
    plot = paper.height - paper.bottom - paper.top
    rows = _names(comparison, lines, paper)
    low, high = axes.get_ylim()
    ends = [(line.values[-1] - low) / (high - low) * plot for line in lines]
    heights = [len(one) * paper.line_height + 0.3 for one in rows]
    over = paper.line_height
    centres = spread(ends, heights, -over, plot + over)
    across = paper.width - paper.left - paper.right
    for line, one, end, centre in zip(lines, rows, ends, centres, strict=True):
        _name(axes, line, one, (end / plot, centre / plot, across), paper)
    return [(c - h / 2, c + h / 2) for c, h in zip(centres, heights, strict=True)]


def _names(
    comparison: Comparison, lines: Sequence[Curve], paper: Sheet
) -> list[tuple[str, ...]]:
    """Return the label of each line, in two rows where all of them have room for that."""
    plot = paper.height - paper.bottom - paper.top
    most = min(3, int(plot / paper.line_height / max(len(lines), 1)))
    found = []
    for line in lines:
        words = plan_label(comparison, line.plan)
        if line.gone is not None:
            words += f" (gone by {year_text(line.gone)})"
        room = paper.right - _LEADER_MM - 1.0
        found.append(wrapped(words, room, lambda t: text_width(t, paper.text), max(most, 1)))
    return found


_LEADER_MM = 5.2


def _name(
    axes: Axes,
    line: Curve,
    rows: Sequence[str],
    place: tuple[float, float, float],
    paper: Sheet,
) -> None:
    """Write one label; `place` is the line's end, the label's centre, and the plot's width."""
    end, centre, across = place
    colour = line.mark.light
    if line.years[-1] >= axes.get_xlim()[1] - 1e-9:
        axes.plot(
            [1 + 0.6 / across, 1 + 2.6 / across],
            [end, centre],
            transform=axes.transAxes,
            color=colour,
            linewidth=THINNEST_PT,
            clip_on=False,
        )
    axes.plot(
        [1 + 3.6 / across],
        [centre],
        transform=axes.transAxes,
        clip_on=False,
        linestyle="none",
        **marker_style(line.mark, paper.marker),
    )
    axes.text(
        1 + _LEADER_MM / across,
        centre,
        "\n".join(rows),
        transform=axes.transAxes,
        fontsize=paper.text,
        color=INK,
        va="center",
        linespacing=1.2,
    )
