"""Genes against theory: Wright and Fisher's life cycle, sibships, costs, ancestry, markers."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from lives import generations, life, world

from rescue_planner.simulate.run import run
from rescue_planner.simulate.world import Donor, Locus, Release
from rescue_planner.theory import chain

H = np.array([[0.42, 0.65], [0.65, 0.66]])


def near(values, expected=0.0, sigmas=5.0):
    """Whether the mean over replicates is the expected one within its standard errors."""
    values = values[~np.isnan(values)]
    return abs(values.mean() - expected) <= sigmas * values.std(ddof=1) / np.sqrt(values.size)


def test_that_kinship_and_inbreeding_follow_the_recursion_of_their_own_sexes():
    results = run(generations(16, 12, markers=1), 1500, 31)
    females, males = results.of("adult_females"), results.of("adult_males")
    kin, f = results.of("kinship"), results.of("inbreeding")
    # Of two young: the same mother with chance 1/F, the same father with chance 1/M.
    expected, own = np.zeros(kin.shape), np.zeros(kin.shape)
    for t in range(12):
        self_kin = 0.5 * (1 + own[:, t])
        same = 0.25 / np.maximum(females[:, t], 1) + 0.25 / np.maximum(males[:, t], 1)
        expected[:, t + 1] = expected[:, t] + same * (self_kin - expected[:, t])
        own[:, t + 1] = expected[:, t]
    both = (females > 0).all(axis=1) & (males > 0).all(axis=1)
    assert both.sum() > 1400
    assert np.all(kin[:, 0] == 0.0)
    for t in (1, 2, 5, 12):
        assert near((kin - expected)[both, t])
        assert near((f - own)[both, t])


def test_that_gene_diversity_falls_as_the_expected_depth_says():
    n, years = 20, 10
    results = run(generations(n, years, markers=64), 1200, 32)
    h = results.of("gene_diversity")
    assert near(h[:, 0], 0.4)
    # Two sexes drawn anew each year: Ne = 4FM/(F+M) on average, and half an animal more since
    # none mates with itself.
    females = results.of("adult_females")[:, :-1]
    ne = (4 * females * (n - females) / n).mean() + 0.5
    for t in (1, 5, 10):
        # Unequal sexes in some years cost a little more than their mean Ne says: under 1 %.
        expected = 0.4 * (1 - 1 / (2 * ne)) ** t
        assert abs(h[:, t].mean() - expected) < 5 * h[:, t].std() / np.sqrt(1200) + 0.002


@pytest.mark.parametrize("morgans", [None, 1.0])
def test_that_markers_and_pedigree_tell_one_story_with_releases(morgans):
    aged = life(
        first_breeding_age=(2, 2),
        last_age=10,
        survival=(0.5, 0.75, 0.85),
        mean_young=2.4,
        share_of_females_breeding=0.8,
        form="pairs",
    )
    start = world(
        years=24,
        life=aged,
        adults=30,
        adult_females=15,
        capacity=np.full(24, 30.0),
        diversity=H,
        reference=0.68,
        donors=(Donor(500),),
        releases=tuple(Release(y, 0, 2, 2, 2, 0.8) for y in (0, 4, 12)),
        markers=100,
        morgans=morgans,
        lethal_first_year=4.0,
    )
    results = run(start, 1200, 33)
    n = results.of("adults")
    inside, between = results.of("inbreeding"), results.of("kinship")
    same = (inside + (2 * n - 2) * between) / (2 * n - 1)
    for t in (0, 1, 6, 24):
        # H_ij = H_ref (1 - kinship) for every pair of founders, so for all their descendants.
        assert near((results.of("gene_diversity") - 0.68 * (1 - same))[:, t])
        assert near((results.of("observed_heterozygosity") - 0.68 * (1 - inside))[:, t])
    assert near(results.of("inbreeding")[:, 0], 1 - 0.42 / 0.68) or np.all(
        np.abs(results.of("inbreeding")[:, 0] - (1 - 0.42 / 0.68)) < 1e-6
    )


# Kinship of two young of unrelated parents: a quarter by each parent that they share, halved.
@pytest.mark.parametrize(
    ("form", "changes", "same_father"),
    [
        ("pairs", {}, 1 / 10),
        ("open", {}, 1 / 10),
        ("open", {"unequal_success": 1.0}, 2 / 11),
        ("harems", {"share_of_males_breeding": 0.1}, 1.0),
        ("harems", {}, None),
        ("pairs", {"unequal_success": 1.0}, 1 / 10),
    ],
)
def test_that_mating_forms_make_the_sibs_they_should(form, changes, same_father):
    one = life(last_age=1, survival=(1.0, 1.0, 1.0), mean_young=6.0, form=form, **changes)
    results = run(world(years=1, life=one, adults=20, adult_females=10, markers=1), 2500, 34)
    kin = results.of("kinship")[:, 1]
    if same_father is None:  # one mother: one male; two mothers: each one of ten
        same_father = 1 / 10 + 9 / 10 * 1 / 10
    # Young of one mother: 1/10. Weights are gamma, so shares are Dirichlet: (a+1)/(10a+1).
    assert near(kin, 0.125 * (1 / 10 + same_father))


def test_that_pairs_that_stay_together_have_full_sibs_year_after_year():
    for stay in (True, False):
        aged = life(
            first_breeding_age=(3, 3),
            survival=(1.0, 1.0, 1.0),
            mean_young=4.0,
            form="pairs",
            stay_together=stay,
        )
        start = world(years=6, life=aged, adults=12, adult_females=6, markers=1, subadults=(0, 0))
        kin = run(start, 400, 35).of("kinship")[:, 3]
        # Adults of year 3: the 12 of the start and the young of year 0, so see year 4 and 5 too.
        assert near(kin[~np.isnan(kin)], kin.mean())
        late = run(start, 400, 35).of("kinship")[:, 5]
        pairs = 1 / 6  # same mother
        young = run(start, 400, 35).of("adults")[:, 5] - 12
        fathers = pairs if stay else 1 / 6
        sibs = young * (young - 1) / 2
        # Parents and young: each young has two of the twelve as parents, kinship 1/4.
        total = sibs * 0.125 * (pairs + fathers) + young * 2 * 0.25
        if stay:
            everyone = (young + 12) * (young + 11) / 2
            assert near(late - total / everyone, sigmas=6.0)
        else:
            everyone = (young + 12) * (young + 11) / 2
            assert (late - total / everyone).mean() < 0.01


def test_that_inbreeding_costs_half_the_diploid_lethal_equivalents():
    one = life(survival=(0.6, 1.0, 1.0), mean_young=5.0, here_now=False)
    start = world(
        years=1,
        life=one,
        adults=40,
        diversity=np.array([[0.3]]),
        lethal_first_year=6.28,
        markers=1,
    )
    start = replace(start, adult_females=20)
    results = run(start, 400, 36)
    born, dead = results.of("born")[:, 1], results.of("died_in_first_year")[:, 1]
    lived = 1 - dead.sum() / born.sum()
    expected = 0.6 * np.exp(-0.5 * 6.28 * 0.25)
    assert abs(lived - expected) < 5 * np.sqrt(expected * (1 - expected) / born.sum())


def test_that_here_and_now_young_of_residents_survive_as_measured_and_crosses_better():
    one = life(last_age=1, survival=(0.3, 1.0, 1.0), mean_young=5.0)
    start = world(
        years=1,
        life=one,
        adults=20,
        adult_females=20,
        diversity=np.array([[0.3, 0.4], [0.4, 0.4]]),
        lethal_first_year=4.0,
        lethal_young=2.0,
        donors=(Donor(50),),
        releases=(Release(0, 0, 0, 10, 1),),
        markers=1,
    )
    results = run(start, 300, 37)
    born, dead = results.of("born")[:, 1], results.of("died_in_first_year")[:, 1]
    expected = 0.3 * np.exp(0.5 * 4.0 * 0.25)
    lived = 1 - dead.sum() / born.sum()
    assert abs(lived - expected) < 5 * np.sqrt(expected * (1 - expected) / born.sum())
    assert near(born, 100.0)  # the mother's own F is what it was


def test_that_ancestry_of_the_young_is_half_of_both_sexes_share_of_newcomers():
    start = replace(
        generations(40, 3, markers=120),
        diversity=H,
        reference=0.68,
        donors=(Donor(100),),
        releases=(Release(0, 0, 5, 10, 1, breeding_relative_to_residents=1.0),),
    )
    results = run(start, 600, 38)
    ancestry = results.of("donor_ancestry")
    for t in (1, 2, 3):
        assert near(ancestry[:, t], 0.5 * (5 / 25 + 10 / 30))
    assert np.allclose(ancestry, results.of("donor_ancestry:0"), equal_nan=True)
    # A year on an animal has 0, 1/2 or 1 of the donor; the spread is that of its two parents.
    a, b = 5 / 25, 10 / 30
    spread = 0.25 * (a * (1 - a) + b * (1 - b))
    assert near(results.of("donor_ancestry_sd")[:, 1] ** 2, spread * 39 / 40)


def test_that_earlier_donor_ancestry_is_there_at_the_start():
    start = replace(
        generations(30, 1, markers=100), diversity=H, donors=(Donor(9),), reference=0.68
    )
    start = replace(start, ancestry=np.array([0.15]))
    assert near(run(start, 200, 39).of("donor_ancestry")[:, 0], 0.15)


@pytest.mark.parametrize("fitness", [(1.0, 1.0, 1.0), (1.0, 0.9, 0.6)])
def test_that_a_tracked_locus_follows_the_exact_chain(fitness):
    n, years, runs = 20, 6, 3000
    start = replace(generations(n, years, markers=1), loci=(Locus(fitness, (0.6,)),))
    start = replace(start, life=replace(start.life, here_now=False))
    results = run(start, runs, 40)
    p = results.of("allele_frequency:0")
    females = results.of("adult_females")[:, :-1]
    ne = (4 * females * (n - females) / n).mean() + 0.5
    copies = round(2 * ne)
    freq = np.arange(copies + 1) / copies
    w = np.array(fitness)
    mean = freq**2 * w[0] + 2 * freq * (1 - freq) * w[1] + (1 - freq) ** 2 * w[2]
    after = (freq**2 * w[0] + freq * (1 - freq) * w[1]) / mean
    x = 0.6
    first = (x * x * w[0] + x * (1 - x) * w[1]) / (
        x * x * w[0] + 2 * x * (1 - x) * w[1] + (1 - x) ** 2 * w[2]
    )
    mass = chain.first_step(first, copies)
    for _ in range(years - 1):
        mass = chain.step(mass, after, copies)
    assert np.all(p[:, 0] == 0.6)
    # Eight classes: two sexes and a ceiling are not the ideal population copy by copy.
    edges = np.array([-0.01, 0.2, 0.35, 0.45, 0.55, 0.65, 0.75, 0.85, 1.01])
    expected = np.histogram(freq, bins=edges, weights=mass)[0] * runs
    seen = np.histogram(p[:, -1], bins=edges)[0]
    keep = expected > 5
    statistic = ((seen - expected) ** 2 / np.maximum(expected, 1e-9))[keep].sum()
    assert statistic < 45.0  # 7 df at p = 1e-4 is 29; grid of 2N against 2Ne adds some


def test_that_mutation_turns_copies_at_its_rate():
    start = replace(generations(200, 1, markers=1), loci=(Locus((1, 1, 1), (0.5,), 0.2, 0.05),))
    assert near(run(start, 100, 41).of("allele_frequency:0")[:, 1], 0.5 * 0.95 + 0.5 * 0.2)


def test_that_an_animal_let_go_brings_the_donors_alleles():
    start = replace(
        generations(20, 1, markers=1),
        diversity=H,
        reference=0.68,
        donors=(Donor(100),),
        releases=(Release(0, 0, 10, 10, 1),),
        loci=(Locus((1, 1, 1), (0.0, 1.0)),),
    )
    assert near(run(start, 300, 42).of("allele_frequency:0")[:, 1], 0.5)
