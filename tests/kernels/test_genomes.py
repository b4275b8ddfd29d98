"""Packed genomes against plain ones, Mendel's ratios and Haldane's map."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy import stats

from rescue_planner.kernels import genomes, streams
from rescue_planner.kernels.compiled import kernel

ALL = np.uint64(2**64 - 1)


def fresh(seed):
    s = np.zeros((streams.PURPOSES, 4), dtype=np.uint64)
    streams.open_year(s, np.uint64(seed), 0, 0, 0)
    return s


def unpack(words):
    """(..., words) of uint64 -> (..., words * 64) of 0 and 1, lowest bit first."""
    bits = (words[..., None] >> np.arange(64, dtype=np.uint64)) & np.uint64(1)
    return bits.reshape(*words.shape[:-1], -1).astype(int)


def valid_words(markers):
    place = np.arange(markers)
    valid = np.zeros((markers + 63) // 64, dtype=np.uint64)
    for p in place:
        valid[p // 64] |= np.uint64(1) << np.uint64(p % 64)
    return place, valid


def founders(seed, frequency, count, populations=1, population=0):
    place, valid = valid_words(frequency.shape[1])
    planes = np.zeros((frequency.shape[0], 33, valid.size), dtype=np.uint64)
    for p in range(frequency.shape[0]):
        genomes.set_thresholds(frequency, p, place, planes)
    codes = max(0, int(populations - 1).bit_length())
    genome = np.full((count, 2, 1 + codes, valid.size), 7, dtype=np.uint64)
    s = fresh(seed)
    for slot in range(count):
        genomes.make_founder(s, 0, planes, population, valid, genome, slot)
    return genome, place, valid


@kernel
def many_masks(s, chromosomes, morgans, out):
    for i in range(out.shape[0]):
        genomes.fill_mask(s, 0, chromosomes, morgans, out[i])


def test_that_set_bits_are_counted():
    rng = np.random.default_rng(1)
    for x in [0, 1, 2**63, 2**64 - 1, *rng.integers(0, 2**63, 50)]:
        assert genomes.popcount(np.uint64(x)) == int(x).bit_count()


def test_that_founders_have_the_frequencies_given_also_above_one_half():
    p = np.array([[0.0, 1.0, 0.5, 0.03, 0.97, 0.75, 0.2, 1e-3, 0.999] * 10])
    genome, _, _ = founders(4, p, 3000)
    seen = unpack(genome[:, :, 0])[..., : p.size].reshape(-1, p.size).mean(axis=0)
    assert_allclose(seen[p[0] == 0.0], 0.0, atol=0)
    assert_allclose(seen[p[0] == 1.0], 1.0, atol=0)
    se = np.sqrt(p[0] * (1 - p[0]) / 6000)
    assert np.all(np.abs(seen - p[0]) <= 5 * se)


def test_that_bits_which_stand_for_no_marker_stay_empty():
    genome, _, valid = founders(5, np.full((3, 70), 0.9), 50, populations=3, population=2)
    assert not np.any(genome & ~valid)
    mask = np.array([ALL, ALL])
    genomes.pass_on(genome, 0, 1, 0, mask)
    assert not np.any(genome & ~valid)


def test_that_a_gamete_takes_each_copy_with_chance_one_half_and_pairs_on_their_own():
    out = np.zeros((20_000, 2), dtype=np.uint64)
    many_masks(fresh(6), np.zeros((0, 2), dtype=np.int64), np.zeros(0), out)
    bits = unpack(out)
    se = 0.5 / np.sqrt(out.shape[0])
    assert np.all(np.abs(bits.mean(axis=0) - 0.5) < 5 * se)
    together = (bits[:, 1:] == bits[:, :-1]).mean(axis=0)
    assert np.all(np.abs(together - 0.5) < 5 * se)


def test_that_young_of_two_heterozygotes_come_in_mendels_ratio():
    loci = np.array([[ALL, 0], [0, ALL], [0, 0]], dtype=np.uint64)
    s, counts = fresh(7), np.zeros(3)
    for _ in range(400):
        one = genomes.pass_on_loci(s, 8, loci, 0)
        two = genomes.pass_on_loci(s, 8, loci, 1)
        dose = unpack(np.array([one, two], dtype=np.uint64)[:, None]).sum(axis=0)
        counts += np.bincount(dose.ravel(), minlength=3)
    assert stats.chisquare(counts, counts.sum() * np.array([0.25, 0.5, 0.25])).pvalue > 1e-4


@pytest.mark.parametrize(
    ("markers", "morgans"), [(40, 1.0), (64, 0.5), (150, 2.0), (1, 1.0), (7, 20.0)]
)
def test_that_recombination_follows_haldanes_map(markers, morgans):
    chromosomes = np.array([[0, markers], [markers, markers], [2 * markers, 3]], dtype=np.int64)
    words = (2 * markers + 3 + 63) // 64
    out = np.zeros((20_000, words), dtype=np.uint64)
    ends = np.array([morgans, 2 * morgans, 2 * morgans + 0.7])
    many_masks(fresh(8), chromosomes, ends, out)
    bits = unpack(out)
    runs = out.shape[0]
    for first, count, length in ((0, markers, morgans), (2 * markers, 3, 0.7)):
        for apart in {1, count // 3, count - 1} - {0, count}:
            expected = 0.5 * (1 - np.exp(-2 * length * apart / count))
            for i in range(first, first + count - apart, max(1, count // 7)):
                seen = (bits[:, i] != bits[:, i + apart]).mean()
                assert abs(seen - expected) < 5 * np.sqrt(expected * (1 - expected) / runs)
    for border in (markers, 2 * markers):
        assert abs((bits[:, border - 1] != bits[:, border]).mean() - 0.5) < 5 * 0.5 / np.sqrt(runs)
    used = bits[:, : 2 * markers + 3]
    assert np.all(np.abs(used.mean(axis=0) - 0.5) < 5 * 0.5 / np.sqrt(runs))


def test_that_a_gamete_equals_a_plain_choice_between_the_copies():
    genome, _, valid = founders(9, np.full((4, 130), 0.4), 6, populations=4, population=3)
    mask = fresh(1)[0, : valid.size].copy()
    before = genome.copy()
    genomes.pass_on(genome, 2, 5, 1, mask)
    take = unpack(mask)
    plain = np.where(take == 1, unpack(before[2, 1]), unpack(before[2, 0]))
    assert np.array_equal(unpack(genome[5, 1]), plain)
    assert np.array_equal(genome[:5], before[:5])


@pytest.mark.parametrize("count", [1, 2, 3, 37])
def test_that_diversity_and_heterozygosity_equal_the_unpacked_ones(count):
    rng = np.random.default_rng(count)
    genome, _, _ = founders(count, rng.random((1, 130)), 40)
    who = rng.permutation(40)
    alleles = unpack(genome[who[:count], :, 0])[..., :130]
    p = alleles.mean(axis=(0, 1))
    plain = (1 - p**2 - (1 - p) ** 2).mean() * 2 * count / (2 * count - 1)
    got = genomes.gene_diversity(genome, who, count, 130, np.zeros(64, dtype=np.uint64))
    assert_allclose(got, plain, rtol=1e-12)  # sums of 130 terms, in another order
    observed = (alleles[:, 0] != alleles[:, 1]).mean()
    assert_allclose(genomes.observed_heterozygosity(genome, who, count, 130), observed, rtol=1e-12)


def test_that_ancestry_counts_the_copies_of_each_donor():
    genome, place, _ = founders(3, np.full((4, 100), 0.5), 20, populations=4, population=0)
    s = fresh(2)
    for slot in range(20):
        genomes.mix_origin(s, 0, np.array([0.2, 0.0, 0.5]), place, genome, slot)
    bits = unpack(genome)[..., :100]
    code = bits[:, :, 1] + 2 * bits[:, :, 2]
    for population in (1, 2, 3):
        plain = (code == population).sum(axis=(1, 2))
        got = [genomes.copies_from(genome, slot, population) for slot in range(20)]
        assert got == list(plain)
    shares = [(code == d).mean() for d in range(4)]
    assert_allclose(shares, [0.3, 0.2, 0.0, 0.5], atol=5 * 0.5 / np.sqrt(4000))


def test_that_rare_alleles_are_found_and_followed_on_both_sides():
    p = np.concatenate([np.full(50, 0.02), np.full(50, 0.98), np.full(30, 0.5)])[None]
    genome, place, valid = founders(12, p, 25)
    who, rare = np.arange(25), np.zeros((2, valid.size), dtype=np.uint64)
    genomes.find_rare(genome, who, 25, place, 0.05, rare)
    alleles = unpack(genome[:, :, 0])[..., :130].reshape(50, 130)
    ones = alleles.sum(axis=0)
    assert np.array_equal(unpack(rare[1])[:130], (ones > 0) & (ones < 2.5))
    assert np.array_equal(unpack(rare[0])[:130], (ones < 50) & (ones > 47.5))
    seen = np.zeros_like(rare)
    genomes.present(genome, who, 10, valid, seen)
    left = alleles[:20]
    plain = (unpack(rare[1])[:130] & left.any(axis=0)) + (
        unpack(rare[0])[:130] & (left == 0).any(0)
    )
    assert_allclose(genomes.rare_left(rare, seen), plain.sum() / unpack(rare).sum(), rtol=1e-12)
