"""Growth of the recipient from its life cycle, its inbreeding and its trait. Shapes (..., n)."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.projection.setup import LifeSetup
from rescue_planner.theory.life_table import growth

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Effects:
    """What acts on the vital rates at one t: three factors on survival, one on young."""

    inbreeding: FloatArray
    trait: FloatArray
    actions: FloatArray
    young: FloatArray


@dataclass(frozen=True, slots=True, eq=False)
class Growth:
    """Growth a year, and whether first-year survival had to be capped at 1."""

    rate: FloatArray
    capped: NDArray[np.bool_]


def yearly_growth(life: LifeSetup, now: Effects, at_start: Effects) -> Growth:
    """Return the growth at one t.

    Survival and young are divided by their factors at the start where the survival given was
    measured here and now; where it is that of unrelated parents' young, only the trait's factor
    is divided, and `at_start.trait` then holds the mean fitness at the optimum.
    """
    relative = now.trait / at_start.trait
    young = life.births
    if life.here_now:
        relative = relative * now.inbreeding / at_start.inbreeding
        young = young * now.young / at_start.young
    else:
        relative = relative * now.inbreeding
        young = young * now.young
    wanted = life.first_year * now.actions * relative
    rate = growth(
        young,
        np.minimum(wanted, 1.0),
        life.subadult,
        life.adult,
        life.first_breeding_age,
        life.last_age,
    )
    return Growth(np.asarray(rate), wanted > 1.0 + 1e-12)
