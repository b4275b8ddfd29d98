"""Edits of plans: the plans themselves, their releases, steady flow, rules and other actions."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from rescue_planner.case.document import Case
from rescue_planner.case.edits.base import (
    Edit,
    Raw,
    append,
    done,
    given,
    index_of,
    inserted,
    plain,
    refuse,
    removed,
    renumbered,
)
from rescue_planner.case.paths import Path, drop, get, put
from rescue_planner.case.plans import NO_RELEASES, OtherAction, Rule
from rescue_planner.case.quantity import Quantity
from rescue_planner.case.raw import to_raw
from rescue_planner.case.spoken import counted, spoken_value

Number = float | Quantity

RELEASE: dict[str, tuple[str, ...]] = {
    "donor": ("donor",),
    "females": ("who", "females"),
    "males": ("who", "males"),
    "age": ("who", "age"),
    "first_year": ("when", "first_year"),
    "every_years": ("when", "every_years"),
    "times": ("when", "times"),
    "survive_to_breed": ("afterwards", "survive_to_breed"),
    "breeding_relative_to_residents": ("afterwards", "breeding_relative_to_residents"),
    "loan_years": ("loan_years",),
    "each_animal": ("cost", "each_animal"),
    "each_event": ("cost", "each_event"),
}


def add_plan(case: Case, name: str) -> Edit:
    """Add an empty plan at the end.

    Raises
    ------
    InvalidCase
        When the name is taken or empty, or there are twelve plans already.
    """
    return done(f"Add plan “{name}”", append(to_raw(case), "plans", {"name": name}))


def duplicate_plan(case: Case, name: str, new_name: str | None = None) -> Edit:
    """Put a copy of a plan after it, called `new_name` (left out: the name with a number).

    Raises
    ------
    KeyError
        When there is no plan called `name`.
    """
    raw = to_raw(case)
    place = index_of(raw, "plans", name)
    called = _free_name(raw, name) if new_name is None else new_name
    copy = {**raw["plans"][place], "name": called}
    sentence = f"Duplicate plan “{name}” as “{called}”"
    return done(sentence, inserted(raw, "plans", place + 1, copy))


def _free_name(raw: Raw, name: str) -> str:
    taken = {plan["name"].strip().casefold() for plan in raw["plans"]}
    number = 2
    while f"{name} {number}".strip().casefold() in taken:
        number += 1
    return f"{name} {number}"


def rename_plan(case: Case, name: str, new_name: str) -> Edit:
    """Rename a plan.

    Raises
    ------
    KeyError
        When there is no plan called `name`.
    InvalidCase
        For `No releases`, and when the new name is taken or empty.
    """
    raw = to_raw(case)
    place = index_of(raw, "plans", name)
    if name == NO_RELEASES:
        raise refuse(f"plans[{place}].name", f"“{NO_RELEASES}” keeps its name: duplicate it first.")
    sentence = f"Rename plan “{name}” to “{new_name}”"
    return done(sentence, put(raw, ("plans", place, "name"), new_name))


def remove_plan(case: Case, name: str) -> Edit:
    """Remove a plan.

    Raises
    ------
    KeyError
        When there is no plan called `name`.
    InvalidCase
        For `No releases`, and while a what-if changes just this plan.
    """
    raw = to_raw(case)
    place = index_of(raw, "plans", name)
    if name == NO_RELEASES:
        text = f"“{NO_RELEASES}” stays: every other plan is compared with it."
        raise refuse(f"plans[{place}]", text)
    return done(f"Remove plan “{name}”", removed(raw, "plans", place))


def move_plan(case: Case, name: str, to: int) -> Edit:
    """Move a plan to place `to` (0 the first) in the order of the plans.

    Raises
    ------
    KeyError
        When there is no plan called `name`, or no such place.
    """
    raw = to_raw(case)
    place = index_of(raw, "plans", name)
    if not 0 <= to < len(raw["plans"]):
        raise KeyError(f"plans[{to}]")
    order = [at for at in range(len(raw["plans"])) if at != place]
    order.insert(to, place)
    moved = put(raw, "plans", [raw["plans"][at] for at in order])
    sentence = f"Move plan “{name}” to place {to + 1}"
    return done(sentence, renumbered(moved, ("plans",), order.index))


def _in_plan(raw: Raw, plan: str, kind: str) -> Path:
    return ("plans", index_of(raw, "plans", plan), kind)


def with_release(held: Raw, values: Mapping[str, Any]) -> Raw:
    """Return a plain release with these values; None leaves one out."""
    for name, value in values.items():
        if name not in RELEASE:
            raise TypeError(f"a release has no {name!r}")
        if value is not None:
            held = put(held, RELEASE[name], plain(value))
        else:
            held = _dropped(held, RELEASE[name])
    return held


def _dropped(held: Raw, path: tuple[str, ...]) -> Raw:
    try:
        held = drop(held, path)
    except KeyError:
        return held
    return drop(held, path[:1]) if len(path) > 1 and not held[path[0]] else held


def add_release(
    case: Case,
    plan: str,
    donor: str,
    first_year: Number,
    females: Number = 0,
    males: Number = 0,
    **more: Number | None,
) -> Edit:
    """Add a release to a plan.

    Parameters
    ----------
    case, plan, donor, first_year, females, males
        Where, from which donor, the (first) year, and the animals.
    **more
        age, every_years, times, survive_to_breed, breeding_relative_to_residents, loan_years,
        each_animal, each_event (the two parts of the cost).

    Raises
    ------
    KeyError
        When there is no such plan.
    InvalidCase
        When the donor is unknown, the year is outside, or the donor would give too many.
    """
    raw = to_raw(case)
    path = _in_plan(raw, plan, "releases")
    animals = {"females": females, "males": males, "first_year": first_year}
    release = with_release({"donor": donor}, {**animals, **given(more)})
    words = f"{_count(females, 'female')} and {_count(males, 'male')} from “{donor}”"
    sentence = f"Add a release of {words} in {_shown(first_year)} to plan “{plan}”"
    return done(sentence, append(raw, path, release))


def _count(animals: Number, one: str) -> str:
    return counted(float(animals.best if isinstance(animals, Quantity) else animals), one)


def _shown(value: Number) -> str:
    return spoken_value(value.best if isinstance(value, Quantity) else value)


def change_release(case: Case, plan: str, index: int, **changes: Number | str | None) -> Edit:
    """Change one or more values of a release; the names are those of `add_release`.

    None leaves a value out. A plain number here replaces the whole entry, range included.

    Raises
    ------
    KeyError
        When there is no such plan or release.
    InvalidCase
        When the changed release is wrong.
    """
    raw = to_raw(case)
    path = (*_in_plan(raw, plan, "releases"), index)
    release = with_release(get(raw, path), changes)
    words = ", ".join(_change(name, value) for name, value in changes.items())
    sentence = f"Change release {index + 1} of plan “{plan}”: {words}"
    return done(sentence, put(raw, path, release))


def _change(name: str, value: Number | str | None) -> str:
    said = "left out" if value is None else spoken_value(value)
    return f"{name.replace('_', ' ')} {said}"


def remove_release(case: Case, plan: str, index: int) -> Edit:
    """Remove a release from a plan.

    Raises
    ------
    KeyError
        When there is no such plan or release.
    """
    raw = to_raw(case)
    sentence = f"Remove release {index + 1} of plan “{plan}”"
    return done(sentence, removed(raw, _in_plan(raw, plan, "releases"), index))


def set_steady(
    case: Case,
    plan: str,
    donor: str,
    migrants_per_generation: Number,
    from_year: Number | None = None,
    to_year: Number | None = None,
) -> Edit:
    """Set the steady flow from a donor, the first one where the plan has several from it.

    Raises
    ------
    KeyError
        When there is no such plan.
    InvalidCase
        When the donor is unknown or a value is wrong.
    """
    raw = to_raw(case)
    path = _in_plan(raw, plan, "steady")
    years = given({"from_year": from_year, "to_year": to_year})
    rate = plain(migrants_per_generation)
    steady = {"donor": donor, "migrants_per_generation": rate, **years}
    held = raw["plans"][path[1]].get("steady") or []
    places = [at for at, one in enumerate(held) if one["donor"] == donor]
    words = f"{_shown(migrants_per_generation)} newcomers that breed per generation from “{donor}”"
    sentence = f"Set a steady flow of {words} in plan “{plan}”"
    if places:
        return done(sentence, put(raw, (*path, places[0]), steady))
    return done(sentence, append(raw, path, steady))


def remove_steady(case: Case, plan: str, index: int) -> Edit:
    """Remove a steady flow from a plan.

    Raises
    ------
    KeyError
        When there is no such plan or steady flow.
    """
    raw = to_raw(case)
    sentence = f"Remove steady flow {index + 1} of plan “{plan}”"
    return done(sentence, removed(raw, _in_plan(raw, plan, "steady"), index))


def add_rule(case: Case, plan: str, rule: Rule | Mapping[str, Any]) -> Edit:
    """Add a rule, given as it stands in the file.

    Raises
    ------
    KeyError
        When there is no such plan.
    InvalidCase
        When the rule is wrong.
    """
    raw, new = to_raw(case), plain(rule)
    sentence = f"Add rule “{new.get('name', '')}” to plan “{plan}”"
    return done(sentence, append(raw, _in_plan(raw, plan, "rules"), new))


def remove_rule(case: Case, plan: str, index: int) -> Edit:
    """Remove a rule from a plan.

    Raises
    ------
    KeyError
        When there is no such plan or rule.
    """
    raw = to_raw(case)
    path = _in_plan(raw, plan, "rules")
    name = get(raw, (*path, index, "name"))
    return done(f"Remove rule “{name}” of plan “{plan}”", removed(raw, path, index))


def add_action(case: Case, plan: str, action: OtherAction | Mapping[str, Any]) -> Edit:
    """Add another action (habitat, predators, feeding), given as it stands in the file.

    Raises
    ------
    KeyError
        When there is no such plan.
    InvalidCase
        When the action is wrong.
    """
    raw, new = to_raw(case), plain(action)
    sentence = f"Add other action “{new.get('what', '')}” to plan “{plan}”"
    return done(sentence, append(raw, _in_plan(raw, plan, "other_actions"), new))


def remove_action(case: Case, plan: str, index: int) -> Edit:
    """Remove another action from a plan.

    Raises
    ------
    KeyError
        When there is no such plan or action.
    """
    raw = to_raw(case)
    path = _in_plan(raw, plan, "other_actions")
    what = get(raw, (*path, index, "what"))
    return done(f"Remove other action “{what}” of plan “{plan}”", removed(raw, path, index))
