"""The comparison that follows every edit; a stale one never reaches a page."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer, Signal

from rescue_planner.desk.document import CaseDocument
from rescue_planner.desk.jobs import JobRunner
from rescue_planner.projection.jobs import JobControl

if TYPE_CHECKING:
    from rescue_planner.case.document import Case
    from rescue_planner.projection.results import Comparison

COALESCE_MS = 16
# Measured on two cores of a server, nothing cached: 1 ms a step of all plans together; a unit of
# (2Ne)^1.5 takes 70 ns on the plain path and 3 ns compiled. The bounds hold the GUI thread for
# about 0.1 s and 0.06 s at the worst.
MOST_EXPECTED_AT_ONCE = 100.0
MOST_EXACT_AT_ONCE = {"plain": 8.0e5, "compiled": 2.0e7}
EXACT_NAME = "One-locus odds"
EXPECTED_NAME = "Average course"


def expected_cost(case: Case) -> float:
    """Return how many steps the average courses take; all plans are walked together."""
    from rescue_planner.case.filled import steps

    return float(steps(float(case.time.horizon_years.best), float(case.time.generation_years.best)))


def exact_cost(case: Case) -> float:
    """Return (2Ne)^1.5 summed over loci, plans and steps: what the chains cost, up to a factor."""
    from rescue_planner.case.filled import best, steps

    count = steps(float(case.time.horizon_years.best), float(case.time.generation_years.best))
    total = 0.0
    for plan in case.plans:
        size = best(plan.effective_size, float(case.recipient.effective_size.best))
        for action in plan.other_actions:
            size *= max(1.0, float(action.carrying_capacity_times.best))
        total += len(case.loci) * count * (2.0 * size) ** 1.5
    return total


def most_exact_at_once() -> float:
    """Return the bound on `exact_cost` for the path that is in use."""
    from rescue_planner.projection.chain_path import path_in_use

    return MOST_EXACT_AT_ONCE[path_in_use()]


class LiveComparison(QObject):
    """Projects every plan of the open case after each edit.

    The average course is computed at once, in the GUI thread; the one-locus odds too where they
    are cheap, else by a background job whose result is dropped once the case has moved on.
    """

    updated = Signal(object)  # Comparison
    busy = Signal(str)  # what is still being computed; empty when all is there

    def __init__(self, document: CaseDocument, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._comparison: Comparison | None = None
        self._case: Case | None = None
        self.runner = JobRunner(self)
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(COALESCE_MS)
        self._connect()

    def _connect(self) -> None:
        self._timer.timeout.connect(self.recompute)
        self._document.changed.connect(self._case_changed)
        self._document.replaced.connect(self._case_replaced)

    @property
    def comparison(self) -> Comparison | None:
        """The comparison of the case as it stands now, or nothing while there is none."""
        same = self._document.has_case and self._case is self._document.case
        return self._comparison if same else None

    def _case_replaced(self) -> None:
        self._comparison = self._case = None
        self.runner.drop()

    def _case_changed(self, _case: object) -> None:
        self._timer.start()

    def recompute(self) -> None:
        """Project the open case now; the timer calls this once for a burst of edits."""
        self._timer.stop()
        self.runner.drop()
        if not self._document.has_case:
            return
        case = self._document.case
        if expected_cost(case) > MOST_EXPECTED_AT_ONCE:
            self._in_background(case, EXPECTED_NAME)
            return
        cheap = exact_cost(case) <= most_exact_at_once()
        self._take(case, _compare(case, exact=cheap))
        if cheap:
            self.busy.emit("")
        else:
            self._in_background(case, EXACT_NAME)

    def _in_background(self, case: Case, name: str) -> None:
        def work(control: JobControl) -> object:
            return _compare(case, exact=True, control=control)

        def done(result: object) -> None:
            self._take(case, result)
            self.busy.emit("")

        def failed(error: Exception) -> None:
            self.busy.emit("")
            raise error

        self.busy.emit(name)
        self.runner.start(work, name, done=done, failed=failed)

    def _take(self, case: Case, result: object) -> None:
        if not self._document.has_case or case is not self._document.case:
            return  # the case has moved on
        self._case, self._comparison = case, result  # type: ignore[assignment]
        self.updated.emit(result)

    def close(self) -> None:
        """Stop and wait."""
        self._timer.stop()
        self.runner.close()


def _compare(case: Case, *, exact: bool, control: JobControl | None = None) -> Comparison:
    from rescue_planner.projection.compare import compare

    return compare(
        case,
        depths=("expected", "exact") if exact else ("expected",),
        checkpoint=None if control is None else control.step,
    )
