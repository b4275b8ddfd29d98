"""The pages of the offline help as text, their order, their links and the search. No Qt here.

Pages are Markdown under `resources/help`, listed in `contents.md`. Three more are written from the
one definition of what they list: inputs, measures and keys. A number that a page takes from a
shipped case is written `[[73.8 :: plan :: measure :: year]]`; readers see the number alone, and a
test computes it again (tests/test_help_numbers.py).
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from functools import lru_cache

from rescue_planner import places

INPUTS, MEASURES, KEYBOARD = "inputs", "measures", "keyboard"
MARK = re.compile(r"\[\[(?P<shown>.+?) :: (?P<what>.+?)\]\]")
LINK = re.compile(r"(?<!\[)\[(?P<words>[^\]\[]+)\]\((?P<to>[^)\s]+)\)")
_ENTRY = re.compile(r"^\s*[*-] \[(?P<title>[^\]]+)\]\((?P<key>[\w-]+)\.md\)\s*$")
_HEADING = re.compile(r"^(?P<marks>#{1,3}) (?P<words>.+)$")


@dataclass(frozen=True, slots=True)
class Entry:
    """One line of the contents: a page, or a heading over pages where `key` is empty."""

    title: str
    key: str = ""


@dataclass(frozen=True, slots=True)
class Section:
    """What stands under one heading of a page; `anchor` is empty for its first heading."""

    page: str
    page_title: str
    heading: str
    anchor: str
    body: str


@dataclass(frozen=True, slots=True)
class Found:
    """A section that the search found, with the words around the first hit."""

    section: Section
    snippet: str


def slug(words: str) -> str:
    """Return a heading as the part of a link after `#`."""
    return re.sub(r"[\W_]+", "-", words.casefold()).strip("-")


@lru_cache(maxsize=1)
def contents() -> tuple[Entry, ...]:
    """Return headings and pages in the order of the contents."""
    text = (places.resources() / "help" / "contents.md").read_text(encoding="utf-8")
    found = []
    for line in text.splitlines():
        if line.startswith("## "):
            found.append(Entry(line[3:].strip()))
        elif entry := _ENTRY.match(line):
            found.append(Entry(entry["title"], entry["key"]))
    return tuple(found)


def page_keys() -> tuple[str, ...]:
    """Return the keys of all pages, in the order of the contents."""
    return tuple(entry.key for entry in contents() if entry.key)


@lru_cache(maxsize=64)
def source(key: str) -> str:
    """Return a page as it is written, marked numbers included.

    Raises
    ------
    KeyError
        If there is no such page.
    """
    if key not in page_keys():
        raise KeyError(key)
    made = {INPUTS: _inputs, MEASURES: _measures, KEYBOARD: _keyboard}
    if key in made:
        return made[key]()
    return (places.resources() / "help" / f"{key}.md").read_text(encoding="utf-8")


def page(key: str) -> str:
    """Return a page in Markdown as readers see it."""
    return MARK.sub(lambda mark: mark["shown"], source(key))


def title(key: str) -> str:
    """Return the title of a page: its first heading."""
    return page(key).splitlines()[0].removeprefix("# ")


def links(key: str) -> tuple[tuple[str, str], ...]:
    """Return the links of a page as (page, anchor), other addresses as (address, '')."""
    return tuple(target(key, found["to"]) for found in LINK.finditer(page(key)))


def target(key: str, to: str) -> tuple[str, str]:
    """Return where a link on page `key` leads: (page, anchor)."""
    name, _, anchor = to.partition("#")
    if not name:
        return key, anchor
    return (name.removesuffix(".md") if re.fullmatch(r"[\w-]+\.md", name) else to), anchor


def plain(markdown: str) -> str:
    """Return Markdown as plain words, for the search and its snippets."""
    words = LINK.sub(lambda found: found["words"], markdown)
    words = re.sub(r"[*`]|^\s*[-#>|]+\s*|\|", " ", words, flags=re.MULTILINE)
    return " ".join(words.replace("---", " ").replace("\\", "").split())


def sections(key: str) -> Iterator[Section]:
    """Yield the sections of a page."""
    name, heading, anchor = title(key), title(key), ""
    lines: list[str] = []
    for line in page(key).splitlines()[1:]:
        found = _HEADING.match(line)
        if found is None:
            lines.append(line)
            continue
        yield Section(key, name, heading, anchor, plain("\n".join(lines)))
        heading, lines = plain(found["words"]), []
        anchor = slug(heading)
    yield Section(key, name, heading, anchor, plain("\n".join(lines)))


@lru_cache(maxsize=1)
def _everything() -> tuple[tuple[Section, str, str], ...]:
    return tuple(
        (one, one.heading.casefold(), f"{one.page_title} {one.heading} {one.body}".casefold())
        for key in page_keys()
        for one in sections(key)
    )


def search(asked: str, most: int = 60) -> tuple[Found, ...]:
    """Return the sections that hold every word asked for, headings first.

    A heading that is just what was asked comes before one that holds it, and that before a
    section that only mentions it.
    """
    wanted = " ".join(asked.casefold().split())
    words = wanted.split()
    if not words:
        return ()
    hits = []
    for at, (section, heading, body) in enumerate(_everything()):
        if all(word in body for word in words):
            rank = (heading != wanted, wanted not in heading, wanted not in body, at)
            hits.append((rank, section))
    ordered = [section for _, section in sorted(hits, key=lambda hit: hit[0])]
    return tuple(Found(one, _snippet(one.body, words)) for one in ordered[:most])


def _snippet(body: str, words: list[str], width: int = 90) -> str:
    low = body.casefold()
    at = min((low.find(word) for word in words if word in low), default=0)
    start = max(0, body.rfind(" ", 0, max(0, at - width // 3)) + 1)
    more = start + width < len(body)
    end = body.rfind(" ", start, start + width) if more else len(body)
    return ("… " if start else "") + body[start:end].strip() + (" …" if more else "")


# pages written from the one definition of what they list


def _inputs() -> str:
    from rescue_planner.case.document import Case
    from rescue_planner.case.inputs import every_input

    lines = [
        "# Every input",
        "",
        "What each number and choice of a case means, with its unit, its bounds and, where there "
        "is one, a published range with its source. The explainer at the right of the desk says "
        "the same of the field you are in.",
    ]
    seen = set()
    for _, one in every_input(Case):
        if (one.name, one.meaning) in seen:
            continue
        seen.add((one.name, one.meaning))
        facts = [f"Unit: {one.unit}." if one.unit else "", f"Bounds: {one.bounds}."]
        facts = [fact for fact in facts[: 2 if one.bounds else 1] if fact]
        lines += ["", f"## {_escaped(one.name)}", "", _escaped(" ".join([one.meaning, *facts]))]
        if one.published:
            lines += ["", _escaped(f"Published: {one.published}. Source: {one.source}.")]
        if one.caution:
            lines += ["", f"**{_escaped(one.caution)}**"]
    return "\n".join(lines) + "\n"


def _measures() -> str:
    from rescue_planner.case.measures import MEASURES as all_measures
    from rescue_planner.desk.measure_words import SOURCES

    lines = [
        "# Every measure",
        "",
        "A measure is one quantity over time. Each can be shown as a chart, read as a number and, "
        "where it makes sense, be given a target. Some are only read from simulated animals: "
        "see [what each depth computes](depths.md).",
    ]
    for one in all_measures:
        per = {"donor": " There is one for each donor.", "locus": " One for each tracked locus."}
        lines += ["", f"## {one.name.removesuffix(' of')}", ""]
        lines.append(_escaped(f"{one.meaning} Unit: {one.unit}.{per.get(one.per, '')}"))
        if one.key in SOURCES:
            lines += ["", f"Source of the formula: {SOURCES[one.key]}."]
    return "\n".join(lines) + "\n"


def _keyboard() -> str:
    from rescue_planner.desk.help_keys import KEYS

    rows = [f"| {_escaped(keys)} | {_escaped(what)} |" for keys, what in KEYS]
    return "\n".join(
        [
            "# Keyboard",
            "",
            "Everything in the program can be done by keys alone. A ring shows what has the focus.",
            "",
            "| Keys | What they do |",
            "| --- | --- |",
            *rows,
            "",
        ]
    )


def _escaped(words: str) -> str:
    return re.sub(r"([*_\[\]<>|])", r"\\\1", words)
