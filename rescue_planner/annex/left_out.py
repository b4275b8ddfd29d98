"""What is taken where the case leaves a field out, in words; nothing where silence says it."""

from __future__ import annotations

from collections.abc import Callable

from rescue_planner.annex.numerals import given
from rescue_planner.case import filled
from rescue_planner.case.document import Case
from rescue_planner.case.paths import Path

_WORDS: dict[str, str | Callable[[Case], str]] = {
    "decision": "not described",
    "species": "not named",
    "authority": "not named",
    "currency": "not named",
    "recipient.who_is_counted": "not described",
    "recipient.adult_females": lambda case: _half(filled.adult_females(case.recipient)),
    "recipient.breeding_females": lambda case: _half(filled.breeding_females(case.recipient)),
    "recipient.breeding_males": lambda case: _half(filled.breeding_males(case.recipient)),
    "recipient.markers": "not stated",
    "recipient.carrying_capacity": "no limit on numbers",
    "recipient.donor_ancestry_at_start": "taken as 0 from every donor",
    "donors": "none",
    "donors.adults": "not used",
    "donors.effective_size": "no drift in this donor",
    "donors.fst_to_donors": "from the other donor’s entry, else assumed from the gene diversities",
    "donors.most_removed_per_year": "no limit given",
    "donors.fewest_left": "no limit given",
    "donors.carrying_capacity": "not used",
    "donors.kind": "not stated",
    "donors.screen": "not answered",
    "donors.screen.same_species": "not answered",
    "donors.screen.fixed_chromosome_differences": "not answered",
    "donors.screen.years_apart": "not answered",
    "donors.screen.generations_apart": "not answered",
    "donors.screen.environment_differs": "not answered",
    "donors.disease_status": "not assessed",
    "donors.life_cycle": "donor’s numbers not projected",
    "donors.lethal_equivalents_diploid": "not used",
    "donors.kinship_among_released": "from the donor’s gene diversity",
    "donors.additive_variance": "from the gene diversities",
    "loci": "none",
    "loci.donor_frequency": "taken as 0 in every donor",
    "life_cycle": "numbers and growth not projected",
    "life_cycle.young_per_breeding_female.counts": "Poisson with the mean given",
    "life_cycle.young_per_breeding_female.mean": "from the chance of each number",
    "life_cycle.die_offs": "none",
    "inbreeding_cost": "lethal equivalents taken as 0: inbreeding costs nothing",
    "load": "not modelled",
    "mixing_cost": "not modelled",
    "genome": "not modelled",
    "genome.morgans_each": "all loci unlinked",
    "trait": "not modelled",
    "trait.optimum_jump": "no jump",
    "plans.effective_size": lambda case: (
        f"the recipient’s, {given(case.recipient.effective_size.best)}"
    ),
    "plans.releases.who.age": "not stated",
    "plans.rules.release.who.age": "not stated",
    "plans.steady.from_year": lambda case: f"from the start, {given(case.time.start_year.best)}",
    "plans.steady.to_year": "for good",
    "plans.other_actions.until_year": "for good",
    "targets": "none",
    "targets.owner": "not stated",
    "targets.reason": "not stated",
}
# Where nothing given means nothing there: no row.
_SILENT = frozenset(
    {
        "what_ifs",
        "prepared_by",
        "recipient.isolated_since",
        "recipient.yearly_trend",
        "plans.steady",
        "plans.releases",
        "plans.rules",
        "plans.other_actions",
        "plans.releases.loan_years",
        "plans.rules.release",
        "plans.rules.release.loan_years",
        "plans.rules.above",
        "plans.rules.below",
        "targets.at_least",
        "targets.at_most",
        "what_ifs.asked_by",
        "what_ifs.date",
        "what_ifs.changes",
        "what_ifs.changes.times",
        "what_ifs.changes.set",
        "trait.unit",
        "trait.name",
        "trait.phenotypic_sd",
        "trait.mean",
    }
)


def _half(value: float) -> str:
    return f"taken as {given(value)}, half of the adults"


def taken(case: Case, at: Path) -> str | None:
    """Return what holds where the field at `at` was left out.

    Returns
    -------
    str or None
        Empty where nothing can be said, nothing where no row is wanted.
    """
    pattern = ".".join(step for step in at if isinstance(step, str))
    if pattern in _SILENT:
        return None
    words = _WORDS.get(pattern, "")
    return words(case) if callable(words) else words
