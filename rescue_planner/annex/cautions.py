"""Words of caution and deference, the same wherever they stand."""

from __future__ import annotations

AUTHORITY = (
    "These results describe what would follow if the stated assumptions held. The decision rests "
    "with the responsible authorities."
)
PERMITS = (
    "Moving, holding or releasing animals may need several approvals. Ask the competent authority "
    "before any step."
)
LEGAL_STATUS = (
    "The legal status of translocated animals and of their offspring must be settled with counsel "
    "and the listing authority."
)
DISEASE = (
    "Disease risk is not assessed by this projection. A disease risk analysis led by qualified "
    "veterinarians is needed and may rule out a plan."
)
WELFARE = (
    "Expected losses shown here are estimates. Handling, transport and release need an "
    "animal-welfare review and approved protocols."
)
BORDERS = "Cross-border movement may need findings and permits from each country’s authorities."
INDIGENOUS_RIGHTS = (
    "Consent of the indigenous peoples concerned is sought early, freely and with full "
    "information. No plan here presumes it."
)
DATA_AUTHORITY = (
    "Genetic data and knowledge shared by communities are used only under their conditions."
)
DONOR = "Removal limits are set by those responsible for the donor population."
UNCERTAINTY = (
    "Compare plans with one another. Do not read a single line as a forecast of what will happen."
)

EVERY = (
    AUTHORITY,
    PERMITS,
    LEGAL_STATUS,
    DISEASE,
    WELFARE,
    BORDERS,
    INDIGENOUS_RIGHTS,
    DATA_AUTHORITY,
    DONOR,
    UNCERTAINTY,
)


def scope(left_out: tuple[str, ...]) -> str:
    """Return the caution on scope, with the list of what is not included."""
    return f"Not included: {'; '.join(left_out)}."
