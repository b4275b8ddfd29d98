"""Plans: what could be done, year by year."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, Literal

from pydantic import Field

from rescue_planner.case.base import DonorName, Name, Part, given
from rescue_planner.case.inputs import Input
from rescue_planner.case.quantity import Quantity

NO_RELEASES = "No releases"
MOST_PLANS = 12


def _year(name: str, meaning: str) -> Input:
    return Input(name, "year", meaning, whole=True)


def _animals(name: str, meaning: str) -> Input:
    return Input(name, "animals", meaning, at_least=0, at_most=100_000)


def _default(value: float) -> Quantity:
    return Field(default_factory=lambda: given(value))


class Who(Part):
    """The animals of one release."""

    females: Annotated[Quantity, _animals("Females", "Females let go in each of the releases.")] = (
        _default(0)
    )
    males: Annotated[Quantity, _animals("Males", "Males let go in each of the releases.")] = (
        _default(0)
    )
    age: Annotated[
        Quantity | None,
        Input(
            "Age",
            "years",
            "Age of the animals at release; only simulated animals use it.",
            at_least=1,
            at_most=200,
            whole=True,
        ),
    ] = None


class When(Part):
    """The years of a release."""

    first_year: Annotated[Quantity, _year("First year", "The year of the first of these releases.")]
    every_years: Annotated[
        Quantity,
        Input(
            "Every",
            "years",
            "Years from one of these releases to the next.",
            at_least=1,
            whole=True,
        ),
    ] = _default(1)
    times: Annotated[
        Quantity,
        Input(
            "Times",
            "releases",
            "How many releases there are in all.",
            at_least=1,
            at_most=1000,
            whole=True,
        ),
    ] = _default(1)


class Afterwards(Part):
    """What becomes of released animals."""

    survive_to_breed: Annotated[
        Quantity,
        Input(
            "Survive to breed",
            "share, 0 to 1",
            "Share of the released animals that live and stay until they breed.",
            at_least=0,
            at_most=1,
            published="0.7 (0.3–1.0) wild-caught, 0.4 (0.1–0.8) captive-born",
            source="Jule, Leaver & Lea 2008, Biol. Conserv. 141:355; ranges are common practice, "
            "no source",
            caution="Expected losses shown here are estimates. Handling, transport and release "
            "need an animal-welfare review and approved protocols.",
        ),
    ] = _default(1)
    breeding_relative_to_residents: Annotated[
        Quantity,
        Input(
            "Breeding relative to residents",
            "times",
            "How much a released animal that lives takes part in breeding; 1 is like a resident.",
            at_least=0,
            at_most=100,
            published="0.7 (0.2–1.5); above 1 is possible",
            source="common practice, no source; translocated animals mostly do worse than "
            "residents: Gross, Wilson & Wolak 2023 (preprint)",
        ),
    ] = _default(1)


class ReleaseCost(Part):
    """What a release costs, in the case's currency."""

    each_animal: Annotated[
        Quantity,
        Input(
            "Cost of each animal",
            "currency",
            "What each released animal costs: capture, health checks, transport, release.",
            at_least=0,
        ),
    ] = _default(0)
    each_event: Annotated[
        Quantity,
        Input(
            "Cost of each event",
            "currency",
            "What each release costs, however many animals it holds.",
            at_least=0,
        ),
    ] = _default(0)


class RuleRelease(Part):
    """A release that a rule sets off; its year comes from the rule."""

    donor: DonorName
    who: Who = Who()
    afterwards: Afterwards = Afterwards()
    loan_years: Annotated[
        Quantity | None,
        Input(
            "On loan for",
            "years",
            "Years after which the animals go back to the donor; left out, they stay.",
            at_least=1,
            whole=True,
        ),
    ] = None
    cost: ReleaseCost = ReleaseCost()


class Release(RuleRelease):
    """Animals from one donor, once or repeated."""

    when: When

    def years(self) -> Iterator[int]:
        """Yield the year of each release."""
        first, every = int(self.when.first_year.best), int(self.when.every_years.best)
        yield from (first + every * k for k in range(int(self.when.times.best)))


class Steady(Part):
    """Newcomers that breed, as a rate, half females and half males."""

    donor: DonorName
    migrants_per_generation: Annotated[
        Quantity,
        Input(
            "Newcomers that breed",
            "animals per generation",
            "Newcomers that breed in each generation, half of them females.",
            at_least=0,
            at_most=100_000,
            published="1 to 10 per generation as a rule of thumb; more where numbers fluctuate",
            source="Mills & Allendorf 1996, Conserv. Biol. 10:1509; Vucetich & Waite 2000, Anim. "
            "Conserv. 3:261",
            caution="Animals that breed, not animals released.",
        ),
    ]
    from_year: Annotated[
        Quantity | None,
        _year("From", "The first year in which newcomers come; left out, the start year."),
    ] = None
    to_year: Annotated[
        Quantity | None,
        _year("To", "The last year in which newcomers come; left out, they come for good."),
    ] = None


class Rule(Part):
    """When a measure passes a bound: stop, or release."""

    name: Name
    when: Annotated[str, Input("Measure read", "", "The quantity that the rule looks at.")]
    above: Annotated[
        Quantity | None,
        Input("Above", "measure’s unit", "The rule acts where the measure is above this."),
    ] = None
    below: Annotated[
        Quantity | None,
        Input("Below", "measure’s unit", "The rule acts where the measure is below this."),
    ] = None
    surveys: Annotated[
        Quantity,
        Input(
            "Surveys in a row",
            "surveys",
            "How many surveys running must find the measure beyond the bound before the rule acts.",
            at_least=1,
            whole=True,
        ),
    ] = _default(1)
    survey_every_years: Annotated[
        Quantity,
        Input(
            "Survey every", "years", "Years from one survey to the next.", at_least=1, whole=True
        ),
    ] = _default(1)
    survey_sd: Annotated[
        Quantity,
        Input(
            "Survey error",
            "SD, measure’s unit",
            "Standard deviation of a survey’s error around the true value.",
            at_least=0,
        ),
    ] = _default(0)
    delay_years: Annotated[
        Quantity,
        Input(
            "Delay",
            "years",
            "Years from the last of these surveys until the rule’s action takes place.",
            at_least=0,
            whole=True,
        ),
    ] = _default(0)
    then: Annotated[
        Literal["stop", "release"],
        Input("Action", "", "What the rule does: stop all releases for good, or make one more."),
    ]
    at_most: Annotated[
        Quantity,
        Input(
            "At most", "times", "How many times the rule may act in all.", at_least=1, whole=True
        ),
    ] = _default(1)
    release: RuleRelease | None = None


class OtherAction(Part):
    """Something else done for the population: habitat, predators, feeding."""

    what: Annotated[str, Input("What", "", "What is done for the population besides releases.")]
    year: Annotated[Quantity, _year("Year", "The first year in which the action takes effect.")]
    until_year: Annotated[
        Quantity | None,
        _year(
            "Until", "The last year in which the action takes effect; left out, it lasts for good."
        ),
    ] = None
    carrying_capacity_times: Annotated[
        Quantity,
        Input(
            "Carrying capacity times",
            "times",
            "The carrying capacity is multiplied by this, and with it the effective size.",
            above=0,
            at_most=1000,
        ),
    ] = _default(1)
    first_year_survival_times: Annotated[
        Quantity,
        Input(
            "First-year survival times",
            "times",
            "First-year survival is multiplied by this.",
            at_least=0,
            at_most=1000,
        ),
    ] = _default(1)
    cost: Annotated[
        Quantity,
        Input("Cost", "currency", "What the action costs, once, in its first year.", at_least=0),
    ] = _default(0)


class Plan(Part):
    """One plan; `No releases` has only its name."""

    name: Name
    effective_size: Annotated[
        Quantity | None,
        Input(
            "Effective size (Ne) under this plan",
            "animals per generation",
            "The size of an ideal population that loses diversity as fast as this one would "
            "under the plan; left out, the recipient’s.",
            at_least=1,
        ),
    ] = None
    steady: tuple[Steady, ...] = ()
    releases: tuple[Release, ...] = ()
    rules: tuple[Rule, ...] = ()
    other_actions: tuple[OtherAction, ...] = ()
