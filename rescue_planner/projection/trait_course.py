"""The trait from step to step: its mean, genic variance and the part held by association."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.projection.setup import TraitSetup
from rescue_planner.theory import trait as theory
from rescue_planner.theory.diversity import drifted

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class TraitState:
    """Mean z, genic variance G_A and association D, each (n,), phenotypic SD or SD squared."""

    mean: FloatArray
    genic: FloatArray
    association: FloatArray

    @property
    def additive(self) -> FloatArray:
        """V_A = G_A + D."""
        return self.genic + self.association


@dataclass(frozen=True, slots=True, eq=False)
class Mixing:
    """What the step's flow does to diversity: shares (n, D), and H of pool less its parts (n,)."""

    shares: FloatArray
    diversity_gain: FloatArray
    h_recipient_start: FloatArray


def trait_start(given: TraitSetup) -> TraitState:
    """Return the state at t = 0: mean 0, all variance genic."""
    zero = np.zeros_like(given.heritability)
    return TraitState(zero, given.heritability.copy(), zero)


def optimum(given: TraitSetup, year_offset: float, start_year: float) -> FloatArray:
    """Return the optimum so many years after the start, (n,)."""
    jump = np.inf if given.jump_year is None else given.jump_year - start_year
    return np.asarray(
        theory.optimum_at(
            year_offset, given.optimum_at_start, given.shift_per_year, jump, given.jump_by
        )
    )


def environmental(given: TraitSetup) -> FloatArray:
    """V_E = 1 − V_A at the start."""
    return 1.0 - given.heritability


def fitness(given: TraitSetup, state: TraitState, lag: FloatArray | float) -> FloatArray:
    """Return mean fitness at a lag, with the variance of `state`."""
    spread = state.additive + environmental(given)
    return np.asarray(theory.mean_fitness_at(lag, spread, given.width2))


def next_trait(
    given: TraitSetup, state: TraitState, mixing: Mixing, best: FloatArray, ne: FloatArray
) -> TraitState:
    """Return the state one step on: mixing, selection towards `best`, then drift at `ne`."""
    shares = mixing.shares
    between = theory.variance_between(state.mean, given.donor_mean, shares)
    per_diversity = given.heritability / mixing.h_recipient_start
    gain = theory.genic_from_mixing(between, given.loci, per_diversity, mixing.diversity_gain)
    mean = theory.mixed_trait(state.mean, given.donor_mean, shares)
    genic = theory.mixed_genic(state.genic, given.donor_variance, shares, gain)
    held = theory.mixed_association(state.association, between, gain, shares.sum(axis=-1))
    v_e = environmental(given)
    moved = mean + theory.response(best - mean, genic + held, v_e, given.width2)
    new = given.mutational_variance * v_e
    return TraitState(
        np.asarray(moved),
        np.asarray(theory.genic_after_drift(genic, ne, new)),
        np.asarray(drifted(held, ne)),
    )
