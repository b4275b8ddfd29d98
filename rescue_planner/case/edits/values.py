"""Edits of single values, their ranges and their sources."""

from __future__ import annotations

from typing import Any

from rescue_planner.case import fields
from rescue_planner.case.document import Case
from rescue_planner.case.edits.base import Edit, Value, done, given, plain
from rescue_planner.case.paths import Path, drop, get, steps_of
from rescue_planner.case.quantity import Quantity
from rescue_planner.case.raw import to_raw
from rescue_planner.case.spoken import spoken_place, spoken_value


def set_value(case: Case, path: str | Path, value: Value | None) -> Edit:
    """Give a field a new value, or leave it out.

    Parameters
    ----------
    case : Case
        The case before.
    path : str or Path
        Where, as in `plans[1].releases[0].who.females`.
    value : float, str, bool, Quantity, mapping, list or None
        The new value; None leaves the field out. A plain number replaces `best` and keeps range,
        origin and source; a Quantity replaces all of them.

    Raises
    ------
    InvalidCase
        When the value is wrong, or the field is needed.
    KeyError
        When the path leads nowhere.
    """
    raw, steps = to_raw(case), steps_of(path)
    name = spoken_place(raw, steps)
    if value is None:
        return done(f"Leave out {name}", _without(raw, steps))
    new = plain(value)
    held = _held(raw, steps)
    if isinstance(held, dict) and "best" in held and _is_plain_number(value):
        new = {**held, "best": new}
    return done(f"Set {name} to {spoken_value(value)}", fields.put_filled(raw, steps, new))


def set_range(
    case: Case, path: str | Path, low: float | None, high: float | None, **about: str | None
) -> Edit:
    """Give a number a range; `about` may hold shape, origin, source, date and by.

    What is None is left out; what is not named stays as it was. A field that was left out takes
    its default as best value.

    Raises
    ------
    InvalidCase
        When low, best and high are out of order, or the field has no value yet.
    """
    raw, steps = to_raw(case), steps_of(path)
    held = {**_quantity(raw, steps), "low": low, "high": high, **about}
    name = spoken_place(raw, steps)
    parts = (low, high)
    words = " to ".join("?" if one is None else f"{one:.12g}" for one in parts)
    what = f"Set the range of {name} to {words}"
    if parts == (None, None):
        what = f"Leave out the range of {name}"
    return done(what, fields.put_filled(raw, steps, _short(held)))


def set_source(case: Case, path: str | Path, **about: str | None) -> Edit:
    """Say where a number comes from: origin, source, date, by; None leaves one out.

    Raises
    ------
    InvalidCase
        When a word is wrong, or the field has no value yet.
    """
    raw, steps = to_raw(case), steps_of(path)
    held = {**_quantity(raw, steps), **about}
    words = ", ".join(value for value in about.values() if value) or "not stated"
    sentence = f"Set the source of {spoken_place(raw, steps)}: {words}"
    return done(sentence, fields.put_filled(raw, steps, _short(held)))


def _is_plain_number(value: object) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool)


def _held(raw: dict[str, Any], steps: Path) -> Any:  # noqa: ANN401
    try:
        return get(raw, steps)
    except KeyError:
        return None


def _quantity(raw: dict[str, Any], steps: Path) -> dict[str, Any]:
    held = fields.filled_at(raw, steps)
    if held is None:
        return {}
    return dict(held) if isinstance(held, dict) else {"best": held}


def _short(held: dict[str, Any]) -> Any:  # noqa: ANN401
    kept = {name: value for name, value in held.items() if value is not None}
    known = {name: kept[name] for name in Quantity.model_fields if name in kept}
    return kept["best"] if kept.keys() == {"best"} else {**known, **given(kept)}


def _without(raw: dict[str, Any], steps: Path) -> dict[str, Any]:
    """Return `raw` without the field, and without parts that this leaves empty."""
    if not isinstance(steps[-1], str):
        raise KeyError("an entry of a list is removed by its own edit")
    try:
        raw = drop(raw, steps)
    except KeyError:
        return raw  # it was left out already
    holder = steps[:-1]
    while holder and get(raw, holder) == {} and fields.default_at(holder) == {}:
        raw = drop(raw, holder)
        holder = holder[:-1]
    return raw
