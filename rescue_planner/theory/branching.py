"""Extinction of independent lines: exact oracles for an engine of single animals.

Every animal has its own independent fate, the same for all of a kind; no crowding; rates constant
or on a fixed schedule. q is the chance that the line of *one* animal is gone; n animals at the
start: q^n. The order of events matters and is part of each function's name. Sources: Harris 1963;
Athreya & Ney 1972; Kendall 1948; Bailey 1964, from memory; values derived.
"""

from typing import NamedTuple

import numpy as np
from scipy.special import lambertw

from rescue_planner.theory.arrays import FloatArray, Numbers, floats

_MOST_STEPS = 200_000
_SETTLED = 1e-16


class BirthDeath(NamedTuple):
    """Linear birth-death process after a time: chance of being gone, mean and variance; (...)."""

    gone: FloatArray
    mean: FloatArray
    variance: FloatArray


def all_breed(q: Numbers, survival: Numbers, daughters: Numbers) -> FloatArray:
    """Return (1 - s + s q) e^{b (q-1)}: all females at the start of the year breed, then survive.

    Parameters
    ----------
    q : (...) array
        Chance that the line of a daughter or survivor is gone by the end.
    survival, daughters : (...) array
        s; b, mean of the Poisson daughters that reach the next census.

    Returns
    -------
    (...) array
        The same chance one year earlier (generating function of the year).
    """
    q_, s = floats(q), floats(survival)
    return (1.0 - s + s * q_) * np.exp(floats(daughters) * (q_ - 1.0))


def survivors_breed(q: Numbers, survival: Numbers, daughters: Numbers) -> FloatArray:
    """Return 1 - s + s q e^{b (q-1)}: only females that live through the year breed; see above."""
    q_, s = floats(q), floats(survival)
    return 1.0 - s + s * q_ * np.exp(floats(daughters) * (q_ - 1.0))


def poisson_by_generation(mean_young: Numbers, generations: int) -> FloatArray:
    """Return q_0..q_t of q' = e^{m (q-1)}, discrete generations, Poisson young; (t + 1, ...)."""
    m = floats(mean_young)
    out = np.zeros((generations + 1, *m.shape))
    for t in range(generations):
        out[t + 1] = np.exp(m * (out[t] - 1.0))
    return out


def poisson_ever(mean_young: Numbers) -> FloatArray:
    """Return the chance that the line ever ends: -W0(-m e^-m) / m for m above 1, else 1.

    Parameters
    ----------
    mean_young : (...) array
        m, mean of Poisson young per animal and generation.

    Returns
    -------
    (...) array
        For one animal; raised to n for n founders. W is Lambert's function, its branch 0.
    """
    m = floats(mean_young)
    grows = m > 1.0
    safe = np.where(grows, m, 2.0)
    root = -np.real(lambertw(-safe * np.exp(-safe), 0)) / safe
    return np.where(grows, root, 1.0)[()]


def gone_by(
    survival: Numbers, daughters: Numbers, years: int, only_survivors: bool = False
) -> FloatArray:
    """Return q_0..q_t for one female with constant rates; (...) -> (t + 1, ...).

    Parameters
    ----------
    survival, daughters : (...) array
        As in `all_breed`.
    years : int
        t.
    only_survivors : bool
        Use `survivors_breed` in place of `all_breed`.

    Returns
    -------
    (t + 1, ...) array
        Chance that the line is gone by each year.
    """
    s, b = np.broadcast_arrays(floats(survival), floats(daughters))
    year = survivors_breed if only_survivors else all_breed
    out = np.zeros((years + 1, *s.shape))
    for t in range(years):
        out[t + 1] = year(out[t], s, b)
    return out


def gone_ever(survival: float, daughters: float, only_survivors: bool = False) -> float:
    """Return the chance that one female's line ever ends, constant rates.

    The smallest root of q = f(q), by Newton's steps from 0 (f convex: they climb to it and never
    pass it). 1 where s + b (or s (1 + b)) is at most 1.
    """
    s, b = survival, daughters
    growth = s * (1.0 + b) if only_survivors else s + b
    if growth <= 1.0:
        return 1.0
    year = survivors_breed if only_survivors else all_breed
    q = 0.0
    for _ in range(_MOST_STEPS):
        lively = float(np.exp(b * (q - 1.0)))
        slope = (
            s * lively * (1.0 + b * q) if only_survivors else lively * (s + b * (1.0 - s + s * q))
        )
        step = (float(year(q, s, b)) - q) / (1.0 - slope)
        q += step
        if abs(step) < _SETTLED:
            break
    return q


def gone_on_schedule(survival: Numbers, daughters: Numbers) -> FloatArray:
    """Return the chance that one female's line is gone by the end of a schedule of rates.

    f_1(f_2(...f_T(0))): the *last* year's function is applied first. Composed the other way round
    it answers for the schedule run backwards.

    Parameters
    ----------
    survival, daughters : (..., T) array
        s and b of years 1 to T, as in `all_breed`.

    Returns
    -------
    (...) array
        Probability.
    """
    s, b = np.broadcast_arrays(floats(survival), floats(daughters))
    q = np.zeros(s.shape[:-1])
    for t in range(s.shape[-1] - 1, -1, -1):
        q = all_breed(q, s[..., t], b[..., t])
    return q[()]


def two_ages_gone_by(
    young_survival: float, adult_survival: float, daughters: float, years: int
) -> FloatArray:
    """Return q of one juvenile and of one adult at years 0..t; (t + 1, 2).

    q_J' = 1 - s_J + s_J q_A, q_A' = (1 - s_A + s_A q_A) e^{b (q_J - 1)}.

    Parameters
    ----------
    young_survival, adult_survival : float
        s_J, s_A, yearly.
    daughters : float
        b, Poisson juveniles per adult alive at the start of the year.
    years : int
        t.

    Returns
    -------
    (t + 1, 2) array
        Juvenile first.
    """
    out = np.zeros((years + 1, 2))
    for t in range(years):
        young, adult = out[t]
        out[t + 1, 0] = 1.0 - young_survival + young_survival * adult
        out[t + 1, 1] = all_breed(adult, adult_survival, 0.0) * np.exp(daughters * (young - 1.0))
    return out


def birth_death(birth: Numbers, death: Numbers, time: Numbers, start: Numbers) -> BirthDeath:
    """Return the state of a linear birth-death process in continuous time (Kendall 1948).

    Parameters
    ----------
    birth, death : (...) array
        Rates per animal and year, not negative.
    time : (...) array
        Years.
    start : (...) array
        N_0.

    Returns
    -------
    BirthDeath
        Chance of being gone, mean and variance of numbers.
    """
    rate_in, rate_out, t = floats(birth), floats(death), floats(time)
    n, rate = floats(start), floats(birth) - floats(death)
    level = rate == 0.0
    gain = np.where(level, t, np.expm1(rate * t) / np.where(level, 1.0, rate))
    gone = (rate_out * gain / (1.0 + rate_in * gain)) ** n
    grown = np.exp(rate * t)
    return BirthDeath(gone, n * grown, n * (rate_in + rate_out) * grown * gain)


def birth_death_ever(birth: Numbers, death: Numbers, start: Numbers) -> FloatArray:
    """Return min(1, (death / birth)^N_0), the chance of ever being gone; (...), birth above 0."""
    return np.minimum(1.0, floats(death) / floats(birth)) ** floats(start)


def birth_death_with_newcomers(birth: float, death: float, newcomers: float) -> BirthDeath:
    """Return the settled state with steady arrivals nu per year, birth below death.

    Negative binomial: mean nu / (mu - l), variance nu mu / (mu - l)^2, P(0) = (1 - l/mu)^(nu/l).

    Raises
    ------
    ValueError
        If birth is not above 0 and below death: nothing settles.
    """
    if not 0.0 < birth < death:
        raise ValueError("a settled state needs a birth rate above 0 and below the death rate")
    fall = death - birth
    gone = (1.0 - birth / death) ** (newcomers / birth)
    return BirthDeath(floats(gone), floats(newcomers / fall), floats(newcomers * death / fall**2))
