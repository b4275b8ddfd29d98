"""The inputs chapter: a table for each part of the case, and what was left out in a few lines."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field

from rescue_planner.annex.blocks import Block, Table, Text
from rescue_planner.annex.inputs import DEFAULT, LEFT_OUT, InputRow, input_rows
from rescue_planner.annex.wording import listed, one_line
from rescue_planner.case.document import Case
from rescue_planner.case.paths import format_path, parse_path

HEAD = ("Input", "Value", "Unit", "Origin", "Source; date; person", "Place in the case file")
_GROUPS = {
    "time": "Time",
    "recipient": "Recipient",
    "life_cycle": "Life cycle",
    "inbreeding_cost": "Inbreeding cost",
    "load": "Hidden load",
    "mixing_cost": "Mixing cost",
    "genome": "Genome",
    "trait": "Trait",
    "run": "Run",
}
_LISTS = {
    "donors": "Donor",
    "loci": "Tracked locus",
    "plans": "Plan",
}
_TOGETHER = {"targets": "Targets", "what_ifs": "What-ifs"}
# The first page of the annex has these in full.
_SAID = frozenset({"title", "species", "authority", "decision"})


@dataclass(slots=True)
class _Group:
    """The rows of one part of the case; `place` is what their paths have in common."""

    name: str
    place: str
    rows: list[InputRow] = field(default_factory=list)


def input_blocks(case: Case) -> tuple[Block, ...]:
    """Return every input of the case: a table for each part, then what it leaves out.

    What stands on the first page (title, species, authority, decision) is not said again.
    """
    groups: dict[str, _Group] = {}
    for row in input_rows(case):
        if str(parse_path(row.path)[0]) not in _SAID:
            name, place = _group(case, row.path)
            groups.setdefault(name, _Group(name, place)).rows.append(row)
    blocks: list[Block] = []
    absent: list[str] = []
    for group in groups.values():
        whole = [row for row in group.rows if row.path == group.place and row.origin == DEFAULT]
        if whole and len(group.rows) == 1:
            absent.append(f"{group.name.lower()} ({_taken(whole[0])})")
        else:
            blocks.extend(_blocks(group))
    if absent:
        blocks.append(Text(f"Parts of a case that this one does not have: {'; '.join(absent)}."))
    return tuple(blocks)


def _blocks(group: _Group) -> Iterator[Block]:
    given = [row for row in group.rows if row.origin != DEFAULT and not _is_name(row, group)]
    if given:
        where = f" ({group.place} in the case file)" if group.place else ""
        yield Table(
            caption=f"Inputs: {group.name}{where}",
            head=HEAD,
            rows=tuple(_cells(row, group) for row in given),
        )
    left = [row for row in group.rows if row.origin == DEFAULT]
    if left:
        yield Text(f"{group.name}, left out: {_left(left, group)}.", "note")


def _is_name(row: InputRow, group: _Group) -> bool:
    """Return whether a row only repeats the name that its table has in its caption."""
    return bool(group.place) and row.path == f"{group.place}.name" and " " in group.name


def _group(case: Case, path: str) -> tuple[str, str]:
    steps = parse_path(path)
    first = str(steps[0])
    if first in _TOGETHER:
        return _TOGETHER[first], first
    if first in _LISTS and len(steps) > 1 and isinstance(steps[1], int):
        name = one_line(getattr(case, first)[steps[1]].name)
        return f"{_LISTS[first]} {name}", format_path(steps[:2])
    if first in _LISTS:
        return f"{_LISTS[first]}s".replace("locuss", "loci"), first
    return (_GROUPS[first], first) if first in _GROUPS else ("Case", "")


def _cells(row: InputRow, group: _Group) -> tuple[str, ...]:
    known = [part for part in (row.source, row.date, row.by) if part]
    return (
        row.name,
        f"{row.value} ({row.spread})" if row.spread else row.value,
        row.unit or "–",
        row.origin,
        "; ".join(known) or "–",
        _place(row, group),
    )


def _place(row: InputRow, group: _Group) -> str:
    return row.path.removeprefix(group.place).lstrip(".") or row.path


def _left(rows: Sequence[InputRow], group: _Group) -> str:
    """Return what was left out and what is taken; a name that comes twice tells its place."""
    count = Counter(row.name for row in rows)
    words = []
    for row in rows:
        twice = count[row.name] > 1
        name = f"{row.name} at {_place(row, group)}" if twice else row.name
        words.append((name, _taken(row)))
    same: dict[str, list[str]] = {}
    for name, taken in words:
        same.setdefault(taken, []).append(name)
    return "; ".join(
        f"{listed(names)}: {taken}" if taken else listed(names) for taken, names in same.items()
    )


def _taken(row: InputRow) -> str:
    return row.value.removeprefix(LEFT_OUT).removeprefix("; ")
