"""Several plans in one walk: each plan is a column, so a step costs about as much as for one.

The cost of a step is that of calling numpy on small arrays, not of the numbers in them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import fields, is_dataclass, replace
from typing import Any, TypeVar, cast

import numpy as np

from rescue_planner.projection.expected import Course, Step, expected_course
from rescue_planner.projection.rules import RuleBook
from rescue_planner.projection.schedule import ReleaseNumbers, Schedule, nobody
from rescue_planner.projection.setup import RuleSetup, Setup

T = TypeVar("T")
_ALIKE = ("donor_drifts",)  # arrays without a column axis


def courses(setups: Sequence[Setup]) -> tuple[Course, ...]:
    """Return the average course of each plan of one case, walked together.

    Parameters
    ----------
    setups : sequence
        Plans of the same case, each with one column (its best values).
    """
    if not setups:
        return ()
    whole = expected_course(_joined(setups))
    return tuple(_column(whole, setup, i) for i, setup in enumerate(setups))


def _joined(setups: Sequence[Setup]) -> Setup:
    first = setups[0]
    names = ("plans", "rules", "schedule", "loci")
    merged = {
        part.name: _beside([getattr(one, part.name) for one in setups], 0)
        for part in fields(Setup)
        if part.name not in (*names, *_ALIKE)
    }
    return replace(
        first,
        **merged,
        plans=tuple(one.plan for one in setups),
        loci=tuple(_beside(list(same), 0) for same in zip(*(s.loci for s in setups), strict=True)),
        schedule=_schedule([one.schedule for one in setups]),
        rules=tuple(_spread(r, i, len(setups)) for i, s in enumerate(setups) for r in s.rules),
    )


def _schedule(schedules: list[Schedule]) -> Schedule:
    """Put schedules of one column each beside one another."""
    first, count = schedules[0], len(schedules)
    none = nobody(1, first.donors)
    steps = zip(*(one.arrivals for one in schedules), strict=True)
    return Schedule(
        draws=count,
        donors=first.donors,
        arrivals=[
            _beside([one or none for one in step], 0) if any(step) else None for step in steps
        ],
        **{
            name: np.concatenate([getattr(one, name) for one in schedules], axis=1)
            for name in ("action_cost", "size_times", "capacity_times", "first_year_times")
        },
    )


def _beside(parts: list[T], axis: int) -> T:
    """Put the arrays of equal parts beside one another; what is no array is the same in all."""
    first = parts[0]
    if isinstance(first, np.ndarray):
        return cast(T, np.concatenate(cast(list[Any], parts), axis=axis))
    if is_dataclass(first) and not isinstance(first, type):
        return cast(
            T,
            replace(
                first,
                **{
                    part.name: _beside([getattr(one, part.name) for one in parts], axis)
                    for part in fields(first)
                },
            ),
        )
    return first


def _spread(entry: RuleSetup, column: int, count: int) -> RuleSetup:
    """Give a rule of one plan its own column among all."""
    where = np.zeros(count, dtype=bool)
    where[column] = True
    release = entry.release
    if release is not None:
        release = ReleaseNumbers(
            release.donor,
            *(
                np.repeat(getattr(release, part.name), count)
                for part in fields(release)
                if part.name != "donor"
            ),
        )
    return RuleSetup(entry.rule, entry.plan, where, release)


def _column(whole: Course, setup: Setup, i: int) -> Course:
    """Return one plan's course out of the walk of all."""
    own = slice(i, i + 1)
    book = whole.book
    return Course(
        setup=setup,
        values={measure: values[own] for measure, values in whole.values.items()},
        steps=tuple(
            Step(
                step.mothers[own],
                step.fathers[own],
                step.shares[own],
                step.newcomers[own],
                step.ne[own],
                still=not step.newcomers[i],
            )
            for step in whole.steps
        ),
        between=tuple(at[own] for at in whole.between),
        donors=tuple(at[own] for at in whole.donors),
        capped=tuple(at[own] for at in whole.capped),
        book=RuleBook(
            book.stopped[own],
            [],
            [event for event in book.events if event.plan == setup.plan],
            [entry for entry in book.not_applied if entry.plan == setup.plan],
        ),
    )
