"""What growth hangs on, and what removing animals costs a donor.

Sources: Caswell 2001 (Matrix Population Models); de Kroon et al. 1986 (Ecology 67:1427); Fisher
1930, from memory.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total
from rescue_planner.theory.life_table import dominant_eigenvalue, reproductive_values, stable_ages


def sensitivities(matrix: Numbers) -> FloatArray:
    """Return d lambda / d a_ij = v_i w_j / sum(v w).

    Parameters
    ----------
    matrix : (..., A, A) array
        Column = class now, row = class next year; primitive, growth above 0.

    Returns
    -------
    (..., A, A) array
        Per year; also for entries that are 0 and may have no meaning.
    """
    v, w = reproductive_values(matrix), stable_ages(matrix)
    together = v[..., :, np.newaxis] * w[..., np.newaxis, :]
    return together / total(v * w)[..., np.newaxis, np.newaxis]


def elasticities(matrix: Numbers) -> FloatArray:
    """Return (a_ij / lambda) d lambda / d a_ij, shares that sum to 1; (..., A, A)."""
    a = floats(matrix)
    growth = dominant_eigenvalue(a)[..., np.newaxis, np.newaxis]
    return a / growth * sensitivities(a)


def rate_elasticity(matrix: Numbers, derivative: Numbers, rate: Numbers) -> FloatArray:
    """Return the elasticity of growth to one vital rate that stands in several entries.

    (x / lambda) sum_ij (d lambda / d a_ij) (d a_ij / d x).

    Parameters
    ----------
    matrix : (..., A, A) array
        As in `sensitivities`.
    derivative : (..., A, A) array
        d a_ij / d x.
    rate : (...) array
        x, such as adult survival.

    Returns
    -------
    (...) array
        Relative change of growth per relative change of x. Those of different rates need not sum to
        1.
    """
    inner: FloatArray = np.sum(sensitivities(matrix) * floats(derivative), axis=(-2, -1))
    return floats(rate) / dominant_eigenvalue(matrix) * inner


def removal_cost(matrix: Numbers) -> FloatArray:
    """Return what the removal of one animal of each class costs, in average animals.

    v_x / sum(v w), w the stable distribution: the change of long-run numbers, in the unit of
    removing an animal picked at random.

    Parameters
    ----------
    matrix : (..., A, A) array
        The donor's.

    Returns
    -------
    (..., A) array
        0 for animals past breeding: they cost the donor nothing and give the recipient nothing.
    """
    v, w = reproductive_values(matrix), stable_ages(matrix)
    return v / total(v * w)[..., np.newaxis]


def sustainable_fraction(growth: Numbers) -> FloatArray:
    """Return max(0, 1 - 1/lambda), the yearly share that can be taken without compensation; (...).

    Taken at random over classes. Crowding may make up for more; how much is unsure, and estimates
    have halved on a second look (Dimond & Armstrong 2007, Conserv. Biol. 21:114).
    """
    return np.maximum(0.0, 1.0 - 1.0 / floats(growth))


def donor_numbers(
    start: Numbers, growth: Numbers, capacity: Numbers, removed: Numbers
) -> FloatArray:
    """Return a donor's numbers under a ceiling and yearly removal: N' = min(K, lambda N) - R.

    Parameters
    ----------
    start, growth, capacity : (...) array
        N_0, lambda per year, K.
    removed : (..., T) array
        R of each year, animals.

    Returns
    -------
    (..., T + 1) array
        Never below 0.
    """
    r, lam, k = floats(removed), floats(growth), floats(capacity)
    shape = np.broadcast_shapes(floats(start).shape, lam.shape, k.shape, r.shape[:-1])
    out = np.empty((*shape, r.shape[-1] + 1))
    out[..., 0] = floats(start)
    for t in range(r.shape[-1]):
        out[..., t + 1] = np.maximum(0.0, np.minimum(k, lam * out[..., t]) - r[..., t])
    return out
