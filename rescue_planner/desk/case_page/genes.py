"""Tracked loci and the trait, only once added."""

from __future__ import annotations

from functools import partial

from rescue_planner.case.document import Case
from rescue_planner.case.edits import Edit, add_locus, remove_locus, rename_locus, set_value
from rescue_planner.case.paths import format_path
from rescue_planner.case.quantity import Quantity
from rescue_planner.desk.case_page.section import Section, SectionPlan

ROLES = (("locally adapted", "locally adapted"), ("harmful", "harmful"),
         ("resistance", "resistance"), ("neutral", "neutral"))  # fmt: skip
GENOTYPES = ("AA", "Aa", "aa")


def _loci(section: Section, case: Case) -> None:
    for i, locus in enumerate(case.loci):
        name, at = locus.name, f"loci[{i}]"
        section.part(name, partial(_without, name=name))
        section.text(
            f"{at}.name",
            "Name",
            make=partial(_renamed, name=name),
        )
        section.choice(f"{at}.role", "Role of the named allele", ROLES)
        for k, genotype in enumerate(GENOTYPES):
            section.number(f"{at}.fitness[{k}]", f"Fitness of {genotype}")
        section.number(f"{at}.frequency")
        for donor in case.donors:
            path = format_path(("loci", i, "donor_frequency", donor.name))
            section.number(path, f"Frequency in {donor.name}")
        section.numbers(f"{at}.mutation_to", f"{at}.mutation_from")
        section.notes(name)
    section.buttons(("Add a tracked locus", _new_locus))


def _without(case: Case, name: str) -> Edit:
    return remove_locus(case, name)


def _renamed(case: Case, new: str, name: str) -> Edit:
    return rename_locus(case, name, new)


def _new_locus(case: Case) -> Edit:
    taken = {locus.name for locus in case.loci}
    name = next(n for k in range(1, 1000) if (n := f"Locus {k}") not in taken)
    guess = Quantity(best=0.5, origin="guessed", source="a place to begin; replace it")
    lacking = Quantity(best=0, origin="guessed", source="taken as lacking the allele")
    return add_locus(case, name, guess, {donor.name: lacking for donor in case.donors})


def _trait(section: Section, case: Case) -> None:
    trait = case.trait
    if trait is None:
        section.buttons(("Add a trait", _new_trait))
        return
    section.text("trait.name", "Name of the trait")
    section.numbers(
        "trait.heritability",
        "trait.selection_width_sd",
        "trait.optimum_at_start",
        "trait.optimum_shift_per_year",
    )
    if trait.optimum_jump is None:
        section.buttons(("Add a jump of the optimum", _new_jump))
    else:
        section.numbers("trait.optimum_jump.year", "trait.optimum_jump.by")
        section.buttons(
            ("Remove the jump", lambda case: set_value(case, "trait.optimum_jump", None))
        )
    section.numbers("trait.mutational_variance", "trait.loci")
    section.text("trait.unit", "Unit, for labels")
    section.numbers("trait.phenotypic_sd", "trait.mean")
    section.buttons(("Remove the trait", lambda case: set_value(case, "trait", None)))


def _new_trait(case: Case) -> Edit:
    borrowed = {
        "best": 0.25,
        "low": 0.05,
        "high": 0.5,
        "origin": "borrowed",
        "source": "life-history traits: Mousseau & Roff 1987, Heredity 59:181 (from memory)",
    }
    return set_value(case, "trait", {"heritability": borrowed})


def _new_jump(case: Case) -> Edit:
    year = int(case.time.start_year.best + case.time.horizon_years.best / 2)
    return set_value(case, "trait.optimum_jump", {"year": year, "by": 1.0})


LOCI = SectionPlan(
    "Tracked loci",
    "An allele followed by name: one the place needs, a harmful one, or one that protects.",
    lambda case: (
        tuple(locus.name for locus in case.loci),
        tuple(donor.name for donor in case.donors),
    ),
    _loci,
)
TRAIT = SectionPlan(
    "Trait",
    "A trait that must follow a moving optimum; values in the recipient’s phenotypic SD.",
    lambda case: (case.trait is None, case.trait and case.trait.optimum_jump is None),
    _trait,
)
