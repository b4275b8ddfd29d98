"""Rules for choosing under risk and under deep uncertainty, and what knowing more is worth.

They order plans by what a person says they value; they decide nothing. Payoffs are larger = better:
turn costs round first. Sources: Pratt 1964; Keeney & Raiffa 1976; Savage 1951; Hurwicz 1951; Raiffa
& Schlaifer 1961; Runge, Converse & Lyons 2011 (Biol. Conserv. 144:1214), from memory.
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total

_STRAIGHT = 1e-6


def utility(x: Numbers, risk_aversion: Numbers) -> FloatArray:
    """Return (1 - e^{-rho x}) / (1 - e^{-rho}), x itself at rho = 0.

    Parameters
    ----------
    x : (...) array
        Payoff between a fixed worst (0) and best (1).
    risk_aversion : (...) array
        rho: above 0 averse, below 0 seeking.

    Returns
    -------
    (...) array
        0 at x = 0, 1 at x = 1. Constant absolute risk aversion.
    """
    x_, rho = floats(x), floats(risk_aversion)
    straight = np.abs(rho) < _STRAIGHT
    safe = np.where(straight, 1.0, rho)
    near = x_ + 0.5 * rho * x_ * (1.0 - x_)
    return np.where(straight, near, np.expm1(-safe * x_) / np.expm1(-safe))[()]


def certainty_equivalent(x: Numbers, chances: Numbers, risk_aversion: Numbers) -> FloatArray:
    """Return the sure payoff worth as much as a gamble: -ln(1 - EU (1 - e^{-rho})) / rho.

    Parameters
    ----------
    x, chances : (..., K) array
        Payoffs, 0 to 1, and their probabilities, summing to 1.
    risk_aversion : (...) array
        rho.

    Returns
    -------
    (...) array
        Below the mean for rho above 0.

    Raises
    ------
    ValueError
        If probabilities don't sum to 1.
    """
    p, x_, rho = _probabilities(chances), floats(x), floats(risk_aversion)
    straight = np.abs(rho) < _STRAIGHT
    safe = np.where(straight, 1.0, rho)
    mean = total(p * x_)
    spread = total(p * (x_ - mean[..., np.newaxis]) ** 2)
    curved = -np.log(total(p * np.exp(-safe[..., np.newaxis] * x_))) / safe
    return np.where(straight, mean - 0.5 * rho * spread, curved)[()]


def _probabilities(chances: Numbers) -> FloatArray:
    p = floats(chances)
    if np.any(p < 0.0) or not np.allclose(total(p), 1.0, rtol=0.0, atol=1e-9):
        raise ValueError("probabilities must not be negative and must sum to 1")
    return p


def worst_case(payoffs: Numbers) -> FloatArray:
    """Return each action's smallest payoff (maximin picks the largest); (..., A, S) -> (..., A)."""
    lowest: FloatArray = np.min(floats(payoffs), axis=-1)
    return lowest


def best_case(payoffs: Numbers) -> FloatArray:
    """Return each action's largest payoff (maximax picks the largest); (..., A, S) -> (..., A)."""
    highest: FloatArray = np.max(floats(payoffs), axis=-1)
    return highest


def equal_weights(payoffs: Numbers) -> FloatArray:
    """Return each action's mean over scenarios taken as equally likely (Laplace)."""
    mean: FloatArray = np.mean(floats(payoffs), axis=-1)
    return mean


def hurwicz(payoffs: Numbers, optimism: Numbers) -> FloatArray:
    """Return optimism * best + (1 - optimism) * worst; (..., A, S), float -> (..., A)."""
    share = floats(optimism)
    return share * best_case(payoffs) + (1.0 - share) * worst_case(payoffs)


def greatest_regret(payoffs: Numbers) -> FloatArray:
    """Return each action's largest regret over scenarios; the smallest is chosen (Savage).

    Parameters
    ----------
    payoffs : (..., A, S) array
        Actions, scenarios.

    Returns
    -------
    (..., A) array
        Regret hangs on which actions stand to choice: adding a poor one can change the order.
    """
    x = floats(payoffs)
    regret = np.max(x, axis=-2, keepdims=True) - x
    largest: FloatArray = np.max(regret, axis=-1)
    return largest


def expected(payoffs: Numbers, chances: Numbers) -> FloatArray:
    """Return each action's mean payoff; (..., A, S), (..., S) -> (..., A). Errors as above."""
    return total(floats(payoffs) * _probabilities(chances)[..., np.newaxis, :])


def value_of_perfect_information(payoffs: Numbers, chances: Numbers) -> FloatArray:
    """Return E[best action] - best action's E: the most that knowing the scenario is worth.

    Parameters
    ----------
    payoffs : (..., A, S) array
        Actions, scenarios (or Monte Carlo draws: the same draws for all actions).
    chances : (..., S) array
        Probabilities.

    Returns
    -------
    (...) array
        In the unit of payoffs; not negative.

    Raises
    ------
    ValueError
        If probabilities don't sum to 1.
    """
    p = _probabilities(chances)
    best: FloatArray = np.max(floats(payoffs), axis=-2)
    settled: FloatArray = np.max(expected(payoffs, p), axis=-1)
    return np.maximum(0.0, total(p * best) - settled)


def value_of_signal(payoffs: Numbers, chances: Numbers, likelihood: Numbers) -> FloatArray:
    """Return what a signal seen before the choice is worth (EVSI, EVPPI).

    Parameters
    ----------
    payoffs : (A, S) array
        Actions, scenarios.
    chances : (S,) array
        Probabilities before the signal.
    likelihood : (K, S) array
        P(signal k | scenario); columns sum to 1. A test of a scenario: its sensitivity and 1 -
        specificity; learning for sure which group of scenarios holds: zeros and ones.

    Returns
    -------
    float array ()
        sum_k max_a sum_s P(k, s) payoff - best action's mean; 0 to the value of perfect
        information.

    Raises
    ------
    ValueError
        If probabilities or likelihoods don't sum to 1.
    """
    p, like = _probabilities(chances), floats(likelihood)
    _probabilities(np.swapaxes(like, -1, -2))
    joint = like * p
    by_signal: FloatArray = np.max(floats(payoffs) @ joint.T, axis=0)
    settled: FloatArray = np.max(expected(payoffs, p), axis=-1)
    return np.maximum(0.0, np.sum(by_signal) - settled)


def updated(chances: Numbers, likelihood_of_signal: Numbers) -> FloatArray:
    """Return scenario probabilities after a signal (Bayes); (..., S), (..., S) -> (..., S)."""
    joint = _probabilities(chances) * floats(likelihood_of_signal)
    return joint / total(joint)[..., np.newaxis]
