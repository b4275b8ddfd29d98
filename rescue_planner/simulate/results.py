"""What came of a run, replicate by replicate, and its summaries with Monte Carlo intervals.

Axes: R replicates, Y + 1 censuses, M measures. Intervals cover chance among replicates only, not
what isn't known about the inputs.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray
from scipy.special import bdtrik, ndtri

from rescue_planner.simulate.measures import GENETIC
from rescue_planner.theory.sample_size import wilson_interval

FloatArray = NDArray[np.float64]

_Z = float(ndtri(0.975))


class Summary(NamedTuple):
    """A statistic at each census, (Y + 1,): value, 95 % interval, replicates it is taken over."""

    value: FloatArray
    low: FloatArray
    high: FloatArray
    runs: NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class Results:
    """All censuses of all replicates.

    Parameters
    ----------
    measures : tuple of M names
    values : (R, Y + 1, M) array
        NaN for genetic measures where there is no adult.
    acted : (R, rules, Y) array
        How often each rule acts in each year.
    kinship_moved, diversity_moved : float
        Largest change to the founders' kinship, and error in marker diversity, 0 for none: the
        given set was not possible.
    """

    measures: tuple[str, ...]
    values: FloatArray
    acted: NDArray[np.int64]
    kinship_moved: float = 0.0
    diversity_moved: float = 0.0

    def __post_init__(self) -> None:
        self.values.setflags(write=False)
        self.acted.setflags(write=False)

    def of(self, measure: str) -> FloatArray:
        """Return a measure of each replicate and census, (R, Y + 1)."""
        return self.values[:, :, self.measures.index(measure)]

    def mean(self, measure: str) -> Summary:
        """Return the mean over replicates; genetic measures over those that still have adults."""
        values = self.of(measure)
        there = ~np.isnan(values)
        runs = there.sum(axis=0)
        safe = np.maximum(runs, 1)
        mean = np.where(there, values, 0.0).sum(axis=0) / safe
        squares = np.where(there, values - mean, 0.0) ** 2
        sd = np.sqrt(squares.sum(axis=0) / np.maximum(runs - 1, 1))
        half = np.where(runs > 1, _Z * sd / np.sqrt(safe), np.nan)
        value = np.where(runs > 0, mean, np.nan)
        return Summary(value, value - half, value + half, runs)

    def sd(self, measure: str) -> Summary:
        """Return the standard deviation among replicates; no interval."""
        values = self.of(measure)
        runs = (~np.isnan(values)).sum(axis=0)
        out = np.full(values.shape[1], np.nan)
        for t in np.flatnonzero(runs > 1):
            out[t] = np.std(values[~np.isnan(values[:, t]), t], ddof=1)
        none = np.full_like(out, np.nan)
        return Summary(out, none, none.copy(), runs)

    def quantile(self, measure: str, q: float) -> Summary:
        """Return a quantile among replicates, with the interval of its order statistics.

        The smallest value that at least a share q of the replicates does not exceed.
        """
        values = self.of(measure)
        runs = (~np.isnan(values)).sum(axis=0)
        out = np.full((3, values.shape[1]), np.nan)
        for t in np.flatnonzero(runs > 0):
            n = int(runs[t])
            ranked = np.sort(values[~np.isnan(values[:, t]), t])
            ranks = [
                int(np.ceil(q * n - 1e-9)) - 1,
                _rank(0.025, n, q) - 1,
                _rank(0.975, n, q),
            ]
            out[:, t] = ranked[np.clip(ranks, 0, n - 1)]
        return Summary(out[0], out[1], out[2], runs)

    def share(self, met: NDArray[np.bool_], counted: NDArray[np.bool_] | None = None) -> Summary:
        """Return how often something is met, (R, Y + 1), with Wilson's interval.

        `counted` marks the replicates that count, all where None.
        """
        counted = np.ones_like(met) if counted is None else counted
        runs = counted.sum(axis=0)
        hits = (met & counted).sum(axis=0)
        safe = np.maximum(runs, 1)
        low, high = wilson_interval(np.minimum(hits, safe), safe)
        gone = runs == 0
        value = np.where(gone, np.nan, hits / safe)
        return Summary(value, np.where(gone, np.nan, low), np.where(gone, np.nan, high), runs)

    def persists(self) -> Summary:
        """Return the share of replicates that have persisted up to each census."""
        return self.share(self.of("persists") == 1.0)

    def falls_below(self, adults: float) -> Summary:
        """Return the share of replicates that have ever had fewer adults, up to each census."""
        return self.share(np.minimum.accumulate(self.of("adults"), axis=1) < adults)

    def allele_kept(self, locus: int) -> Summary:
        """Return the share of replicates with adults in which the named allele is still there."""
        p = self.of(f"allele_frequency:{locus}")
        return self.share(p > 0.0, ~np.isnan(p))

    def allele_fixed(self, locus: int) -> Summary:
        """Return the share of replicates with adults in which the named allele is alone."""
        p = self.of(f"allele_frequency:{locus}")
        return self.share(p >= 1.0, ~np.isnan(p))

    def realised_effective_size(self, generation_years: float) -> FloatArray:
        """Return Ne over the generation up to each census, (Y + 1,); NaN before one has passed.

        1 / (2 [1 - (1 - f_y) / (1 - f_{y-T})]), f the mean over replicates of mean kinship
        without self; f between two censuses lies on the straight line between them. Infinite
        where kinship did not rise.
        """
        f = self.mean("kinship").value
        years = np.arange(f.size)
        before = np.interp(years - generation_years, years, f, left=np.nan)
        lost = 1.0 - (1.0 - f) / (1.0 - before)
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.where(np.isnan(lost), np.nan, np.where(lost > 0.0, 0.5 / lost, np.inf))


def _rank(level: float, n: int, q: float) -> int:
    """Return the smallest k with P(binomial(n, q) <= k) at least `level`."""
    k = float(bdtrik(level, n, q))
    return 0 if np.isnan(k) else int(np.ceil(k - 1e-9))


def is_genetic(measure: str) -> bool:
    """Return whether a measure is read over the replicates that still have adults."""
    return measure in GENETIC or measure.startswith(("donor_ancestry:", "allele_frequency:"))
