"""The average course over many parameter draws: what the entered ranges do."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.document import Case
from rescue_planner.case.plans import Plan
from rescue_planner.projection.expected import expected_course
from rescue_planner.projection.setup import Draws, setup

FloatArray = NDArray[np.float64]
BLOCK = 1024  # draws at a time: what a step touches then stays in the processor's cache


def drawn_values(case: Case, plan: Plan, draws: Draws) -> dict[str, FloatArray]:
    """Return every measure of the average course for every draw.

    Parameters
    ----------
    draws : mapping from a path like `recipient.effective_size` to (n,) values
        At least one; inputs not named keep their best value.

    Returns
    -------
    dict
        Measure to (n, G + 1), in the order of the draws.

    Raises
    ------
    ValueError
        Where there is no draw, or the inputs have different numbers of draws.
    """
    counts = {values.shape[0] for values in draws.values()}
    if len(counts) != 1 or 0 in counts:
        raise ValueError("every drawn input needs the same number of draws, at least one")
    (n,) = counts
    whole: dict[str, FloatArray] = {}
    for first in range(0, n, BLOCK):
        part = {path: values[first : first + BLOCK] for path, values in draws.items()}
        for measure, values in expected_course(setup(case, plan, part)).values.items():
            if measure not in whole:
                whole[measure] = np.empty((n, values.shape[1]))
            whole[measure][first : first + BLOCK] = values
    return whole
