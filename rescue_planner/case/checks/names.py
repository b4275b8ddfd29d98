"""Names: given, different, and known where they are used; `No releases` is there."""

from __future__ import annotations

import difflib
from collections.abc import Iterator

from rescue_planner.case.faults import Problem
from rescue_planner.case.paths import Path, format_path
from rescue_planner.case.plans import MOST_PLANS, NO_RELEASES
from rescue_planner.case.tolerant import Raw, at, mapping, names, parts

_KINDS = {"plans": "plan", "donors": "donor", "loci": "tracked locus", "what_ifs": "what-if"}


def check_names(raw: Raw) -> Iterator[Problem]:
    """Yield empty and duplicate names of plans, donors, loci, what-ifs, rules and die-offs."""
    if isinstance(at(raw, "recipient", "name"), str):
        yield from _empty(raw["recipient"], ("recipient",), "recipient")
    for key, kind in _KINDS.items():
        yield from _distinct(raw, (key,), kind)
    for place, plan in parts(raw, "plans"):
        yield from _distinct(plan, ("plans", place, "rules"), "rule of this plan")
        for which, action in parts(plan, "other_actions"):
            what = action.get("what")
            if isinstance(what, str) and not what.strip():
                where = format_path(("plans", place, "other_actions", which, "what"))
                yield Problem(where, "The other action does not say what is done: write it.")
    for which, die_off in parts(raw.get("life_cycle"), "die_offs"):
        yield from _empty(die_off, ("life_cycle", "die_offs", which), "die-off")


def _empty(one: Raw, path: Path, kind: str) -> Iterator[Problem]:
    name = one.get("name")
    if isinstance(name, str) and not name.strip():
        yield Problem(format_path((*path, "name")), f"The name of the {kind} is empty: give one.")


def _distinct(holder: Raw, path: Path, kind: str) -> Iterator[Problem]:
    first: dict[str, int] = {}
    for place, one in parts(holder, str(path[-1])):
        yield from _empty(one, (*path, place), kind)
        name = one.get("name")
        if not isinstance(name, str) or not name.strip():
            continue
        plain = name.strip().casefold()
        if plain in first:
            text = (
                f"Another {kind} is called “{name.strip()}” (number {first[plain] + 1} in the "
                "list; capitals and blanks around a name don’t count): give each its own name."
            )
            yield Problem(format_path((*path, place, "name")), text)
        first.setdefault(plain, place)


def too_many_plans(raw: Raw) -> Problem | None:
    """Return the one problem of a case with more plans than can be compared."""
    plans = raw.get("plans")
    if not isinstance(plans, list) or len(plans) <= MOST_PLANS:
        return None
    text = f"There are {len(plans)} plans, and at most {MOST_PLANS} can be compared: "
    return Problem("plans", text + f"remove {len(plans) - MOST_PLANS}.")


def check_no_releases(raw: Raw) -> Iterator[Problem]:
    """Yield the problem of a `No releases` that is missing or holds more than its name."""
    if not isinstance(raw.get("plans"), list):
        return
    found = [
        (place, plan) for place, plan in parts(raw, "plans") if plan.get("name") == NO_RELEASES
    ]
    if not found:
        text = f'The plan "{NO_RELEASES}" is missing: add {{"name": "{NO_RELEASES}"}}, spelt so.'
        yield Problem("plans", text)
    for place, plan in found[:1]:
        more = [key for key, held in plan.items() if key != "name" and held not in (None, [], {})]
        if more:
            text = f'"{NO_RELEASES}" must hold nothing but its name: remove {", ".join(more)}.'
            yield Problem(f"plans[{place}].{more[0]}", text)


def check_references(raw: Raw) -> Iterator[Problem]:
    """Yield every donor that is used but not described, and frequencies not said."""
    if not isinstance(raw.get("donors", []), list | None):
        return  # no list of donors can be read: that is the one problem to tell
    donors = names(raw, "donors")
    known = set(donors)
    for path, name in _donors_used(raw):
        if name not in known:
            yield Problem(format_path(path), _unknown(name, donors))
    for place, locus in parts(raw, "loci"):
        said = mapping(locus, "donor_frequency")
        for name in dict.fromkeys(donors):
            if said.get(name) is None:
                where = format_path(("loci", place, "donor_frequency", name))
                text = f"The frequency of this allele in the donor “{name}” is not said: write it, "
                yield Problem(where, text + "0 if the donor lacks the allele.")
    for place, donor in parts(raw, "donors"):
        own = donor.get("name")
        if isinstance(own, str) and own in mapping(donor, "fst_to_donors"):
            where = format_path(("donors", place, "fst_to_donors", own))
            yield Problem(where, "This is the FST of a donor to itself: remove it.")


def _donors_used(raw: Raw) -> Iterator[tuple[Path, str]]:
    for place, plan in parts(raw, "plans"):
        here: Path = ("plans", place)
        for kind in ("steady", "releases"):
            for which, one in parts(plan, kind):
                yield from _named(one, (*here, kind, which))
        for which, rule in parts(plan, "rules"):
            yield from _named(rule.get("release"), (*here, "rules", which, "release"))
    for name in mapping(raw, "recipient", "donor_ancestry_at_start"):
        yield ("recipient", "donor_ancestry_at_start", name), name
    for kind, field in (("donors", "fst_to_donors"), ("loci", "donor_frequency")):
        for place, one in parts(raw, kind):
            for name in mapping(one, field):
                yield (kind, place, field, name), name


def _named(one: object, path: Path) -> Iterator[tuple[Path, str]]:
    name = at(one, "donor")
    if isinstance(name, str):
        yield (*path, "donor"), name


def _unknown(name: str, donors: list[str]) -> str:
    near = difflib.get_close_matches(name.strip()[:200], donors, n=1)
    ask = f"did you mean “{near[0]}”?" if near else "describe it under donors or choose another."
    return f"There is no donor called “{name[:60]}”: {ask}"
