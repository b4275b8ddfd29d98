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

    female: Annotated[
        Quantity,
        _age(
            "First breeding, females",
            "Age at which females first breed; from then on they count as adults.",
        ),
    ]
    male: Annotated[
        Quantity,
        _age(
            "First breeding, males",
            "Age at which males first breed; from then on they count as adults.",
        ),
    ]


class YearlySurvival(Part):
    """Survival through one year, by class."""

    first_year: Annotated[
        Quantity,
        _survival(
            "First-year survival",
            "Share of the newborn young that are alive at the next census, at age 1.",
        ),
    ]
    subadult: Annotated[
        Quantity,
        _survival(
            "Subadult survival",
            "Share of young animals, from age 1 to the first breeding age, that live through a "
            "year.",
        ),
    ]
    adult: Annotated[
        Quantity,
        _survival("Adult survival", "Share of animals of breeding age that live through a year."),
    ]


class Young(Part):
    """Young per breeding female and year: a mean (Poisson) or the chance of each number."""

    mean: Annotated[
        Quantity | None,
        Input(
            "Young per breeding female",
            "young a year",
            "Mean number of young that a female which breeds has in a year; numbers around it "
            "follow a Poisson distribution.",
            at_least=0,
        ),
    ] = None
    counts: Annotated[
        FrozenMap[Quantity] | None,
        Input(
            "Chance of each number of young",
            "probability",
            "The chance that a female which breeds has just this number of young in a year; the "
            "chances sum to 1.",
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

    form: Annotated[
        Literal["pairs", "harems", "open"],
        Input(
            "Mating system",
            "",
            "Who mates with whom: lasting or yearly pairs, harems held by some males, or any "
            "male for each young.",
        ),
    ] = "open"
    share_of_males_breeding: Annotated[
        Quantity,
        Input(
            "Share of males breeding",
            "share, 0 to 1",
            "Share of the adult males that hold a harem, at least one; used where the mating "
            "system is harems.",
            at_least=0,
            at_most=1,
        ),
    ] = Field(default_factory=lambda: given(1))
    unequal_success: Annotated[
        Quantity,
        Input(
            "Unequal success of males",
            "coefficient of variation",
            "How unequal the males’ chances to sire young are; 0 means that all are equal.",
            at_least=0,
            at_most=10,
        ),
    ] = Field(default_factory=lambda: given(0))
    stay_together: Annotated[
        StrictBool,
        Input("Pairs stay together", "", "Whether a pair stays together while both live."),
    ] = False


class YearlySd(Part):
    """How much rates differ between years."""

    first_year: Annotated[
        Quantity,
        _sd(
            "First-year survival, SD",
            "How much first-year survival differs between good and bad years.",
        ),
    ] = Field(default_factory=lambda: given(0))
    subadult: Annotated[
        Quantity,
        _sd(
            "Subadult survival, SD",
            "How much subadult survival differs between good and bad years.",
        ),
    ] = Field(default_factory=lambda: given(0))
    adult: Annotated[
        Quantity,
        _sd("Adult survival, SD", "How much adult survival differs between good and bad years."),
    ] = Field(default_factory=lambda: given(0))
    young: Annotated[
        Quantity,
        Input(
            "Young, SD relative to the mean",
            "share of the mean",
            "How much the mean number of young differs between good and bad years.",
            at_least=0,
            at_most=5,
        ),
    ] = Field(default_factory=lambda: given(0))


def _lost(name: str, meaning: str) -> Input:
    return Input(name, "share, 0 to 1", meaning, at_least=0, at_most=1)


class LostShare(Part):
    """Share of each class that a die-off takes."""

    first_year: Annotated[
        Quantity,
        _lost(
            "First-year animals lost",
            "Share of the animals in their first year that a die-off kills, besides the usual "
            "deaths.",
        ),
    ] = Field(default_factory=lambda: given(0))
    subadult: Annotated[
        Quantity,
        _lost(
            "Subadults lost",
            "Share of the subadults that a die-off kills, besides the usual deaths.",
        ),
    ] = Field(default_factory=lambda: given(0))
    adult: Annotated[
        Quantity,
        _lost("Adults lost", "Share of the adults that a die-off kills, besides the usual deaths."),
    ] = Field(default_factory=lambda: given(0))


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
    last_age: Annotated[
        Quantity,
        _age("Last age", "The oldest age: animals that reach it breed once more, then die."),
    ]
    yearly_survival: YearlySurvival
    survival_measured: Annotated[
        Literal["here_now", "unrelated_parents"],
        Input(
            "First-year survival was measured",
            "",
            "Whether first-year survival was measured in this population as it is now, or in "
            "young of unrelated parents.",
        ),
    ] = "here_now"
    share_of_females_breeding: Annotated[
        Quantity,
        Input(
            "Share of females breeding",
            "share a year",
            "Share of the adult females that have young in an ordinary year.",
            at_least=0,
            at_most=1,
        ),
    ]
    young_per_breeding_female: Young
    females_among_young: Annotated[
        Quantity,
        Input(
            "Females among young",
            "share, 0 to 1",
            "Share of females among the young at birth.",
            at_least=0,
            at_most=1,
        ),
    ] = Field(default_factory=lambda: given(0.5))
    mating: Mating = Mating()
    crowding: Annotated[
        Literal["ceiling", "gradual"],
        Input(
            "Crowding",
            "",
            "How the carrying capacity acts: as a ceiling on adults, or by fewer young that live "
            "as adults grow in number.",
        ),
    ] = "ceiling"
    yearly_sd: YearlySd = YearlySd()
    survival_young_correlation: Annotated[
        Quantity,
        Input(
            "Correlation of survival and young",
            "Spearman’s rho",
            "Whether good years for survival are good years for breeding too: 1 always, 0 no "
            "link, −1 the other way round.",
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
            "A population that ever has fewer adults counts as lost.",
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
            "Cost of the mother’s inbreeding in the number of her young, which falls by "
            "exp(−(B/2) F).",
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
    how: Annotated[
        Literal["by_inbreeding", "by_load_loci"],
        Input(
            "Inbreeding cost acts by",
            "",
            "Whether the cost follows each animal’s inbreeding, or comes from simulated harmful "
            "alleles.",
        ),
    ] = "by_inbreeding"
