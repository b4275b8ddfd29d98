"""Remarks on what only simulated animals use."""

from __future__ import annotations

from collections.abc import Iterator

from rescue_planner.case.document import Case
from rescue_planner.case.life import LifeCycle
from rescue_planner.case.noting.base import Remark
from rescue_planner.case.noting.left_out import left_out
from rescue_planner.case.plans import Plan
from rescue_planner.case.population import Donor

Found = Iterator[tuple[str, str]]


def on_simulated_only(case: Case) -> Iterator[Remark]:
    """Yield a remark for each part given that the expected and exact depths leave out."""
    for path, what in _simulated_only(case):
        yield Remark(
            "simulated-only",
            path,
            f"{what} is used by simulated animals only: the average course and the one-locus odds "
            "leave it out.",
        )


def _simulated_only(case: Case) -> Found:
    parts = {
        "load": "The hidden load",
        "mixing_cost": "The cost of mixing",
        "genome": "The genome",
    }
    yield from ((path, what) for path, what in parts.items() if getattr(case, path) is not None)
    if case.inbreeding_cost is not None and case.inbreeding_cost.how == "by_load_loci":
        yield "inbreeding_cost.how", "Inbreeding cost by load loci (elsewhere it follows F)"
    if case.life_cycle is not None:
        yield from _life(case.life_cycle)
    for place, donor in enumerate(case.donors):
        yield from _donor(donor, f"donors[{place}]")
    for place, plan in enumerate(case.plans):
        yield from _plan(plan, f"plans[{place}]")


def _life(life: LifeCycle) -> Found:
    if life.die_offs:
        yield "life_cycle.die_offs", "Loss in die-offs"
    rates = ("first_year", "subadult", "adult", "young")
    if any(float(getattr(life.yearly_sd, rate).best) > 0 for rate in rates):
        yield "life_cycle.yearly_sd", "The difference between years"
    if life.crowding == "gradual":
        yield "life_cycle.crowding", "Gradual crowding (elsewhere numbers stop at the capacity)"
    if not left_out(life, "mating"):
        yield "life_cycle.mating", "Who mates with whom"


def _donor(donor: Donor, path: str) -> Found:
    if donor.lethal_equivalents_diploid is not None:
        where = f"{path}.lethal_equivalents_diploid"
        yield where, f"The inbreeding cost of {donor.name} itself"
    if donor.kinship_among_released is not None:
        yield f"{path}.kinship_among_released", f"Kinship among animals from {donor.name}"


def _plan(plan: Plan, path: str) -> Found:
    for which, release in enumerate(plan.releases):
        if release.loan_years is not None:
            yield f"{path}.releases[{which}].loan_years", f"The loan of animals in {plan.name}"
    for which, rule in enumerate(plan.rules):
        if float(rule.surveys.best) > 1 or float(rule.survey_sd.best) > 0:
            yield f"{path}.rules[{which}]", f"The survey of the rule “{rule.name}” in {plan.name}"
