"""A first case from the few things a field office knows, with the arithmetic shown.

What is not known is borrowed from a cited range or guessed, and says so in the case itself
(`origin`, `source`, `low`, `high`) and in the workings.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any, Literal

from rescue_planner.case.document import FORMAT, VERSION, Case
from rescue_planner.case.plans import NO_RELEASES
from rescue_planner.case.problems import read_case
from rescue_planner.theory.size import from_sexes

Body = Literal["small", "medium", "large"]
Raw = dict[str, Any]

FRANKHAM = "0.1 to 0.2 of the adults: Frankham 1995, Genet. Res. 66:95 (the range from memory)"
SEX_RATIO = "4 Nm Nf / (Nm + Nf): Wright 1931, Genetics 16:97"
REFERENCE = (
    "healthy mammal populations at microsatellites, mean about 0.68: Garner, Rachlow & Hicks 2005, "
    "Conserv. Biol. 19:1215 (from memory); the range is a guess"
)
LETHALS = (
    "7 diploid: mean of wild vertebrates to maturity (3.5 haploid), Nietlisbach et al. 2019, Evol. "
    "Appl. 12:266; 3.1: Ralls et al. 1988, Conserv. Biol. 2:185; 12: O’Grady et al. 2006, Biol. "
    "Conserv. 133:42"
)
NO_SOURCE = "common practice, no source"
GENERATIONS: dict[Body, tuple[float, float, float]] = {
    "small": (2.0, 1.0, 3.0),
    "medium": (5.0, 3.0, 7.0),
    "large": (10.0, 7.0, 15.0),
}
GENERATIONS_APART = (10.0, 3.0, 30.0)
SHARE_OF_ADULTS = (0.15, 0.1, 0.2)
REFERENCE_DIVERSITY = (0.68, 0.5, 0.8)
LETHAL_EQUIVALENTS = (7.0, 3.1, 12.0)
LEAST_FST_GUESS = 0.05
WHO_IS_COUNTED = "adults alive at one time, before breeding"  # as the question puts it


@dataclass(frozen=True, slots=True)
class Known:
    """What is known; None is an honest answer for all but the adults.

    Parameters
    ----------
    adults : float
        Adults alive before breeding.
    start_year : int
        Year of that count.
    breeding_females, breeding_males : float, optional
        Animals of each sex that leave young in a generation.
    generation_years : float, optional
        Mean age of the parents of newborn young, years.
    body : small, medium or large
        Only used to guess the generation length.
    trend : float, optional
        Counts of one year over those of the year before.
    years_isolated : float, optional
        Years since the last animal came in.
    gene_diversity, reference_gene_diversity : float, optional
        Expected heterozygosity now, and in the outbred state; probabilities.
    donor : str, optional
        Name of a population that could give animals; none is needed.
    donor_fst, donor_gene_diversity : float, optional
        Its FST to the recipient (Hudson's form) and its gene diversity.
    """

    adults: float
    start_year: int
    breeding_females: float | None = None
    breeding_males: float | None = None
    generation_years: float | None = None
    body: Body = "medium"
    trend: float | None = None
    years_isolated: float | None = None
    gene_diversity: float | None = None
    reference_gene_diversity: float | None = None
    donor: str | None = None
    donor_fst: float | None = None
    donor_gene_diversity: float | None = None
    title: str = "A new case"
    recipient: str = "The population"
    species: str | None = None


@dataclass(frozen=True, slots=True)
class Draft:
    """A case to begin with, and one sentence for each value that was worked out or taken over."""

    case: Case
    workings: tuple[str, ...]


def draft(known: Known) -> Draft:
    """Return a first case.

    Raises
    ------
    InvalidCase
        When something known is out of bounds, such as no adults.
    """
    said: list[str] = []
    length = _generation(known, said)
    size = _effective_size(known, said)
    years, apart = _isolation(known, length, said)
    reference, diversity = _diversities(known, size, length, years, said)
    recipient: Raw = {
        "name": known.recipient,
        "who_is_counted": WHO_IS_COUNTED,
        "adults": known.adults,
        "effective_size": size,
        "gene_diversity": diversity,
        "reference_gene_diversity": reference,
        "isolated_since": apart,
        **_breeders(known, said),
    }
    if known.trend is not None:
        recipient["yearly_trend"] = known.trend
        said.append(_trend(known.trend))
    raw: Raw = {
        "format": FORMAT,
        "version": VERSION,
        "title": known.title,
        "time": {
            "start_year": known.start_year,
            "horizon_years": _horizon(_best(length)),
            "generation_years": length,
        },
        "recipient": {name: value for name, value in recipient.items() if value is not None},
        "donors": _donors(known, diversity, reference, said),
        "inbreeding_cost": {"lethal_equivalents_diploid": {"first_year": _lethals(said)}},
        "plans": [{"name": NO_RELEASES}],
    }
    if known.species:
        raw["species"] = known.species
    return Draft(read_case(raw), tuple(said))


def _generation(known: Known, said: list[str]) -> float | Raw:
    if known.generation_years is not None:
        return known.generation_years
    best, low, high = GENERATIONS[known.body]
    said.append(
        f"Generation length is not known: {_n(best)} years ({_n(low)} to {_n(high)}) is a guess "
        f"for a {known.body} animal; {NO_SOURCE}."
    )
    return _guess(best, low, high, f"{known.body} animal; {NO_SOURCE}")


def _effective_size(known: Known, said: list[str]) -> Raw:
    females, males = known.breeding_females, known.breeding_males
    if females is None and males is None:
        best, low, high = (_held(_r(share * known.adults), known) for share in SHARE_OF_ADULTS)
        said.append(
            f"Breeders are not known: Ne is borrowed as 0.1 to 0.2 of {_n(known.adults)} adults "
            f"(Frankham 1995), so {_n(low)} to {_n(high)}, best {_n(best)}."
        )
        return {"best": best, "low": low, "high": high, "origin": "borrowed", "source": FRANKHAM}
    given = females is not None and males is not None
    f = females if females is not None else males
    m = males if males is not None else females
    assert f is not None
    assert m is not None
    value = _r(float(from_sexes(m, f)))
    best = _held(value, known)
    words = f"Ne from {_n(m)} males and {_n(f)} females: 4 · {_n(m)} · {_n(f)} / {_n(m + f)}"
    said.append(f"{words} = {_n(value)}. Unequal success within a sex would lower it.")
    if best != value:
        said.append(f"Ne is held at {_n(best)}: at least 1, and no more than the adults counted.")
    origin = "measured" if given else "guessed"
    about = "from the breeding females and males" if given else "the other sex taken as equal"
    return {"best": best, "origin": origin, "source": f"{about}; {SEX_RATIO}"}


def _held(size: float, known: Known) -> float:
    return min(max(size, 1.0), max(known.adults, 1.0))


def _breeders(known: Known, said: list[str]) -> Raw:
    females, males = known.breeding_females, known.breeding_males
    if females is None and males is None:
        said.append("Breeding females and males are left out: half of the adults each is used.")
        return {}
    if females is None or males is None:
        other = females if females is not None else males
        sex = "females" if females is None else "males"
        said.append(f"Breeding {sex} are not known: taken as {_n(other or 0)}, like the other sex.")
        guess = {"best": other, "origin": "guessed", "source": "taken as equal to the other sex"}
        return {
            "breeding_females": guess if females is None else females,
            "breeding_males": guess if males is None else males,
        }
    return {"breeding_females": females, "breeding_males": males}


def _isolation(known: Known, length: float | Raw, said: list[str]) -> tuple[Raw, int | None]:
    """Return the years isolated with their range, and the year since when, where it is known."""
    if known.years_isolated is not None:
        since = known.start_year - round(known.years_isolated)
        return {"best": known.years_isolated}, since
    best, low, high = (_best(length) * g for g in GENERATIONS_APART)
    if known.gene_diversity is None:
        said.append(
            f"Years isolated are not known: ten generations ({_n(best)} years; 3 to 30 "
            f"generations) are a guess; {NO_SOURCE}."
        )
    return {"best": best, "low": low, "high": high}, None


def _kept(size: float, years: float, length: float) -> float:
    """Share of gene diversity kept through isolation, (1 - 1/(2Ne))^(years/T)."""
    return math.pow(1.0 - 1.0 / (2.0 * size), years / length)


def _diversities(
    known: Known, size: Raw, length: float | Raw, years: Raw, said: list[str]
) -> tuple[float | Raw, float | Raw]:
    """Return the reference and today's gene diversity."""
    n, t, y = float(size["best"]), _best(length), float(years["best"])
    kept = _kept(n, y, t)
    sum_ = f"(1 − 1/(2 · {_n(n)}))^({_n(y)}/{_n(t)})"
    if known.reference_gene_diversity is not None:
        reference: float | Raw = known.reference_gene_diversity
    elif known.gene_diversity is not None and known.years_isolated is not None:
        value = _r(min(known.gene_diversity / kept, 1.0))
        said.append(
            f"Reference from isolation: {_n(known.gene_diversity)} / {sum_} = {_n(value)}"
            f"{' (held at 1)' if value == 1.0 else ''}; a guess from Ne and the years apart."
        )
        reference = {"best": value, "origin": "guessed", "source": "from isolation: H / " + sum_}
    else:
        reference = _borrowed_reference(known, said)
    if known.gene_diversity is not None:
        return reference, known.gene_diversity
    top = _best(reference)
    least = _kept(float(size.get("low", n)), float(years.get("high", y)), t)
    most = _kept(float(size.get("high", n)), float(years.get("low", y)), t)
    said.append(f"Gene diversity from isolation: {_n(top)} · {sum_} = {_n(top * kept)}.")
    today = {
        "best": _r(top * kept),
        "low": _r(top * min(least, kept)),
        "high": _r(top * max(most, kept)),
        "origin": "guessed",
        "source": f"from isolation: reference · {sum_}",
    }
    return reference, today


def _borrowed_reference(known: Known, said: list[str]) -> Raw:
    best, low, high = REFERENCE_DIVERSITY
    if known.gene_diversity is not None:  # an outbred state holds no less than is here today
        best, low = max(best, known.gene_diversity), max(low, known.gene_diversity)
        high = max(high, best)
    said.append(
        f"Reference is not known: {_n(best)} ({_n(low)} to {_n(high)}) is borrowed from healthy "
        "mammal populations at microsatellites (Garner et al. 2005). Replace it by a value from "
        "your own markers."
    )
    return {"best": best, "low": low, "high": high, "origin": "borrowed", "source": REFERENCE}


def _donors(
    known: Known, diversity: float | Raw, reference: float | Raw, said: list[str]
) -> list[Raw]:
    if known.donor is None:
        said.append("No donor yet: the first chart shows what happens without one.")
        return []
    donor: Raw = {"name": known.donor, "gene_diversity": known.donor_gene_diversity}
    if known.donor_gene_diversity is None:
        best = _best(reference)
        said.append(f"The donor’s gene diversity is guessed to be the reference, {_n(best)}.")
        donor["gene_diversity"] = {
            "best": best, "origin": "guessed", "source": "taken as the reference",
        }  # fmt: skip
    donor["fst_to_recipient"] = known.donor_fst
    if known.donor_fst is None:
        now, then = _best(diversity), _best(reference)
        drift = _r((1.0 - now / then) / 2.0)
        best = max(drift, LEAST_FST_GUESS)
        said.append(
            f"FST is not known: drift of the recipient alone gives (1 − {_n(now)}/{_n(then)})/2 = "
            f"{_n(drift)}; {_n(best)} (0.02 to {_n(max(0.3, best))}) is a guess."
        )
        donor["fst_to_recipient"] = _guess(
            best, 0.02, max(0.3, best), "from the recipient’s own drift: (1 − H/H_ref)/2"
        )
    return [donor]


def _lethals(said: list[str]) -> Raw:
    best, low, high = LETHAL_EQUIVALENTS
    at = math.exp(-best / 2 * 0.25)
    said.append(
        f"Inbreeding cost is borrowed: {_n(best)} diploid lethal equivalents ({_n(low)} to "
        f"{_n(high)}), so that young of F = 0.25 survive {at:.0%} as well as outbred ones.".replace(
            "%", " %"
        )
    )
    return {"best": best, "low": low, "high": high, "origin": "borrowed", "source": LETHALS}


def _trend(trend: float) -> str:
    change = trend - 1.0
    way = "grow" if change > 0 else "fall"
    words = "are steady" if change == 0 else f"{way} by {abs(change) * 100:.3g} % a year"
    return (
        f"Counts {words} ({_n(trend)} times a year). Without a life cycle numbers are not "
        "projected; the trend is kept with the recipient."
    )


def _horizon(length: float) -> float:
    """Ten generations, in whole tens of years, within what a case may hold."""
    return float(min(max(math.ceil(length) * 10, 20), 2000))


def _guess(best: float, low: float, high: float, source: str) -> Raw:
    return {"best": best, "low": low, "high": high, "origin": "guessed", "source": source}


def _best(value: float | Raw) -> float:
    return float(value["best"] if isinstance(value, dict) else value)


def _r(value: float) -> float:
    """Round a worked-out value to three digits: no estimate here is better than that."""
    return float(f"{value:.3g}")


def _n(value: float) -> str:
    return f"{value:.3g}"
