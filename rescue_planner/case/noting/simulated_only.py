"""Remarks on what only simulated animals use."""

from __future__ import annotations

from collections.abc import Iterator

from rescue_planner.case.document import Case
from rescue_planner.case.life import LifeCycle
from rescue_planner.case.noting.base import Remark
from rescue_planner.case.noting.left_out import left_out
from rescue_planner.case.plans import Plan
from rescue_planner.case.population import Donor

Found = Iterator[str]


def on_simulated_only(case: Case) -> Iterator[Remark]:
    """Yield one remark that names each part given that the other depths leave out."""
    found = list(_simulated_only(case))
    if found:
        yield Remark(
            "simulated-only",
            "",
            "Only simulated animals use these; the average course and the one-locus odds leave "
            f"them out: {'; '.join(found)}.",
        )


def _simulated_only(case: Case) -> Found:
    parts = {
        "load": "the hidden load",
        "mixing_cost": "the cost of mixing",
        "genome": "the genome",
    }
    yield from (what for part, what in parts.items() if getattr(case, part) is not None)
    if case.inbreeding_cost is not None and case.inbreeding_cost.how == "by_load_loci":
        yield "inbreeding cost by load loci (elsewhere it follows F)"
    if case.life_cycle is not None:
        yield from _life(case.life_cycle)
    for donor in case.donors:
        yield from _donor(donor)
    for plan in case.plans:
        yield from _plan(plan)


def _life(life: LifeCycle) -> Found:
    if life.die_offs:
        yield "loss in die-offs"
    rates = ("first_year", "subadult", "adult", "young")
    if any(float(getattr(life.yearly_sd, rate).best) > 0 for rate in rates):
        yield "differences between years"
    if life.crowding == "gradual":
        yield "gradual crowding (elsewhere numbers stop at the capacity)"
    if not left_out(life, "mating"):
        yield "who mates with whom"


def _donor(donor: Donor) -> Found:
    if donor.lethal_equivalents_diploid is not None:
        yield f"the inbreeding cost of {donor.name} itself"
    if donor.kinship_among_released is not None:
        yield f"kinship among animals from {donor.name}"


def _plan(plan: Plan) -> Found:
    if any(release.loan_years is not None for release in plan.releases):
        yield f"the loan of animals in {plan.name}"
    for rule in plan.rules:
        if float(rule.surveys.best) > 1 or float(rule.survey_sd.best) > 0:
            yield f"the survey of the rule “{rule.name}” in {plan.name}"
