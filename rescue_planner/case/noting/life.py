"""Remarks on the life cycle: survival, generation length, growth at the start."""

from __future__ import annotations

import math
from collections.abc import Iterator

from rescue_planner.case.document import Case
from rescue_planner.case.filled import lethal_equivalents
from rescue_planner.case.life import LifeCycle
from rescue_planner.case.noting.base import Remark
from rescue_planner.theory.life_table import growth, mean_age_of_mothers

_SLACK = 1e-9
_OFF = 0.15  # share by which T may differ from the life table's before it is remarked on


def on_life(case: Case) -> Iterator[Remark]:
    """Yield remarks on the recipient's life cycle."""
    life = case.life_cycle
    if life is None:
        yield Remark(
            "no-life-cycle",
            "life_cycle",
            "Without a life cycle, numbers, growth and simulated animals are not projected; gene "
            "diversity, inbreeding, ancestry and tracked loci are.",
        )
        yield from _without(case)
        return
    yield from _capped(case, life)
    yield from _generation(case, life)
    yield from _declining(case, life)
    counts = life.young_per_breeding_female.counts is not None
    if counts and float(life.yearly_sd.young.best) > 0:
        yield Remark(
            "young-sd-with-counts",
            "life_cycle.yearly_sd.young",
            "With a chance of each number of young, good and bad years act on the share of females "
            "that breed, at most all of them, which lowers the mean of simulated animals a little.",
        )


def _without(case: Case) -> Iterator[Remark]:
    """Yield what a case asks for that only a life cycle could give."""
    if case.recipient.effective_size_follows_adults:
        yield Remark(
            "nothing-to-follow",
            "recipient.effective_size_follows_adults",
            "The effective size is to follow the adults, but without a life cycle there are none "
            "to follow: it is held. Add a life cycle, or say no.",
        )
    for place, donor in enumerate(case.donors):
        if donor.life_cycle == "same":
            yield Remark(
                "no-cycle-to-share",
                f"donors[{place}].life_cycle",
                f"The life cycle of {donor.name} is the same as the recipient’s, which is not "
                "given: the donor counts as without one. Add one, or remove this.",
            )


def _inbreeding(case: Case) -> float:
    recipient = case.recipient
    reference = float(recipient.reference_gene_diversity.best)
    return max(0.0, 1 - float(recipient.gene_diversity.best) / reference)


def _cost(case: Case) -> tuple[float, float]:
    """Return what inbreeding leaves of first-year survival and of young at the start."""
    load, f = lethal_equivalents(case), _inbreeding(case)
    parts = (float(load.first_year.best), float(load.young_per_female.best))
    return math.exp(-parts[0] / 2 * f), math.exp(-parts[1] / 2 * f)


def _capped(case: Case, life: LifeCycle) -> Iterator[Remark]:
    given = float(life.yearly_survival.first_year.best)
    outbred = given / _cost(case)[0] if life.survival_measured == "here_now" else given
    if outbred > 1 + _SLACK:
        yield Remark(
            "survival-capped",
            "life_cycle.yearly_survival.first_year",
            f"First-year survival {given:g} with this inbreeding and its cost implies "
            f"{outbred:.3f} for outbred young. It is held at 1, so gains are understated. Check "
            "survival, the lethal equivalents (diploid?) and the reference.",
        )


def _rates(case: Case, life: LifeCycle) -> tuple[float, float, float, float, int, int]:
    """Return births, survival of the three classes and the ages, at the start."""
    births = (
        float(life.share_of_females_breeding.best)
        * life.young_per_breeding_female.expected
        * float(life.females_among_young.best)
    )
    first_year = float(life.yearly_survival.first_year.best)
    if life.survival_measured == "unrelated_parents":
        survival, young = _cost(case)
        first_year, births = first_year * survival * _lag_cost(case), births * young
    return (
        births,
        min(first_year, 1.0),
        float(life.yearly_survival.subadult.best),
        float(life.yearly_survival.adult.best),
        int(life.first_breeding_age.female.best),
        int(life.last_age.best),
    )


def _lag_cost(case: Case) -> float:
    """Return the mean fitness at today's lag against that at the optimum (V_P is 1)."""
    if case.trait is None:
        return 1.0
    width2 = float(case.trait.selection_width_sd.best) ** 2
    return math.exp(-(float(case.trait.optimum_at_start.best) ** 2) / (2 * (width2 + 1)))


def _generation(case: Case, life: LifeCycle) -> Iterator[Remark]:
    rates = _rates(case, life)
    if rates[0] * rates[1] <= 0:
        return
    given, table = float(case.time.generation_years.best), float(mean_age_of_mothers(*rates))
    if abs(given - table) > _OFF * table:
        yield Remark(
            "generation-length",
            "time.generation_years",
            f"The generation length is {given:g} years, and mothers in this life table are "
            f"{table:.2f} years old on average. Which is right? Everything per generation depends "
            "on it.",
        )


def _declining(case: Case, life: LifeCycle) -> Iterator[Remark]:
    rate = float(growth(*_rates(case, life)))
    if rate < 1 - _SLACK and not case.recipient.effective_size_follows_adults:
        yield Remark(
            "decline-with-size-held",
            "life_cycle",
            f"Growth is below 1 at the start ({rate:.3f} a year) while Ne is held. Let Ne follow "
            "the adults, or read diversity as too high.",
        )
