"""Remarks on a case: what does not stop a computation, but should be looked at or known."""

from __future__ import annotations

from rescue_planner.case.document import Answer, Case
from rescue_planner.case.noting.base import Remark
from rescue_planner.case.noting.distances import on_distances
from rescue_planner.case.noting.left_out import on_left_out
from rescue_planner.case.noting.life import on_life
from rescue_planner.case.noting.plans import on_plans
from rescue_planner.case.noting.simulated_only import on_simulated_only
from rescue_planner.case.noting.sizes import on_sizes

__all__ = ["Remark", "answer_to", "remarks"]

_SUBJECTS = (on_sizes, on_distances, on_life, on_plans, on_left_out, on_simulated_only)


def remarks(case: Case) -> tuple[Remark, ...]:
    """Return the remarks that need no projection: questions first, then what is assumed."""
    return tuple(remark for subject in _SUBJECTS for remark in subject(case))


def answer_to(case: Case, remark: Remark) -> Answer | None:
    """Return the answer that the case holds to a remark, or nothing."""
    return next((one for one in case.answers if one.remark == remark.name), None)
