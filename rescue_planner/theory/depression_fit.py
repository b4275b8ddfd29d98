"""Lethal equivalents from counts of young that lived: the likelihood with a log link.

k_i ~ Binomial(n_i, exp(-A - B F_i)), A + B F_i not below 0. B is per *haploid* genome; the lethal
equivalents per diploid animal, which `inbreeding` takes, are 2B. The slope of a logistic
regression is *not* B: what it implies depends on the baseline (Nietlisbach et al. 2019, Evol. Appl.
12:266). Sources: Morton, Crow & Muller 1956; Nietlisbach et al. 2019.
"""

from typing import NamedTuple

import numpy as np
from scipy.special import expit, logit, xlog1py, xlogy

from rescue_planner.theory.arrays import FloatArray, Numbers, floats

_STEPS = 200
_SETTLED = 1e-13
_SHALLOW, _DEEP = 1e-300, 700.0  # depths whose exponential is still a number


class DepressionFit(NamedTuple):
    """Estimates of ln(survival) = -A - B F.

    `baseline` A; `load_haploid` B (2B lethal equivalents per *diploid*); `covariance` (2, 2) of A
    and B from the observed information, nan where `at_bound`: the best fit then has survival 1 at
    one end of F and ordinary standard errors don't hold; `log_likelihood` without its constant.
    """

    baseline: float
    load_haploid: float
    covariance: FloatArray
    log_likelihood: float
    at_bound: bool

    @property
    def lethal_equivalents_diploid(self) -> float:
        """2B, per diploid animal."""
        return 2.0 * self.load_haploid

    @property
    def errors(self) -> FloatArray:
        """Standard errors of A and B; (2,)."""
        return np.sqrt(np.diagonal(self.covariance))


def log_likelihood(
    inbreeding: Numbers, born: Numbers, lived: Numbers, baseline: Numbers, load_haploid: Numbers
) -> FloatArray:
    """Return sum k ln S + (n - k) ln(1 - S), S = exp(-A - B F), the constant left out.

    Parameters
    ----------
    inbreeding, born, lived : (..., C) array
        F, young born and young that lived in each class.
    baseline, load_haploid : (...) array
        A and B.

    Returns
    -------
    (...) array
        -inf where A + B F is below 0, or 0 with young that died.
    """
    n, k = floats(born), floats(lived)
    depth = floats(baseline)[..., np.newaxis] + floats(load_haploid)[..., np.newaxis] * floats(
        inbreeding
    )
    outside = np.any(depth < 0.0, axis=-1)
    survival = np.exp(-np.maximum(depth, 0.0))
    terms = -k * np.maximum(depth, 0.0) + xlog1py(n - k, -survival)
    summed: FloatArray = np.where(outside, -np.inf, np.sum(terms, axis=-1))
    return summed[()]


def _slopes(depth: FloatArray, n: FloatArray, k: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the first and second derivative of each class's term by its depth A + B F."""
    died = n - k
    safe = np.where(died > 0.0, np.clip(depth, _SHALLOW, _DEEP), 1.0)
    odds = 1.0 / np.expm1(safe)
    return died * odds - k, -died * odds * (1.0 + odds)


def _height(depth: FloatArray, n: FloatArray, k: FloatArray) -> float:
    died = n > k
    if np.any(depth < 0.0) or np.any(depth[died] == 0.0):
        return -np.inf
    lost = xlogy(n - k, -np.expm1(-np.where(died, depth, 1.0)))
    return float(np.sum(lost - k * depth))


def _climb(design: FloatArray, n: FloatArray, k: FloatArray, start: FloatArray) -> FloatArray:
    """Newton's ascent of the concave likelihood; steps are halved so as to rise, within bounds."""
    at = start
    for _ in range(_STEPS):
        first, second = _slopes(design @ at, n, k)
        step = np.linalg.solve(-(design.T * second) @ design, design.T @ first)
        share, here = 1.0, _height(design @ at, n, k)
        while _height(design @ (at + share * step), n, k) < here - 1e-12 * abs(here):
            share *= 0.5
        at = at + share * step
        if np.all(np.abs(share * step) <= _SETTLED * (1.0 + np.abs(at))):
            break
    return at


def _checked(
    inbreeding: Numbers, born: Numbers, lived: Numbers
) -> tuple[FloatArray, FloatArray, FloatArray]:
    f, n, k = np.broadcast_arrays(floats(inbreeding), floats(born), floats(lived))
    if np.any((k < 0.0) | (k > n)):
        raise ValueError("young that lived must lie between 0 and the young born in each class")
    there = n > 0.0
    f, n, k = f[there], n[there], k[there]
    if f.size == 0 or np.ptp(f) == 0.0:
        raise ValueError("at least two different inbreeding coefficients are needed")
    if not np.any(k < n):
        raise ValueError("every young lived: there is no loss to fit")
    if np.ptp(f[k > 0.0]) == 0.0 if np.any(k > 0.0) else True:
        raise ValueError("young lived in fewer than two classes of inbreeding: no finite slope")
    return f, n, k


def fit_depression(inbreeding: Numbers, born: Numbers, lived: Numbers) -> DepressionFit:
    """Fit A and B by maximum likelihood with a log link.

    Parameters
    ----------
    inbreeding, born, lived : (C,) array
        F, young born and young that lived in each class (or 1 and 0/1 for single young).

    Returns
    -------
    DepressionFit
        One fit; B may be below 0 (young of inbred parents lived better).

    Raises
    ------
    ValueError
        If counts are impossible, F doesn't vary, no young died, or young lived in one class of F
        only, so that no finite slope fits.
    """
    f, n, k = _checked(inbreeding, born, lived)
    best = _on_a_bound(f, n, k)
    at_bound, covariance = best is not None, np.full((2, 2), np.nan)
    if best is None:
        free = np.column_stack([np.ones_like(f), f])
        survived = float(np.sum(k)) / float(np.sum(n))
        best = _climb(free, n, k, np.array([-np.log(survived), 0.0]))
        second = _slopes(free @ best, n, k)[1]
        covariance = np.linalg.inv(-(free.T * second) @ free)
    height = float(log_likelihood(f, n, k, best[0], best[1]))
    return DepressionFit(float(best[0]) + 0.0, float(best[1]), covariance, height, at_bound)


def _on_a_bound(f: FloatArray, n: FloatArray, k: FloatArray) -> FloatArray | None:
    """Return A, B with survival 1 at the lowest or highest F, if that is the best of all.

    Best on the bound, and the likelihood falls on leaving it: enough, since it is concave.
    """
    for end, sign in ((float(np.min(f)), 1.0), (float(np.max(f)), -1.0)):
        if np.any((f == end) & (k < n)):
            continue  # young died there: survival isn't 1
        away = sign * (f - end)
        slope = float(_climb(away[:, np.newaxis], n, k, np.array([1.0]))[0])
        if np.sum(_slopes(slope * away, n, k)[0]) <= 0.0:
            return np.array([-sign * slope * end, sign * slope])
    return None


def load_between(survival: Numbers, survival_inbred: Numbers, difference: Numbers) -> FloatArray:
    """Return haploid B = ln(S / S_inbred) / difference in F; (...), two classes only."""
    ratio = np.log(floats(survival)) - np.log(floats(survival_inbred))
    return ratio / floats(difference)


def load_implied_by_logit(slope: Numbers, baseline_survival: Numbers, f: Numbers) -> FloatArray:
    """Return the haploid B between 0 and F that a *logistic* regression implies.

    ln(S(0) / S(F)) / F with logit S(F) = logit S(0) + slope F: it hangs on the baseline, so the
    slope of a logistic regression must never be used as lethal equivalents.

    Parameters
    ----------
    slope : (...) array
        Logistic coefficient of F, below 0 for depression.
    baseline_survival : (...) array
        Survival at F = 0, 0 to 1, both excluded.
    f : (...) array
        F at which the two are compared, above 0.

    Returns
    -------
    (...) array
        Per *haploid* genome.
    """
    start = floats(baseline_survival)
    return load_between(start, expit(logit(start) + floats(slope) * floats(f)), f)
