"""Reading a plain case that may be wrong anywhere: what can't be read counts as not known."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from rescue_planner.case.quantity import number

Raw = dict[str, Any]


def at(node: object, *names: str) -> Any:  # noqa: ANN401 - whatever the file holds
    """Return what stands below `node`, or nothing."""
    for name in names:
        node = node.get(name) if isinstance(node, dict) else None
    return node


def value(held: object) -> float | None:
    """Return the best value of a number of the case, or nothing where it can't be read."""
    best = held.get("best") if isinstance(held, dict) else held
    try:
        return float(number(best))
    except ValueError:
        return None


def value_at(node: object, *names: str, otherwise: float | None = None) -> float | None:
    """Return the number below `node`: `otherwise` where left out, nothing where it is wrong."""
    held = at(node, *names)
    return otherwise if held is None else value(held)


def parts(node: object, name: str) -> Iterator[tuple[int, Raw]]:
    """Yield place and content of the objects in the list `name` of `node`."""
    held = at(node, name)
    for place, one in enumerate(held if isinstance(held, list) else ()):
        if isinstance(one, dict):
            yield place, one


def mapping(node: object, *names: str) -> Raw:
    """Return the object below `node`, an empty one where there is none."""
    held = at(node, *names)
    return held if isinstance(held, dict) else {}


def names(raw: object, kind: str) -> list[str]:
    """Return the names in the list `kind` of the case, in order."""
    return [one["name"] for _, one in parts(raw, kind) if isinstance(one.get("name"), str)]
