"""Survival, breeding, weather and die-offs, and what inbreeding costs."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, StrictBool

from rescue_planner.case.base import Name, Part, given
from rescue_planner.case.inputs import Input
from rescue_planner.case.quantity import FrozenMap, Quantity


def _age(name: str, meaning: str) -> Input:
    return Input(name, "years of age", meaning, at_least=1, at_most=200, whole=True)


def _survival(name: str, meaning: str) -> Input:
    return Input(name, "share surviving a year", meaning, at_least=0, at_most=1)


def _sd(name: str, meaning: str) -> Input:
    return Input(name, "SD of the yearly share", meaning, at_least=0, below=0.5)


class FirstBreeding(Part):
    """Age at first breeding by sex."""

    female: Annotated[Quantity, _age("First breeding, females", "Age when females first breed.")]
    male: Annotated[Quantity, _age("First breeding, males", "Age when males first breed.")]


class YearlySurvival(Part):
    """Survival through one year, by class."""

    first_year: Annotated[Quantity, _survival("First-year survival", "From birth to age 1.")]
    subadult: Annotated[
        Quantity, _survival("Subadult survival", "From age 1 until the first breeding age.")
    ]
    adult: Annotated[Quantity, _survival("Adult survival", "From the first breeding age on.")]


class Young(Part):
    """Young per breeding female and year: a mean (Poisson) or the chance of each number."""

    mean: Annotated[
        Quantity | None,
        Input("Young per breeding female", "young a year", "Mean number of young.", at_least=0),
    ] = None
    counts: Annotated[
        FrozenMap[Quantity] | None,
        Input(
            "Chance of each number of young",
            "probability",
            "The chance of each number of young; they sum to 1.",
            at_least=0,
            at_most=1,
        ),
    ] = None

    @property
    def expected(self) -> float:
        """Mean number of young per breeding female and year."""
        if self.counts is not None:
            return sum(int(n) * float(chance.best) for n, chance in self.counts.items())
        return float(self.mean.best) if self.mean is not None else 0.0


class Mating(Part):
    """Who mates with whom."""

    form: Literal["pairs", "harems", "open"] = "open"
    share_of_males_breeding: Annotated[
        Quantity,
        Input(
            "Share of males breeding",
            "share, 0 to 1",
            "Share of the adult males that hold a harem.",
            at_least=0,
            at_most=1,
        ),
    ] = Field(default_factory=lambda: given(1))
    unequal_success: Annotated[
        Quantity,
        Input(
            "Unequal success of males",
            "coefficient of variation",
            "How unequal the males' chances are; 0 is equal.",
            at_least=0,
            at_most=10,
        ),
    ] = Field(default_factory=lambda: given(0))
    stay_together: StrictBool = False


class YearlySd(Part):
    """How much rates differ between years."""

    first_year: Annotated[Quantity, _sd("First-year survival, SD", "Between years.")] = Field(
        default_factory=lambda: given(0)
    )
    subadult: Annotated[Quantity, _sd("Subadult survival, SD", "Between years.")] = Field(
        default_factory=lambda: given(0)
    )
    adult: Annotated[Quantity, _sd("Adult survival, SD", "Between years.")] = Field(
        default_factory=lambda: given(0)
    )
    young: Annotated[
        Quantity,
        Input(
            "Young, SD relative to the mean",
            "share of the mean",
            "How much the number of young differs between years.",
            at_least=0,
            at_most=5,
        ),
    ] = Field(default_factory=lambda: given(0))


def _lost(name: str, meaning: str) -> Input:
    return Input(name, "share, 0 to 1", meaning, at_least=0, at_most=1)


class LostShare(Part):
    """Share of each class that a die-off takes."""

    first_year: Annotated[
        Quantity, _lost("First-year animals lost", "Share of animals in their first year that die.")
    ] = Field(default_factory=lambda: given(0))
    subadult: Annotated[Quantity, _lost("Subadults lost", "Share of subadults that die.")] = Field(
        default_factory=lambda: given(0)
    )
    adult: Annotated[Quantity, _lost("Adults lost", "Share of adults that die.")] = Field(
        default_factory=lambda: given(0)
    )


class DieOff(Part):
    """A rare year in which many die."""

    name: Name
    chance_per_generation: Annotated[
        Quantity,
        Input(
            "Chance of a die-off",
            "probability per generation",
            "The chance that at least one such year comes in a generation.",
            at_least=0,
            below=1,
            published="about 0.14 per generation for severe die-offs of vertebrates",
            source="Reed et al. 2003, Anim. Conserv. 6:109 (from memory)",
        ),
    ]
    lost_share: LostShare = LostShare()
    young_lost_share: Annotated[
        Quantity, _lost("Young lost", "Share of that year’s young that are never born or raised.")
    ] = Field(default_factory=lambda: given(0))


class LifeCycle(Part):
    """A year in the life of the species, counted just before breeding."""

    first_breeding_age: FirstBreeding
    last_age: Annotated[Quantity, _age("Last age", "The oldest age; it breeds, then dies.")]
    yearly_survival: YearlySurvival
    survival_measured: Literal["here_now", "unrelated_parents"] = "here_now"
    share_of_females_breeding: Annotated[
        Quantity,
        Input(
            "Share of females breeding",
            "share a year",
            "Share of the adult females that breed in a year.",
            at_least=0,
            at_most=1,
        ),
    ]
    young_per_breeding_female: Young
    females_among_young: Annotated[
        Quantity,
        Input("Females among young", "share, 0 to 1", "Share of females.", at_least=0, at_most=1),
    ] = Field(default_factory=lambda: given(0.5))
    mating: Mating = Mating()
    crowding: Literal["ceiling", "gradual"] = "ceiling"
    yearly_sd: YearlySd = YearlySd()
    survival_young_correlation: Annotated[
        Quantity,
        Input(
            "Correlation of survival and young",
            "Spearman’s rho",
            "Whether good years for survival are good years for breeding.",
            at_least=-1,
            at_most=1,
        ),
    ] = Field(default_factory=lambda: given(1))
    die_offs: tuple[DieOff, ...] = ()
    fewest_adults: Annotated[
        Quantity,
        Input(
            "Fewest adults",
            "adults",
            "Below this the population counts as lost.",
            at_least=1,
            whole=True,
        ),
    ] = Field(default_factory=lambda: given(2))


class InbreedingLoad(Part):
    """Lethal equivalents per diploid animal, by what they act on."""

    first_year: Annotated[
        Quantity,
        Input(
            "Lethal equivalents, first year",
            "diploid lethal equivalents",
            "Cost of inbreeding in first-year survival: survival falls by exp(−(B/2) F).",
            at_least=0,
            at_most=60,
            published="3.1 (median, captive mammals, juvenile survival); 7 (mean, wild "
            "vertebrates, to maturity); 12 (mean, wild, all of life)",
            source="Ralls et al. 1988, Conserv. Biol. 2:185; Nietlisbach et al. 2019, Evol. "
            "Appl. 12:266 (3.5 haploid); O’Grady et al. 2006, Biol. Conserv. 133:42",
            caution="Diploid. A value printed per haploid genome or per gamete must be doubled.",
        ),
    ] = Field(default_factory=lambda: given(0))
    young_per_female: Annotated[
        Quantity,
        Input(
            "Lethal equivalents, young per female",
            "diploid lethal equivalents",
            "Cost of the mother’s inbreeding in the number of her young.",
            at_least=0,
            at_most=60,
            published="3.94 (fecundity, wild mammals and birds)",
            source="O’Grady et al. 2006, Biol. Conserv. 133:42 (components from memory)",
            caution="Diploid. Do not count the same cost in first-year survival again.",
        ),
    ] = Field(default_factory=lambda: given(0))


class InbreedingCost(Part):
    """What inbreeding costs, and how it is modelled."""

    lethal_equivalents_diploid: InbreedingLoad = InbreedingLoad()
    how: Literal["by_inbreeding", "by_load_loci"] = "by_inbreeding"
