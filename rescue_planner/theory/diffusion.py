"""Chance of fixation and time to it by the diffusion of one locus (Kimura), for quick answers.

Fitness 1 + s, 1 + h s, 1 (`fitness_forms.for_allele`); constant Ne, no flow, no mutation. Up to
2 Ne of some hundred the exact chain (`chain.absorption`) is as quick and right: the diffusion is
off by up to 7 % in the chance and 9 % in the time at Ne below 50. Sources: Kimura 1957,
Kimura 1962 (Genetics 47:713, general form confirmed), Kimura & Ohta 1969 (Genetics 61:763), the
rest from memory.

G(x) = exp(-2 Ne s [(2h-1) x (1-x) + x]); integrals by Gauss-Legendre panels.
"""

import numpy as np
from scipy.special import xlog1py, xlogy

from rescue_planner.theory.arrays import FloatArray, Numbers, floats

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)
_AT, _SHARE = 0.5 * (_NODES + 1.0), 0.5 * _WEIGHTS
_PANELS = 32
_RISE_A_PANEL = 4.0
_LARGEST_RISE = 600.0
_STEEPEST = 1e6  # then a quarter of a million panels


def _exponent(x: FloatArray, scale: float, h: float) -> FloatArray:
    return -scale * ((2.0 * h - 1.0) * x * (1.0 - x) + x)


def _steepness(scale: float, h: float) -> float:
    """Return the largest |d exponent / dx| over 0..1: it is linear in x, so at an end."""
    return abs(scale) * max(abs(2.0 * h), abs(2.0 - 2.0 * h))


def _edges(low: float, high: float, steep: float) -> FloatArray:
    count = max(_PANELS, int(np.ceil(steep * (high - low) / _RISE_A_PANEL)))
    return np.linspace(low, high, count + 1)


def _log_integral(low: float, high: float, scale: float, h: float) -> float:
    """Return ln of the integral of G over low..high."""
    edges = _edges(low, high, _steepness(scale, h))
    width = np.diff(edges)[:, np.newaxis]
    exponent = _exponent(edges[:-1, np.newaxis] + width * _AT, scale, h)
    peak = float(np.max(exponent))
    return peak + float(np.log(np.sum(np.exp(exponent - peak) * width * _SHARE)))


def _fixation(p: float, scale: float, h: float) -> float:
    if p <= 0.0 or p >= 1.0 or scale == 0.0:
        return p
    if _steepness(scale, h) > _STEEPEST:
        raise ValueError("selection is too strong for the diffusion: it decides, not drift")
    low, high = _log_integral(0.0, p, scale, h), _log_integral(p, 1.0, scale, h)
    return float(1.0 / (1.0 + np.exp(np.minimum(high - low, 700.0))))


def fixation(p: Numbers, ne: Numbers, s: Numbers, h: Numbers = 0.5) -> FloatArray:
    """Return the chance that A is fixed in the end: integral of G to p over that to 1.

    Parameters
    ----------
    p : (...) array
        Frequency now, 0 to 1.
    ne : (...) array
        Effective size, animals.
    s, h : (...) array
        Fitness 1 + s, 1 + h s, 1: h = 1 is A dominant. Kimura's printed form has the advantage of
        *one copy*: half this s.

    Returns
    -------
    (...) array
        Probability.

    Raises
    ------
    ValueError
        If 2 Ne s exceeds some hundred thousands: drift then plays no part.
    """
    solve = np.vectorize(_fixation, otypes=[np.float64])
    return np.asarray(solve(floats(p), 2.0 * floats(ne) * floats(s), floats(h)))[()]


def fixation_per_copy(p: Numbers, ne: Numbers, s: Numbers) -> FloatArray:
    """Return (1 - e^(-4 Ne s p)) / (1 - e^(-4 Ne s)), s the advantage of one copy.

    Parameters
    ----------
    p, ne, s : (...) array
        As in `fixation`, fitness 1 + 2s, 1 + s, 1 (`fitness_forms.per_copy`).

    Returns
    -------
    (...) array
        Probability; p itself where s is 0.
    """
    freq, scale = floats(p), 4.0 * floats(ne) * floats(s)
    still = scale == 0.0
    used = np.where(still, 1.0, scale)
    down = np.minimum(used, 0.0)  # multiply through by e^(4 Ne s) where it would overflow
    up = np.expm1(-np.abs(used) * np.where(used > 0.0, freq, 1.0 - freq))
    whole = np.expm1(-np.abs(used))
    gain = up / whole
    harm = np.exp(down * (1.0 - freq)) * np.expm1(-np.abs(used) * freq) / whole
    return np.where(still, freq, np.where(used > 0.0, gain, harm))[()]


def _pieces(
    low: float, high: float, scale: float, h: float
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    """Return nodes, weights, and the integrals of G from `low` to, and from each to `high`.

    Both integrals are divided by G at the node, so that neither overflows.
    """
    edges = _edges(low, high, _steepness(scale, h))
    width = np.diff(edges)[:, np.newaxis]
    x = edges[:-1, np.newaxis] + width * _AT
    at_node = _exponent(x, scale, h)
    peak = float(np.max(at_node))
    panel = np.sum(np.exp(at_node - peak) * width * _SHARE, axis=1)
    before = np.concatenate([[0.0], np.cumsum(panel)[:-1]])[:, np.newaxis]
    after = np.concatenate([np.cumsum(panel[::-1])[::-1][1:], [0.0]])[:, np.newaxis]
    left = _inner(edges[:-1, np.newaxis], x, scale, h, peak)
    right = _inner(x, edges[1:, np.newaxis], scale, h, peak)
    over = np.exp(peak - at_node)
    return x, width * _SHARE, (before + left) * over, (after + right) * over


def _inner(low: FloatArray, high: FloatArray, scale: float, h: float, peak: float) -> FloatArray:
    span = (high - low)[..., np.newaxis]
    value = np.exp(_exponent(low[..., np.newaxis] + span * _AT, scale, h) - peak)
    summed: FloatArray = np.sum(value * span * _SHARE, axis=-1)
    return summed


def _time_to_fixation(p: float, ne: float, scale: float, h: float) -> float:
    if p >= 1.0:
        return 0.0
    if p <= 0.0:
        return float("nan")
    if _steepness(scale, h) > _LARGEST_RISE:
        raise ValueError("selection is too strong for the diffusion: count generations instead")
    whole = _log_integral(0.0, 1.0, scale, h)
    x, weight, to, rest = _pieces(0.0, p, scale, h)
    to_p = np.exp(_log_integral(0.0, p, scale, h) - whole)
    reached = to * np.exp(_exponent(x, scale, h) - whole)
    below = np.sum(weight * to * reached / (x * (1.0 - x)))
    x, weight, to, rest = _pieces(p, 1.0, scale, h)
    reached = to_p + to * np.exp(_exponent(x, scale, h) - whole)
    above = np.sum(weight * rest * reached / (x * (1.0 - x)))
    past = np.exp(_log_integral(p, 1.0, scale, h) - whole)
    return float(4.0 * ne * (above + past / to_p * below))


def time_to_fixation(p: Numbers, ne: Numbers, s: Numbers, h: Numbers = 0.5) -> FloatArray:
    """Return the mean generations to fixation *given* that A is fixed.

    Parameters
    ----------
    p : (...) array
        Frequency now.
    ne, s, h : (...) array
        As in `fixation`.

    Returns
    -------
    (...) array
        Generations; 0 at p = 1, nan at p = 0.

    Raises
    ------
    ValueError
        If 2 Ne s exceeds some hundreds: then `times.generations_counted` answers.
    """
    solve = np.vectorize(_time_to_fixation, otypes=[np.float64])
    scale = 2.0 * floats(ne) * floats(s)
    return np.asarray(solve(floats(p), floats(ne), scale, floats(h)))[()]


def neutral_time_to_fixation(p: Numbers, ne: Numbers) -> FloatArray:
    """Return -4 Ne (1-p) ln(1-p) / p, generations given fixation; 4 Ne as p goes to 0; (...)."""
    freq = floats(p)
    gone = freq == 0.0
    safe = np.where(gone, 1.0, freq)
    inside = -xlog1py(1.0 - safe, -safe) / safe
    return 4.0 * floats(ne) * np.where(gone, 1.0, inside)[()]


def neutral_time_to_either_end(p: Numbers, ne: Numbers) -> FloatArray:
    """Return -4 Ne [p ln p + (1-p) ln(1-p)], generations until lost or fixed; (...)."""
    freq = floats(p)
    mixed = floats(xlogy(freq, freq) + xlog1py(1.0 - freq, -freq))
    return -4.0 * floats(ne) * mixed


def neutral_sd_of_time(ne: Numbers) -> FloatArray:
    """Return 4 Ne sqrt(pi^2/3 - 3), the SD of the time to fixation of a new neutral allele; (...).

    About 2.15 Ne, over half of its mean 4 Ne: single cases tell little.
    """
    return 4.0 * float(np.sqrt(np.pi**2 / 3.0 - 3.0)) * floats(ne)
