"""An invented case for the tests of targets and annex: two donors, five plans, everything used."""

from __future__ import annotations

import copy
from typing import Any

from rescue_planner.case.document import Case

SAMPLE: dict[str, Any] = {
    "format": "rescue case",
    "version": 1,
    "title": "Tarn vole of the Upper Sill",
    "species": "Tarn vole (Arvicollis lacustris, invented)",
    "authority": "Upper Sill Wildlife Agency",
    "currency": "crowns",
    "decision": {
        "question": "Should voles be brought to the Upper Sill, and from where?",
        "decided_by": "Director of the agency",
        "by_date": "2027-03-01",
        "goal": "Keep nine tenths of the gene diversity for sixty years.",
        "other_causes_of_decline": "Mink are trapped since 2024; two tarns were refilled.",
    },
    "time": {"start_year": 2027, "horizon_years": 60, "generation_years": 4.0},
    "recipient": {
        "name": "Upper Sill",
        "who_is_counted": "adults alive before breeding",
        "adults": {
            "best": 40,
            "low": 32,
            "high": 52,
            "shape": "triangular",
            "origin": "measured",
            "source": "Spring count",
            "date": "2026-04",
            "by": "Field team",
        },
        "breeding_females": 14,
        "breeding_males": 6,
        "effective_size": {
            "best": 16,
            "low": 9,
            "high": 30,
            "shape": "pert",
            "origin": "guessed",
        },
        "gene_diversity": {"best": 0.42, "origin": "measured", "source": "Lab report 7"},
        "reference_gene_diversity": {
            "best": 0.68,
            "origin": "borrowed",
            "source": "Museum skins",
        },
        "markers": "microsatellites",
        "carrying_capacity": 60,
    },
    "donors": [
        {
            "name": "North Fell",
            "kind": "wild",
            "adults": 800,
            "gene_diversity": 0.66,
            "fst_to_recipient": 0.2,
            "fst_to_donors": {"Zoo group": 0.08},
            "most_removed_per_year": 8,
            "screen": {"same_species": "yes", "years_apart": 150, "environment_differs": "some"},
            "disease_status": "not assessed",
            "trait_mean_difference": -0.4,
        },
        {"name": "Zoo group", "kind": "captive", "gene_diversity": 0.6, "fst_to_recipient": 0.22},
    ],
    "loci": [
        {
            "name": "winter coat",
            "role": "locally adapted",
            "fitness": [1.0, 0.98, 0.9],
            "frequency": 0.8,
            "donor_frequency": {"North Fell": 0.1, "Zoo group": 0.3},
        }
    ],
    "life_cycle": {
        "first_breeding_age": {"female": 1, "male": 2},
        "last_age": 8,
        "yearly_survival": {"first_year": 0.42, "subadult": 0.6, "adult": 0.66},
        "share_of_females_breeding": 0.8,
        "young_per_breeding_female": {"mean": 2.2},
    },
    "inbreeding_cost": {
        "lethal_equivalents_diploid": {
            "first_year": {"best": 6.0, "low": 2, "high": 12, "origin": "borrowed"}
        }
    },
    "trait": {
        "name": "start of moult",
        "heritability": 0.3,
        "optimum_shift_per_year": 0.02,
        "unit": "days",
    },
    "plans": [
        {"name": "No releases"},
        {
            "name": "Trickle",
            "steady": [
                {
                    "donor": "North Fell",
                    "migrants_per_generation": 1.0,
                    "from_year": 2027,
                    "to_year": 2086,
                }
            ],
        },
        {
            "name": "Two pairs every fourth year",
            "releases": [
                {
                    "donor": "North Fell",
                    "who": {"females": 2, "males": 2, "age": 2},
                    "when": {"first_year": 2027, "every_years": 4, "times": 5},
                    "afterwards": {
                        "survive_to_breed": {"best": 0.7, "low": 0.3, "high": 1.0},
                        "breeding_relative_to_residents": 0.8,
                    },
                    "cost": {"each_animal": 2500, "each_event": 8000},
                }
            ],
            "rules": [
                {
                    "name": "ancestry ceiling",
                    "when": "donor_ancestry",
                    "above": 0.3,
                    "then": "stop",
                }
            ],
        },
        {
            "name": "Zoo males",
            "releases": [
                {
                    "donor": "Zoo group",
                    "who": {"males": 3, "age": 1},
                    "when": {"first_year": 2028},
                    "afterwards": {"survive_to_breed": 0.4},
                    "loan_years": 2,
                    "cost": {"each_animal": 900, "each_event": 1500},
                }
            ],
            "rules": [
                {
                    "name": "second wave",
                    "when": "inbreeding",
                    "above": 0.45,
                    "surveys": 2,
                    "survey_every_years": 2,
                    "survey_sd": 0.03,
                    "delay_years": 1,
                    "then": "release",
                    "at_most": 2,
                    "release": {"donor": "North Fell", "who": {"females": 2}},
                },
                {"name": "kin check", "when": "kinship", "above": 0.5, "then": "stop"},
            ],
        },
        {
            "name": "Refill tarns",
            "other_actions": [
                {
                    "what": "Refill two more tarns",
                    "year": 2030,
                    "carrying_capacity_times": 1.5,
                    "first_year_survival_times": 1.1,
                    "cost": 40000,
                }
            ],
        },
    ],
    "targets": [
        {
            "measure": "gene_diversity_kept",
            "at_least": 0.9,
            "by_year": 2087,
            "owner": "Species board",
            "reason": "Board resolution of 2025",
        },
        {"measure": "donor_ancestry", "at_most": 0.3, "by_year": 2086, "owner": "Sill council"},
        {"measure": "allele_kept:winter coat", "at_least": 0.95, "by_year": 2060},
        {"measure": "persists", "at_least": 0.9, "by_year": 2087, "owner": "Species board"},
    ],
    "run": {"replicates": 1000, "seed": 20270101},
}


def raw() -> dict[str, Any]:
    """Return a copy of the sample that a test may change."""
    return copy.deepcopy(SAMPLE)


def case() -> Case:
    """Return the sample as a case."""
    return Case.model_validate(raw())
