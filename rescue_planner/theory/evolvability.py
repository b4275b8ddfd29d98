"""How much selection can do: Fisher's and Robertson's theorems, and evolvability.

Sources: Fisher 1930; Robertson 1966; Price 1972; Houle 1992 (Genetics 130:195); Hansen, Pelabon &
Houle 2011 (Evol. Biol. 38:258), from memory; identities derived.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total


def selection_covariance(shares: Numbers, values: Numbers, fitness: Numbers) -> FloatArray:
    """Return Cov(z, w) / mean(w), the change of a mean by selection among types.

    Robertson's theorem where z are breeding values. With z = w itself Fisher's: variance of fitness
    over its mean, so that V_A of relative fitness is what a generation can gain. To offset a fall
    of log fitness by 0.105 (10 %) V_A must be about that large.

    Parameters
    ----------
    shares : (..., K) array
        Share of each type before selection, summing to 1.
    values, fitness : (..., K) array
        z (breeding value) and w of each type; mean of w above 0.

    Returns
    -------
    (...) array
        In the unit of z.
    """
    x, z, w = floats(shares), floats(values), floats(fitness)
    mean_w = total(x * w)
    mean_z = total(x * z)
    return total(x * (z - mean_z[..., np.newaxis]) * w) / mean_w


def evolvability(additive_variance: Numbers, mean: Numbers) -> FloatArray:
    """Return I_A = V_A / mean^2, proportional change under a gradient of 1; (...).

    Ratio-scale traits only. Heritability is no substitute: V_E lowers it without lowering V_A.
    """
    return floats(additive_variance) / floats(mean) ** 2


def coefficient_of_additive_variation(additive_variance: Numbers, mean: Numbers) -> FloatArray:
    """Return CV_A = sqrt(V_A) / mean as a share (Houle 1992 gives it times 100); (...)."""
    return np.sqrt(floats(additive_variance)) / np.abs(floats(mean))


def proportional_response(
    additive_variance: Numbers, mean: Numbers, mean_scaled_gradient: Numbers
) -> FloatArray:
    """Return I_A beta_mu, the response of a mean as a share of it, per generation; (...).

    `mean_scaled_gradient` beta_mu is 1 for fitness itself; the median of published ones is about
    0.54 (Hereford, Hansen & Houle 2004, Evolution 58:2133).
    """
    return evolvability(additive_variance, mean) * floats(mean_scaled_gradient)
