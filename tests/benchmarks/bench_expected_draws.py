"""The expected depth over many parameter draws at once, against a Python loop over draws."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np
from rounds import Pair, Row

from rescue_planner.case.document import Case
from rescue_planner.projection.draws import drawn_values

DRAWS = 14_336
SAMPLE = 256
RAW = {
    "title": "Draws",
    "time": {"start_year": 2027, "horizon_years": 60, "generation_years": 4},
    "recipient": {
        "name": "Here",
        "adults": 40,
        "effective_size": 16,
        "gene_diversity": 0.42,
        "reference_gene_diversity": 0.68,
        "breeding_females": 12,
        "breeding_males": 8,
    },
    "donors": [{"name": "There", "gene_diversity": 0.64, "fst_to_recipient": 0.2}],
    "inbreeding_cost": {"lethal_equivalents_diploid": {"first_year": 6}},
    "loci": [
        {
            "name": "coat",
            "fitness": [1, 0.98, 0.9],
            "frequency": 0.8,
            "donor_frequency": {"There": 0.1},
        }
    ],
    "plans": [
        {"name": "No releases"},
        {
            "name": "Pulses",
            "releases": [
                {
                    "donor": "There",
                    "who": {"females": 4, "males": 2},
                    "when": {"first_year": 2027, "every_years": 8, "times": 7},
                }
            ],
        },
    ],
}
CASE = Case.model_validate(RAW)


KEYS = (  # what the loop gives too
    "gene_diversity",
    "donor_ancestry",
    "allele_frequency:coat",
    "inbreeding",
    "relative_first_year_survival",
)


def drawn() -> dict[str, np.ndarray]:
    rng = np.random.default_rng(3)
    return {
        "recipient.effective_size": rng.uniform(8, 30, DRAWS),
        "recipient.gene_diversity": rng.uniform(0.3, 0.5, DRAWS),
        "donors[0].fst_to_recipient": rng.uniform(0.1, 0.3, DRAWS),
        "donors[0].gene_diversity": rng.uniform(0.5, 0.7, DRAWS),
        "inbreeding_cost.lethal_equivalents_diploid.first_year": rng.uniform(2, 12, DRAWS),
        "plans[1].releases[0].who.females": rng.uniform(1, 8, DRAWS),
    }


VALUES = drawn()


def one(i: int) -> list[tuple[float, ...]]:
    """One draw in plain Python, as a biologist who programs would write it."""
    ne, h, fst, hd, b, females = (float(v[i]) for v in VALUES.values())
    between, reference, p, ancestry = ((h + hd) / 2) / (1 - fst), 0.68, 0.8, 0.0
    rows = [(h, 0.0, p, 1 - h / reference, math.exp(-b / 2 * max(0.0, 1 - h / reference)))]
    for t in range(15):
        pulse = t % 2 == 0 and t // 2 < 7
        uf = females / (12 + females) if pulse else 0.0
        um = 2 / 10 if pulse else 0.0
        m = (uf + um) / 2
        survival = 0.0
        for i_share, j_share, apart in (
            (1 - uf, 1 - um, h),
            (uf, 1 - um, between),
            (1 - uf, um, between),
            (uf, um, hd),
        ):
            survival += i_share * j_share * math.exp(-b / 2 * max(0.0, 1 - apart / reference))
        pool = (1 - m) ** 2 * h + 2 * m * (1 - m) * between + m * m * hd
        between = (1 - m) * between + m * hd
        h = (1 - 1 / (2 * ne)) * pool
        ancestry = (1 - m) * ancestry + m
        mixed = (1 - m) * p + m * 0.1
        mean = mixed**2 + 2 * mixed * (1 - mixed) * 0.98 + (1 - mixed) ** 2 * 0.9
        p = mixed * (mixed + (1 - mixed) * 0.98) / mean
        rows.append((h, ancestry, p, 1 - h / reference, survival))
    return rows


def together() -> dict[str, np.ndarray]:
    return drawn_values(CASE, CASE.plans[1], VALUES, KEYS)


def rows() -> Iterator[Row]:
    keys = KEYS
    whole = together()
    alike = max(
        float(np.abs(np.array(one(i)) - np.stack([whole[k][i] for k in keys], -1)).max())
        for i in range(0, DRAWS, 997)
    )
    yield Row("expected depth, largest difference from the loop", [alike], at_most=1e-12, unit="")
    pair = Pair(lambda: [one(i) for i in range(SAMPLE)], together, slow_times=DRAWS / SAMPLE)
    yield Row(
        "expected depth, 14,336 draws against a Python loop",
        pair.ratios(),
        at_least=25,
        absolute=pair.absolute,
        note=f"loop: {SAMPLE} draws, scaled",
    )
