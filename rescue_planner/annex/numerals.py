"""Numbers as print shows them, which is as the screen does: one definition for both."""

from __future__ import annotations

from rescue_planner.projection import reading
from rescue_planner.projection.placing import THIN
from rescue_planner.projection.table import shortest

MINUS = "\u2212"


decimal = reading.number
scale_of = reading.scale
year_text = reading.year_text


def value_text(key: str, value: float, decimals: int | None = None) -> str:
    """Return the value of a measure as print and screen show it, in the unit of its measure.

    Parameters
    ----------
    decimals : int, optional
        What the values beside it have; what suits this value alone where left out.
    """
    shown = value * scale_of(key)
    return reading.shown(key, shown, reading.places(key, [shown]) if decimals is None else decimals)


def given(value: float) -> str:
    """Return an input as it was entered: every digit, a true minus sign, thousands set apart."""
    text = shortest(float(value))
    if "e" in text or "E" in text:
        return text.replace("-", MINUS)
    whole, dot, part = text.lstrip("-").partition(".")
    grouped = f"{int(whole):,}".replace(",", THIN) if len(whole) > 4 else whole
    return (MINUS if text.startswith("-") else "") + grouped + dot + part
