"""The consequence table as texts: a row a measure, a column a plan, the verdict in words."""

from __future__ import annotations

from rescue_planner.advice.consequences import (
    DIRECTION_WORDS,
    Consequence,
    Consequences,
    alike,
    dominated,
)
from rescue_planner.case.measures import title
from rescue_planner.projection import reading
from rescue_planner.projection.results import Comparison
from rescue_planner.projection.value_table import ValueTable, wrapped

NAME, NARROW = 24, 13  # letters in a line of a cell
MEANING = (
    "Dominated: another plan shown is at least as good on every measure counted and better on at "
    "least one. Plans that are alike do not dominate each other. This hangs on the measures shown "
    "and on which way is said to be better: both are choices, and the decision rests with the "
    "responsible authorities."
)
RANGE = (
    "The second line of a cell: 90 of 100 populations like this one lie between these values, by "
    "chance alone."
)


def consequence_table(comparison: Comparison, table: Consequences) -> ValueTable:
    """Return the table as texts; its last row says which plans are dominated."""
    names = [wrapped(_named(comparison, plan), NARROW) for plan in table.plans]
    rows = [
        (
            wrapped(f"{title(key)},\n{comparison.unit(key)}", NAME),
            wrapped(DIRECTION_WORDS[table.directions[j]], NARROW),
            *(_text(key, row[j], table.places[j]) for row in table.cells),
        )
        for j, key in enumerate(table.keys)
    ]
    if len(table.plans) > 1 and table.keys:
        count = f"{len(table.counted)} measures counted"
        rows.append(("Verdict", wrapped(count, NARROW), *verdicts(comparison, table)))
    header = ("Measure, unit", "Which way", *names)
    return ValueTable(header, 2, tuple(rows), _notes(table))


def verdicts(comparison: Comparison, table: Consequences) -> tuple[str, ...]:
    """Return for each plan whether it is dominated, by which plans, or like which."""
    if not table.counted:
        return tuple("no measure\ncounts" for _ in table.plans)
    pairs, same = dominated(table), alike(table)
    said = []
    for plan in table.plans:
        by = [one.by for one in pairs if one.plan == plan]
        like = [b if a == plan else a for a, b in same if plan in (a, b)]
        words = [
            f"{start} {_letters(comparison, names)}"
            for start, names in (("dominated by", by), ("shown like", like))
            if names
        ]
        said.append("\n".join(wrapped(part, NARROW) for part in words or ["not dominated"]))
    return tuple(said)


def dominance_sentences(comparison: Comparison, table: Consequences) -> tuple[str, ...]:
    """Return a sentence for each dominated plan and each plan that dominates it."""
    count = len(table.counted)
    return tuple(
        f"{_named(comparison, one.plan)} is dominated by {_named(comparison, one.by)}: worse on "
        f"{len(one.worse_on)} of {count} measures counted, better on none."
        for one in dominated(table)
    )


def _letters(comparison: Comparison, plans: list[str]) -> str:
    return ", ".join(reading.letter(comparison, plan) for plan in plans)


def _named(comparison: Comparison, plan: str) -> str:
    return f"{reading.letter(comparison, plan)} {plan}"


def _text(key: str, cell: Consequence, places: int) -> str:
    if cell.gone:
        return "gone"
    value = reading.shown(key, cell.value, places)
    if cell.low is None or cell.high is None:
        return value
    low, high = (reading.shown(key, end, places) for end in (cell.low, cell.high))
    between = "–" if cell.low >= 0.0 else " to "  # a dash beside a minus sign misleads
    return f"{value}\n{low}{between}{high}"


def _notes(table: Consequences) -> tuple[str, ...]:
    notes = [f"Values of {reading.year_text(table.year)}."]
    if any(cell.low is not None for row in table.cells for cell in row):
        notes.append(RANGE)
    if any(cell.gone for row in table.cells for cell in row):
        notes.append("Gone: fewer than one adult is left; that counts as worse than any value.")
    return (*notes, MEANING)
