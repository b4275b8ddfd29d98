"""What one chart shows, as plain values: lines, bands, ticks, targets, words. No Qt here."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from rescue_planner.case.document import Case
from rescue_planner.case.measures import split, title
from rescue_planner.projection import reading
from rescue_planner.projection.placing import round_range, ticks
from rescue_planner.projection.reading import Curve, Fan, TargetMark
from rescue_planner.projection.results import Comparison

MARKERS_ON_A_LINE = 5


@dataclass(frozen=True, slots=True, eq=False)
class Line:
    """One plan on a chart: its curve, its place among the plans, the t of its markers."""

    plan: str
    mark: int
    letter: str
    curve: Curve
    markers: tuple[int, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Picture:
    """One chart. `low` and `high` bound the value axis; `empty` says why there are no lines.

    `fan_of` names the plan whose bands are drawn; `decimals` is shared by all values shown.
    """

    key: str
    title: str
    unit: str
    fan_of: str | None
    lines: tuple[Line, ...]
    fan: Fan | None
    fan_mark: int
    low: float
    high: float
    ticks: tuple[float, ...]
    references: tuple[tuple[str, float], ...]
    targets: tuple[TargetMark, ...]
    decimals: int
    widest: str
    empty: str
    described: Callable[[], str]

    @property
    def description(self) -> str:
        """The chart in words; made when it is asked for, not at every redraw."""
        return self.empty or self.described()

    def text_at(self, line: Line, t: int) -> str:
        """Return what the read-out says of a line at t."""
        if t >= line.curve.values.size:
            return "gone"
        return reading.shown(self.key, float(line.curve.values[t]), self.decimals)

    def bands_at(self, t: int) -> tuple[str, ...]:
        """Return what the read-out says of the two bands at t; nothing without bands."""
        if self.fan is None or t >= self.fan.years.size:
            return ()
        bounds = (self.fan.q05, self.fan.q25, self.fan.q75, self.fan.q95)
        q = [reading.shown(self.key, float(bound[t]), self.decimals) for bound in bounds]
        return f"90 in 100: {q[0]} to {q[3]}", f"50 in 100: {q[1]} to {q[2]}"


def picture(
    comparison: Comparison,
    case: Case,
    key: str,
    plans: Sequence[str],
    fan_of: str | None = None,
) -> Picture:
    """Return the chart of one measure for the plans shown, in the order of the case.

    Parameters
    ----------
    plans : names
        Plans that are not hidden; the range covers the hidden ones too, so that nothing moves.
    fan_of : name, optional
        The plan whose bands are drawn where they were computed.
    """
    targets = reading.target_marks(case, key)
    bands = reading.fan(comparison, fan_of, key) if fan_of in plans and fan_of else None
    low, high = _extent(comparison, key, targets, fan_of is not None)
    decimals = reading.column_places(comparison, key, comparison.plans)
    computed = any(_has(comparison, plan, key) for plan in comparison.plans)
    empty = no_input(case, key) if computed else why_empty(case, key)
    lines = tuple(
        _line(comparison, plan, key) for plan in plans if not empty and _has(comparison, plan, key)
    )
    if not empty and not lines:
        empty = "All plans are hidden. Show one in the plan strip above."
    return Picture(
        key=key,
        title=title(key),
        unit=comparison.unit(key),
        fan_of=fan_of,
        lines=lines,
        fan=bands,
        fan_mark=comparison.marks[comparison.plans.index(fan_of)] if bands and fan_of else 0,
        low=low,
        high=high,
        ticks=ticks(low, high, 4),
        references=reading.references(comparison, key),
        targets=targets,
        decimals=decimals,
        widest=_widest(comparison, key, decimals),
        empty=empty,
        described=lambda: _described(comparison, key, plans, targets),
    )


def _described(
    comparison: Comparison, key: str, plans: Sequence[str], targets: Sequence[TargetMark]
) -> str:
    goals = [f"Target {goal.words}, by {reading.year_text(goal.year)}." for goal in targets]
    return " ".join([reading.describe(comparison, key, plans), *goals])


def _has(comparison: Comparison, plan: str, key: str) -> bool:
    return comparison.best(plan, key) is not None


def _extent(
    comparison: Comparison, key: str, targets: Sequence[TargetMark], fans: bool
) -> tuple[float, float]:
    low, high = reading.extent(comparison, key, [mark.value for mark in targets], fans)
    return (low, high) if high > low else round_range(low, high)


def _line(comparison: Comparison, plan: str, key: str) -> Line:
    line = reading.curve(comparison, plan, key)
    assert line is not None
    place = comparison.marks[comparison.plans.index(plan)]
    count = line.values.size
    stride = max(1, -(-(comparison.years.size - 1) // MARKERS_ON_A_LINE))
    markers = tuple(range(place % stride, count, stride))
    return Line(plan, place, reading.letter(comparison, plan), line, markers)


def _widest(comparison: Comparison, key: str, decimals: int) -> str:
    texts = ["gone"]
    if split(key)[0] in reading.CHANCES:
        texts.append(reading.shown(key, 1e-9, decimals))
    for plan in comparison.plans:
        line = reading.curve(comparison, plan, key)
        if line is not None and line.values.size:
            ends = (float(line.values.min()), float(line.values.max()))
            texts.extend(reading.shown(key, value, decimals) for value in ends)
    return max(texts, key=len)


def no_input(case: Case, key: str) -> str:
    """Return why a measure that has values is no result: nothing was entered for it to show."""
    base = split(key)[0]
    if base == "relative_first_year_survival" and case.inbreeding_cost is None:
        return (
            "No inbreeding cost entered: survival is taken as that of outbred young. Add the cost "
            "on the Case page."
        )
    if base == "donor_ancestry" and not case.donors:
        return "No donor entered: all gene copies are the recipient’s. Add one on the Case page."
    return ""


def why_empty(case: Case, key: str) -> str:
    """Return why a measure has no values, and what to add for it."""
    base = split(key)[0]
    if base in ("adults", "yearly_growth") and case.life_cycle is None:
        return "No life cycle entered: numbers are not projected. Add one on the Case page."
    if base in ("additive_variance_kept", "trait_mean", "trait_lag") and case.trait is None:
        return "No trait entered: it is not projected. Add one on the Case page."
    if base == "sustainable_shift" and (case.trait is None or case.life_cycle is None):
        return "This needs a trait and a life cycle. Add them on the Case page."
    if base in ("allele_kept", "allele_fixed"):
        return "The one-locus odds are being computed."
    return "This measure needs simulated animals; the depths shown here do not give it."
