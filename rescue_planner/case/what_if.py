"""What-ifs: a case with some assumptions changed, for all plans at once."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from rescue_planner.case import fields
from rescue_planner.case.document import Case, Change, WhatIf
from rescue_planner.case.faults import InvalidCase, Problem
from rescue_planner.case.paths import Path, format_path, steps_of
from rescue_planner.case.problems import read_case
from rescue_planner.case.raw import to_raw
from rescue_planner.case.tolerant import value_at

Raw = dict[str, Any]
_NUMBERS = ("best", "low", "high")


@dataclass(frozen=True, slots=True)
class ChangedValue:
    """One value that a what-if changes, as the file writes numbers; `before` None: left out."""

    path: str
    before: Any
    after: Any


def what_if_of(case: Case, name: str) -> WhatIf:
    """Return the what-if called `name`.

    Raises
    ------
    KeyError
        When there is none.
    """
    for what_if in case.what_ifs:
        if what_if.name == name:
            return what_if
    raise KeyError(name)


def applied(case: Case, name: str) -> Case:
    """Return the case under a what-if.

    `times` multiplies best, low and high; a field that was left out counts with its default.
    `set` replaces the value. Changes act one after the other.

    Raises
    ------
    KeyError
        When there is no what-if of that name.
    InvalidCase
        When a change makes a problem, such as a share above 1.
    """
    raw = to_raw(case)
    for path, _, after in _changes(raw, what_if_of(case, name)):
        raw = fields.put_filled(raw, path, after)
    try:
        return read_case(raw)
    except InvalidCase as invalid:
        told = (Problem(p.path, f"Under the what-if “{name}”: {p.text}") for p in invalid.problems)
        raise InvalidCase(told) from None


def changed_values(case: Case, name: str) -> tuple[ChangedValue, ...]:
    """Return every value that a what-if changes, before and after all its changes.

    Raises
    ------
    KeyError
        When there is no what-if of that name.
    """
    before: dict[Path, Any] = {}
    after: dict[Path, Any] = {}
    for path, old, new in _changes(to_raw(case), what_if_of(case, name)):
        before.setdefault(path, old)
        after[path] = new
    return tuple(ChangedValue(format_path(path), before[path], new) for path, new in after.items())


def _changes(raw: Raw, what_if: WhatIf) -> Iterator[tuple[Path, Any, Any]]:
    """Yield path, value before and value after of each change, in turn."""
    for change in what_if.changes:
        for path in tuple(fields.matches(raw, steps_of(change.path))):
            old = _held(raw, path)
            new = _changed(old, change)
            if new is not None:
                yield path, old, new
                raw = fields.put_filled(raw, path, new)


def _held(raw: Raw, path: Path) -> Any:  # noqa: ANN401
    held = fields.filled_at(raw, path)
    return _derived(raw, path) if held is None else held


def _derived(raw: Raw, path: Path) -> float | None:
    """Return the default of a field whose default follows from another one."""
    if path[0] == "plans" and len(path) == 3 and path[2] == "effective_size":
        return value_at(raw, "recipient", "effective_size")
    halves = ("adult_females", "breeding_females", "breeding_males")
    if path[0] == "recipient" and len(path) == 2 and path[1] in halves:
        adults = value_at(raw, "recipient", "adults")
        return None if adults is None else adults / 2
    return None


def _changed(held: Any, change: Change) -> Any:  # noqa: ANN401
    if change.set is not None:
        return change.set.model_dump(mode="json", exclude_unset=True)
    if change.times is None or held is None:
        return None
    factor = change.times.best
    if isinstance(held, dict):
        scaled = {k: v * factor if k in _NUMBERS and v is not None else v for k, v in held.items()}
        if factor < 0:  # low and high change places
            scaled |= {"low": scaled.get("high"), "high": scaled.get("low")}
        return scaled
    return held * factor
