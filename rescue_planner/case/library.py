"""Published values that a user may borrow: shipped ones, and the user's own.

The user's own stand in a file of the user's state folder, so that they survive a new version of
the program. A value is always shown with its taxon, convention and caveat, and never as a verdict.
"""

from __future__ import annotations

import json
import re
from dataclasses import dataclass
from functools import cache
from pathlib import Path

from pydantic import BaseModel, ConfigDict, Field, ValidationError, model_validator

from rescue_planner import places
from rescue_planner.case.document import Case
from rescue_planner.case.edits.base import Edit, refuse
from rescue_planner.case.edits.values import set_value
from rescue_planner.case.fields import definition_at
from rescue_planner.case.paths import get, parse_path
from rescue_planner.case.quantity import Number, Quantity
from rescue_planner.case.raw import to_raw
from rescue_planner.case.spoken import spoken_place

FORMAT, VERSION = "published values", 1
FILE = "published-values.json"
LARGEST = 2_000_000  # bytes of the user's file


class LibraryError(Exception):
    """The user's own values cannot be read or written; one sentence says why."""


class Published(BaseModel):
    """One published value. Without `best` it is there for reading only.

    `fits` names the inputs by path, lists as `[*]`; `times` names a number of the case that the
    value is a multiple of, as the adults counted are for a ratio Ne/N.
    """

    model_config = ConfigDict(frozen=True, extra="forbid")
    key: str = Field(min_length=1)
    fits: tuple[str, ...] = Field(min_length=1)
    name: str = Field(min_length=1)
    best: Number | None = None
    low: Number | None = None
    high: Number | None = None
    unit: str = ""
    convention: str = ""
    times: str | None = None
    taxon: str = Field(min_length=1)
    source: str = Field(min_length=1)
    caveat: str = Field(min_length=1)

    @model_validator(mode="after")
    def _in_order(self) -> Published:
        ends = [self.low, self.high]
        if self.best is None and ends != [None, None]:
            raise ValueError("a range needs a best value")
        if self.best is not None:
            Quantity(best=self.best, low=self.low, high=self.high)
        return self

    @property
    def usable(self) -> bool:
        """Whether it can be entered; otherwise it is for reading."""
        return self.best is not None

    @property
    def value_words(self) -> str:
        """Value, range, unit and convention in one line; empty where it is for reading."""
        if self.best is None:
            return ""
        spread = "" if self.low is None else f" ({self.low:g} to {self.high:g})"
        convention = f"; {self.convention}" if self.convention else ""
        return f"{self.best:g}{spread} {self.unit}{convention}"


@dataclass(frozen=True, slots=True)
class Library:
    """All published values, the user's own last, and what is wrong with the user's file."""

    shipped: tuple[Published, ...]
    own: tuple[Published, ...] = ()
    complaint: str = ""

    def fitting(self, path: str) -> tuple[Published, ...]:
        """Return the values for the input at `path`: those to borrow first, then those to read."""
        pattern = re.sub(r"\[\d+\]", "[*]", path)
        found = [one for one in (*self.own, *self.shipped) if pattern in one.fits]
        return tuple(sorted(found, key=lambda one: not one.usable))


def own_file() -> Path:
    """Return where the user's own values stand (it need not be there)."""
    return places.user_state() / FILE


def library() -> Library:
    """Return the shipped values with the user's own; a bad file of the user is a complaint."""
    shipped = _shipped()
    path = own_file()
    try:
        own = _read(_text(path)) if path.is_file() else ()
    except (OSError, ValueError, RecursionError) as wrong:
        return Library(shipped, (), f"Your own published values in {path} cannot be read: "
                                    f"{_reason(wrong)} Mend or move the file.")  # fmt: skip
    return Library(shipped, own)


@cache
def _shipped() -> tuple[Published, ...]:
    return _read((places.resources() / "library.json").read_text("utf-8"))


def _text(path: Path) -> str:
    if path.stat().st_size > LARGEST:
        raise ValueError(f"it is larger than {LARGEST // 1_000_000} MB.")
    return path.read_text("utf-8")


def _read(text: str) -> tuple[Published, ...]:
    raw = json.loads(text)
    if not isinstance(raw, dict) or raw.get("format") != FORMAT:
        raise ValueError(f"it does not say “format”: “{FORMAT}”.")
    if raw.get("version") != VERSION:
        raise ValueError("a newer version of the program wrote it.")
    entries = raw.get("entries")
    if not isinstance(entries, list):
        raise ValueError("it has no list of entries.")
    made = tuple(Published.model_validate(one) for one in entries)
    if len({one.key for one in made}) < len(made):
        raise ValueError("two entries have the same key.")
    return made


def _reason(wrong: Exception) -> str:
    if isinstance(wrong, ValidationError):
        first = wrong.errors()[0]
        return f"{'.'.join(str(step) for step in first['loc'])}: {first['msg']}."
    if isinstance(wrong, json.JSONDecodeError | UnicodeDecodeError | RecursionError):
        return "it is not JSON."
    return f"{wrong}"


def quantity(case: Case, path: str, entry: Published) -> Quantity:
    """Return what borrowing `entry` puts at `path`: best, low, high, origin and source.

    Raises
    ------
    InvalidCase
        When it is for reading only, or is a multiple of a number that the case leaves out.
    """
    if entry.best is None:
        raise refuse(path, "this value is for reading only.")
    times, words = _multiplied(case, path, entry)
    definition = definition_at(parse_path(path))
    least = definition.at_least if definition is not None else None
    floor = least if entry.times and least is not None else float("-inf")  # a ratio of few animals

    def worked(value: float | None) -> float | None:
        return None if value is None else max(floor, _rounded(value * times))

    about = [entry.source, entry.taxon, entry.convention, words]
    return Quantity.model_validate(
        {
            name: held
            for name, held in {
                "best": worked(entry.best) if entry.times else entry.best,
                "low": worked(entry.low) if entry.times else entry.low,
                "high": worked(entry.high) if entry.times else entry.high,
                "origin": "borrowed",
                "source": "; ".join(part for part in about if part),
            }.items()
            if held is not None
        }
    )


def _multiplied(case: Case, path: str, entry: Published) -> tuple[float, str]:
    if entry.times is None:
        return 1.0, ""
    found = re.findall(r"\[\d+\]", path)
    place = entry.times.replace("[*]", found[0]) if found else entry.times
    raw = to_raw(case)
    try:
        held = get(raw, place)
    except KeyError:
        name = spoken_place(raw, parse_path(place))
        raise refuse(path, f"enter {name} first: this value is a share of it.") from None
    best = float(held["best"] if isinstance(held, dict) else held)
    return best, f"{entry.best:g} of {best:g}"


def _rounded(value: float) -> float:
    return float(f"{value:.3g}")


def borrow(case: Case, path: str, entry: Published) -> Edit:
    """Return the one edit that enters a published value with its range, origin and source.

    Raises
    ------
    InvalidCase
        When the value cannot be entered here.
    """
    made = set_value(case, path, quantity(case, path, entry))
    return Edit(f"Borrow a published value: {made.sentence[:1].lower()}{made.sentence[1:]}",
                made.case)  # fmt: skip


def keep(entry: Published) -> None:
    """Add an entry to the user's own values; one with the same key is replaced.

    Raises
    ------
    LibraryError
        When the file cannot be read or written; what it held is whole.
    """
    _write([*_others(entry.key), entry])


def forget(key: str) -> None:
    """Take an entry out of the user's own values.

    Raises
    ------
    LibraryError
        When the file cannot be read or written; what it held is whole.
    """
    _write(_others(key))


def _others(key: str) -> list[Published]:
    held = library()
    if held.complaint:
        raise LibraryError(held.complaint)
    return [one for one in held.own if one.key != key]


def _write(entries: list[Published]) -> None:
    raw = {
        "format": FORMAT,
        "version": VERSION,
        "entries": [one.model_dump(mode="json", exclude_none=True) for one in entries],
    }
    path = own_file()
    beside = path.with_name(path.name + ".new")
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        beside.write_text(json.dumps(raw, ensure_ascii=False, indent=1) + "\n", encoding="utf-8")
        beside.replace(path)
    except OSError as wrong:
        reason = wrong.strerror or "the disk refuses"
        raise LibraryError(f"Your published values cannot be kept in {path}: {reason}.") from wrong


def entry_from(case: Case, path: str) -> Published:
    """Return the value that the case holds at `path` as an entry of the user's own.

    Raises
    ------
    InvalidCase
        When nothing is held there, or no source is stated with it.
    """
    raw = to_raw(case)
    try:
        held = get(raw, path)
    except KeyError:
        held = None
    if not isinstance(held, dict) or not held.get("source"):
        raise refuse(path, "state the source of the value first.")
    definition = definition_at(parse_path(path))
    pattern = re.sub(r"\[\d+\]", "[*]", path)
    taxon = case.species or "not stated"
    return Published(
        key=f"own: {pattern}: {held['source']}"[:200],
        fits=(pattern,),
        name=definition.name if definition is not None else pattern,
        best=held["best"],
        low=held.get("low"),
        high=held.get("high"),
        unit=definition.unit if definition is not None else "",
        taxon=taxon,
        source=held["source"],
        caveat=f"Kept from the case “{case.title}”.",
    )
