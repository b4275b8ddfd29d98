"""Sentences that go with a comparison: what a depth leaves out, rules that acted, targets."""

from __future__ import annotations

import math
import re

from rescue_planner.case.document import Case
from rescue_planner.case.measures import title
from rescue_planner.projection.leaves_out import leaves_out
from rescue_planner.projection.reading import letter
from rescue_planner.projection.results import DEPTH_NAMES, Comparison, Depth


def depth_words(case: Case, depth: Depth) -> str:
    """Return a depth's name with what it leaves out, as one paragraph."""
    name = DEPTH_NAMES[depth]
    return f"{name[:1].upper()}{name[1:]}: {' '.join(leaves_out(case, depth))}"


def event_sentences(comparison: Comparison, plans: tuple[str, ...]) -> tuple[str, ...]:
    """Return what rules did, and which of them could not be read, plan by plan."""
    said = [
        f"{letter(comparison, event.plan)} {event.plan}, rule “{event.rule}”, {event.sentence}"
        for event in comparison.events
        if event.plan in plans
    ]
    said += [
        f"{name}: this rule was not applied, for the measure it reads has no expected value."
        for name in comparison.not_applied
        if name.partition(": ")[0] in plans
    ]
    said += [
        f"{letter(comparison, plan)} {plan}: first-year survival reached 1 and was held there; "
        "gains beyond are not counted."
        for plan in comparison.capped
        if plan in plans
    ]
    return tuple(said)


def read_years(text: str) -> tuple[float, ...]:
    """Return the years that a person typed, in their order, each once.

    Raises
    ------
    ValueError
        With one sentence, for what is not a list of years.
    """
    parts = [part for part in re.split(r"[,;\s]+", text.strip()) if part]
    if not parts:
        raise ValueError("Write at least one year, such as 2047.")
    if len(parts) > 24:
        raise ValueError("Write at most 24 years.")
    years: list[float] = []
    for part in parts:
        try:
            year = float(part)
        except ValueError:
            raise ValueError(f"“{part}” is not a year: write years with commas between.") from None
        if not 0 < year < 1e6:
            raise ValueError(f"“{part}” is not a year: write years with commas between.")
        if year not in years:
            years.append(year)
    return tuple(years)


def usual_years(comparison: Comparison) -> tuple[float, ...]:
    """Return the whole years a table opens on: start, one and two thirds of the way, horizon."""
    count = comparison.years.size - 1
    at = sorted({0, round(count / 3), round(2 * count / 3), count})
    return tuple(float(math.ceil(comparison.years[t] - 1e-6)) for t in at)


def years_outside(comparison: Comparison, years: tuple[float, ...]) -> str:
    """Return a sentence on years outside the projection, empty where there are none."""
    first, last = float(comparison.years[0]), float(comparison.years[-1])
    end = math.ceil(last - 1e-6)  # the whole year by which the last value is reached
    outside = [f"{year:g}" for year in years if not first - 0.5 <= year <= max(end, last + 0.5)]
    if not outside:
        return ""
    years_out = ", ".join(outside)
    return f"Outside the projection ({first:g} to {last:g}): {years_out}; its nearer end is shown."


def measure_words(key: str) -> str:
    """Return a measure's name for a list."""
    return title(key)
