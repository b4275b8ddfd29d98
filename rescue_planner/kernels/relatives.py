"""Kinship by slots: a newborn takes a free slot, and only its row and column are written.

`kin` is a (slots, slots) array of float32, symmetric. Off the diagonal it holds the kinship of two
animals, on the diagonal an animal's kinship to itself, (1 + F)/2. The first slots belong to no
animal: slot p stands for a fresh draw from population p, so that an animal let go later starts
with the right kinship to everybody, whatever the residents' ancestry is by then.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rescue_planner.kernels.inner import leaf

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]
Kinship = NDArray[np.float32]

_HALF = np.float32(0.5)


@leaf
def seed_populations(kin: Kinship, founders: FloatArray) -> None:
    """Write the kinship among the slots that stand for populations: `founders` (P, P)."""
    for i in range(founders.shape[0]):
        for j in range(founders.shape[0]):
            kin[i, j] = np.float32(founders[i, j])


@leaf
def add_founder(kin: Kinship, population: int, slot: int, top: int, f: float) -> None:
    """Write the row of an animal drawn from a population; slots below `top` are in use.

    `f` is its own inbreeding coefficient.
    """
    for j in range(top):
        value = kin[population, j]
        kin[slot, j] = value
        kin[j, slot] = value
    kin[slot, slot] = np.float32(0.5 * (1.0 + f))


@leaf
def add_young(kin: Kinship, dam: int, sire: int, slot: int, top: int) -> None:
    """Write the row of a young of two animals: half the sum of its parents' rows.

    Rows of slots that are free hold remains; nobody reads them.
    """
    f = kin[dam, sire]
    for j in range(top):
        kin[slot, j] = _HALF * (kin[dam, j] + kin[sire, j])
    for j in range(top):
        kin[j, slot] = kin[slot, j]
    kin[slot, slot] = _HALF * (np.float32(1.0) + f)


@leaf
def mean_kinship(kin: Kinship, who: IntArray, count: int) -> float:
    """Return the mean over pairs of different animals; NaN for fewer than two."""
    if count < 2:
        return np.nan
    total = 0.0
    for i in range(1, count):
        row, part = who[i], 0.0
        for j in range(i):
            part += kin[row, who[j]]
        total += part
    return total / (0.5 * count * (count - 1.0))


@leaf
def mean_inbreeding(kin: Kinship, who: IntArray, count: int) -> float:
    """Return the mean inbreeding coefficient of animals, at least one."""
    total = 0.0
    for i in range(count):
        total += 2.0 * kin[who[i], who[i]] - 1.0
    return total / count


def bytes_needed(slots: int) -> int:
    """Return the bytes of the kinship of so many slots."""
    return 4 * slots * slots
