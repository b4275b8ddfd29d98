"""Rules at the expected depth: they read expected values at t and act on step t."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.filled import TOLERANCE_STEPS
from rescue_planner.case.measures import title
from rescue_planner.case.plans import Rule
from rescue_planner.projection.results import RuleEvent
from rescue_planner.projection.setup import Setup

FloatArray = NDArray[np.float64]


@dataclass(slots=True, eq=False)
class RuleBook:
    """Which rules have acted so far; arrays are (n,), `fired` one entry a rule."""

    stopped: NDArray[np.bool_]
    fired: list[NDArray[np.int64]]
    events: list[RuleEvent] = field(default_factory=list)
    not_applied: list[str] = field(default_factory=list)


def open_book(setup: Setup) -> RuleBook:
    """Return the book before the first step."""
    n = setup.draws
    return RuleBook(np.zeros(n, dtype=bool), [np.zeros(n, dtype=np.int64) for _ in setup.rules])


def act(book: RuleBook, setup: Setup, t: int, values: Mapping[str, FloatArray]) -> None:
    """Let every rule read `values` at t; stops first, so that no release slips past one."""
    for then in ("stop", "release"):
        for index, rule in enumerate(setup.rules):
            if rule.then == then:
                _one(book, setup, t, index, values)


def _one(
    book: RuleBook, setup: Setup, t: int, index: int, values: Mapping[str, FloatArray]
) -> None:
    rule = setup.rules[index]
    if rule.when not in values:
        name = f"{setup.plan}: {rule.name}"
        if name not in book.not_applied:
            book.not_applied.append(name)
        return
    value = values[rule.when]
    met = _met(rule, value) & ~book.stopped
    if rule.then == "stop":
        if met[0]:
            book.events.append(_event(setup, rule, t, float(value[0]), "releases stop"))
        book.stopped |= met
        return
    numbers = setup.schedule.rule_releases[index]
    if numbers is None:
        return
    acts = met & (book.fired[index] < int(rule.at_most.best))
    book.fired[index] += acts
    delay = float(rule.delay_years.best)
    at = int(t + delay / setup.generation_years + TOLERANCE_STEPS)
    setup.schedule.add(at, numbers, acts.astype(np.float64))
    if acts[0]:
        year = setup.start_year + t * setup.generation_years + delay
        book.events.append(
            _event(setup, rule, t, float(value[0]), f"a release is set for {year:g}")
        )


def _met(rule: Rule, value: FloatArray) -> NDArray[np.bool_]:
    met = np.ones(value.shape, dtype=bool)
    if rule.above is not None:
        met &= value > float(rule.above.best)
    if rule.below is not None:
        met &= value < float(rule.below.best)
    return met


def _event(setup: Setup, rule: Rule, t: int, value: float, what: str) -> RuleEvent:
    year = setup.start_year + t * setup.generation_years
    bounds = [
        f"above {rule.above.best:g}" if rule.above is not None else "",
        f"below {rule.below.best:g}" if rule.below is not None else "",
    ]
    bound = " and ".join(word for word in bounds if word)
    sentence = f"{year:g}: {title(rule.when)} is {value:.4g}, {bound}: {what}."
    return RuleEvent(setup.plan, rule.name, t, year, sentence)
