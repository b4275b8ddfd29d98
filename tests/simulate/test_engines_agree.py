"""The compiled engine against the plain one, which was written apart from it, on small cases.

Left out where the two read the method differently: male weights kept for life or drawn anew each
year, when loans end, which allele frequencies make an allele rare.
"""

from __future__ import annotations

import numpy as np
import pytest
from lives import life, world
from scipy.stats import ks_2samp

from rescue_planner.simulate.run import run
from rescue_planner.simulate.world import DieOff, Donor, Locus, Release, Steady
from tests.simulate import plain_engine

H = np.array([[0.5, 0.65], [0.65, 0.6]])
FST = 1 - 0.55 / 0.65
YEARS = 10
PLAIN, OURS = 220, 3000


def plain_case(life_cycle, plan, **more):
    """A raw case of 14 adults and one donor of 400."""
    return {
        "time": {"start_year": 2000, "horizon_years": YEARS, "generation_years": 2.0},
        "recipient": {
            "adults": 14,
            "adult_females": 8,
            "effective_size": 7,
            "gene_diversity": 0.5,
            "reference_gene_diversity": 0.7,
            "carrying_capacity": 18,
        },
        "donors": [{"name": "D", "adults": 400, "gene_diversity": 0.6, "fst_to_recipient": FST}],
        "life_cycle": life_cycle,
        "plans": [{"name": "No releases"}, {"name": "P", **plan}],
        **more,
    }


def our_world(one, **more):
    return world(
        years=YEARS,
        generation_years=2.0,
        life=one,
        adults=14,
        adult_females=8,
        capacity=np.full(YEARS, 18.0),
        diversity=H,
        reference=0.7,
        donors=(Donor(400),),
        **more,
    )


def with_pairs():
    raw = {
        "first_breeding_age": {"female": 2, "male": 3},
        "last_age": 7,
        "yearly_survival": {"first_year": 0.5, "subadult": 0.75, "adult": 0.85},
        "share_of_females_breeding": 0.8,
        "young_per_breeding_female": {"mean": 2.4},
        "females_among_young": 0.45,
        "mating": {"form": "pairs", "stay_together": True},
        "crowding": "ceiling",
        "yearly_sd": {"first_year": 0.08, "subadult": 0.05, "adult": 0.03, "young": 0.3},
        "survival_young_correlation": 0.5,
        "die_offs": [
            {
                "name": "x",
                "chance_per_generation": 0.3,
                "lost_share": {"first_year": 0.8, "subadult": 0.5, "adult": 0.3},
                "young_lost_share": 0.5,
            }
        ],
        "fewest_adults": 4,
    }
    after = {"survive_to_breed": 0.7, "breeding_relative_to_residents": 0.6}
    plan = {
        "releases": [
            {
                "donor": "D",
                "who": {"females": 2, "males": 2, "age": age},
                "when": {"first_year": year},
                "afterwards": after,
                "cost": {"each_animal": 10, "each_event": 100},
            }
            for age, year in ((3, 2001), (1, 2004))
        ]
    }
    case = plain_case(
        raw,
        plan,
        genome={"markers": 30, "chromosomes": 3, "morgans_each": 1.0},
        inbreeding_cost={"lethal_equivalents_diploid": {"first_year": 5, "young_per_female": 3}},
    )
    one = life(
        first_breeding_age=(2, 3),
        last_age=7,
        survival=(0.5, 0.75, 0.85),
        share_of_females_breeding=0.8,
        mean_young=2.4,
        females_among_young=0.45,
        form="pairs",
        stay_together=True,
        survival_sd=(0.08, 0.05, 0.03),
        young_sd=0.3,
        survival_young_correlation=0.5,
        die_offs=(DieOff(0.3, (0.8, 0.5, 0.3), 0.5),),
        fewest_adults=4,
    )
    ours = our_world(
        one,
        markers=30,
        chromosomes=3,
        lethal_first_year=5.0,
        lethal_young=3.0,
        releases=(
            Release(1, 0, 2, 2, 3, 0.7, 0.6, None, 10.0, 100.0),
            Release(4, 0, 2, 2, 1, 0.7, 0.6, None, 10.0, 100.0),
        ),
    )
    return case, ours


def with_harems():
    raw = {
        "first_breeding_age": {"female": 1, "male": 1},
        "last_age": 4,
        "yearly_survival": {"first_year": 0.55, "subadult": 0.7, "adult": 0.6},
        "survival_measured": "unrelated_parents",
        "share_of_females_breeding": 0.9,
        "young_per_breeding_female": {"counts": {"1": 0.3, "2": 0.4, "4": 0.3}},
        "mating": {"form": "harems", "share_of_males_breeding": 0.4},
        "crowding": "gradual",
        "yearly_sd": {"young": 0.4},
    }
    plan = {
        "steady": [
            {"donor": "D", "migrants_per_generation": 2.0, "from_year": 2001, "to_year": 2005}
        ]
    }
    locus = {
        "name": "L",
        "role": "harmful",
        "fitness": [0.5, 0.9, 1.0],
        "frequency": 0.4,
        "donor_frequency": {"D": 0.1},
        "mutation_to": 0.01,
        "mutation_from": 0.0,
    }
    case = plain_case(
        raw,
        plan,
        genome={"markers": 30, "chromosomes": 1, "morgans_each": None},
        loci=[locus],
        inbreeding_cost={"lethal_equivalents_diploid": {"first_year": 2}},
    )
    one = life(
        last_age=4,
        survival=(0.55, 0.7, 0.6),
        here_now=False,
        share_of_females_breeding=0.9,
        mean_young=0.0,
        young_counts=(0.0, 0.3, 0.4, 0.0, 0.3),
        form="harems",
        share_of_males_breeding=0.4,
        gradual=True,
        young_sd=0.4,
        fewest_adults=2,
    )
    ours = our_world(
        one,
        markers=30,
        morgans=None,
        lethal_first_year=2.0,
        steady=(Steady(0, 2.0, 1, 5),),
        loci=(Locus((0.5, 0.9, 1.0), (0.4, 0.1), 0.01, 0.0),),
    )
    return case, ours


SAME = {
    "adults": "adults",
    "young": "young",
    "adult_females": "adult_females",
    "animals": "animals",
    "persists": "persists",
    "released": "released",
    "effective_migrants": "effective_migrants",
    "cost": "cost",
    "gene_diversity": "gene_diversity",
    "gene_diversity_kept": "gene_diversity_kept",
    "observed_heterozygosity": "observed_heterozygosity",
    "inbreeding": "inbreeding",
    "kinship": "kinship",
    "donor_ancestry": "donor_ancestry",
    "donor_ancestry_sd": "donor_ancestry_sd",
}


@pytest.mark.parametrize("pair", [with_pairs, with_harems])
def test_that_two_engines_written_apart_agree_in_every_measure(pair, monkeypatch):
    # Realised Ne is not compared, and a single run's may divide by a rise of nothing.
    monkeypatch.setattr(plain_engine.Run, "_read_effective_size", lambda self, row: None)
    case, ours = pair()
    plain = plain_engine.run(case, "P", PLAIN, 5)
    compiled = run(ours, OURS, 6)
    names = dict(SAME)
    if ours.loci:
        names["allele_frequency:L"] = "allele_frequency:0"
    far = []
    for theirs, mine in names.items():
        for year in (0, 1, 3, 6, 10):
            a = np.array(plain_engine.column(plain, theirs, year), dtype=float)
            b = compiled.of(mine)[:, year]
            a, b = a[~np.isnan(a)], b[~np.isnan(b)]
            error = np.sqrt(a.var() / a.size + b.var() / b.size)
            if abs(a.mean() - b.mean()) > 4.2 * error + 1e-6:
                far.append((theirs, year, a.mean(), b.mean(), error))
            # Kinship is kept to 7 digits by one, to 16 by the other: rounded, ties are ties.
            if ks_2samp(a.round(5), b.round(5)).pvalue < 1e-6:
                far.append((theirs, year, "distribution"))
    # 150 comparisons of means at 4.2 standard errors: a false alarm in 250 runs of the test.
    assert not far
