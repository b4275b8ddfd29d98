"""Rules at the expected depth: they read expected values at t and act on step t."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.filled import TOLERANCE_STEPS
from rescue_planner.case.measures import measure_of, title
from rescue_planner.case.plans import Rule
from rescue_planner.projection.results import RuleEvent
from rescue_planner.projection.setup import RuleSetup, Setup

FloatArray = NDArray[np.float64]


@dataclass(slots=True, eq=False)
class RuleBook:
    """Which rules have acted so far; arrays are (n,), `fired` one entry a rule."""

    stopped: NDArray[np.bool_]
    fired: list[NDArray[np.int64]]
    events: list[RuleEvent] = field(default_factory=list)
    not_applied: list[RuleSetup] = field(default_factory=list)


def open_book(setup: Setup) -> RuleBook:
    """Return the book before the first step."""
    n = setup.draws
    return RuleBook(np.zeros(n, dtype=bool), [np.zeros(n, dtype=np.int64) for _ in setup.rules])


def act(book: RuleBook, setup: Setup, t: int, values: Mapping[str, FloatArray]) -> None:
    """Let every rule read `values` at t; stops first, so that no release slips past one."""
    for then in ("stop", "release"):
        for index, entry in enumerate(setup.rules):
            if entry.rule.then == then:
                _one(book, setup, t, index, values)


def _one(
    book: RuleBook, setup: Setup, t: int, index: int, values: Mapping[str, FloatArray]
) -> None:
    entry = setup.rules[index]
    rule = entry.rule
    if rule.when not in values:
        if entry not in book.not_applied:
            book.not_applied.append(entry)
        return
    value = values[rule.when]
    met = _met(rule, value) & entry.where & ~book.stopped
    if rule.then == "stop":
        book.stopped |= met
        _note(book, setup, entry, t, np.where(met, value, np.nan), "releases stop")
        return
    if entry.release is None:
        return
    acts = met & (book.fired[index] < int(rule.at_most.best))
    book.fired[index] += acts
    delay = float(rule.delay_years.best)
    at = int(t + delay / setup.generation_years + TOLERANCE_STEPS)
    setup.schedule.add(at, entry.release, acts.astype(np.float64))
    year = setup.start_year + t * setup.generation_years + delay
    _note(book, setup, entry, t, np.where(acts, value, np.nan), f"a release is set for {year:g}")


def _met(rule: Rule, value: FloatArray) -> NDArray[np.bool_]:
    met = np.ones(value.shape, dtype=bool)
    if rule.above is not None:
        met &= value > float(rule.above.best)
    if rule.below is not None:
        met &= value < float(rule.below.best)
    return met


def _note(
    book: RuleBook, setup: Setup, entry: RuleSetup, t: int, read: FloatArray, what: str
) -> None:
    """Write down that a rule acted in the column that stands for its plan.

    `read` holds what the rule read in the columns where it acted, NaN elsewhere.
    """
    value = read[setup.plans.index(entry.plan)]
    if np.isnan(value):
        return
    rule, year = entry.rule, setup.start_year + t * setup.generation_years
    bounds = [
        f"above {_text(rule.when, rule.above.best)}" if rule.above is not None else "",
        f"below {_text(rule.when, rule.below.best)}" if rule.below is not None else "",
    ]
    bound = " and ".join(word for word in bounds if word)
    read_as = _text(rule.when, float(value))
    sentence = f"{year:g}: {title(rule.when)} is {read_as}, {bound}: {what}."
    book.events.append(RuleEvent(entry.plan, rule.name, t, year, sentence))


def _text(measure: str, value: float) -> str:
    """Return a value as people read it: shares in per cent."""
    return f"{100 * value:.4g} %" if measure_of(measure).kind == "share" else f"{value:.4g}"
