"""The consequence table: what each plan leads to at one year, and which plans are dominated.

A plan is dominated where another plan is at least as good on every measure that counts and better
on at least one. Which way is better is a judgement, so each measure's direction is stated and can
be changed or switched off. Two plans alike on every measure that counts do not dominate each other.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

from rescue_planner.case.document import Case
from rescue_planner.case.measures import split
from rescue_planner.projection import reading
from rescue_planner.projection.results import Comparison

Direction = Literal["more", "less", "zero", "none"]

DIRECTION_WORDS: dict[Direction, str] = {
    "more": "more is better",
    "less": "less is better",
    "zero": "nearer 0 is better",
    "none": "not counted",
}
_USUAL: dict[str, Direction] = {
    "inbreeding": "less",
    "kinship": "less",
    "donor_ancestry": "less",
    "trait_mean": "none",
    "trait_lag": "zero",
    "load": "less",
    "released": "less",
    "effective_migrants": "none",
    "cost": "less",
}
_BY_ROLE: dict[str, Direction] = {"harmful": "less", "neutral": "none"}
_OF_LOCI = ("allele_frequency", "allele_kept", "allele_fixed")
ROUNDING = 1e-9  # shares of a value: differences below come from the order of additions


@dataclass(frozen=True, slots=True)
class Consequence:
    """What one plan leads to on one measure, as shown (shares in per cent).

    `value` is NaN where it was not computed, or where the population is `gone`. `low` and `high`
    are the 5 % and 95 % quantiles, where the depth has them.
    """

    value: float
    low: float | None = None
    high: float | None = None
    gone: bool = False


@dataclass(frozen=True, slots=True)
class Consequences:
    """Plans by measures at one year.

    `cells[i][j]` belongs to plan i and measure j; `year` is that of the values, the last reached
    by `asked`. `directions[j]` is how measure j is read. `places[j]` counts the decimals shown.
    """

    asked: float
    year: float
    plans: tuple[str, ...]
    keys: tuple[str, ...]
    directions: tuple[Direction, ...]
    places: tuple[int, ...]
    cells: tuple[tuple[Consequence, ...], ...]

    def cell(self, plan: str, key: str) -> Consequence:
        """Return one cell.

        Raises
        ------
        ValueError
            For a plan or measure that is not in the table.
        """
        return self.cells[self.plans.index(plan)][self.keys.index(key)]

    @property
    def counted(self) -> tuple[int, ...]:
        """Places of the measures that count: a direction is stated, and a plan has a value."""
        return tuple(
            j
            for j, way in enumerate(self.directions)
            if way != "none" and any(_is_known(row[j]) for row in self.cells)
        )


@dataclass(frozen=True, slots=True)
class Dominance:
    """One plan that another one dominates; `worse_on` are the measures on which it is worse."""

    plan: str
    by: str
    worse_on: tuple[str, ...]


def usual_direction(case: Case, key: str) -> Direction:
    """Return which way a measure is read unless somebody says otherwise.

    Donor ancestry, animals released and money count as costs. An allele counts by its role.
    """
    base, of = split(key)
    if base in _OF_LOCI:
        role = next((str(one.role) for one in case.loci if one.name == of), "")
        return _BY_ROLE.get(role, "more")
    return _USUAL.get(base, "more")


def consequences(
    case: Case,
    comparison: Comparison,
    plans: Sequence[str],
    keys: Sequence[str],
    year: float,
    directions: Mapping[str, Direction] | None = None,
) -> Consequences:
    """Return what `plans` lead to on the measures `keys` at the last step reached by `year`.

    Parameters
    ----------
    directions : mapping, optional
        Directions that somebody chose, by measure; the usual ones for the rest.
    """
    chosen = directions or {}
    t = comparison.index_at(year)
    return Consequences(
        asked=year,
        year=float(comparison.years[t]),
        plans=tuple(plans),
        keys=tuple(keys),
        directions=tuple(chosen.get(key, usual_direction(case, key)) for key in keys),
        places=tuple(reading.column_places(comparison, key, plans, [t]) for key in keys),
        cells=tuple(tuple(_cell(comparison, plan, key, t) for key in keys) for plan in plans),
    )


def _cell(comparison: Comparison, plan: str, key: str, t: int) -> Consequence:
    line = reading.curve(comparison, plan, key)
    if line is None:
        return Consequence(math.nan)
    if t >= line.values.size:
        return Consequence(math.nan, gone=True)
    fan = reading.fan(comparison, plan, key)
    if fan is None or t == 0:  # at the start all is as given
        return Consequence(float(line.values[t]))
    return Consequence(float(line.values[t]), float(fan.q05[t]), float(fan.q95[t]))


def _is_known(cell: Consequence) -> bool:
    return cell.gone or not math.isnan(cell.value)


def dominated(table: Consequences) -> tuple[Dominance, ...]:
    """Return every pair of a dominated plan and one that dominates it, in the order of plans.

    Values are compared unrounded, so a plan that is better by a hair is not dominated; but at
    least one disadvantage has to be seen in the digits shown. Where the population is gone, a
    plan is worse than any in which it is not. A value that was not computed for one of two plans
    leaves them without a verdict.
    """
    found = []
    for plan in table.plans:
        for other in table.plans:
            worse = _worse_on(table, plan, other) if plan != other else None
            if worse:
                found.append(Dominance(plan, other, worse))
    return tuple(found)


def alike(table: Consequences) -> tuple[tuple[str, str], ...]:
    """Return the pairs of plans that are shown alike on every measure that counts, each once."""
    if not table.counted:
        return ()
    rows = list(zip(table.plans, table.cells, strict=True))
    return tuple(
        (one, other)
        for i, (one, mine) in enumerate(rows)
        for other, theirs in rows[i + 1 :]
        if all(_same_as_shown(mine[j], theirs[j], table.places[j]) for j in table.counted)
    )


def _same_as_shown(one: Consequence, other: Consequence, places: int) -> bool:
    if one.gone or other.gone:
        return one.gone and other.gone
    return round(one.value, places) == round(other.value, places)  # no number is like no number


def _worse_on(table: Consequences, plan: str, other: str) -> tuple[str, ...] | None:
    """Return on what `plan` is worse than `other`, or nothing where it is not dominated."""
    mine, theirs = (table.cells[table.plans.index(name)] for name in (plan, other))
    worse, seen = [], False
    for j in table.counted:
        order = _order(mine[j], theirs[j], table.directions[j])
        if order is None or order > 0:
            return None
        if order < 0:
            worse.append(table.keys[j])
            seen = seen or not _same_as_shown(mine[j], theirs[j], table.places[j])
    return tuple(worse) if seen else None


def _order(one: Consequence, other: Consequence, way: Direction) -> int | None:
    """Return 1 where `one` is better, -1 where it is worse, 0 where equal, None if unknown."""
    if not (_is_known(one) and _is_known(other)):
        return None
    if one.gone or other.gone:
        return int(other.gone) - int(one.gone)
    a, b = (_merit(cell.value, way) for cell in (one, other))
    if a == b or abs(a - b) <= ROUNDING * max(abs(a), abs(b)):
        return 0
    return 1 if a > b else -1


def _merit(value: float, way: Direction) -> float:
    if way == "less":
        return -value
    return -abs(value) if way == "zero" else value
