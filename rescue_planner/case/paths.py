"""Paths into a case, such as `plans[*].releases[0].who.females`.

A path is a tuple of steps: a text is the name of a field or of an entry of a mapping, a whole
number counts entries of a list from 0, `ANY` (written `[*]`) stands for every entry.
"""

from __future__ import annotations

import json
import re
from typing import Any, Final

ANY: Final = None
Step = str | int | None
Path = tuple[Step, ...]

_PLAIN = re.compile(r'[^.\[\]"*]+')
_STEP = re.compile(
    r'\.?(?P<name>[^.\[\]"*]+)|\[(?P<index>\d{1,9})\]|\[(?P<any>\*)\]|\[(?P<quoted>"(?:[^"\\]|\\.)*")\]'
)


def parse_path(text: str) -> Path:
    """Return the steps of a written path.

    Names that hold dots, brackets, stars or quotes are written `donor_frequency["a.b"]`.

    Raises
    ------
    ValueError
        When `text` is not a path.
    """
    steps: list[Step] = []
    at = 0
    while at < len(text):
        found = _STEP.match(text, at)
        dotted = text.startswith(".", at)
        bare = found is not None and found["name"] is not None
        if found is None or (bare and dotted != bool(steps)):
            raise ValueError(f'"{text}" is not a path: it cannot be read from character {at + 1}')
        steps.append(_step(found))
        at = found.end()
    if not steps:
        raise ValueError("an empty path names nothing")
    return tuple(steps)


def _step(found: re.Match[str]) -> Step:
    if found["index"] is not None:
        return int(found["index"])
    if found["any"] is not None:
        return ANY
    return str(json.loads(found["quoted"])) if found["quoted"] is not None else found["name"]


def format_path(steps: Path) -> str:
    """Return the written form of a path; `parse_path` reads it back."""
    text = ""
    for step in steps:
        if step is ANY:
            text += "[*]"
        elif isinstance(step, int):
            text += f"[{step}]"
        elif _PLAIN.fullmatch(step):
            text += f".{step}" if text else step
        else:
            text += f"[{json.dumps(step, ensure_ascii=False)}]"
    return text


def steps_of(path: str | Path) -> Path:
    """Return `path` as steps, whichever way it was given."""
    return parse_path(path) if isinstance(path, str) else path


def get(raw: Any, path: str | Path) -> Any:  # noqa: ANN401 - whatever the file holds
    """Return what stands at `path`.

    Raises
    ------
    KeyError
        When nothing stands there.
    """
    for step in steps_of(path):
        held = isinstance(raw, dict) and isinstance(step, str) and step in raw
        listed = isinstance(raw, list) and isinstance(step, int) and step < len(raw)
        if not held and not listed:
            raise KeyError(format_path(steps_of(path)))
        raw = raw[step]
    return raw


def put(raw: Any, path: str | Path, value: Any) -> Any:  # noqa: ANN401
    """Return a copy of `raw` with `value` at `path`; parts on the way are made where missing.

    The entry after the last of a list is appended.

    Raises
    ------
    KeyError
        When the path leads nowhere.
    """
    return _put(raw, steps_of(path), value, format_path(steps_of(path)))


def _put(raw: Any, steps: Path, value: Any, written: str) -> Any:  # noqa: ANN401
    if not steps:
        return value
    step, rest = steps[0], steps[1:]
    if isinstance(step, str) and (raw is None or isinstance(raw, dict)):
        held = raw or {}
        return {**held, step: _put(held.get(step), rest, value, written)}
    if isinstance(step, int) and (raw is None or isinstance(raw, list)):
        listed = list(raw or ())
        if step < len(listed):
            listed[step] = _put(listed[step], rest, value, written)
            return listed
        if step == len(listed):
            return [*listed, _put(None, rest, value, written)]
    raise KeyError(written)


def drop(raw: Any, path: str | Path) -> Any:  # noqa: ANN401
    """Return a copy of `raw` without what stands at `path`.

    Raises
    ------
    KeyError
        When nothing stands there.
    """
    steps = steps_of(path)
    holder = get(raw, steps[:-1])
    get(raw, steps)
    if isinstance(holder, dict):
        kept: Any = {name: held for name, held in holder.items() if name != steps[-1]}
    else:
        kept = [held for at, held in enumerate(holder) if at != steps[-1]]
    return put(raw, steps[:-1], kept)
