"""Placing words beside lines so that none lies on another."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from rescue_planner.projection import placing


def spread(
    wanted: Sequence[float], heights: Sequence[float], low: float, high: float
) -> list[float]:
    """Return centres near `wanted` so that boxes of `heights` do not overlap within low..high.

    Where the boxes are higher together than there is room, they are set evenly and may leave the
    room at the bottom; the caller sees to it that this does not happen.
    """
    order = sorted(range(len(wanted)), key=lambda i: (wanted[i], i))
    if not order:
        return []
    first, last = heights[order[0]], heights[order[-1]]
    room = max(high - low, sum(heights))  # too many: they begin above and leave it below
    bottom = high - room + first / 2
    return list(placing.spread(wanted, heights, bottom, high - last / 2))


def wrapped(
    text: str, room: float, width: Callable[[str], float], most_lines: int
) -> tuple[str, ...]:
    """Return `text` broken at spaces into lines not wider than `room`.

    A word wider than the room, and what does not fit the last line, is cut with an ellipsis.
    """
    lines: list[str] = []
    words = text.split()
    line = ""
    while words:
        longer = f"{line} {words[0]}".strip()
        if width(longer) <= room or not line:
            line = longer
            words.pop(0)
        elif len(lines) + 1 < most_lines:
            lines.append(line)
            line = ""
        else:
            line = f"{line} {' '.join(words)}"
            break
    lines.append(line)
    return tuple(_cut(one, room, width) for one in lines)


def _cut(line: str, room: float, width: Callable[[str], float]) -> str:
    if width(line) <= room:
        return line
    kept = line
    while kept and width(kept + "…") > room:
        kept = kept[:-1]
    return kept.rstrip() + "…"
