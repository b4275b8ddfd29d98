"""What a new part of a plan starts as; each function is an edit, so undo takes it back."""

from __future__ import annotations

from typing import Any

from rescue_planner.case.document import Case
from rescue_planner.case.edits import Edit, add_action, add_release, add_rule, set_steady


def new_release(case: Case, plan: str) -> Edit:
    """Add a pair from the first donor in the first year."""
    return release_in(case, plan, case.time.start_year.best)


def release_in(case: Case, plan: str, year: float) -> Edit:
    """Add a pair from the first donor in a year."""
    return add_release(case, plan, case.donors[0].name, year, 1, 1)


def release_again(case: Case, plan: str, index: int) -> Edit:
    """Add a copy of a release, ranges and sources included."""
    release = case.plan(plan).releases[index]
    more: dict[str, Any] = {
        "age": release.who.age,
        "every_years": release.when.every_years,
        "times": release.when.times,
        "survive_to_breed": release.afterwards.survive_to_breed,
        "breeding_relative_to_residents": release.afterwards.breeding_relative_to_residents,
        "loan_years": release.loan_years,
        "each_animal": release.cost.each_animal,
        "each_event": release.cost.each_event,
    }
    who = release.who
    return add_release(
        case, plan, release.donor, release.when.first_year, who.females, who.males, **more
    )


def new_steady(case: Case, plan: str) -> Edit:
    """Add a flow of one newcomer per generation from the first donor that has none yet."""
    used = {steady.donor for steady in case.plan(plan).steady}
    donor = next(donor.name for donor in case.donors if donor.name not in used)
    return set_steady(case, plan, donor, 1)


def new_stop(case: Case, plan: str) -> Edit:
    """Add a rule that stops releases once donor ancestry passes a bound."""
    name = _free_name(case, plan, "ancestry ceiling")
    return add_rule(
        case, plan, {"name": name, "when": "donor_ancestry", "above": 0.3, "then": "stop"}
    )


def new_trigger(case: Case, plan: str) -> Edit:
    """Add a rule that releases a pair once inbreeding passes a bound."""
    rule = {
        "name": _free_name(case, plan, "another wave"),
        "when": "inbreeding",
        "above": 0.25,
        "then": "release",
        "release": {"donor": case.donors[0].name, "who": {"females": 1, "males": 1}},
    }
    return add_rule(case, plan, rule)


def new_action(case: Case, plan: str) -> Edit:
    """Add another action in the first year, to be described."""
    year = case.time.start_year.best
    return add_action(case, plan, {"what": "Describe what is done", "year": year})


def _free_name(case: Case, plan: str, wanted: str) -> str:
    taken = {rule.name for rule in case.plan(plan).rules}
    number, name = 1, wanted
    while name in taken:
        number += 1
        name = f"{wanted} {number}"
    return name
