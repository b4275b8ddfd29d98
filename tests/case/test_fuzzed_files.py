"""Thousands of damaged files: each opens or is refused in words, never with a traceback."""

from __future__ import annotations

import copy
import io
import json
import math
import random
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from rescue_planner.case.file import CaseFileError, Opened, load, save
from rescue_planner.case.problems import InvalidCase, read_case
from tests.case.sample import full

SEED = 20270101
ODD: tuple[Any, ...] = (
    *(None, True, False, 0, -0.0, -1, 1e308, -1e308, 10**30, 0.5, 2027.5, 1e-320, math.pi),
    *("", " ", "NaN", "No releases", "same", "../x", "\x00", "é", "田", "[*]", "a" * 25_000),
    *([], [[]], [None], [1, 2, 3], {}, {"": 1}, {"best": 1}, {"best": None}, {"mean": -1}),
    *({"best": 1, "low": 2}, {"counts": {"x": 1}}, {"counts": {"1": 1.5}}, {"name": "No releases"}),
)


def _opened(path: Path) -> Opened | None:
    """Open a file, or let it be refused in the one or the other way in which a file may be."""
    try:
        return load(path)
    except CaseFileError as error:
        said = [str(error)]
    except InvalidCase as error:
        said = [problem.text for problem in error.problems]
    assert said
    for text in said:
        assert _is_plain(text), text[:300]
    return None


def _is_plain(text: str) -> bool:
    return text.endswith((".", "?")) and "\n" not in text and len(text) < 1000


def _places(node: Any, done: tuple[Any, ...] = ()) -> list[tuple[Any, ...]]:
    steps = node.items() if isinstance(node, dict) else enumerate(node)
    found = []
    for step, held in steps:
        found.append((*done, step))
        if isinstance(held, dict | list):
            found += _places(held, (*done, step))
    return found


def _changed(raw: Any, chance: random.Random) -> None:
    """Change one place of a plain case: another value, gone, doubled, or under another name."""
    place = chance.choice(_places(raw))
    holder = raw
    for step in place[:-1]:
        holder = holder[step]
    step = place[-1]
    kind = chance.randrange(6)
    if kind == 0:
        del holder[step]
    elif kind == 1 and isinstance(holder, list):
        holder.extend(copy.deepcopy(holder[step]) for _ in range(chance.choice((1, 3, 40))))
    elif kind == 2 and isinstance(holder, dict):
        holder[chance.choice(("x", "", "name", "best", step + " "))] = holder.pop(step)
    elif kind == 3 and isinstance(holder[step], int | float):
        holder[step] = holder[step] * chance.choice((-1, 0, 2, 1000, 1e-9))
    else:
        holder[step] = copy.deepcopy(chance.choice(ODD))


def _cut_up(content: bytes, chance: random.Random) -> bytes:
    """Damage bytes as a bad disk, a broken transfer or a careless editor would."""
    held = bytearray(content)
    for _ in range(chance.choice((1, 1, 2, 8))):
        at = chance.randrange(len(held)) if held else 0
        kind = chance.randrange(5)
        if kind == 0:
            held[at : at + 1] = bytes([chance.randrange(256)])
        elif kind == 1:
            del held[at : at + chance.choice((1, 4, 200))]
        elif kind == 2:
            held[at:at] = chance.randbytes(chance.choice((1, 4, 60)))
        elif kind == 3:
            held[at:at] = held[at : at + chance.choice((1, 30, 300))]
        else:
            held[at:at] = chance.choice((b"{", b"]", b'"', b"1e999", b"NaN", b",", b"\\ud800"))
    return bytes(held)


def _edited_text(chance: random.Random) -> bytes:
    raw = full()
    for _ in range(chance.choice((1, 1, 2, 5))):
        _changed(raw, chance)
    return json.dumps(raw, ensure_ascii=False).encode("utf-8", "surrogatepass")


def _damaged_text(chance: random.Random) -> bytes:
    return _cut_up(json.dumps(full()).encode(), chance)


def _zip_of(content: bytes, chance: random.Random) -> bytes:
    held = io.BytesIO()
    with zipfile.ZipFile(held, "w", chance.choice((zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED))) as z:
        z.writestr("case.json", content)
        z.writestr(
            chance.choice(("tables/a.csv", "log.jsonl", "tables/../b.csv", "x")), b"a,b\n1,2"
        )
    return held.getvalue()


def _edited_zip(chance: random.Random) -> bytes:
    return _zip_of(_edited_text(chance), chance)


def _damaged_zip(chance: random.Random) -> bytes:
    return _cut_up(_zip_of(json.dumps(full()).encode(), chance), chance)


@pytest.mark.parametrize("damaged", [_edited_text, _damaged_text, _edited_zip, _damaged_zip])
def test_that_500_damaged_files_open_or_are_refused_in_words(
    tmp_path: Path, damaged: Callable[[random.Random], bytes]
) -> None:
    chance = random.Random(f"{SEED} {damaged.__name__}")
    path = tmp_path / "case.rescue"
    opened = 0
    for _ in range(500):
        path.write_bytes(damaged(chance))
        found = _opened(path)
        if found is not None:  # what opens is a case: it can be saved and opens the same
            opened += 1
            save(tmp_path / "again.rescue", found.case)
            assert load(tmp_path / "again.rescue").case == found.case
    assert opened < 500  # the damage is felt


def test_that_a_case_of_odd_values_everywhere_is_refused_in_words() -> None:
    chance = random.Random(SEED)
    for place in _places(full()):
        for odd in chance.sample(ODD, 10):
            raw: Any = full()
            holder = raw
            for step in place[:-1]:
                holder = holder[step]
            holder[place[-1]] = odd
            for text in _refusals(raw):
                assert _is_plain(text), (place, text[:300])


def _refusals(raw: Any) -> list[str]:
    try:
        read_case(raw)
    except InvalidCase as error:
        return [problem.text for problem in error.problems]
    return []


@pytest.mark.parametrize("length", [1e-320, 1e-300, 1e308])
def test_that_a_generation_too_short_or_too_long_is_a_problem_in_words(length: float) -> None:
    raw: Any = full()
    raw["time"]["generation_years"] = length
    assert any("generation" in text.lower() for text in _refusals(raw))
