"""Letter, dash, marker and colour of each plan, the same on every chart, page and export."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class PlanMark:
    """How one plan is drawn.

    `dash` is in multiples of the line width, empty for a full line; `marker` is one of the
    names in `MARKERS`; `light` is the colour on paper, `dark` the colour on slate.
    """

    letter: str
    dash: tuple[float, ...]
    marker: str
    light: str
    dark: str


MARKERS = ("circle", "square", "triangle", "diamond", "cross", "triangle-down")

# Colours: Okabe & Ito's safe set (Color Universal Design 2002), in an order whose greys differ;
# orange and sky blue are darkened to keep 3:1 on paper. Dash and marker double the colour.
_COLOURS = (
    ("#1a1a1a", "#f2f0ea"),
    ("#0072b2", "#6db6e8"),
    ("#d55e00", "#ff9a57"),
    ("#00795a", "#45c9a3"),
    ("#a8447c", "#e39bc6"),
    ("#8a6100", "#e0b040"),
)
_DASHES: tuple[tuple[float, ...], ...] = (
    (),
    (6, 2),
    (2, 2),
    (8, 2, 2, 2),
    (4, 1.5, 1, 1.5, 1, 1.5),
    (10, 3),
)
_LETTERS = "ABCDEFGHIJKL"


def mark(index: int) -> PlanMark:
    """Return the mark of the plan at `index` in the case.

    From the seventh plan on colours come again, with another dash and marker.

    Raises
    ------
    IndexError
        For a negative index or one past the twelve plans a case may hold.
    """
    if not 0 <= index < len(_LETTERS):
        raise IndexError(index)
    again, place = divmod(index, len(_COLOURS))
    light, dark = _COLOURS[place]
    return PlanMark(
        letter=_LETTERS[index],
        dash=_DASHES[(place + 2 * again) % len(_DASHES)],
        marker=MARKERS[(place + 3 * again) % len(MARKERS)],
        light=light,
        dark=dark,
    )
