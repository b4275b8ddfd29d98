"""What a document is made of, before it becomes a word processor's file or a page."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from rescue_planner.annex.pictures import Picture


@dataclass(frozen=True, slots=True)
class Table:
    """A table with one header row; the first column heads its row.

    `numbers` are the columns aligned at right; `group` marks rows that head those below them.
    """

    caption: str
    head: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    numbers: frozenset[int] = frozenset()


@dataclass(frozen=True, slots=True)
class Text:
    """One paragraph; a caution stands out, a note is set small."""

    words: str
    kind: Literal["plain", "caution", "note"] = "plain"


@dataclass(frozen=True, slots=True)
class Bullets:
    """A list of sentences."""

    items: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Illustration:
    """A figure with its pictures: SVG for the page, PNG for the document."""

    number: int
    picture: Picture
    svg: bytes
    png: bytes


Block = Table | Text | Bullets | Illustration


@dataclass(frozen=True, slots=True)
class Section:
    """A heading with what stands under it; `level` 1 is a chapter."""

    title: str
    blocks: tuple[Block, ...]
    level: int = 1


@dataclass(frozen=True, slots=True)
class Report:
    """A whole annex."""

    title: str
    subtitle: str
    authority: str
    sections: tuple[Section, ...]
