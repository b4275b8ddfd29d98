"""The exact depth: the whole distribution of one tracked allele, step by step.

Flow and Ne of each step are the expected depth's, rules included. The order in a step is flow,
selection, mutation, drift: K' ~ Binomial(2Ne, p) of gene copies.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from rescue_planner.projection.chain_path import (
    COLUMNS,
    LARGEST_COPIES,
    ChainInputs,
    chain_rows,
    path_in_use,
)
from rescue_planner.projection.expected import Course
from rescue_planner.projection.setup import LocusSetup
from rescue_planner.theory import chain

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class LocusOdds:
    """Statistics of one locus under one plan; each (G + 1,)."""

    frequency: dict[str, FloatArray]
    kept: FloatArray
    fixed: FloatArray


def chain_inputs(course: Course, locus: LocusSetup) -> ChainInputs:
    """Return what the chain of `locus` depends on along `course`, for its first draw."""
    donors = locus.donor_frequency[0]
    shares = [step.shares[0] for step in course.steps]
    return ChainInputs(
        start=float(locus.frequency[0]),
        fitness=tuple(locus.fitness[0].tolist()),
        mutation_to=float(locus.mutation_to[0]),
        mutation_from=float(locus.mutation_from[0]),
        m=tuple(float(share.sum()) for share in shares),
        incoming=tuple(float(share @ donors) for share in shares),
        copies=tuple(chain.copies(float(step.ne[0])) for step in course.steps),
    )


def locus_odds(course: Course, locus: LocusSetup) -> LocusOdds | None:
    """Return the odds of one locus along `course`, or nothing where 2Ne is too large.

    Above 100,000 gene copies drift hardly matters and the distribution takes minutes.
    """
    inputs = chain_inputs(course, locus)
    if max(inputs.copies, default=0) > LARGEST_COPIES:
        return None
    return _odds(inputs, path_in_use())


@lru_cache(maxsize=512)
def _odds(inputs: ChainInputs, path: str) -> LocusOdds:
    """Return the odds; `path` keeps what the plain path gave apart from the compiled one."""
    rows = chain_rows(inputs)
    columns = {name: rows[:, i] for i, name in enumerate(COLUMNS)}
    kept, fixed = columns.pop("kept"), columns.pop("fixed")
    return LocusOdds(columns, kept, fixed)
