"""The exact depth: the whole distribution of one tracked allele, step by step.

Flow and Ne of each step are the expected depth's, rules included. The order in a step is flow,
selection, mutation, drift: K' ~ Binomial(2Ne, p) of gene copies.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from rescue_planner.projection.expected import Course
from rescue_planner.projection.setup import LocusSetup
from rescue_planner.theory import chain, selection

FloatArray = NDArray[np.float64]
QUANTILES = {"q05": 0.05, "q25": 0.25, "q50": 0.5, "q75": 0.75, "q95": 0.95}


@dataclass(frozen=True, slots=True, eq=False)
class LocusOdds:
    """Statistics of one locus under one plan; each (G + 1,)."""

    frequency: dict[str, FloatArray]
    kept: FloatArray
    fixed: FloatArray


@dataclass(frozen=True, slots=True)
class _Inputs:
    """What a chain depends on, hashable, so that an unchanged plan is not computed again."""

    start: float
    fitness: tuple[float, ...]
    mutation_to: float
    mutation_from: float
    incoming: tuple[float, ...]
    m: tuple[float, ...]
    copies: tuple[int, ...]


def locus_odds(
    course: Course, locus: LocusSetup, checkpoint: Callable[[int, int], None] | None = None
) -> LocusOdds:
    """Return the odds of one locus along `course`, for its first parameter draw."""
    shares = np.array([step.shares[0] for step in course.steps])
    incoming = shares @ locus.donor_frequency[0] if shares.size else np.zeros(len(course.steps))
    inputs = _Inputs(
        start=float(locus.frequency[0]),
        fitness=tuple(locus.fitness[0].tolist()),
        mutation_to=float(locus.mutation_to[0]),
        mutation_from=float(locus.mutation_from[0]),
        incoming=tuple(np.asarray(incoming).tolist()),
        m=tuple(shares.sum(axis=-1).tolist() if shares.size else [0.0] * len(course.steps)),
        copies=tuple(chain.copies(float(step.ne[0])) for step in course.steps),
    )
    if checkpoint is not None:
        checkpoint(0, 1)
    return _odds(inputs)


@lru_cache(maxsize=512)
def _odds(inputs: _Inputs) -> LocusOdds:
    frequency = {name: [inputs.start] for name in ("mean", "sd", *QUANTILES)}
    frequency["sd"] = [0.0]
    kept, fixed = [float(inputs.start > 0.0)], [float(inputs.start == 1.0)]
    mass: FloatArray | None = None
    for t in range(len(inputs.copies)):
        mass = _step(inputs, t, mass)
        frequency["mean"].append(float(chain.mean(mass)))
        frequency["sd"].append(float(chain.sd(mass)))
        for name, q in QUANTILES.items():
            frequency[name].append(float(chain.quantile(mass, q)))
        kept.append(float(chain.share_kept(mass)))
        fixed.append(float(chain.share_fixed(mass)))
    return LocusOdds(
        {name: np.array(values) for name, values in frequency.items()},
        np.array(kept),
        np.array(fixed),
    )


def _step(inputs: _Inputs, t: int, mass: FloatArray | None) -> FloatArray:
    if mass is None:
        # the state given need not be a whole number of copies
        now, weight = np.array([inputs.start]), np.ones(1)
    else:
        now, weight = chain.frequencies(mass.size - 1), mass
    mixed = np.clip((1.0 - inputs.m[t]) * now + inputs.incoming[t], 0.0, 1.0)  # rounding only
    selected = selection.after_selection(mixed, np.array(inputs.fitness))
    following = selection.after_mutation(selected, inputs.mutation_to, inputs.mutation_from)
    return np.asarray(chain.step(weight, following, inputs.copies[t]))
