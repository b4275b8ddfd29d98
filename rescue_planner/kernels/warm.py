"""Compile every kernel once, on small arrays: `python -m rescue_planner.kernels.warm`.

The desk starts this as a low-priority child, so that compiling never holds up the window. What
only the exact chain needs stands apart, so that it does not wait for the rest.
"""

from __future__ import annotations

import os

import numpy as np

from rescue_planner.kernels import exact_chain


def warm_chain() -> None:
    """Call the kernels of the exact chain with the types they are used with."""
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


def warm() -> None:
    """Call every kernel."""
    warm_chain()


def lower_priority() -> None:
    """Let everything else on the machine go first, where the system allows it."""
    if hasattr(os, "nice"):
        os.nice(10)


if __name__ == "__main__":
    lower_priority()
    warm()
