"""What every page is given."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Signal

from rescue_planner.case.faults import Problem
from rescue_planner.desk.document import CaseDocument
from rescue_planner.desk.jobs import JobRunner
from rescue_planner.desk.view import ViewState

if TYPE_CHECKING:
    from rescue_planner.desk.live import LiveComparison


class ExplainerFeed(QObject):
    """Tells the explainer what has the focus."""

    asked = Signal(str)  # a path of the case, or the key of a measure

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.current = ""

    def show(self, path_or_measure: str) -> None:
        """Explain an input by its path, or a measure by its key."""
        self.current = path_or_measure
        self.asked.emit(path_or_measure)


class ProblemBoard(QObject):
    """Fields whose typed text is not in the case, with the sentence each one shows."""

    changed = Signal()

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._shown: dict[str, tuple[Problem, ...]] = {}

    @property
    def shown(self) -> dict[str, tuple[Problem, ...]]:
        """Problems by the path of the field that shows them."""
        return dict(self._shown)

    def put(self, path: str, problems: tuple[Problem, ...]) -> None:
        """Say which problems the field at `path` shows; none takes it off the board."""
        if problems == self._shown.get(path, ()):
            return
        if problems:
            self._shown[path] = problems
        else:
            self._shown.pop(path, None)
        self.changed.emit()

    def clear(self) -> None:
        """Take everything off the board."""
        if self._shown:
            self._shown.clear()
            self.changed.emit()


@dataclass(frozen=True, slots=True, eq=False)
class Desk:
    """The parts that pages share; only the window builds it."""

    document: CaseDocument
    live: LiveComparison
    view: ViewState
    jobs: JobRunner
    explain: ExplainerFeed
    problems_shown: ProblemBoard

    @classmethod
    def build(cls, parent: QObject | None = None) -> Desk:
        """Return a desk with nothing open; `close` it before it goes away."""
        from rescue_planner.desk.live import LiveComparison

        document = CaseDocument(parent)
        return cls(
            document,
            LiveComparison(document, parent),
            ViewState(parent),
            JobRunner(parent),
            ExplainerFeed(parent),
            ProblemBoard(parent),
        )

    def close(self) -> None:
        """Stop all computations and wait for them."""
        self.live.close()
        self.jobs.close()
