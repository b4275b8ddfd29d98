"""Good and bad years: distributions of yearly rates, and die-offs.

A year's rate is drawn once and shared by all animals of a class. SDs are *process* SDs: sampling
and demographic variance taken off, die-off years left out if die-offs are added. Sources: Caswell
2001; White 2000; Gould & Nichols 1998; Tuljapurkar 1982; Reed et al. 2003 (Anim. Conserv. 6:109),
formulas from memory, moments derived.
"""

import numpy as np
from scipy.special import betaln, expit, logit

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total

_NODES = 80
_STEPS = 100
_SETTLED = 1e-13


def largest_sd(mean: Numbers) -> FloatArray:
    """Return sqrt(mean (1 - mean)): a beta's SD must stay below it; (...)."""
    mu = floats(mean)
    return np.sqrt(mu * (1.0 - mu))


def beta_parameters(mean: Numbers, sd: Numbers) -> tuple[FloatArray, FloatArray]:
    """Return alpha and beta of the beta distribution with this mean and SD.

    c = mean (1 - mean) / sd^2 - 1, alpha = mean c, beta = (1 - mean) c.

    Parameters
    ----------
    mean, sd : (...) array
        Of a yearly rate; 0 < mean < 1 and 0 < sd < `largest_sd`.

    Returns
    -------
    tuple of (...) arrays
        alpha, beta.

    Raises
    ------
    ValueError
        If no beta has these moments: refused, never clipped.
    """
    mu, spread = floats(mean), floats(sd)
    if np.any((mu <= 0.0) | (mu >= 1.0) | (spread <= 0.0) | (spread >= largest_sd(mu))):
        raise ValueError("no beta has this mean and SD: sd^2 must be below mean * (1 - mean)")
    c = mu * (1.0 - mu) / spread**2 - 1.0
    return mu * c, (1.0 - mu) * c


def logit_normal_moments(
    centre: Numbers, scale: Numbers, nodes: int = _NODES
) -> tuple[FloatArray, FloatArray]:
    """Return mean and SD of 1 / (1 + exp(-X)), X normal, by Gauss-Hermite quadrature; (...)."""
    points, weights = np.polynomial.hermite.hermgauss(nodes)
    x = floats(centre)[..., np.newaxis] + np.sqrt(2.0) * floats(scale)[..., np.newaxis] * points
    share, rate = weights / np.sqrt(np.pi), expit(x)
    mean = total(share * rate)
    variance = total(share * (rate - mean[..., np.newaxis]) ** 2)
    return mean, np.sqrt(variance)


def logit_normal_parameters(mean: float, sd: float) -> tuple[float, float]:
    """Return centre and scale on the logit scale that give this mean and SD.

    Newton's steps with a numerical Jacobian from the delta method's start, sd / (mean (1 - mean)).

    Parameters
    ----------
    mean, sd : float
        Of the rate; 0 < mean < 1, 0 < sd up to about 0.7 of `largest_sd`.

    Returns
    -------
    tuple of float
        Centre and scale.

    Raises
    ------
    ValueError
        If the moments are not feasible, or so near the limit that the quadrature fails (moments
        off by more than 1e-6 with twice the points).
    """
    if not (0.0 < mean < 1.0 and 0.0 < sd < float(largest_sd(mean))):
        raise ValueError("no rate has this mean and SD: sd^2 must be below mean * (1 - mean)")
    wanted = np.array([mean, sd])
    at = np.array([float(logit(mean)), np.log(sd / (mean * (1.0 - mean)))])

    def moments(z: FloatArray) -> FloatArray:
        return np.array([float(v) for v in logit_normal_moments(z[0], np.exp(z[1]))])

    for _ in range(_STEPS):
        gap = wanted - moments(at)
        if np.all(np.abs(gap) < _SETTLED):
            break
        h = 1e-6
        columns = [(moments(at + h * e) - moments(at - h * e)) / (2.0 * h) for e in np.eye(2)]
        at = at + np.clip(np.linalg.solve(np.column_stack(columns), gap), -1.0, 1.0)
    finer = logit_normal_moments(at[0], np.exp(at[1]), 2 * _NODES)
    if not np.allclose(finer, wanted, rtol=1e-6, atol=0.0):
        raise ValueError("no logit-normal found with this mean and SD: the SD is too large")
    return float(at[0]), float(np.exp(at[1]))


def lognormal_parameters(mean: Numbers, cv: Numbers) -> tuple[FloatArray, FloatArray]:
    """Return location and scale of a lognormal: sigma^2 = ln(1 + CV^2), mu = ln(mean) - sigma^2/2.

    Parameters
    ----------
    mean, cv : (...) array
        Mean, above 0, and SD / mean of a fecundity.

    Returns
    -------
    tuple of (...) arrays
        mu and sigma of the logarithm.
    """
    variance = np.log1p(floats(cv) ** 2)
    return np.log(floats(mean)) - 0.5 * variance, np.sqrt(variance)


def survivors_variance(animals: Numbers, mean: Numbers, sd: Numbers) -> FloatArray:
    """Return n mu (1-mu) + n (n-1) sd^2, the variance of survivors under a shared rate; (...).

    With a rate drawn for each animal by itself the second term would vanish, and the bad years
    with it.
    """
    n, mu = floats(animals), floats(mean)
    return n * mu * (1.0 - mu) + n * (n - 1.0) * floats(sd) ** 2


def process_variance(observed_sd: Numbers, mean: Numbers, animals: Numbers) -> FloatArray:
    """Return the variance of a yearly rate once chance in n single fates is taken off.

    (n V - mean (1 - mean)) / (n - 1), V the variance of the yearly shares k/n, the reverse of
    `survivors_variance`.

    Parameters
    ----------
    observed_sd, mean : (...) array
        SD among years and mean of the observed shares.
    animals : (...) array
        n watched each year, above 1.

    Returns
    -------
    (...) array
        Rate squared; below 0 where the years differ by no more than chance: shown as it is.
    """
    mu, n = floats(mean), floats(animals)
    return (n * floats(observed_sd) ** 2 - mu * (1.0 - mu)) / (n - 1.0)


def chance_all_die(animals: Numbers, mean: Numbers, sd: Numbers) -> FloatArray:
    """Return E[(1 - S)^n], S beta with this mean and SD shared by n animals.

    Parameters
    ----------
    animals : (...) array
        n.
    mean, sd : (...) array
        As in `beta_parameters`.

    Returns
    -------
    (...) array
        Probability; (1 - mean)^n would be right for independent fates only.

    Raises
    ------
    ValueError
        As `beta_parameters`.
    """
    alpha, beta = beta_parameters(mean, sd)
    return np.exp(betaln(alpha, beta + floats(animals)) - betaln(alpha, beta))


def long_run_log_growth(growth: Numbers, sd: Numbers) -> FloatArray:
    """Return ln(lambda) - var(lambda) / (2 lambda^2), the growth that lasts (small noise); (...).

    Below ln(lambda): variation costs growth. Tuljapurkar 1982, from memory.
    """
    lam = floats(growth)
    return np.log(lam) - floats(sd) ** 2 / (2.0 * lam**2)


def yearly_chance(chance_per_generation: Numbers, generation_years: Numbers) -> FloatArray:
    """Return 1 - (1 - P)^(1/T): a chance per generation as one per year.

    Parameters
    ----------
    chance_per_generation : (...) array
        P, 0 to 1; about 0.14 in vertebrates for a fall of half or more (Reed et al. 2003).
    generation_years : (...) array
        T, above 0.

    Returns
    -------
    (...) array
        Per year; P / T is only a first look.
    """
    with np.errstate(divide="ignore"):
        return -np.expm1(np.log1p(-floats(chance_per_generation)) / floats(generation_years))


def chance_within(chance_each: Numbers, periods: Numbers) -> FloatArray:
    """Return 1 - (1 - p)^n, the chance of at least one in n independent periods; (...)."""
    with np.errstate(divide="ignore"):
        return -np.expm1(floats(periods) * np.log1p(-floats(chance_each)))
