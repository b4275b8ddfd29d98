"""Ratios taken inside one run: cases in turn, one ratio a round, medians judged.

A machine's speed drifts, so two times are only compared when they were taken one after the other.
A bar fails where the median misses it and two thirds of the rounds miss it too.
"""

from __future__ import annotations

import statistics
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field


@dataclass(frozen=True)
class Row:
    """One line of the table: what was measured in each round, and the bar it is held to."""

    name: str
    rounds: Sequence[float]
    at_least: float | None = None
    at_most: float | None = None
    unit: str = "×"
    note: str = ""
    absolute: str = ""

    @property
    def median(self) -> float:
        return statistics.median(self.rounds)

    @property
    def held(self) -> bool:
        missed = [not self._meets(value) for value in self.rounds]
        return self._meets(self.median) or sum(missed) < 2 * len(missed) / 3

    @property
    def bar(self) -> str:
        if self.at_least is not None:
            return f"≥ {self.at_least:g} {self.unit}"
        return f"≤ {self.at_most:g} {self.unit}" if self.at_most is not None else "reported"

    def _meets(self, value: float) -> bool:
        above = self.at_least is None or value >= self.at_least
        return above and (self.at_most is None or value <= self.at_most)


def seconds(work: Callable[[], object]) -> float:
    """Return how long one call takes."""
    begun = time.perf_counter()
    work()
    return time.perf_counter() - begun


@dataclass
class Pair:
    """Two ways to the same result, timed in turn."""

    slow: Callable[[], object]
    fast: Callable[[], object]
    slow_times: float = 1.0  # how many times `slow` would have to run for the whole job
    fast_calls: int = 1
    slow_seconds: list[float] = field(default_factory=list)
    fast_seconds: list[float] = field(default_factory=list)

    def ratios(self, rounds: int = 7) -> list[float]:
        """Return slow / fast of each round."""
        self.slow(), self.fast()
        for _ in range(rounds):
            self.slow_seconds.append(seconds(self.slow) * self.slow_times)
            spent = seconds(lambda: [self.fast() for _ in range(self.fast_calls)])
            self.fast_seconds.append(spent / self.fast_calls)
        return [a / b for a, b in zip(self.slow_seconds, self.fast_seconds, strict=True)]

    @property
    def absolute(self) -> str:
        slow, fast = statistics.median(self.slow_seconds), statistics.median(self.fast_seconds)
        return f"{1e3 * slow:.4g} ms : {1e3 * fast:.4g} ms"
