"""Turns what the types complain about into problems with a path and one clear sentence."""

from __future__ import annotations

import difflib
from collections.abc import Iterator, Mapping
from typing import Any

from pydantic import ValidationError
from pydantic_core import ErrorDetails

from rescue_planner.case import fields
from rescue_planner.case.faults import Problem
from rescue_planner.case.paths import Path, format_path
from rescue_planner.case.quantity import Quantity

_EITHER = ("literal['same']", "LifeCycle")  # what a donor's life cycle may be
_KINDS = {
    "string_type": "must be a text: write it in quotes",
    "bool_type": "must be true or false: write it without quotes",
    "tuple_type": "must be a list: write it in square brackets",
    "dict_type": "must be an object with a number for each name: write it in braces",
    "model_type": "must be an object with named fields: write it in braces",
    "model_attributes_type": "must be an object with named fields: write it in braces",
}


def worded(error: ValidationError, raw: object) -> Iterator[Problem]:
    """Yield each complaint of the types about the plain case `raw` as a problem."""
    for one in error.errors(include_url=False):
        path = _path(one["loc"], raw)
        if path is not None:
            yield Problem(format_path(path), _sentence(one, path))


def _path(loc: tuple[int | str, ...], raw: object) -> Path | None:
    """Return the path in the file, or nothing for a complaint about the branch not taken."""
    path: list[int | str] = []
    node: Any = raw
    for step in loc:
        if len(path) == 3 and path[0] == "donors" and path[2] == "life_cycle" and step in _EITHER:
            if (step == "LifeCycle") != isinstance(node, dict):
                return None
            continue
        if step == "best" and not isinstance(node, dict):
            break  # a plain number
        path.append(step)
        node = _inside(node, step)
    return tuple(path)


def _inside(node: object, step: int | str) -> Any:  # noqa: ANN401 - whatever the file holds
    if isinstance(node, dict):
        return node.get(step)
    if isinstance(node, list) and isinstance(step, int) and step < len(node):
        return node[step]
    return None


def _sentence(error: ErrorDetails, path: Path) -> str:
    kind = error["type"]
    told: Mapping[str, Any] = error.get("ctx") or {}
    name = _name(path)
    if kind == "missing":
        return f"{name} is missing: add it."
    if kind == "extra_forbidden":
        return _unknown_field(path)
    if kind == "order":
        return f"{name}: {error['msg']}; correct them."
    if kind in ("bounds", "number"):
        ask = "write a number without quotes" if kind == "number" else "correct the value"
        return f"{name} {error['msg']}: {ask}."
    if kind == "literal_error":
        return _choice(name, path, told)
    if kind == "string_too_long":
        return f"{name} is longer than {told['max_length']} characters: shorten it."
    if kind in ("too_long", "too_short"):
        return f"{name} must hold {told.get('max_length', told.get('min_length'))} entries."
    return f"{name} {_KINDS.get(kind, error['msg'][:1].lower() + error['msg'][1:])}."


def _name(path: Path) -> str:
    definition = fields.definition_at(path)
    last = path[-1] if path else ""
    if definition is not None:
        if last in Quantity.model_fields and fields.model_at(path[:-1]) is None:
            return f"“{definition.name}”, its {last},"
        counted = f", entry {last + 1}," if isinstance(last, int) else ""
        return f"“{definition.name}”{counted}"
    if isinstance(last, int):
        return f"Entry {last + 1} of the list"
    return f"“{last}”" if last else "The case"


def _choice(name: str, path: Path, told: Mapping[str, Any]) -> str:
    if path and path[-1] == "life_cycle":
        return f'{name} must be "same" (as the recipient’s) or an object with its own values.'
    if path == ("version",):
        return f"{name} must be {told['expected']}: this program does not know another version."
    choices = str(told["expected"]).replace("'", '"')
    return f"{name} must be {choices}: choose one of these."


def _unknown_field(path: Path) -> str:
    model = fields.model_at(path[:-1])
    known = list(model.model_fields) if model is not None else []
    if not known:  # extra fields of a number
        known = list(Quantity.model_fields)
    near = difflib.get_close_matches(str(path[-1])[:100], known, n=1)
    ask = f"did you mean “{near[0]}”?" if near else "remove it."
    shown = str(path[-1])[:60]
    return f"There is no field “{shown}” here: {ask}"
