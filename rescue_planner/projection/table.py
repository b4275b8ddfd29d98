"""A comparison as rows: projection.csv, and numbers in their shortest form."""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Iterator, Sequence

from rescue_planner.case.document import Case
from rescue_planner.projection.compare import LIVE_DEPTHS, compare
from rescue_planner.projection.results import STATISTICS, Comparison, Depth, Series

COLUMNS = (
    "plan",
    "depth",
    "year",
    "generation",
    "measure",
    "statistic",
    "value",
    "low",
    "high",
)


def shortest(value: float) -> str:
    """Return the shortest text that reads back as the same number; empty for no value."""
    if math.isnan(value):
        return ""
    if value == int(value) if math.isfinite(value) else False:
        whole = str(int(value))
        if len(whole) <= 15:
            return whole
    return repr(float(value))


def in_order(comparison: Comparison, measures: Sequence[str] | None = None) -> Iterator[Series]:
    """Yield the series in the order of the file: plans, depths, measures, statistics."""
    wanted = comparison.measures if measures is None else measures
    for plan in comparison.plans:
        for depth in comparison.depths:
            for measure in comparison.measures:
                if measure not in wanted:
                    continue
                for statistic in STATISTICS:
                    found = comparison.get(plan, depth, measure, statistic)
                    if found is not None:
                        yield found


def rows(
    comparison: Comparison, measures: Sequence[str] | None = None
) -> Iterator[tuple[str, ...]]:
    """Yield the rows of projection.csv without their header."""
    years = [shortest(float(year)) for year in comparison.years]
    for series in in_order(comparison, measures):
        head = (series.plan, series.depth)
        tail = (series.measure, series.statistic)
        for t, value in enumerate(series.values):
            low = "" if series.low is None else shortest(float(series.low[t]))
            high = "" if series.high is None else shortest(float(series.high[t]))
            yield (*head, years[t], str(t), *tail, shortest(float(value)), low, high)


def written(header: Sequence[str], body: Iterator[tuple[str, ...]]) -> str:
    """Return rows as CSV text with line feeds."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(header)
    writer.writerows(body)
    return out.getvalue()


def comparison_csv(comparison: Comparison, measures: Sequence[str] | None = None) -> str:
    """Return a comparison as the text of projection.csv."""
    return written(COLUMNS, rows(comparison, measures))


def projection_csv(case: Case, depths: Sequence[Depth] = LIVE_DEPTHS) -> str:
    """Project every plan of `case` and return the text of projection.csv."""
    return comparison_csv(compare(case, depths=depths))
