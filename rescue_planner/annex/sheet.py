"""The ground of every figure: size in millimetres, font, line widths, how long a text is."""

from __future__ import annotations

import warnings
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from rescue_planner.annex.face import FONT, cut_family

INK = "#1a1a1a"
QUIET = "#5c5c5c"
HAIR = "#d8d8d8"
MM_PER_INCH = 25.4
POINTS_PER_MM = 72 / MM_PER_INCH
WIDTHS_MM = (85, 170)

# Nothing thinner is printed reliably.
THINNEST_PT = 0.5


@dataclass(frozen=True, slots=True)
class Sheet:
    """One figure's paper: millimetres, and points for text and lines.

    The margins leave room for the axis titles at left, below and above, and for the names of the
    plans at right.
    """

    width: float
    height: float
    text: float
    line: float
    marker: float
    left: float
    right: float
    bottom: float
    top: float
    year_ticks: int

    @property
    def line_height(self) -> float:
        """Height of a line of text in millimetres."""
        return self.text * 1.2 / POINTS_PER_MM


def sheet(width: int) -> Sheet:
    """Return the sheet of a single figure, 85 or 170 mm wide."""
    if width < 120:
        return Sheet(width, 64, 7.0, 1.1, 3.0, 15, 25, 9.5, 9.5, 4)
    return Sheet(width, 78, 7.5, 1.3, 3.6, 18, 44, 10, 10, 8)


@contextmanager
def printed(letters: frozenset[str] = frozenset()) -> Iterator[None]:
    """Set matplotlib up for print: one font, text as text, the same bytes from the same case.

    `letters` are the characters that the figures need besides the common ones.
    """
    import matplotlib as mpl

    settings: Any = {
        "font.family": [cut_family(letters)],
        "svg.fonttype": "none",
        "svg.hashsalt": "rescue planner",
        "pdf.fonttype": 42,
        "text.parse_math": False,
        "text.hinting": "none",  # letters as wide in PNG as in SVG and PDF
        "text.color": INK,
        "figure.facecolor": "white",
        "savefig.facecolor": "white",
        "lines.solid_capstyle": "butt",
        "path.simplify": False,
    }
    with mpl.rc_context(settings), warnings.catch_warnings():
        # A name in letters that the font lacks is drawn as boxes; the caption spells it.
        warnings.filterwarnings("ignore", message="Glyph .* missing from font")
        yield


@lru_cache(maxsize=4096)
def text_width(text: str, points: float) -> float:
    """Return how wide `text` is set in the figure's font, in millimetres."""
    from matplotlib.font_manager import FontProperties
    from matplotlib.textpath import text_to_path

    set_in = FontProperties(family=FONT, size=points)
    wide, _, _ = text_to_path.get_text_width_height_descent(text, set_in, ismath=False)
    return float(wide) / POINTS_PER_MM
