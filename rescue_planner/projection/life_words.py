"""The life cycle in words: its growth and its generation length by each definition. No Qt here.

The rates are those entered; where they were measured on young of unrelated parents, today's
inbreeding lowers growth, and that is said too.
"""

from __future__ import annotations

from rescue_planner.case.document import Case
from rescue_planner.case.filled import lethal_equivalents
from rescue_planner.case.life import LifeCycle
from rescue_planner.theory.inbreeding import inbreeding, survival_factor
from rescue_planner.theory.life_table import (
    births_and_survival,
    female_matrix,
    generation_lengths,
    growth,
    net_reproduction,
)

Rates = tuple[float, float, float, float, int, int]
OFF = 0.15  # a generation length further from the life table's than this is questioned


def rates_of(life: LifeCycle, survival: float = 1.0, young: float = 1.0) -> Rates:
    """Return daughters per female, survival of the three classes and the two ages.

    `survival` and `young` multiply first-year survival and the number of young.
    """
    births = (
        float(life.share_of_females_breeding.best)
        * life.young_per_breeding_female.expected
        * float(life.females_among_young.best)
    )
    yearly = life.yearly_survival
    return (
        births * young,
        float(yearly.first_year.best) * survival,
        float(yearly.subadult.best),
        float(yearly.adult.best),
        int(life.first_breeding_age.female.best),
        int(life.last_age.best),
    )


def growth_words(case: Case) -> str:
    """Return the yearly growth of the females, R0, and what today's inbreeding makes of growth."""
    life = case.life_cycle
    if life is None:
        return ""
    rates = rates_of(life)
    rate = float(growth(*rates))
    if rate == 0.0:
        return "Growth: no daughter would survive with these numbers. Check births and survival."
    births, survival = births_and_survival(female_matrix(*rates))
    each = float(net_reproduction(births, survival))
    words = (
        f"Growth of the females, without crowding: {rate:.3f} times a year "
        f"({_change(rate)}); R0 = {each:.2f} daughters per female over her life."
    )
    now = _now(case)
    if life.survival_measured == "unrelated_parents" and now != (1.0, 1.0):
        today = float(growth(*rates_of(life, *now)))
        words += f" With today’s inbreeding: {today:.3f} times a year."
    return words


def _change(rate: float) -> str:
    sign = "+" if rate >= 1 else "−"
    return f"{sign}{abs(100 * (rate - 1)):.1f} % a year"


def _now(case: Case) -> tuple[float, float]:
    """Return what today's inbreeding leaves of first-year survival and of young per female."""
    recipient, load = case.recipient, lethal_equivalents(case)
    f = inbreeding(
        float(recipient.gene_diversity.best), float(recipient.reference_gene_diversity.best)
    )
    first, young = float(load.first_year.best), float(load.young_per_female.best)
    return float(survival_factor(f, first)), float(survival_factor(f, young))


def generation_words(case: Case) -> str:
    """Return the generation length by each definition, against the T that was entered."""
    life = case.life_cycle
    if life is None:
        return ""
    rates = rates_of(life)
    if rates[0] * rates[1] <= 0.0 or float(growth(*rates)) == 0.0:
        return ""
    lengths = generation_lengths(*births_and_survival(female_matrix(*rates)))
    stable, entered = float(lengths.stable_population), float(case.time.generation_years.best)
    words = (
        f"Generation length from this life cycle: {stable:.1f} years (mean age of mothers in the "
        f"stable population), {float(lengths.cohort):.1f} (mean age of mothers of one cohort), "
        f"{float(lengths.to_grow_by_r0):.1f} (time to grow by R0). T entered: {entered:g}, "
    )
    off = entered / stable - 1.0
    if abs(off) < 0.005:
        return words + "the same as the first."
    side = "longer" if off > 0 else "shorter"
    words += f"{abs(100 * off):.0f} % {side} than the first."
    return words + (" Which is right?" if abs(off) > OFF else "")
