"""Wright's island: inbreeding of a population that receives from a large constant donor.

Judges: the variance of a dense chain built with scipy.stats; resampling by chance done elsewhere,
with standard errors (data/simulated_drift_and_flow.json); the textbook rule.
"""

import json
from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.stats import binom

from rescue_planner.theory import chain, diversity, flow, identity, size

SIMULATED = json.loads(
    (Path(__file__).parent / "data" / "simulated_drift_and_flow.json").read_text(encoding="utf-8")
)


def settled_dense(n, m, donor):
    """Stationary distribution of gene-copy counts by a linear solve on a dense scipy matrix."""
    x = (1 - m) * np.arange(2 * n + 1) / (2 * n) + m * donor
    matrix = binom.pmf(np.arange(2 * n + 1)[np.newaxis, :], 2 * n, x[:, np.newaxis])
    system = np.vstack([matrix.T - np.eye(2 * n + 1), np.ones(2 * n + 1)])
    return np.linalg.lstsq(system, np.append(np.zeros(2 * n + 1), 1.0), rcond=None)[0]


@pytest.mark.parametrize(("n", "m"), [(10, 0.1), (25, 0.04), (20, 0.05), (10, 0.5)])
def test_that_fst_is_what_an_exact_stationary_distribution_holds(n, m):
    """1 - (diversity of two distinct copies) / (donor's diversity), any donor frequency."""
    for donor in (0.3, 0.5):
        mass = settled_dense(n, m, donor)
        distinct = chain.heterozygosity(mass) * 2 * n / (2 * n - 1)
        judge = 1 - distinct / (2 * donor * (1 - donor))
        assert_allclose(flow.fst_equilibrium(n, m), judge, rtol=1e-10)


@pytest.mark.parametrize("row", SIMULATED["island_model"]["table"], ids=lambda row: f"N={row['N']}")
def test_that_both_census_points_are_met(row):
    """After migration, and after drift but before migration: the rule 1/(1+4Nm) lies between."""
    n, m = row["N"], row["m"]
    after_flow = flow.fst_equilibrium(n, m)
    before_flow = after_flow / (1 - m) ** 2
    assert_allclose(after_flow, row["Fst_exact_counted_after_migration"], rtol=1e-12)
    assert_allclose(before_flow, row["Fst_exact_counted_after_drift_before_migration"], rtol=1e-12)
    assert after_flow < flow.fst_equilibrium_approximate(n, m) < before_flow


def test_that_resampling_by_chance_finds_the_same_fst():
    """200,000 runs; 4 standard errors."""
    run = SIMULATED["island_model"]["mc_after_migration"]
    got = flow.fst_equilibrium(20, 0.05)
    assert abs(got - run["mean"]) <= 4 * run["se"]


@pytest.mark.parametrize("run", SIMULATED["het_decay_const_N"], ids=lambda run: f"N={run['N']}")
def test_that_resampling_by_chance_loses_the_same_diversity(run):
    """200,000 runs each; 4 standard errors, and the exact chain of other code."""
    n, t, p = run["N"], run["t"], run["p0"]
    kept = diversity.kept(np.full(t, n))[-1] * 2 * p * (1 - p)
    assert abs(kept - run["mean"]) <= 4 * run["se"]
    mass = chain.first_step(p, 2 * n)
    for _ in range(t - 1):
        mass = chain.step(mass, chain.frequencies(2 * n), 2 * n)
    assert_allclose(chain.heterozygosity(mass), run["markov_chain_exact"], rtol=1e-12)
    gone = 1 - chain.share_kept(mass) + chain.share_fixed(mass)
    assert_allclose(gone, run["prob_fixed_or_lost"], rtol=1e-12)


def test_that_changing_sizes_lose_what_resampling_finds():
    run = SIMULATED["het_decay_varying_N"]
    assert_allclose(size.harmonic_mean(run["N"]), run["harmonic_mean"], rtol=1e-13)
    start = 2 * 0.5 * 0.5  # both alleles equally common
    assert abs(start * diversity.kept(run["N"])[-1] - run["mean"]) <= 4 * run["se"]


def test_that_a_pulse_then_drift_keeps_what_resampling_finds():
    run = SIMULATED["het_after_pulse"]
    r, d, m = run["pR"], run["pD"], run["m"]
    between = r * (1 - d) + d * (1 - r)
    pool = diversity.pooled(2 * r * (1 - r), [between], [[2 * d * (1 - d)]], [m])
    assert_allclose(pool, run["H_mix_direct"], rtol=1e-13)
    after = pool * diversity.kept(np.full(run["t"], run["N"]))[-1]
    assert abs(after - run["after_drift"]["mean"]) <= 4 * run["after_drift"]["se"]


@pytest.mark.parametrize("row", SIMULATED["fixation"]["table"])
def test_that_fixation_chances_are_those_of_other_code(row):
    """Exact chains made elsewhere; gene-copy fitness 1 + s, one copy at the start by default."""
    n, s = row["N"], row["s_per_gene_copy"]
    x = chain.frequencies(2 * n)
    end = chain.absorption(x * (1 + s) / (1 + s * x))
    start = round(row.get("p0", 1 / (2 * n)) * 2 * n)
    assert_allclose(end.fixation[start], row["exact_markov"], rtol=1e-10)


def test_that_identity_climbs_to_the_same_end():
    f = 0.0
    for _ in range(3000):
        f = identity.with_flow_after(f, 25, 0.04)
    assert_allclose(f, flow.fst_equilibrium(25, 0.04), rtol=1e-13)
