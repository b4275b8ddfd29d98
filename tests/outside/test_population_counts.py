"""Trends and quasi-extinction of counted populations (sources and licences: data/NOTICE)."""

import csv
import json
from pathlib import Path

import numpy as np
import pytest
import statsmodels.api as sm
from numpy.testing import assert_allclose
from scipy import stats

from rescue_planner.theory import quasi_extinction as quasi

DATA = Path(__file__).parent / "data"
NAMES = ("counts_grizzly", "counts_lynx", "counts_kangaroo_rat")


def load(name):
    """Return years and counts above 0, and the reference."""
    with (DATA / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        rows = [[float(x) for x in row[:2]] for row in list(csv.reader(file))[1:]]
    years, counts = np.array([row for row in rows if row[1] > 0]).T
    known = json.loads((DATA / f"{name}.json").read_text(encoding="utf-8"))
    return years, counts, known["reference"]


@pytest.mark.parametrize("name", NAMES)
def test_that_trends_are_the_reference(name):
    """The kangaroo rats have gaps: uneven steps."""
    years, counts, known = load(name)
    found = quasi.fit_counts(years, counts)
    tolerance = known["tolerance"]
    assert_allclose(found.mu, known["mu"], rtol=tolerance)
    assert_allclose(found.variance, known["sigma2_unbiased"], rtol=tolerance)
    assert_allclose(found.mu_error, known["se_mu"], rtol=tolerance)
    assert_allclose((found.mu_low, found.mu_high), known["mu_ci95"], rtol=tolerance)
    assert_allclose((found.variance_low, found.variance_high), known["sigma2_ci95"], rtol=tolerance)


@pytest.mark.parametrize("name", NAMES)
def test_that_trends_are_statsmodels_regression(name):
    years, counts, _ = load(name)
    root = np.sqrt(np.diff(years))
    fit = sm.OLS(np.diff(np.log(counts)) / root, root).fit()
    found = quasi.fit_counts(years, counts)
    assert_allclose(found.mu, fit.params[0], rtol=1e-10)
    assert_allclose(found.mu_error, fit.bse[0], rtol=1e-10)
    assert_allclose(found.variance, fit.mse_resid, rtol=1e-10)
    assert_allclose((found.mu_low, found.mu_high), fit.conf_int()[0], rtol=1e-9)


@pytest.mark.parametrize("name", NAMES)
def test_that_the_chance_of_a_tenfold_fall_is_the_reference(name):
    _, _, known = load(name)
    stated, mu, variance = known["quasi_ext_10pct"], known["mu"], known["sigma2_unbiased"]
    years = [float(y) for y in stated["prob_by_years"]]
    found = quasi.chance_by(np.log(10), mu, variance, years)
    # the smallest chance, 4e-21, is a difference of logs of about -47
    assert_allclose(found, list(stated["prob_by_years"].values()), rtol=1e-7)
    assert_allclose(quasi.chance_ever(np.log(10), mu, variance), stated["prob_ever"], rtol=1e-9)
    time = quasi.mean_time_if_reached(np.log(10), mu)
    assert_allclose(time, stated["mean_time_if_hit"], rtol=1e-9)


def test_that_the_grizzly_trend_is_the_printed_one():
    """Morris & Doak 2002, from memory: 0.02134 and 0.01305."""
    found = quasi.fit_counts(*load("counts_grizzly")[:2])
    assert (round(found.mu, 5), round(found.variance, 5)) == (0.02134, 0.01305)


def test_that_the_grizzlys_chance_of_ever_falling_to_twenty_is_the_handbooks():
    """Dennis, Munholland & Scott 1991, from memory: 99 females now, 20 the threshold."""
    entries = json.loads((DATA / "handbook_fitness_values.json").read_text(encoding="utf-8"))
    known = next(e for e in entries["entries"] if e["id"] == "growth_rate")
    given = known["inputs"]
    distance = np.log(given["Nc"] / given["Nx"])
    found = quasi.chance_ever(distance, given["mu"], given["sigma2"])
    assert_allclose(found, known["computed"], rtol=5e-8)  # printed to eight figures


@pytest.mark.parametrize(("mu", "variance"), [(-0.02, 0.04), (-0.1, 0.3)])
def test_that_times_to_a_threshold_are_scipys_inverse_gaussian(mu, variance):
    d, years = np.log(10), np.array([1.0, 10.0, 30.0, 200.0])
    mean, scale = d / -mu, d**2 / variance
    stated = stats.invgauss.cdf(years, mean / scale, scale=scale)
    assert_allclose(quasi.chance_by(d, mu, variance, years), stated, rtol=1e-9)
