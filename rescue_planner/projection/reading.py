"""Numbers as people read them: curves, digits, units, sentences and tables. No Qt here.

What a chart draws and what a table prints is made here from a comparison, so that every number on
a screen can be checked without a screen. Shares are shown in per cent, all else as it is.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.document import Case
from rescue_planner.case.measures import measure_of, split, title
from rescue_planner.projection.marks import mark
from rescue_planner.projection.placing import THIN, round_range, ticks
from rescue_planner.projection.results import Comparison, Depth, Series

FloatArray = NDArray[np.float64]

GO_ON_WHEN_GONE = frozenset(
    ("adults", "young", "persists", "released", "effective_migrants", "cost", "donor_adults")
)
_FROM_ZERO = frozenset(
    ("adults", "young", "donor_ancestry", "released", "effective_migrants", "cost")
)
_WHOLE_RANGE = frozenset(("allele_frequency", "allele_kept", "allele_fixed", "persists"))
CHANCES = frozenset(("allele_kept", "allele_fixed", "persists"))
_PLACES = {"number": 3, "share": 1, "count": 1, "money": 0}
_OWN_PLACES = {
    "effective_migrants": 1,
    "realised_effective_size": 1,
    "trait_mean": 2,
    "trait_lag": 2,
}


# numbers


def scale(key: str) -> float:
    """Return what a measure's values are multiplied by on a screen: 100 for shares."""
    return 100.0 if measure_of(key).kind == "share" else 1.0


def places(key: str, values: Iterable[float], error: float | None = None) -> int:
    """Return how many decimals a measure's shown values get.

    Parameters
    ----------
    values : numbers
        As shown (shares already in per cent).
    error : float, optional
        Half the width of the Monte Carlo interval, as shown: no digit below a tenth of it.
    """
    base, kind = split(key)[0], measure_of(key).kind
    count = _OWN_PLACES.get(base, _PLACES[kind])
    if kind == "count":
        given = np.array([*values], dtype=np.float64)
        whole = np.abs(given[np.isfinite(given)])
        entire = bool(np.all(whole == np.round(whole)))
        count = 0 if entire or float(whole.max(initial=0.0)) >= 100 else 1
    if error is not None and error > 0:
        count = min(count, max(0, 1 - math.floor(math.log10(error))))
    return count


def number(value: float, decimals: int) -> str:
    """Return a number for people: true minus sign, thin spaces between thousands."""
    if math.isnan(value):
        return "–"
    if math.isinf(value):
        return "∞" if value > 0 else "−∞"
    text = f"{round(value, decimals) + 0.0:,.{decimals}f}"
    return text.replace(",", THIN).replace("-", "−")


def shown(key: str, value: float, decimals: int) -> str:
    """Return a measure's shown value; a chance is never rounded to certainty."""
    least = 10.0**-decimals
    if split(key)[0] in CHANCES:
        if 0.0 < value < least / 2:
            return f"< {number(least, decimals)}"
        if 100.0 - least / 2 <= value < 100.0:
            return f"> {number(100.0 - least, decimals)}"
    if split(key)[0] in ("adults", "donor_adults") and decimals == 0 and 0.0 < value < 1.0:
        return "< 1"  # the population is gone: no rounding up to an animal
    return number(value, decimals)


def plain(text: str) -> str:
    """Return a shown number as a spreadsheet reads it: no thin spaces, a hyphen for minus."""
    return text.replace(THIN, "").replace("−", "-")


def unit_text(comparison: Comparison, key: str) -> str:
    """Return the unit of a measure, with the currency's name where there is none."""
    return comparison.unit(key)


def year_text(year: float) -> str:
    """Return a year, with a decimal where a generation ends within one."""
    return f"{year:.0f}" if abs(year - round(year)) < 0.05 else f"{year:.1f}"


# curves


@dataclass(frozen=True, slots=True, eq=False)
class Curve:
    """What a chart draws for one plan: years and shown values, both (n,), n at most G + 1.

    `gone_by` is the year by which fewer than one adult is left, where the values end for that.
    """

    plan: str
    depth: Depth
    years: FloatArray
    values: FloatArray
    gone_by: float | None = None


@dataclass(frozen=True, slots=True, eq=False)
class Fan:
    """Bands of the shown values of one plan, each (n,): 5 to 95 % and 25 to 75 %."""

    depth: Depth
    years: FloatArray
    q05: FloatArray
    q25: FloatArray
    q50: FloatArray
    q75: FloatArray
    q95: FloatArray


def length(comparison: Comparison, plan: str, key: str) -> int:
    """Return how many values of a measure are shown: none of genetics once nobody is left."""
    gone = comparison.gone_after(plan)
    if gone is None or split(key)[0] in GO_ON_WHEN_GONE:
        return int(comparison.years.size)
    return gone


def curve(comparison: Comparison, plan: str, key: str) -> Curve | None:
    """Return the line of one plan, or nothing where the measure was not computed for it."""
    series = comparison.best(plan, key)
    if series is None:
        return None
    count = length(comparison, plan, key)
    gone = comparison.gone_after(plan)
    told = gone is not None and (count < comparison.years.size or split(key)[0] == "adults")
    return Curve(
        plan,
        series.depth,
        comparison.years[:count],
        series.values[:count] * scale(key),
        float(comparison.years[gone]) if told and gone is not None else None,
    )


def fan(comparison: Comparison, plan: str, key: str) -> Fan | None:
    """Return the bands of one plan at the deepest depth that has them, or nothing."""
    count, times = length(comparison, plan, key), scale(key)
    for depth in ("simulated", "exact"):
        found = [comparison.get(plan, depth, key, q) for q in ("q05", "q25", "q50", "q75", "q95")]
        held = [series.values[:count] * times for series in found if series is not None]
        if len(held) == len(found):
            return Fan(depth, comparison.years[:count], *held)
    return None


def depths_shown(comparison: Comparison, keys: Iterable[str]) -> tuple[Depth, ...]:
    """Return the depths from which the lines of these measures come, each once."""
    found: list[Depth] = []
    for key in keys:
        series = next(
            (s for plan in comparison.plans if (s := comparison.best(plan, key)) is not None), None
        )
        if series is not None and series.depth not in found:
            found.append(series.depth)
    return tuple(found)


def extent(
    comparison: Comparison, key: str, also: Iterable[float] = (), fans: bool = False
) -> tuple[float, float]:
    """Return the round range of shown values over all plans, so that hiding one moves nothing.

    Parameters
    ----------
    also : numbers
        Values that must be in the range too, such as targets.
    fans : bool
        Whether bands are drawn.
    """
    base = split(key)[0]
    if base in _WHOLE_RANGE:
        return 0.0, scale(key)
    held = [value for _, value in references(comparison, key)] + list(also)
    for plan in comparison.plans:
        line = curve(comparison, plan, key)
        if line is not None:
            held.extend(line.values.tolist())
        bands = fan(comparison, plan, key) if fans else None
        if bands is not None:
            held.extend([*bands.q05.tolist(), *bands.q95.tolist()])
    finite = [value for value in held if math.isfinite(value)] or [0.0, 1.0]
    low = min(finite)
    if base in _FROM_ZERO:
        low = min(0.0, low)
        if max(finite) <= low:
            return low, low + 1.0
    return round_range(low, max(finite))


def references(comparison: Comparison, key: str) -> tuple[tuple[str, float], ...]:
    """Return the reference lines of a measure as (words, shown value)."""
    base = split(key)[0]
    fixed = {
        "inbreeding": ("F = 0", 0.0),
        "yearly_growth": ("neither grows nor declines", 1.0),
        "trait_lag": ("at the optimum", 0.0),
    }
    if base in fixed:
        return (fixed[base],)
    if base in ("gene_diversity", "gene_diversity_kept", "additive_variance_kept", "adults"):
        series = comparison.best(comparison.plans[0], key)
        if series is not None:
            return (("start", float(series.values[0]) * scale(key)),)
    return ()


@dataclass(frozen=True, slots=True)
class TargetMark:
    """A target on a chart: where it stands (its year included), which side is met, whose it is.

    `number` counts the targets of the case from 1.
    """

    number: int
    year: float
    value: float
    at_least: bool
    words: str


def target_marks(case: Case, key: str) -> tuple[TargetMark, ...]:
    """Return the targets on one measure, a mark for each bound."""
    marks = []
    for count, target in enumerate(case.targets, start=1):
        if target.measure != key:
            continue
        for bound, at_least in ((target.at_least, True), (target.at_most, False)):
            if bound is None:
                continue
            value = round(float(bound.best) * scale(key), 10)  # 0.07 is 7 %, not 7.000000000000001
            sign = "≥" if at_least else "≤"
            words = f"{sign} {value:g}, {target.owner or 'owner not stated'}"
            marks.append(TargetMark(count, float(target.by_year.best), value, at_least, words))
    return tuple(marks)


# read-outs and text


def letter(comparison: Comparison, plan: str) -> str:
    """Return the letter of a plan."""
    return mark(comparison.marks[comparison.plans.index(plan)]).letter


def column_places(
    comparison: Comparison, key: str, plans: Sequence[str], at: Sequence[int] | None = None
) -> int:
    """Return the decimals that all plans' values of a measure share."""
    values: list[FloatArray] = [np.zeros(0)]
    error = 0.0
    for plan in comparison.plans if len(plans) < 2 else plans:
        line = curve(comparison, plan, key)
        if line is None:
            continue
        chosen = slice(None) if at is None else [t for t in at if t < line.values.size]
        values.append(line.values[chosen])
        error = max(error, _error(comparison.best(plan, key)) * scale(key))
    return places(key, np.concatenate(values), error or None)


def _error(series: Series | None) -> float:
    if series is None or series.low is None or series.high is None:
        return 0.0
    width = np.asarray(series.high - series.low)
    finite = width[np.isfinite(width)]
    return float(finite.max()) / 2 if finite.size else 0.0


def describe(comparison: Comparison, key: str, plans: Sequence[str]) -> str:
    """Return a chart in words: measure, unit, years, and each plan's start and end."""
    years = comparison.years
    head = (
        f"{title(key)}, {unit_text(comparison, key)}, "
        f"{year_text(float(years[0]))} to {year_text(float(years[-1]))}."
    )
    decimals = column_places(comparison, key, comparison.plans)
    return " ".join([head, *(_course(comparison, key, plan, decimals) for plan in plans)])


def _course(comparison: Comparison, key: str, plan: str, decimals: int) -> str:
    line = curve(comparison, plan, key)
    name = f"{letter(comparison, plan)} {plan}"
    if line is None:
        return f"{name}: not projected."
    if not line.values.size:
        return f"{name}: the population is gone from the start."
    start, end = (shown(key, float(line.values[t]), decimals) for t in (0, -1))
    words = f"{name}: {start} to {end}"
    if line.gone_by is not None:
        words += f", fewer than one adult left by {year_text(line.gone_by)}"
    return f"{words}."


def time_ticks(comparison: Comparison, axis: str, most: int) -> tuple[tuple[float, str], ...]:
    """Return (year, label) of the ticks of the time axis, in `years` or `generations`."""
    first, last = float(comparison.years[0]), float(comparison.years[-1])
    if axis == "years":
        whole = ticks(0.0, last - first, most, whole=True)  # counted from the start
        return tuple((first + after, f"{first + after:.0f}") for after in whole)
    span = (last - first) / comparison.generation_years
    return tuple(
        (first + k * comparison.generation_years, f"{k:.0f}")
        for k in ticks(0.0, span, most, whole=True)
    )
