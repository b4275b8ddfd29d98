"""The plain form of a case, as the file holds it, and the paths into it."""

from __future__ import annotations

from typing import Any

from rescue_planner.case import fields
from rescue_planner.case.document import FORMAT, VERSION, Case
from rescue_planner.case.paths import (
    ANY,
    Path,
    Step,
    drop,
    format_path,
    get,
    parse_path,
    put,
    steps_of,
)

__all__ = [
    "ANY",
    "Path",
    "Step",
    "drop",
    "format_path",
    "get",
    "matches",
    "parse_path",
    "put",
    "steps_of",
    "to_raw",
]


def to_raw(case: Case) -> dict[str, Any]:
    """Return the case as the file holds it: what was given, in the order of the types."""
    held = case.model_dump(mode="json", exclude_unset=True)
    return {**{"format": FORMAT, "version": VERSION}, **held}


def matches(raw: dict[str, Any], pattern: str | Path) -> tuple[Path, ...]:
    """Return the path of every number of the plain case `raw` that `pattern` names.

    A field that was left out counts where the part that holds it is there or has a default, so
    that `plans[*].releases[*].afterwards.survive_to_breed` finds every release.

    Raises
    ------
    ValueError
        When `pattern` is not a path.
    """
    return tuple(fields.matches(raw, steps_of(pattern)))
