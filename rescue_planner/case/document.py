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

    question: str | None = None
    decided_by: str | None = None
    by_date: str | None = None
    goal: str | None = None
    other_causes_of_decline: str | None = None


class Time(Part):
    """The years looked at."""

    start_year: Annotated[
        Quantity,
        Input(
            "Start year",
            "year",
            "The year of the state given.",
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
            "How many years ahead.",
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
            "Mean age of the parents of newborn young.",
            above=0,
            at_most=200,
            source="definition: IUCN Red List guidelines (from memory)",
        ),
    ]


class Change(Part):
    """One changed assumption."""

    path: str
    times: Annotated[Quantity | None, Input("Times", "times", "Factor on the value.")] = None
    set: Annotated[Quantity | None, Input("Set to", "value’s unit", "New value.")] = None


class WhatIf(Part):
    """Changed assumptions, for all plans at once."""

    name: Name
    asked_by: str | None = None
    date: str | None = None
    changes: tuple[Change, ...] = ()


class Target(Part):
    """A bound on a measure that somebody wants met by a year."""

    measure: str
    at_least: Annotated[Quantity | None, Input("At least", "measure’s unit", "Lower bound.")] = None
    at_most: Annotated[Quantity | None, Input("At most", "measure’s unit", "Upper bound.")] = None
    by_year: Annotated[Quantity, Input("By", "year", "The year it is checked.", whole=True)]
    owner: str | None = None
    reason: str | None = None


class Run(Part):
    """How much is computed, and the seed of its chance."""

    replicates: Annotated[
        Quantity,
        Input(
            "Replicates",
            "runs",
            "Simulated runs per plan.",
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
            "The same seed gives the same result.",
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
            "Draws from the entered ranges.",
            at_least=1,
            at_most=100_000,
            whole=True,
        ),
    ] = Field(default_factory=lambda: given(1))


class Answer(Part):
    """A person's reason for keeping something that a remark pointed at."""

    remark: str
    reason: str
    by: str | None = None
    date: str | None = None


class Case(Part):
    """Everything the user describes."""

    format: Literal["rescue case"] = FORMAT
    version: Literal[1] = VERSION
    title: Annotated[str, Input("Title", "", "What the case is called.")]
    species: str | None = None
    authority: str | None = None
    prepared_by: str | None = None
    currency: str | None = None
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
