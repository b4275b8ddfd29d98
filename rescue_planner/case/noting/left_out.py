"""Remarks on what was left out, with the default that is used."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from rescue_planner.case.base import Part
from rescue_planner.case.document import Case
from rescue_planner.case.filled import adult_females, breeding_females, breeding_males
from rescue_planner.case.inputs import input_of
from rescue_planner.case.noting.base import Remark
from rescue_planner.case.population import Donor
from rescue_planner.case.spoken import lowered

_TRAIT = (
    "selection_width_sd",
    "optimum_at_start",
    "optimum_shift_per_year",
    "mutational_variance",
    "loci",
)


def on_left_out(case: Case) -> Iterator[Remark]:
    """Yield one remark for each part that has defaults in use."""
    yield from _recipient(case)
    if left_out(case, "inbreeding_cost"):
        text = "The inbreeding cost was left out: no cost is used, so no gain in survival shows."
        yield Remark("left-out", "inbreeding_cost", text)
    else:
        load = case.inbreeding_cost.lethal_equivalents_diploid if case.inbreeding_cost else None
        yield from _said(
            load, "inbreeding_cost.lethal_equivalents_diploid", ("first_year", "young_per_female")
        )
    for place, donor in enumerate(case.donors):
        yield from _donor(case, donor, f"donors[{place}]")
    for place, locus in enumerate(case.loci):
        yield from _said(locus, f"loci[{place}]", ("fitness", "mutation_to", "mutation_from"))
    yield from _life(case)
    yield from _said(case.trait, "trait", _TRAIT)
    for place, plan in enumerate(case.plans):
        yield from _releases(plan, f"plans[{place}]")


def left_out(part: Part, field: str) -> bool:
    """Return whether the case does not say this field."""
    return field not in part.model_fields_set or getattr(part, field) is None


def _remark(path: str, defaults: list[str]) -> Iterator[Remark]:
    if defaults:
        yield Remark("left-out", path, f"Left out, so this is used: {'; '.join(defaults)}.")


def _said(part: Part | None, path: str, fields: tuple[str, ...]) -> Iterator[Remark]:
    """Yield the remark on fields whose default stands in the types."""
    if part is not None:
        left = [f"{_name(part, f)} {_value(getattr(part, f))}" for f in fields if left_out(part, f)]
        yield from _remark(path, left)


def _name(part: Part, field: str) -> str:
    definition = input_of(type(part), field)
    return lowered(definition.name) if definition is not None else field.replace("_", " ")


def _value(held: Any) -> str:  # noqa: ANN401 - whatever a field may hold
    if isinstance(held, tuple):
        return ", ".join(_value(one) for one in held)
    return f"{held.best:g}" if hasattr(held, "best") else str(held).replace("_", " ")


def _recipient(case: Case) -> Iterator[Remark]:
    recipient = case.recipient
    halves = {
        "adult_females": adult_females,
        "breeding_females": breeding_females,
        "breeding_males": breeding_males,
    }
    left = [
        f"{_name(recipient, field)} {value(recipient):g}, half of the adults"
        for field, value in halves.items()
        if left_out(recipient, field)
    ]
    unknown = [d.name for d in case.donors if d.name not in recipient.donor_ancestry_at_start]
    if unknown:
        left.append(f"ancestry at the start 0 from {', '.join(unknown)}")
    if case.life_cycle is None or not recipient.effective_size_follows_adults:
        yield Remark(
            "size-held",
            "recipient.effective_size_follows_adults",
            f"Effective size is held at {float(recipient.effective_size.best):g} whatever the "
            "numbers do, except where a plan says its own or changes the carrying capacity.",
        )
    if case.life_cycle is not None and recipient.carrying_capacity is None:
        left.append("no carrying capacity, so numbers are not limited")
    yield from _remark("recipient", left)


def _donor(case: Case, donor: Donor, path: str) -> Iterator[Remark]:
    left = ["FST in Hudson’s form"] if left_out(donor, "fst_form") else []
    if case.trait is not None:
        if left_out(donor, "trait_mean_difference"):
            left.append("trait mean like the recipient’s")
        if left_out(donor, "additive_variance"):
            left.append("additive variance from the gene diversities")
    yield from _remark(path, left)


def _life(case: Case) -> Iterator[Remark]:
    life = case.life_cycle
    if life is None:
        return
    left = []
    if left_out(life, "survival_measured"):
        left.append("survival as measured here and now")
    left += [
        f"{_name(life, f)} {_value(getattr(life, f))}"
        for f in ("females_among_young", "fewest_adults", "crowding")
        if left_out(life, f)
    ]
    yield from _remark("life_cycle", left)


def _releases(plan: Any, path: str) -> Iterator[Remark]:  # noqa: ANN401
    parts = [(f"{path}.releases[{i}]", release) for i, release in enumerate(plan.releases)]
    parts += [
        (f"{path}.rules[{i}].release", rule.release)
        for i, rule in enumerate(plan.rules)
        if rule.release is not None
    ]
    for where, release in parts:
        yield from _said(
            release.afterwards,
            f"{where}.afterwards",
            ("survive_to_breed", "breeding_relative_to_residents"),
        )
