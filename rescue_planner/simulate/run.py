"""Run a plan's replicates on a few threads: chunks, progress, cancel.

Every draw is settled by (seed, replicate, year, purpose, population), every replicate writes rows
of its own, and all averaging comes afterwards: the number of threads and the size of a chunk leave
no trace in the results.
"""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import FIRST_COMPLETED, Future, ThreadPoolExecutor, wait
from dataclasses import dataclass
from queue import LifoQueue

import numpy as np
from numpy.typing import NDArray

from rescue_planner.kernels import herd
from rescue_planner.kernels.herd import Herd, Plan
from rescue_planner.kernels.year import run_chunk
from rescue_planner.simulate.assemble import assemble, bytes_needed, first_slots, room
from rescue_planner.simulate.measures import measures
from rescue_planner.simulate.results import Results
from rescue_planner.simulate.world import NotPossible, World

Checkpoint = Callable[[int, int], None]

CHUNK = 16
MOST_REPLICATES = 1_000_000
MOST_BYTES = 4 * 2**30
"""Of rooms and results together; a run that would take more is refused in words."""
_TICK = 0.1


@dataclass(frozen=True, slots=True)
class Estimate:
    """Memory of a run before it starts, in bytes: rooms of the workers, and results."""

    rooms: int
    results: int


@dataclass(frozen=True, slots=True, eq=False)
class _Job:
    """What all chunks of a run share."""

    plan: Plan
    seed: np.uint64
    cancel: NDArray[np.uint8]
    rows: NDArray[np.float64]
    due: NDArray[np.int64]
    done: NDArray[np.int64]
    rooms: LifoQueue[Herd]
    most_slots: int


def estimate(world: World, replicates: int, workers: int = 1) -> Estimate:
    """Return about how much memory a run takes; a population that grows beyond takes more."""
    plan = assemble(world).plan
    columns = len(measures(len(world.donors), len(world.loci)))
    each = 8 * ((world.years + 1) * columns + len(world.rules) * world.years)
    return Estimate(workers * bytes_needed(plan, first_slots(plan)), replicates * each)


def run(
    world: World,
    replicates: int,
    seed: int,
    workers: int = 1,
    checkpoint: Checkpoint = lambda done, total: None,
    *,
    chunk: int = CHUNK,
) -> Results:
    """Run replicates of one plan.

    Parameters
    ----------
    world : World
        The plan.
    replicates : int
        R, 1 to MOST_REPLICATES.
    seed : int
        Plans run with one seed share their weather and much of their chance.
    workers : int
        Threads.
    checkpoint : callable
        Called at least every tenth of a second with the replicates done and R. What it raises
        stops the run, within a year of each replicate at work, and is raised here.
    chunk : int
        Replicates that a thread takes at a time.

    Returns
    -------
    Results

    Raises
    ------
    NotPossible
        If the numbers cannot be run, or would not fit into memory.
    """
    _check(world, replicates, workers, chunk)
    made = assemble(world)
    plan = made.plan
    names = measures(len(world.donors), len(world.loci))
    slots = first_slots(plan)
    starts = range(0, replicates, chunk)
    job = _Job(
        plan=plan,
        seed=np.uint64(seed % 2**64),
        cancel=np.zeros(1, dtype=np.uint8),
        rows=np.empty((replicates, world.years + 1, len(names))),
        due=np.zeros((replicates, len(world.rules), world.years), dtype=np.int64),
        done=np.zeros(len(starts), dtype=np.int64),
        rooms=LifoQueue(),
        most_slots=int((MOST_BYTES / (4 * workers)) ** 0.5),
    )
    if slots > job.most_slots:
        raise NotPossible(_too_many(job.most_slots))
    for _ in range(workers):
        job.rooms.put(room(plan, slots))
    with ThreadPoolExecutor(workers, thread_name_prefix="animals") as pool:
        tasks = [
            pool.submit(_chunk, job, i, first, min(first + chunk, replicates))
            for i, first in enumerate(starts)
        ]
        _watch(tasks, job, replicates, checkpoint)
    return Results(names, job.rows, job.due, made.kinship_moved, made.diversity_moved)


def _check(world: World, replicates: int, workers: int, chunk: int) -> None:
    if not 1 <= replicates <= MOST_REPLICATES:
        raise NotPossible(
            f"{replicates:,} replicates cannot be run. Ask for 1 to {MOST_REPLICATES:,}."
        )
    if workers < 1 or chunk < 1:
        raise NotPossible("A run needs at least one worker and one replicate in a chunk.")
    results = estimate(world, replicates, workers).results
    if results > MOST_BYTES:
        raise NotPossible(
            f"The results of {replicates:,} replicates would take {results / 2**30:.1f} GiB of "
            "memory. Ask for fewer replicates or a shorter horizon."
        )


def _too_many(slots: int) -> str:
    return (
        f"The population grows beyond the {slots:,} animals whose kinship fits into memory. Give "
        "a carrying capacity, or a smaller one."
    )


def _chunk(job: _Job, index: int, first: int, last: int) -> None:
    """Run one chunk; a replicate that wants more room begins again in a larger one."""
    mine = job.rooms.get()
    try:
        while True:
            start = first + int(job.done[index])
            how = run_chunk(
                job.plan,
                mine,
                job.seed,
                start,
                last,
                job.cancel,
                job.rows,
                job.due,
                job.done,
                index,
            )
            if how != herd.FULL:
                return
            slots = 2 * mine.order.size
            if slots > job.most_slots:
                raise NotPossible(_too_many(job.most_slots))
            mine = room(job.plan, slots)
    finally:
        job.rooms.put(mine)


def _watch(tasks: list[Future[None]], job: _Job, replicates: int, checkpoint: Checkpoint) -> None:
    """Report progress until all is done; stop all workers as soon as anything is raised."""
    try:
        left = set(tasks)
        while left:
            finished, left = wait(left, timeout=_TICK, return_when=FIRST_COMPLETED)
            for task in finished:
                task.result()
            checkpoint(int(job.done.sum()), replicates)
    except BaseException:
        job.cancel[0] = 1
        for task in tasks:
            task.cancel()
        raise
