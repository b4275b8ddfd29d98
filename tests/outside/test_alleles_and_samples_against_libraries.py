"""Alleles, samples and detection against scipy.stats, hierfstat's numbers, and msprime.

scipy.stats (general-purpose); allelic richness of the Nancy cats by the R package hierfstat (see
data/NOTICE); msprime for islands that exchange. Stochastic checks: seed fixed, |z| below 4.
"""

import json
from pathlib import Path

import msprime
import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy import stats

from rescue_planner.theory import alleles, chain, detection, diffusion, islands, newcomers

DATA = Path(__file__).parent / "data"
CATS = json.loads((DATA / "allele_counts_cats.json").read_text(encoding="utf-8"))
HANDBOOK = {
    entry["id"]: entry
    for entry in json.loads((DATA / "handbook_values.json").read_text(encoding="utf-8"))["entries"]
}


@pytest.mark.parametrize("locus", sorted(CATS["loci"]))
def test_that_allelic_richness_is_hierfstats(locus):
    """17 colonies; a colony with no typed animal at the locus (P17 at fca45) has no richness."""
    given = CATS["loci"][locus]
    for colony, counts in given["counts"].items():
        if sum(counts) == 0:
            continue
        found = alleles.rarefied_count(counts, CATS["copies"])
        assert_allclose(found, given["richness"][colony], rtol=1e-10)


def test_that_a_colony_without_typed_animals_is_refused():
    with pytest.raises(ValueError, match="fewer than 10 gene copies"):
        alleles.rarefied_count(CATS["loci"]["fca45"]["counts"]["P17"], 10)


@pytest.mark.parametrize(("whole", "kind", "drawn"), [(60, 3, 10), (500, 37, 60), (20, 2, 10)])
def test_that_missing_a_kind_is_scipys_hypergeometric(whole, kind, drawn):
    expected = stats.hypergeom(whole, kind, drawn).pmf(0)
    assert_allclose(alleles.chance_missed(whole, kind, drawn), expected, rtol=1e-11)


def test_that_whole_newcomers_are_scipys_hypergeometric():
    for own, came in ((9, 1), (45, 5), (20, 5)):
        both = stats.hypergeom(2 * (own + came), 2 * own, 2).pmf(2)
        assert_allclose(newcomers.both_resident(own, came), both, rtol=1e-12)


def test_that_catching_is_scipys_binomial():
    for p, n in ((0.01, 30), (0.2, 5)):
        assert_allclose(alleles.chance_caught(p, n), stats.binom(2 * n, p).sf(0), rtol=1e-12)


def test_that_needing_seeing_and_power_use_scipys_normal():
    fall = detection.fall_of_diversity([0.1, 0.3, 0.5], 20, 4, 25)
    z = stats.norm.isf(0.01) + stats.norm.isf(0.1)
    loci = z**2 * fall.variance / fall.change**2
    assert_allclose(detection.loci_needed(fall, 0.01, 0.9), loci, rtol=1e-12)


@pytest.mark.parametrize(("ne", "t", "n", "loci"), [(25, 5, 30, 75), (10, 5, 30, 25)])
def test_that_resampled_studies_find_the_fall_as_often(ne, t, n, loci):
    """scipy's paired t test on 4,000 imagined studies; 2 points more for t in place of normal."""
    rng = np.random.default_rng(20270102)
    p = np.tile([0.1, 0.2, 0.3, 0.4, 0.5], (4000, loci // 5))
    g = 2 * n
    first = rng.binomial(g, p) / g
    for _ in range(t):
        p = rng.binomial(2 * ne, p) / (2 * ne)
    last = rng.binomial(g, p) / g
    change = 2 * g / (g - 1) * (last * (1 - last) - first * (1 - first))
    seen = np.mean(stats.ttest_1samp(change, 0.0, axis=1, alternative="less").pvalue < 0.05)
    expected = detection.power_to_see(
        detection.fall_of_diversity([0.1, 0.2, 0.3, 0.4, 0.5], ne, t, n), loci
    )
    assert abs(seen - expected) < 4 * np.sqrt(0.16 / 4000) + 0.02


@pytest.mark.parametrize(("demes", "seed"), [(2, 7), (4, 8)])
def test_that_msprimes_islands_differ_as_much(demes, seed):
    """Coalescent (continuous time): what is left out is of the order of m = 0.002."""
    n, m, runs = 100, 0.002, 8000
    demography = msprime.Demography.island_model([n] * demes, migration_rate=m / (demes - 1))
    times = []
    for pair in ({"pop_0": 2}, {"pop_0": 1, "pop_1": 1}):
        samples = [msprime.SampleSet(k, population=name, ploidy=1) for name, k in pair.items()]
        trees = msprime.sim_ancestry(
            samples, demography=demography, ploidy=2, num_replicates=runs, random_seed=seed
        )
        times.append(np.array([tree.node(tree.num_nodes - 1).time for tree in trees]))
    within, apart = times
    fst = islands.symmetric_islands(n, m, demes).pairwise
    # ratio of two means, by linearisation
    ratio = within.mean() / apart.mean()
    error = (
        ratio / np.sqrt(runs) * np.hypot(within.std() / within.mean(), apart.std() / apart.mean())
    )
    assert abs(1 - ratio - fst) < 4 * error + 3 * m


def test_that_few_islands_are_the_handbooks():
    """Takahata 1983, Slatkin 1991: 1 / (1 + 4Nm (d/(d-1))^2), ten digits."""
    for key, value in HANDBOOK["island"]["computed"].items():
        if "d=" not in key:
            continue
        nm, d = (float(part.split("=")[1]) for part in key.split(","))
        assert_allclose(islands.symmetric_islands_approximate(1e3, nm / 1e3, d), value, rtol=2e-9)


def test_that_fixation_is_the_handbooks():
    """Kimura 1962, advantage of one copy, ten decimals."""
    for key, value in HANDBOOK["kimura"]["computed"].items():
        ne, s, p = (float(part.split("=")[1]) for part in key.split(","))
        assert_allclose(diffusion.fixation_per_copy(p, ne, s), value, rtol=0, atol=5.1e-11)


def test_that_founders_and_drift_are_scipys_binomials():
    """Two generations written out with scipy's binomial law."""
    p, n = 0.2, 8
    first = stats.binom(10, p).pmf(np.arange(11))
    kept = sum(mass * stats.binom(2 * n, k / 10).sf(0) for k, mass in enumerate(first))
    assert_allclose(alleles.chance_kept(p, 5, [n]), kept, rtol=1e-12)
    assert chain.copies(n) == 16
