"""The recipient and the donors with their screen."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

from rescue_planner.case.document import Case
from rescue_planner.case.edits import Edit, add_donor, remove_donor, rename_donor
from rescue_planner.case.paths import format_path
from rescue_planner.case.population import Donor
from rescue_planner.case.quantity import Quantity
from rescue_planner.desk.case_page.section import Section, SectionPlan
from rescue_planner.desk.evidence import (
    ratio_in_words,
    removal_in_words,
    screen_cautions,
    screen_class,
    screen_in_words,
)

MARKERS = ((None, "not stated"), ("microsatellites", "microsatellites"), ("SNPs", "SNPs"),
           ("pedigree", "pedigree"), ("history", "history of numbers"))  # fmt: skip
KINDS = ((None, "not stated"), ("wild", "wild"), ("captive", "captive"))
FORMS = (("hudson", "Hudson’s form"), ("nei", "Nei’s, two populations"))
ANSWERS = ((None, "not answered"), ("yes", "yes"), ("no", "no"), ("unknown", "unknown"))
ENVIRONMENTS = ((None, "not answered"), ("no", "no"), ("some", "some"), ("much", "much"),
                ("unknown", "unknown"))  # fmt: skip


def _recipient(section: Section, case: Case) -> None:
    section.text("recipient.name", "Name")
    section.text("recipient.who_is_counted", "Who is counted")
    section.number("recipient.adults")
    section.number("recipient.adult_females")
    section.number("recipient.breeding_females")
    section.number("recipient.breeding_males")
    section.number("recipient.effective_size")
    section.unknown("recipient.effective_size", "effective size (Ne)")
    section.line(ratio_in_words)
    section.check(
        "recipient.effective_size_follows_adults",
        "Ne follows the number of adults (needs a life cycle)",
    )
    section.number("recipient.gene_diversity")
    section.unknown("recipient.gene_diversity", "gene diversity")
    section.number("recipient.reference_gene_diversity")
    section.unknown("recipient.reference_gene_diversity", "reference gene diversity")
    section.choice("recipient.markers", "Markers", MARKERS)
    section.number("recipient.carrying_capacity")
    section.number("recipient.isolated_since")
    section.number("recipient.yearly_trend")
    for donor in case.donors:
        path = format_path(("recipient", "donor_ancestry_at_start", donor.name))
        section.number(path, f"Ancestry from {donor.name} at the start")


def _donors(section: Section, case: Case) -> None:
    for i, donor in enumerate(case.donors):
        name = donor.name
        section.part(name, partial(_without, name=name))
        section.text(
            f"donors[{i}].name",
            "Name",
            make=partial(_renamed, name=name),
        )
        _donor(section, case, i)
        _screen(section, i)
    section.buttons(("Add a donor", _new_donor))


def _without(case: Case, name: str) -> Edit:
    return remove_donor(case, name)


def _renamed(case: Case, new: str, name: str) -> Edit:
    return rename_donor(case, name, new)


def _donor(section: Section, case: Case, i: int) -> None:
    at = f"donors[{i}]"
    section.choice(f"{at}.kind", "Kind", KINDS)
    section.numbers(f"{at}.adults", f"{at}.gene_diversity", f"{at}.fst_to_recipient")
    section.choice(f"{at}.fst_form", "Form of FST", FORMS)
    for other in case.donors[:i]:
        path = format_path(("donors", i, "fst_to_donors", other.name))
        section.number(path, f"FST to {other.name}")
    section.number(f"{at}.most_removed_per_year")
    section.unknown(
        f"{at}.most_removed_per_year", f"most removed a year from {case.donors[i].name}"
    )
    section.line(partial(_of_donor, index=i, words=removal_in_words), "caution")
    section.numbers(f"{at}.fewest_left", f"{at}.carrying_capacity")
    section.number(f"{at}.effective_size")
    section.unknown(f"{at}.effective_size", f"effective size (Ne) of {case.donors[i].name}")
    section.check(f"{at}.drifts", "Its own diversity drifts with its Ne")
    section.number(f"{at}.kinship_among_released")
    if case.trait is not None:
        section.numbers(f"{at}.trait_mean_difference", f"{at}.additive_variance")
    section.text(f"{at}.disease_status", "Disease status")
    section.caution(
        "Disease risk is not assessed by this projection. A disease risk analysis led by "
        "qualified veterinarians is needed and may rule out a plan."
    )


def _screen(section: Section, i: int) -> None:
    at = f"donors[{i}].screen"
    section.choice(f"{at}.same_species", "Is it the same species?", ANSWERS)
    section.choice(
        f"{at}.fixed_chromosome_differences", "Do the chromosomes always differ?", ANSWERS
    )
    section.number(f"{at}.years_apart", "Years since they last exchanged animals")
    section.choice(f"{at}.environment_differs", "Do the places differ?", ENVIRONMENTS)
    section.number(f"{at}.generations_apart", "Generations since then")
    section.line(partial(_of_donor, index=i, words=screen_class), "")
    section.line(partial(_of_donor, index=i, words=screen_in_words))
    section.line(partial(_of_donor, index=i, words=screen_cautions), "caution")


def _of_donor(case: Case, index: int, words: Callable[[Donor], str]) -> str:
    return words(case.donors[index]) if index < len(case.donors) else ""


def _new_donor(case: Case) -> Edit:
    taken = {donor.name for donor in case.donors}
    name = next(n for k in range(1, 1000) if (n := f"Donor {k}") not in taken)
    reference = float(case.recipient.reference_gene_diversity.best)
    diversity = Quantity(best=reference, origin="guessed", source="taken as the reference")
    fst = Quantity(best=0.1, origin="guessed", source="a place to begin; replace it")
    lacking = Quantity(best=0, origin="guessed", source="taken as lacking the allele")
    return add_donor(case, name, diversity, fst, {locus.name: lacking for locus in case.loci})


RECIPIENT = SectionPlan(
    "Recipient",
    "The small, isolated population. Half of the adults is taken where females or breeders are "
    "left out.",
    lambda case: tuple(donor.name for donor in case.donors),
    _recipient,
)
DONORS = SectionPlan(
    "Donors",
    "Populations that could give animals, and what bears on the risk of mixing.",
    lambda case: (tuple(donor.name for donor in case.donors), case.trait is None),
    _donors,
)
