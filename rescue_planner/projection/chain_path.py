"""Which path the exact depth takes: compiled once the kernels are there, plain until then.

Both give the same numbers to 1e-12. `run` always waits for the kernels; the desk answers by the
plain path meanwhile.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.theory import chain, selection

FloatArray = NDArray[np.float64]
TAIL = 1e-14
LARGEST_COPIES = 100_000
QUANTILES = {"q05": 0.05, "q25": 0.25, "q50": 0.5, "q75": 0.75, "q95": 0.95}
COLUMNS = ("mean", "sd", *QUANTILES, "kept", "fixed")


@dataclass(frozen=True, slots=True)
class ChainInputs:
    """What a chain depends on, hashable, so that an unchanged plan is not computed again.

    `m` and `incoming` have one entry a step: the share of gene copies from donors, and the sum of
    share times the donors' frequency; `copies` is 2Ne of each step, whole.
    """

    start: float
    fitness: tuple[float, ...]
    mutation_to: float
    mutation_from: float
    m: tuple[float, ...]
    incoming: tuple[float, ...]
    copies: tuple[int, ...]


Path = Callable[[ChainInputs], FloatArray]


def plain(inputs: ChainInputs) -> FloatArray:
    """Return the statistics by `theory.chain`, (G + 1, 9) in the order of `COLUMNS`."""
    start = inputs.start
    rows = [[start, 0.0, *[start] * len(QUANTILES), float(start > 0.0), float(start >= 1.0)]]
    mass: FloatArray | None = None
    for t in range(len(inputs.copies)):
        mass = _plain_step(inputs, t, mass)
        rows.append(
            [
                float(chain.mean(mass)),
                float(chain.sd(mass)),
                *(float(chain.quantile(mass, q)) for q in QUANTILES.values()),
                float(chain.share_kept(mass)),
                float(chain.share_fixed(mass)),
            ]
        )
    return np.array(rows)


def _plain_step(inputs: ChainInputs, t: int, mass: FloatArray | None) -> FloatArray:
    if mass is None:
        # the state given need not be a whole number of copies
        now, weight = np.array([inputs.start]), np.ones(1)
    else:
        now, weight = chain.frequencies(mass.size - 1), mass
    mixed = np.clip((1.0 - inputs.m[t]) * now + inputs.incoming[t], 0.0, 1.0)  # rounding only
    selected = selection.after_selection(mixed, np.array(inputs.fitness))
    following = selection.after_mutation(selected, inputs.mutation_to, inputs.mutation_from)
    return np.asarray(chain.step(weight, following, inputs.copies[t]))


def compiled(inputs: ChainInputs) -> FloatArray:
    """Return the same by the compiled kernel."""
    from rescue_planner.kernels import exact_chain

    steps = len(inputs.copies)
    rows = np.empty((steps + 1, len(COLUMNS)))
    exact_chain.course(
        inputs.start,
        np.array(inputs.m, dtype=np.float64),
        np.array(inputs.incoming, dtype=np.float64),
        np.array(inputs.copies, dtype=np.int64),
        np.array(inputs.fitness, dtype=np.float64),
        np.array([inputs.mutation_to, inputs.mutation_from]),
        np.array(list(QUANTILES.values())),
        TAIL,
        np.zeros(1, dtype=np.uint8),
        rows,
        np.zeros((2, max(inputs.copies, default=1) + 1)),
    )
    return rows


_path: list[Path] = [plain]


def path_in_use() -> str:
    """Return `compiled` or `plain`."""
    return "compiled" if _path[0] is compiled else "plain"


def use_plain() -> None:
    """Take the plain path from now on."""
    _path[0] = plain


def use_compiled() -> bool:
    """Load or compile the kernels, then take the compiled path; False where that fails."""
    try:
        from rescue_planner.kernels.warm import warm_chain

        warm_chain()
    except Exception:  # noqa: BLE001 - a machine that cannot compile still gets its numbers
        return False
    _path[0] = compiled
    return True


def chain_rows(inputs: ChainInputs) -> FloatArray:
    """Return the statistics by the path in use."""
    return _path[0](inputs)
