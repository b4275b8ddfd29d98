"""Strict JSON: doubled keys, NaN, infinities, bad text and deep nesting are refused with a word."""

from __future__ import annotations

import json
import math
import re
from typing import Any, NoReturn

MOST_NESTED = 60
_MOST_DIGITS = 400
_TOKENS = re.compile(r'"[^"\\]*+(?:\\.[^"\\]*+)*+"?|[\[\]{}]', re.DOTALL)


class JsonError(ValueError):
    """The text is not the JSON of a case; the text is the end of a sentence."""


def parse_json(content: bytes) -> Any:  # noqa: ANN401 - whatever the file holds
    """Return what a JSON text holds.

    Raises
    ------
    JsonError
        When it is not UTF-8, not JSON, nested too deep, names a key twice, or holds a number that
        is not finite.
    """
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content.count(b"\n", 0, error.start) + 1
        raise JsonError(f"it is not UTF-8 text (line {line}): save it as UTF-8") from error
    _check_nesting(text)
    try:
        held = json.loads(
            text,
            object_pairs_hook=_no_doubles,
            parse_constant=_not_finite,
            parse_float=_finite,
            parse_int=_whole,
        )
    except json.JSONDecodeError as error:
        where = f"line {error.lineno}, column {error.colno}"
        raise JsonError(f"it is not valid JSON ({where}: {error.msg.lower()})") from error
    _check_text(held)
    return held


def _check_nesting(text: str) -> None:
    depth = 0
    for token in _TOKENS.finditer(text):
        if token[0] in "[{":
            depth += 1
            if depth > MOST_NESTED:
                line = text.count("\n", 0, token.start()) + 1
                raise JsonError(f"it is nested more than {MOST_NESTED} deep (line {line})")
        elif token[0] in "]}":
            depth -= 1


def _no_doubles(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    held: dict[str, Any] = {}
    for key, value in pairs:
        if key in held:
            raise JsonError(f"it says “{key[:60]}” twice in one place: keep one of them")
        held[key] = value
    return held


def _not_finite(word: str) -> NoReturn:
    raise JsonError(f"it holds {word}, which is not a number: write the number, or leave it out")


def _finite(word: str) -> float:
    value = float(word)
    if not math.isfinite(value):
        raise JsonError(f"it holds {word[:40]}, which is too large a number: correct it")
    return value


def _whole(word: str) -> int:
    if len(word) > _MOST_DIGITS:
        raise JsonError(f"it holds a number of {len(word)} digits: correct it")
    return int(word)


def _check_text(held: object) -> None:
    """Refuse halves of characters, which could never be saved again."""
    try:
        json.dumps(held, ensure_ascii=False).encode()
    except UnicodeEncodeError as error:
        raise JsonError("it holds half of a character (a lone surrogate): correct it") from error
