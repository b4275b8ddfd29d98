"""What a projection gives: labelled, read-only series that carry the hash of their inputs."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.filled import step_of
from rescue_planner.case.measures import unit

Depth = Literal["expected", "exact", "simulated"]
Statistic = Literal["mean", "sd", "q05", "q25", "q50", "q75", "q95", "share"]

DEPTHS: tuple[Depth, ...] = ("expected", "exact", "simulated")
STATISTICS: tuple[Statistic, ...] = ("mean", "sd", "q05", "q25", "q50", "q75", "q95", "share")
DEPTH_NAMES: dict[str, str] = {
    "expected": "average course",
    "exact": "one-locus odds",
    "simulated": "simulated animals",
}

FloatArray = NDArray[np.float64]


def read_only(values: FloatArray) -> FloatArray:
    """Return a copy that cannot be written to."""
    kept = np.array(values, dtype=np.float64)
    kept.setflags(write=False)
    return kept


@dataclass(frozen=True, slots=True, eq=False)
class Series:
    """One statistic of one measure of one plan; `values` is (G + 1,), indexed by t.

    `low` and `high` are the 95 % Monte Carlo interval where the statistic has one.
    """

    plan: str
    depth: Depth
    measure: str
    statistic: Statistic
    values: FloatArray
    low: FloatArray | None = None
    high: FloatArray | None = None


@dataclass(frozen=True, slots=True)
class RuleEvent:
    """A rule that acted: which, at which t and year, and what it read."""

    plan: str
    rule: str
    t: int
    year: float
    sentence: str


@dataclass(frozen=True, slots=True, eq=False)
class Comparison:
    """Every plan of one case projected on one set of assumptions.

    `key` is the hash of the inputs; a screen shows a comparison only where the key is that of
    the case it shows. `years` is (G + 1,), the year of each t.
    """

    key: str
    case_hash: str
    title: str
    what_if: str | None
    program_version: str
    seed: int
    start_year: float
    generation_years: float
    currency: str | None
    years: FloatArray
    plans: tuple[str, ...]
    marks: tuple[int, ...]
    measures: tuple[str, ...]
    depths: tuple[Depth, ...]
    series: tuple[Series, ...]
    events: tuple[RuleEvent, ...] = ()
    not_applied: tuple[str, ...] = ()
    capped: tuple[str, ...] = ()
    _found: dict[tuple[str, str, str, str], Series] = field(default_factory=dict, repr=False)

    def __post_init__(self) -> None:
        self._found.update({(s.plan, s.depth, s.measure, s.statistic): s for s in self.series})

    def get(self, plan: str, depth: str, measure: str, statistic: str = "mean") -> Series | None:
        """Return one series, or nothing where it was not computed."""
        return self._found.get((plan, depth, measure, statistic))

    def best(self, plan: str, measure: str) -> Series | None:
        """Return the series a chart's line shows: exact share or mean where there is one.

        The expected mean is the fallback.
        """
        for depth, statistic in (
            ("simulated", "share"),
            ("simulated", "mean"),
            ("exact", "share"),
            ("exact", "mean"),
            ("expected", "mean"),
        ):
            found = self.get(plan, depth, measure, statistic)
            if found is not None:
                return found
        return None

    def index_at(self, year: float) -> int:
        """Return the last t reached by `year`: 0 before the start, G after the horizon."""
        t = step_of(year, self.start_year, self.generation_years)
        return min(max(t, 0), self.years.size - 1)

    def unit(self, measure: str) -> str:
        """Return the unit of a measure, money in the case's currency."""
        return unit(measure, self.currency)

    def gone_after(self, plan: str) -> int | None:
        """Return the first t at which fewer than one adult is left, or nothing."""
        adults = self.get(plan, "expected", "adults")
        if adults is None:
            return None
        gone = np.flatnonzero(adults.values < 1.0)
        return int(gone[0]) if gone.size else None
