"""Numbers as people type and read them; no widgets."""

from __future__ import annotations

import math
import re
from decimal import Decimal
from typing import TYPE_CHECKING, Any

from rescue_planner.case.paths import Path, steps_of

if TYPE_CHECKING:
    from typing_extensions import TypeIs

    from rescue_planner.case.document import Case
    from rescue_planner.case.inputs import Input
    from rescue_planner.case.quantity import Quantity

_PLAIN = re.compile(r"[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d+)?")


def read_number(text: str) -> int | float:
    """Return the number that `text` says; a decimal comma is read like a point.

    Raises
    ------
    ValueError
        With one sentence for the person who typed it.
    """
    plain = text.strip().replace("−", "-").replace("\u202f", "").replace("\u00a0", "")
    plain = plain.replace(" ", "")
    if re.fullmatch(r"[+-]?[1-9]\d{0,2}(,\d{3})+(\.\d+)?", plain):
        raise ValueError(
            f"“{text.strip()}” can be read in two ways: write it without a comma between thousands."
        )
    plain = plain.replace(",", ".") if plain.count(",") == 1 and "." not in plain else plain
    if plain.endswith("%"):
        raise ValueError("Write a share as a number between 0 and 1, such as 0.7 for 70 %.")
    if not _PLAIN.fullmatch(plain):
        raise ValueError(f"“{text.strip()}” is not a number: write digits, such as 16 or 0.42.")
    value = float(plain)
    if not math.isfinite(value):
        raise ValueError(f"“{text.strip()}” is too large a number.")
    return int(value) if value == int(value) and abs(value) < 1e15 and "." not in plain else value


def written(value: float | int) -> str:
    """Return a number in its shortest form that reads back the same."""
    if isinstance(value, float) and value.is_integer() and abs(value) < 1e15:
        value = int(value)
    return str(value) if isinstance(value, int) else repr(value)


def stepped(value: float, by: int, definition: Input | None) -> float | int:
    """Return `value` moved `by` sensible steps, held within the bounds of its definition.

    Whole numbers move by one; others in their second digit, so 0.42 by 0.01 and 16.0 by 1.
    """
    at_least = _bound(definition, "at_least", "above")
    at_most = _bound(definition, "at_most", "below")
    if definition is not None and definition.whole:
        step = Decimal(1)
    elif at_most is not None and at_most <= 1:
        step = Decimal("0.01") if not 0 < abs(value) < 0.1 else _second_digit(value)
    else:
        step = _second_digit(value)
    moved = Decimal(written(value)) + by * step
    result = float(moved)
    if at_least is not None and result < at_least:
        result = at_least
    if at_most is not None and result > at_most:
        result = at_most
    exclusive = definition is not None and (
        (definition.above is not None and result <= definition.above)
        or (definition.below is not None and result >= definition.below)
    )
    if exclusive:
        return value
    return int(result) if result.is_integer() else result


def _second_digit(value: float) -> Decimal:
    if value == 0:
        return Decimal("0.1")
    return Decimal(10) ** (math.floor(math.log10(abs(value))) - 1)


def _bound(definition: Input | None, *names: str) -> float | None:
    for name in names:
        held = None if definition is None else getattr(definition, name)
        if held is not None:
            return float(held)
    return None


def is_quantity(held: object) -> TypeIs[Quantity]:
    """Return whether a value of the case is a number with its range and origin."""
    from rescue_planner.case.quantity import Quantity

    return isinstance(held, Quantity)


def value_at(case: Case, path: str | Path) -> Any:  # noqa: ANN401 - whatever stands there
    """Return what stands at `path` of `case`, defaults included, or None where nothing does."""
    from rescue_planner.case.quantity import FrozenMap

    held: Any = case
    for step in steps_of(path):
        if isinstance(step, int) and isinstance(held, tuple):
            held = held[step] if step < len(held) else None
        elif isinstance(held, FrozenMap) and isinstance(step, str):
            held = held.get(step)
        elif isinstance(step, str):
            held = getattr(held, step, None)
        else:
            return None
        if held is None:
            return None
    return held


def range_in_words(held: Quantity) -> str:
    """Return `9 to 30` for a value with a range, else an empty text."""
    if held.spread is None:
        return ""
    return f"{written(held.spread[0])} to {written(held.spread[1])}"
