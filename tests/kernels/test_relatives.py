"""Kinship by slots against a plain recursion over the whole pedigree."""

from __future__ import annotations

import numpy as np
from numpy.testing import assert_allclose

from rescue_planner.kernels import relatives


def plain_kinship(parents, population, founders, own):
    """Kinship of all animals ever, by the textbook recursion, in double precision."""
    n = len(parents)
    kin = np.zeros((n, n))
    for i, (dam, sire) in enumerate(parents):
        for j in range(i):
            if dam is None:
                a, b = parents[j]
                kin[i, j] = (
                    founders[population[i], population[j]]
                    if a is None
                    else 0.5 * (kin[i, a] + kin[i, b])
                )
            else:
                kin[i, j] = 0.5 * (kin[dam, j] + kin[sire, j])
            kin[j, i] = kin[i, j]
        f = own[population[i]] if dam is None else kin[dam, sire]
        kin[i, i] = 0.5 * (1 + f)
    return kin


def test_that_slots_that_are_used_again_give_the_pedigrees_kinship():
    rng = np.random.default_rng(5)
    founders = np.array([[0.3, -0.05], [-0.05, 0.1]])
    own, slots, populations = [0.3, 0.05], 40, 2
    kin = np.full((slots, slots), np.nan, dtype=np.float32)
    relatives.seed_populations(kin, founders)
    free, alive = list(range(slots - 1, populations - 1, -1)), {}
    parents, population = [], []
    for year in range(25):
        for _ in range(10 if year == 0 else rng.integers(0, 2)):
            p = int(year > 0 and rng.random() < 0.7)
            slot = free.pop()
            relatives.add_founder(kin, p, slot, slots, own[p])
            alive[len(parents)] = slot
            parents.append((None, None))
            population.append(p)
        living = list(alive)
        for _ in range(8):
            if not free:
                break
            dam, sire = (int(x) for x in rng.choice(living, 2, replace=False))
            slot = free.pop()
            relatives.add_young(kin, alive[dam], alive[sire], slot, slots)
            alive[len(parents)] = slot
            parents.append((dam, sire))
            population.append(-1)
        free.extend(alive.pop(int(animal)) for animal in rng.permutation(list(alive))[12:])
    plain = plain_kinship(parents, population, founders, own)
    ids, rows = np.array(list(alive)), np.array(list(alive.values()))
    # float32 kinship: each year adds at most one rounding of 6e-8 to a value below 1.
    assert_allclose(kin[np.ix_(rows, rows)], plain[np.ix_(ids, ids)], atol=25 * 6e-8)
    k = plain[np.ix_(ids, ids)]
    pairs = (k.sum() - np.trace(k)) / (len(ids) * (len(ids) - 1))
    assert_allclose(relatives.mean_kinship(kin, rows, rows.size), pairs, atol=2e-6)
    f = (2 * np.diag(k) - 1).mean()
    assert_allclose(relatives.mean_inbreeding(kin, rows, rows.size), f, atol=2e-6)
    assert np.linalg.eigvalsh(k).min() > -1e-9


def test_that_one_animal_has_no_mean_kinship_to_others():
    kin = np.ones((2, 2), dtype=np.float32)
    assert np.isnan(relatives.mean_kinship(kin, np.array([0, 1]), 1))


def test_that_memory_is_four_bytes_a_pair():
    assert relatives.bytes_needed(1000) == np.zeros((1000, 1000), dtype=np.float32).nbytes
