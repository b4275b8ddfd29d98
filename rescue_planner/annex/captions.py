"""Captions that stand alone, and the text that stands for a figure where it cannot be seen."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from rescue_planner.annex.curves import Curve, curves, goals
from rescue_planner.annex.numerals import year_text
from rescue_planner.annex.panel import MOST_FILLED_BANDS
from rescue_planner.annex.wording import axis_title, listed, one_line, plan_label
from rescue_planner.case.document import Case
from rescue_planner.case.measures import title
from rescue_planner.projection import reading
from rescue_planner.projection.leaves_out import leaves_out
from rescue_planner.projection.results import DEPTH_NAMES, Comparison

SHORT_HASH = 12


@dataclass(frozen=True, slots=True)
class Caption:
    """What stands under a figure (`text`), what its depth leaves out, and its alternative."""

    text: str
    left_out: str
    alternative: str

    @property
    def whole(self) -> str:
        """The caption as it stands beside the files: nothing else is needed to read the figure."""
        return f"{self.text} {self.left_out}".strip()


def measure_caption(case: Case, comparison: Comparison, measure: str) -> Caption:
    """Return the caption of one measure's figure."""
    lines = curves(comparison, measure)
    depth = lines[0].depth if lines else "expected"
    parts = [
        f"{axis_title(comparison, measure)} {_where(case)} under {_plans(lines)}, "
        f"{_span(comparison)}.",
        _depth(depth, lines),
        _bands(lines),
        _goals(case, measure),
        _ends(comparison, lines),
        _origin(comparison),
    ]
    return Caption(
        " ".join(part for part in parts if part),
        _left_out(case, depth),
        _alternative(comparison, measure, lines),
    )


def overview_caption(
    case: Case, comparison: Comparison, shown: Sequence[str], left: Sequence[str]
) -> Caption:
    """Return the caption of the overview; `left` are the measures it has no panel for."""
    lines = curves(comparison, shown[0])
    panels = listed([f"({mark}) {one_line(title(key))}" for mark, key in panel_marks(shown)])
    depths = [d for d in comparison.depths if any(_drawn(comparison, key) == d for key in shown)]
    names = listed([DEPTH_NAMES[depth] for depth in depths])
    also = listed([one_line(title(key)) for key in left])
    parts = [
        f"The plans for {one_line(case.recipient.name)} compared, {_span(comparison)}: {panels}.",
        f"Depth: {names}. In each panel all plans stand on one scale.",
        "Carets mark targets: pointing up for at least, down for at most.",
        f"Not shown here but in figures of their own: {also}." if left else "",
        _ends(comparison, lines),
        _origin(comparison),
    ]
    left_out = " ".join(_left_out(case, depth) for depth in depths)
    told = " ".join(_alternative(comparison, key, curves(comparison, key)) for key in shown)
    return Caption(" ".join(p for p in parts if p), left_out, f"Small panels. {told}")


def panel_marks(shown: Sequence[str]) -> tuple[tuple[str, str], ...]:
    """Return the letter of each panel of the overview with its measure."""
    return tuple(zip("abcdefghijklmnopqrstuvwxyz", shown, strict=False))


def _drawn(comparison: Comparison, measure: str) -> str:
    lines = curves(comparison, measure)
    return lines[0].depth if lines else ""


def _where(case: Case) -> str:
    return f"in {one_line(case.recipient.name)}"


def _span(comparison: Comparison) -> str:
    first, last = (year_text(float(comparison.years[k])) for k in (0, -1))
    count = comparison.years.size - 1
    length = f"{comparison.generation_years:g}"
    return f"{first}–{last} ({count} generation{'s' * (count != 1)} of {length} years)"


def _plans(lines: Sequence[Curve]) -> str:
    return "one plan" if len(lines) == 1 else f"{len(lines)} plans"


def _depth(depth: str, lines: Sequence[Curve]) -> str:
    what = {
        "expected": "average course (expected values; no chance events)",
        "exact": "one-locus odds (exact distribution of the allele; no random draws)",
        "simulated": "simulated animals",
    }[depth]
    shown = "share" if lines and lines[0].statistic == "share" else "mean"
    line = {"share": "probabilities", "mean": "means"}[shown]
    return f"Depth: {what}; lines are {line}."


def _bands(lines: Sequence[Curve]) -> str:
    if not any(line.band.wide is not None for line in lines):
        return ""
    if sum(line.band.wide is not None for line in lines) > MOST_FILLED_BANDS:
        return "Thin lines: 5 % and 95 % quantiles, in the dash and colour of the plan."
    return "Bands: 5 % to 95 % quantiles, darker from 25 % to 75 %."


def _goals(case: Case, measure: str) -> str:
    marks = goals(case, measure)
    if not marks:
        return ""
    words = "; ".join(f"{mark.words}, by {year_text(mark.year)}" for mark in marks)
    return f"Carets mark targets ({words}), pointing up for at least, down for at most."


def _ends(comparison: Comparison, lines: Sequence[Curve]) -> str:
    gone = [line for line in lines if line.gone is not None]
    if not gone:
        return ""
    words = listed(
        [f"{plan_label(comparison, line.plan)} ({year_text(line.gone or 0.0)})" for line in gone]
    )
    return (
        f"Fewer than one adult is left on the average course under {words}: lines that describe "
        "living animals end there in a cross."
    )


def _origin(comparison: Comparison) -> str:
    what_if = f" What-if: {one_line(comparison.what_if)}." if comparison.what_if else ""
    return (
        f"Case: {one_line(comparison.title)}.{what_if} Rescue Planner "
        f"{comparison.program_version}; case hash {comparison.case_hash[:SHORT_HASH]}."
    )


def _left_out(case: Case, depth: str) -> str:
    found = leaves_out(case, depth)  # type: ignore[arg-type]
    if not found:
        return ""
    return f"What {DEPTH_NAMES[depth]} leaves out: {' '.join(found)}"


def _alternative(comparison: Comparison, measure: str, lines: Sequence[Curve]) -> str:
    if not lines:
        return ""
    ends = "; ".join(_end(comparison, measure, line) for line in lines)
    first, last = (year_text(float(comparison.years[k])) for k in (0, -1))
    start = _value(measure, float(lines[0].values[0]))
    return (
        f"Line chart of {axis_title(comparison, measure)}, {first} to {last}. "
        f"Start: {start}. End: {ends}."
    )


def _end(comparison: Comparison, measure: str, line: Curve) -> str:
    name = plan_label(comparison, line.plan)
    if line.years[-1] < comparison.years[-1]:
        year = year_text(float(line.gone or line.years[-1]))
        return f"{name} gone by {year}, last {_value(measure, float(line.values[-1]))}"
    return f"{name} {_value(measure, float(line.values[-1]))}{_turn(measure, line)}"


def _turn(measure: str, line: Curve) -> str:
    """Name a peak or trough that start and end alone would hide."""
    values, years = line.values, line.years
    ends = (float(values[0]), float(values[-1]))
    room = 0.05 * max(float(np.ptp(values)), 1e-12)
    top, bottom = int(values.argmax()), int(values.argmin())
    if values[top] > max(ends) + room:
        at = year_text(float(years[top]))
        return f" (highest {_value(measure, float(values[top]))} in {at})"
    if values[bottom] < min(ends) - room:
        at = year_text(float(years[bottom]))
        return f" (lowest {_value(measure, float(values[bottom]))} in {at})"
    return ""


def _value(measure: str, printed: float) -> str:
    return reading.shown(measure, printed, reading.places(measure, [printed]))
