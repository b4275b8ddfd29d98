"""How wide the columns of a printed table are, from what stands in them."""

from __future__ import annotations

from rescue_planner.annex.blocks import Table

_MOST_WISHED = 70
# Words as long as this get room; longer ones, such as paths, may be broken.
_LONGEST_WHOLE = 18


def column_shares(table: Table) -> tuple[float, ...]:
    """Return each column's share of the table's width; they sum to 1.

    A column gets room for its longest word, and of what is left a part by how long its texts are.
    """
    least, wished = [], []
    for index, head in enumerate(table.head):
        texts = [head, *(row[index] for row in table.rows)]
        longest = max((len(word) for text in texts for word in text.split(" ")), default=1)
        least.append(min(max(longest, 3), _LONGEST_WHOLE) + 1.5)
        lengths = sorted(min(len(text), _MOST_WISHED) for text in texts)
        wished.append(max(lengths[int(0.9 * (len(lengths) - 1))] - least[-1], 0.0) + 0.5)
    room = max(100.0 - sum(least), 0.0)
    widths = [low + room * more / sum(wished) for low, more in zip(least, wished, strict=True)]
    return tuple(width / sum(widths) for width in widths)
