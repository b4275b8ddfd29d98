"""Replicates, year by year, in the order that the design of the engine binds.

One function, since every function that calls others is compiled together with all of them.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rescue_planner.kernels.animals import found
from rescue_planner.kernels.arrivals import arrivals
from rescue_planner.kernels.census import take_census
from rescue_planner.kernels.donors import donor_year, found_donor
from rescue_planner.kernels.herd import DONE, FULL, STOPPED, FloatArray, Herd, IntArray, Plan
from rescue_planner.kernels.inner import leaf
from rescue_planner.kernels.mating import breed
from rescue_planner.kernels.streams import open_year
from rescue_planner.kernels.survival import live_and_age
from rescue_planner.kernels.weather import draw_weather


@leaf
def run_chunk(
    plan: Plan,
    herd: Herd,
    seed: np.uint64,
    first: int,
    last: int,
    cancel: NDArray[np.uint8],
    rows: FloatArray,
    due: IntArray,
    done: IntArray,
    chunk: int,
) -> int:
    """Run replicates `first`..`last`-1 and return how it ended: DONE, STOPPED or FULL.

    Parameters
    ----------
    plan, herd : Plan, Herd
        What is run, and the room for it.
    seed : uint64
        With the number of a replicate it settles every draw.
    first, last : int
        Replicates.
    cancel : (1,) array of uint8
        Read every year; set to 1 from another thread to stop.
    rows : (replicates, Y + 1, columns) array
        Filled by replicate: one census a row.
    due : (replicates, rules, Y) array
        Filled: how often each rule acts in each year.
    done : (chunks,) array
        `done[chunk]` counts the replicates that are whole, so FULL tells which wants more slots.
    chunk : int
        Which of `done` is this one's.
    """
    years, donors = rows.shape[1] - 1, plan.ancestry.size
    for replicate in range(first, last):
        for population in range(1 + donors):
            s = herd.streams if population == 0 else herd.donor_streams
            open_year(s, seed, replicate, 0, population)
            if population > 0:
                found_donor(plan, herd, population - 1)
            elif found(plan, herd) == FULL:
                return FULL
        for year in range(years + 1):
            if cancel[0] != 0:
                return STOPPED
            take_census(plan, herd, year)
            for i in range(rows.shape[2]):
                rows[replicate, year, i] = herd.census[i]
            if year == years:
                break
            open_year(herd.streams, seed, replicate, year + 1, 0)
            draw_weather(herd.streams, plan.rates, plan.quantiles, plan.die_offs, 0, herd.weather)
            if (
                arrivals(plan, herd, year) == FULL
                or breed(plan, herd, year) == FULL
                or live_and_age(plan, herd, year) == FULL
            ):
                return FULL
            for donor in range(donors):
                open_year(herd.donor_streams, seed, replicate, year + 1, donor + 1)
                donor_year(plan, herd, donor)
        for rule in range(due.shape[1]):
            for year in range(years):
                due[replicate, rule, year] = herd.due[rule, year]
        done[chunk] += 1
    return DONE
