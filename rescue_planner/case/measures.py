"""The measures: one quantity over time each, with the name and unit shown to people."""

from __future__ import annotations

from collections.abc import Collection, Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from rescue_planner.case.document import Case


Kind = Literal["share", "number", "count", "money"]
Per = Literal["", "donor", "locus"]


@dataclass(frozen=True, slots=True)
class Measure:
    """One measure of the list; `per` says whether it is also kept by donor or by locus.

    `kind` is `share` for values shown in per cent, `count` for animals, `money` for the case's
    currency, else `number`.
    """

    key: str
    name: str
    unit: str
    kind: Kind
    meaning: str
    per: Per = ""
    whole_too: bool = True


MEASURES: tuple[Measure, ...] = (
    Measure(
        "adults", "Adults", "animals", "count", "Adults alive at the census, just before breeding."
    ),
    Measure(
        "young",
        "Young",
        "young at age 1",
        "count",
        "Animals of age 1 at the census: the young of the year before that lived.",
    ),
    Measure(
        "gene_diversity",
        "Gene diversity",
        "probability",
        "number",
        "The chance that two gene copies drawn from the population differ.",
    ),
    Measure(
        "gene_diversity_kept",
        "Gene diversity kept",
        "% of today’s",
        "share",
        "Gene diversity as a share of what the population holds at the start.",
    ),
    Measure(
        "observed_heterozygosity",
        "Observed heterozygosity",
        "share of loci",
        "number",
        "Share of loci at which an animal carries two different alleles.",
    ),
    Measure(
        "inbreeding",
        "Inbreeding F",
        "F against the reference",
        "number",
        "One minus gene diversity over the reference; below 0 where mixing lifts it above.",
    ),
    Measure(
        "kinship",
        "Mean kinship",
        "probability",
        "number",
        "Chance that gene copies of two different animals are the same by descent.",
    ),
    Measure(
        "relative_first_year_survival",
        "First-year survival against outbred",
        "% of outbred",
        "share",
        "Survival of the young against that of outbred young: what inbreeding leaves.",
    ),
    Measure(
        "donor_ancestry",
        "Donor ancestry",
        "% of gene copies",
        "share",
        "Share of gene copies that came from a donor.",
        per="donor",
    ),
    Measure(
        "rare_alleles_kept",
        "Rare alleles kept",
        "% of those at the start",
        "share",
        "Alleles under 5 % at the start that are still there.",
    ),
    Measure(
        "additive_variance_kept",
        "Additive variance of the trait",
        "% of today’s",
        "share",
        "Variance that selection on the trait can use, against today’s.",
    ),
    Measure(
        "trait_mean",
        "Trait mean",
        "phenotypic SD",
        "number",
        "Mean of the trait in the population, 0 at the start.",
    ),
    Measure(
        "trait_lag",
        "Trait lag",
        "phenotypic SD",
        "number",
        "Best value of the trait minus its mean.",
    ),
    Measure(
        "sustainable_shift",
        "Shift the trait can follow",
        "phenotypic SD per generation",
        "number",
        "Fastest shift of the optimum that the population could follow without decline.",
    ),
    Measure(
        "yearly_growth",
        "Yearly growth",
        "times a year",
        "number",
        "Numbers of one year over those of the year before, in the long run; 1 is steady.",
    ),
    Measure(
        "persists",
        "Persists",
        "% of runs",
        "share",
        "Share of runs in which the population was never lost up to then.",
    ),
    Measure(
        "load",
        "Genetic load",
        "share of fitness",
        "number",
        "Share of fitness that harmful alleles cost.",
    ),
    Measure(
        "realised_effective_size",
        "Realised effective size",
        "animals per generation",
        "number",
        "Size of an ideal population whose mean kinship would rise as fast over a generation.",
    ),
    Measure(
        "allele_frequency",
        "Frequency of",
        "share of gene copies",
        "number",
        "Share of gene copies at the locus that are the named allele.",
        per="locus",
        whole_too=False,
    ),
    Measure(
        "allele_kept",
        "Chance of keeping",
        "% chance",
        "share",
        "Probability that the named allele is still there.",
        per="locus",
        whole_too=False,
    ),
    Measure(
        "allele_fixed",
        "Chance of fixing",
        "% chance",
        "share",
        "Probability that the named allele is alone.",
        per="locus",
        whole_too=False,
    ),
    Measure(
        "donor_adults",
        "Adults of the donor",
        "adults",
        "count",
        "Adults alive in the donor, after what was taken.",
        per="donor",
        whole_too=False,
    ),
    Measure(
        "released",
        "Animals released",
        "animals so far",
        "count",
        "Animals released up to then, whether they lived or not.",
    ),
    Measure(
        "effective_migrants",
        "Newcomers that breed",
        "effective animals so far",
        "number",
        "Released animals and steady flow, weighted by survival and breeding.",
    ),
    Measure(
        "cost",
        "Cost",
        "currency so far",
        "money",
        "Money spent up to then on releases and other actions.",
    ),
)

_BY_KEY = {measure.key: measure for measure in MEASURES}


def split(key: str) -> tuple[str, str]:
    """Return the measure's own key and the donor or locus behind the colon, if any."""
    base, _, of = key.partition(":")
    return base, of


def measure_of(key: str) -> Measure:
    """Return the measure that `key` names.

    Raises
    ------
    KeyError
        For an unknown measure.
    """
    return _BY_KEY[split(key)[0]]


def keys(case: Case) -> Iterator[str]:
    """Yield every key this case can have, in the binding order."""
    for measure in MEASURES:
        if measure.whole_too:
            yield measure.key
        names = {
            "": (),
            "donor": tuple(donor.name for donor in case.donors),
            "locus": tuple(locus.name for locus in case.loci),
        }[measure.per]
        yield from (f"{measure.key}:{name}" for name in names)


def title(key: str) -> str:
    """Return the name of a measure on screen, with its donor or locus."""
    measure, of = measure_of(key), split(key)[1]
    if not of:
        return measure.name
    return f"{measure.name} {of}" if not measure.whole_too else f"{measure.name}: {of}"


def unit(key: str, currency: str | None = None) -> str:
    """Return the unit of a measure, money in the case's currency where it names one."""
    measure = measure_of(key)
    if measure.kind == "money" and currency:
        return measure.unit.replace("currency", currency)
    return measure.unit


def known_key(key: str, donors: Collection[str], loci: Collection[str]) -> bool:
    """Return whether `key` is a measure of a case with these donors and loci."""
    base, _, of = key.partition(":")
    measure = _BY_KEY.get(base)
    if measure is None:
        return False
    if ":" not in key:
        return measure.whole_too
    return of in {"": (), "donor": donors, "locus": loci}[measure.per]


def known(key: str, case: Case) -> bool:
    """Return whether `key` is a measure that `case` can have."""
    return known_key(key, [one.name for one in case.donors], [one.name for one in case.loci])
