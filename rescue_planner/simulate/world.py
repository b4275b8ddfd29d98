"""What the engine is told: one plan for one population and its donors, in numbers.

Plain frozen values, checked here once; `assemble` turns them into the arrays of the kernels.
Axes: P populations (0 the recipient, then the donors), D donors, Y years. Years count from the
start, 0 the first.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]

LONGEST = 2000
"""Years that a run may have."""


class NotPossible(ValueError):
    """What the engine was asked for cannot be run; the text says what, and what to do."""


@dataclass(frozen=True, slots=True)
class DieOff:
    """A rare bad year: chance per generation, share lost of first-year, subadult, adult, young."""

    chance_per_generation: float
    lost_share: tuple[float, float, float] = (0.0, 0.0, 0.0)
    young_lost_share: float = 0.0


@dataclass(frozen=True, slots=True)
class Life:
    """A life cycle, counted just before breeding.

    Survival and its absolute SD among years are of the first year, subadults and adults.
    `young_counts` holds the chances of 0, 1, 2, .. young, or is empty: then young are Poisson.
    """

    first_breeding_age: tuple[int, int]
    last_age: int
    survival: tuple[float, float, float]
    share_of_females_breeding: float
    mean_young: float
    young_counts: tuple[float, ...] = ()
    survival_sd: tuple[float, float, float] = (0.0, 0.0, 0.0)
    young_sd: float = 0.0
    survival_young_correlation: float = 1.0
    females_among_young: float = 0.5
    form: Literal["pairs", "harems", "open"] = "open"
    share_of_males_breeding: float = 1.0
    unequal_success: float = 0.0
    stay_together: bool = False
    gradual: bool = False
    here_now: bool = True
    fewest_adults: int = 2
    die_offs: tuple[DieOff, ...] = ()


@dataclass(frozen=True, slots=True)
class Donor:
    """A donor: its adults, and a life cycle unless it is a number only."""

    adults: int
    adult_females: int = 0
    life: Life | None = None
    capacity: float = float("inf")


@dataclass(frozen=True, slots=True)
class Release:
    """Animals let go in one year; `year` is None for a release that a rule sets."""

    year: int | None
    donor: int
    females: int
    males: int
    age: int
    survive_to_breed: float = 1.0
    breeding_relative_to_residents: float = 1.0
    loan_years: int | None = None
    cost_each_animal: float = 0.0
    cost_each_event: float = 0.0


@dataclass(frozen=True, slots=True)
class Steady:
    """Steady flow from a donor in the years `from_year`..`to_year`, both included."""

    donor: int
    migrants_per_generation: float
    from_year: int
    to_year: int


@dataclass(frozen=True, slots=True)
class Rule:
    """A rule; `when` is a measure of the census, as `results.measures` names them."""

    when: str
    then: Literal["stop", "release"]
    above: float | None = None
    below: float | None = None
    surveys: int = 1
    survey_every_years: int = 1
    survey_sd: float = 0.0
    delay_years: int = 0
    at_most: int = 1
    release: Release | None = None


@dataclass(frozen=True, slots=True, eq=False)
class Locus:
    """A tracked locus: fitness of AA, Aa, aa; frequency of A in each population (P,)."""

    fitness: tuple[float, float, float]
    frequency: tuple[float, ...]
    mutation_to: float = 0.0
    mutation_from: float = 0.0


@dataclass(frozen=True, slots=True, eq=False)
class World:
    """One plan for one recipient and its donors.

    Parameters
    ----------
    years : int
        Y, from the first census to the last.
    generation_years : float
        T, for chances given per generation.
    life : Life
        Of the recipient.
    adults, adult_females : int
        Of the recipient at the start.
    diversity : (P, P) array
        Gene diversity within (diagonal) and between populations.
    reference : float
        The gene diversity at which F is 0.
    capacity, first_year_times, cost : (Y,) arrays or None
        The recipient's carrying capacity (inf for none), factor on first-year survival and cost
        of other actions in each year.
    subadults : (females, males) or None
        Of the recipient at the start; from the stable ages where None.
    kinship_among_released : tuple of D values
        None for 1 - H_d / reference.
    ancestry : (D,) array or None
        Of the recipient at the start.
    chromosomes, morgans : int, float or None
        Of the marker map; all unlinked where `morgans` is None.
    lethal_first_year, lethal_young : float
        Diploid lethal equivalents.
    """

    years: int
    generation_years: float
    life: Life
    adults: int
    adult_females: int
    diversity: FloatArray
    reference: float
    capacity: FloatArray | None = None
    first_year_times: FloatArray | None = None
    cost: FloatArray | None = None
    subadults: tuple[int, int] | None = None
    donors: tuple[Donor, ...] = ()
    kinship_among_released: tuple[float | None, ...] = ()
    ancestry: FloatArray | None = None
    loci: tuple[Locus, ...] = ()
    markers: int = 200
    chromosomes: int = 20
    morgans: float | None = 1.0
    lethal_first_year: float = 0.0
    lethal_young: float = 0.0
    releases: tuple[Release, ...] = field(default=())
    steady: tuple[Steady, ...] = field(default=())
    rules: tuple[Rule, ...] = field(default=())

    def __post_init__(self) -> None:
        checks = (
            (1 <= self.years <= LONGEST, f"a run has 1 to {LONGEST} years"),
            (self.generation_years > 0.0, "a generation is longer than 0 years"),
            (0 <= self.adult_females <= self.adults, "adult females are among the adults"),
            (self.diversity.shape == (len(self.donors) + 1,) * 2, "a diversity for each pair"),
            (self.reference > 0.0, "the reference gene diversity is above 0"),
            (1 <= self.markers <= 1_000_000, "1 to 1,000,000 markers"),
            (self.chromosomes >= 1, "at least one chromosome"),
            (len(self.loci) <= 64, "at most 64 tracked loci"),
        )
        for fine, text in checks:
            if not fine:
                raise NotPossible(f"Simulated animals cannot be run: {text}.")
