"""Fitness, demography and decisions against statsmodels, scipy.stats and mpmath."""

import json
from pathlib import Path

import mpmath
import numpy as np
import pytest
import statsmodels.api as sm
from numpy.testing import assert_allclose
from scipy import stats
from statsmodels.stats.proportion import power_proportions_2indep, proportion_confint

from rescue_planner.theory import (
    branching,
    ceiling_chain,
    decisions,
    depression_fit,
    line_cross,
    mixing_load,
    mutation_effects,
    outcomes,
    purging,
    sample_size,
    weather,
)

DATA = Path(__file__).parent / "data"
ENTRIES = {
    e["id"]: e
    for e in json.loads((DATA / "handbook_fitness_values.json").read_text(encoding="utf-8"))[
        "entries"
    ]
}


@pytest.mark.filterwarnings("ignore:The Log link function does not respect")
def test_that_depression_is_statsmodels_binomial_fit_with_a_log_link():
    f = np.array([0.0, 0.0625, 0.125, 0.25, 0.375])
    born, lived = np.array([120, 60, 80, 45, 30]), np.array([97, 45, 58, 26, 13])
    design = sm.add_constant(f)
    family = sm.families.Binomial(link=sm.families.links.Log())
    fit = sm.GLM(np.column_stack([lived, born - lived]), design, family=family).fit(
        start_params=[-0.2, -1.0], tol=1e-12, method="newton"
    )
    found = depression_fit.fit_depression(f, born, lived)
    assert_allclose((found.baseline, found.load_haploid), -fit.params, rtol=1e-7)
    assert_allclose(found.covariance, fit.cov_params(), rtol=1e-6)
    constant = np.sum(
        np.log([float(mpmath.binomial(int(n), int(k))) for n, k in zip(born, lived, strict=True)])
    )
    assert_allclose(found.log_likelihood + constant, fit.llf, rtol=1e-9)


def test_that_the_joint_scaling_test_is_statsmodels_weighted_regression():
    names = ("P1", "P2", "F1", "F2", "BC1", "BC2")
    p, h = np.array([line_cross.GENERATIONS[name] for name in names]).T
    means, errors = [0.62, 0.48, 0.74, 0.58, 0.64, 0.55], [0.02, 0.025, 0.03, 0.03, 0.03, 0.03]
    found = line_cross.fit_crosses(means, errors, p, h)
    fit = sm.WLS(means, line_cross.design(p, h)[:, :3], weights=1 / np.square(errors)).fit()
    assert_allclose(found.estimates, fit.params, rtol=1e-11)
    assert_allclose(found.errors, fit.bse / np.sqrt(fit.scale), rtol=1e-10)
    assert_allclose(found.chi2, fit.ssr, rtol=1e-10)
    assert_allclose(found.p_value, stats.chi2.sf(found.chi2, 3), rtol=1e-12)


@pytest.mark.parametrize(("k", "n"), [(0, 100), (5, 1000), (37, 500), (250, 500), (12, 12)])
def test_that_intervals_of_a_share_are_those_of_two_libraries(k, n):
    wilson = sample_size.wilson_interval(k, n)
    assert_allclose(wilson, proportion_confint(k, n, method="wilson"), rtol=1e-11, atol=1e-15)
    test = stats.binomtest(k, n)
    assert_allclose(wilson, test.proportion_ci(method="wilson"), rtol=1e-11, atol=1e-15)
    exact = sample_size.clopper_pearson_interval(k, n)
    assert_allclose(exact, proportion_confint(k, n, method="beta"), rtol=1e-10)
    assert_allclose(exact, test.proportion_ci(method="exact"), rtol=1e-9)


@pytest.mark.parametrize(("one", "two"), [(0.10, 0.05), (0.20, 0.15), (0.05, 0.04)])
def test_that_so_many_runs_are_the_fewest_with_statsmodels_power(one, two):
    n = int(sample_size.runs_to_tell_apart(one, two))
    power = [
        power_proportions_2indep(one - two, two, runs, return_results=False) for runs in (n - 1, n)
    ]
    assert power[0] < 0.8 <= power[1]


def test_that_rates_are_distributed_as_scipys():
    alpha, beta = weather.beta_parameters(0.8, 0.1)
    assert_allclose(stats.beta.stats(alpha, beta), (0.8, 0.01), rtol=1e-12)
    # 5 and 95 % points stated with the method, six figures
    assert_allclose(stats.beta.ppf([0.05, 0.95], alpha, beta), [0.61461, 0.938897], rtol=1e-5)
    mu, sigma = weather.lognormal_parameters(1.2, 0.4)
    mean, variance = stats.lognorm.stats(sigma, scale=np.exp(mu))
    assert_allclose((mean, np.sqrt(variance) / mean), (1.2, 0.4), rtol=1e-12)
    assert_allclose(
        weather.chance_all_die(10, 0.5, 0.25),
        stats.betabinom.pmf(0, 10, *weather.beta_parameters(0.5, 0.25)),
        rtol=1e-10,
    )
    survivors = stats.betabinom.var(20, alpha, beta)
    assert_allclose(weather.survivors_variance(20, 0.8, 0.1), survivors, rtol=1e-12)


def test_that_effects_are_scipys_gamma():
    low, high = np.array([0, 1e-3, 1e-2]), np.array([1e-3, 1e-2, 0.5])
    judge = stats.gamma(0.23, scale=0.0427 / 0.23)
    found = mutation_effects.share_of_effects(low, high, 0.0427, 0.23)
    assert_allclose(found, judge.cdf(high) - judge.cdf(low), rtol=1e-11)
    expected = judge.expect(mutation_effects.dominance)
    assert_allclose(mutation_effects.mean_dominance(0.0427, 0.23), expected, rtol=1e-6)


def test_that_a_chain_under_a_ceiling_is_made_of_scipys_distributions():
    matrix = ceiling_chain.one_sex_matrix(0.8, 0.25, 6, survival_sd=0.1)
    alpha, beta = weather.beta_parameters(0.8, 0.1)
    for n in range(1, 7):
        lived = stats.betabinom.pmf(np.arange(n + 1), n, alpha, beta)
        for to in range(6):
            stated = sum(p * stats.poisson.pmf(to - k, 0.25 * n) for k, p in enumerate(lived))
            assert_allclose(matrix[n, to], stated, rtol=1e-10)


def test_that_settled_newcomers_are_scipys_negative_binomial():
    judge = stats.nbinom(0.1 / 0.2, 1 - 0.2 / 0.25)
    stated = (judge.pmf(0), judge.mean(), judge.var())
    assert_allclose(branching.birth_death_with_newcomers(0.2, 0.25, 0.1), stated, rtol=1e-12)


@pytest.mark.parametrize("m", [1.0001, 1.05, 1.5, 4.0])
def test_that_ultimate_extinction_is_mpmaths_root(m):
    with mpmath.workdps(40):
        m_ = mpmath.mpf(m)
        q = -mpmath.lambertw(-m_ * mpmath.exp(-m_)).real / m_
        survival = float(1 - q)
    # W has a square-root branch point at m = 1: half the digits of 1 - q are lost near it
    assert_allclose(1 - branching.poisson_ever(m), survival, rtol=1e-11 / (m - 1))


def test_that_second_order_dominance_is_what_all_averse_utilities_say():
    """Independent: certainty equivalents of the dominating plan are larger at every aversion."""
    z, w = [0.35, 0.4, 0.45, 0.5], [0.2, 0.3, 0.55, 0.65]
    assert outcomes.dominates_second_order(z, w, margin=1e-12)
    rho = np.linspace(0.05, 20, 50)
    quarter = np.full(4, 0.25)
    assert np.all(
        decisions.certainty_equivalent(z, quarter, rho)
        > decisions.certainty_equivalent(w, quarter, rho)
    )


def test_that_purging_is_the_handbooks():
    """Garcia-Dorado 2012, Ballou 1997, from memory; eight digits."""
    known = ENTRIES["purged_inbreeding"]
    found = purging.purged_inbreeding(known["inputs"]["N"], known["inputs"]["d"], 20)
    at = [1, 6, 11, 16, 20]
    rows = np.array(known["computed"])
    assert_allclose(found.inbreeding[at], rows[:, 0], atol=5.1e-9)
    assert_allclose(found.purged[at], rows[:, 1], atol=5.1e-9)
    entry = ENTRIES["ancestral_inbreeding"]
    given = [entry["inputs"][key] for key in ("fa_s", "F_s", "fa_d", "F_d")]
    assert_allclose(purging.ancestral_inbreeding(*given), entry["computed"], rtol=1e-14)


def test_that_heterosis_is_halved_as_in_the_handbook():
    """Falconer & Mackay 1996 chapter 14, from memory."""
    entry = ENTRIES["heterosis_F1_F2"]["computed"]
    q1, q2, s, h = [0.9, 0.2], [0.1, 0.7], [0.05, 0.3], [0.1, 0.2]
    loads, gain = mixing_load.cross_loads(q1, q2, s, h), mixing_load.heterosis(q1, q2, s, h)
    middle = 0.5 * (loads.first + loads.second)
    assert_allclose((middle - loads.f2) / gain, entry["F2"], rtol=1e-12)
    weighted = 0.75 * loads.first + 0.25 * loads.second
    assert_allclose((weighted - loads.backcross) / gain, entry["B1"], rtol=1e-12)
