"""Methods, assumptions and limits, written from the settings of the case."""

# ruff: noqa: RUF001 - primes mark the value after a step

from __future__ import annotations

from collections.abc import Iterator
from itertools import combinations

from rescue_planner.annex.numerals import given, year_text
from rescue_planner.annex.wording import listed, one_line
from rescue_planner.case import filled
from rescue_planner.case.document import Case
from rescue_planner.projection.leaves_out import leaves_out
from rescue_planner.projection.results import DEPTH_NAMES, Comparison

EXPECTED_ORDER = (
    "rules are read; releases join the breeders; breeding; selection among the young; mutation; "
    "drift"
)


def methods(case: Case, comparison: Comparison) -> tuple[str, ...]:
    """Return the methods, one paragraph each."""
    return tuple(_methods(case, comparison))


def _methods(case: Case, comparison: Comparison) -> Iterator[str]:
    yield _time(case, comparison)
    yield _depths(comparison)
    yield _flow()
    yield _size(case)
    yield _diversity(case)
    yield _inbreeding(case)
    yield (
        "Ancestry from donor d: a_d′ = (1 − m) a_d + m_d, from its share at the start. "
        "Source: Bernstein 1931."
    )
    if case.loci:
        yield from _loci(comparison)
    if case.trait is not None:
        yield _trait()
    if case.life_cycle is not None:
        yield _growth(case)
    if any(plan.rules for plan in case.plans):
        yield (
            "Rules read the expected values at each generation, strictly above or below their "
            "bound, and act on the step that follows; a stop ends releases and steady flow for "
            "good, other actions go on."
        )
    yield (
        "Sums so far: animals released; newcomers that breed (females and males of all releases, "
        "times survival to breeding and breeding relative to residents, and the steady flow); "
        f"cost in {case.currency or 'the currency of the case'}, not discounted."
    )


def _time(case: Case, comparison: Comparison) -> str:
    length = f"{comparison.generation_years:g}"
    count = comparison.years.size - 1
    first, last = (year_text(float(comparison.years[k])) for k in (0, -1))
    return (
        f"Time runs in {count} steps of one generation, T = {length} years, from t = 0 in {first} "
        f"to t = {count} in {last}. Step t to t + 1 takes the events of the {length} years that "
        "begin with the year of t. A value asked for at a year is the one at the last t reached "
        f"by then. Order within a step: {EXPECTED_ORDER}."
    )


def _depths(comparison: Comparison) -> str:
    words = {
        "expected": "average course: closed recursions for expected values",
        "exact": "one-locus odds: the whole distribution of one tracked allele by the "
        "Wright-Fisher chain, without random draws",
        "simulated": "simulated animals: single animals, year by year",
    }
    return f"Depths computed: {'; '.join(words[depth] for depth in comparison.depths)}."


def _flow() -> str:
    return (
        "Gene flow. Effective newcomers of one sex from donor d, e_d, are the animals released in "
        "the step times the share that survives to breed times their breeding relative to "
        "residents, plus half of the steady flow for the part of the step it covers. Shares among "
        "mothers and fathers: u_d = e_d / (N + Σ e), N the residents of that sex that breed; "
        "share of gene copies: m_d = (u_d of mothers + u_d of fathers) / 2, m = Σ m_d. "
        "Source: Wright 1931 (Genetics 16:97)."
    )


def _size(case: Case) -> str:
    size = given(case.recipient.effective_size.best)
    if case.recipient.effective_size_follows_adults and case.life_cycle is not None:
        how = "changes in proportion to the adults, and is at least 1"
    else:
        how = "is held, times the carrying-capacity factor of other actions while they are in force"
    own = [
        f"{given(plan.effective_size.best)} under {one_line(plan.name)}"
        for plan in case.plans
        if plan.effective_size is not None
    ]
    other = f" (its start is {listed(own)})" if own else ""
    return f"Effective size. Ne = {size} animals per generation{other} {how}."


def _diversity(case: Case) -> str:
    assumed = _assumed_fst(case)
    more = f" Taken for want of an FST between donors: {assumed}." if assumed else ""
    drift = "those that drift lose 1/(2 Ne_d) of theirs a step" if _drifting(case) else "constant"
    return (
        "Gene diversity H of the recipient, H_rd towards donor d and H_de between donors: "
        "H_pool = (1 − m)² H + Σ 2 m_d (1 − m) H_rd + Σ m_d m_e H_de; H′ = (1 − 1/(2 Ne)) "
        "H_pool; H_rd′ = (1 − m) H_rd + Σ m_e H_ed. Start: H_rd = ((H_r + H_d)/2) / (1 − FST) "
        "with FST in Hudson’s form (Nei’s G is turned into 2G/(1 + G)). Donors: "
        f"{drift}. Sources: Wright 1931; Malécot 1948; Nei 1973; Hudson, Slatkin & Maddison "
        f"1992.{more}"
    )


def _drifting(case: Case) -> bool:
    return any(donor.drifts for donor in case.donors)


def _assumed_fst(case: Case) -> str:
    pairs = [
        f"{one_line(first.name)} and {one_line(second.name)}"
        for first, second in combinations(case.donors, 2)
        if second.name not in first.fst_to_donors and first.name not in second.fst_to_donors
    ]
    if not pairs:
        return ""
    return f"the larger of the two means of known diversities, for {listed(pairs)}"


def _inbreeding(case: Case) -> str:
    reference = given(case.recipient.reference_gene_diversity.best)
    load = filled.lethal_equivalents(case)
    return (
        f"Inbreeding F = 1 − H / H_ref with H_ref = {reference}; it may fall below 0 after mixing "
        "and is shown as it is. First-year survival of the young of a step against outbred "
        "young: the sum over sources i of mothers and j of fathers (residents and donors) of "
        "their shares times exp(−(B/2) max(0, 1 − H_ij/H_ref)), H_ij before the step, "
        f"B = {given(load.first_year.best)} diploid lethal equivalents; for young per female "
        f"B = {given(load.young_per_female.best)} and the mother’s mean F. Source: Morton, Crow "
        "& Muller 1956 (PNAS 42:855)."
    )


def _loci(comparison: Comparison) -> Iterator[str]:
    yield (
        "Tracked locus. Frequency after mixing p* = (1 − m) p + Σ m_d p_d; viability selection "
        "with the fitness of AA, Aa and aa (A the named allele); mutation both ways. Sources: "
        "Haldane 1924; Wright 1937; Crow & Kimura 1970."
    )
    if "exact" in comparison.depths:
        yield (
            "One-locus odds. Copies in the next generation are binomial with 2 Ne draws "
            "(rounded half up, at least 2) from that frequency; the whole distribution is carried "
            "from step to step. Chance of keeping: probability that a copy is left; chance of "
            "fixing: that no other is. Quantiles: smallest frequency whose cumulative probability "
            "reaches them. Sources: Fisher 1930; Wright 1931; Ewens 2004."
        )


def _trait() -> str:
    return (
        "Trait. Genic variance and the variance held by association between loci are followed "
        "apart; mixing shifts the mean and adds variance between sources, selection towards the "
        "optimum moves the mean by V_A (θ − z) / (ω² + V_A + V_E), drift takes 1/(2 Ne) of both, "
        "mutation adds to the genic part. Shift the trait can follow: "
        "V_A √(2 r_max / (ω² + V_A + V_E)) per generation. Sources: Lande 1976; Bulmer 1980; "
        "Lynch & Hill 1986; Lynch & Lande 1993; Bürger & Lynch 1995."
    )


def _growth(case: Case) -> str:
    life = case.life_cycle
    assert life is not None
    if life.survival_measured == "here_now":
        measured = (
            "Survival was measured here and now, so inbreeding, trait and young count relative to "
            "their own value at t = 0"
        )
    else:
        measured = "Survival was measured on young of unrelated parents"
    crowding = "up to the carrying capacity" if case.recipient.carrying_capacity else "no limit"
    return (
        "Numbers. Yearly growth is the dominant eigenvalue of the female age matrix counted just "
        "before breeding, with first-year survival changed by inbreeding, by the trait’s distance "
        f"from its optimum and by other actions, and capped at 1. {measured}. Adults: (adults + "
        f"released animals that live to breed) times growth to the power T, {crowding}. Sources: "
        "Lotka 1913; Leslie 1945; Caswell 2001."
    )


def assumptions(case: Case, comparison: Comparison) -> tuple[tuple[str, tuple[str, ...]], ...]:
    """Return what each computed depth holds fixed or leaves out, by the depth's name."""
    return tuple(
        (DEPTH_NAMES[depth], leaves_out(case, depth))
        for depth in comparison.depths
        if leaves_out(case, depth)
    )


def not_included(case: Case, comparison: Comparison) -> tuple[str, ...]:
    """Return what the results do not hold, from the settings: for `Not included: …`."""
    found = []
    if "simulated" not in comparison.depths:
        found += [
            "chance events in single animals, weather and die-offs",
            "chance of decline and of extinction",
            "effect of removal on the donors’ numbers",
        ]
    found.append("disease and parasites")
    if case.life_cycle is None:
        found.append("numbers of animals and their growth (no life cycle given)")
    if case.inbreeding_cost is None:
        found.append("cost of inbreeding (no lethal equivalents given)")
    if case.mixing_cost is None or "simulated" not in comparison.depths:
        found.append("loss of fitness by mixing (outbreeding depression)")
    if case.load is None or "simulated" not in comparison.depths:
        found.append("harmful alleles one by one, and those that newcomers bring")
    if not case.loci:
        found.append("alleles of named loci")
    if case.trait is None:
        found.append("adaptation of a trait")
    found += [
        "spread by not knowing the inputs (entered ranges are listed, not drawn)",
        "behaviour, social structure and space",
        "costs that were not entered",
    ]
    return tuple(found)
