"""What every part of the case has in common, and the inputs that many parts share."""

from __future__ import annotations

from typing import Annotated

from pydantic import BaseModel, ConfigDict

from rescue_planner.case.inputs import Input
from rescue_planner.case.quantity import Quantity


class Part(BaseModel):
    """One frozen part of a case; a field that the design does not know is a problem."""

    model_config = ConfigDict(frozen=True, extra="forbid", str_max_length=20_000)


def given(value: float) -> Quantity:
    """Return a plain quantity, for defaults."""
    return Quantity(best=value)


Name = Annotated[
    str, Input("Name", "", "What this is called; no two of one kind have the same name.")
]
DonorName = Annotated[
    str, Input("Donor", "", "Which of the donors of this case the animals come from.")
]
