"""What the explainer says of a measure: its depth, what that leaves out, targets, source. No Qt."""

from __future__ import annotations

from dataclasses import dataclass

from rescue_planner.case.document import Case
from rescue_planner.case.measures import split
from rescue_planner.projection.leaves_out import leaves_out
from rescue_planner.projection.reading import depths_shown, target_marks, year_text
from rescue_planner.projection.results import DEPTH_NAMES, Comparison

_DRIFT = "Wright 1931; Malécot 1948"
_CHAIN = "Fisher 1930; Wright 1931; Ewens 2004"
SOURCES = {
    "adults": "Lotka 1913; Leslie 1945; Caswell 2001",
    "yearly_growth": "Lotka 1913; Leslie 1945; Caswell 2001",
    "gene_diversity": _DRIFT,
    "gene_diversity_kept": _DRIFT,
    "inbreeding": "Wright 1931; Nei 1973",
    "relative_first_year_survival": "Morton, Crow & Muller 1956; the mean over pairs is derived",
    "donor_ancestry": "Bernstein 1931",
    "additive_variance_kept": "Lynch & Hill 1986; Bulmer 1980",
    "trait_mean": "Lande 1976",
    "trait_lag": "Lande 1976",
    "sustainable_shift": "Lynch & Lande 1993; Bürger & Lynch 1995",
    "allele_frequency": "Haldane 1924; Crow & Kimura 1970; spread: Ewens 2004",
    "allele_kept": _CHAIN,
    "allele_fixed": _CHAIN,
    "effective_migrants": "Wright 1931",
}
COUNTED = "a count of what the plan does"


@dataclass(frozen=True, slots=True)
class MeasureWords:
    """Paragraphs about one measure; empty where there is nothing to say."""

    depth: str
    targets: str
    source: str


def measure_words(case: Case | None, comparison: Comparison | None, key: str) -> MeasureWords:
    """Return what is said of a measure for a case and the comparison shown, if there are any."""
    base = split(key)[0]
    source = f"Source: {SOURCES.get(base, COUNTED)}. Formula and tests: docs/method.md."
    if case is None or comparison is None:
        return MeasureWords("", "", source)
    depths = [
        f"{name[:1].upper()}{name[1:]}. {' '.join(leaves_out(case, depth))}"
        for depth in depths_shown(comparison, [key])
        for name in (DEPTH_NAMES[depth],)
    ]
    goals = [
        f"Target: {mark.words}, by {year_text(mark.year)}." for mark in target_marks(case, key)
    ]
    return MeasureWords("\n".join(depths), "\n".join(goals), source)
