"""Founders: ages, kinship among populations, and marker frequencies behind a set of diversities.

Markers have two alleles. In population i a marker's frequency is Phi(X_i), X normal with mean 0
and covariance S. Then E[p_i] = 1/2 and, by Sheppard's formula for the orthant of two normal
numbers, E[p_i p_j] = 1/4 + asin(S_ij / sqrt((1 + S_ii)(1 + S_jj))) / (2 pi). The chance that a
copy of i and one of j differ is 1 - 2 E[p_i p_j] = c H_ij where that arcsine is
pi/2 - pi c H_ij, which gives S in closed form for any H.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from rescue_planner.simulate.world import Life
from rescue_planner.theory import life_table
from rescue_planner.theory.inbreeding import survival_factor

FloatArray = NDArray[np.float64]

MOST_DIVERSITY = 0.45
"""Markers of two alleles hold at most 1/2; c is chosen to stay below it."""
_SPREAD_LIMIT = 1.0 - 1e-12
_TINY = 1e-9


class Nearest(NamedTuple):
    """A symmetric matrix, and how far the nearest possible one had to move from the given one."""

    matrix: FloatArray
    moved: float


class MarkerModel(NamedTuple):
    """How marker frequencies are drawn: (P, P) mixing, the scale c, and what could not be met."""

    mixing: FloatArray
    scale: float
    moved: float


def nearest_semidefinite(matrix: FloatArray) -> Nearest:
    """Return the nearest positive semidefinite matrix (Frobenius), (P, P): eigenvalues above 0."""
    values, vectors = np.linalg.eigh(matrix)
    if values.min() >= -_TINY:
        return Nearest(matrix, 0.0)
    near = (vectors * np.maximum(values, 0.0)) @ vectors.T
    return Nearest(near, float(np.max(np.abs(near - matrix))))


def marker_model(diversity: FloatArray) -> MarkerModel:
    """Return how to draw marker frequencies that hold c times the diversities in expectation.

    Parameters
    ----------
    diversity : (P, P) array
        H within and between, 0 to 1; may lie above one half.

    Returns
    -------
    MarkerModel
        c is 1, or less where the largest H is above 0.45; `moved` is the largest error in c H
        where no frequencies can hold the set.
    """
    most = float(np.max(diversity))
    scale = 1.0 if most <= MOST_DIVERSITY else MOST_DIVERSITY / most
    arc = np.sin(np.pi * (0.5 - scale * diversity))
    own = np.minimum(np.diagonal(arc), _SPREAD_LIMIT)
    spread = own / (1.0 - own)
    root = np.sqrt(1.0 + spread)
    wanted = arc * np.outer(root, root)
    np.fill_diagonal(wanted, spread)
    values, vectors = np.linalg.eigh(wanted / np.outer(root, root))
    mixing = root[:, None] * vectors * np.sqrt(np.maximum(values, 0.0))
    held = mixing @ mixing.T
    outer = np.sqrt(np.outer(1.0 + np.diagonal(held), 1.0 + np.diagonal(held)))
    got = 0.5 - np.arcsin(np.clip(held / outer, -1.0, 1.0)) / np.pi
    moved = float(np.max(np.abs(got - scale * diversity)))
    return MarkerModel(mixing, scale, moved if moved > 1e-6 else 0.0)


def founder_kinship(
    diversity: FloatArray, reference: float, among_released: tuple[float | None, ...]
) -> tuple[Nearest, FloatArray]:
    """Return kinship of animals drawn from populations (P, P), and their own F (P,).

    1 - H_ij / H_ref, with a donor's given kinship among released animals in place of its own.
    """
    kinship = 1.0 - diversity / reference
    own = np.diagonal(kinship).copy()
    for d, given in enumerate(among_released):
        if given is not None:
            kinship[d + 1, d + 1] = given
    return nearest_semidefinite(kinship), own


def yearly_growth(life: Life, births_times: float = 1.0) -> float:
    """Return the yearly growth of a life cycle without crowding or bad years.

    `births_times` is what inbreeding at the start leaves of births and first-year survival.
    """
    matrix = life_table.female_matrix(
        life.share_of_females_breeding * young_mean(life) * life.females_among_young * births_times,
        *life.survival,
        first_breeding_age=life.first_breeding_age[0],
        last_age=life.last_age,
    )
    return float(life_table.dominant_eigenvalue(matrix))


def young_mean(life: Life) -> float:
    """Return the mean number of young of a breeding female."""
    if life.young_counts:
        return float(np.dot(life.young_counts, np.arange(len(life.young_counts))))
    return life.mean_young


def start_times(life: Life, f: float, lethal_first_year: float, lethal_young: float) -> float:
    """Return what inbreeding at the start leaves of births and first-year survival together.

    1 where survival was measured here and now, since the given rates hold that cost already.
    """
    if life.here_now:
        return 1.0
    return float(survival_factor(max(0.0, f), lethal_first_year + lethal_young))


def stable_ages(life: Life, births_times: float = 1.0) -> FloatArray:
    """Return weights of ages 1..last_age by sex, (2, last_age), in a population that grows evenly.

    Both sexes grow at the females' rate (stand still where none are born); survival below and
    above the first breeding age is that of each sex.
    """
    growth = yearly_growth(life, births_times)
    if growth <= 0.0:
        growth = 1.0
    out = np.ones((2, life.last_age))
    for sex, first in enumerate(life.first_breeding_age):
        for age in range(2, life.last_age + 1):
            rate = life.survival[1] if age - 1 < first else life.survival[2]
            out[sex, age - 1] = out[sex, age - 2] * rate / growth
    return out


def subadults(life: Life, adults: int, sex: int, ages: FloatArray) -> int:
    """Return a sex's subadults: its adults times the stable ratio, rounded half up."""
    first = life.first_breeding_age[sex]
    above = float(np.sum(ages[sex, first - 1 :]))
    if above <= 0.0:
        return 0
    return int(np.floor(adults * float(np.sum(ages[sex, : first - 1])) / above + 0.5))
