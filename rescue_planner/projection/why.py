"""Why a plan's course is what it is: each step split into what it kept, brought and lost.

Nothing is projected anew: the parts are read from the average course itself, and add up to what it
holds after the step.

Gene diversity is the chance that two gene copies differ. In a step with the share m of copies from
newcomers, H' = kept + brought - lost: kept (1-m)^2 H from pairs of residents' copies, brought
sum_d m_d [2 (1-m) H_rd + sum_e m_e H_de] from pairs with at least one newcomer's copy, lost
H_pool / (2 Ne) by drift.

A tracked allele's frequency changes by flow, p* - p; selection, p_sel - p*; mutation, p' - p_sel.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.document import Case
from rescue_planner.projection.compare import plan_courses
from rescue_planner.projection.expected import Course
from rescue_planner.projection.results import Comparison
from rescue_planner.projection.setup import LocusSetup
from rescue_planner.theory import flow, selection

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class DiversityStep:
    """Gene diversity in the step from t to t + 1, all probabilities.

    `before` and `after` are the projection's own; `kept` + `brought` - `lost` is `after`.
    `brought_by` has a share of `brought` for each donor. `newcomers` is m, the share of gene
    copies from donors, and `effective_size` that of the step.
    """

    t: int
    before: float
    kept: float
    brought: float
    lost: float
    after: float
    brought_by: tuple[float, ...]
    newcomers: float
    effective_size: float


@dataclass(frozen=True, slots=True)
class AlleleStep:
    """The tracked allele's frequency in the step from t to t + 1, shares of gene copies.

    `before` + `flow` + `selection` + `mutation` is `after`, all of the average course. `spread`
    is the standard deviation that drift has brought about by t + 1, from the exact depth; nothing
    where that was not computed.
    """

    t: int
    before: float
    flow: float
    selection: float
    mutation: float
    after: float
    spread: float | None


@dataclass(frozen=True, slots=True)
class Why:
    """One plan's course, step by step; `loci` has the tracked loci by name."""

    plan: str
    donors: tuple[str, ...]
    diversity: tuple[DiversityStep, ...]
    loci: dict[str, tuple[AlleleStep, ...]]


def why(case: Case, plan: str, comparison: Comparison | None = None) -> Why:
    """Return the parts of every step of `plan` at its best values.

    Parameters
    ----------
    comparison : Comparison, optional
        Of the same case; gives drift's spread where it has the exact depth.

    Raises
    ------
    KeyError
        For a plan that the case does not have.
    """
    (course,) = plan_courses(case, [plan])
    loci = {}
    for locus in course.setup.loci:
        series = None
        if comparison is not None:
            series = comparison.get(plan, "exact", f"allele_frequency:{locus.name}", "sd")
        loci[locus.name] = allele_steps(course, locus, None if series is None else series.values)
    return Why(plan, course.setup.donors, diversity_steps(course), loci)


def diversity_steps(course: Course) -> tuple[DiversityStep, ...]:
    """Return how each step of the first draw of `course` changed gene diversity."""
    h = course.values["gene_diversity"][0]
    found = []
    for t, step in enumerate(course.steps):
        shares = step.shares[0]
        resident = 1.0 - float(shares.sum())
        kept = resident**2 * float(h[t])
        by = shares * (2.0 * resident * course.between[t][0] + course.donors[t][0] @ shares)
        brought = float(by.sum())
        found.append(
            DiversityStep(
                t=t,
                before=float(h[t]),
                kept=kept,
                brought=brought,
                lost=(kept + brought) / (2.0 * float(step.ne[0])),
                after=float(h[t + 1]),
                brought_by=tuple(by.tolist()),
                newcomers=float(shares.sum()),
                effective_size=float(step.ne[0]),
            )
        )
    return tuple(found)


def allele_steps(
    course: Course, locus: LocusSetup, spread: FloatArray | None = None
) -> tuple[AlleleStep, ...]:
    """Return how each step of the first draw of `course` changed the frequency at `locus`.

    Parameters
    ----------
    spread : (G + 1,) array, optional
        Standard deviation of the frequency at each t, from the exact depth.
    """
    p = course.values[f"allele_frequency:{locus.name}"][0]
    to, off = locus.mutation_to[0], locus.mutation_from[0]
    found = []
    for t, step in enumerate(course.steps):
        mixed = float(flow.mixed(p[t], locus.donor_frequency[0], step.shares[0]))
        selected = float(selection.after_selection(mixed, locus.fitness[0]))
        mutated = float(selection.after_mutation(selected, to, off))
        found.append(
            AlleleStep(
                t=t,
                before=float(p[t]),
                flow=mixed - float(p[t]),
                selection=selected - mixed,
                mutation=mutated - selected,
                after=float(p[t + 1]),
                spread=None if spread is None else float(spread[t + 1]),
            )
        )
    return tuple(found)
