"""The releases of a plan as a table of texts: a row a release, a column a value. No Qt here.

What is typed or pasted into the table goes into the case cell by cell. A text that cannot go in
stays where it was put, with one sentence about it; a row that is not yet a whole release stays
below the others until it is one.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, field
from types import MappingProxyType

from rescue_planner.case.document import Case
from rescue_planner.case.edits.plans import RELEASE
from rescue_planner.case.fields import definition_at
from rescue_planner.case.paths import parse_path
from rescue_planner.case.plans import Release
from rescue_planner.case.quantity import Quantity

Cell = tuple[int, int]  # row, column
Read = Callable[[str], float]  # a ValueError says what is wrong with the text


@dataclass(frozen=True, slots=True)
class Column:
    """A value of each release: its name as in `add_release`, words for a heading, its unit."""

    key: str
    title: str
    unit: str
    needed: bool = False

    @property
    def path(self) -> tuple[str, ...]:
        """The steps from a release to the value."""
        return RELEASE[self.key]


COLUMNS = (
    Column("first_year", "Year", "", needed=True),
    Column("every_years", "Every", "years"),
    Column("times", "Times", "releases"),
    Column("donor", "Donor", "", needed=True),
    Column("females", "Females", "animals"),
    Column("males", "Males", "animals"),
    Column("age", "Age", "years"),
    Column("survive_to_breed", "Survive", "share"),
    Column("breeding_relative_to_residents", "Breed", "times"),
    Column("each_animal", "An animal", "currency"),
    Column("each_event", "An event", "currency"),
    Column("loan_years", "Loan", "years"),
)
PLACES = MappingProxyType({column.key: place for place, column in enumerate(COLUMNS)})


@dataclass(frozen=True, slots=True)
class Held:
    """A text that could not go into the case, and one sentence that says why."""

    text: str
    why: str


@dataclass(frozen=True, slots=True)
class Sheet:
    """What a table holds beside the case.

    `held` are texts in cells of releases, by (release, column); `drafts` rows below the releases,
    each with its texts by column, a sentence where one is wrong (else empty).
    """

    held: Mapping[Cell, Held] = field(default_factory=dict)
    drafts: tuple[Mapping[int, Held], ...] = ()

    @property
    def is_clean(self) -> bool:
        """Whether everything in the table is in the case."""
        return not self.held and not self.drafts


NOTHING_HELD = Sheet()


def number_text(value: float) -> str:
    """Return a number in its shortest form that reads back the same."""
    whole = int(value) if abs(value) < 1e15 else value
    return repr(whole if whole == value else value)


def value_of(release: Release, column: int) -> Quantity | str | None:
    """Return what a release holds in a column."""
    held: object = release
    for step in COLUMNS[column].path:
        held = getattr(held, step)
    assert held is None or isinstance(held, Quantity | str)
    return held


def cell_text(release: Release, column: int) -> str:
    """Return what stands in a cell: the number alone, without its range."""
    held = value_of(release, column)
    if held is None:
        return ""
    return held if isinstance(held, str) else number_text(held.best)


def table_rows(case: Case, plan: str, sheet: Sheet = NOTHING_HELD) -> tuple[tuple[str, ...], ...]:
    """Return all texts of the table: releases first, then rows that are not in the case."""
    columns = range(len(COLUMNS))
    rows = [
        tuple(
            sheet.held[r, c].text if (r, c) in sheet.held else cell_text(release, c)
            for c in columns
        )
        for r, release in enumerate(case.plan(plan).releases)
    ]
    rows += [tuple(draft[c].text if c in draft else "" for c in columns) for draft in sheet.drafts]
    return tuple(rows)


def headings(case: Case) -> tuple[str, ...]:
    """Return the heading of each column, with its unit on a second line."""
    money = case.currency or "money"
    return tuple(
        f"{one.title}\n{one.unit.replace('currency', money)}" if one.unit else one.title
        for one in COLUMNS
    )


def meaning(column: int) -> str:
    """Return the full name of a column and what it means."""
    definition = definition_at(("plans", 0, "releases", 0, *COLUMNS[column].path))
    return "" if definition is None else f"{definition.name}: {definition.meaning}"


def read_block(text: str) -> tuple[tuple[str, ...], ...]:
    """Return the cells of tab-separated text as spreadsheets write it, quotes undone."""
    lines = list(csv.reader(io.StringIO(text.replace("\r\n", "\n"), newline=""), delimiter="\t"))
    while lines and not any(cell.strip() for cell in lines[-1]):
        lines.pop()
    return tuple(tuple(cell.strip() for cell in line) for line in lines)


def write_block(rows: Iterable[Iterable[str]]) -> str:
    """Return cells as tab-separated text that spreadsheets and `read_block` read."""
    out = io.StringIO(newline="")
    csv.writer(out, delimiter="\t", lineterminator="\n").writerows(rows)
    return out.getvalue()


def held_sentences(sheet: Sheet, releases: int) -> tuple[tuple[Cell, str], ...]:
    """Return the cells that are not in the case with a sentence each, in reading order."""
    found = [((r, c), held.why) for (r, c), held in sheet.held.items()]
    for place, draft in enumerate(sheet.drafts):
        found += [((releases + place, c), held.why) for c, held in draft.items() if held.why]
    return tuple((cell, f"{place_words(cell)}: {why}") for cell, why in sorted(found))


def place_words(cell: Cell) -> str:
    """Return where a cell stands, as in `Row 3, Females`."""
    return f"Row {cell[0] + 1}, {COLUMNS[cell[1]].title}"


def cell_at(path: str) -> Cell | None:
    """Return the cell of the table that shows what stands at a path of the case, or nothing."""
    steps = parse_path(path)
    if len(steps) < 5 or steps[0] != "plans" or steps[2] != "releases":
        return None
    row, inner = steps[3], steps[4:]
    column = next((c for c, one in enumerate(COLUMNS) if inner == one.path), None)
    return (row, column) if isinstance(row, int) and column is not None else None
