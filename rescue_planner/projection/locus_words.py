"""A tracked locus in words: where selection rests, where it acts fastest, what flow it bears.

Frequencies are counted as the projection counts them, after selection; drift and mutation are left
out of every number here, and the last sentence says so. No Qt here.
"""

from __future__ import annotations

import itertools
from collections.abc import Sequence

import numpy as np

from rescue_planner.case.document import Case
from rescue_planner.case.filled import donor_frequency
from rescue_planner.case.genetics import Locus
from rescue_planner.projection.expected import Course
from rescue_planner.projection.marks import mark
from rescue_planner.projection.reading import FloatArray, number, year_text
from rescue_planner.theory import equilibria, swamping
from rescue_planner.theory.selection import after_selection, mean_fitness

LEFT_OUT = (
    "Selection and gene flow alone, frequencies counted after selection: drift can lose an allele "
    "below these limits too, and mutation is not counted."
)
_SAME = 1e-9


def fitness_of(locus: Locus) -> FloatArray:
    """Return w_AA, w_Aa, w_aa, (3,)."""
    return np.array([float(w.best) for w in locus.fitness])


def frequency_text(p: float) -> str:
    """Return a frequency for people: two decimals, more near the ends; 0 and 1 only if exact."""
    if p in (0.0, 1.0):
        return f"{p:.0f}"
    return number(p, 2) if 0.01 <= p <= 0.99 else number(p, 4) if 1e-4 < p < 1 - 1e-4 else f"{p:g}"


def percent(share: float) -> str:
    """Return a share of gene copies in per cent."""
    return f"{number(100 * share, 1 if share >= 0.01 or share == 0 else 2)} %"


def flow_text(m: float) -> str:
    """Return a gene flow, `m = 6.0 %`."""
    return f"m = {percent(m)}"


# selection alone


def resting_words(locus: Locus) -> str:
    """Return the equilibria of selection alone and which of them are stable."""
    w, now = fitness_of(locus), float(locus.frequency.best)
    if np.ptp(w) == 0.0:
        return "Equilibria: every frequency stays, for the three genotypes are equally fit."
    rest = equilibria.resting_points(w)
    ends = [
        _end("0 (lost)", 0.0, bool(rest.lost_stable), w),
        _end("1 (fixed)", 1.0, bool(rest.fixed_stable), w),
    ]
    if not np.isnan(rest.interior):
        inside = "stable" if rest.interior_stable else "not stable: the edge between two fates"
        ends.insert(1, f"{frequency_text(float(rest.interior))} ({inside})")
    goes = float(equilibria.settles_at(now, w))
    then = (
        f"At {frequency_text(now)} it stays."
        if goes == now
        else f"From {frequency_text(now)} now it moves to {frequency_text(goes)}."
    )
    return f"Equilibria of selection alone: {', '.join(ends)}. {then}"


def _end(name: str, p: float, stable: bool, w: FloatArray) -> str:
    if float(mean_fitness(p, w)) == 0.0:
        return f"{name}: nobody lives"
    return f"{name}: {'stable' if stable else 'not stable'}"


def fastest_words(locus: Locus) -> str:
    """Return where selection acts fastest, and how fast there and now; empty where it is still."""
    w, now = fitness_of(locus), float(locus.frequency.best)
    if np.ptp(w) == 0.0:
        return ""
    at = float(equilibria.fastest_at(w))
    today = "" if float(mean_fitness(now, w)) == 0.0 else f"at {frequency_text(now)} now by "
    if today:
        today += _step(float(equilibria.change(now, w)))
    if np.isnan(at):
        return f"Selection acts fastest at one of the ends; {today}." if today else ""
    most = _step(float(equilibria.change(at, w)))
    rest = f"; {today}" if today else ""
    return f"Selection acts fastest at {frequency_text(at)}: by {most} a generation{rest}."


def _step(change: float) -> str:
    sign = "+" if change > 0 else ""
    return f"{sign}{number(change, 3 if abs(change) >= 0.0005 or change == 0 else 5)}"


# selection and flow


def critical_words(case: Case, locus: Locus) -> str:
    """Return the flow above which the named allele is lost, the bistable case named."""
    limit = swamping.critical_flow(fitness_of(locus))
    m, invasion = float(limit.m), float(limit.invasion)
    carry = [d.name for d in case.donors if donor_frequency(locus, d.name) > 0]
    if m == 0.0:
        return (
            "Critical flow: none. Selection favours the named allele at no frequency, so any "
            "steady flow from a donor without it loses it."
        )
    words = (
        f"Critical flow: {flow_text(m)} of gene copies a generation (Ne·m = "
        f"{number(m * float(case.recipient.effective_size.best), 2)}). Steady flow above it, from "
        "a donor without the allele, loses it whatever its frequency"
    )
    if invasion < m - _SAME:
        words += (
            f". Bistable from {percent(invasion)} to {percent(m)}: there the allele is kept only "
            "while it is above an edge, and a pulse that pushes it under the edge loses it"
        )
    if carry:
        words += f"; {_and(carry)} carr{'ies' if len(carry) == 1 else 'y'} it, so flow from "
        words += f"{'there' if len(carry) == 1 else 'them'} never loses it"
    return f"{words}."


def _and(names: Sequence[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"


def balance_words(locus: Locus, m: float, donor_p: float) -> str:
    """Return where steady flow and selection balance, counted after selection.

    Parameters
    ----------
    m : float
        Share of gene copies from donors per generation, above 0.
    donor_p : float
        The named allele's frequency among them.
    """
    w = fitness_of(locus)
    found = swamping.flow_equilibria(w, m, donor_p)
    rests = [
        (float(after_selection(p, w)), float(slope) < 1.0)
        for p, slope in zip(found.p, found.slope, strict=True)
        if not np.isnan(p) and float(mean_fitness(p, w)) > 0.0
    ]
    stable = [frequency_text(_whole(p)) for p, held in rests if held]
    edges = [frequency_text(p) for p, held in rests if not held and 0.0 < p < 1.0]
    if edges and len(stable) > 1:
        return f"bistable: to {stable[-1]} from above {edges[0]}, else to {stable[0]}"
    return f"balance at {_and(stable)}" if stable else "no stable balance"


def _whole(p: float) -> float:
    """Take rounding off the ends."""
    return 0.0 if p < _SAME else 1.0 if p > 1.0 - _SAME else p


def plan_words(case: Case, locus: Locus, courses: Sequence[Course]) -> tuple[str, ...]:
    """Return, for each plan, its own flow m and what that means at this locus.

    Parameters
    ----------
    courses : courses
        Of the plans to speak of, as `compare.plan_courses` returns them (one draw each).
    """
    order = [plan.name for plan in case.plans]
    return tuple(
        f"{mark(order.index(course.setup.plan)).letter} {course.setup.plan}: "
        f"{_plan(locus, course, [donor.name for donor in case.donors])}."
        for course in courses
    )


def _plan(locus: Locus, course: Course, donors: Sequence[str]) -> str:
    shares = np.array([step.shares[0] for step in course.steps]).reshape(len(course.steps), -1)
    m = shares.sum(axis=1)
    at = np.flatnonzero(m > 0.0)
    if not at.size:
        return "no gene flow"
    own = np.array([donor_frequency(locus, name) for name in donors])
    donor_p = float((shares @ own).sum() / m.sum())
    size = f"{flow_text(float(m[at].min()))}"
    if float(np.ptp(m[at])) > 5e-4:
        size += f" to {percent(float(m[at].max()))}"
    if at[-1] < m.size - 1:
        return f"{size} in {at.size} of {m.size} generations, {_afterwards(locus, course, at[-1])}"
    often = "every generation" if at.size == m.size else f"{at.size} of {m.size} generations"
    steady = float(m.mean())
    mean = "" if at.size == m.size and " to " not in size else f" (mean {percent(steady)})"
    return f"{size} in {often}{mean}, {_against(locus, steady, donor_p)}"


def _against(locus: Locus, m: float, donor_p: float) -> str:
    """Return a steady flow against the critical one, and the balance it leads to."""
    balance = balance_words(locus, m, donor_p)
    limit = swamping.critical_flow(fitness_of(locus))
    if donor_p > 0.0 or float(limit.m) == 0.0:
        return balance
    side = "above" if m > float(limit.m) else "below"
    fate = "lost in the long run" if m > float(limit.m) else balance
    return f"{side} the critical {percent(float(limit.m))}: {fate}"


def _afterwards(locus: Locus, course: Course, last: np.intp) -> str:
    """Return what selection alone makes of the frequency that the last flow leaves behind."""
    left = float(course.values[f"allele_frequency:{locus.name}"][0, int(last) + 1])
    end = float(equilibria.settles_at(left, fitness_of(locus)))
    given = course.setup
    year = year_text(given.start_year + (int(last) + 1) * given.generation_years)
    stays = "stays there" if end == left else f"moves towards {frequency_text(end)}"
    return f"none from {year}: it leaves {frequency_text(left)}, and from there selection {stays}"


def locus_sentences(case: Case, index: int) -> tuple[str, ...]:
    """Return what is said of the locus `case.loci[index]` itself, sentence by sentence."""
    locus = case.loci[index]
    said = (resting_words(locus), fastest_words(locus), critical_words(case, locus))
    return tuple(itertools.filterfalse(lambda words: not words, said))
