"""Text made fit for a picture, a file name or a document."""

from __future__ import annotations

import re
from collections.abc import Sequence

from rescue_planner.case.measures import measure_of, split, title
from rescue_planner.projection.marks import mark
from rescue_planner.projection.results import Comparison

_CONTROL = re.compile(r"[\x00-\x08\x0b\x0c\x0e-\x1f\x7f\ud800-\udfff\ufffe\uffff]")
_FORMULA = ("=", "+", "-", "@", "\t", "\r")


def clean(text: str) -> str:
    """Return `text` without the characters that no document may hold."""
    return _CONTROL.sub("", text)


def one_line(text: str) -> str:
    """Return `text` on one line, runs of white space as one space."""
    return " ".join(clean(text).split())


def neutral(text: str) -> str:
    """Return `text` so that a spreadsheet does not take it for a formula.

    A cell that begins with `=`, `+`, `-` or `@` gets an apostrophe before it. The binding files
    projection.csv and target_checks.csv keep names as they are.
    """
    return f"'{text}" if text.startswith(_FORMULA) else text


def letter(comparison: Comparison, plan: str) -> str:
    """Return the letter of a plan, the same as on every chart and page."""
    return mark(comparison.marks[comparison.plans.index(plan)]).letter


def plan_label(comparison: Comparison, plan: str) -> str:
    """Return letter and name of a plan."""
    return f"{letter(comparison, plan)} {one_line(plan)}"


def axis_title(comparison: Comparison, key: str) -> str:
    """Return the name of a measure with its unit."""
    return f"{one_line(title(key))} ({comparison.unit(key)})"


def stems(measures: Sequence[str]) -> dict[str, str]:
    """Return a file name's stem for each measure: plain ASCII, no two the same."""
    found: dict[str, str] = {}
    for key in measures:
        base, of = split(key)
        plain = re.sub(r"[^A-Za-z0-9]+", "-", of).strip("-")[:40].lower()
        stem = f"{measure_of(base).key}_{plain}" if of else base
        stem = stem.rstrip("_")
        number = 2
        first = stem
        while stem in found.values():
            stem = f"{first}_{number}"
            number += 1
        found[key] = stem
    return found


def listed(words: Sequence[str]) -> str:
    """Return words as a list in a sentence."""
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"
