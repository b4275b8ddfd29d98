"""Births where both sexes count, and the chance of single animals' fates.

Sources: Caswell & Weeks 1986 (Am. Nat. 128:707), the form from memory and not checked otherwise;
Lande, Engen & Saether 2003; variances derived.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats


def births_harmonic(
    males: Numbers, females: Numbers, harem: Numbers, births_per_pair: Numbers
) -> FloatArray:
    """Return k N_m N_f / (N_m + N_f / H), births by the harmonic mean of the sexes.

    Parameters
    ----------
    males, females : (...) array
        Adults of each sex, not negative.
    harem : (...) array
        H, females that one male can serve.
    births_per_pair : (...) array
        k. At N_f = H N_m it gives half of what all females would bear: take 2k where it should
        agree with `mated_females` there.

    Returns
    -------
    (...) array
        Young; 0 without a male or without a female.
    """
    m, f = floats(males), floats(females)
    bottom = m + f / floats(harem)
    return floats(births_per_pair) * m * f / np.where(bottom == 0.0, 1.0, bottom)


def mated_females(males: Numbers, females: Numbers, harem: Numbers) -> FloatArray:
    """Return min(N_f, H N_m), the females that find a male; (...). H is 1 for pairs."""
    return np.minimum(floats(females), floats(harem) * floats(males))


def chance_one_sex(animals: Numbers, share_of_females: Numbers = 0.5) -> FloatArray:
    """Return f^N + (1 - f)^N, the chance that N animals are all of one sex.

    Parameters
    ----------
    animals : (...) array
        N, at least 1.
    share_of_females : (...) array
        f, chance that an animal is a female, 0 to 1.

    Returns
    -------
    (...) array
        Probability; 2 (1/2)^N for an even ratio.
    """
    n, f = floats(animals), floats(share_of_females)
    return f**n + (1.0 - f) ** n


def variance_all_breed(survival: Numbers, daughters: Numbers) -> FloatArray:
    """Return s (1-s) + b: variance per female where all females at the start of the year breed.

    Parameters
    ----------
    survival : (...) array
        s, chance that a female lives through the year.
    daughters : (...) array
        b, mean of Poisson daughters per female that reach the next census.

    Returns
    -------
    (...) array
        Var(N') / N; published values for vertebrates are about 0.1 to 1 (from memory).
    """
    s = floats(survival)
    return s * (1.0 - s) + floats(daughters)


def variance_survivors_breed(survival: Numbers, daughters: Numbers) -> FloatArray:
    """Return s (1-s) (1+b)^2 + s b: the same where only females that live through it breed."""
    s, b = floats(survival), floats(daughters)
    return s * (1.0 - s) * (1.0 + b) ** 2 + s * b
