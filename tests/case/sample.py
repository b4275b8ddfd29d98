"""Invented plain cases: a small one with only what is needed, and one that uses every field."""

from __future__ import annotations

import copy
import json
from typing import Any

from rescue_planner.case.paths import put
from rescue_planner.case.problems import InvalidCase, read_case

_SMALL = """{
  "title": "Marsh voles",
  "time": {"start_year": 2027, "horizon_years": 60, "generation_years": 4.0},
  "recipient": {"name": "Lower Fen", "adults": 40, "effective_size": 16,
                "gene_diversity": 0.42, "reference_gene_diversity": 0.68},
  "plans": [{"name": "No releases"}]
}"""

_FULL = """{
  "format": "rescue case", "version": 1,
  "title": "Marsh voles", "species": "Arvicola inventus", "authority": "Fen Office",
  "prepared_by": "A. Hill",
  "decision": {"question": "Bring in voles?", "decided_by": "Fen Office", "by_date": "2027-03-01",
    "goal": "keep nine tenths", "other_causes_of_decline": "mink; trapped since 2024"},
  "time": {"start_year": 2027, "horizon_years": 60, "generation_years": 4.0},
  "recipient": {
    "name": "Lower Fen", "who_is_counted": "adults alive before breeding", "adults": 40,
    "adult_females": 24, "breeding_females": 14, "breeding_males": 6,
    "effective_size": {"best": 16, "low": 9, "high": 30, "shape": "triangular",
      "origin": "measured", "source": "markers, 2024", "date": "2024-05-01", "by": "A. Hill"},
    "effective_size_follows_adults": false, "gene_diversity": 0.42,
    "reference_gene_diversity": 0.68, "markers": "microsatellites",
    "carrying_capacity": 60, "isolated_since": 1965,
    "donor_ancestry_at_start": {"Upper Fen": 0.0}
  },
  "donors": [
    {"name": "Upper Fen", "kind": "wild", "adults": 800, "effective_size": 250, "drifts": false,
     "gene_diversity": 0.66, "fst_to_recipient": 0.2, "fst_form": "hudson",
     "fst_to_donors": {"St. Anne [pens]": 0.08}, "most_removed_per_year": 8, "fewest_left": 200,
     "carrying_capacity": 900, "life_cycle": "same",
     "lethal_equivalents_diploid": {"first_year": 6.0}, "kinship_among_released": null,
     "trait_mean_difference": 0.0, "additive_variance": null,
     "screen": {"same_species": "yes", "fixed_chromosome_differences": "no", "years_apart": 150,
       "environment_differs": "some", "generations_apart": 40},
     "disease_status": "not assessed"},
    {"name": "St. Anne [pens]", "kind": "captive", "gene_diversity": 0.6, "fst_to_recipient": 0.15,
     "fst_form": "nei"}
  ],
  "loci": [{
    "name": "coat", "role": "locally adapted", "fitness": [1.0, 0.98, 0.9], "frequency": 0.8,
    "donor_frequency": {"Upper Fen": 0.1, "St. Anne [pens]": 0}, "mutation_to": 0.0,
    "mutation_from": 0.0}],
  "life_cycle": {
    "first_breeding_age": {"female": 2, "male": 2}, "last_age": 10,
    "yearly_survival": {"first_year": 0.5, "subadult": 0.75, "adult": 0.85},
    "survival_measured": "here_now", "share_of_females_breeding": 0.8,
    "young_per_breeding_female": {"counts": {"1": 0.3, "2": 0.5, "3": 0.2}},
    "females_among_young": 0.5,
    "mating": {"form": "harems", "share_of_males_breeding": 0.6, "unequal_success": 1.0,
      "stay_together": false},
    "crowding": "ceiling",
    "yearly_sd": {"first_year": 0.08, "subadult": 0.05, "adult": 0.03, "young": 0.3},
    "survival_young_correlation": 1.0,
    "die_offs": [{"name": "flood", "chance_per_generation": 0.14,
      "lost_share": {"first_year": 0.8, "subadult": 0.5, "adult": 0.5}, "young_lost_share": 0.5}],
    "fewest_adults": 2
  },
  "inbreeding_cost": {"lethal_equivalents_diploid": {"first_year": 6.0, "young_per_female": 0.0},
    "how": "by_inbreeding"},
  "load": {"loci": 400, "from_lethals": 0.4, "mild_selection": {"mean": 0.05, "shape": 0.5},
    "dominance": {"mild": 0.25, "lethal": 0.02}, "mutations_per_genome": 0.0},
  "mixing_cost": {"line_cross": {"a": 0, "d": 0, "aa": 0, "ad": 0, "dd": 0},
    "incompatible_pairs": {"count": 0, "loss": 0.2, "shape": [0, 0.5]},
    "chromosome_heterozygote_loss": 0.0},
  "genome": {"chromosomes": 20, "morgans_each": 1.0, "markers": 200},
  "trait": {"name": "breeding day", "heritability": 0.3, "selection_width_sd": 3.0,
    "optimum_at_start": 0.0, "optimum_shift_per_year": 0.01,
    "optimum_jump": {"year": 2040, "by": 0.0}, "mutational_variance": 0.001, "loci": 50,
    "unit": "days", "phenotypic_sd": 4.0, "mean": 120.0},
  "plans": [
    {"name": "No releases"},
    {"name": "Trickle", "effective_size": null,
     "steady": [{"donor": "St. Anne [pens]", "migrants_per_generation": 1.0, "from_year": 2027,
       "to_year": 2087}]},
    {"name": "Two pairs every fourth year",
     "releases": [{"donor": "Upper Fen", "who": {"females": 2, "males": 1, "age": 2},
       "when": {"first_year": 2027, "every_years": 4, "times": 5},
       "afterwards": {"survive_to_breed": 0.7, "breeding_relative_to_residents": 0.8},
       "loan_years": null, "cost": {"each_animal": 2500, "each_event": 8000}}],
     "rules": [
       {"name": "ancestry ceiling", "when": "donor_ancestry:Upper Fen", "above": 0.3,
        "below": null, "then": "stop"},
       {"name": "second wave", "when": "inbreeding", "above": 0.25, "surveys": 2,
        "survey_every_years": 2, "survey_sd": 0.03, "delay_years": 1, "then": "release",
        "at_most": 2, "release": {"donor": "Upper Fen", "who": {}, "afterwards": {}, "cost": {}}}],
     "other_actions": [{"what": "ditches", "year": 2030, "until_year": null,
       "carrying_capacity_times": 1.5, "first_year_survival_times": 1.1, "cost": 40000}]}
  ],
  "what_ifs": [{"name": "half survive", "asked_by": "Fen Office", "date": "2026-11-02",
    "changes": [{"path": "plans[*].releases[*].afterwards.survive_to_breed", "times": 0.5},
      {"path": "recipient.effective_size", "set": 12}]}],
  "targets": [{"measure": "gene_diversity_kept", "at_least": 0.9, "at_most": null,
    "by_year": 2087, "owner": "Fen Office", "reason": "regional plan"}],
  "run": {"replicates": 1000, "seed": 20270101, "parameter_draws": 1},
  "answers": [{"remark": "horizon-short time.horizon_years", "reason": "asked for", "by": "A. H."}]
}"""

DONOR = {"name": "Upper Fen", "gene_diversity": 0.66, "fst_to_recipient": 0.2}


def small() -> dict[str, Any]:
    """Return a case with only what is needed."""
    return json.loads(_SMALL)


def full() -> dict[str, Any]:
    """Return a case that uses every field."""
    return json.loads(_FULL)


def with_release(**release: Any) -> dict[str, Any]:
    """Return the small case with one donor and a plan with one release, changed as told."""
    raw = small()
    raw["donors"] = [copy.deepcopy(DONOR)]
    told = {"donor": "Upper Fen", "who": {"females": 2, "males": 1}, "when": {"first_year": 2030}}
    raw["plans"].append({"name": "Wave", "releases": [told | release]})
    return raw


def changed(raw: dict[str, Any], path: str, value: Any) -> dict[str, Any]:
    """Return the plain case with one value put in."""
    return put(raw, path, value)


def problems_of(raw: object) -> dict[str, str]:
    """Return the texts of all problems by path; several at one path are joined."""
    try:
        read_case(raw)
    except InvalidCase as invalid:
        found: dict[str, str] = {}
        for problem in invalid.problems:
            before = f"{found[problem.path]} " if problem.path in found else ""
            found[problem.path] = before + problem.text
        return found
    return {}
