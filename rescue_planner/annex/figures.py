"""A figure of one measure, laid out in millimetres so that it is right at its final size."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from rescue_planner.annex.curves import Curve, curves, goals
from rescue_planner.annex.frame import Frame, Scales
from rescue_planner.annex.goal_words import write_goals
from rescue_planner.annex.labels import spread, wrapped
from rescue_planner.annex.numerals import year_text
from rescue_planner.annex.panel import draw_goals, draw_lines, ended, marker_style
from rescue_planner.annex.scales import generations_scale, values_scale, years_scale
from rescue_planner.annex.sheet import MM_PER_INCH, THINNEST_PT, Sheet, sheet, text_width
from rescue_planner.annex.wording import axis_title, plan_label
from rescue_planner.case.document import Case
from rescue_planner.projection.results import Comparison

if TYPE_CHECKING:
    from matplotlib.figure import Figure

_LEADER_MM = (0.6, 2.6)
_MARKER_MM = 3.6
_NAME_MM = 5.2


def scales(case: Case, comparison: Comparison, measure: str, years: int, values: int = 5) -> Scales:
    """Return the scales of one measure, the same for all plans, with about so many ticks."""
    first, last = float(comparison.years[0]), float(comparison.years[-1])
    lines = curves(comparison, measure)
    return Scales(
        years_scale(first, last, years),
        generations_scale(first, last, comparison.generation_years, years),
        values_scale(measure, lines, goals(case, measure), values),
    )


def blank(paper: Sheet) -> Figure:
    """Return an empty figure of the size of `paper`."""
    from matplotlib.figure import Figure

    return Figure(figsize=(paper.width / MM_PER_INCH, paper.height / MM_PER_INCH))


def draw_measure(case: Case, comparison: Comparison, measure: str, width: int) -> Figure:
    """Draw one measure of all plans; call within `sheet.printed()`.

    Parameters
    ----------
    width : 85 or 170
        Width of the figure in millimetres.
    """
    paper = sheet(width)
    figure = blank(paper)
    lines = curves(comparison, measure)
    marks = goals(case, measure)
    scale = scales(case, comparison, measure, paper.year_ticks)
    frame = Frame(figure, (paper.left, paper.bottom), paper, scale)
    frame.values_axis()
    frame.years_axis()
    frame.generations_axis(f"Generations ({comparison.generation_years:g} years each)")
    draw_lines(frame, lines)
    draw_goals(frame, marks)
    write_goals(frame, marks, lines)
    _values_title(frame, axis_title(comparison, measure))
    write_names(frame, comparison, lines)
    return figure


def _values_title(frame: Frame, words: str) -> None:
    paper = frame.paper
    rows = wrapped(words, frame.tall + 6, lambda text: text_width(text, paper.text), 2)
    frame.text(
        1.0 - paper.left,
        frame.tall / 2,
        "\n".join(rows),
        rotation=90,
        ha="left",
        va="center",
        multialignment="center",
        linespacing=1.15,
    )


def write_names(
    frame: Frame, comparison: Comparison, lines: Sequence[Curve]
) -> list[tuple[float, float]]:
    """Write letter and name of each plan at the end of its line.

    Returns
    -------
    list of (low, high)
        The height each label takes, in millimetres above the foot of the plot.
    """
    paper = frame.paper
    names = _names(frame, comparison, lines)
    ends = [float(frame.up(line.values[-1])) for line in lines]
    heights = [len(rows) * paper.line_height + 0.3 for rows in names]
    room = (2.0 - paper.bottom, paper.height - paper.bottom - 1.0)
    centres = spread(ends, heights, *room)
    for line, rows, end, centre in zip(lines, names, ends, centres, strict=True):
        _name(frame, line, rows, (end, centre))
    return [(c - h / 2, c + h / 2) for c, h in zip(centres, heights, strict=True)]


def _names(frame: Frame, comparison: Comparison, lines: Sequence[Curve]) -> list[tuple[str, ...]]:
    """Return the label of each line, in as many rows as all of them have room for."""
    paper = frame.paper
    high = paper.height - 3.0
    most = min(3, int(high / (paper.line_height + 0.3) / max(len(lines), 1)))
    room = paper.right - _NAME_MM - 1.5
    found = []
    for line in lines:
        words = plan_label(comparison, line.plan)
        ends = line.gone is not None and most > 1  # in one row the cross and the caption say it
        rows = wrapped(words, room, lambda t: text_width(t, paper.text), max(most - ends, 1))
        found.append((*rows, f"gone by {year_text(line.gone)}") if line.gone and ends else rows)
    return found


def _name(frame: Frame, line: Curve, rows: Sequence[str], place: tuple[float, float]) -> None:
    """Write one label; `place` is the height of the line's end and of the label's centre."""
    colour, wide = line.mark.light, frame.wide
    if not ended(line):
        at = [wide + x for x in _LEADER_MM]
        frame.line(at, place, color=colour, linewidth=THINNEST_PT)
    style = marker_style(line.mark, frame.paper.marker)
    frame.line([wide + _MARKER_MM], [place[1]], linestyle="none", **style)
    words = "\n".join(rows)
    frame.text(wide + _NAME_MM, place[1], words, va="center", linespacing=1.2)
