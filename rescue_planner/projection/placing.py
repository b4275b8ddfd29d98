"""Where things stand on a chart: ticks, ranges, and labels that do not overlap. No Qt here."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

_STEPS = (1.0, 2.0, 5.0, 10.0)


def tick_step(length: float, most: int) -> float:
    """Return the smallest round step (1, 2 or 5 times a power of ten) giving at most `most` gaps.

    Raises
    ------
    ValueError
        When `length` is not above 0 or `most` is below 1.
    """
    if not length > 0 or most < 1:
        raise ValueError(f"no ticks on a length of {length} with {most} gaps")
    rough = length / most
    power = 10.0 ** math.floor(math.log10(rough))
    return next(step * power for step in _STEPS if step * power >= rough * (1 - 1e-9))


def ticks(low: float, high: float, most: int = 4, whole: bool = False) -> tuple[float, ...]:
    """Return round values within [low, high], with at most `most` gaps between them.

    Parameters
    ----------
    whole : bool
        Only whole numbers, for years and generations.
    """
    step = tick_step(high - low, most)
    if whole:
        step = max(1.0, step)
    first, last = math.ceil(low / step - 1e-9), math.floor(high / step + 1e-9)
    return tuple(round(k * step, 12) for k in range(first, last + 1))


def round_range(low: float, high: float, most: int = 4) -> tuple[float, float]:
    """Return `low` and `high` widened to round values; a single value gets room around it."""
    if high - low <= 1e-12 * max(1.0, abs(high)):
        room = max(abs(high) * 0.1, 0.05)
        low, high = low - room, high + room
    step = tick_step(high - low, most)
    return (
        round(math.floor(low / step + 1e-9) * step, 12),
        round(math.ceil(high / step - 1e-9) * step, 12),
    )


def tick_texts(values: Sequence[float]) -> tuple[str, ...]:
    """Return tick values as text, all with the same, smallest sufficient number of decimals."""
    places = max((_places(value) for value in values), default=0)
    return tuple(f"{value + 0.0:.{places}f}".replace("-", "−") for value in values)


def _places(value: float) -> int:
    text = f"{value:.6f}".rstrip("0")
    return len(text.partition(".")[2])


def spread(wanted: Sequence[float], gap: float, low: float, high: float) -> tuple[float, ...]:
    """Return positions near `wanted`, at least `gap` apart, within [low, high].

    Order is kept and the sum of squared moves is the least there is: neighbours that are too
    close are pooled and moved together (isotonic regression on position minus rank times gap).

    Raises
    ------
    ValueError
        When so many labels do not fit.
    """
    count = len(wanted)
    if (count - 1) * gap > (high - low) + 1e-9:
        raise ValueError(f"{count} labels {gap} apart do not fit between {low} and {high}")
    order = sorted(range(count), key=lambda i: (wanted[i], i))
    blocks: list[tuple[float, int]] = []  # mean of (position - rank * gap), how many
    for rank, i in enumerate(order):
        mean, size = wanted[i] - rank * gap, 1
        while blocks and blocks[-1][0] > mean:
            other, more = blocks.pop()
            mean, size = (mean * size + other * more) / (size + more), size + more
        blocks.append((mean, size))
    free = [mean for mean, size in blocks for _ in range(size)]
    top = high - (count - 1) * gap
    placed = [0.0] * count
    for rank, i in enumerate(order):
        placed[i] = min(max(free[rank], low), top) + rank * gap
    return tuple(placed)


@dataclass(frozen=True, slots=True)
class Place:
    """Where one label stands: its position, and its column where one column is not enough."""

    position: float
    column: int


def place_labels(
    wanted: Sequence[float], height: float, low: float, high: float
) -> tuple[Place, ...]:
    """Return places for labels of one height, centred near `wanted`, never overlapping.

    Labels that do not fit between `low` and `high` above one another go into more columns.
    """
    if not wanted:
        return ()
    inner_low, inner_high = low + height / 2, max(high - height / 2, low + height / 2)
    each = max(1, int((inner_high - inner_low) / height + 1e-9) + 1)
    columns = -(-len(wanted) // each)
    order = sorted(range(len(wanted)), key=lambda i: (wanted[i], i))
    places = [Place(0.0, 0)] * len(wanted)
    for column in range(columns):
        members = order[column::columns]
        positions = spread([wanted[i] for i in members], height, inner_low, inner_high)
        for i, position in zip(members, positions, strict=True):
            places[i] = Place(position, column)
    return tuple(places)


Box = tuple[float, float, float, float]  # left, top, width, height


def quietest(candidates: Sequence[Box], busy: Sequence[tuple[float, float]]) -> int:
    """Return which box covers the fewest busy points; the first of equals.

    Parameters
    ----------
    candidates : boxes
        In the order in which they are liked.
    busy : points (x, y)
        What should stay uncovered, such as points along the lines.
    """
    counts = [
        sum(left <= x <= left + wide and top <= y <= top + tall for x, y in busy)
        for left, top, wide, tall in candidates
    ]
    return min(range(len(counts)), key=lambda i: (counts[i], i))
