"""The exact depth, and its tie to the expected depth."""

from __future__ import annotations

import numpy as np
from numpy.testing import assert_allclose
from scipy.stats import binom

from rescue_planner.projection.compare import compare

NEUTRAL = {"name": "marker", "frequency": 0.3, "donor_frequency": {"Mainland": 0.9, "Far shore": 0}}
LOCAL = {
    "name": "dark coat",
    "role": "locally adapted",
    "fitness": [1, 0.95, 0.9],
    "frequency": 0.81,
    "donor_frequency": {"Mainland": 0.1, "Far shore": 0.2},
    "mutation_to": 1e-4,
    "mutation_from": 2e-4,
}
TRICKLE = {"name": "Trickle", "steady": [{"donor": "Mainland", "migrants_per_generation": 1}]}


def test_that_mean_frequency_of_a_neutral_allele_is_the_expected_one(build):
    got = compare(build([TRICKLE], loci=[NEUTRAL]))
    for plan in got.plans:
        exact = got.get(plan, "exact", "allele_frequency:marker")
        expected = got.get(plan, "expected", "allele_frequency:marker")
        assert_allclose(exact.values, expected.values, rtol=1e-12)


def test_that_mean_heterozygosity_of_the_chain_falls_as_the_recursion_says(build):
    """E[2p(1-p)] = 2(mean - mean^2 - var) is H's own recursion where 2Ne is whole."""
    got = compare(build(loci=[NEUTRAL]))
    mean = got.get("No releases", "exact", "allele_frequency:marker").values
    sd = got.get("No releases", "exact", "allele_frequency:marker", "sd").values
    h = 2 * (mean - mean**2 - sd**2)
    kept = got.get("No releases", "expected", "gene_diversity_kept").values
    assert_allclose(h / h[0], kept, rtol=1e-11)


def test_that_the_chain_is_plain_matrix_powers_written_with_scipy(build):
    case = build([TRICKLE], loci=[LOCAL])
    got = compare(case)
    m = (0.5 / 12.5 + 0.5 / 8.5) / 2
    n = 32
    w11, w12, w22 = 1, 0.95, 0.9

    def following(p):
        mixed = (1 - m) * p + m * 0.1
        mean = mixed**2 * w11 + 2 * mixed * (1 - mixed) * w12 + (1 - mixed) ** 2 * w22
        selected = mixed * (mixed * w11 + (1 - mixed) * w12) / mean
        return (1 - 2e-4) * selected + 1e-4 * (1 - selected)

    states = np.arange(n + 1) / n
    mass = binom.pmf(np.arange(n + 1), n, following(0.81))
    matrix = np.array([binom.pmf(np.arange(n + 1), n, following(p)) for p in states])
    for t in range(1, 11):
        if t > 1:
            mass = mass @ matrix
        at = {"mean": mass @ states, "q05": states[np.cumsum(mass) >= 0.05 - 1e-12][0]}
        for statistic, value in at.items():
            series = got.get("Trickle", "exact", "allele_frequency:dark coat", statistic)
            assert_allclose(series.values[t], value, atol=1e-12)
        kept = got.get("Trickle", "exact", "allele_kept:dark coat", "share").values[t]
        assert_allclose(kept, 1 - mass[0], atol=1e-12)


def test_that_the_state_given_is_what_t_zero_shows(build):
    got = compare(build(loci=[LOCAL]))
    at = {
        s: got.get("No releases", "exact", "allele_frequency:dark coat", s).values[0]
        for s in ("mean", "sd", "q05", "q50", "q95")
    }
    assert at == {"mean": 0.81, "sd": 0, "q05": 0.81, "q50": 0.81, "q95": 0.81}
    assert got.get("No releases", "exact", "allele_kept:dark coat", "share").values[0] == 1


def test_that_a_size_below_one_and_a_half_still_has_two_gene_copies(build):
    case = build(loci=[NEUTRAL], recipient={"effective_size": 1})
    series = compare(case).get("No releases", "exact", "allele_frequency:marker", "q95")
    assert set(np.unique(series.values[1:])) <= {0, 0.5, 1}


def test_that_quantiles_never_cross(build):
    got = compare(build([TRICKLE], loci=[LOCAL]))
    rows = [
        got.get("Trickle", "exact", "allele_frequency:dark coat", s).values
        for s in ("q05", "q25", "q50", "q75", "q95")
    ]
    assert np.all(np.diff(rows, axis=0) >= 0)


def test_that_rules_of_the_average_course_stop_flow_in_the_chain_too(build):
    plan = {
        **TRICKLE,
        "name": "Stopped",
        "rules": [{"name": "at once", "when": "donor_ancestry", "below": 0.5, "then": "stop"}],
    }
    got = compare(build([plan], loci=[NEUTRAL]))
    for statistic in ("mean", "q95"):
        a = got.get("Stopped", "exact", "allele_frequency:marker", statistic).values
        b = got.get("No releases", "exact", "allele_frequency:marker", statistic).values
        assert_allclose(a, b, rtol=0)
