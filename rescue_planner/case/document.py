"""The case: the document that is opened, edited, projected and handed in."""

from __future__ import annotations

from typing import Annotated, Final, Literal

from pydantic import Field

from rescue_planner.case.base import Name, Part, given
from rescue_planner.case.genetics import Genome, Load, Locus, MixingCost, Trait
from rescue_planner.case.inputs import Input
from rescue_planner.case.life import InbreedingCost, LifeCycle
from rescue_planner.case.plans import Plan
from rescue_planner.case.population import Donor, Recipient
from rescue_planner.case.quantity import Quantity

FORMAT: Final = "rescue case"
VERSION: Final = 1


class Decision(Part):
    """What is to be decided, by whom and by when."""

    question: Annotated[
        str | None, Input("Question", "", "The question that is to be decided, in one sentence.")
    ] = None
    decided_by: Annotated[
        str | None, Input("Decided by", "", "The person or body that decides.")
    ] = None
    by_date: Annotated[
        str | None, Input("Decide by", "", "The date by which it must be decided.")
    ] = None
    goal: Annotated[
        str | None,
        Input(
            "Goal",
            "",
            "What the decision is meant to reach: present fitness, ability to adapt, numbers, or "
            "several.",
        ),
    ] = None
    other_causes_of_decline: Annotated[
        str | None,
        Input("Other causes of decline", "", "What else is wrong, and what is done about it."),
    ] = None


class Time(Part):
    """The years looked at."""

    start_year: Annotated[
        Quantity,
        Input(
            "Start year",
            "year",
            "The year that the numbers of this case describe, and the first year of the "
            "projection.",
            whole=True,
            at_least=1,
            at_most=100_000,
        ),
    ]
    horizon_years: Annotated[
        Quantity,
        Input(
            "Horizon",
            "years",
            "How many years ahead the plans are followed and compared.",
            above=0,
            at_most=2000,
            caution="Costs of mixing may show only in the second generation: look at five "
            "generations or more.",
        ),
    ]
    generation_years: Annotated[
        Quantity,
        Input(
            "Generation length (T)",
            "years",
            "Mean age of the parents of newborn young: one step of the average course and of the "
            "one-locus odds.",
            above=0,
            at_most=200,
            source="definition: IUCN Red List guidelines (from memory)",
        ),
    ]


class Change(Part):
    """One changed assumption."""

    path: Annotated[
        str,
        Input(
            "Path", "", "Which number the what-if changes; [*] stands for every entry of a list."
        ),
    ]
    times: Annotated[
        Quantity | None,
        Input("Times", "times", "The value is multiplied by this, its low and high too."),
    ] = None
    set: Annotated[
        Quantity | None,
        Input("Set to", "value’s unit", "The value that stands in place of the one entered."),
    ] = None


class WhatIf(Part):
    """Changed assumptions, for all plans at once."""

    name: Name
    asked_by: Annotated[str | None, Input("Asked by", "", "Who asked the question.")] = None
    date: Annotated[str | None, Input("Date", "", "The date on which it was asked.")] = None
    changes: tuple[Change, ...] = ()


class Target(Part):
    """A bound on a measure that somebody wants met by a year."""

    measure: Annotated[str, Input("Measure", "", "The quantity that the target is about.")]
    at_least: Annotated[
        Quantity | None,
        Input("At least", "measure’s unit", "The target is met where the measure is this or more."),
    ] = None
    at_most: Annotated[
        Quantity | None,
        Input("At most", "measure’s unit", "The target is met where the measure is this or less."),
    ] = None
    by_year: Annotated[
        Quantity,
        Input(
            "By",
            "year",
            "The year by which the target must be met; it is read at the last step reached by "
            "then.",
            whole=True,
        ),
    ]
    owner: Annotated[str | None, Input("Owner", "", "Who set the target and answers for it.")] = (
        None
    )
    reason: Annotated[str | None, Input("Reason", "", "Why this bound and this year.")] = None


class Run(Part):
    """How much is computed, and the seed of its chance."""

    replicates: Annotated[
        Quantity,
        Input(
            "Replicates",
            "runs",
            "How many times simulated animals live through each plan, each time with other "
            "chance events.",
            at_least=1,
            at_most=1_000_000,
            whole=True,
        ),
    ] = Field(default_factory=lambda: given(1000))
    seed: Annotated[
        Quantity,
        Input(
            "Seed",
            "",
            "The start of the chain of random numbers: the same seed gives the same result again.",
            at_least=0,
            whole=True,
            at_most=10**15,
        ),
    ] = Field(default_factory=lambda: given(1))
    parameter_draws: Annotated[
        Quantity,
        Input(
            "Parameter draws",
            "draws",
            "How many sets of values are drawn from the ranges entered; 1 uses the best values "
            "alone.",
            at_least=1,
            at_most=100_000,
            whole=True,
        ),
    ] = Field(default_factory=lambda: given(1))


class Answer(Part):
    """A person's reason for keeping something that a remark pointed at."""

    remark: Annotated[
        str, Input("Remark", "", "The remark that is answered: its kind and its place.")
    ]
    reason: Annotated[
        str, Input("Reason", "", "Why the value is kept although the program remarked on it.")
    ]
    by: Annotated[str | None, Input("Person", "", "Who gave the reason.")] = None
    date: Annotated[str | None, Input("Date", "", "The date on which it was given.")] = None


class Case(Part):
    """Everything the user describes."""

    format: Literal["rescue case"] = FORMAT
    version: Literal[1] = VERSION
    title: Annotated[str, Input("Title", "", "What the case is called, on the annex and in lists.")]
    species: Annotated[
        str | None, Input("Species", "", "The species, by its common or scientific name.")
    ] = None
    authority: Annotated[
        str | None, Input("Authority", "", "The agency or body for which the case is made.")
    ] = None
    prepared_by: Annotated[str | None, Input("Prepared by", "", "Who made the case.")] = None
    currency: Annotated[
        str | None, Input("Currency", "", "The currency of every cost in the case.")
    ] = None
    decision: Decision | None = None
    time: Time
    recipient: Recipient
    donors: tuple[Donor, ...] = ()
    loci: tuple[Locus, ...] = ()
    life_cycle: LifeCycle | None = None
    inbreeding_cost: InbreedingCost | None = None
    load: Load | None = None
    mixing_cost: MixingCost | None = None
    genome: Genome | None = None
    trait: Trait | None = None
    plans: tuple[Plan, ...]
    what_ifs: tuple[WhatIf, ...] = ()
    targets: tuple[Target, ...] = ()
    run: Run = Run()
    answers: tuple[Answer, ...] = ()

    def plan(self, name: str) -> Plan:
        """Return the plan called `name`.

        Raises
        ------
        KeyError
            When there is none.
        """
        for plan in self.plans:
            if plan.name == name:
                return plan
        raise KeyError(name)
