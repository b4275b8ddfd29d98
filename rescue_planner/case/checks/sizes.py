"""Sizes: effective size between 1 and the adults, somebody to breed, ancestry of at most 1."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from rescue_planner.case.faults import Problem
from rescue_planner.case.tolerant import Raw, at, mapping, parts, value, value_at

_NEAR = 1e-9


def check_sizes(raw: Raw) -> Iterator[Problem]:
    """Yield an effective size above the adults or taken below 1, and sexes without breeders."""
    adults = value_at(raw, "recipient", "adults")
    size = value_at(raw, "recipient", "effective_size")
    sizes = [("recipient.effective_size", size)]
    # without a life cycle there are no adults to follow, so the size is held
    follows = (
        at(raw, "recipient", "effective_size_follows_adults") is True
        and at(raw, "life_cycle") is not None
    )
    for place, plan in parts(raw, "plans"):
        own = value_at(plan, "effective_size", otherwise=size)
        if at(plan, "effective_size") is not None:
            sizes.append((f"plans[{place}].effective_size", own))
        if own is not None and not follows:
            yield from _shrunk(raw, plan, own, f"plans[{place}].other_actions")
    for path, one in sizes:
        if one is not None and adults is not None and one > adults > 0:
            text = (
                f"The effective size {one:g} is above the {adults:g} adults: correct one of them."
            )
            yield Problem(path, text)
    for sex in ("females", "males"):
        if value_at(raw, "recipient", f"breeding_{sex}") == 0:
            text = f"There are no breeding {sex}: without them there is nothing to project; "
            yield Problem(f"recipient.breeding_{sex}", text + "give their number.")


def check_ancestry(raw: Raw) -> Iterator[Problem]:
    """Yield donor ancestries at the start that sum to more than 1."""
    shares = [value(one) for one in mapping(raw, "recipient", "donor_ancestry_at_start").values()]
    total = sum(one for one in shares if one is not None)
    if total > 1 + _NEAR:
        text = f"The donors’ shares of ancestry at the start sum to {total:g}, above 1: lower them."
        yield Problem("recipient.donor_ancestry_at_start", text)


@dataclass(frozen=True, slots=True)
class _Span:
    """When an action is in force, in steps since the start, and its factor on the size."""

    begin: float
    end: float
    factor: float

    def holds_in(self, step: int) -> bool:
        return self.begin < step + 1 - _NEAR and step < self.end - _NEAR


def _shrunk(raw: Raw, plan: Raw, size: float, where: str) -> Iterator[Problem]:
    start, generation = (value_at(raw, "time", key) for key in ("start_year", "generation_years"))
    horizon = value_at(raw, "time", "horizon_years")
    if start is None or horizon is None or generation is None or generation <= 0:
        return
    spans = _spans(plan, start, generation)
    # The product changes only where an action comes into force or ends.
    changes = {math.floor(one.begin + _NEAR) for one in spans if math.isfinite(one.begin)}
    changes |= {math.ceil(one.end - _NEAR) for one in spans if math.isfinite(one.end)}
    for step in sorted(changes):
        factor = math.prod(one.factor for one in spans if one.holds_in(step))
        if 0 <= step < horizon / generation - _NEAR and size * factor < 1 - _NEAR:
            text = (
                f"From {start + step * generation:g} on, the plan “{plan.get('name')}” leaves an "
                f"effective size of {size:g} × {factor:.3g} = {size * factor:.3g}, and below 1 "
                "nothing can be computed: lessen the loss of carrying capacity."
            )
            yield Problem(where, text)
            return


def _spans(plan: Raw, start: float, generation: float) -> list[_Span]:
    spans = []
    for _, action in parts(plan, "other_actions"):
        year = value_at(action, "year")
        until = value_at(action, "until_year", otherwise=math.inf)
        factor = value_at(action, "carrying_capacity_times", otherwise=1)
        if year is not None and until is not None and factor is not None:
            end = (until + 1 - start) / generation
            spans.append(_Span((year - start) / generation, end, factor))
    return spans
