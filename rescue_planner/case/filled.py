"""The numbers a projection uses where the case leaves a field out, and the words that say so."""

from __future__ import annotations

from rescue_planner.case.document import Case
from rescue_planner.case.genetics import Locus
from rescue_planner.case.life import InbreedingLoad, LifeCycle
from rescue_planner.case.population import Donor, Recipient
from rescue_planner.case.quantity import Quantity

TOLERANCE_STEPS = 1e-9


def best(quantity: Quantity | None, otherwise: float) -> float:
    """Return the best value, or `otherwise` where the field was left out."""
    return otherwise if quantity is None else float(quantity.best)


def adult_females(recipient: Recipient) -> float:
    """Adult females; half of the adults where left out."""
    return best(recipient.adult_females, float(recipient.adults.best) / 2)


def breeding_females(recipient: Recipient) -> float:
    """Breeding females; half of the adults where left out."""
    return best(recipient.breeding_females, float(recipient.adults.best) / 2)


def breeding_males(recipient: Recipient) -> float:
    """Breeding males; half of the adults where left out."""
    return best(recipient.breeding_males, float(recipient.adults.best) / 2)


def lethal_equivalents(case: Case) -> InbreedingLoad:
    """Diploid lethal equivalents of the recipient; none where left out."""
    cost = case.inbreeding_cost
    return InbreedingLoad() if cost is None else cost.lethal_equivalents_diploid


def donor_life_cycle(case: Case, donor: Donor) -> LifeCycle | None:
    """Return the donor's own life cycle, the recipient's where it says `same`, or none."""
    return case.life_cycle if donor.life_cycle == "same" else donor.life_cycle


def donor_frequency(locus: Locus, donor: str) -> float:
    """Frequency of the named allele in a donor (0 where a donor is not named)."""
    return best(locus.donor_frequency.get(donor), 0.0)


def steps(horizon_years: float, generation_years: float) -> int:
    """Return the number of steps G = ceil(horizon / T), with a tolerance of 1e-9 steps."""
    whole = horizon_years / generation_years
    nearest = round(whole)
    if abs(whole - nearest) <= TOLERANCE_STEPS:
        return int(nearest)
    return int(whole) + 1


def step_of(year: float, start_year: float, generation_years: float) -> int:
    """Return t of the last step boundary reached by `year`, with a tolerance of 1e-9 steps."""
    position = (year - start_year) / generation_years + TOLERANCE_STEPS
    return int(position) if position >= 0 else -1
