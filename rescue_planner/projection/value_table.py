"""Values at chosen years as a table of texts, its decimals aligned. No Qt here."""

from __future__ import annotations

import textwrap
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from rescue_planner.case.measures import title
from rescue_planner.projection import reading
from rescue_planner.projection.results import Comparison

RowsAre = Literal["plans", "measures"]


@dataclass(frozen=True, slots=True)
class ValueTable:
    """A table as texts; the first `lead` columns name the row, the rest hold numbers.

    `header` and each row are equally long. `notes` are sentences that go under it.
    """

    header: tuple[str, ...]
    lead: int
    rows: tuple[tuple[str, ...], ...]
    notes: tuple[str, ...] = ()

    def tab_separated(self) -> str:
        """Return the table for a spreadsheet: plain numbers, tabs, line feeds."""
        lines = ["\t".join(_one_line(text) for text in self.header)]
        for row in self.rows:
            lead = [_one_line(text) for text in row[: self.lead]]
            lines.append("\t".join(lead + [reading.plain(text) for text in row[self.lead :]]))
        return "\n".join(lines) + "\n"


def _one_line(text: str) -> str:
    return " ".join(text.split())


def value_table(
    comparison: Comparison,
    plans: Sequence[str],
    keys: Sequence[str],
    years: Sequence[float],
    rows_are: RowsAre = "plans",
) -> ValueTable:
    """Return what each plan leads to at each of `years`.

    A value asked for at a year is the last one reached by then; the table prints that year too.
    Numbers under one another have the same decimals: down a column where rows are plans, along
    a row where rows are measures.
    """
    at = [comparison.index_at(year) for year in years]
    digits = {key: reading.column_places(comparison, key, plans, at) for key in keys}
    when = [_when(comparison, year, t) for year, t in zip(years, at, strict=True)]
    heads = [f"{title(key)}\n{comparison.unit(key)}" for key in keys]
    names = [f"{reading.letter(comparison, plan)} {plan}" for plan in plans]
    heads = [wrapped(head) for head in heads]
    if rows_are == "plans":
        header = ("Plan", "Year", *heads)
        rows = tuple(
            (name, when[i], *(_cell(comparison, plan, key, t, digits[key]) for key in keys))
            for i, t in enumerate(at)
            for name, plan in zip(names, plans, strict=True)
        )
        return ValueTable(header, 2, rows, _notes(comparison, years, at))
    header = ("Measure", "Unit", "Year", *(wrapped(name) for name in names))
    rows = tuple(
        (
            title(key),
            comparison.unit(key),
            when[i],
            *(_cell(comparison, plan, key, t, digits[key]) for plan in plans),
        )
        for key in keys
        for i, t in enumerate(at)
    )
    return ValueTable(header, 3, rows, _notes(comparison, years, at))


def course_table(comparison: Comparison, plans: Sequence[str], key: str) -> ValueTable:
    """Return one chart as a table: a row for each year, a column for each plan."""
    digits = reading.column_places(comparison, key, plans)
    header = ("Year", "Generation", *(f"{reading.letter(comparison, p)} {p}" for p in plans))
    rows = tuple(
        (
            reading.year_text(float(year)),
            str(t),
            *(_cell(comparison, plan, key, t, digits) for plan in plans),
        )
        for t, year in enumerate(comparison.years)
    )
    return ValueTable(header, 2, rows, (f"{title(key)}, {comparison.unit(key)}.",))


def wrapped(words: str, width: int = 18) -> str:
    """Return a heading broken into lines of about `width` letters; its own breaks stay."""
    lines = [textwrap.wrap(line, width, break_long_words=False) for line in words.split("\n")]
    return "\n".join(part for line in lines for part in line)


def _cell(comparison: Comparison, plan: str, key: str, t: int, digits: int) -> str:
    line = reading.curve(comparison, plan, key)
    if line is None:
        return "–"
    if t >= line.values.size:
        return "gone"
    return reading.shown(key, float(line.values[t]), digits)


def _when(comparison: Comparison, year: float, t: int) -> str:
    reached = float(comparison.years[t])
    if abs(reached - year) < 0.05:
        return reading.year_text(year)
    return f"{reading.year_text(year)} (as of {reading.year_text(reached)})"


def _notes(comparison: Comparison, years: Sequence[float], at: Sequence[int]) -> tuple[str, ...]:
    reached = [float(comparison.years[t]) for t in at]
    if all(abs(year - got) < 0.05 for year, got in zip(years, reached, strict=True)):
        return ()
    return (
        f"Values are computed once a generation ({comparison.generation_years:g} years); a value "
        "asked for in between is the last one reached by then, in the year in brackets.",
    )
