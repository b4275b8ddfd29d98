"""Compile every kernel once, on small arrays: `python -m rescue_planner.kernels.warm [chain]`.

The desk starts this as a low-priority child, so that compiling never holds up the window.
"""

from __future__ import annotations

import os
import sys

import numpy as np
from numpy.typing import NDArray

from rescue_planner.kernels import exact_chain, herd, streams, year


def warm() -> None:
    """Call each kernel with the types it is used with."""
    warm_chain()
    warm_animals()


def warm_chain() -> None:
    """Compile the exact chain."""
    rows, mass = np.empty((2, 9)), np.zeros((2, 5))
    exact_chain.course(
        0.5,
        np.zeros(1),
        np.zeros(1),
        np.full(1, 4, dtype=np.int64),
        np.ones(3),
        np.zeros(2),
        np.array([0.05, 0.25, 0.5, 0.75, 0.95]),
        1e-14,
        np.zeros(1, dtype=np.uint8),
        rows,
        mass,
    )


def warm_animals() -> None:
    """Compile the engine of simulated animals: a run of no replicates at all."""
    year.run_chunk(
        _plan(),
        _herd(),
        np.uint64(0),
        0,
        0,
        np.zeros(1, dtype=np.uint8),
        np.zeros((1, 1, 1)),
        _whole(1, 1, 1),
        _whole(1),
        0,
    )


def _whole(*shape: int) -> NDArray[np.int64]:
    return np.zeros(shape, dtype=np.int64)


def _bits(*shape: int) -> NDArray[np.uint64]:
    return np.zeros(shape, dtype=np.uint64)


def _plan() -> herd.Plan:
    flat, table, cube = np.zeros(1), np.zeros((1, 1)), np.zeros((1, 1, 1))
    return herd.Plan(
        rates=table,
        yearly=table,
        quantiles=cube,
        die_offs=table,
        litters=table,
        releases=table,
        steady=table,
        rules=table,
        numbers=_whole(1, 1, 1),
        ages=cube,
        mixing=table,
        kinship=table,
        own=flat,
        ancestry=flat,
        fitness=table,
        frequency=table,
        mutation=table,
        place=_whole(1),
        valid=_bits(1),
        chromosomes=_whole(1, 2),
        ends=flat,
    )


def _herd() -> herd.Herd:
    flat = np.zeros(1)
    return herd.Herd(
        who=_whole(1, 1),
        traits=np.zeros((1, 1)),
        genome=_bits(1, 2, 1, 1),
        loci=_bits(1, 2),
        kin=np.zeros((1, 1), dtype=np.float32),
        order=_whole(1),
        free=_whole(1),
        number=_whole(1),
        weather=flat,
        young=_whole(1, 1),
        young_loci=_bits(1, 2),
        list_a=_whole(1),
        list_b=_whole(1),
        sums=flat,
        mask=_bits(1),
        counter=_bits(1),
        rare=_bits(2, 1),
        seen=_bits(2, 1),
        thresholds=_bits(1, 1, 1),
        marker=np.zeros((1, 1)),
        donors=_whole(1, 1, 1),
        acted=_whole(1, 1),
        due=_whole(1, 1),
        streams=_bits(streams.PURPOSES, 4),
        donor_streams=_bits(streams.PURPOSES, 4),
        donor_weather=flat,
        census=flat,
    )


def lower_priority() -> None:
    """Let everything else on the machine go first, where the system allows it."""
    if hasattr(os, "nice"):
        os.nice(10)


if __name__ == "__main__":
    lower_priority()
    warm_chain() if sys.argv[1:] == ["chain"] else warm()
