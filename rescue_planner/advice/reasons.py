"""Why one plan's course is what it is, as tables of texts: a row for each step."""

from __future__ import annotations

from collections.abc import Sequence

from rescue_planner.case.measures import split
from rescue_planner.projection import reading
from rescue_planner.projection.results import Comparison
from rescue_planner.projection.value_table import ValueTable, wrapped
from rescue_planner.projection.why import AlleleStep, DiversityStep, Why

PLACES = 4  # one more than the measures have: the parts of a step are small
NARROW = 14  # letters in a line of a heading
DIVERSITY = "gene_diversity"

DIVERSITY_FORMULA = (
    "Gene diversity is the chance that two gene copies differ. With the share m of gene copies "
    "from newcomers: kept (1 − m)² H, from pairs of two residents’ copies; brought, from pairs "
    "with at least one newcomer’s copy, m_d [2 (1 − m) H_rd + Σ m_e H_de] for each donor d; lost "
    "by drift, (kept + brought) / (2 Ne). After = kept + brought − lost. Source: Wright 1931; "
    "Malécot 1948."
)
ALLELE_FORMULA = (
    "The average course, in the order in which a step goes. By flow: (1 − m) p + Σ m_d p_d, less "
    "p. By selection: p (p w_AA + (1 − p) w_Aa) / mean fitness, less p. By mutation: what the "
    "given rates turn. After = before + flow + selection + mutation. Drift changes no mean, but "
    "spreads populations alike apart: the standard deviation reached by then is that of the "
    "one-locus odds. Source: Haldane 1924; Crow & Kimura 1970; spread: Ewens 2004."
)
ROUNDED = "The parts are rounded one by one, so shown digits can differ by one in the last."


def topics(why: Why) -> tuple[tuple[str, str], ...]:
    """Return what can be asked about: (measure, words)."""
    loci = ((f"allele_frequency:{name}", f"Frequency of {name}") for name in why.loci)
    return ((DIVERSITY, "Gene diversity"), *loci)


def why_table(comparison: Comparison, why: Why, topic: str) -> ValueTable:
    """Return the parts of each step of a plan, as long as its population is there.

    Parameters
    ----------
    topic : str
        `gene_diversity`, or `allele_frequency:<locus>`.

    Raises
    ------
    KeyError
        For another topic.
    """
    count = max(0, reading.length(comparison, why.plan, topic) - 1)
    gone = count < len(why.diversity)
    if topic == DIVERSITY:
        table = _diversity(comparison, why, why.diversity[:count])
    else:
        base, name = split(topic)
        if base != "allele_frequency":
            raise KeyError(topic)
        table = _allele(comparison, why.loci[name][:count])
    notes = list(table.notes)
    if gone:
        notes.insert(0, "Later steps are left out: fewer than one adult is left by then.")
    return ValueTable(table.header, table.lead, table.rows, tuple(notes))


def _diversity(comparison: Comparison, why: Why, steps: Sequence[DiversityStep]) -> ValueTable:
    many = len(why.donors) > 1
    by = [f"of it by {name}" for name in why.donors] if many else []
    heads = ["Before", "Kept", "Brought by newcomers", *by, "Lost by drift", "After"]
    header = ("Step", *(wrapped(head, NARROW) for head in heads), "Newcomers’\nshare, %", "Ne")
    rows = tuple(
        (
            _when(comparison, one.t),
            *(
                reading.number(part, PLACES)
                for part in (
                    one.before,
                    one.kept,
                    one.brought,
                    *(one.brought_by if many else ()),
                    one.lost,
                    one.after,
                )
            ),
            reading.number(100.0 * one.newcomers, 1),
            reading.number(one.effective_size, 1),
        )
        for one in steps
    )
    notes = ("In probabilities, except where a heading says so.", DIVERSITY_FORMULA, ROUNDED)
    return ValueTable(header, 1, rows, notes)


def _allele(comparison: Comparison, steps: Sequence[AlleleStep]) -> ValueTable:
    heads = ("Before", "By flow", "By selection", "By mutation", "After", "Spread by drift, SD")
    rows = tuple(
        (
            _when(comparison, one.t),
            reading.number(one.before, PLACES),
            *(signed(part, PLACES) for part in (one.flow, one.selection, one.mutation)),
            reading.number(one.after, PLACES),
            "–" if one.spread is None else reading.number(one.spread, PLACES),
        )
        for one in steps
    )
    notes = ["In shares of gene copies.", ALLELE_FORMULA, ROUNDED]
    if any(one.spread is None for one in steps):
        notes.insert(1, "–: the one-locus odds are not there, still being computed or too large.")
    header = ("Step", *(wrapped(head, NARROW) for head in heads))
    return ValueTable(header, 1, rows, tuple(notes))


def _when(comparison: Comparison, t: int) -> str:
    first, last = (reading.year_text(float(comparison.years[i])) for i in (t, t + 1))
    return f"{first} to {last}"


def signed(value: float, places: int) -> str:
    """Return a difference with its sign; what is shown as 0 has none."""
    shown = reading.number(value, places)
    return f"+{shown}" if round(value, places) > 0 else shown
