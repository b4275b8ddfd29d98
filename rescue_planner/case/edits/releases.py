"""Edits of many releases of a plan at once: each one step for undo."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from rescue_planner.case.document import Case
from rescue_planner.case.edits.base import Edit, Raw, append, done, index_of, removed, renumbered
from rescue_planner.case.edits.plans import RELEASE, with_release
from rescue_planner.case.paths import Path, get, put
from rescue_planner.case.raw import to_raw

Values = Mapping[str, Any]


def change_releases(
    case: Case,
    plan: str,
    sentence: str,
    changes: Mapping[int, Values],
    added: Sequence[Values] = (),
) -> Edit:
    """Change values of several releases, and add others at the end.

    Parameters
    ----------
    case, plan, sentence
        Where, and what the undo menu says.
    changes
        By release: values by the names of `add_release`. A plain number keeps the range and the
        source that are held with it, None leaves a value out.
    added
        The values of each new release.

    Raises
    ------
    KeyError
        When there is no such plan or release.
    InvalidCase
        When a changed or new release is wrong.
    """
    raw = to_raw(case)
    path = _listed(raw, plan)
    for index, values in changes.items():
        held = get(raw, (*path, index))
        raw = put(raw, (*path, index), with_release(held, _kept(held, values)))
    for values in added:
        raw = append(raw, path, with_release({}, values))
    return done(sentence, raw)


def _kept(held: Raw, values: Values) -> Values:
    """Return the values, plain numbers with the range and source that are held with them."""
    return {name: _beside(held, RELEASE[name], value) for name, value in values.items()}


def _beside(held: Raw, path: Path, value: Any) -> Any:  # noqa: ANN401 - whatever the file may hold
    try:
        before = get(held, path)
    except KeyError:
        return value
    plain = isinstance(value, int | float) and not isinstance(value, bool)
    return {**before, "best": value} if plain and isinstance(before, dict) else value


def _listed(raw: Raw, plan: str) -> Path:
    return ("plans", index_of(raw, "plans", plan), "releases")


def order_releases(case: Case, plan: str, sentence: str, order: Sequence[int]) -> Edit:
    """Put the releases into another order: `order` holds the old place of each.

    What-ifs and answers to remarks follow.

    Raises
    ------
    KeyError
        When there is no such plan, or `order` does not hold every place once.
    """
    raw = to_raw(case)
    path = _listed(raw, plan)
    held = raw["plans"][path[1]].get("releases") or []
    if sorted(order) != list(range(len(held))):
        raise KeyError(f"{list(order)} is not an order of {len(held)} releases")
    moved = put(raw, path, [held[at] for at in order]) if held else raw
    return done(sentence, renumbered(moved, path, list(order).index))


def remove_releases(case: Case, plan: str, sentence: str, places: Sequence[int]) -> Edit:
    """Remove several releases.

    Raises
    ------
    KeyError
        When there is no such plan or release.
    InvalidCase
        When a what-if changes just one of these releases.
    """
    raw = to_raw(case)
    for place in sorted(set(places), reverse=True):
        raw = removed(raw, _listed(raw, plan), place)
    return done(sentence, raw)
