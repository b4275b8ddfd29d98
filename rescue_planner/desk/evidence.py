"""Numbers beside the fields of the Case page; no widgets, so that a test can check them."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from pydantic import BaseModel

from rescue_planner.case import measures
from rescue_planner.case.document import Case
from rescue_planner.case.filled import lethal_equivalents
from rescue_planner.case.population import Donor
from rescue_planner.case.quantity import FrozenMap, Quantity
from rescue_planner.case.screening import SOURCE, screening

KINDS = ("measured", "borrowed", "guessed", "not stated")


def quantities(held: Any) -> Iterator[Quantity]:  # noqa: ANN401 - any part of a case
    """Yield every number that a part of the case was given, defaults not counted."""
    if isinstance(held, Quantity):
        yield held
    elif isinstance(held, BaseModel):
        for name in type(held).model_fields:
            if name in held.model_fields_set:
                yield from quantities(getattr(held, name))
    elif isinstance(held, FrozenMap):
        for one in held.values():
            yield from quantities(one)
    elif isinstance(held, tuple):
        for one in held:
            yield from quantities(one)


PARTS = {
    "Time": "time",
    "Recipient": "recipient",
    "Donors": "donors",
    "Life cycle": "life_cycle",
    "Inbreeding cost": "inbreeding_cost",
    "Tracked loci": "loci",
    "Trait": "trait",
}  # section of the page: part of the case; plans and targets are choices


def tally(case: Case, section: str) -> dict[str, int]:
    """Count the numbers that a section was given by origin, as the annex has them."""
    counts = dict.fromkeys(KINDS, 0)
    for held in quantities(getattr(case, PARTS[section])) if section in PARTS else ():
        counts[held.origin or "not stated"] += 1
    return counts


def tally_in_words(case: Case, section: str) -> str:
    """Return the counts of a section as one line; empty where it was given no number."""
    counts = tally(case, section)
    return _counted(counts) if any(counts.values()) else ""


def evidence(case: Case) -> dict[str, int]:
    """Count the numbers of all sections by origin."""
    counts = [tally(case, section) for section in PARTS]
    return {kind: sum(one[kind] for one in counts) for kind in KINDS}


def evidence_in_words(case: Case) -> str:
    """Return the counts as one line."""
    return _counted(evidence(case))


def _counted(counts: dict[str, int]) -> str:
    return "  ·  ".join(f"{count} {kind}" for kind, count in counts.items())


def ratio_in_words(case: Case) -> str:
    """Return Ne against the adults counted, and today's inbreeding against the reference."""
    recipient = case.recipient
    ratio = float(recipient.effective_size.best) / float(recipient.adults.best)
    f = 1.0 - float(recipient.gene_diversity.best) / float(recipient.reference_gene_diversity.best)
    return (
        f"Ne is {ratio:.2f} of the adults counted.  Inbreeding today: F = 1 − "
        f"{recipient.gene_diversity.best:g}/{recipient.reference_gene_diversity.best:g} = {f:.2f}."
    )


def inbreeding_cost_in_words(case: Case) -> str:
    """Return what the lethal equivalents mean at F = 0.125 and 0.25."""
    from rescue_planner.theory.inbreeding import survival_factor

    load = lethal_equivalents(case)
    diploid = float(load.first_year.best)
    at = [100 * float(survival_factor(f, diploid)) for f in (0.125, 0.25)]
    words = (
        f"{diploid:g} diploid ({diploid / 2:g} haploid) in the first year: young of half sibs "
        f"(F = 0.125) survive {at[0]:.0f} %, of full sibs (F = 0.25) {at[1]:.0f} % as well as "
        "outbred young."
    )
    mother = float(load.young_per_female.best)
    if mother:
        kept = 100 * float(survival_factor(0.25, mother))
        words += f" A mother of F = 0.25 has {kept:.0f} % of the young of an outbred one."
    return words + " Does this look right?"


def lethal_source_in_words(case: Case) -> str:
    """Return where the first-year lethal equivalents are from, with the part of life covered."""
    if case.inbreeding_cost is None:
        return ""
    held = lethal_equivalents(case).first_year
    return f"{(held.origin or 'not stated').capitalize()}; source: {held.source or 'not stated'}."


def generations_in_words(case: Case) -> str:
    """Return the horizon in generations."""
    count = float(case.time.horizon_years.best) / float(case.time.generation_years.best)
    start, years = float(case.time.start_year.best), float(case.time.horizon_years.best)
    return f"{start:g} to {start + years:g}: {years:g} years are {count:.3g} generations."


def target_in_words(case: Case, index: int) -> str:
    """Return a target as a sentence in the unit its chart has: a share in per cent."""
    if index >= len(case.targets):
        return ""
    target = case.targets[index]
    times = 100.0 if measures.measure_of(target.measure).kind == "share" else 1.0
    unit = measures.unit(target.measure, case.currency)
    bounds = [
        f"{side} {float(bound.best) * times:g} {unit}"
        for side, bound in (("at least", target.at_least), ("at most", target.at_most))
        if bound is not None
    ]
    if not bounds:
        return ""
    return (
        f"Wanted: {measures.title(target.measure)} {' and '.join(bounds)} in "
        f"{target.by_year.best:g}."
    )


def removal_in_words(donor: Donor) -> str:
    """Return what an unstated removal limit means; nothing where one is stated."""
    if donor.most_removed_per_year is not None:
        return ""
    return (
        "△ Most removed a year: not stated, which is not unlimited. Removal limits are set by "
        "those responsible for the donor population: ask them."
    )


def screen_in_words(donor: Donor) -> str:
    """Return every question of a donor's screen with its answer and reason."""
    signs = {"speaks for low": "○", "raises the risk": "▲", "between": "?", "unknown": "?"}
    lines = [
        f"{signs[one.state]}  {one.question.capitalize()}: {one.answer} – {one.state}; "
        f"{one.reason}."
        for one in screening(donor).findings
    ]
    return "\n".join([*lines, f"Source: {SOURCE}."])


def screen_class(donor: Donor) -> str:
    """Return the class of a donor's screen in one sentence."""
    return screening(donor).sentence


def screen_cautions(donor: Donor) -> str:
    """Return what must be read with a donor's screen."""
    return "\n".join(f"△ {words}" for words in screening(donor).cautions)
