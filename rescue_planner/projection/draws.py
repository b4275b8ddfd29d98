"""The average course over many parameter draws: what the entered ranges do."""

from __future__ import annotations

from collections.abc import Collection

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.document import Case
from rescue_planner.case.plans import Plan
from rescue_planner.projection.expected import expected_values
from rescue_planner.projection.setup import Draws, Setup, setup

FloatArray = NDArray[np.float64]
BLOCK = 4096  # draws at a time: a step then works in the cache


def drawn_values(
    case: Case, plan: Plan, draws: Draws, measures: Collection[str] | None = None
) -> dict[str, FloatArray]:
    """Return the measures of the average course for every draw.

    Parameters
    ----------
    draws : mapping from a path like `recipient.effective_size` to (n,) values
        At least one; inputs not named keep their best value.
    measures : names, optional
        Which ones; all where left out.

    Returns
    -------
    dict
        Measure to (n, G + 1), in the order of the draws.

    Raises
    ------
    KeyError
        For a measure without an expected value.
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
        given = setup(case, plan, part)

        def take(t: int, row: dict[str, FloatArray], at: int = first, of: Setup = given) -> None:
            for measure in row if measures is None else measures:
                if measure not in whole:
                    whole[measure] = np.empty((of.steps + 1, n)).T
                whole[measure][at : at + of.draws, t] = row[measure]

        expected_values(given, take)
    return whole
