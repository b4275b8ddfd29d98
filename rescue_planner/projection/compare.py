"""One use case: project every plan of a case at the depths asked for."""

from __future__ import annotations

import hashlib
import threading
from collections import OrderedDict
from collections.abc import Callable, Iterator, Sequence

import numpy as np

from rescue_planner import __version__
from rescue_planner.case.document import Case
from rescue_planner.case.file import case_hash
from rescue_planner.case.measures import keys
from rescue_planner.projection import joined
from rescue_planner.projection.exact import locus_odds
from rescue_planner.projection.expected import Course
from rescue_planner.projection.results import Comparison, Depth, Series, read_only
from rescue_planner.projection.setup import setup

LIVE_DEPTHS: tuple[Depth, ...] = ("expected", "exact")


def comparison_key(
    case: Case, plans: Sequence[str], depths: Sequence[str], what_if: str | None = None
) -> str:
    """Return the hash of all that a comparison depends on, the program's version included."""
    parts = [__version__, case_hash(case), what_if or "", *plans, "/", *depths]
    return hashlib.sha256("\x1f".join(parts).encode()).hexdigest()


def compare(
    case: Case,
    *,
    plans: Sequence[str] | None = None,
    depths: Sequence[Depth] = LIVE_DEPTHS,
    what_if: str | None = None,
    checkpoint: Callable[[int, int], None] | None = None,
) -> Comparison:
    """Project the plans of `case`.

    Parameters
    ----------
    plans : names, optional
        Which plans, in the order of the case; all where left out.
    depths : depths, optional
        `expected`, `exact` or both.
    what_if : name, optional
        Only a label: `case` already holds the changed assumptions.
    checkpoint : callable, optional
        Called with (plans done, plans in all); may raise `Cancelled`.

    Returns
    -------
    Comparison
        Read-only series with units, version, seed and the hash of the inputs.

    Raises
    ------
    KeyError
        For a plan that the case does not have.
    """
    chosen = _chosen(case, plans)
    courses = plan_courses(case, chosen)
    series: list[Series] = []
    for done, course in enumerate(courses):
        if checkpoint is not None:
            checkpoint(done, len(chosen))
        series.extend(_series_of(course, depths, checkpoint, (done, len(chosen))))
    start, length = float(case.time.start_year.best), float(case.time.generation_years.best)
    count = courses[0].setup.steps
    order = [plan.name for plan in case.plans]
    present = {one.measure for one in series}
    return Comparison(
        key=comparison_key(case, chosen, depths, what_if),
        case_hash=case_hash(case),
        title=case.title,
        what_if=what_if,
        program_version=__version__,
        seed=int(case.run.seed.best),
        start_year=start,
        generation_years=length,
        currency=case.currency,
        years=read_only(start + length * np.arange(count + 1, dtype=np.float64)),
        plans=chosen,
        marks=tuple(order.index(name) for name in chosen),
        measures=tuple(key for key in keys(case) if key in present),
        depths=tuple(depth for depth in depths if any(s.depth == depth for s in series)),
        series=tuple(series),
        events=tuple(event for course in courses for event in course.book.events),
        not_applied=tuple(
            f"{entry.plan}: {entry.rule.name}"
            for course in courses
            for entry in course.book.not_applied
        ),
        capped=tuple(c.setup.plan for c in courses if any(at[0] for at in c.capped)),
    )


def plan_courses(case: Case, names: Sequence[str]) -> tuple[Course, ...]:
    """Return the average course of each plan named; an unchanged plan is not computed again.

    Raises
    ------
    KeyError
        For a plan that the case does not have.
    """
    alone = [_alone(case, name) for name in names]
    found = {one: kept for one in alone if (kept := _KEPT.get(one)) is not None}
    wanted = [one for one in alone if one not in found]
    walked = joined.courses([setup(one, one.plans[0]) for one in wanted])
    for one, course in zip(wanted, walked, strict=True):
        found[one] = course
        _KEPT.put(one, course)
    return tuple(found[one] for one in alone)


def _alone(case: Case, name: str) -> Case:
    """Return the case as far as one plan depends on it."""
    return case.model_copy(
        update={
            "plans": (case.plan(name),),
            "title": "",
            "decision": None,
            "what_ifs": (),
            "targets": (),
            "answers": (),
        }
    )


class _Kept:
    """The courses used last, for the desk's thread and its background job alike."""

    def __init__(self, most: int) -> None:
        self._most = most
        self._courses: OrderedDict[Case, Course] = OrderedDict()
        self._lock = threading.Lock()

    def get(self, alone: Case) -> Course | None:
        """Return a course, and count it as used."""
        with self._lock:
            course = self._courses.get(alone)
            if course is not None:
                self._courses.move_to_end(alone)
            return course

    def put(self, alone: Case, course: Course) -> None:
        """Keep a course, and let the one unused longest go."""
        with self._lock:
            self._courses[alone] = course
            while len(self._courses) > self._most:
                self._courses.popitem(last=False)


_KEPT = _Kept(64)


def _chosen(case: Case, plans: Sequence[str] | None) -> tuple[str, ...]:
    names = [plan.name for plan in case.plans]
    if plans is None:
        return tuple(names)
    for name in plans:
        if name not in names:
            raise KeyError(name)
    return tuple(name for name in names if name in plans)


def _series_of(
    course: Course,
    depths: Sequence[Depth],
    checkpoint: Callable[[int, int], None] | None,
    place: tuple[int, int],
) -> Iterator[Series]:
    plan = course.setup.plan
    if "expected" in depths:
        for measure, values in course.values.items():
            yield Series(plan, "expected", measure, "mean", read_only(values[0]))
    if "exact" not in depths:
        return
    for locus in course.setup.loci:
        if checkpoint is not None:
            checkpoint(*place)
        odds = locus_odds(course, locus)
        if odds is None:
            continue
        for statistic, values in odds.frequency.items():
            key = f"allele_frequency:{locus.name}"
            yield Series(plan, "exact", key, statistic, read_only(values))  # type: ignore[arg-type]
        yield Series(plan, "exact", f"allele_kept:{locus.name}", "share", read_only(odds.kept))
        yield Series(plan, "exact", f"allele_fixed:{locus.name}", "share", read_only(odds.fixed))
