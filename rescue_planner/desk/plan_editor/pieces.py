"""Small pieces of the plan editor: a column, a slot, and what its parts depend on."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.desk import theme


def column_of(holder: QWidget) -> QVBoxLayout:
    """Give a widget a column without margins."""
    column = QVBoxLayout(holder)
    column.setContentsMargins(0, 0, 0, 0)
    column.setSpacing(theme.HALF)
    return column


class Do:
    """A slot that hands on what it was made with, and nothing of the signal."""

    def __init__(self, do: Callable[..., None], *given: object) -> None:
        self._do, self._given = do, given

    def __call__(self, *_signal: object) -> None:
        self._do(*self._given)


def signature_of(case: Case, index: int) -> tuple[Any, ...]:
    """Return what the editor's parts depend on; numbers are not among it."""
    plan = case.plans[index]
    return (
        index,
        plan.name,
        len(plan.releases),
        tuple(steady.donor for steady in plan.steady),
        tuple((held.name, held.then) for held in plan.rules),
        len(plan.other_actions),
        tuple(donor.name for donor in case.donors),
        tuple(locus.name for locus in case.loci),
        case.currency,
    )
