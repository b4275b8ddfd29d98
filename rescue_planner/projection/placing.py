"""Where things stand on a chart: ticks, ranges, and labels that do not overlap. No Qt here."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import accumulate, pairwise

_STEPS = (1.0, 2.0, 5.0, 10.0)
THIN = "\u202f"


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
    """Return tick values as text: the fewest decimals that do for all, thousands set apart."""
    places = max((_places(value) for value in values), default=0)
    texts = (f"{value + 0.0:,.{places}f}" for value in values)
    return tuple(text.replace(",", THIN).replace("-", "−") for text in texts)


def _places(value: float) -> int:
    text = f"{value:.6f}".rstrip("0")
    return len(text.partition(".")[2])


def spread(
    wanted: Sequence[float], gap: float | Sequence[float], low: float, high: float
) -> tuple[float, ...]:
    """Return positions near `wanted`, at least `gap` apart, within [low, high].

    Order is kept and the sum of squared moves is the least there is: neighbours that are too
    close are pooled and moved together (isotonic regression on position minus the gaps below it).

    Parameters
    ----------
    gap : float or sequence of float
        The least distance of neighbours; or the height of each label, in the order of `wanted`:
        neighbours then stand half of both apart.

    Raises
    ------
    ValueError
        When so many labels do not fit.
    """
    order = sorted(range(len(wanted)), key=lambda i: (wanted[i], i))
    below = _room_below([gap[i] for i in order] if isinstance(gap, Sequence) else gap, len(order))
    if order and below[-1] > (high - low) + 1e-9:
        raise ValueError(f"{len(order)} labels do not fit between {low} and {high}")
    blocks: list[tuple[float, int]] = []  # mean of (position - room below), how many
    for rank, i in enumerate(order):
        mean, size = wanted[i] - below[rank], 1
        while blocks and blocks[-1][0] > mean:
            other, more = blocks.pop()
            mean, size = (mean * size + other * more) / (size + more), size + more
        blocks.append((mean, size))
    free = [mean for mean, size in blocks for _ in range(size)]
    placed = [0.0] * len(order)
    for rank, i in enumerate(order):
        placed[i] = min(max(free[rank], low), high - below[-1]) + below[rank]
    return tuple(placed)


def _room_below(gap: float | Sequence[float], count: int) -> tuple[float, ...]:
    """Return how far each label must stay above the lowest one, in rising order."""
    if not isinstance(gap, Sequence):
        return tuple(rank * gap for rank in range(count))
    steps = [(one + other) / 2 for one, other in pairwise(gap)]
    return tuple(accumulate(steps, initial=0.0)) if count else ()


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
