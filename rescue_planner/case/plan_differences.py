"""What one plan has otherwise than another, as a list in words.

Parts of the same kind are set side by side in their order so that the list is short: a part that
was changed in a few values is told by these values, one that has no likeness is told whole.
"""

from __future__ import annotations

import operator
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any

from rescue_planner.case import fields
from rescue_planner.case.base import Part
from rescue_planner.case.document import Case
from rescue_planner.case.measures import title
from rescue_planner.case.paths import Path, format_path
from rescue_planner.case.plans import OtherAction, Plan, Release, Rule, Steady
from rescue_planner.case.quantity import Quantity
from rescue_planner.case.spoken import counted, lowered, spoken_value

ALONE = 2.5  # what a part without a counterpart counts, in changed values
_UNSAID = {"", "–", "year"}  # units that the name says already
_KINDS = {
    Release: "Release",
    Steady: "Steady flow",
    Rule: "Rule",
    OtherAction: "Other action",
}
Pair = tuple[int | None, int | None]


@dataclass(frozen=True, slots=True)
class Difference:
    """One thing that differs, and where in the case it stands."""

    path: str
    sentence: str


def differences(case: Case, plan: str, other: str) -> tuple[Difference, ...]:
    """Return what `plan` has otherwise than `other`, in the order of the file.

    A value that was left out counts as its default. Paths point into `plan`; for a part that only
    `other` has, into `other`.

    Raises
    ------
    KeyError
        When there is no such plan.
    """
    names = [one.name for one in case.plans]
    here, there = case.plan(plan), case.plan(other)
    walk = _Walk(case, other, ("plans", names.index(other)))
    return tuple(walk.within(here, there, ("plans", names.index(plan)), ""))


@dataclass(frozen=True, slots=True)
class _Walk:
    case: Case
    other: str
    other_at: Path

    def within(self, here: Part, there: Part, at: Path, said: str) -> Iterator[Difference]:
        """Yield what differs in two parts of the same type."""
        for name in type(here).model_fields:
            one, two = getattr(here, name), getattr(there, name)
            if one == two or (name == "name" and isinstance(here, Plan)):
                continue
            path = (*at, name)
            if isinstance(one, Part) and isinstance(two, Part):
                inner = f"{said}its release, " if name == "release" else said
                yield from self.within(one, two, path, inner)
            elif isinstance(one, tuple):
                yield from self.listed(one, two, path)
            else:
                yield Difference(format_path(path), self._sentence(one, two, path, said))

    def listed(self, here: Sequence[Part], there: Sequence[Part], at: Path) -> Iterator[Difference]:
        """Yield what differs in two lists of parts."""
        for i, k in aligned(here, there):
            if i is None and k is not None:
                gone = format_path((*self.other_at, at[-1], k))
                words = f"{_called(there[k], k)} of “{self.other}” is not here"
                yield Difference(gone, f"{words}: {_told(there[k])}.")
            elif i is not None and k is None:
                new = format_path((*at, i))
                yield Difference(new, f"{_called(here[i], i)} is only here: {_told(here[i])}.")
            elif i is not None and k is not None:
                said = f"{_called(here[i], i)}, "
                yield from self.within(here[i], there[k], (*at, i), said)

    def _sentence(self, one: Any, two: Any, path: Path, said: str) -> str:  # noqa: ANN401
        definition = fields.definition_at(path)
        name = str(path[-1]).replace("_", " ") if definition is None else definition.name
        name = f"{said}{lowered(name)}" if said else name
        if _value(one) == _value(two):  # the same number, otherwise known
            return f"{name}: {_value(one)} is {_known(one)} instead of {_known(two)}."
        if isinstance(one, str) and path[-1] == "when":
            return f"{name}: {_measure(one)} instead of {_measure(two)}."
        unit = "" if definition is None else definition.unit
        unit = unit.replace("currency", self.case.currency or "units of money")
        unit = "" if unit in _UNSAID else f" ({unit})"
        return f"{name}: {_value(one)} instead of {_value(two)}{unit}."


def _value(held: Any) -> str:  # noqa: ANN401 - whatever a plan may hold
    if held is None:
        return "left out"
    return "a release" if isinstance(held, Part) else spoken_value(held)


def _measure(key: str) -> str:
    return lowered(title(key))


def _known(held: Any) -> str:  # noqa: ANN401 - a quantity, or nothing
    if not isinstance(held, Quantity):
        return "not stated"
    words = (held.shape, held.origin, held.source, held.date, held.by)
    return ", ".join(word for word in words if word) or "without a source"


def _called(part: Part, index: int) -> str:
    kind = _KINDS.get(type(part), "Part")
    return f"{kind} “{part.name}”" if isinstance(part, Rule) else f"{kind} {index + 1}"


def _told(part: Part) -> str:
    """Return one part in a few words."""
    if isinstance(part, Release):
        who, when = part.who, part.when
        animals = (
            f"{counted(float(who.females.best), 'female')} and "
            f"{counted(float(who.males.best), 'male')} from “{part.donor}”"
        )
        words = f"{animals} in {when.first_year.best:g}"
        if float(when.times.best) > 1:
            every = counted(float(when.every_years.best), "year")
            words += f" and then every {every}, {when.times.best:g} times in all"
        return words
    if isinstance(part, Steady):
        rate = counted(float(part.migrants_per_generation.best), "newcomer")
        return f"{rate} that breed per generation from “{part.donor}”"
    if isinstance(part, Rule):
        bounds = [
            f"{word} {bound.best:g}"
            for word, bound in (("above", part.above), ("below", part.below))
            if bound is not None
        ]
        then = "stop all releases" if part.then == "stop" else "make a release"
        return (
            f"{then} when {_measure(part.when)} is {' or '.join(bounds) or 'beyond no bound yet'}"
        )
    if isinstance(part, OtherAction):
        return f"{part.what}, from {part.year.best:g}"
    return "a part"


def aligned(here: Sequence[Part], there: Sequence[Part]) -> list[Pair]:
    """Return which part of one list stands for which of the other; None: for none.

    Order is kept; the sum of changed values, with `ALONE` for each part without a counterpart, is
    the least possible (edit distance; Wagner & Fischer 1974, from memory).
    """
    head = 0
    while head < min(len(here), len(there)) and here[head] == there[head]:
        head += 1
    tail = 0
    most = min(len(here), len(there)) - head
    while tail < most and here[-1 - tail] == there[-1 - tail]:
        tail += 1
    pairs: list[Pair] = [(i, i) for i in range(head)]
    inner = _aligned(here[head : len(here) - tail], there[head : len(there) - tail])
    pairs += [(_moved(i, head), _moved(k, head)) for i, k in inner]
    return pairs + [(len(here) - i, len(there) - i) for i in range(tail, 0, -1)]


def _moved(index: int | None, by: int) -> int | None:
    return None if index is None else index + by


def _aligned(here: Sequence[Part], there: Sequence[Part]) -> list[Pair]:
    rows, columns = len(here), len(there)
    cost = [[ALONE * (i + k) for k in range(columns + 1)] for i in range(rows + 1)]
    apart = _apart(here, there)
    for i in range(1, rows + 1):
        for k in range(1, columns + 1):
            both = cost[i - 1][k - 1] + apart[i - 1][k - 1]
            cost[i][k] = min(both, cost[i - 1][k] + ALONE, cost[i][k - 1] + ALONE)
    pairs: list[Pair] = []
    i, k = rows, columns
    while i or k:
        if i and k and cost[i][k] == cost[i - 1][k - 1] + apart[i - 1][k - 1]:
            i, k = i - 1, k - 1
            pairs.append((i, k))
        elif k and cost[i][k] == cost[i][k - 1] + ALONE:
            k -= 1
            pairs.append((None, k))
        else:
            i -= 1
            pairs.append((i, None))
    return pairs[::-1]


def _apart(here: Sequence[Part], there: Sequence[Part]) -> list[list[float]]:
    """Return in how many values each part of one list differs from each of the other."""
    if not all(isinstance(one, Release) for one in (*here, *there)):
        return [[float(_changed(one, two)) for two in there] for one in here]
    mine, other = [_leaves(one) for one in here], [_leaves(two) for two in there]
    return [[float(sum(map(operator.ne, one, two))) for two in other] for one in mine]


def _leaves(part: Any) -> list[Any]:  # noqa: ANN401 - a part, or what it holds
    """Return the values of a part in order, as plain tuples: quick to compare many times."""
    if isinstance(part, Part):
        return [x for name in type(part).model_fields for x in _leaves(getattr(part, name))]
    return [tuple(part.__dict__.values()) if isinstance(part, Quantity) else part]


def _changed(one: Any, two: Any) -> int:  # noqa: ANN401 - parts, or what they hold
    """Return in how many values two parts of the same type differ."""
    if one == two:
        return 0
    if isinstance(one, Part) and isinstance(two, Part):
        names = type(one).model_fields
        return sum(_changed(getattr(one, name), getattr(two, name)) for name in names)
    return 1


def differences_words(found: Sequence[Difference], other: str) -> str:
    """Return how many differences there are to another plan, as a line above their list."""
    if not found:
        return f"The same as “{other}” in everything but the name."
    return f"{counted(len(found), 'difference')} to “{other}”:"
