"""Texts put into the table of a plan's releases: what is right goes into the case in one edit."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from rescue_planner.case.document import Case
from rescue_planner.case.edits.base import Edit
from rescue_planner.case.edits.releases import change_releases
from rescue_planner.case.faults import InvalidCase, Problem
from rescue_planner.case.paths import parse_path
from rescue_planner.case.plan_table import (
    COLUMNS,
    NOTHING_HELD,
    PLACES,
    Cell,
    Held,
    Read,
    Sheet,
    cell_text,
    value_of,
)
from rescue_planner.case.plans import Plan

Values = dict[int, Any]  # by column
Texts = dict[int, str]
_DONOR = PLACES["donor"]
_COUNT = PLACES["females"]


@dataclass(frozen=True, slots=True)
class Entry:
    """What became of texts: the edit that holds the good ones, and what the table still holds."""

    edit: Edit | None
    sheet: Sheet


def put_texts(
    case: Case,
    plan: str,
    texts: Mapping[Cell, str],
    read: Read,
    sheet: Sheet = NOTHING_HELD,
    sentence: str = "",
) -> Entry:
    """Put texts into cells; rows below the last release become new ones.

    Parameters
    ----------
    case, plan
        Where.
    texts
        By (row, column). An empty text leaves the value out.
    read
        Returns the number that a text says, or raises ValueError with one sentence.
    sheet
        What the table held before; all of it is tried again.
    sentence
        What the undo menu says; made up where left out.

    Returns
    -------
    Entry
        No edit where nothing can go in. Nothing typed is lost: what is not in the case is in the
        sheet.
    """
    trial = _Trial(case, plan, read)
    rows = len(trial.releases)
    again = {cell: held.text for cell, held in sheet.held.items()}
    mine = {cell: text for cell, text in texts.items() if cell[0] < rows}
    for (r, c), text in {**mine, **{k: v for k, v in again.items() if k not in mine}}.items():
        trial.change(r, c, text)
    drafts = [{c: held.text for c, held in draft.items()} for draft in sheet.drafts]
    for (r, c), text in sorted(texts.items()):
        if r >= rows:
            while len(drafts) <= r - rows:
                drafts.append({})
            drafts[r - rows][c] = text
    for order, draft in enumerate(drafts):
        if any(draft.values()):
            trial.add(order, draft)
    edit = trial.settled(sentence or _sentence(plan, texts))
    return Entry(edit, trial.sheet())


def _sentence(plan: str, texts: Mapping[Cell, str]) -> str:
    if len(texts) != 1:
        return f"Put {len(texts)} values into the releases of plan “{plan}”"
    ((r, c), text) = next(iter(texts.items()))
    words = f"{COLUMNS[c].title.lower()} of release {r + 1} of plan “{plan}”"
    return f"Set {words} to {text}" if text else f"Leave out {words}"


@dataclass(slots=True)
class _Trial:
    """Values that may go in, and texts that may not."""

    case: Case
    plan: str
    read: Read
    changes: dict[int, Values] = field(default_factory=dict)
    typed: dict[Cell, str] = field(default_factory=dict)
    held: dict[Cell, Held] = field(default_factory=dict)
    new: list[tuple[int, Texts, Values]] = field(default_factory=list)  # whole rows, in order
    drafts: list[tuple[int, dict[int, Held]]] = field(default_factory=list)  # rows not yet whole
    releases: Sequence[Any] = ()

    def __post_init__(self) -> None:
        self.releases = self.case.plan(self.plan).releases

    def change(self, row: int, column: int, text: str) -> None:
        """Let a text change a cell of a release."""
        if text == cell_text(self.releases[row], column):
            return
        value, why = self._value(column, text)
        if why:
            self.held[row, column] = Held(text, why)
            return
        self.typed[row, column] = text
        self.changes.setdefault(row, {})[column] = value

    def add(self, order: int, texts: Texts) -> None:
        """Let texts become a new release, if they make a whole one."""
        read = {c: self._value(c, text) for c, text in texts.items()}
        why = {c: words for c, (_, words) in read.items() if words}
        for c, column in enumerate(COLUMNS):
            if column.needed and c not in texts:
                why[c] = f"{column.title} is missing: add it."
        if why:
            self._draft(order, texts, why)
        else:
            self.new.append((order, texts, {c: value for c, (value, _) in read.items()}))

    def _draft(self, order: int, texts: Texts, why: Mapping[int, str]) -> None:
        row = {c: Held(texts.get(c, ""), why.get(c, "")) for c in sorted({*texts, *why})}
        self.drafts.append((order, row))

    def _value(self, column: int, text: str) -> tuple[Any, str]:
        """Return the value that a text says, and what is wrong with it."""
        one = COLUMNS[column]
        if not text.strip():
            return None, f"{one.title} is missing: add it." if one.needed else ""
        if column == _DONOR:
            return self._donor(text.strip())
        try:
            return self.read(text), ""
        except ValueError as wrong:
            return None, str(wrong)

    def _donor(self, text: str) -> tuple[str, str]:
        names = [donor.name for donor in self.case.donors]
        near = [name for name in names if name.strip().casefold() == text.casefold()]
        if text in names:
            return text, ""
        if len(near) == 1:
            return near[0], ""
        if not names:
            return text, "No donor is entered yet: add one on the Case page."
        known = ", ".join(f"“{name}”" for name in names)
        return text, f"There is no donor “{text}”: write one of {known}."

    # all that can go in

    def settled(self, sentence: str) -> Edit | None:
        """Return the edit of all that can go in; the rest is held back with its sentence."""
        while True:
            try:
                edit = self._edit(sentence, self.changes, [new[2] for new in self.new])
            except InvalidCase as wrong:
                if not self._blame(wrong.problems):
                    self._row_by_row()
                    edit = self._edit(sentence, self.changes, [new[2] for new in self.new])
                    break
            else:
                break
        return edit if edit.case != self.case else None

    def _edit(self, sentence: str, changes: Mapping[int, Values], new: Sequence[Values]) -> Edit:
        by_key = {r: _by_key(values) for r, values in changes.items() if values}
        return change_releases(
            self.case, self.plan, sentence, by_key, [_by_key(values) for values in new]
        )

    def _blame(self, problems: Sequence[Problem]) -> bool:
        """Hold back the cells and rows that problems name; return whether there was one."""
        rows: dict[int, dict[int, str]] = {}
        for problem in problems:
            place = self._place(problem.path)
            if place is not None:
                rows.setdefault(place[0], {}).setdefault(place[1], problem.text)
        found = False
        for r, why in rows.items():
            if r < len(self.releases):
                found |= self._hold(r, why)
        for nth in sorted((r - len(self.releases) for r in rows), reverse=True):
            if nth >= 0:
                order, texts, _ = self.new.pop(nth)
                self._draft(order, texts, rows[nth + len(self.releases)])
                found = True
        return found

    def _hold(self, row: int, why: Mapping[int, str]) -> bool:
        """Hold back the changed cells of a release that are named."""
        changed = self.changes.get(row, {})
        named = {c: words for c, words in why.items() if c in changed}
        for c, words in named.items():
            del changed[c]
            self.held[row, c] = Held(self.typed[row, c], words)
        return bool(named)

    def _place(self, path: str) -> Cell | None:
        """Return the cell that the path of a problem names, or nothing for another place."""
        index = [one.name for one in self.case.plans].index(self.plan)
        steps = parse_path(path) if path else ()
        if steps[:3] != ("plans", index, "releases") or len(steps) < 4:
            return None
        row = steps[3]
        inner = steps[4:]
        column = next((c for c, one in enumerate(COLUMNS) if inner[: len(one.path)] == one.path), 0)
        return (row, column) if isinstance(row, int) else None

    def _row_by_row(self) -> None:
        """Let rows in one after the other; hold back what does not fit what is in before it."""
        changes, new = self.changes, self.new
        self.changes, self.new = {}, []
        for r, values in changes.items():
            why = self._refusal({**self.changes, r: values}, [held[2] for held in self.new])
            if why:
                self._cell_by_cell(r, values)
            else:
                self.changes[r] = values
        for order, texts, values in new:
            why = self._refusal(self.changes, [*(held[2] for held in self.new), values])
            if why:
                self._draft(order, texts, {_COUNT: why})
            else:
                self.new.append((order, texts, values))

    def _cell_by_cell(self, row: int, values: Values) -> None:
        """Let cells of a release in one after the other, and those that were refused once more."""
        held: dict[int, str] = {}
        for c in (*values, *values):
            mine = {**self.changes.get(row, {}), c: values[c]}
            if c in self.changes.get(row, {}):
                continue
            why = self._refusal({**self.changes, row: mine}, [one[2] for one in self.new])
            if why:
                held[c] = why
            else:
                self.changes[row] = mine
                held.pop(c, None)
        self.held.update({(row, c): Held(self.typed[row, c], why) for c, why in held.items()})

    def _refusal(self, changes: Mapping[int, Values], new: Sequence[Values]) -> str:
        try:
            self._edit("", changes, new)
        except InvalidCase as wrong:
            return wrong.problems[0].text
        return ""

    def sheet(self) -> Sheet:
        """Return what the table holds beside the case."""
        drafts = sorted(self.drafts, key=lambda one: one[0])
        return Sheet(dict(sorted(self.held.items())), tuple(row for _, row in drafts))


def _by_key(values: Values) -> dict[str, Any]:
    return {COLUMNS[c].key: value for c, value in values.items()}


def fill_down(case: Case, plan: str, rows: Sequence[int], columns: Sequence[int]) -> Edit:
    """Give releases the values of the first of them, ranges and sources included.

    Raises
    ------
    InvalidCase
        When a release would be wrong.
    KeyError
        When there is no such plan or release.
    """
    releases = case.plan(plan).releases
    first, *below = sorted(rows)
    if any(r >= len(releases) for r in rows):
        raise KeyError(f"no release {max(rows) + 1}")
    values = {
        COLUMNS[c].key: held.model_dump(mode="json", exclude_unset=True)
        if (held := value_of(releases[first], c)) is not None and not isinstance(held, str)
        else held
        for c in columns
    }
    words = ", ".join(COLUMNS[c].title.lower() for c in columns)
    sentence = f"Fill {words} of release {first + 1} down, plan “{plan}”"
    return change_releases(case, plan, sentence, dict.fromkeys(below, values))


def order_by(case: Case, plan: str, column: int, *, falling: bool = False) -> list[int]:
    """Return the old places of the releases, sorted by a column; what is left out comes last."""
    releases = case.plan(plan).releases

    def key(place: int) -> tuple[int, float, str]:
        held = value_of(releases[place], column)
        if held is None:
            return (1, 0.0, "")
        if isinstance(held, str):
            return (0, 0.0, held.casefold())
        return (0, -float(held.best) if falling else float(held.best), "")

    texts = isinstance(value_of(releases[0], column), str) if releases else False
    return sorted(range(len(releases)), key=key, reverse=falling and texts)


def followed(sheet: Sheet, before: Plan, after: Plan) -> Sheet:
    """Return the sheet after the plan was changed elsewhere: held texts stay with their release."""
    if before.releases == after.releases or not sheet.held:
        return sheet
    same = len(before.releases) == len(after.releases)
    places = {}
    for r in {cell[0] for cell in sheet.held}:
        places[r] = _new_place(before, after, r, stay=same)
    held: dict[Cell, Held] = {}
    for (r, c), one in sheet.held.items():
        new = places[r]
        if new is not None:
            held[new, c] = one
    return Sheet(held, sheet.drafts)


def _new_place(before: Plan, after: Plan, row: int, *, stay: bool) -> int | None:
    if row >= len(before.releases):
        return None
    release = before.releases[row]
    nth = before.releases[:row].count(release)
    places = [k for k, one in enumerate(after.releases) if one == release]
    if nth < len(places):
        return places[nth]
    return row if stay else None
