"""Years: nothing before the start or after the horizon."""

from __future__ import annotations

from collections.abc import Iterator

from rescue_planner.case.checks.animals import first_every_times
from rescue_planner.case.faults import Problem
from rescue_planner.case.tolerant import Raw, parts, value_at

MOST_STEPS = 20_000  # more generations than this would only fill the computer's memory
_NEAR = 1e-9


class _Span:
    """The years from the start to the horizon, as far as the case says them."""

    def __init__(self, raw: Raw) -> None:
        self.start = value_at(raw, "time", "start_year")
        horizon = value_at(raw, "time", "horizon_years")
        both = self.start is not None and horizon is not None
        self.end = self.start + horizon if both else None  # type: ignore[operator]

    def complaint(self, what: str, year: float | None, *, only_start: bool = False) -> str | None:
        """Return what is wrong with something in `year`, or nothing."""
        if year is None:
            return None
        if self.start is not None and year < self.start:
            return f"{what} is in {year:g}, before the start year {self.start:g}: move it."
        if not only_start and self.end is not None and year > self.end + _NEAR:
            end = f"{what} is in {year:g}, after the horizon ({self.end:g}): move it, or look "
            return end + "further ahead."
        return None

    def problem(self, path: str, what: str, year: float | None) -> Iterator[Problem]:
        """Yield the problem of something in a year outside."""
        text = self.complaint(what, year)
        if text:
            yield Problem(path, text)


def check_years(raw: Raw) -> Iterator[Problem]:
    """Yield every event before the start or after the horizon."""
    span = _Span(raw)
    for place, plan in parts(raw, "plans"):
        here = f"plans[{place}]"
        for which, release in parts(plan, "releases"):
            yield from _release(span, release, f"{here}.releases[{which}].when")
        for which, steady in parts(plan, "steady"):
            yield from _interval(span, steady, f"{here}.steady[{which}]")
        for which, action in parts(plan, "other_actions"):
            where = f"{here}.other_actions[{which}]"
            first, last = value_at(action, "year"), value_at(action, "until_year")
            yield from span.problem(f"{where}.year", "The action", first)
            yield from _reversed(first, last, f"{where}.until_year")
    for which, target in parts(raw, "targets"):
        text = span.complaint("The target", value_at(target, "by_year"), only_start=True)
        if text:
            yield Problem(f"targets[{which}].by_year", text)


def _release(span: _Span, release: Raw, where: str) -> Iterator[Problem]:
    years = first_every_times(release)
    if years is None:
        return
    first, every, times = years
    outside = span.complaint("The release", first)
    last = first + every * (times - 1)
    if outside:
        yield Problem(f"{where}.first_year", outside)
    elif times > 1 and span.complaint("", last):
        text = span.complaint("The last of these releases", last)
        yield Problem(f"{where}.times", str(text).replace("move it", "release less often"))


def _interval(span: _Span, steady: Raw, where: str) -> Iterator[Problem]:
    first, last = value_at(steady, "from_year"), value_at(steady, "to_year")
    yield from span.problem(f"{where}.from_year", "The first year of the steady flow", first)
    text = span.complaint("The last year of the steady flow", last, only_start=True)
    if text:
        yield Problem(f"{where}.to_year", text)
    yield from _reversed(first, last, f"{where}.to_year")


def _reversed(first: float | None, last: float | None, path: str) -> Iterator[Problem]:
    if first is not None and last is not None and last < first:
        yield Problem(path, f"It ends in {last:g}, before it begins in {first:g}: swap them.")


def check_steps(raw: Raw) -> Iterator[Problem]:
    """Yield the problem of a horizon of too many generations to compute."""
    horizon = value_at(raw, "time", "horizon_years")
    generation = value_at(raw, "time", "generation_years")
    if horizon is None or generation is None or generation <= 0:
        return
    if horizon / generation > MOST_STEPS:
        text = f"The horizon of {horizon:g} years is more than {MOST_STEPS} generations of "
        yield Problem("time.generation_years", text + f"{generation:g} years: correct one of them.")
