"""Ways to a value that is not known: from what else is known, with the arithmetic shown.

Each way asks for a few things, works the value out and says where it came from (`origin`,
`source`, and a range where one follows). What can be borrowed as it stands is in `library`.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from rescue_planner.case.document import Case
from rescue_planner.case.edits.base import Edit
from rescue_planner.case.edits.values import set_value
from rescue_planner.case.known import SEX_RATIO
from rescue_planner.case.library import library, quantity
from rescue_planner.case.quantity import Quantity
from rescue_planner.theory.inbreeding import survival_factor
from rescue_planner.theory.sample_size import wilson_interval
from rescue_planner.theory.size import from_sexes, retained, size_to_keep_for_years

Answer = float | str
Answers = Mapping[str, Answer]

DRIFT = "drift alone: Wright 1931, Genetics 16:97"
WILSON = "Wilson’s 95 % interval (Wilson 1927, J. Am. Stat. Assoc. 22:209, from memory)"
NOT_UNLIMITED = (
    "Left as not stated. Not stated is not unlimited: removal limits are set by those responsible "
    "for the donor population, and until they have spoken no plan that takes animals from it is "
    "known to be allowed."
)


@dataclass(frozen=True, slots=True)
class Ask:
    """One thing a way asks: a number, one of `choices` (value, words), or free `text`.

    No choice is preset.
    """

    key: str
    words: str
    unit: str = ""
    choices: tuple[tuple[str, str], ...] = ()
    needed: bool = True
    text: bool = False


@dataclass(frozen=True, slots=True)
class Worked:
    """What a way leads to: a value (none leaves the field out), and the arithmetic in words."""

    value: Quantity | None
    said: str


@dataclass(frozen=True, slots=True)
class Way:
    """One way to a value, by what it asks."""

    key: str
    title: str
    asks: tuple[Ask, ...]
    work: Callable[[Case, str, Answers], Worked]


def ways(path: str) -> tuple[Way, ...]:
    """Return the ways to a value for the input at `path`; empty where there are none."""
    return _WAYS.get(re.sub(r"\[\d+\]", "[*]", path), ())


def known_already(case: Case, way: Way) -> dict[str, float]:
    """Return the answers that the case holds already, by the key of what is asked."""
    since = case.recipient.isolated_since
    held = {"years": None if since is None else float(case.time.start_year.best - since.best)}
    asked = {ask.key for ask in way.asks}
    return {key: value for key, value in held.items() if key in asked and value is not None}


def worked(case: Case, path: str, way: Way, answers: Answers) -> Worked:
    """Work a value out.

    Raises
    ------
    ValueError
        With one sentence, when an answer is missing or impossible.
    InvalidCase
        When the case lacks what the way needs.
    """
    for ask in way.asks:
        if ask.needed and ask.key not in answers:
            raise ValueError(f"Still to be answered: {ask.words}")
    return way.work(case, path, answers)


def entered(case: Case, path: str, found: Worked) -> Edit:
    """Return the one edit that enters what was worked out, with its range, origin and source.

    Raises
    ------
    InvalidCase
        When the value is out of the bounds of its input.
    """
    return set_value(case, path, found.value)


def _ratio(case: Case, path: str, _answers: Answers) -> Worked:
    entry = next(one for one in library().shipped if one.key == _ratio_key(path))
    value = quantity(case, path, entry)
    adults = _ratio_adults(case, path)
    return Worked(
        value,
        f"{entry.best:g} ({entry.low:g} to {entry.high:g}) of {adults:g} adults = {value.best:g} "
        f"({value.low:g} to {value.high:g}). {entry.caveat}",
    )


def _ratio_key(path: str) -> str:
    return "ne-ratio-donor" if path.startswith("donors") else "ne-ratio-assumed"


def _ratio_adults(case: Case, path: str) -> float:
    if path.startswith("donors"):
        adults = case.donors[int(path[7 : path.index("]")])].adults
        return float(adults.best) if adults is not None else 0.0
    return float(case.recipient.adults.best)


def _breeders(_case: Case, _path: str, answers: Answers) -> Worked:
    males, females = _number(answers, "males"), _number(answers, "females")
    if min(males, females) <= 0:
        raise ValueError("Without a breeding male and a breeding female there are no young.")
    size = _r(float(from_sexes(males, females)))
    sum_ = f"4 · {males:g} · {females:g} / {males + females:g} = {size:g}"
    return Worked(
        Quantity(best=size, origin="measured", source=f"from breeders, {sum_}; {SEX_RATIO}"),
        f"{sum_}. Count the breeders of a whole generation, not of one season. Unequal success "
        "within a sex lowers it.",
    )


def _size_from_history(case: Case, _path: str, answers: Answers) -> Worked:
    years, length = _years(answers), float(case.time.generation_years.best)
    now = float(case.recipient.gene_diversity.best)
    then = float(case.recipient.reference_gene_diversity.best)
    if now >= then:
        raise ValueError(
            "Gene diversity is not below its reference, so no loss tells the effective size."
        )
    size = _r(float(size_to_keep_for_years(now / then, years, length)))
    sum_ = f"1 / (2 (1 − ({now:g}/{then:g})^({length:g}/{years:g}))) = {size:g}"
    return Worked(
        Quantity(best=size, origin="guessed", source=f"from isolation, {sum_}; {DRIFT}"),
        f"{sum_}: the size at which drift alone loses so much in {years:g} years of isolation.",
    )


def _diversity_from_history(case: Case, _path: str, answers: Answers) -> Worked:
    steps = _years(answers) / float(case.time.generation_years.best)
    size = case.recipient.effective_size
    then = float(case.recipient.reference_gene_diversity.best)
    sizes = (float(size.best), *(size.spread or (float(size.best),) * 2))
    best, low, high = (_r(then * float(retained(one)) ** steps) for one in sizes)
    sum_ = f"{then:g} · (1 − 1/(2 · {size.best:g}))^{steps:.3g} = {best:g}"
    about = {"origin": "guessed", "source": f"from isolation, {sum_}; {DRIFT}"}
    ends = {} if size.spread is None else {"low": low, "high": high}
    kept = 1.0 - best / then
    return Worked(
        Quantity.model_validate({"best": best, **ends, **about}),
        f"{sum_}, so F = {kept:.2f}. The range follows from that of Ne, where it has one.",
    )


def _diversity_from_pedigree(case: Case, _path: str, answers: Answers) -> Worked:
    f = _number(answers, "f")
    if not -1.0 < f < 1.0:
        raise ValueError("A mean inbreeding coefficient lies between −1 and 1.")
    then = float(case.recipient.reference_gene_diversity.best)
    best = _r(then * (1.0 - f))
    sum_ = f"{then:g} · (1 − {f:g}) = {best:g}"
    return Worked(
        Quantity(best=best, origin="measured", source=f"from mean pedigree F, {sum_}"),
        f"{sum_}. Founders of the pedigree count as unrelated: with gaps in it, F is too low.",
    )


def _diversity_from_ratio(case: Case, _path: str, answers: Answers) -> Worked:
    here, there = _number(answers, "here"), _number(answers, "there")
    if min(here, there) <= 0:
        raise ValueError("Both diversities must be above 0.")
    then = float(case.recipient.reference_gene_diversity.best)
    best = _r(then * here / there)
    sum_ = f"{then:g} · {here:g}/{there:g} = {best:g}"
    return Worked(
        Quantity(best=best, origin="measured", source=f"from a ratio of diversities, {sum_}"),
        f"{sum_}, so F = {1.0 - here / there:.2f}. Both must come from the same markers.",
    )


def _lethals(_case: Case, _path: str, answers: Answers) -> Worked:
    convention, span = str(answers["convention"]), dict(SPANS)[str(answers["span"])]
    times = 2.0 if convention == "haploid" else 1.0
    printed = {part: _number(answers, part) for part in ("best", "low", "high") if part in answers}
    value = {part: _r12(number * times) for part, number in printed.items()}
    both = f"{value['best'] / 2:g} haploid = {value['best']:g} diploid lethal equivalents"
    at = [100 * float(survival_factor(f, value["best"])) for f in (0.125, 0.25)]
    return Worked(
        Quantity.model_validate(
            {**value, "origin": "borrowed", "source": f"{_source(answers)}; {both}; covers {span}"}
        ),
        f"{both}, covering {span}: survival is {at[0]:.1f} % of that of outbred animals at F = "
        f"0.125 and {at[1]:.1f} % at F = 0.25. Does this look right?{_WHOLE[str(answers['span'])]}",
    )


def _counted(_case: Case, _path: str, answers: Answers) -> Worked:
    k, n = _number(answers, "bred"), _number(answers, "released")
    if n < 1 or not 0 <= k <= n or k != int(k) or n != int(n):
        raise ValueError("Give whole numbers: at least one released, and no more bred than that.")
    low, high = (_r(float(end)) for end in wilson_interval(k, n))
    best = min(max(_r(k / n), low), high)  # rounding must not put it outside its own range
    sum_ = f"{k:g} of {n:g} = {best:g} ({low:g} to {high:g})"
    origin = "measured" if answers["where"] == "here" else "borrowed"
    return Worked(
        Quantity(
            best=best,
            low=low,
            high=high,
            origin=origin,
            source=f"{_source(answers)}; {sum_}; {WILSON}",
        ),
        f"{sum_}: {WILSON}.",
    )


def _source(answers: Answers) -> str:
    return str(answers.get("source") or "source not stated")


def _not_stated(_case: Case, _path: str, _answers: Answers) -> Worked:
    return Worked(None, NOT_UNLIMITED)


def _years(answers: Answers) -> float:
    years = _number(answers, "years")
    if years <= 0:
        raise ValueError("The years of isolation must be above 0.")
    return years


def _number(answers: Answers, key: str) -> float:
    return float(answers[key])


def _r(value: float) -> float:
    """Round to three digits: no estimate here is better than that."""
    return float(f"{value:.3g}")


def _r12(value: float) -> float:
    return float(f"{value:.12g}")


SPANS = (
    ("year", "survival through the first year"),
    ("maturity", "survival to maturity"),
    ("life", "all of life, young born and survival"),
)
_LATER = " The program lets all of it act in the first year."
_WHOLE = {"year": "", "maturity": _LATER, "life": f"{_LATER} Leave young per female at 0 then."}
_PRINTED_IN = Ask("source", "Source: author, year, journal or report", needed=False, text=True)
_ISOLATED = Ask("years", "How long has it been isolated?", "years")
_BREEDERS = Way(
    "breeders",
    "From the breeders",
    (
        Ask("males", "Males that breed", "per generation"),
        Ask("females", "Females that breed", "per generation"),
    ),
    _breeders,
)
_RATIO = Way("ratio", "From the adults counted", (), _ratio)
_PRINTED = Way(
    "printed",
    "As printed in a paper or report",
    (
        Ask("best", "The number printed", "lethal equivalents"),
        Ask("convention", "Is it per haploid or per diploid genome?", "",
            (("haploid", "haploid (per gamete, B)"), ("diploid", "diploid (per animal, 2B)"))),
        Ask("span", "Which part of life does it cover?", "", SPANS),
        Ask("low", "Low end, if printed", "lethal equivalents", needed=False),
        Ask("high", "High end, if printed", "lethal equivalents", needed=False),
        _PRINTED_IN,
    ),
    _lethals,
)  # fmt: skip
_COUNTED = Way(
    "counted",
    "From a count: so many of so many",
    (
        Ask("released", "Animals released", "animals"),
        Ask("bred", "Of these, lived to breed", "animals"),
        Ask("where", "Where was it?", "",
            (("here", "here, by this office"), ("elsewhere", "another place or species"))),
        _PRINTED_IN,
    ),
    _counted,
)  # fmt: skip
_OF_LETHALS = "lethal_equivalents_diploid.first_year"
_WAYS: dict[str, tuple[Way, ...]] = {
    "recipient.effective_size": (
        _RATIO,
        _BREEDERS,
        Way("isolation", "From diversity lost in isolation", (_ISOLATED,), _size_from_history),
    ),
    "plans[*].effective_size": (_RATIO, _BREEDERS),
    "donors[*].effective_size": (_RATIO, _BREEDERS),
    "recipient.gene_diversity": (
        Way("isolation", "From the history of isolation", (_ISOLATED,), _diversity_from_history),
        Way("pedigree", "From a pedigree", (Ask("f", "Mean inbreeding F", "probability"),),
            _diversity_from_pedigree),
        Way("ratio", "From a ratio of two diversities",
            (Ask("here", "Diversity here", "probability"),
             Ask("there", "Diversity in the outbred state", "probability")),
            _diversity_from_ratio),
    ),
    f"inbreeding_cost.{_OF_LETHALS}": (_PRINTED,),
    f"donors[*].{_OF_LETHALS}": (_PRINTED,),
    "plans[*].releases[*].afterwards.survive_to_breed": (_COUNTED,),
    "plans[*].rules[*].release.afterwards.survive_to_breed": (_COUNTED,),
    "donors[*].most_removed_per_year": (
        Way("not stated", "Nobody has stated it", (), _not_stated),
    ),
}  # fmt: skip
