"""Remarks on numbers, effective size and the time looked at."""

from __future__ import annotations

from collections.abc import Iterator

from rescue_planner.case.document import Case
from rescue_planner.case.filled import adult_females, best
from rescue_planner.case.noting.base import Remark

FEWEST_GENERATIONS = 5  # costs of mixing can show as late as the second generation and after
_NEAR = 1e-9


def on_sizes(case: Case) -> Iterator[Remark]:
    """Yield remarks on effective sizes, the sexes, the horizon and the reference."""
    recipient = case.recipient
    adults = float(recipient.adults.best)
    yield from _size(float(recipient.effective_size.best), adults, "recipient.effective_size")
    for place, plan in enumerate(case.plans):
        if plan.effective_size is not None:
            path = f"plans[{place}].effective_size"
            yield from _size(float(plan.effective_size.best), adults, path)
    yield from _sexes(case, adults)
    yield from _horizon(case)
    own = float(recipient.gene_diversity.best)
    reference = float(recipient.reference_gene_diversity.best)
    if own > reference:
        yield Remark(
            "inbreeding-below-0",
            "recipient.reference_gene_diversity",
            f"Gene diversity ({own:g}) is above its reference ({reference:g}), so inbreeding "
            f"starts at {1 - own / reference:.3f}. Are both from the same markers?",
        )


def _size(size: float, adults: float, path: str) -> Iterator[Remark]:
    if size < adults / 50:
        yield Remark(
            "size-low",
            path,
            f"Effective size {size:g} is below a fiftieth of the {adults:g} adults. Is it per "
            "generation, and for this population alone?",
        )
    elif size > adults / 2:
        yield Remark(
            "size-high",
            path,
            f"Effective size {size:g} is above half of the {adults:g} adults. In many wild "
            "populations it is about 0.1 to 0.2 of them (Frankham 1995; the range from memory). "
            "Was a count entered here?",
        )


def _sexes(case: Case, adults: float) -> Iterator[Remark]:
    females = adult_females(case.recipient)
    if females > adults:
        yield Remark(
            "more-females-than-adults",
            "recipient.adult_females",
            f"There are more adult females ({females:g}) than adults ({adults:g}). Which is right?",
        )
    most = {"females": females, "males": max(adults - females, 0.0)}
    for sex, there in most.items():
        breeding = best(getattr(case.recipient, f"breeding_{sex}"), 0.0)
        if breeding > there + _NEAR:
            yield Remark(
                "more-breeders-than-adults",
                f"recipient.breeding_{sex}",
                f"More {sex} breed in a generation ({breeding:g}) than there are adult {sex} at "
                f"one time ({there:g}). Right where they follow one another; or check both.",
            )


def _horizon(case: Case) -> Iterator[Remark]:
    horizon, generation = (
        float(case.time.horizon_years.best),
        float(case.time.generation_years.best),
    )
    if horizon / generation < FEWEST_GENERATIONS - _NEAR:
        yield Remark(
            "horizon-short",
            "time.horizon_years",
            f"The horizon is {horizon / generation:.3g} generations. Costs of mixing may show only "
            "in the second generation, and inbreeding builds up slowly: look at five or more.",
        )
