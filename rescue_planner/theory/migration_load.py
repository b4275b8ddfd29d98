"""Flow from an ill-fitting population: swamping, and two demes that drag each other down.

Sources: Haldane 1930; Ronce & Kirkpatrick 2001 (Evolution 55:1520); Kirkpatrick & Barton 1997 (Am.
Nat. 150:1), from memory; the symmetric state is derived. Settled lag of a recipient under steady
flow: `adaptation.flow_lag`.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats


class TwoDemes(NamedTuple):
    """Biology that two demes share, in continuous time (per generation).

    `growth` r0 at the optimum when rare; `capacity` K; `strength` s of stabilising selection;
    `additive_variance` V_A, held; `flow` m each way.
    """

    growth: float
    capacity: float
    strength: float
    additive_variance: float
    flow: float


def donor_allele_share(m: Numbers, s: Numbers) -> FloatArray:
    """Return min(1, m/s): where a donor allele settles against selection s on *gametes*; (...).

    One additive locus, weak flow and selection; the donor allele swamps the local one where m >= s.
    """
    m_, s_ = floats(m), floats(s)
    swamped = m_ >= s_
    return np.where(swamped, 1.0, m_ / np.where(swamped, 1.0, s_))[()]


def symmetric_deviation(distance: Numbers, demes: TwoDemes) -> FloatArray:
    """Return m D / (s V_A + 2m), how far each deme's mean sits off its optimum; (...).

    Two equal demes whose optima lie D apart. Other stable states can exist (`settle`).
    """
    pull = demes.strength * demes.additive_variance
    return demes.flow * floats(distance) / (pull + 2.0 * demes.flow)


def rates(state: FloatArray, optima: tuple[float, float], demes: TwoDemes) -> FloatArray:
    """Return the rates of change of (N1, N2, z1, z2).

    dN_i = N_i [r0 (1 - N_i/K) - (s/2)(z_i - theta_i)^2] + m (N_j - N_i);
    dz_i = -s V_A (z_i - theta_i) + m (N_j/N_i)(z_j - z_i).

    Parameters
    ----------
    state : (4,) array
        Numbers, above 0, and trait means.
    optima : tuple of float
        theta of both demes.
    demes : TwoDemes
        What they share.

    Returns
    -------
    (4,) array
        Per unit of time.
    """
    n, z = state[:2], state[2:]
    away = z - np.asarray(optima)
    own = n * (demes.growth * (1.0 - n / demes.capacity) - 0.5 * demes.strength * away**2)
    numbers = own + demes.flow * (n[::-1] - n)
    means = -demes.strength * demes.additive_variance * away
    return np.concatenate([numbers, means + demes.flow * (n[::-1] / n) * (z[::-1] - z)])


def settle(
    start: Numbers, optima: tuple[float, float], demes: TwoDemes, time: float = 20_000.0
) -> FloatArray:
    """Return the state that two demes come to from a given start.

    The start matters: from equal numbers both may persist, while a collapsed deme can be held down
    by the flow that was to help it (migrational meltdown).

    Parameters
    ----------
    start : (4,) array
        N1, N2 (above 0), z1, z2.
    optima : tuple of float
        theta of both demes.
    demes : TwoDemes
        What they share.
    time : float
        Time to run, long against 1/m.

    Returns
    -------
    (4,) array
        State at the end.

    Raises
    ------
    ValueError
        If the equations could not be followed to the end.
    """
    from scipy.integrate import solve_ivp

    found = solve_ivp(
        lambda _t, y: rates(y, optima, demes),
        (0.0, time),
        floats(start),
        method="LSODA",
        rtol=1e-10,
        atol=1e-12,
    )
    if not found.success:
        raise ValueError("the two demes could not be followed to the end of the time given")
    return np.asarray(found.y[:, -1], dtype=np.float64)
