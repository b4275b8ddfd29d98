"""Animals: no plan takes more from a donor in a year than its managers allow."""

from __future__ import annotations

from collections.abc import Iterator

from rescue_planner.case.faults import Problem
from rescue_planner.case.tolerant import Raw, at, parts, value_at

_NEAR = 1e-9
_MOST_TIMES = 1000  # more is a problem of its own


def first_every_times(release: Raw) -> tuple[float, float, float] | None:
    """Return first year, years between and number of releases, where all can be read."""
    first = value_at(release, "when", "first_year")
    every = value_at(release, "when", "every_years", otherwise=1)
    times = value_at(release, "when", "times", otherwise=1)
    return None if first is None or every is None or times is None else (first, every, times)


def check_removals(raw: Raw) -> Iterator[Problem]:
    """Yield every plan that takes more animals from a donor in a year than allowed."""
    for _, donor in parts(raw, "donors"):
        most, name = value_at(donor, "most_removed_per_year"), donor.get("name")
        if most is None or not isinstance(name, str):
            continue
        for place, plan in parts(raw, "plans"):
            yield from _too_many(plan, name, most, f"plans[{place}].releases")
            for which, rule in parts(plan, "rules"):
                release = rule.get("release")
                taken = _animals(release) if at(release, "donor") == name else 0
                if taken > most + _NEAR:
                    where = f"plans[{place}].rules[{which}].release.who"
                    text = f"The rule takes {taken:g} animals from “{name}” at once, and at most "
                    yield Problem(where, f"{text}{most:g} may be removed a year: release fewer.")


def _too_many(plan: Raw, donor: str, most: float, where: str) -> Iterator[Problem]:
    taken: dict[float, list[float]] = {}
    for _, release in parts(plan, "releases"):
        years = first_every_times(release)
        if release.get("donor") != donor or years is None or not 1 <= years[2] <= _MOST_TIMES:
            continue
        animals = _animals(release)
        for k in range(int(years[2]) if animals > 0 else 0):
            taken.setdefault(years[0] + years[1] * k, []).append(animals)
    over = sorted(year for year, each in taken.items() if sum(each) > most + _NEAR)
    if not over:
        return
    summed = taken[over[0]]
    sums = " + ".join(f"{one:g}" for one in summed)
    total = f"{sums} = {sum(summed):g}" if len(summed) > 1 else sums
    later = f" (and in {len(over) - 1} later years)" if len(over) > 1 else ""
    yield Problem(
        where,
        f"The plan “{plan.get('name')}” takes {total} animals from “{donor}” in {over[0]:g}{later},"
        f" and at most {most:g} may be removed a year: release fewer, or spread them over years.",
    )


def _animals(release: object) -> float:
    counts = [value_at(release, "who", sex, otherwise=0) for sex in ("females", "males")]
    return sum(one for one in counts if one is not None)
