"""Names of what a census holds, and their columns."""

from __future__ import annotations

from rescue_planner.kernels import herd
from rescue_planner.simulate.world import NotPossible

FIXED = (
    "adults",
    "young",
    "adult_females",
    "adult_males",
    "gene_diversity",
    "gene_diversity_kept",
    "observed_heterozygosity",
    "inbreeding",
    "kinship",
    "donor_ancestry",
    "donor_ancestry_sd",
    "rare_alleles_kept",
    "persists",
    "released",
    "effective_migrants",
    "cost",
    "animals",
    "born",
    "died_in_first_year",
    "died",
    "removed",
    "left",
    "arrived",
    "lost_after_release",
    "not_available",
    "survival_capped",
)
"""Of every census, in the order of the columns of `kernels.herd`."""

GENETIC = frozenset(FIXED[herd.GENE_DIVERSITY : herd.RARE_KEPT + 1])
"""Read over the replicates that still have adults."""


def measures(donors: int, loci: int) -> tuple[str, ...]:
    """Return the names of all columns; donors and loci are named by their number, from 0."""
    return (
        *FIXED,
        *(f"donor_ancestry:{d}" for d in range(donors)),
        *(f"donor_adults:{d}" for d in range(donors)),
        *(f"allele_frequency:{i}" for i in range(loci)),
    )


def column_of(measure: str, donors: int, loci: int) -> int:
    """Return the column of a measure.

    Raises
    ------
    NotPossible
        If no census holds it.
    """
    names = measures(donors, loci)
    if measure not in names:
        raise NotPossible(f"A rule reads {measure!r}, which a census does not hold.")
    return names.index(measure)
