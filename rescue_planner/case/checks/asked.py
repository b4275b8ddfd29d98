"""What is asked of a projection: rules, targets and what-ifs."""

from __future__ import annotations

import difflib
from collections.abc import Iterator

from rescue_planner.case import fields
from rescue_planner.case.faults import Problem
from rescue_planner.case.measures import MEASURES, known_key
from rescue_planner.case.paths import parse_path
from rescue_planner.case.tolerant import Raw, names, parts, value_at


def check_rules(raw: Raw) -> Iterator[Problem]:
    """Yield every rule that cannot be carried out."""
    for place, plan in parts(raw, "plans"):
        for which, rule in parts(plan, "rules"):
            yield from _rule(raw, rule, f"plans[{place}].rules[{which}]")


def _rule(raw: Raw, rule: Raw, where: str) -> Iterator[Problem]:
    yield from _measure(raw, rule.get("when"), f"{where}.when")
    above, below = value_at(rule, "above"), value_at(rule, "below")
    if rule.get("above") is None and rule.get("below") is None:
        yield Problem(where, "The rule says neither above nor below which value it acts: add one.")
    elif above is not None and below is not None and above >= below:
        text = f"Nothing is above {above:g} and below {below:g} at once, so it never acts: "
        yield Problem(where, text + "correct the bounds, or make two rules.")
    release = rule.get("release") is not None
    if rule.get("then") == "release" and not release:
        yield Problem(where, "The rule releases, but not which animals: add a release.")
    if rule.get("then") == "stop" and release:
        yield Problem(f"{where}.release", "The rule stops, and holds a release: remove one.")


def _measure(raw: Raw, key: object, path: str) -> Iterator[Problem]:
    if not isinstance(key, str) or known_key(key, names(raw, "donors"), names(raw, "loci")):
        return
    near = difflib.get_close_matches(key[:100], [one.key for one in MEASURES], n=1)
    ask = f"did you mean “{near[0]}”?" if near else "choose another."
    if ":" in key:
        ask = "the name after the colon must be a donor or a tracked locus of this case."
    yield Problem(path, f"There is no measure “{key[:80]}”: {ask}")


def check_targets(raw: Raw) -> Iterator[Problem]:
    """Yield every target without a bound, or on an unknown measure."""
    for place, target in parts(raw, "targets"):
        where = f"targets[{place}]"
        yield from _measure(raw, target.get("measure"), f"{where}.measure")
        low, high = value_at(target, "at_least"), value_at(target, "at_most")
        if target.get("at_least") is None and target.get("at_most") is None:
            yield Problem(where, "The target says neither at least nor at most: add a bound.")
        elif low is not None and high is not None and low > high:
            text = f"Nothing is at least {low:g} and at most {high:g}: correct the bounds."
            yield Problem(where, text)


def check_what_ifs(raw: Raw) -> Iterator[Problem]:
    """Yield every change whose path names no number, or that does not say what to change."""
    for place, what_if in parts(raw, "what_ifs"):
        for which, change in parts(what_if, "changes"):
            yield from _change(raw, change, f"what_ifs[{place}].changes[{which}]")


def _change(raw: Raw, change: Raw, where: str) -> Iterator[Problem]:
    said = [change.get(key) is not None for key in ("times", "set")]
    if all(said):
        yield Problem(where, "Both times and set are given: keep one.")
    elif not any(said):
        yield Problem(where, "Neither times nor set is given: say how the value changes.")
    path = change.get("path")
    if not isinstance(path, str):
        return
    try:
        steps = parse_path(path)
    except ValueError:
        text = f"“{path[:80]}” is not a path: write it like recipient.effective_size."
        yield Problem(f"{where}.path", text)
        return
    if not fields.is_number(steps):
        yield Problem(f"{where}.path", f"“{path[:80]}” names no number of the case: correct it.")
    elif steps[0] == "what_ifs":
        yield Problem(f"{where}.path", "A what-if cannot change a what-if: name another value.")
