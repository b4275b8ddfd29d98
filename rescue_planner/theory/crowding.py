"""Growth that depends on numbers: crowding above, trouble to find a mate below.

N animals, K carrying capacity (in the same animals). Sources: Ricker 1954; Beverton & Holt 1957;
Dennis 1989; Boukal & Berec 2002 (J. Theor. Biol. 218:375), from memory.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats


def ceiling(n: Numbers, growth: Numbers, capacity: Numbers) -> FloatArray:
    """Return min(K, lambda N): free growth up to K, a hard cut there; (...)."""
    return np.minimum(floats(capacity), floats(growth) * floats(n))


def theta_logistic(
    n: Numbers, rate: Numbers, capacity: Numbers, theta: Numbers = 1.0
) -> FloatArray:
    """Return N exp(r (1 - (N/K)^theta)), Ricker's form at theta = 1.

    Parameters
    ----------
    n, capacity : (...) array
        N, not negative, and K, above 0.
    rate : (...) array
        r, log growth per year when rare.
    theta : (...) array
        Shape; 0.5 to 4. A large one falls below K from above it (overcompensation).

    Returns
    -------
    (...) array
        Animals next year.
    """
    n_ = floats(n)
    return n_ * np.exp(floats(rate) * (1.0 - (n_ / floats(capacity)) ** floats(theta)))


def beverton_holt(n: Numbers, growth: Numbers, capacity: Numbers) -> FloatArray:
    """Return lambda N / (1 + (lambda - 1) N / K): growth slows all the way up; (...).

    `growth` lambda is per year when rare, at least 1 for a lasting K.
    """
    n_, lam = floats(n), floats(growth)
    return lam * n_ / (1.0 + (lam - 1.0) * n_ / floats(capacity))


def mating_chance_exponential(n: Numbers, scale: Numbers) -> FloatArray:
    """Return 1 - exp(-N/c), the chance that a female finds a mate; (...), c in animals."""
    return -np.expm1(-floats(n) / floats(scale))


def mating_chance_hyperbolic(n: Numbers, scale: Numbers) -> FloatArray:
    """Return N / (N + c), the chance that a female finds a mate; (...), c in animals."""
    n_ = floats(n)
    return n_ / (n_ + floats(scale))


def _share_needed(survival: Numbers, births: Numbers) -> FloatArray:
    return (1.0 - floats(survival)) / floats(births)


def threshold_exponential(survival: Numbers, births: Numbers, scale: Numbers) -> FloatArray:
    """Return the N below which lambda = s + b P(N) is under 1: -c ln(1 - (1-s)/b).

    Parameters
    ----------
    survival, births : (...) array
        s and b, yearly survival and recruits per animal that mates.
    scale : (...) array
        c of `mating_chance_exponential`.

    Returns
    -------
    (...) array
        Animals; inf where births never make up for deaths.
    """
    share = np.minimum(_share_needed(survival, births), 1.0)
    with np.errstate(divide="ignore"):
        return -floats(scale) * np.log1p(-share)


def threshold_hyperbolic(survival: Numbers, births: Numbers, scale: Numbers) -> FloatArray:
    """Return c (1-s) / (b - (1-s)), the same for `mating_chance_hyperbolic`; (...)."""
    share = np.minimum(_share_needed(survival, births), 1.0)
    with np.errstate(divide="ignore"):
        return floats(scale) * share / (1.0 - share)
