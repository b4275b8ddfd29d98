"""Female life table as a matrix of age classes, counted once a year just before breeding.

Classes are ages 1 to `last_age`: an animal of the last age breeds and then dies. A newborn enters
class 1 if it survives its first year, so births carry first-year survival. lambda is the yearly
growth factor (dominant eigenvalue). Sources: Lotka 1913; Leslie 1945; Caswell 2001 (Matrix
Population Models), from memory; values checked with independent libraries.
"""

from typing import NamedTuple

import numpy as np
from scipy.special import xlogy

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total

_STEPS = 100
_SETTLED = 4e-16


class GenerationLengths(NamedTuple):
    """Three definitions of generation length, in time steps of the matrix (years).

    `cohort`: mean age of mothers at the births of one cohort; `stable_population`: mean age of
    mothers of the young born in a stable population; `to_grow_by_r0`: ln R0 / ln lambda, its limit
    `cohort` where lambda is 1.
    """

    cohort: FloatArray
    stable_population: FloatArray
    to_grow_by_r0: FloatArray


def _check_ages(first_breeding_age: int, last_age: int) -> None:
    if not 1 <= first_breeding_age <= last_age:
        raise ValueError("ages: 1 <= first breeding age <= last age")


def female_matrix(
    births_per_adult: Numbers,
    first_year_survival: Numbers,
    subadult_survival: Numbers,
    adult_survival: Numbers,
    first_breeding_age: int,
    last_age: int,
) -> FloatArray:
    """Return the female age matrix counted just before breeding.

    Parameters
    ----------
    births_per_adult : (...) array
        Daughters born per adult female and year (share of females breeding * mean young * share of
        females among young).
    first_year_survival, subadult_survival, adult_survival : (...) array
        Yearly survival: newborn to age 1; ages below the first breeding age; from it on.
    first_breeding_age, last_age : int
        Years, 1 <= first_breeding_age <= last_age.

    Returns
    -------
    (..., A, A) array
        A = last_age; column = class now, row = class next year.

    Raises
    ------
    ValueError
        If the ages are out of order.
    """
    _check_ages(first_breeding_age, last_age)
    births = floats(births_per_adult) * floats(first_year_survival)
    subadult, adult = floats(subadult_survival), floats(adult_survival)
    shape = np.broadcast_shapes(births.shape, subadult.shape, adult.shape)
    matrix = np.zeros((*shape, last_age, last_age))
    matrix[..., 0, first_breeding_age - 1 :] = births[..., np.newaxis]
    for age in range(1, last_age):
        matrix[..., age, age - 1] = subadult if age < first_breeding_age else adult
    return matrix


def births_and_survival(matrix: Numbers) -> tuple[FloatArray, FloatArray]:
    """Split an *age* matrix into its births (first row) and its survival (the rest).

    (..., A, A) -> two (..., A, A). Don't use it where animals can stay in the first class.
    """
    survival = np.array(floats(matrix))
    births = np.zeros_like(survival)
    births[..., 0, :] = survival[..., 0, :]
    survival[..., 0, :] = 0.0
    return births, survival


def _geometric(z: FloatArray, terms: int) -> tuple[FloatArray, FloatArray]:
    """Return ln sum_{k < terms} e^{k z} and the mean k of that series, safe for any z."""
    down = -np.abs(z)
    small = np.abs(down) * terms < 1e-4
    safe = np.where(small, -1.0, down)
    log_sum = np.log(np.expm1(terms * safe) / np.expm1(safe))
    mean = terms / -np.expm1(-terms * safe) - 1.0 / -np.expm1(-safe)
    near, half, curve = np.where(small, down, 0.0), 0.5 * (terms - 1), (terms**2 - 1) / 24
    log_sum = np.where(small, np.log(terms) + half * near + curve * near**2, log_sum)
    mean = np.where(small, half + 2.0 * curve * near, mean)
    up = z > 0.0
    return log_sum + (terms - 1) * np.where(up, z, 0.0), np.where(up, terms - 1 - mean, mean)


def _euler_lotka(
    births: FloatArray, subadult: FloatArray, adult: FloatArray, first: int, last: int
) -> tuple[FloatArray, FloatArray]:
    """Return ln lambda and the mean age of mothers at it; -inf and `first` where nobody breeds.

    With y = ln lambda the equation is c - first*y + ln sum_k e^{k (ln adult - y)} = 0. It is convex
    and falling in y: Newton's steps from a point left of the root climb to it, never past it.
    """
    with np.errstate(divide="ignore", over="ignore"):
        start = np.log(births) + xlogy(first - 1, subadult)
        log_adult = np.log(adult)
        nobody = np.isneginf(start)
        start = np.where(nobody, 0.0, start)
        y = np.maximum(start / first, (start + xlogy(last - first, adult)) / last)
        for _ in range(_STEPS):
            log_sum, mean = _geometric(log_adult - y, last - first + 1)
            step = (start - first * y + log_sum) / (first + mean)
            y = y + step
            if not np.any(np.abs(step) > _SETTLED * (1.0 + np.abs(y))):
                break
        age = first + _geometric(log_adult - y, last - first + 1)[1]
    return np.where(nobody, -np.inf, y), np.where(nobody, float(first), age)


def _arrays(
    births_per_adult: Numbers, first_year: Numbers, subadult: Numbers, adult: Numbers
) -> tuple[FloatArray, FloatArray, FloatArray]:
    births = floats(births_per_adult) * floats(first_year)
    one, two, three = np.broadcast_arrays(births, floats(subadult), floats(adult))
    return one, two, three


def growth(
    births_per_adult: Numbers,
    first_year_survival: Numbers,
    subadult_survival: Numbers,
    adult_survival: Numbers,
    first_breeding_age: int,
    last_age: int,
) -> FloatArray:
    """Return the yearly growth factor, the dominant eigenvalue of `female_matrix`.

    Solves the Euler-Lotka equation (relative error about 1e-15), so that many draws cost little.

    Parameters
    ----------
    births_per_adult : (...) array
        Daughters born per adult female and year.
    first_year_survival, subadult_survival, adult_survival : (...) array
        Yearly survival.
    first_breeding_age, last_age : int
        Years, 1 <= first_breeding_age <= last_age.

    Returns
    -------
    (...) array
        Growth per year; 0 where nobody breeds.

    Raises
    ------
    ValueError
        If the ages are out of order.
    """
    _check_ages(first_breeding_age, last_age)
    rates = _arrays(births_per_adult, first_year_survival, subadult_survival, adult_survival)
    return np.exp(_euler_lotka(*rates, first_breeding_age, last_age)[0])


def mean_age_of_mothers(
    births_per_adult: Numbers,
    first_year_survival: Numbers,
    subadult_survival: Numbers,
    adult_survival: Numbers,
    first_breeding_age: int,
    last_age: int,
) -> FloatArray:
    """Return the mean age of mothers of newborn in the stable population, in years.

    Arguments and errors as in `growth`; the first breeding age where nobody breeds.
    """
    _check_ages(first_breeding_age, last_age)
    rates = _arrays(births_per_adult, first_year_survival, subadult_survival, adult_survival)
    return _euler_lotka(*rates, first_breeding_age, last_age)[1]


def dominant_eigenvalue(matrix: Numbers) -> FloatArray:
    """Return the largest eigenvalue in modulus of a non-negative matrix; (..., A, A) -> (...)."""
    largest: FloatArray = np.max(np.abs(np.linalg.eigvals(floats(matrix))), axis=-1)
    return largest


def _leading_vector(matrix: FloatArray) -> FloatArray:
    """Return the eigenvector of the eigenvalue with the largest real part (Perron's), real."""
    values, vectors = np.linalg.eig(matrix)
    at = np.argmax(values.real, axis=-1)[..., np.newaxis, np.newaxis]
    vector = np.take_along_axis(vectors, at, axis=-1)[..., 0].real
    return np.asarray(vector, dtype=np.float64)


def stable_ages(matrix: Numbers) -> FloatArray:
    """Return the stable distribution over classes, summing to 1; (..., A, A) -> (..., A)."""
    vector = _leading_vector(floats(matrix))
    return vector / total(vector)[..., np.newaxis]


def reproductive_values(matrix: Numbers) -> FloatArray:
    """Return reproductive values, 1 for the first class; (..., A, A) -> (..., A).

    Divided by their mean over the stable distribution they are what the removal of one animal of
    each class costs a donor (Fisher 1930; Caswell 2001, from memory).
    """
    vector = _leading_vector(np.swapaxes(floats(matrix), -1, -2))
    return vector / vector[..., :1]


def net_reproduction(births: Numbers, survival: Numbers) -> FloatArray:
    """Return R0, daughters per female over her life: dominant eigenvalue of F (I - U)^-1.

    Parameters
    ----------
    births, survival : (..., A, A) array
        F and U, the two parts of a matrix F + U; see `births_and_survival` for age matrices.

    Returns
    -------
    (...) array
        Females of class 1 per female of class 1 and generation. Source: Caswell 2001, from memory.
    """
    u = floats(survival)
    lifetimes = np.linalg.inv(np.eye(u.shape[-1]) - u)
    return dominant_eigenvalue(floats(births) @ lifetimes)


def generation_lengths(births: Numbers, survival: Numbers) -> GenerationLengths:
    """Return three generation lengths of a matrix whose births all enter the first class.

    Parameters
    ----------
    births, survival : (..., A, A) array
        F and U. Growth and R0 must be above 0.

    Returns
    -------
    GenerationLengths
        Each (...), in time steps. Source: Caswell 2001; Bienvenu & Legendre 2015, from memory.
    """
    f, u = floats(births), floats(survival)
    lifetimes = np.linalg.inv(np.eye(u.shape[-1]) - u)
    r0 = (f @ lifetimes)[..., 0, 0]
    cohort = (f @ lifetimes @ lifetimes)[..., 0, 0] / r0
    whole = f + u
    growth_factor, ages, values = (
        dominant_eigenvalue(whole),
        stable_ages(whole),
        reproductive_values(whole),
    )
    born = total(values * (f @ ages[..., np.newaxis])[..., 0])
    stable = growth_factor * total(values * ages) / born
    rate = np.log(growth_factor)
    still = np.abs(rate) < 1e-8  # below it the ratio of two logs has lost its digits
    by_r0 = np.where(still, cohort, np.log(r0) / np.where(still, 1.0, rate))[()]
    return GenerationLengths(cohort, stable, by_r0)
