"""Numbers as print shows them: decimals by kind, thin spaces, a true minus sign."""

from __future__ import annotations

import math

from rescue_planner.case.measures import measure_of
from rescue_planner.projection.table import shortest

THIN = "\u202f"
MINUS = "\u2212"
NOTHING = "–"

_DECIMALS = {
    "gene_diversity": 3,
    "observed_heterozygosity": 3,
    "inbreeding": 2,
    "kinship": 3,
    "trait_mean": 2,
    "trait_lag": 2,
    "sustainable_shift": 3,
    "yearly_growth": 3,
    "load": 3,
    "realised_effective_size": 1,
    "allele_frequency": 2,
    "effective_migrants": 1,
}
_PER_CENT = 100.0


def decimal(value: float, decimals: int) -> str:
    """Return `value` with so many decimals, thousands set apart, a true minus sign.

    No value (NaN) is a dash; what rounds to zero carries no sign.
    """
    if math.isnan(value):
        return NOTHING
    if math.isinf(value):
        return ("" if value > 0 else MINUS) + "∞"
    rounded = round(value, decimals)
    text = f"{abs(rounded):,.{decimals}f}".replace(",", THIN)
    return (MINUS if rounded < 0 else "") + text


def scale_of(key: str) -> float:
    """Return the factor from a measure's value to what is printed: 100 where it is in per cent."""
    return _PER_CENT if measure_of(key).kind == "share" else 1.0


def decimals_of(key: str, value: float = math.inf) -> int:
    """Return how many decimals a measure is printed with; counts below ten get one."""
    kind = measure_of(key).kind
    if kind == "share":
        return 1
    if kind == "money":
        return 0
    if kind == "count":
        return 1 if abs(value) < 10 and value != round(value) else 0
    return _DECIMALS.get(measure_of(key).key, 2)


def value_text(key: str, value: float) -> str:
    """Return the value of a measure as print shows it, in the unit of its measure."""
    if math.isnan(value):
        return NOTHING
    return decimal(value * scale_of(key), decimals_of(key, value))


def given(value: float) -> str:
    """Return an input as it was entered: every digit, a true minus sign, thousands set apart."""
    text = shortest(float(value))
    if "e" in text or "E" in text:
        return text.replace("-", MINUS)
    whole, dot, part = text.lstrip("-").partition(".")
    grouped = f"{int(whole):,}".replace(",", THIN) if len(whole) > 4 else whole
    return (MINUS if text.startswith("-") else "") + grouped + dot + part


def year_text(year: float) -> str:
    """Return a year: whole years plain, others with at most two decimals."""
    return f"{year:.0f}" if year == round(year) else f"{year:.2f}".rstrip("0").rstrip(".")
