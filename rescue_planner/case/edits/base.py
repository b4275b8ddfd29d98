"""What an edit is, and the small steps that all edits share."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from pydantic import BaseModel

from rescue_planner.case.document import Case
from rescue_planner.case.faults import InvalidCase, Problem
from rescue_planner.case.paths import Path, drop, format_path, get, parse_path, put, steps_of
from rescue_planner.case.problems import read_case
from rescue_planner.case.quantity import Quantity
from rescue_planner.case.spoken import spoken_part

Raw = dict[str, Any]
Value = float | str | bool | Quantity | Mapping[str, Any] | list[Any]


@dataclass(frozen=True, slots=True)
class Edit:
    """A new case, and the sentence that the undo menu and the edit trail show."""

    sentence: str
    case: Case


def done(sentence: str, raw: Raw) -> Edit:
    """Return the edit that leads to the plain case `raw`.

    Raises
    ------
    InvalidCase
        When the edited case would not be valid.
    """
    return Edit(sentence, read_case(raw))


def refuse(path: str, text: str) -> InvalidCase:
    """Return the refusal of an edit: one problem, to be raised."""
    return InvalidCase([Problem(path, text)])


def plain(value: Any) -> Any:  # noqa: ANN401 - whatever the file may hold
    """Return a value of the case as the file holds it."""
    if isinstance(value, BaseModel):
        return value.model_dump(mode="json", exclude_unset=True)
    if isinstance(value, Mapping):
        return {str(name): plain(held) for name, held in value.items()}
    return [plain(held) for held in value] if isinstance(value, list | tuple) else value


def given(values: Mapping[str, Any]) -> Raw:
    """Return the values that are not None, as the file holds them."""
    return {name: plain(value) for name, value in values.items() if value is not None}


def index_of(raw: Raw, kind: str, name: str) -> int:
    """Return the place of the entry called `name` in the list `kind`.

    Raises
    ------
    KeyError
        When there is none.
    """
    for place, one in enumerate(raw.get(kind) or ()):
        if one["name"] == name:
            return place
    raise KeyError(name)


def append(raw: Raw, path: str | Path, entry: Any) -> Raw:  # noqa: ANN401
    """Return `raw` with `entry` put at the end of the list at `path`."""
    return inserted(raw, path, None, entry)


def inserted(raw: Raw, path: str | Path, place: int | None, entry: Any) -> Raw:  # noqa: ANN401
    """Return `raw` with `entry` put at `place` of the list at `path` (None: the end)."""
    try:
        held = list(get(raw, path) or ())
    except KeyError:
        held = []
    at = len(held) if place is None else place
    moved = put(raw, path, [*held[:at], plain(entry), *held[at:]])
    return renumbered(moved, steps_of(path), lambda old: old if old < at else old + 1)


def removed(raw: Raw, path: str | Path, place: int) -> Raw:
    """Return `raw` without entry `place` of the list at `path`.

    Raises
    ------
    KeyError
        When the list has no such entry.
    InvalidCase
        When a what-if names just this entry.
    """
    listed = steps_of(path)
    for i, what_if in enumerate(raw.get("what_ifs") or ()):
        for k, change in enumerate(what_if.get("changes") or ()):
            if parse_path(change["path"])[: len(listed) + 1] == (*listed, place):
                gone = spoken_part(raw, (*listed, place))
                text = f"The what-if “{what_if['name']}” changes the {gone}: "
                raise refuse(f"what_ifs[{i}].changes[{k}].path", text + "remove that change first.")
    left = drop(raw, (*listed, place))
    if not get(left, listed) and len(listed) > 1:
        left = drop(left, listed)
    return renumbered(left, listed, lambda old: None if old == place else old - (old > place))


def renumbered(raw: Raw, listed: Path, new: Callable[[int], int | None]) -> Raw:
    """Return `raw` with what-ifs and answers to remarks following the entries of a list.

    `new` gives the new place of an entry, or nothing for one that was removed: the answers about
    it go too.
    """

    def follow(steps: Path) -> Path:
        cut = len(listed)
        place = steps[cut] if steps[:cut] == listed and len(steps) > cut else None
        return (*listed, new(place), *steps[cut + 1 :]) if isinstance(place, int) else steps

    return _answers_followed(repathed(raw, follow), format_path(listed), new)


def _answers_followed(raw: Raw, listed: str, new: Callable[[int], int | None]) -> Raw:
    entry = re.compile(rf"(?<= ){re.escape(listed)}\[(\d+)\]")
    kept = []
    for answer in raw.get("answers") or ():
        found = entry.search(answer["remark"])
        place = new(int(found[1])) if found else None
        if found and place is not None:
            start, end = found.span()
            told = f"{answer['remark'][:start]}{listed}[{place}]{answer['remark'][end:]}"
            kept.append({**answer, "remark": told})
        elif not found:
            kept.append(answer)
    followed: Raw = put(raw, "answers", kept) if raw.get("answers") else raw
    return followed


def repathed(raw: Raw, follow: Callable[[Path], Path]) -> Raw:
    """Return `raw` with `follow` applied to every path of its what-ifs."""
    for i, what_if in enumerate(raw.get("what_ifs") or ()):
        for k, change in enumerate(what_if.get("changes") or ()):
            before = parse_path(change["path"])
            after = follow(before)
            if after != before:
                raw = put(raw, ("what_ifs", i, "changes", k, "path"), format_path(after))
    return raw
