"""Remarks on a case: what does not stop a computation, but should be looked at or known."""

from __future__ import annotations

from rescue_planner.case.document import Answer, Case
from rescue_planner.case.noted import Remark

__all__ = ["Remark", "answer_to", "remarks"]


def remarks(case: Case) -> tuple[Remark, ...]:
    """Return the remarks that need no projection, the weightiest first."""
    return ()


def answer_to(case: Case, remark: Remark) -> Answer | None:
    """Return the answer that the case holds to a remark, or nothing."""
    return next((one for one in case.answers if one.remark == remark.name), None)
