"""Reads a plain case, and reports everything that is wrong with it at once."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from itertools import chain, islice

from pydantic import ValidationError

from rescue_planner.case.checks.animals import check_removals
from rescue_planner.case.checks.asked import check_rules, check_targets, check_what_ifs
from rescue_planner.case.checks.genetics import check_genetics
from rescue_planner.case.checks.life import check_life
from rescue_planner.case.checks.names import (
    check_names,
    check_no_releases,
    check_references,
    too_many_plans,
)
from rescue_planner.case.checks.sizes import check_ancestry, check_sizes
from rescue_planner.case.checks.years import check_steps, check_years
from rescue_planner.case.document import Case
from rescue_planner.case.faults import InvalidCase, Problem
from rescue_planner.case.plans import NO_RELEASES
from rescue_planner.case.tolerant import Raw
from rescue_planner.case.wording import worded

__all__ = ["InvalidCase", "Problem", "read_case"]

MOST_LISTED = 1000
_LONG_NAME = re.compile(r"(“[^”]{80})[^”]+”")

_CHECKS: tuple[Callable[[Raw], Iterator[Problem]], ...] = (
    check_names,
    check_no_releases,
    check_references,
    check_steps,
    check_years,
    check_sizes,
    check_ancestry,
    check_removals,
    check_genetics,
    check_life,
    check_rules,
    check_targets,
    check_what_ifs,
)


def read_case(raw: object) -> Case:
    """Return the case that the plain form `raw` describes.

    Parameters
    ----------
    raw : object
        What `json.loads` gives for a `case.json`: a dictionary, or anything that is none.

    Raises
    ------
    InvalidCase
        With every problem at once: wrong types and bounds, unknown and missing fields, and
        whatever does not fit together.
    """
    if not isinstance(raw, dict):
        raise InvalidCase([Problem("", "The case must be an object with named fields.")])
    surplus = too_many_plans(raw)
    if surplus is not None:  # one sentence about the plans; the rest is still checked
        raw = {**raw, "plans": [{"name": NO_RELEASES}], "what_ifs": []}
    case, problems = _typed(raw)
    across = (_readable(problem) for check in _CHECKS for problem in check(raw))
    found = tuple(_listed(_once(chain([surplus] if surplus else (), problems, across))))
    if case is None or found:
        raise InvalidCase(found)
    return case


def _readable(problem: Problem) -> Problem:
    """Return a problem whose text is one line, with long names cut."""
    text = _LONG_NAME.sub(r"\1…”", " ".join(problem.text.split()))
    return problem if text == problem.text else Problem(problem.path, text)


def _typed(raw: Raw) -> tuple[Case | None, Iterator[Problem]]:
    try:
        return Case.model_validate(raw), iter(())
    except ValidationError as error:
        return None, worded(error, raw)


def _once(found: Iterator[Problem]) -> Iterator[Problem]:
    seen: set[Problem] = set()
    for problem in found:
        if problem not in seen:
            seen.add(problem)
            yield problem


def _listed(found: Iterator[Problem]) -> Iterator[Problem]:
    """Yield the problems, at most so many as a person could read."""
    yield from islice(found, MOST_LISTED)
    if next(found, None) is not None:
        yield Problem("", f"More than {MOST_LISTED} problems: the rest is not listed.")
